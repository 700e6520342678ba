//! Years of equal steps: load profiles and price series, kept as little-endian doubles.

use rusqlite::{Connection, OptionalExtension as _, Row, params};
use serde_json::json;

use super::change::Entry;
use super::{Book, BookError, Change, Outcome, Result};
use crate::engine::loading::{PriceSeries, Profile};

const PROFILE: &str = "profile";
const PRICES: &str = "price series";
const PROFILE_NAMES: &str = "SELECT profile FROM profiles ORDER BY id";
const PRICE_NAMES: &str = "SELECT name FROM price_series ORDER BY id";

impl Book {
    /// The load profiles, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn profiles(&self) -> Result<Vec<Profile>> {
        let sql = "SELECT profile, step_minutes, load, first_timestamp FROM profiles ORDER BY id";
        let mut statement = self.connection.prepare_cached(sql)?;
        let profiles = statement.query_map([], profile)?.collect::<rusqlite::Result<_>>()?;
        Ok(profiles)
    }

    /// Names of the load profiles, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn profile_names(&self) -> Result<Vec<String>> {
        names(&self.connection, PROFILE_NAMES)
    }

    /// Names of the price series, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn price_series_names(&self) -> Result<Vec<String>> {
        names(&self.connection, PRICE_NAMES)
    }

    /// A price series.
    ///
    /// # Errors
    /// The book has no such series, or the store fails.
    pub fn price_series(&self, name: &str) -> Result<PriceSeries> {
        let sql =
            "SELECT name, step_minutes, price_per_kwh, co2_kg_per_kwh, system_load, first_timestamp
                   FROM price_series WHERE name = ?1";
        let mut statement = self.connection.prepare_cached(sql)?;
        match statement.query_row([name], prices).optional()? {
            Some(series) => Ok(series),
            None => Err(BookError::Unknown {
                kind: PRICES,
                key: name.to_owned(),
                known: self.price_series_names()?,
            }),
        }
    }
}

