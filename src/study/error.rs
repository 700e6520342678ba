//! Why a question could not be answered, said so that a planner knows what to do next.

use crate::engine::Refusal;

/// Why a question could not be answered.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum StudyError {
    /// An input that the engine refuses.
    #[error("{0}")]
    Refused(#[from] Refusal),
    /// A thing that the book does not hold.
    #[error("{what} {name} is not in the book{hint}")]
    Unknown {
        /// What kind of thing.
        what: &'static str,
        /// Its name as asked.
        name: String,
        /// What to do, led by "; ".
        hint: String,
    },
    /// The book.
    #[error("{0}")]
    Book(#[from] crate::book::BookError),
    /// The work was stopped.
    #[error("stopped")]
    Stopped,
}

impl StudyError {
    /// A thing that is not in the book, with the nearest known name.
    pub fn unknown<'a>(
        what: &'static str,
        name: &str,
        known: impl IntoIterator<Item = &'a str> + Clone,
    ) -> Self {
        let nearest = crate::engine::columns::nearest(name, known.clone());
        let list: Vec<&str> = known.into_iter().take(8).collect();
        let hint = match nearest {
            Some(near) => format!("; did you mean {near}?"),
            None if list.is_empty() => "; the book holds none yet".to_owned(),
            None => format!("; it holds {}", list.join(", ")),
        };
        Self::Unknown { what, name: name.to_owned(), hint }
    }
}
