//! `ironhum columns KIND`: the facts of the columns of a file.

use serde::Serialize;

use super::args::Format;
use super::exit::{Exit, Failure};
use super::print::{Printer, TextColumn};
use crate::engine::columns::{
    Basis, Bid, Column, Lot, Measured, Offer, PRICES, STEP, Tender, TestReport, Unit,
};
use crate::study::intake::What;

#[derive(Serialize)]
struct Row {
    column: &'static str,
    unit: &'static str,
    required: bool,
    range: String,
    blank: &'static str,
    meaning: &'static str,
}

#[derive(Serialize)]
struct Result {
    columns: Vec<Row>,
}

const KEYS: &[&str] = &["column", "unit", "required", "range", "blank", "meaning"];

pub(super) fn columns(what: What, printer: &mut Printer) -> std::result::Result<Exit, Failure> {
    let lists: &[&[Column]] = match what {
        What::Units => &[Unit::COLUMNS],
        What::Tests => &[TestReport::COLUMNS],
        What::Profiles => &[&[STEP]],
        What::Prices => &[&[STEP], PRICES],
        What::Offers => &[Offer::COLUMNS],
        What::Basis => &[Basis::COLUMNS],
        What::Tender => &[Tender::COLUMNS, Lot::COLUMNS],
        What::Bids => &[Bid::COLUMNS],
        What::Measured => &[Measured::COLUMNS],
    };
    let rows = lists.iter().flat_map(|list| list.iter()).map(|c| Row {
        column: c.name,
        unit: c.unit(),
        required: c.required,
        range: c.range(),
        blank: c.blank,
        meaning: c.meaning,
    });
    match printer.format {
        Format::Json => printer.json(&Result { columns: rows.collect() })?,
        Format::Csv => printer.csv(KEYS, rows)?,
        Format::Text => {
            printer.table(&TextColumn::plain_list(KEYS), rows)?;
        }
    }
    Ok(Exit::Done)
}
