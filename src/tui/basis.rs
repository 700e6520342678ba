//! The basis screen: the assumptions, nudged by key. State here; steps in `nudge`, drawing in `draw`.

pub(super) mod draw;
mod nudge;
mod typed;

pub(super) use nudge::stepped;

use super::list::List;
use crate::engine::columns::{Basis, BasisSheet, Value};
use crate::study::Desk;

/// State of the screen.
#[derive(Debug, Default)]
pub(super) struct State {
    pub(super) list: List,
    /// The sheet as it is stored.
    sheet: Option<BasisSheet>,
    /// The values as they are stored, in the order of the columns.
    pub(super) stored: Vec<Value>,
    /// The values as they stand now.
    pub(super) draft: Vec<Value>,
    /// The values that the figures on the screens are of.
    effect: Vec<Value>,
    /// The draft could not be computed with.
    refused: bool,
    /// Storing was asked for and waits for the second key.
    pub(super) storing: bool,
}

/// Number of assumptions.
pub(super) fn len() -> usize {
    Basis::COLUMNS.len()
}

impl State {
    /// Takes the basis as it is stored.
    pub(super) fn open(&mut self, desk: &Desk) {
        self.stored = desk.sheet.basis.values();
        self.draft.clone_from(&self.stored);
        self.effect.clone_from(&self.stored);
        self.sheet = Some(desk.sheet.clone());
        // The first two say what the basis is called and in which money it is.
        self.list.cursor = 2;
    }

    /// Whether the basis differs from the stored one.
    pub(super) fn is_changed(&self) -> bool {
        self.draft != self.stored
    }

    /// Number of changed assumptions.
    pub(super) fn changes(&self) -> usize {
        self.draft.iter().zip(&self.stored).filter(|(draft, stored)| draft != stored).count()
    }

    /// A basis is stored now.
    pub(super) fn is_stored(&mut self, sheet: BasisSheet) {
        self.stored = sheet.basis.values();
        self.sheet = Some(sheet);
    }

    /// Whether the figures on the screens are of the draft.
    pub(super) fn is_in_effect(&self) -> bool {
        self.draft == self.effect
    }

    /// Whether the draft could not be computed with: the figures are of another basis.
    pub(super) fn is_refused(&self) -> bool {
        self.refused
    }

    /// The draft as a sheet.
    pub(super) fn sheet(&self) -> Option<BasisSheet> {
        let basis = Basis::from_values(&self.draft)?;
        Some(BasisSheet { basis, ..self.sheet.clone()? })
    }

    /// The draft was computed with.
    pub(super) fn in_effect(&mut self, basis: &Basis) {
        self.effect = basis.values();
        self.refused = false;
    }

    /// The draft could not be computed with.
    pub(super) fn refused(&mut self) {
        self.refused = true;
    }

    /// Back to a basis that was computed with.
    pub(super) fn back_to(&mut self, basis: &Basis) {
        self.draft = basis.values();
        self.refused = false;
    }

    /// Moves the assumption under the cursor.
    ///
    /// # Errors
    /// Why it cannot be moved.
    pub(super) fn nudge(&mut self, desk: &Desk, steps: i32, large: bool) -> Result<(), String> {
        let at = self.list.cursor;
        let (Some(column), Some(stored)) = (Basis::COLUMNS.get(at), self.stored.get(at)) else {
            return Ok(());
        };
        self.draft[at] = nudge::moved(column, stored, &self.draft, at, desk, steps, large)?;
        Ok(())
    }

    /// Whether the assumption under the cursor can be typed.
    ///
    /// # Errors
    /// Why it cannot.
    pub(super) fn can_type(&self) -> Result<(), String> {
        match Basis::COLUMNS.get(self.list.cursor).map(|column| column.name) {
            Some("name" | "currency") | None => {
                Err("It is changed in the basis file only.".to_owned())
            }
            Some(_) => Ok(()),
        }
    }

    /// Sets the assumption under the cursor to what was typed; says whether that changed anything.
    ///
    /// # Errors
    /// Why it cannot be that.
    pub(super) fn set(&mut self, desk: &Desk, typed: &str) -> Result<bool, String> {
        let Some(column) = Basis::COLUMNS.get(self.list.cursor) else { return Ok(false) };
        let series: Vec<&str> = desk.series.iter().map(|series| series.name.as_str()).collect();
        let value = typed::read(column, typed, &series)?;
        let now = &mut self.draft[self.list.cursor];
        let changes = value.as_ref().is_some_and(|value| value != now);
        if let Some(value) = value {
            *now = value;
        }
        Ok(changes)
    }

    /// Puts the assumption under the cursor, or all, back as stored; says whether anything changed.
    pub(super) fn reset(&mut self, all: bool) -> bool {
        let before = self.draft.clone();
        if all {
            self.draft.clone_from(&self.stored);
        } else if let Some(stored) = self.stored.get(self.list.cursor) {
            self.draft[self.list.cursor] = stored.clone();
        }
        self.draft != before || (self.refused && self.draft != self.effect)
    }
}
