//! A consistent copy of a book, also while others write to it.

use std::path::Path;
use std::time::Duration;

use rusqlite::Connection;
use rusqlite::backup::Backup;

use super::open::{Access, flags};
use super::{Book, BookError, Result};

/// Pages copied at a time.
const PAGES: i32 = 4096;

impl Book {
    /// Copies the book to a new file.
    ///
    /// # Errors
    /// The target is there already (nothing is overwritten) or cannot be written; then no half copy is left.
    pub fn backup(&self, to: &Path) -> Result<()> {
        std::fs::File::create_new(to).map_err(|source| match source.kind() {
            std::io::ErrorKind::AlreadyExists => BookError::Exists { path: to.to_owned() },
            _ => BookError::File { path: to.to_owned(), source },
        })?;
        let copied = self.copy_into(to);
        if copied.is_err() {
            // The copy's own failure is what the caller needs to hear.
            drop(std::fs::remove_file(to));
        }
        copied
    }

    fn copy_into(&self, to: &Path) -> Result<()> {
        let mut copy = Connection::open_with_flags(to, flags(Access::ReadWrite))?;
        Backup::new(&self.connection, &mut copy)?.run_to_completion(PAGES, Duration::ZERO, None)?;
        copy.close().map_err(|(_, error)| error)?;
        Ok(())
    }
}
