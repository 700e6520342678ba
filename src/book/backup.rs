//! A consistent copy of a book, also while others write to it. The copy has its name only when it is whole.

use std::fs::File;
use std::io;
use std::path::{Path, PathBuf};
use std::time::Duration;

use rusqlite::backup::{Backup, StepResult};
use rusqlite::{Connection, OpenFlags};

use super::open::{Access, flags};
use super::{Book, BookError, Result};

/// Pages copied at a time.
const PAGES: i32 = 4096;
/// Between two tries while somebody writes.
const PAUSE: Duration = Duration::from_millis(20);

impl Book {
    /// Copies the book to a new file; `stopped` is asked between parts whether to give up. What is not whole lies
    /// beside the copy under another name, and is removed.
    ///
    /// # Errors
    /// The target is there already (nothing is overwritten), cannot be written, or it was stopped.
    pub fn backup(&self, to: &Path, stopped: &dyn Fn() -> bool) -> Result<()> {
        let exists = || BookError::Exists { path: to.to_owned() };
        let failed = |source: io::Error| match source.kind() {
            io::ErrorKind::AlreadyExists => exists(),
            _ => BookError::File { path: to.to_owned(), source },
        };
        if to.symlink_metadata().is_ok() {
            return Err(exists());
        }
        let part = beside(to);
        File::create_new(&part).map_err(failed)?;
        let whole = self.copy_into(&part, stopped).and_then(|()| {
            File::open(&part).and_then(|file| file.sync_all()).map_err(failed)?;
            name_it(&part, to).map_err(failed)
        });
        if whole.is_err() {
            // The copy's own failure is what the caller needs to hear.
            drop(std::fs::remove_file(&part));
        }
        whole
    }

    fn copy_into(&self, to: &Path, stopped: &dyn Fn() -> bool) -> Result<()> {
        let mut copy = Connection::open_with_flags(to, flags(Access::ReadWrite))?;
        {
            let backup = Backup::new(&self.connection, &mut copy)?;
            loop {
                if stopped() {
                    return Err(BookError::Stopped);
                }
                match backup.step(PAGES)? {
                    StepResult::Done => break,
                    StepResult::More => {}
                    _ => std::thread::sleep(PAUSE),
                }
            }
        }
        copy.close().map_err(|(_, error)| error)?;
        Ok(())
    }

    /// The book in memory, apart from its file: what is changed there is changed nowhere.
    ///
    /// # Errors
    /// The store fails.
    pub fn apart(&self) -> Result<Self> {
        let mut copy = Connection::open_with_flags(
            ":memory:",
            flags(Access::ReadWrite) | OpenFlags::SQLITE_OPEN_CREATE,
        )?;
        Backup::new(&self.connection, &mut copy)?.run_to_completion(PAGES, PAUSE, None)?;
        super::open::settle(&copy)?;
        Ok(Self { connection: copy, path: None, frozen: false })
    }
}

/// Where a copy grows until it is whole.
fn beside(to: &Path) -> PathBuf {
    let mut name = to.as_os_str().to_owned();
    name.push(format!(".part-{}", std::process::id()));
    name.into()
}

/// Gives a whole copy its name, unless the name was taken meanwhile.
fn name_it(part: &Path, to: &Path) -> io::Result<()> {
    match std::fs::hard_link(part, to) {
        Ok(()) => drop(std::fs::remove_file(part)),
        Err(error) if error.kind() == io::ErrorKind::AlreadyExists => return Err(error),
        // Not every file system has a second name for a file.
        Err(_) if !to.exists() => std::fs::rename(part, to)?,
        Err(_) => return Err(io::ErrorKind::AlreadyExists.into()),
    }
    // The name is kept by the directory; where that cannot be synced the copy is whole all the same.
    let parent = to.parent().filter(|parent| !parent.as_os_str().is_empty());
    if let Ok(directory) = File::open(parent.unwrap_or(Path::new("."))) {
        drop(directory.sync_all());
    }
    Ok(())
}
