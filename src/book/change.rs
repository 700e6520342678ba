//! Writing: one transaction that keeps the journal. What is not committed never happened.

use std::cell::RefCell;

use rusqlite::types::ToSqlOutput;
use rusqlite::{ToSql, Transaction, TransactionBehavior, params};
use serde_json::json;

use super::{Book, Outcome, Result, Table, Upsert, cells, tables};
use crate::engine::columns::Value;

/// Who writes, when and why. The faces know; no layer below looks at a clock.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Actor {
    /// Who.
    pub who: String,
    /// When (UTC, ISO 8601).
    pub at: String,
    /// Why, in their own words.
    pub why: Option<String>,
}

/// How many rows were what.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, serde::Serialize)]
pub struct Tally {
    /// Rows that were not there.
    pub new: u64,
    /// Rows that were there with other values.
    pub changed: u64,
    /// Rows that were there just so.
    pub same: u64,
}

/// New rows of one kind.
#[derive(Debug)]
struct Added {
    kind: &'static str,
    rows: u64,
    first_id: i64,
    last_id: i64,
    /// Key of the row, kept while there is one only.
    key: Option<String>,
}

/// A transaction on a book. Dropped without [`Change::commit`] it leaves nothing behind.
#[derive(Debug)]
pub struct Change<'b> {
    pub(super) transaction: Transaction<'b>,
    actor: Actor,
    source: Option<String>,
    /// Number of the import, where a file is taken in.
    batch: Option<i64>,
    tally: RefCell<Tally>,
    added: RefCell<Vec<Added>>,
}

/// What an entry of the journal is about.
pub(super) struct Entry<'a> {
    pub(super) action: &'static str,
    pub(super) kind: &'static str,
    pub(super) key: Option<&'a str>,
    pub(super) row: Option<i64>,
    pub(super) what: serde_json::Value,
    pub(super) replaced: Option<&'a [u8]>,
}

impl Book {
    /// Begins a change; `source` names the file where one is taken in.
    ///
    /// # Errors
    /// Another program is writing, or the book is open for reading only.
    pub fn change(&mut self, actor: &Actor, source: Option<&str>) -> Result<Change<'_>> {
        if self.connection.is_readonly("main")? {
            return Err(super::BookError::ReadOnly);
        }
        let transaction =
            self.connection.transaction_with_behavior(TransactionBehavior::Immediate)?;
        let batch = match source {
            Some(_) => Some(transaction.query_row(
                "SELECT coalesce(max(id), 0) + 1 FROM import_batches",
                [],
                |row| row.get(0),
            )?),
            None => None,
        };
        Ok(Change {
            transaction,
            actor: actor.clone(),
            source: source.map(ToOwned::to_owned),
            batch,
            tally: RefCell::default(),
            added: RefCell::default(),
        })
    }
}

