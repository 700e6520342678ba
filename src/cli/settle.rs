//! `ironhum settle T`: measured against guaranteed losses.

use serde::Serialize;

use super::args::{Args, Format, Settle};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::factors::working as write_working;
use super::print::{Printer, TextColumn};
use crate::study::explain::StepRow;
use crate::study::figures::group;
use crate::study::losses::flag_meaning;
use crate::study::settle::{LotSettlement, UnitSettlement, settle as ask, working};
use crate::study::tender::Case;

const KEYS: &[&str] = &[
    "lot",
    "bid",
    "serial",
    "no_load_excess_w",
    "load_excess_w",
    "auxiliary_excess_w",
    "penalty",
    "beyond_tolerance",
];
const TEXT: &[&str] = &[
    "serial",
    "no_load_excess_w",
    "load_excess_w",
    "auxiliary_excess_w",
    "penalty",
    "beyond_tolerance",
];

#[derive(Serialize)]
struct Line<'a> {
    lot: &'a str,
    bid: &'a str,
    #[serde(flatten)]
    unit: &'a UnitSettlement,
}

pub(super) fn settle(
    args: &Args,
    options: &Settle,
    printer: &mut Printer,
) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let case = Case::read(&book, &options.tender, args.basis.as_deref())?;
    let (sheet, basis) = (&case.sheet, case.basis());
    let result = ask(sheet, basis.as_ref(), options.lot.as_deref())?;
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => {
            let lines = result.lots.iter().flat_map(|lot| {
                lot.units.iter().map(|unit| Line { lot: &lot.lot, bid: &lot.bid, unit })
            });
            printer.csv(KEYS, lines)?;
        }
        Format::Text => {
            let currency = &result.currency;
            printer.line(format!("Tender {}: settlement in {currency}.", result.tender))?;
            if result.lots.is_empty() {
                printer
                    .line("No measured units; import them with: ironhum import measured FILE")?;
            }
            for lot in &result.lots {
                write_lot(printer, lot, currency)?;
                if options.working {
                    for unit in &lot.units {
                        let steps =
                            working(sheet, basis.as_ref(), &lot.lot, &lot.bid, &unit.serial)?;
                        printer.line("")?;
                        printer.line(format!("Unit {}", unit.serial))?;
                        write_working(printer, &StepRow::tree(&steps), 0)?;
                    }
                }
            }
        }
    }
    Ok(Exit::Done)
}

fn write_lot(printer: &mut Printer, lot: &LotSettlement, currency: &str) -> Result<(), Failure> {
    printer.line("")?;
    let per = if lot.settlement == "unit" { "per unit" } else { "on the mean of the lot" };
    printer.line(format!("Lot {}, bid {}, settled {per}.", lot.lot, lot.bid))?;
    printer.table(&TextColumn::list(TEXT, currency), lot.units.iter())?;
    printer.line(format!("Penalty {} {currency}.", group(lot.penalty, 2)))?;
    printer.line(format!(
        "Owning cost of one unit: promised {}, delivered {} {currency} (mean, before the penalty).",
        group(lot.owning_cost_promised, 0),
        group(lot.owning_cost_delivered, 0)
    ))?;
    let rejectable: Vec<&str> =
        lot.units.iter().filter(|u| u.rejectable).map(|u| u.serial.as_str()).collect();
    if !rejectable.is_empty() {
        printer.line(format!("May be rejected: {}.", rejectable.join(", ")))?;
    }
    let mut flags: Vec<&str> = lot.units.iter().flat_map(|u| u.flags.iter().copied()).collect();
    flags.sort_unstable();
    flags.dedup();
    for flag in flags {
        printer.line(format!("! {flag}: {}", flag_meaning(flag).unwrap_or_default()))?;
    }
    Ok(())
}
