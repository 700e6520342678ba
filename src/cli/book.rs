//! Which book is meant, how it is opened, and who writes to it.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};

use etcetera::BaseStrategy as _;
use signal_hook::consts::{SIGHUP, SIGINT, SIGTERM};

use super::args::Args;
use super::exit::{Exit, Failure};
use super::print::Printer;
use crate::book::{Access, Actor, Book, BookError};

/// Names the book where --book does not.
const VARIABLE: &str = "IRONHUM_BOOK";

/// A book with its path.
pub(super) struct Opened {
    pub(super) book: Book,
    pub(super) path: PathBuf,
}

/// The directory in which the program keeps its own books.
pub(super) fn data_directory() -> Result<PathBuf, Failure> {
    let strategy = etcetera::choose_base_strategy().map_err(|_| {
        Failure::new(Exit::Failed, "no home directory is known; name the book with --book FILE")
    })?;
    Ok(strategy.data_dir().join("ironhum"))
}

/// The book that is meant.
pub(super) fn path(args: &Args) -> Result<PathBuf, Failure> {
    match (&args.book, std::env::var_os(VARIABLE).filter(|path| !path.is_empty())) {
        (Some(path), _) => Ok(path.clone()),
        (None, Some(path)) => Ok(path.into()),
        (None, None) => Ok(data_directory()?.join("book.sqlite")),
    }
}

/// Opens the book for reading.
pub(super) fn open_to_read(args: &Args) -> Result<Opened, Failure> {
    let path = path(args)?;
    let book = Book::open(&path, Access::ReadOnly)?;
    Ok(Opened { book, path })
}

/// Opens the book for writing; makes it where there is none.
pub(super) fn open_to_write(args: &Args) -> Result<Opened, Failure> {
    if args.read_only {
        return Err(Failure::new(Exit::Usage, "--read-only: this command changes the book"));
    }
    let path = path(args)?;
    make_parent(&path)?;
    let book = Book::open(&path, Access::Create)?;
    Ok(Opened { book, path })
}

/// Opens a book that is there for writing.
pub(super) fn open_to_change(args: &Args) -> Result<Opened, Failure> {
    if args.read_only {
        return Err(Failure::new(Exit::Usage, "--read-only: this command changes the book"));
    }
    let path = path(args)?;
    let book = Book::open(&path, Access::ReadWrite)?;
    Ok(Opened { book, path })
}

pub(super) fn make_parent(path: &Path) -> Result<(), Failure> {
    match path.parent() {
        Some(parent) if !parent.as_os_str().is_empty() => std::fs::create_dir_all(parent)
            .map_err(|error| Failure::new(Exit::Failed, format!("{}: {error}", parent.display()))),
        _ => Ok(()),
    }
}

/// Who writes, and when.
pub(super) fn actor(why: Option<String>) -> Actor {
    let name = |key| std::env::var(key).ok().filter(|name| !name.is_empty());
    let who = name("USER").or_else(|| name("LOGNAME")).or_else(|| name("USERNAME"));
    Actor {
        who: who.unwrap_or_else(|| "unknown".to_owned()),
        at: chrono::Utc::now().format("%Y-%m-%dT%H:%M:%SZ").to_string(),
        why,
    }
}

/// `ironhum backup FILE`. A signal removes what was copied so far.
pub(super) fn backup(args: &Args, file: &Path, printer: &mut Printer) -> Result<Exit, Failure> {
    let Opened { book, path } = open_to_read(args)?;
    let caught = Arc::new(AtomicUsize::new(0));
    for signal in [SIGINT, SIGTERM, SIGHUP] {
        let number = usize::try_from(signal).unwrap_or(0);
        signal_hook::flag::register_usize(signal, Arc::clone(&caught), number)?;
    }
    match book.backup(file, &|| caught.load(Ordering::Relaxed) != 0) {
        Err(BookError::Stopped) => {
            let signal = u8::try_from(caught.load(Ordering::Relaxed)).unwrap_or(0);
            return Err(Failure::new(Exit::Signal(signal), BookError::Stopped.to_string()));
        }
        copied => copied?,
    }
    printer.complain(&format!("{} is copied to {}", path.display(), file.display()));
    Ok(Exit::Done)
}
