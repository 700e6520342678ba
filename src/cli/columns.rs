//! `ironhum columns KIND`: the facts of the columns of a file.

use serde::Serialize;

use super::args::Format;
use super::exit::{Exit, Failure};
use super::print::{Printer, TextColumn};
use crate::engine::columns::{Basis, Bid, Column, Lot, Measured, Offer, Tender, TestReport, Unit};
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

/// Columns of files that hold series: their headers are names.
const SERIES: &[Column] = &[
    Column {
        name: "timestamp",
        meaning: "start of the step, ISO 8601 (or interval: its number); then one column per profile",
        ..Column::text().required()
    },
    Column {
        name: "price_per_kwh",
        meaning: "price of the step (prices file)",
        ..Column::real(-1e6, 1e6).required()
    },
    Column {
        name: "co2_kg_per_kwh",
        meaning: "CO2 of a kWh in the step (prices file)",
        ..Column::real(0.0, 1e3)
    },
    Column {
        name: "system_load",
        meaning: "load of the system in the step, any scale (prices file)",
        ..Column::real(0.0, 1e12)
    },
];

const KEYS: &[&str] = &["column", "unit", "required", "range", "blank", "meaning"];

pub(super) fn columns(what: What, printer: &mut Printer) -> std::result::Result<Exit, Failure> {
    let lists: &[&[Column]] = match what {
        What::Units => &[Unit::COLUMNS],
        What::Tests => &[TestReport::COLUMNS],
        What::Profiles => &[&[SERIES[0]]],
        What::Prices => &[SERIES],
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
