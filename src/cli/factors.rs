//! `ironhum factors`: what a kW of loss is worth.

use super::args::{Args, Factors, Format};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::print::Printer;
use super::tender::warn_of_scale;
use crate::study::Desk;
use crate::study::explain::StepRow;
use crate::study::factors::{LoadAsked, factors as ask};
use crate::study::figures::group;
use crate::study::losses::flag_meaning;
use crate::study::tender::{Case, letter};

const KEYS: &[&str] =
    &["basis", "method", "factor_a_per_kw", "factor_b_per_kw", "factor_aux_per_kw"];

pub(super) fn factors(
    args: &Args,
    options: &Factors,
    printer: &mut Printer,
) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    if let Some(tender) = &options.tender {
        let case = Case::read(&book, tender, args.basis.as_deref())?;
        let lot = &match &options.lot {
            Some(lot) => lot.clone(),
            None => case.only_lot().map_err(|why| Failure::new(Exit::Usage, why.to_string()))?,
        };
        let case = if options.from_basis { case.from_basis() } else { case };
        let result = case.factors(lot)?;
        warn_of_scale(printer, lot, &result.flags);
        match printer.format {
            Format::Json => printer.json(&result)?,
            Format::Csv => printer.csv(KEYS, std::iter::once(&result))?,
            Format::Text => {
                printer.letter(&letter::lot_factors(&case, &result, options.working))?;
            }
        }
        return Ok(Exit::Done);
    }
    let desk = Desk::read(&book, args.basis.as_deref())?;
    let asked = LoadAsked {
        peak_pu: options.peak_pu,
        loss_factor_pu: options.loss_factor_pu,
        load_factor_pu: options.load_factor_pu,
        profile: options.profile.clone(),
        load_growth_pct: options.load_growth_pct,
    };
    let result = ask(&desk, &asked)?;
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => printer.csv(KEYS, std::iter::once(&result))?,
        Format::Text => {
            printer.line(format!("Basis {}, method {}.", result.basis, result.method))?;
            printer.line(format!(
                "Load: peak {} pu, loss factor {}, growth {} % a year ({}).",
                group(result.peak_pu, 4),
                group(result.loss_factor_pu, 4),
                group(result.load_growth_pct, 2),
                result.load
            ))?;
            printer.line("")?;
            let unit = format!("{}/kW, once", result.currency);
            for (symbol, value, of) in [
                ("A    ", result.factor_a_per_kw, "no-load (iron) loss"),
                ("B    ", result.factor_b_per_kw, "load (copper) loss at rated load"),
                ("A aux", result.factor_aux_per_kw, "auxiliary loss"),
            ] {
                printer.line(format!("{symbol} {:>12} {unit}  {of}", group(value, 2)))?;
            }
            if let Some(other) = &result.other_method {
                printer.line("")?;
                printer.line(format!(
                    "By the {} method A would be {} ({} %) and B {} ({} %).",
                    other.method,
                    group(other.factor_a_per_kw, 2),
                    group(other.factor_a_difference_pct, 2),
                    group(other.factor_b_per_kw, 2),
                    group(other.factor_b_difference_pct, 2)
                ))?;
            }
            for flag in &result.flags {
                printer.line(format!("! {flag}: {}", flag_meaning(flag).unwrap_or_default()))?;
            }
            if options.working {
                printer.line("")?;
                working(printer, &result.working, 0, &result.currency)?;
            }
        }
    }
    Ok(Exit::Done)
}

/// A working as indented text, amounts in `currency`: parts under the figure that they give.
pub(super) fn working(
    printer: &mut Printer,
    steps: &[StepRow],
    depth: usize,
    currency: &str,
) -> Result<(), Failure> {
    for line in StepRow::lines(steps, depth, currency) {
        printer.line(line)?;
    }
    Ok(())
}
