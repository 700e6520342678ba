//! The tables that hold records: which record, under which key, owned by what.
//!
//! Column facts come from the engine; this file adds only what storing needs: the table's name, the natural
//! key, and the column that ties a part to its whole (a lot to its tender). `migrations/` holds the SQL; a
//! test keeps both in step.

use crate::engine::columns::{
    Award, Basis, BasisBudget, BasisRange, Bid, Column, Delivery, Lot, Measured, Offer, Tender,
    TenderRate, TestReport, Unit,
};

/// A table of records.
#[derive(Debug, PartialEq)]
pub struct Table {
    /// Name in the book.
    pub name: &'static str,
    /// What one of its rows is called in the journal and in messages.
    pub kind: &'static str,
    /// Column that holds the key of the owner, where the record itself has none.
    pub owner: Option<&'static str>,
    /// Columns of the natural key (below the owner).
    pub key: &'static [&'static str],
    /// Facts of the record's columns.
    pub columns: &'static [Column],
}

impl Table {
    const fn of(
        name: &'static str,
        kind: &'static str,
        key: &'static [&'static str],
        columns: &'static [Column],
    ) -> Self {
        Self { name, kind, owner: None, key, columns }
    }

    const fn owned_by(self, owner: &'static str) -> Self {
        Self { owner: Some(owner), ..self }
    }

    /// Place of a column in the record.
    pub fn position(&self, column: &str) -> Option<usize> {
        self.columns.iter().position(|c| c.name == column)
    }
}

/// The fleet.
pub static UNITS: Table = Table::of("units", "unit", &["unit"], Unit::COLUMNS);
/// Test reports of units.
pub static TEST_REPORTS: Table =
    Table::of("test_reports", "test report", &["unit"], TestReport::COLUMNS);
/// What can be bought.
pub static OFFERS: Table = Table::of("offers", "offer", &["offer"], Offer::COLUMNS);
/// Sets of assumptions.
pub static BASES: Table = Table::of("bases", "basis", &["name"], Basis::COLUMNS);
/// Ranges of the inputs of a basis.
pub static BASIS_RANGES: Table =
    Table::of("basis_ranges", "range", &["quantity"], BasisRange::COLUMNS).owned_by("basis");
/// Budgets of a basis by year.
pub static BASIS_BUDGETS: Table =
    Table::of("basis_budgets", "budget", &["year"], BasisBudget::COLUMNS).owned_by("basis");
/// Tenders.
pub static TENDERS: Table = Table::of("tenders", "tender", &["tender"], Tender::COLUMNS);
/// Rates of currencies of a tender.
pub static TENDER_RATES: Table =
    Table::of("tender_rates", "rate", &["currency"], TenderRate::COLUMNS).owned_by("tender");
/// Lots of a tender.
pub static LOTS: Table = Table::of("lots", "lot", &["lot"], Lot::COLUMNS).owned_by("tender");
/// Bids for lots.
pub static BIDS: Table = Table::of("bids", "bid", &["tender", "lot", "bid"], Bid::COLUMNS);
/// Measured losses of delivered units.
pub static MEASURED: Table =
    Table::of("measured", "measured unit", &["tender", "lot", "bid", "serial"], Measured::COLUMNS);

/// Awards of lots.
pub static AWARDS: Table =
    Table::of("awards", "award", &["lot"], Award::COLUMNS).owned_by("tender");
/// Measured units that entered the fleet.
pub static DELIVERIES: Table =
    Table::of("deliveries", "delivery", &["tender", "lot", "bid", "serial"], Delivery::COLUMNS);

/// Every table of records.
pub static TABLES: [&Table; 13] = [
    &UNITS,
    &TEST_REPORTS,
    &OFFERS,
    &BASES,
    &BASIS_RANGES,
    &BASIS_BUDGETS,
    &TENDERS,
    &TENDER_RATES,
    &LOTS,
    &BIDS,
    &MEASURED,
    &AWARDS,
    &DELIVERIES,
];