impl Change<'_> {
    /// As [`Book::data_version`]: what others had written when the change began.
    ///
    /// # Errors
    /// The store fails.
    pub fn data_version(&self) -> Result<i64> {
        super::read::data_version(&self.transaction)
    }

    /// Prepares to put rows into a table. `present` are the places of the columns that the rows carry; the key is
    /// among them. Blanks leave old values unless `clear_blank`.
    ///
    /// # Errors
    /// The store fails.
    pub fn upsert(
        &self,
        table: &'static Table,
        owner: Option<&str>,
        present: &[usize],
        clear_blank: bool,
    ) -> Result<Upsert<'_>> {
        Upsert::prepare(self, table, owner, present, clear_blank)
    }

    /// Puts one whole record: its blanks clear old values.
    ///
    /// # Errors
    /// The store fails.
    pub fn put(
        &self,
        table: &'static Table,
        owner: Option<&str>,
        values: &[Value],
    ) -> Result<Outcome> {
        let all: Vec<usize> = (0..table.columns.len()).collect();
        let mut upsert = self.upsert(table, owner, &all, true)?;
        let mut values = values.to_vec();
        let known = upsert.look_up(&mut values)?;
        upsert.put(known, &values)
    }

    /// Whether a record of that key is in the book, as this change left it. The key is the owner's, where the
    /// table has one, then the record's own.
    ///
    /// # Errors
    /// The store fails.
    pub fn has(&self, table: &Table, key: &[&str]) -> Result<bool> {
        let names = table.owner.iter().chain(table.key);
        let condition = names.map(|name| format!("{name} = ?")).collect::<Vec<_>>().join(" AND ");
        let sql = format!("SELECT 1 FROM {} WHERE {condition}", table.name);
        let mut statement = self.transaction.prepare_cached(&sql)?;
        Ok(statement.exists(rusqlite::params_from_iter(key))?)
    }

    /// Whether a tender can judge money of a currency: its own, or one of its rates.
    ///
    /// # Errors
    /// The store fails.
    pub fn knows_currency(&self, tender: &str, currency: &str) -> Result<bool> {
        let own = "SELECT 1 FROM tenders WHERE tender = ?1 AND currency = ?2";
        Ok(self.transaction.prepare_cached(own)?.exists([tender, currency])?
            || self.has(&tables::TENDER_RATES, &[tender, currency])?)
    }

    /// The keys of a table, in order of entry.
    ///
    /// # Errors
    /// The store fails.
    pub fn names(&self, table: &Table) -> Result<Vec<String>> {
        super::read::names(&self.transaction, table)
    }

    /// Chooses the basis that counts where none is named.
    ///
    /// # Errors
    /// The book has no such basis, or the store fails.
    pub fn set_current_basis(&self, name: &str) -> Result<()> {
        if !self.has(&tables::BASES, &[name])? {
            let known = super::read::names(&self.transaction, &tables::BASES)?;
            return Err(super::BookError::Unknown { kind: "basis", key: name.to_owned(), known });
        }
        let old = super::read::setting(&self.transaction, CURRENT_BASIS)?;
        if old.as_deref() == Some(name) {
            return Ok(());
        }
        self.transaction.execute(
            "INSERT INTO settings (name, value) VALUES (?1, ?2)
             ON CONFLICT (name) DO UPDATE SET value = excluded.value",
            params![CURRENT_BASIS, name],
        )?;
        self.write(&Entry {
            action: "chosen",
            kind: "basis",
            key: Some(name),
            row: None,
            what: json!({ CURRENT_BASIS: { "old": old, "new": name } }),
            replaced: None,
        })
    }

    /// What was done so far.
    pub fn tally(&self) -> Tally {
        *self.tally.borrow()
    }

    /// Makes it last.
    ///
    /// # Errors
    /// The store fails; then nothing was changed.
    pub fn commit(self) -> Result<Tally> {
        for added in self.added.take() {
            self.write(&Entry {
                action: "added",
                kind: added.kind,
                key: added.key.as_deref(),
                row: added.key.is_some().then_some(added.first_id),
                what: json!({
                    "rows": added.rows, "first_id": added.first_id, "last_id": added.last_id,
                }),
                replaced: None,
            })?;
        }
        let tally = self.tally();
        let (actor, source) = (&self.actor, &self.source);
        if let Some(batch) = self.batch
            && (tally.new > 0 || tally.changed > 0)
        {
            self.transaction.execute(
                "INSERT INTO import_batches (id, at, who, source, why, rows_new, rows_changed, rows_same)
                 VALUES (?1, ?2, ?3, ?4, ?5, ?6, ?7, ?8)",
                params![
                    batch,
                    actor.at,
                    actor.who,
                    source,
                    actor.why,
                    Count(tally.new),
                    Count(tally.changed),
                    Count(tally.same)
                ],
            )?;
        }
        self.transaction.commit()?;
        Ok(tally)
    }

    /// Takes notice of an outcome; new rows of a kind become one entry of the journal.
    pub(super) fn count(
        &self,
        kind: &'static str,
        outcome: Outcome,
        id: i64,
        key: impl Fn() -> String,
    ) {
        let mut tally = self.tally.borrow_mut();
        match outcome {
            Outcome::New => tally.new += 1,
            Outcome::Changed => tally.changed += 1,
            Outcome::Same => tally.same += 1,
        }
        if outcome != Outcome::New {
            return;
        }
        let mut all = self.added.borrow_mut();
        match all.iter_mut().find(|added| added.kind == kind) {
            Some(added) => {
                added.rows += 1;
                added.last_id = id;
                added.key = None;
            }
            None => {
                all.push(Added { kind, rows: 1, first_id: id, last_id: id, key: Some(key()) });
            }
        }
    }

    /// Writes an entry of the journal.
    pub(super) fn write(&self, entry: &Entry<'_>) -> Result<()> {
        let mut statement = self.transaction.prepare_cached(
            "INSERT INTO journal (at, who, action, kind, key, row, what, source, why, batch, replaced)
             VALUES (?1, ?2, ?3, ?4, ?5, ?6, ?7, ?8, ?9, ?10, ?11)",
        )?;
        statement.execute(params![
            self.actor.at,
            self.actor.who,
            entry.action,
            entry.kind,
            entry.key,
            entry.row,
            entry.what.to_string(),
            self.source,
            self.actor.why,
            self.batch,
            entry.replaced
        ])?;
        Ok(())
    }

    /// Removes a row, its values kept in the journal.
    pub(super) fn remove(&self, table: &Table, id: i64, key: &str, values: &[Value]) -> Result<()> {
        let sql = format!("DELETE FROM {} WHERE id = ?1", table.name);
        self.transaction.prepare_cached(&sql)?.execute([id])?;
        let what = table
            .columns
            .iter()
            .zip(values)
            .filter(|(_, value)| **value != Value::Blank)
            .map(|(column, value)| (column.name.to_owned(), json!({ "old": cells::json(value) })))
            .collect::<serde_json::Map<_, _>>();
        self.tally.borrow_mut().changed += 1;
        self.write(&Entry {
            action: "removed",
            kind: table.kind,
            key: Some(key),
            row: Some(id),
            what: what.into(),
            replaced: None,
        })
    }
}

/// Name of the setting that holds the current basis.
pub(super) const CURRENT_BASIS: &str = "current_basis";

/// A count on its way into SQL.
struct Count(u64);

impl ToSql for Count {
    fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
        Ok(i64::try_from(self.0).unwrap_or(i64::MAX).into())
    }
}
