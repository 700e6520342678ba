//! `ironhum columns KIND`: the facts of the columns of a file.

use serde::Serialize;

use super::args::Format;
use super::exit::{Exit, Failure};
use super::print::{Printer, TextColumn};
use crate::engine::columns::{
    Basis, Bid, Column, Lot, Measured, Offer, PRICES, STEP, Tender, TestReport, Unit,
};
use crate::engine::decision::uncertainty::inputs::may_have_ranges;
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

/// What stands before the example of a TOML file.
const LAYOUT: &str = "A file of this layout (everything in it is invented):";

/// A tender file.
const TENDER: &str = r#"tender = "T-2027-1"
currency = "EUR"
dated = "2027-03-01"

# The value of one unit of the other currency in the tender currency: 1 SEK = 0.0885 EUR
[rates]
SEK = 0.0885

# One [[lot]] for each lot; its columns stand below it
[[lot]]
lot = "1"
quantity = 4
rated_kva = 630
reference_temp_c = 75
peak_pu = 0.7
loss_factor_pu = 0.3

# A lot that states its factors needs no basis
[[lot]]
lot = "2"
rated_kva = 400
factor_a_per_kw = 14000
factor_b_per_kw = 2800
factor_aux_per_kw = 13000
"#;

/// A basis file.
const BASIS: &str = r#"name = "plan-2027"
currency = "EUR"
first_year = 2027
horizon_years = 30
discount_rate_pct = 6
energy_price_per_kwh = 0.09
life_years = 40

# How far an input may lie: [range.NAME] with low and high (triangular about the value of the basis),
# or with distribution = "uniform" and low, high, or "normal" or "lognormal" and deviation
[range.discount_rate_pct]
low = 4
high = 8

[range.stray_share_pu]
distribution = "uniform"
low = 0
high = 0.3

# Capital by calendar year, and what limits the programme besides
[budget]
2027 = 260000
2028 = 320000
units_per_year = 14
"#;

/// Writes how a TOML file is laid out, where the kind is one.
fn layout(what: What, printer: &mut Printer) -> std::result::Result<(), Failure> {
    let example = match what {
        What::Tender => TENDER,
        What::Basis => BASIS,
        _ => return Ok(()),
    };
    printer.line("")?;
    if what == What::Basis {
        let names: Vec<&str> = may_have_ranges().collect();
        printer.line(format!("A [range.NAME] may stand for: {}.", names.join(", ")))?;
        printer.line("")?;
    }
    printer.line(LAYOUT)?;
    printer.line("")?;
    for line in example.lines() {
        printer.line(line)?;
    }
    Ok(())
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
            layout(what, printer)?;
        }
    }
    Ok(Exit::Done)
}
