//! Opening a book: is it one, of which version, and bringing an older one up to date (backed up first).

use std::path::{Path, PathBuf};
use std::time::Duration;

use rusqlite::{Connection, OpenFlags, TransactionBehavior};
use rusqlite_migration::{M, Migrations};

use super::error::PATIENCE_SECONDS;
use super::{Book, BookError, Result};

/// What a book is opened for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Access {
    /// Reading; the file is not touched.
    ReadOnly,
    /// Reading and writing a book that is there.
    ReadWrite,
    /// The same, and an empty book is made where there is none.
    Create,
}

/// Marks an SQLite file as a book: "IrHu", as in the first migration.
const APPLICATION_ID: i64 = 0x4972_4875;

/// Every step from nothing to this version. Never changed, only added to.
pub(super) const STEPS: &[M<'static>] = &[
    M::up(include_str!("../../migrations/01_book.sql")).foreign_key_check(),
    M::up(include_str!("../../migrations/02_award.sql")).foreign_key_check(),
];

impl Book {
    /// Opens a book.
    ///
    /// # Errors
    /// There is none, it is something else, of a newer version, write-protected or locked by another program.
    pub fn open(path: impl AsRef<Path>, access: Access) -> Result<Self> {
        Self::open_with(path.as_ref(), access, STEPS)
    }

    /// An empty book in memory, gone when it is dropped.
    ///
    /// # Errors
    /// The store fails.
    pub fn in_memory() -> Result<Self> {
        let mut connection = Connection::open_in_memory()?;
        settle(&connection)?;
        Migrations::from_slice(STEPS).to_latest(&mut connection)?;
        Ok(Self { connection, path: None, frozen: false })
    }

