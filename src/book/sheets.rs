//! Records that come as a whole: a basis with ranges and budgets, a tender with rates and lots.
//!
//! A sheet states all there is: what it leaves blank becomes blank, a part that it no longer names is removed.

use std::ops::ControlFlow;

use rusqlite::OptionalExtension as _;

use super::{Actor, Book, BookError, Change, Result, Table, cells, read, tables};
use crate::engine::columns::{
    Award, Basis, BasisBudget, BasisRange, BasisSheet, Bid, Lot, Measured, Tender, TenderRate,
    TenderSheet, Value,
};

impl Book {
    /// A basis with its ranges and budgets; without a name the current one.
    ///
    /// # Errors
    /// The book has no such basis, or cannot tell which is meant; the message names those it has.
    pub fn basis(&self, name: Option<&str>) -> Result<BasisSheet> {
        let name = &match name {
            Some(name) => name.to_owned(),
            None => self.current_basis()?,
        };
        let store = &self.connection;
        let found =
            read::records(store, &tables::BASES, Basis::from_values, "WHERE name = ?1", [name])?;
        let Some(basis) = found.into_iter().next() else {
            return Err(self.unknown(&tables::BASES, name));
        };
        let of = "WHERE basis = ?1";
        let ranges = BasisRange::from_values;
        let budgets = BasisBudget::from_values;
        let mut budgets = read::records(store, &tables::BASIS_BUDGETS, budgets, of, [name])?;
        budgets.sort_by_key(|budget| budget.year);
        Ok(BasisSheet {
            basis,
            ranges: read::records(store, &tables::BASIS_RANGES, ranges, of, [name])?,
            budgets,
        })
    }

    /// A tender with its rates, lots, bids and measured units.
    ///
    /// # Errors
    /// The book has no such tender, or the store fails.
    pub fn tender(&self, tender: &str) -> Result<TenderSheet> {
        let (store, of) = (&self.connection, "WHERE tender = ?1");
        let found = read::records(store, &tables::TENDERS, Tender::from_values, of, [tender])?;
        let Some(record) = found.into_iter().next() else {
            return Err(self.unknown(&tables::TENDERS, tender));
        };
        let rates = TenderRate::from_values;
        Ok(TenderSheet {
            tender: record,
            rates: read::records(store, &tables::TENDER_RATES, rates, of, [tender])?,
            lots: read::records(store, &tables::LOTS, Lot::from_values, of, [tender])?,
            bids: read::records(store, &tables::BIDS, Bid::from_values, of, [tender])?,
            measured: read::records(store, &tables::MEASURED, Measured::from_values, of, [tender])?,
            awards: read::records(store, &tables::AWARDS, Award::from_values, of, [tender])?,
        })
    }

    /// Saves a basis.
    ///
    /// # Errors
    /// Its price series is not in the book, or the store fails.
    pub fn save_basis(&mut self, sheet: &BasisSheet, actor: &Actor) -> Result<()> {
        let change = self.change(actor, None)?;
        change.save_basis(sheet)?;
        change.commit()?;
        Ok(())
    }

    /// Chooses the basis that counts where none is named.
    ///
    /// # Errors
    /// The book has no such basis, or the store fails.
    pub fn set_current_basis(&mut self, name: &str, actor: &Actor) -> Result<()> {
        let change = self.change(actor, None)?;
        change.set_current_basis(name)?;
        change.commit()?;
        Ok(())
    }
}

