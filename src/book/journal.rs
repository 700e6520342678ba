//! Reading the journal: who changed what, when, from what and why.

use rusqlite::Row;
use serde::Serialize;

use super::{Book, Result};

/// One entry of the journal.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct JournalEntry {
    /// Number, rising.
    pub id: i64,
    /// When (UTC, ISO 8601).
    pub at: String,
    /// Who.
    pub who: String,
    /// `added`, `changed`, `removed` or `chosen`.
    pub action: String,
    /// What kind of thing: `unit`, `offer`, `basis` …
    pub kind: String,
    /// Its key; none where several rows were added at once.
    pub key: Option<String>,
    /// Columns with `old` and `new`; for added rows their number.
    pub what: serde_json::Value,
    /// The file it came from.
    pub source: Option<String>,
    /// Why, in the words of who did it.
    pub why: Option<String>,
    /// The import it belongs to.
    pub batch: Option<i64>,
}

const COLUMNS: &str = "id, at, who, action, kind, key, what, source, why, batch";

impl Book {
    /// The latest entries, newest first.
    ///
    /// # Errors
    /// The store fails.
    pub fn journal(&self, limit: usize) -> Result<Vec<JournalEntry>> {
        let sql = format!("SELECT {COLUMNS} FROM journal ORDER BY id DESC LIMIT ?1");
        let limit = i64::try_from(limit).unwrap_or(i64::MAX);
        self.entries(&sql, [limit])
    }

    fn entries(&self, sql: &str, params: impl rusqlite::Params) -> Result<Vec<JournalEntry>> {
        let mut statement = self.connection.prepare_cached(sql)?;
        let entries = statement.query_map(params, entry)?.collect::<rusqlite::Result<_>>()?;
        Ok(entries)
    }
}

fn entry(row: &Row<'_>) -> rusqlite::Result<JournalEntry> {
    let what: String = row.get(6)?;
    Ok(JournalEntry {
        id: row.get(0)?,
        at: row.get(1)?,
        who: row.get(2)?,
        action: row.get(3)?,
        kind: row.get(4)?,
        key: row.get(5)?,
        what: serde_json::from_str(&what).unwrap_or(serde_json::Value::String(what)),
        source: row.get(7)?,
        why: row.get(8)?,
        batch: row.get(9)?,
    })
}