    pub(super) fn open_with(path: &Path, access: Access, steps: &[M<'_>]) -> Result<Self> {
        let not_a_book = |why| BookError::NotABook { path: path.to_owned(), why };
        match std::fs::metadata(path) {
            Ok(meta) if meta.is_dir() => return Err(not_a_book("it is a directory")),
            Ok(meta) if !meta.is_file() => return Err(not_a_book("it is no ordinary file")),
            Err(error) if error.kind() == std::io::ErrorKind::NotFound => {
                if access != Access::Create {
                    return Err(BookError::Missing { path: path.to_owned() });
                }
            }
            Err(source) => return Err(BookError::File { path: path.to_owned(), source }),
            Ok(_) => {}
        }
        // Looked at read-only first, so that what is not ours is never written to.
        if path.exists() {
            let mut frozen =
                access == Access::ReadOnly && !has_log(path) && !may_write_beside(path);
            let mut book = reader(path, frozen).map_err(|error| unopened(path, error))?;
            let mut found = recognise(&book);
            if matches!(&found, Err(Recognised::Failed(_))) && access == Access::ReadOnly {
                if has_log(path) && !may_write_beside(path) {
                    let why = "changes wait in its -wal file, which cannot be taken in here: copy the book with its -wal to a place that may be written to";
                    return Err(BookError::File {
                        path: path.to_owned(),
                        source: std::io::Error::other(why),
                    });
                }
                if !has_log(path) {
                    book = reader(path, true)?;
                    found = recognise(&book);
                    frozen = true;
                }
            }
            let version = found.map_err(|error| match error {
                Recognised::Other(why) => not_a_book(why),
                Recognised::Failed(error) => error.into(),
            })?;
            let program = i64::try_from(steps.len()).unwrap_or(i64::MAX);
            match version {
                Some(book) if book > program => {
                    return Err(BookError::Newer { path: path.to_owned(), book, program });
                }
                Some(old) if old < program && access == Access::ReadOnly => {
                    return Err(BookError::Older { path: path.to_owned(), book: old, program });
                }
                Some(old) if old < program => {
                    Self { connection: book, path: Some(path.to_owned()), frozen }
                        .backup(&free_name(path, program), &|| false)?;
                }
                None if access != Access::Create => return Err(not_a_book("it is empty")),
                Some(_) if access == Access::ReadOnly => {
                    return Ok(Self { connection: book, path: Some(path.to_owned()), frozen });
                }
                _ => {}
            }
        }
        let mut connection = Connection::open_with_flags(path, flags(access))?;
        settle(&connection)?;
        connection.pragma_update(None, "journal_mode", "WAL")?;
        connection.set_transaction_behavior(TransactionBehavior::Immediate);
        let migrations = Migrations::from_slice(steps);
        if let Err(error) = migrations.to_latest(&mut connection) {
            // Another program may have brought the book up to date in the same moment.
            if migrations.pending_migrations(&connection)? != 0 {
                return Err(error.into());
            }
        }
        Ok(Self { connection, path: Some(path.to_owned()), frozen: false })
    }
}

/// A connection that only reads. `frozen` reads the file as it stands and writes nothing beside it, which a book
/// needs that lies in a directory one may not write to.
pub(super) fn reader(path: &Path, frozen: bool) -> Result<Connection> {
    let connection = if frozen {
        let plain = path.to_string_lossy();
        let escaped = plain.replace('%', "%25").replace('?', "%3f").replace('#', "%23");
        let flags = flags(Access::ReadOnly) | OpenFlags::SQLITE_OPEN_URI;
        Connection::open_with_flags(format!("file:{escaped}?immutable=1"), flags)?
    } else {
        Connection::open_with_flags(path, flags(Access::ReadOnly))?
    };
    settle(&connection)?;
    Ok(connection)
}

/// Why a file cannot be opened: the store only says that. The file is opened here where the store could not and never
/// before: to close it would take away the locks of every other connection of this process to the same book.
fn unopened(path: &Path, error: BookError) -> BookError {
    match (&error, std::fs::File::open(path)) {
        (BookError::Store(_), Err(source)) => BookError::File { path: path.to_owned(), source },
        _ => error,
    }
}

/// Whether changes wait in a log beside the book: then the file alone is not the whole.
fn has_log(path: &Path) -> bool {
    let mut log = path.as_os_str().to_owned();
    log.push("-wal");
    std::fs::metadata(PathBuf::from(log)).is_ok_and(|meta| meta.len() > 0)
}

/// Whether the store may keep its files beside the book. Where not, and no changes wait there, the book is read as it
/// stands, whatever files of an earlier reader lie beside it.
fn may_write_beside(path: &Path) -> bool {
    #[cfg(unix)]
    {
        use rustix::fs::{Access as May, access};
        let mut index = path.as_os_str().to_owned();
        index.push("-shm");
        let index = PathBuf::from(index);
        let beside = path.parent().filter(|dir| !dir.as_os_str().is_empty());
        let there = if index.exists() { &index } else { beside.unwrap_or(Path::new(".")) };
        access(there, May::WRITE_OK).is_ok()
    }
    #[cfg(not(unix))]
    {
        let _ = path;
        true
    }
}

pub(super) fn flags(access: Access) -> OpenFlags {
    // No URI and no shared cache: a path is a path.
    OpenFlags::SQLITE_OPEN_NO_MUTEX
        | match access {
            Access::ReadOnly => OpenFlags::SQLITE_OPEN_READ_ONLY,
            Access::ReadWrite => OpenFlags::SQLITE_OPEN_READ_WRITE,
            Access::Create => OpenFlags::SQLITE_OPEN_READ_WRITE | OpenFlags::SQLITE_OPEN_CREATE,
        }
}

/// What holds for every connection. A book may come from anyone: nothing in its schema is trusted.
pub(super) fn settle(connection: &Connection) -> Result<()> {
    connection.busy_timeout(Duration::from_secs(PATIENCE_SECONDS))?;
    connection.set_prepared_statement_cache_capacity(64);
    connection.pragma_update(None, "foreign_keys", true)?;
    connection.pragma_update(None, "trusted_schema", false)?;
    Ok(())
}

enum Recognised {
    Other(&'static str),
    Failed(rusqlite::Error),
}

/// The version of a book; none for an empty file.
fn recognise(connection: &Connection) -> std::result::Result<Option<i64>, Recognised> {
    let number = |sql: &str| connection.query_row(sql, [], |row| row.get::<_, i64>(0));
    let read = || {
        Ok::<_, rusqlite::Error>((
            number("SELECT count(*) FROM sqlite_schema")?,
            number("PRAGMA application_id")?,
            number("PRAGMA user_version")?,
        ))
    };
    match read() {
        Ok((_, APPLICATION_ID, version)) if version >= 1 => Ok(Some(version)),
        Ok((_, APPLICATION_ID, _)) => {
            Err(Recognised::Other("its version number is damaged; go back to a backup"))
        }
        Ok((0, 0, 0)) => Ok(None),
        Ok(_) => Err(Recognised::Other("it is a database of another program")),
        Err(error) if error.sqlite_error_code() == Some(rusqlite::ErrorCode::NotADatabase) => {
            Err(Recognised::Other("it is no SQLite file"))
        }
        Err(error) => Err(Recognised::Failed(error)),
    }
}

/// A name for the backup before a migration that is not taken yet.
fn free_name(path: &Path, version: i64) -> PathBuf {
    let named = |tail: String| {
        let mut name = path.as_os_str().to_owned();
        name.push(format!(".before-v{version}{tail}"));
        PathBuf::from(name)
    };
    let mut tries = (2_u32..).map(|n| named(format!("-{n}")));
    std::iter::once(named(String::new()))
        .chain(&mut tries)
        .find(|name| !name.exists())
        .unwrap_or_else(|| named(String::new()))
}
