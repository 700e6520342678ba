//! `ironhum work`: one trade calculation with its working shown.

use super::args::{Format, Work};
use super::exit::{Exit, Failure};
use super::factors::working;
use super::print::{Printer, TextColumn};
use crate::study::StudyError;
use crate::study::explain::MONEY;
use crate::study::work::{CalcRow, InputRow, list, work as ask};

#[derive(serde::Serialize)]
struct List {
    calcs: Vec<CalcRow>,
}

pub(super) fn work(options: &Work, printer: &mut Printer) -> Result<Exit, Failure> {
    match &options.calc {
        None => catalogue(printer, list(None)?),
        Some(calc) if options.inputs.is_empty() => {
            catalogue(printer, list(Some(calc)).map_err(usage)?)
        }
        Some(calc) => run(printer, calc, &options.inputs),
    }
}

fn run(printer: &mut Printer, calc: &str, inputs: &[String]) -> Result<Exit, Failure> {
    let result = ask(calc, inputs).map_err(usage)?;
    match printer.format {
        Format::Json => printer.json(&result)?,
        Format::Csv => {
            printer.csv(
                &["name", "formula", "substituted", "value", "unit", "source"],
                result.steps.iter(),
            )?;
        }
        Format::Text => {
            for (name, value) in &result.result {
                let value = value.as_str().map_or_else(|| value.to_string(), str::to_owned);
                printer.line(format!("{name:<28} {value}"))?;
            }
            printer.line("")?;
            working(printer, &result.steps, 0, MONEY)?;
            printer.line("")?;
            printer.line(format!("Source: {}", result.source))?;
        }
    }
    Ok(Exit::Done)
}

/// A calculation or input that is not known is wrong use, a value that is refused is rejected input.
fn usage(error: StudyError) -> Failure {
    let named = matches!(&error, StudyError::Refused { refusal, .. } if ["calc", "input"].contains(&refusal.quantity));
    let failure = Failure::from(error);
    if named { Failure { exit: Exit::Usage, ..failure } } else { failure }
}

fn catalogue(printer: &mut Printer, calcs: Vec<CalcRow>) -> Result<Exit, Failure> {
    match printer.format {
        Format::Json => printer.json(&List { calcs })?,
        Format::Csv => printer.csv(&["calc", "summary", "source"], calcs.iter())?,
        Format::Text => {
            for calc in &calcs {
                printer.line(format!("{}: {}", calc.calc, calc.summary))?;
                if calcs.len() > 1 {
                    let names = calc.inputs.iter().map(short).collect::<Vec<_>>().join(" ");
                    printer.line(format!("    {names}"))?;
                } else {
                    let keys = ["name", "unit", "range", "default", "meaning"];
                    printer.table(&TextColumn::plain_list(&keys), calc.inputs.iter())?;
                }
                printer.line(format!("    source: {}", calc.source))?;
            }
        }
    }
    Ok(Exit::Done)
}

/// `name=` of an input; in brackets where it may be left out.
fn short(input: &InputRow) -> String {
    let list = if input.list { ",…" } else { "" };
    if input.required {
        format!("{}={list}", input.name)
    } else {
        format!("[{}={}{list}]", input.name, input.default)
    }
}
