//! Reading records: typed, or row by row without building them (for a fleet of a million).

use std::ops::ControlFlow;

use rusqlite::{Connection, OptionalExtension as _, Params, Row};
use rustc_hash::FxHashMap;
use serde::Serialize;

use super::change::CURRENT_BASIS;
use super::{Book, BookError, Result, Table, cells, tables};
use crate::engine::columns::{Column, Offer, Tender, TestReport, Unit, Value};

/// How much a book holds.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize)]
pub struct Counts {
    /// Units of the fleet.
    pub units: u64,
    /// Test reports.
    pub test_reports: u64,
    /// Load profiles.
    pub profiles: u64,
    /// Price series.
    pub price_series: u64,
    /// Offers.
    pub offers: u64,
    /// Bases.
    pub bases: u64,
    /// Tenders.
    pub tenders: u64,
    /// Bids.
    pub bids: u64,
    /// Measured units.
    pub measured: u64,
    /// Entries of the journal.
    pub journal: u64,
}

impl Book {
    /// The fleet, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn units(&self) -> Result<Vec<Unit>> {
        records(&self.connection, &tables::UNITS, Unit::from_values, "", [])
    }

    /// One unit.
    ///
    /// # Errors
    /// The book has no such unit, or the store fails.
    pub fn unit(&self, unit: &str) -> Result<Unit> {
        let found = records(
            &self.connection,
            &tables::UNITS,
            Unit::from_values,
            "WHERE unit = ?1",
            [unit],
        )?;
        found.into_iter().next().map_or_else(|| Err(self.unknown(&tables::UNITS, unit)), Ok)
    }

    /// The units that have a test report, each with it, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn tested_units(&self) -> Result<Vec<(Unit, TestReport)>> {
        let from = TestReport::from_values;
        let reports = records(&self.connection, &tables::TEST_REPORTS, from, "", [])?;
        if reports.is_empty() {
            return Ok(Vec::new());
        }
        let mut reports: FxHashMap<String, TestReport> =
            reports.into_iter().map(|report| (report.unit.clone(), report)).collect();
        let tested = "WHERE unit IN (SELECT unit FROM test_reports)";
        let units = records(&self.connection, &tables::UNITS, Unit::from_values, tested, [])?;
        let with = |unit: Unit| reports.remove(&unit.unit).map(|report| (unit, report));
        Ok(units.into_iter().filter_map(with).collect())
    }

    /// The offers, in the order in which they entered the catalogue.
    ///
    /// # Errors
    /// The store fails.
    pub fn offers(&self) -> Result<Vec<Offer>> {
        records(&self.connection, &tables::OFFERS, Offer::from_values, "", [])
    }

    /// The tenders, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn tenders(&self) -> Result<Vec<Tender>> {
        records(&self.connection, &tables::TENDERS, Tender::from_values, "", [])
    }

    /// Names of the bases, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn bases(&self) -> Result<Vec<String>> {
        names(&self.connection, &tables::BASES)
    }

    /// The name of the basis that counts: the chosen one, else the only one.
    ///
    /// # Errors
    /// There is none, or there are several and none is chosen; the message names them.
    pub fn current_basis(&self) -> Result<String> {
        if let Some(name) = setting(&self.connection, CURRENT_BASIS)? {
            return Ok(name);
        }
        let mut known = self.bases()?;
        match known.len() {
            1 => Ok(known.remove(0)),
            _ => Err(BookError::WhichBasis { known }),
        }
    }

    /// A number that changes whenever another connection changes the book; a change has the same one.
    ///
    /// # Errors
    /// The store fails.
    pub fn data_version(&self) -> Result<i64> {
        data_version(&self.connection)
    }

    /// How much the book holds.
    ///
    /// # Errors
    /// The store fails.
    pub fn counts(&self) -> Result<Counts> {
        let count = |table: &str| -> Result<u64> {
            let sql = format!("SELECT count(*) FROM {table}");
            let rows: i64 = self.connection.query_row(&sql, [], |row| row.get(0))?;
            Ok(u64::try_from(rows).unwrap_or(0))
        };
        Ok(Counts {
            units: count("units")?,
            test_reports: count("test_reports")?,
            profiles: count("profiles")?,
            price_series: count("price_series")?,
            offers: count("offers")?,
            bases: count("bases")?,
            tenders: count("tenders")?,
            bids: count("bids")?,
            measured: count("measured")?,
            journal: count("journal")?,
        })
    }

    /// Hands over the units one by one, in order of entry, until told to stop: a large fleet need not lie in memory.
    ///
    /// # Errors
    /// The store fails.
    pub fn each_unit(&self, mut take: impl FnMut(Unit) -> ControlFlow<()>) -> Result<()> {
        let table = &tables::UNITS;
        scan(&self.connection, table, "", [], |row, values| {
            let unit = Unit::from_values(&values);
            Ok(take(unit.ok_or(BookError::Damaged { table: table.name, row })?))
        })
    }

    /// The error of a name that is not there.
    pub(super) fn unknown(&self, table: &Table, key: &str) -> BookError {
        match names(&self.connection, table) {
            Ok(known) => BookError::Unknown { kind: table.kind, key: key.to_owned(), known },
            Err(error) => error,
        }
    }
}

