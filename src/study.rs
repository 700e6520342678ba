//! Questions a planner asks, answered from a book by the engine. The commands and the screens get their
//! figures here and nowhere else; a result is plain data that can be printed, drawn or written as JSON.
//!
//! [`Desk`] is what lies ready for a question: the fleet in columns, the offers, profiles, prices and a basis.
//! It is filled from a book once; a changed assumption never reads the book again.

pub mod check;
pub mod desk;
pub mod error;
pub mod estimate;
pub mod explain;
pub mod factors;
pub mod figures;
pub mod intake;
pub mod law;
pub mod losses;
pub mod offers_open;
pub mod rank;
pub mod settle;
pub mod tender;
pub mod test_report;
pub mod unit;
pub mod watch;
pub mod work;

use serde::Serialize;

pub use desk::Desk;
pub use error::StudyError;
pub use watch::Watch;

/// A result as a JSON document.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct Document<T> {
    /// Version of the names in the document.
    pub schema_version: u32,
    /// The result.
    #[serde(flatten)]
    pub result: T,
}

impl<T> Document<T> {
    /// The document of a result.
    pub const fn of(result: T) -> Self {
        Self { schema_version: 1, result }
    }
}
