//! Questions a planner asks, answered from a book by the engine. The commands and the screens get their
//! figures here and nowhere else.
//!
//! [`Desk`] is what lies ready for a question: the fleet in columns, the offers, profiles, prices and a basis.
//! It is filled from a book once; a changed assumption never reads the book again.

pub mod desk;
pub mod error;
pub mod factors;
pub mod figures;
pub mod intake;
pub mod losses;
pub mod rank;
pub mod unit;
pub mod watch;

pub use desk::Desk;
pub use error::StudyError;
pub use watch::Watch;

/// Version of the JSON results.
pub const SCHEMA_VERSION: u32 = 1;
