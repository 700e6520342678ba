//! Putting rows into a table: new ones are inserted, known ones brought up to date, each change journaled.
//!
//! A row is first looked up, which fills its blanks from what the book knows, so that the caller can hold the
//! whole record against its rules; then it is put.

use rusqlite::{ErrorCode, Statement};
use serde_json::json;

use super::change::Entry;
use super::{BookError, Change, Result, Table, cells};
use crate::engine::columns::Value;

/// What became of a row.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Outcome {
    /// It was not there.
    New,
    /// It was there with other values.
    Changed,
    /// It was there just so.
    Same,
}

/// A row that the book has.
#[derive(Clone, Debug, PartialEq)]
pub struct Known {
    id: i64,
    old: Vec<Value>,
}

impl Known {
    /// What the book has in a column.
    pub fn old(&self, place: usize) -> &Value {
        self.old.get(place).unwrap_or(&Value::Blank)
    }

    /// Places of the columns in which a row differs from what the book has.
    pub fn differs<'a>(&'a self, row: &'a [Value]) -> impl Iterator<Item = usize> + 'a {
        self.old.iter().zip(row).enumerate().filter(|(_, (old, new))| old != new).map(|(at, _)| at)
    }
}

/// Rows on their way into one table.
#[derive(Debug)]
pub struct Upsert<'c> {
    change: &'c Change<'c>,
    table: &'static Table,
    owner: Option<String>,
    present: Vec<usize>,
    key: Vec<usize>,
    clear_blank: bool,
    /// Whether the table was empty at the start: then nothing need be looked up.
    empty: bool,
    insert: Statement<'c>,
    select: Statement<'c>,
    update: Statement<'c>,
}

impl<'c> Upsert<'c> {
    pub(super) fn prepare(
        change: &'c Change<'c>,
        table: &'static Table,
        owner: Option<&str>,
        present: &[usize],
        clear_blank: bool,
    ) -> Result<Self> {
        let sql = |place: &usize| table.columns[*place].sql_name();
        let key: Vec<usize> = table.key.iter().filter_map(|name| table.position(name)).collect();
        let owner_column = table.owner.iter().map(ToString::to_string);

        let columns: Vec<String> = owner_column.clone().chain(present.iter().map(sql)).collect();
        let insert = format!(
            "INSERT INTO {} ({}) VALUES ({})",
            table.name,
            columns.join(", "),
            vec!["?"; columns.len()].join(", ")
        );
        let select = format!(
            "SELECT id, {} FROM {} WHERE {}",
            table
                .columns
                .iter()
                .map(crate::engine::columns::Column::sql_name)
                .collect::<Vec<_>>()
                .join(", "),
            table.name,
            owner_column
                .chain(key.iter().map(sql))
                .map(|name| format!("{name} = ?"))
                .collect::<Vec<_>>()
                .join(" AND ")
        );
        let update = format!(
            "UPDATE {} SET {} WHERE id = ?",
            table.name,
            present.iter().map(|p| format!("{} = ?", sql(p))).collect::<Vec<_>>().join(", ")
        );
        let filled = format!("SELECT 1 FROM {} LIMIT 1", table.name);
        let store = &change.transaction;
        Ok(Self {
            change,
            table,
            owner: owner.map(ToOwned::to_owned),
            present: present.to_vec(),
            key,
            clear_blank,
            empty: !store.prepare(&filled)?.exists([])?,
            insert: store.prepare(&insert)?,
            select: store.prepare(&select)?,
            update: store.prepare(&update)?,
        })
    }

    /// Looks a row up by its key and fills its blanks with the old values, but for blank cells of present columns
    /// where those clear. `row` has a value for each column of the record.
    ///
    /// # Errors
    /// The store fails.
    pub fn look_up(&mut self, row: &mut [Value]) -> Result<Option<Known>> {
        if self.empty {
            return Ok(None);
        }
        let mut at = 0;
        if let Some(owner) = &self.owner {
            at += 1;
            self.select.raw_bind_parameter(at, owner)?;
        }
        for place in &self.key {
            at += 1;
            self.select.raw_bind_parameter(at, cells::Bound(&row[*place]))?;
        }
        let mut found = self.select.raw_query();
        let Some(stored) = found.next()? else { return Ok(None) };
        let id = stored.get(0)?;
        let old = super::read::values(self.table, stored, 1)?;
        for (place, (new, old)) in row.iter_mut().zip(&old).enumerate() {
            if *new == Value::Blank && !(self.clear_blank && self.present.contains(&place)) {
                new.clone_from(old);
            }
        }
        Ok(Some(Known { id, old }))
    }

    /// Puts a row that was looked up.
    ///
    /// # Errors
    /// A row of that key was put before ([`BookError::Twice`]), or the store fails.
    pub fn put(&mut self, known: Option<Known>, row: &[Value]) -> Result<Outcome> {
        let (outcome, id) = match known {
            None => (Outcome::New, self.insert(row)?),
            Some(known) if known.old == row => (Outcome::Same, known.id),
            Some(known) => {
                self.update(&known, row)?;
                (Outcome::Changed, known.id)
            }
        };
        self.change.count(self.table.kind, outcome, id, || self.key_of(row));
        Ok(outcome)
    }

    fn insert(&mut self, row: &[Value]) -> Result<i64> {
        let mut at = 0;
        if let Some(owner) = &self.owner {
            at += 1;
            self.insert.raw_bind_parameter(at, owner)?;
        }
        for place in &self.present {
            at += 1;
            self.insert.raw_bind_parameter(at, cells::Bound(&row[*place]))?;
        }
        match self.insert.raw_execute() {
            Ok(_) => Ok(self.change.transaction.last_insert_rowid()),
            Err(rusqlite::Error::SqliteFailure(failure, _))
                if failure.code == ErrorCode::ConstraintViolation
                    && failure.extended_code == rusqlite::ffi::SQLITE_CONSTRAINT_UNIQUE =>
            {
                Err(BookError::Twice { kind: self.table.kind })
            }
            Err(error) => Err(error.into()),
        }
    }

    fn update(&mut self, known: &Known, row: &[Value]) -> Result<()> {
        for (at, place) in self.present.iter().enumerate() {
            self.update.raw_bind_parameter(at + 1, cells::Bound(&row[*place]))?;
        }
        self.update.raw_bind_parameter(self.present.len() + 1, known.id)?;
        self.update.raw_execute()?;
        let what = self
            .table
            .columns
            .iter()
            .zip(known.old.iter().zip(row))
            .filter(|(_, (old, new))| old != new)
            .map(|(column, (old, new))| {
                let change = json!({ "old": cells::json(old), "new": cells::json(new) });
                (column.name.to_owned(), change)
            })
            .collect::<serde_json::Map<_, _>>();
        self.change.write(&Entry {
            action: "changed",
            kind: self.table.kind,
            key: Some(&self.key_of(row)),
            row: Some(known.id),
            what: what.into(),
            replaced: None,
        })
    }

    /// The key as people write it, the owner's first.
    fn key_of(&self, row: &[Value]) -> String {
        let own = self.key.iter().map(|place| cells::key(&row[*place]));
        self.owner.iter().cloned().chain(own).collect::<Vec<_>>().join("/")
    }
}