impl Change<'_> {
    /// Saves a basis with its ranges and budgets.
    ///
    /// # Errors
    /// Its price series is not in the book, or the store fails.
    pub fn save_basis(&self, sheet: &BasisSheet) -> Result<()> {
        if let Some(series) = &sheet.basis.price_series {
            let known = self.price_series_names()?;
            if !known.contains(series) {
                let key = series.clone();
                return Err(BookError::Unknown { kind: "price series", key, known });
            }
        }
        let name = &sheet.basis.name;
        self.put(&tables::BASES, None, &sheet.basis.values())?;
        let ranges: Vec<_> = sheet.ranges.iter().map(BasisRange::values).collect();
        self.replace(&tables::BASIS_RANGES, name, &ranges, |_| Ok(()))?;
        let budgets: Vec<_> = sheet.budgets.iter().map(BasisBudget::values).collect();
        self.replace(&tables::BASIS_BUDGETS, name, &budgets, |_| Ok(()))
    }

    /// Saves a tender with its rates and lots. Bids and measured units of the book stay as they are.
    ///
    /// # Errors
    /// A lot that has bids, or the rate of a currency of bids, is gone from the sheet, or its currency is another
    /// while bids name none ([`BookError::InUse`]), something that was awarded is changed ([`BookError::Awarded`]), or the
    /// store fails.
    pub fn save_tender(&self, sheet: &TenderSheet) -> Result<()> {
        self.keeps_awarded(sheet)?;
        let tender = &sheet.tender.tender;
        self.keeps_currency(&sheet.tender)?;
        self.put(&tables::TENDERS, None, &sheet.tender.values())?;
        let rates: Vec<_> = sheet.rates.iter().map(TenderRate::values).collect();
        self.replace(&tables::TENDER_RATES, tender, &rates, |_| Ok(()))?;
        let lots: Vec<_> = sheet.lots.iter().map(Lot::values).collect();
        self.replace(&tables::LOTS, tender, &lots, |lot| {
            let sql = "SELECT 1 FROM bids WHERE tender = ?1 AND lot = ?2";
            if self.transaction.prepare_cached(sql)?.exists([tender.as_str(), lot])? {
                return Err(BookError::InUse { kind: "lot", key: lot.to_owned(), parts: "bids" });
            }
            Ok(())
        })?;
        let sql = "SELECT DISTINCT currency FROM bids WHERE tender = ?1 AND currency IS NOT NULL";
        let mut used = self.transaction.prepare_cached(sql)?;
        for currency in used.query_map([tender], |row| row.get::<_, String>(0))? {
            let key = currency?;
            if !self.knows_currency(tender, &key)? {
                return Err(BookError::InUse { kind: "rate", key, parts: "bids" });
            }
        }
        Ok(())
    }

    /// Holds that a bid which names no currency stays in that in which it came: the tender's.
    fn keeps_currency(&self, sheet: &Tender) -> Result<()> {
        let sql = "SELECT currency FROM tenders WHERE tender = ?1 AND currency <> ?2 AND EXISTS \
                   (SELECT 1 FROM bids WHERE bids.tender = ?1 AND bids.currency IS NULL)";
        let mut other = self.transaction.prepare_cached(sql)?;
        let known =
            other.query_row([&sheet.tender, &sheet.currency], |row| row.get(0)).optional()?;
        let parts = "bids that name no currency";
        known.map_or(Ok(()), |key| Err(BookError::InUse { kind: "currency", key, parts }))
    }

    /// Puts the parts of a whole and removes those that it no longer has, where `may_go` agrees.
    fn replace(
        &self,
        table: &'static Table,
        owner: &str,
        parts: &[Vec<Value>],
        may_go: impl Fn(&str) -> Result<()>,
    ) -> Result<()> {
        for part in parts {
            self.put(table, Some(owner), part)?;
        }
        let owner_column = table.owner.unwrap_or_default();
        let place = table.position(table.key[0]).unwrap_or_default();
        let mut gone = Vec::new();
        let condition = format!("WHERE {owner_column} = ?1");
        read::scan(&self.transaction, table, &condition, [owner], |id, values| {
            if !parts.iter().any(|part| part[place] == values[place]) {
                gone.push((id, values));
            }
            Ok(ControlFlow::Continue(()))
        })?;
        for (id, values) in gone {
            let key = cells::key(&values[place]);
            may_go(&key)?;
            self.remove(table, id, &format!("{owner}/{key}"), &values)?;
        }
        Ok(())
    }
}
