//! How a command ends: the exit status, and the message of a failure.

use std::process::ExitCode;

use crate::book::BookError;
use crate::engine::Refusal;
use crate::study::StudyError;

/// Exit status of the program.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Exit {
    /// Done.
    Done,
    /// Could not be done: file, store, internal.
    Failed,
    /// Wrong use.
    Usage,
    /// Input rejected.
    Rejected,
    /// No feasible solution.
    Infeasible,
    /// Ended by a signal.
    Signal(u8),
}

impl Exit {
    /// The status as a number.
    pub const fn code(self) -> u8 {
        match self {
            Self::Done => 0,
            Self::Failed => 1,
            Self::Usage => 2,
            Self::Rejected => 3,
            Self::Infeasible => 4,
            Self::Signal(n) => 128 + n,
        }
    }
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> Self {
        exit.code().into()
    }
}

/// Why a command ended early. Without a message there is nothing to say.
#[derive(Debug)]
pub(super) struct Failure {
    pub(super) exit: Exit,
    pub(super) message: Option<String>,
}

impl Failure {
    pub(super) fn new(exit: Exit, message: impl Into<String>) -> Self {
        Self { exit, message: Some(message.into()) }
    }
}

impl From<std::io::Error> for Failure {
    /// A reader that stops early is a quiet end.
    fn from(error: std::io::Error) -> Self {
        if error.kind() == std::io::ErrorKind::BrokenPipe {
            return Self { exit: Exit::Done, message: None };
        }
        Self::new(Exit::Failed, error.to_string())
    }
}

impl From<serde_json::Error> for Failure {
    fn from(error: serde_json::Error) -> Self {
        match error.io_error_kind() {
            Some(kind) => std::io::Error::from(kind).into(),
            None => Self::new(Exit::Failed, error.to_string()),
        }
    }
}

impl From<BookError> for Failure {
    fn from(error: BookError) -> Self {
        let exit = match error {
            BookError::Unknown { .. } | BookError::WhichBasis { .. } => Exit::Usage,
            BookError::Awarded { .. }
            | BookError::AwardedRate { .. }
            | BookError::Delivered { .. } => Exit::Rejected,
            _ => Exit::Failed,
        };
        Self::new(exit, error.to_string())
    }
}

impl From<StudyError> for Failure {
    fn from(error: StudyError) -> Self {
        let exit = match error {
            StudyError::Book(error) => return error.into(),
            StudyError::Refused { .. } => Exit::Rejected,
            StudyError::Unknown { .. } => Exit::Usage,
            _ => Exit::Failed,
        };
        Self::new(exit, error.to_string())
    }
}

impl From<Refusal> for Failure {
    fn from(refusal: Refusal) -> Self {
        Self::new(Exit::Rejected, refusal.to_string())
    }
}
