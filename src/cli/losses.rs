//! `ironhum losses`: what each unit's losses are and cost in year 1.

use super::args::{Args, Format, Shown};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::print::{Printer, TextColumn};
use super::rank::write_left_out;
use crate::exchange::counted;
use crate::study::Desk;
use crate::study::figures::group;
use crate::study::losses::{losses as ask, voltage_words};

const KEYS: &[&str] = &[
    "unit",
    "rated_kva",
    "peak_pu",
    "no_load_energy_kwh",
    "load_energy_kwh",
    "auxiliary_energy_kwh",
    "loss_cost",
    "load_factor_pu",
    "loss_factor_pu",
    "efficiency_pct",
    "flags",
];

pub(super) fn losses(args: &Args, options: &Shown, printer: &mut Printer) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let desk = Desk::read(&book, args.basis.as_deref())?;
    let mut result = ask(&desk)?;
    if let Some(top) = options.top {
        result.units.truncate(top);
    }
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => printer.csv(KEYS, result.units.iter())?,
        Format::Text => {
            let t = &result.totals;
            printer.line(format!(
                "Basis {}, year {}: {}; losses of {} kWh iron, {} kWh copper and {} kWh auxiliaries cost {} {}.",
                result.basis,
                result.year,
                counted(t.units, "unit"),
                group(t.no_load_energy_kwh, 0),
                group(t.load_energy_kwh, 0),
                group(t.auxiliary_energy_kwh, 0),
                group(t.loss_cost, 0),
                result.currency
            ))?;
            printer.line(format!("Losses are {}.", voltage_words(result.voltage_model)))?;
            printer.line("")?;
            let keys = &KEYS[..KEYS.len() - 1];
            printer.table(&TextColumn::list(keys, &result.currency), result.units.iter())?;
            write_left_out(printer, result.left_out.iter().copied())?;
        }
    }
    Ok(Exit::Done)
}
