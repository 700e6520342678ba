//! A line that is typed: the filter of the fleet, a value of the basis, the reason of an award.

use tui_input::{Input, InputRequest};

use super::action::Place;
use super::keys::Key;

/// What a line is typed for.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Of {
    /// The filter of the fleet.
    Filter,
    /// The assumption under the cursor.
    Value,
    /// The award of a bid of a lot.
    Reason {
        /// The lot.
        lot: String,
        /// The bid.
        bid: String,
    },
}

/// A line while it is typed.
#[derive(Debug)]
pub(super) struct Entry {
    pub(super) of: Of,
    pub(super) input: Input,
}

impl Entry {
    /// An empty line.
    pub(super) fn new(of: Of) -> Self {
        Self { of, input: Input::default() }
    }

    /// A filter, as it stands.
    pub(super) fn filter(text: String) -> Self {
        Self { of: Of::Filter, input: Input::new(text) }
    }

    /// Where its keys are found.
    pub(super) fn place(&self) -> Place {
        match self.of {
            Of::Filter => Place::Filter,
            Of::Value => Place::Value,
            Of::Reason { .. } => Place::Reason,
        }
    }

    /// What was typed.
    pub(super) fn text(&self) -> &str {
        self.input.value()
    }

    /// Types text in: control characters and what is beyond any sensible length are left out.
    pub(super) fn paste(&mut self, text: &str) {
        for c in text.chars().filter(|c| !c.is_control()).take(200) {
            self.input.handle(InputRequest::InsertChar(c));
        }
    }

    /// Does what a key does to a line of text; says whether it did anything.
    pub(super) fn key(&mut self, key: Key) -> bool {
        let request = edit(key);
        request.is_some_and(|request| {
            self.input.handle(request);
            true
        })
    }
}

/// What a key does to a line of text.
fn edit(key: Key) -> Option<InputRequest> {
    use ratatui::crossterm::event::KeyCode;
    if let Some(c) = key.typed() {
        return Some(InputRequest::InsertChar(c));
    }
    match (key.code, key.modifiers.is_empty()) {
        (KeyCode::Backspace, true) => Some(InputRequest::DeletePrevChar),
        (KeyCode::Delete, true) => Some(InputRequest::DeleteNextChar),
        (KeyCode::Left, true) => Some(InputRequest::GoToPrevChar),
        (KeyCode::Right, true) => Some(InputRequest::GoToNextChar),
        (KeyCode::Home, true) => Some(InputRequest::GoToStart),
        (KeyCode::End, true) => Some(InputRequest::GoToEnd),
        _ => None,
    }
}
