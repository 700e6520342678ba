//! `ironhum journal`: who changed what, when, from what and why.

use serde::Serialize;

use super::args::{Args, Format, Journal};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::print::{Printer, TextColumn};
use crate::book::JournalEntry;

#[derive(Serialize)]
struct Result<'a> {
    entries: &'a [JournalEntry],
}

#[derive(Serialize)]
struct Line<'a> {
    #[serde(flatten)]
    entry: &'a JournalEntry,
    change: String,
}

const KEYS: &[&str] =
    &["id", "at", "who", "action", "kind", "key", "change", "source", "why", "batch"];

pub(super) fn journal(
    args: &Args,
    options: &Journal,
    printer: &mut Printer,
) -> std::result::Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let entries = book.journal(options.top)?;
    let lines = entries.iter().map(|entry| Line { entry, change: entry.what.to_string() });
    match printer.format {
        Format::Json => printer.json(&Result { entries: &entries })?,
        Format::Csv => printer.csv(KEYS, lines)?,
        Format::Text => {
            let keys = ["at", "who", "action", "kind", "key", "source", "why", "change"];
            printer.table(&TextColumn::plain_list(&keys), lines)?;
        }
    }
    Ok(Exit::Done)
}