impl Change<'_> {
    /// Names of the load profiles, as this change left them.
    ///
    /// # Errors
    /// The store fails.
    pub fn profile_names(&self) -> Result<Vec<String>> {
        names(&self.transaction, PROFILE_NAMES)
    }

    /// Names of the price series, as this change left them.
    ///
    /// # Errors
    /// The store fails.
    pub fn price_series_names(&self) -> Result<Vec<String>> {
        names(&self.transaction, PRICE_NAMES)
    }

    /// Puts a load profile, with the time of its first step where that is known.
    ///
    /// # Errors
    /// The store fails.
    pub fn put_profile(&self, profile: &Profile) -> Result<Outcome> {
        let steps = count(&profile.values);
        let key = &profile.profile;
        let store = &self.transaction;
        let known = store
            .prepare_cached(
                "SELECT profile, step_minutes, load, first_timestamp, id FROM profiles WHERE profile = ?1",
            )?
            .query_row([key], |row| {
                Ok((self::profile(row)?, row.get::<_, i64>(4)?))
            })
            .optional()?;
        let load = bytes(&profile.values);
        let first_timestamp = profile.first_timestamp.as_deref();
        let Some((old, id)) = known else {
            store
                .prepare_cached(
                    "INSERT INTO profiles (profile, step_minutes, steps, first_timestamp, load)
                     VALUES (?1, ?2, ?3, ?4, ?5)",
                )?
                .execute(params![key, profile.step_minutes, steps, first_timestamp, load])?;
            self.count(PROFILE, Outcome::New, store.last_insert_rowid(), || key.clone());
            return Ok(Outcome::New);
        };
        if old == *profile {
            self.count(PROFILE, Outcome::Same, id, || key.clone());
            return Ok(Outcome::Same);
        }
        store
            .prepare_cached(
                "UPDATE profiles SET step_minutes = ?2, steps = ?3, first_timestamp = ?4, load = ?5 WHERE id = ?1",
            )?
            .execute(params![id, profile.step_minutes, steps, first_timestamp, load])?;
        self.write(&Entry {
            action: "changed",
            kind: PROFILE,
            key: Some(key),
            row: Some(id),
            what: json!({
                "step_minutes": { "old": old.step_minutes, "new": profile.step_minutes },
                "steps": { "old": count(&old.values), "new": steps },
                "first_timestamp": { "old": old.first_timestamp, "new": first_timestamp },
            }),
            replaced: Some(&bytes(&old.values)),
        })?;
        self.count(PROFILE, Outcome::Changed, id, || key.clone());
        Ok(Outcome::Changed)
    }

    /// Puts a price series, with the time of its first step where that is known.
    ///
    /// # Errors
    /// The store fails.
    pub fn put_price_series(&self, series: &PriceSeries) -> Result<Outcome> {
        let price = bytes(&series.price_per_kwh);
        let co2 = series.co2_kg_per_kwh.as_deref().map(bytes);
        let load = series.system_load.as_deref().map(bytes);
        let steps = count(&series.price_per_kwh);
        let first_timestamp = series.first_timestamp.as_deref();
        let key = &series.name;
        let store = &self.transaction;
        let known = store
            .prepare_cached(
                "SELECT name, step_minutes, price_per_kwh, co2_kg_per_kwh, system_load, first_timestamp, id
                 FROM price_series WHERE name = ?1",
            )?
            .query_row([key], |row| {
                Ok((prices(row)?, row.get::<_, i64>(6)?))
            })
            .optional()?;
        let Some((old, id)) = known else {
            store
                .prepare_cached(
                    "INSERT INTO price_series
                     (name, step_minutes, steps, first_timestamp, price_per_kwh, co2_kg_per_kwh, system_load)
                     VALUES (?1, ?2, ?3, ?4, ?5, ?6, ?7)",
                )?
                .execute(params![key, series.step_minutes, steps, first_timestamp, price, co2, load])?;
            self.count(PRICES, Outcome::New, store.last_insert_rowid(), || key.clone());
            return Ok(Outcome::New);
        };
        if old == *series {
            self.count(PRICES, Outcome::Same, id, || key.clone());
            return Ok(Outcome::Same);
        }
        store
            .prepare_cached(
                "UPDATE price_series SET step_minutes = ?2, steps = ?3, first_timestamp = ?4,
                 price_per_kwh = ?5, co2_kg_per_kwh = ?6, system_load = ?7 WHERE id = ?1",
            )?
            .execute(params![id, series.step_minutes, steps, first_timestamp, price, co2, load])?;
        let parts = |series: &PriceSeries| {
            json!({
                "co2_kg_per_kwh": series.co2_kg_per_kwh.is_some(),
                "system_load": series.system_load.is_some(),
            })
        };
        // Old values one after the other: price, then CO2 and system load where the entry says they were there.
        let replaced =
            [Some(&old.price_per_kwh), old.co2_kg_per_kwh.as_ref(), old.system_load.as_ref()]
                .into_iter()
                .flatten()
                .flat_map(|values| bytes(values))
                .collect::<Vec<u8>>();
        self.write(&Entry {
            action: "changed",
            kind: PRICES,
            key: Some(key),
            row: Some(id),
            what: json!({
                "step_minutes": { "old": old.step_minutes, "new": series.step_minutes },
                "steps": { "old": count(&old.price_per_kwh), "new": steps },
                "first_timestamp": { "old": old.first_timestamp, "new": first_timestamp },
                "has": { "old": parts(&old), "new": parts(series) },
            }),
            replaced: Some(&replaced),
        })?;
        self.count(PRICES, Outcome::Changed, id, || key.clone());
        Ok(Outcome::Changed)
    }
}

fn names(store: &Connection, sql: &str) -> Result<Vec<String>> {
    let mut statement = store.prepare_cached(sql)?;
    let names = statement.query_map([], |row| row.get(0))?.collect::<rusqlite::Result<_>>()?;
    Ok(names)
}

fn count(values: &[f64]) -> i64 {
    i64::try_from(values.len()).unwrap_or(i64::MAX)
}

fn bytes(values: &[f64]) -> Vec<u8> {
    values.iter().flat_map(|value| value.to_le_bytes()).collect()
}

fn doubles(bytes: &[u8]) -> Vec<f64> {
    bytes.as_chunks().0.iter().map(|eight| f64::from_le_bytes(*eight)).collect()
}

fn profile(row: &Row<'_>) -> rusqlite::Result<Profile> {
    Ok(Profile {
        profile: row.get(0)?,
        step_minutes: row.get(1)?,
        values: doubles(row.get_ref(2)?.as_blob()?),
        first_timestamp: row.get(3)?,
    })
}

fn prices(row: &Row<'_>) -> rusqlite::Result<PriceSeries> {
    let optional = |at| Ok::<_, rusqlite::Error>(row.get_ref(at)?.as_blob_or_null()?.map(doubles));
    Ok(PriceSeries {
        name: row.get(0)?,
        step_minutes: row.get(1)?,
        price_per_kwh: doubles(row.get_ref(2)?.as_blob()?),
        co2_kg_per_kwh: optional(3)?,
        system_load: optional(4)?,
        first_timestamp: row.get(5)?,
    })
}