pub(super) fn data_version(connection: &Connection) -> Result<i64> {
    Ok(connection.query_row("PRAGMA data_version", [], |row| row.get(0))?)
}

/// The keys of a table, in order of entry.
pub(super) fn names(connection: &Connection, table: &Table) -> Result<Vec<String>> {
    let sql = format!("SELECT {} FROM {} ORDER BY id", table.key[0], table.name);
    let mut statement = connection.prepare_cached(&sql)?;
    let names = statement.query_map([], |row| row.get(0))?.collect::<rusqlite::Result<_>>()?;
    Ok(names)
}

/// A setting of the book.
pub(super) fn setting(connection: &Connection, name: &str) -> Result<Option<String>> {
    let sql = "SELECT value FROM settings WHERE name = ?1";
    Ok(connection.prepare_cached(sql)?.query_row([name], |row| row.get(0)).optional()?)
}

/// The records that a condition leaves, in order of entry.
pub(super) fn records<T>(
    connection: &Connection,
    table: &Table,
    from: fn(&[Value]) -> Option<T>,
    condition: &str,
    params: impl Params,
) -> Result<Vec<T>> {
    let mut all = Vec::new();
    scan(connection, table, condition, params, |row, values| {
        all.push(from(&values).ok_or(BookError::Damaged { table: table.name, row })?);
        Ok(ControlFlow::Continue(()))
    })?;
    Ok(all)
}

/// Hands over the bare values that a condition leaves, with their row numbers, until told to stop.
pub(super) fn scan(
    connection: &Connection,
    table: &Table,
    condition: &str,
    params: impl Params,
    mut take: impl FnMut(i64, Vec<Value>) -> Result<ControlFlow<()>>,
) -> Result<()> {
    let columns = table.columns.iter().map(Column::sql_name).collect::<Vec<_>>().join(", ");
    let sql = format!("SELECT id, {columns} FROM {} {condition} ORDER BY id", table.name);
    let mut statement = connection.prepare_cached(&sql)?;
    let mut rows = statement.query(params)?;
    while let Some(row) = rows.next()? {
        if take(row.get(0)?, values(table, row, 1)?)?.is_break() {
            break;
        }
    }
    Ok(())
}

/// The values of a stored row, from cell `first` on.
pub(super) fn values(table: &Table, row: &Row<'_>, first: usize) -> Result<Vec<Value>> {
    table
        .columns
        .iter()
        .enumerate()
        .map(|(place, column)| {
            cells::value(column, row.get_ref(first + place)?)
                .ok_or(BookError::Damaged { table: table.name, row: row.get(0)? })
        })
        .collect()
}
