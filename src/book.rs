//! The book: one SQLite file with a fleet, what can be bought, assumptions, tenders, and a journal of changes.
//!
//! [`Book`] opens a file and reads records out of it; [`Change`] is the one way to write: a transaction that
//! keeps the journal. Values are checked before they come here; the CHECK constraints are the second guard.
//! No clock: who writes says when ([`Actor`]). Knows the engine's records, no file format and no screen.

mod award;
mod backup;
mod cells;
mod change;
mod error;
mod fleet;
mod journal;
mod open;
mod read;
mod series;
mod sheets;
pub mod tables;
#[cfg(test)]
mod tests;
mod upsert;

use std::path::{Path, PathBuf};

use rusqlite::Connection;

pub use change::{Actor, Change, Tally};
pub use error::BookError;
pub use journal::JournalEntry;
pub use open::Access;
pub use read::Counts;
pub use tables::Table;
pub use upsert::{Known, Outcome, Upsert};

/// What book functions answer.
pub type Result<T> = std::result::Result<T, BookError>;

/// An open book.
#[derive(Debug)]
pub struct Book {
    connection: Connection,
    path: Option<PathBuf>,
    /// Whether the file lies where nothing can be written beside it: it is read as it stands.
    frozen: bool,
}

impl Book {
    /// Where the book lies; none for a book in memory.
    pub fn path(&self) -> Option<&Path> {
        self.path.as_deref()
    }
}
