//! Why a question could not be answered, said so that a planner knows what to do next.

use crate::book::BookError;
use crate::engine::Refusal;
use crate::engine::columns::nearest;

/// Why a study has no answer.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum StudyError {
    /// The engine refuses an input.
    #[error("{}{refusal}", if at.is_empty() { String::new() } else { format!("{at}: ") })]
    Refused {
        /// What it belongs to, where that is not plain: the lot, the bid.
        at: String,
        /// The input and what to do about it.
        refusal: Refusal,
    },
    /// Something was named that is not there.
    #[error("{kind} {name} is not in {place}{hint}")]
    Unknown {
        /// What kind of thing.
        kind: &'static str,
        /// Its name, as asked for.
        name: String,
        /// Where it was looked for.
        place: String,
        /// The known name nearest to it, or the known names.
        hint: String,
    },
    /// The book fails.
    #[error("{0}")]
    Book(#[from] BookError),
    /// Others kept writing while the book was read.
    #[error("others changed the book meanwhile; nothing is stored: look, and try again")]
    Busy,
    /// The work was stopped.
    #[error("stopped")]
    Stopped,
}

impl From<Refusal> for StudyError {
    fn from(refusal: Refusal) -> Self {
        Self::Refused { at: String::new(), refusal }
    }
}

impl StudyError {
    /// Puts a place in front of a refusal.
    pub fn refused(at: impl Into<String>) -> impl FnOnce(Refusal) -> Self {
        let at = at.into();
        move |refusal| Self::Refused { at, refusal }
    }

    /// Something unknown, with the nearest known name.
    pub fn unknown<'a>(
        kind: &'static str,
        name: &str,
        place: impl Into<String>,
        known: impl IntoIterator<Item = &'a str>,
    ) -> Self {
        let known: Vec<&str> = known.into_iter().collect();
        let hint = match nearest(name, known.iter().copied()) {
            Some(near) => format!("; did you mean {near}?"),
            None if known.is_empty() => "; it holds none yet".to_owned(),
            None => format!("; it holds {}", known[..known.len().min(8)].join(", ")),
        };
        Self::Unknown { kind, name: name.to_owned(), place: place.into(), hint }
    }
}
