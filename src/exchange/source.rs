//! Where bytes come from: a file or standard input, looked at before it is read, and bounded.

use std::fs::File;
use std::io::{self, Cursor, Read};
use std::path::{Path, PathBuf};

/// Largest file that is read (bytes).
pub(super) const LARGEST: u64 = 2 << 30;
/// What is looked at to recognise a file (bytes).
pub(super) const HEAD: usize = 1 << 20;

/// A file that cannot be opened or read.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum SourceError {
    /// Nothing there.
    #[error("there is no file {}", .0.display())]
    Missing(PathBuf),
    /// A directory.
    #[error("{} is a directory; name a file in it", .0.display())]
    Directory(PathBuf),
    /// The system refuses.
    #[error("{name}: {error}")]
    System {
        /// The file.
        name: String,
        /// What the system says.
        error: io::Error,
    },
}

/// An open source with its first bytes read.
pub struct Source {
    /// Its name in messages and in the journal, `-` for standard input.
    pub(super) name: String,
    /// Name of the file without directory and extension; none for standard input.
    stem: Option<String>,
    /// Size where it is known (bytes).
    size: Option<u64>,
    pub(super) head: Vec<u8>,
    rest: Box<dyn Read + Send>,
}

impl std::fmt::Debug for Source {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Source").field("name", &self.name).finish_non_exhaustive()
    }
}

impl Source {
    /// Opens a file.
    ///
    /// # Errors
    /// It is not there, is a directory, or cannot be read.
    pub fn open(path: &Path) -> Result<Self, SourceError> {
        let name = path.display().to_string();
        let system = |error| SourceError::System { name: name.clone(), error };
        let file = match File::open(path) {
            Ok(file) => file,
            Err(error) if error.kind() == io::ErrorKind::NotFound => {
                return Err(SourceError::Missing(path.to_owned()));
            }
            Err(error) => return Err(system(error)),
        };
        let meta = file.metadata().map_err(system)?;
        if meta.is_dir() {
            return Err(SourceError::Directory(path.to_owned()));
        }
        let size = meta.is_file().then_some(meta.len());
        let stem = path.file_stem().map(|stem| stem.to_string_lossy().into_owned());
        Ok(Self { stem, size, ..Self::read(&name, file)? })
    }

    /// Takes what a reader gives, standard input for instance.
    ///
    /// # Errors
    /// It cannot be read.
    pub fn read(name: &str, mut from: impl Read + Send + 'static) -> Result<Self, SourceError> {
        let mut head = Vec::new();
        from.by_ref()
            .take(HEAD as u64)
            .read_to_end(&mut head)
            .map_err(|error| SourceError::System { name: name.to_owned(), error })?;
        Ok(Self { name: name.to_owned(), stem: None, size: None, head, rest: Box::new(from) })
    }

    /// Its name in messages.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Name of the file without directory and extension; none for standard input.
    pub fn stem(&self) -> Option<&str> {
        self.stem.as_deref()
    }

    /// Size where it is known (bytes).
    pub fn size(&self) -> Option<u64> {
        self.size
    }

    /// All bytes from the first one on, bounded.
    pub(super) fn into_reader(self, largest: u64) -> Bounded<impl Read + Send> {
        Bounded { inner: Cursor::new(self.head).chain(self.rest), left: largest, largest }
    }
}

/// A reader that fails where a file is too large.
pub(super) struct Bounded<R> {
    inner: R,
    left: u64,
    largest: u64,
}

impl<R: Read> Read for Bounded<R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        let read = self.inner.read(buffer)?;
        self.left = self
            .left
            .checked_sub(read as u64)
            .ok_or_else(|| unfit(format!("is larger than {} MiB; split it", self.largest >> 20)))?;
        Ok(read)
    }
}

/// An error about what is in a file, not about reading it.
pub(super) fn unfit(why: impl Into<String>) -> io::Error {
    io::Error::new(io::ErrorKind::InvalidData, why.into())
}
