//! Taking files into a book: all or nothing by default, each problem by line, the journal kept.
//!
//! One way for every kind of file: read, hold against facts, rules and what the book knows, put, and at the end
//! either commit or leave no trace. A trial (`dry_run`) goes the same way and never commits.

mod ahead;
mod records;
mod series;
mod sheets;

use std::io::Write;

use serde::Serialize;

use crate::book::{Actor, Book, BookError, Tally};
use crate::exchange::{Hints, Problems, ReadError, Recognised, Source, SourceError};
use crate::study::Watch;

/// The kinds of files.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum What {
    /// The fleet.
    Units,
    /// Test reports of units.
    Tests,
    /// Load profiles.
    Profiles,
    /// A price series.
    Prices,
    /// What can be bought.
    Offers,
    /// A basis, as TOML.
    Basis,
    /// A tender, as TOML.
    Tender,
    /// Bids for lots.
    Bids,
    /// Measured losses.
    Measured,
}

impl What {
    /// Every kind with its word.
    pub const WORDS: [(&'static str, Self); 9] = [
        ("units", Self::Units),
        ("tests", Self::Tests),
        ("profiles", Self::Profiles),
        ("prices", Self::Prices),
        ("offers", Self::Offers),
        ("basis", Self::Basis),
        ("tender", Self::Tender),
        ("bids", Self::Bids),
        ("measured", Self::Measured),
    ];

    /// The word of a kind.
    pub fn word(self) -> &'static str {
        Self::WORDS.iter().find(|(_, what)| *what == self).map_or("", |(word, _)| word)
    }
}

/// How a file is taken in.
#[derive(Default)]
#[expect(clippy::struct_excessive_bools, reason = "each is a flag of the command of its own")]
pub struct Options<'a> {
    /// Columns to rename: theirs, ours.
    pub map: Vec<(String, String)>,
    /// Pass over unknown columns.
    pub ignore_unknown: bool,
    /// A blank cell erases the old value.
    pub clear_blank: bool,
    /// Store the good rows and leave the bad ones.
    pub skip_bad: bool,
    /// Store nothing; say what would change.
    pub dry_run: bool,
    /// Where bad rows are written with their reason.
    pub rejects: Option<Box<dyn Write + 'a>>,
    /// Make a basis the current one.
    pub current: bool,
    /// Name of a price series; else that of the file.
    pub name: Option<String>,
    /// What the caller says about the file.
    pub hints: Hints,
}

impl std::fmt::Debug for Options<'_> {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Options").field("map", &self.map).finish_non_exhaustive()
    }
}

/// What taking a file in came to.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Report {
    /// The kind of file.
    pub what: What,
    /// The file, `-` for standard input.
    pub file: String,
    /// What it was taken for; none where it was not recognised.
    pub recognised: Option<Recognised>,
    /// Rows read; of a series file its columns, of a sheet its parts.
    pub rows: u64,
    /// What became of the good ones (of a sheet, removed parts count as changed).
    #[serde(flatten)]
    pub tally: Tally,
    /// Rows (columns of a series file) that are wrong.
    pub bad: u64,
    /// Whether the file is rejected: something in it is wrong and bad rows were not to be left.
    pub rejected: bool,
    /// Whether it is in the book now.
    pub stored: bool,
    /// What is wrong.
    pub problems: Problems,
    /// What is doubtful, though taken.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub warnings: Vec<String>,
}

/// Why a file could not even be judged.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum IntakeError {
    /// The book.
    #[error(transparent)]
    Book(#[from] BookError),
    /// The file.
    #[error(transparent)]
    Source(#[from] SourceError),
    /// The rejected rows cannot be written.
    #[error("the rejected rows cannot be written: {0}")]
    Rejects(std::io::Error),
    /// There is no thread to read with.
    #[error("the system gives no thread to read the file with: {0}")]
    Thread(std::io::Error),
    /// A price series without a name.
    #[error("the price series needs a name; say --name NAME")]
    NoName,
    /// It was stopped; nothing was stored.
    #[error("stopped; nothing was stored")]
    Stopped,
}

/// Takes a file into a book.
///
/// # Errors
/// The file or the book cannot be read or written, or it was stopped. What is wrong *in* the file is no error:
/// it stands in the report.
pub fn import(
    book: &mut Book,
    what: What,
    source: Source,
    options: Options<'_>,
    actor: &Actor,
    watch: &Watch,
) -> Result<Report, IntakeError> {
    let intake = Intake {
        what,
        problems: Problems::new(source.name()),
        file: source.name().to_owned(),
        options,
        actor,
        watch,
        recognised: None,
        rows: 0,
        bad: 0,
        is_unfit: false,
        warnings: Vec::new(),
    };
    match what {
        What::Profiles => intake.profiles(book, source),
        What::Prices => intake.prices(book, source),
        What::Basis => intake.basis(book, source),
        What::Tender => intake.tender(book, source),
        What::Units | What::Tests | What::Offers | What::Bids | What::Measured => {
            intake.records(book, source)
        }
    }
}

/// A file on its way in.
struct Intake<'a> {
    what: What,
    file: String,
    options: Options<'a>,
    actor: &'a Actor,
    watch: &'a Watch,
    recognised: Option<Recognised>,
    rows: u64,
    bad: u64,
    /// Whether the file as a whole cannot be taken, bad rows left or not.
    is_unfit: bool,
    problems: Problems,
    warnings: Vec<String>,
}

impl Intake<'_> {
    /// Notes that the file as a whole cannot be taken.
    fn unfit(&mut self, error: ReadError) -> Result<(), IntakeError> {
        self.is_unfit = true;
        Ok(error.into_problem(&mut self.problems)?)
    }

    /// Whether what was put is to stay.
    fn stays(&self) -> bool {
        !self.options.dry_run && !self.is_rejected()
    }

    fn is_rejected(&self) -> bool {
        !self.problems.is_empty() && (self.is_unfit || !self.options.skip_bad)
    }

    fn report(self, tally: Tally) -> Report {
        let (rejected, stored) = (self.is_rejected(), self.stays());
        Report {
            what: self.what,
            file: self.file,
            recognised: self.recognised,
            rows: self.rows,
            tally,
            bad: self.bad,
            rejected,
            stored,
            problems: self.problems,
            warnings: self.warnings,
        }
    }
}
