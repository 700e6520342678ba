//! Awards: which bid of a lot was chosen, under which terms, by whom and why; and which units came of it.
//!
//! What a lot was awarded under stays: bids, lots, currency and rates of an awarded lot are not changed.

use rusqlite::OptionalExtension as _;
use serde_json::json;

use super::change::Entry;
use super::{Book, BookError, Change, Result, cells, read, tables};
use crate::engine::columns::{Award, Delivery, Lot, Tender, TenderRate, TenderSheet, Value};

impl Book {
    /// The units that came of a tender, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn deliveries(&self, tender: &str) -> Result<Vec<Delivery>> {
        let from = Delivery::from_values;
        read::records(&self.connection, &tables::DELIVERIES, from, "WHERE tender = ?1", [tender])
    }
}

impl Change<'_> {
    /// The award of a lot, where there is one.
    ///
    /// # Errors
    /// The store fails.
    pub fn awarded(&self, tender: &str, lot: &str) -> Result<Option<Award>> {
        let of = "WHERE tender = ?1 AND lot = ?2";
        let from = Award::from_values;
        let found = read::records(&self.transaction, &tables::AWARDS, from, of, [tender, lot])?;
        Ok(found.into_iter().next())
    }

    /// Writes the award of a lot that is not awarded, with who, when and why.
    ///
    /// # Errors
    /// The lot is awarded ([`BookError::Awarded`]), or the store fails.
    pub fn award(&self, tender: &str, award: &Award) -> Result<()> {
        if self.awarded(tender, &award.lot)?.is_some() {
            return Err(BookError::Awarded { tender: tender.into(), lot: award.lot.clone() });
        }
        let columns = tables::AWARDS.columns;
        let names: Vec<String> =
            columns.iter().map(crate::engine::columns::Column::sql_name).collect();
        let marks = vec!["?"; columns.len()].join(", ");
        let sql = format!("INSERT INTO awards (tender, {}) VALUES (?, {marks})", names.join(", "));
        let values = award.values();
        let owner = Value::Text(tender.to_owned());
        let bound = std::iter::once(&owner).chain(&values).map(cells::Bound);
        self.transaction.execute(&sql, rusqlite::params_from_iter(bound))?;
        self.written("chosen", tender, award, "new")
    }

    /// Takes an award back; the journal keeps it.
    ///
    /// # Errors
    /// The lot is not awarded, units of it are in the fleet, or the store fails.
    pub fn withdraw(&self, tender: &str, lot: &str) -> Result<Award> {
        let key = format!("{tender}/{lot}");
        let Some(award) = self.awarded(tender, lot)? else {
            return Err(BookError::Unknown { kind: "award", key, known: Vec::new() });
        };
        let delivered = "SELECT 1 FROM deliveries WHERE tender = ?1 AND lot = ?2";
        if self.transaction.prepare_cached(delivered)?.exists([tender, lot])? {
            return Err(BookError::Delivered { tender: tender.into(), lot: lot.into() });
        }
        let sql = "DELETE FROM awards WHERE tender = ?1 AND lot = ?2";
        self.transaction.execute(sql, [tender, lot])?;
        self.written("removed", tender, &award, "old")?;
        Ok(award)
    }

    fn written(
        &self,
        action: &'static str,
        tender: &str,
        award: &Award,
        side: &'static str,
    ) -> Result<()> {
        // Of a new award these stand in the entry itself.
        let said = |name: &str| {
            side == "new" && ["lot", "awarded_at", "awarded_by", "why"].contains(&name)
        };
        let what = tables::AWARDS
            .columns
            .iter()
            .zip(award.values())
            .filter(|(column, value)| *value != Value::Blank && !said(column.name))
            .map(|(column, value)| (column.name.to_owned(), json!({ side: cells::json(&value) })))
            .collect::<serde_json::Map<_, _>>();
        self.write(&Entry {
            action,
            kind: tables::AWARDS.kind,
            key: Some(&format!("{tender}/{}", award.lot)),
            row: None,
            what: what.into(),
            replaced: None,
        })
    }

    /// The bid under which a serial number of a lot is measured, where it is another than `bid`.
    ///
    /// # Errors
    /// The store fails.
    pub fn measured_under(
        &self,
        tender: &str,
        lot: &str,
        bid: &str,
        serial: &str,
    ) -> Result<Option<String>> {
        let sql =
            "SELECT bid FROM measured WHERE tender = ?1 AND lot = ?2 AND bid <> ?3 AND serial = ?4";
        let mut statement = self.transaction.prepare_cached(sql)?;
        Ok(statement.query_row([tender, lot, bid, serial], |row| row.get(0)).optional()?)
    }

    /// The unit of the fleet that a measured unit became, where it did.
    ///
    /// # Errors
    /// The store fails.
    pub fn delivered(
        &self,
        tender: &str,
        lot: &str,
        bid: &str,
        serial: &str,
    ) -> Result<Option<String>> {
        let sql = "SELECT unit FROM deliveries WHERE tender = ?1 AND lot = ?2 AND bid = ?3 AND serial = ?4";
        let mut statement = self.transaction.prepare_cached(sql)?;
        Ok(statement.query_row([tender, lot, bid, serial], |row| row.get(0)).optional()?)
    }

    /// Bids of a lot of which more units are measured than the lot has: the bid, how many, and how many it has.
    ///
    /// # Errors
    /// The store fails.
    pub fn measured_beyond(&self, tender: &str, lot: &str) -> Result<Vec<(String, i64, i64)>> {
        let sql = "SELECT m.bid, COUNT(*), COALESCE(l.quantity, 1) FROM measured m \
                   JOIN lots l ON l.tender = m.tender AND l.lot = m.lot \
                   WHERE m.tender = ?1 AND m.lot = ?2 \
                   GROUP BY m.bid HAVING COUNT(*) > COALESCE(l.quantity, 1) ORDER BY MIN(m.id)";
        let mut statement = self.transaction.prepare_cached(sql)?;
        let rows = statement
            .query_map([tender, lot], |row| Ok((row.get(0)?, row.get(1)?, row.get(2)?)))?;
        Ok(rows.collect::<std::result::Result<_, _>>()?)
    }

    /// The lots of a tender, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn lots_of(&self, tender: &str) -> Result<Vec<String>> {
        let (of, from) = ("WHERE tender = ?1", Lot::from_values);
        let lots = read::records(&self.transaction, &tables::LOTS, from, of, [tender])?;
        Ok(lots.into_iter().map(|lot| lot.lot).collect())
    }

    /// Holds that a tender sheet leaves what was awarded as it is.
    ///
    /// # Errors
    /// It changes an awarded lot, or what stands at the head of a tender with one ([`BookError::Awarded`]), or a rate of
    /// it ([`BookError::AwardedRate`]).
    pub(super) fn keeps_awarded(&self, sheet: &TenderSheet) -> Result<()> {
        let (store, tender) = (&self.transaction, sheet.tender.tender.as_str());
        let of = "WHERE tender = ?1";
        let awards = read::records(store, &tables::AWARDS, Award::from_values, of, [tender])?;
        let Some(first) = awards.first() else { return Ok(()) };
        let awarded =
            |lot: &str| Err(BookError::Awarded { tender: tender.into(), lot: lot.into() });
        let lots = read::records(store, &tables::LOTS, Lot::from_values, of, [tender])?;
        for award in &awards {
            let known = lots.iter().find(|lot| lot.lot == award.lot);
            let told = sheet.lots.iter().find(|lot| lot.lot == award.lot);
            if known != told {
                return awarded(&award.lot);
            }
        }
        let known = read::records(store, &tables::TENDERS, Tender::from_values, of, [tender])?;
        let rates =
            read::records(store, &tables::TENDER_RATES, TenderRate::from_values, of, [tender])?;
        if known.first() != Some(&sheet.tender) {
            return awarded(&first.lot);
        }
        let kept = |rate: &&TenderRate| sheet.rates.contains(rate);
        if let Some(rate) = rates.iter().find(|rate| !kept(rate)) {
            return Err(BookError::AwardedRate {
                tender: tender.into(),
                lot: first.lot.clone(),
                currency: rate.currency.clone(),
                rate: rate.rate,
            });
        }
        Ok(())
    }
}
