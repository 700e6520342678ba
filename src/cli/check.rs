//! `ironhum check`: everything doubtful in the book.

use serde::Serialize;

use super::args::{Args, Format};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::print::{Printer, TextColumn};
use crate::study::Watch;
use crate::study::check::{Doubt, check as ask};

const KEYS: &[&str] = &["subject", "key", "column", "kind", "what"];

#[derive(Serialize)]
struct Result {
    doubts: Vec<Doubt>,
}

pub(super) fn check(args: &Args, printer: &mut Printer) -> std::result::Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let doubts = ask(&book, args.basis.as_deref(), &Watch::default())?;
    match printer.format {
        Format::Json => printer.json(&Result { doubts })?,
        Format::Csv => printer.csv(KEYS, doubts.iter())?,
        Format::Text => {
            printer.table(&TextColumn::plain_list(KEYS), doubts.iter())?;
            printer.line("")?;
            printer.line(format!("{} doubtful points.", doubts.len()))?;
        }
    }
    Ok(Exit::Done)
}
