//! Questions a planner asks: each study joins what the book holds with what the engine computes.
//!
//! Faces get their figures here and nowhere else; a result is plain data that can be printed, drawn or
//! written as JSON. Owns no screen, no file and no formula.

pub mod settle;
pub mod tender;

use crate::engine::Refusal;
use crate::engine::columns::nearest;

/// Why a study has no answer.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum StudyError {
    /// The engine refuses an input.
    #[error("{at}: {refusal}")]
    Refused {
        /// What it belongs to: the lot, the bid.
        at: String,
        /// The input and what to do about it.
        refusal: Refusal,
    },
    /// Something was named that is not there.
    #[error("{kind} {name} is not in {place}{}", near.as_ref().map(|n| format!("; did you mean {n}?")).unwrap_or_default())]
    Unknown {
        /// What kind of thing.
        kind: &'static str,
        /// Its name, as asked for.
        name: String,
        /// Where it was looked for.
        place: String,
        /// The known name nearest to it.
        near: Option<String>,
    },
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
        let near = nearest(name, known).map(str::to_owned);
        Self::Unknown { kind, name: name.to_owned(), place: place.into(), near }
    }
}
