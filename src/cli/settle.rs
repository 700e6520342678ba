//! `ironhum settle T`: measured against guaranteed losses.

use serde::Serialize;

use super::args::{Args, Format, Settle};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::factors::working as write_working;
use super::print::Printer;
use super::tender::warn_of_scale;
use crate::study::StudyError;
use crate::study::explain::StepRow;
use crate::study::settle::{UnitSettlement, letter, working};
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
    let case = Case::to_settle(&book, &options.tender, args.basis.as_deref())?;
    let basis = case.basis();
    let result = case.settle(options.lot.as_deref())?;
    if let Some(only) = &options.serial {
        let units = result.lots.iter().flat_map(|lot| &lot.units);
        let mut serials = units.map(|unit| unit.serial.as_str());
        if !serials.clone().any(|serial| serial == only) {
            let place = format!("tender {}", result.tender);
            return Err(StudyError::unknown("serial", only, place, &mut serials).into());
        }
    }
    for lot in &result.lots {
        warn_of_scale(printer, &lot.lot, &lot.flags);
        for unit in &lot.units {
            warn_of_scale(printer, &format!("{}, unit {}", lot.lot, unit.serial), &unit.flags);
        }
    }
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => {
            let lines = result.lots.iter().flat_map(|lot| {
                lot.units.iter().map(|unit| Line { lot: &lot.lot, bid: &lot.bid, unit })
            });
            printer.csv(KEYS, lines)?;
        }
        Format::Text => {
            printer.letter(&letter::settlement(&result))?;
            let only = options.serial.as_deref();
            let wanted = |unit: &&UnitSettlement| only.is_none_or(|only| only == unit.serial);
            for lot in result.lots.iter().filter(|_| options.working || only.is_some()) {
                for unit in lot.units.iter().filter(wanted) {
                    let (basis, sheet) = (basis.as_ref(), &case.sheet);
                    let steps = working(sheet, basis, &lot.lot, &lot.bid, &unit.serial)?;
                    printer.line("")?;
                    printer.line(format!("Unit {}", unit.serial))?;
                    write_working(printer, &StepRow::tree(&steps), 0)?;
                }
            }
        }
    }
    Ok(Exit::Done)
}
