//! What can go wrong with a book, in words that say what to do next.

use std::path::PathBuf;

use rusqlite::ErrorCode;

/// Why a book cannot be opened, read or written.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum BookError {
    /// No file there.
    #[error("there is no book at {}; import a file or name another book", .path.display())]
    Missing {
        /// The path asked for.
        path: PathBuf,
    },
    /// Something else than a book.
    #[error("{} is not a book: {why}", .path.display())]
    NotABook {
        /// The path asked for.
        path: PathBuf,
        /// What it is instead.
        why: &'static str,
    },
    /// Written by a newer program.
    #[error(
        "{} is of book version {book}, this program knows versions up to {program}; update ironhum, or open a backup \
         that the newer program made before it changed the book (beside it, named …before-v{book})",
        .path.display()
    )]
    Newer {
        /// The path asked for.
        path: PathBuf,
        /// Version of the book.
        book: i64,
        /// Highest version this program knows.
        program: i64,
    },
    /// Of an older version, and not to be written.
    #[error(
        "{} is of book version {book}; open it once for writing, so that it is backed up and brought to version {program}",
        .path.display()
    )]
    Older {
        /// The path asked for.
        path: PathBuf,
        /// Version of the book.
        book: i64,
        /// Version of this program.
        program: i64,
    },
    /// Another program is writing.
    #[error(
        "another program is writing to the book (waited {seconds} s); try again when it has finished"
    )]
    Locked {
        /// How long was waited.
        seconds: u64,
    },
    /// Opened for reading only, or the file is write-protected.
    #[error("the book is open for reading only; nothing was changed")]
    ReadOnly,
    /// The target of a copy is there already.
    #[error("{} is there already; nothing is overwritten, choose another name", .path.display())]
    Exists {
        /// The target.
        path: PathBuf,
    },
    /// A copy was stopped.
    #[error("stopped; no copy was made")]
    Stopped,
    /// A name that the book does not hold.
    #[error("{}", unknown(.kind, .key, .known))]
    Unknown {
        /// What was looked for.
        kind: &'static str,
        /// Its name.
        key: String,
        /// Names that are there.
        known: Vec<String>,
    },
    /// No basis was named and the book cannot tell which is meant.
    #[error("{}", which_basis(.known))]
    WhichBasis {
        /// Names that are there.
        known: Vec<String>,
    },
    /// A part that others still need.
    #[error("{kind} {key} has {parts} in the book and stays; keep it in the file")]
    InUse {
        /// What was to be removed.
        kind: &'static str,
        /// Its name.
        key: String,
        /// What needs it.
        parts: &'static str,
    },
    /// What was awarded stays as it was.
    #[error(
        "lot {lot} of tender {tender} is awarded: what it was awarded under stays; to change it, withdraw the award \
         first: ironhum award {tender} --lot {lot} --withdraw --why TEXT"
    )]
    Awarded {
        /// The tender.
        tender: String,
        /// The lot.
        lot: String,
    },
    /// The rates under which a lot was awarded stay.
    #[error(
        "[rates] {currency} of tender {tender} stays at {rate}, by which lot {lot} was awarded; to change it, withdraw \
         the award first: ironhum award {tender} --lot {lot} --withdraw --why TEXT"
    )]
    AwardedRate {
        /// The tender.
        tender: String,
        /// An awarded lot of it.
        lot: String,
        /// The currency.
        currency: String,
        /// Its rate in the book.
        rate: f64,
    },
    /// An award of which units are in the fleet.
    #[error(
        "units of lot {lot} of tender {tender} are in the fleet: the award that they came of stays"
    )]
    Delivered {
        /// The tender.
        tender: String,
        /// The lot.
        lot: String,
    },
    /// The same key twice in one change.
    #[error("the {kind} stands twice in one change")]
    Twice {
        /// What stands twice.
        kind: &'static str,
    },
    /// A row that does not read back.
    #[error("row {row} of {table} does not read back; the book is damaged, go back to a backup")]
    Damaged {
        /// The table.
        table: &'static str,
        /// Number of the row.
        row: i64,
    },
    /// A file of the book cannot be made or read.
    #[error("{}: {source}", .path.display())]
    File {
        /// The file.
        path: PathBuf,
        /// What the system says.
        source: std::io::Error,
    },
    /// The older book could not be brought to this version; the backup is whole.
    #[error("the book could not be brought to the version of this program: {0}")]
    Migration(#[from] rusqlite_migration::Error),
    /// Anything else that the store says.
    #[error("the book's store: {0}")]
    Store(rusqlite::Error),
}

/// How long a writer waits for another (seconds).
pub(super) const PATIENCE_SECONDS: u64 = 5;

impl From<rusqlite::Error> for BookError {
    fn from(error: rusqlite::Error) -> Self {
        match error.sqlite_error_code() {
            Some(ErrorCode::DatabaseBusy | ErrorCode::DatabaseLocked) => {
                Self::Locked { seconds: PATIENCE_SECONDS }
            }
            Some(ErrorCode::ReadOnly) => Self::ReadOnly,
            _ => Self::Store(error),
        }
    }
}

/// The first names of a list, for a message.
fn some(names: &[String]) -> String {
    const SHOWN: usize = 8;
    let list = names.iter().take(SHOWN).map(String::as_str).collect::<Vec<_>>().join(", ");
    if names.len() > SHOWN { format!("{list} … ({} in all)", names.len()) } else { list }
}

fn unknown(kind: &str, key: &str, known: &[String]) -> String {
    if known.is_empty() {
        return format!("the book has no {kind} {key}");
    }
    match crate::engine::columns::nearest(key, known.iter().map(String::as_str)) {
        Some(near) => format!("the book has no {kind} {key}; did you mean {near}?"),
        None => format!("the book has no {kind} {key}; it has {}", some(known)),
    }
}

fn which_basis(known: &[String]) -> String {
    if known.is_empty() {
        "the book has no basis yet; import one: ironhum import basis FILE".to_owned()
    } else {
        format!(
            "which basis? name one with --basis: {}; to make one of them the current one, import its file with --current",
            some(known)
        )
    }
}
