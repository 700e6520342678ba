//! What the dashboard is opened with. It comes from whoever read the book; the screens themselves know no file
//! and no database.

use std::fmt;
use std::sync::Arc;

use crate::engine::columns::{BasisSheet, TenderSheet, Unit};
use crate::study::{Desk, StudyError};

/// Reads the whole record of a unit by its identifier; none where it cannot.
pub type RecordReader = Box<dyn FnMut(&str) -> Option<Unit> + Send>;

/// Stores a changed basis and gives the journal as it stands then, newest first.
pub type BasisWriter = Box<dyn FnMut(&BasisSheet) -> Result<Vec<JournalLine>, StudyError> + Send>;

/// What is to be awarded, and what the screen showed when that was asked.
#[derive(Clone, Debug)]
pub struct Awarding {
    /// The tender as it was shown.
    pub sheet: Arc<TenderSheet>,
    /// The basis as it was shown.
    pub basis: Box<BasisSheet>,
    /// The lot.
    pub lot: String,
    /// The bid that it goes to.
    pub bid: String,
    /// Why, in the words of who awards.
    pub why: Option<String>,
}

/// Stores an award and gives the tender and the journal as they stand then. It refuses where the book no longer
/// holds what was shown.
pub type AwardWriter =
    Box<dyn FnMut(&Awarding) -> Result<(TenderSheet, Vec<JournalLine>), StudyError> + Send>;

/// What the dashboard is opened with.
pub struct Session {
    /// What is open, in a few words: the name of the book's file.
    pub title: String,
    /// The fleet, the offers and the basis.
    pub desk: Desk,
    /// Where the basis came from: the book, or a file.
    pub basis_source: String,
    /// The tenders of the book with their bids.
    pub tenders: Vec<TenderSheet>,
    /// The latest entries of the journal, newest first.
    pub journal: Vec<JournalLine>,
    /// Reads what the columns of the fleet do not hold (cooling, feeder, note …).
    pub record: Option<RecordReader>,
    /// Stores a changed basis; none where nothing may be written.
    pub save: Option<BasisWriter>,
    /// Stores an award; none where nothing may be written.
    pub award: Option<AwardWriter>,
}

impl fmt::Debug for Session {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Session").field("title", &self.title).finish_non_exhaustive()
    }
}

/// One entry of the journal, in words.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct JournalLine {
    /// Day and time, UTC.
    pub at: String,
    /// Who did it.
    pub who: String,
    /// What was done to what: `changed unit ZE-0101`.
    pub what: String,
    /// Old and new values.
    pub details: String,
    /// The file it came from.
    pub source: String,
    /// Why.
    pub why: String,
}
