//! Keys as data: what is pressed, how it is written for people.

use ratatui::crossterm::event::{KeyCode, KeyEvent, KeyModifiers};

/// A key with its modifiers.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Key {
    /// Which key.
    pub code: KeyCode,
    /// With which modifiers; Shift only where the character does not show it.
    pub modifiers: KeyModifiers,
}

impl Key {
    /// A key alone.
    pub const fn plain(code: KeyCode) -> Self {
        Self { code, modifiers: KeyModifiers::NONE }
    }
    /// A character.
    pub const fn char(c: char) -> Self {
        Self::plain(KeyCode::Char(c))
    }
    /// A character with Ctrl.
    pub const fn ctrl(c: char) -> Self {
        Self { code: KeyCode::Char(c), modifiers: KeyModifiers::CONTROL }
    }
    /// A key with Shift.
    pub const fn shift(code: KeyCode) -> Self {
        Self { code, modifiers: KeyModifiers::SHIFT }
    }

    /// The key of an event. Shift is dropped where the character or the code says it already.
    pub fn of(event: KeyEvent) -> Self {
        let mut modifiers =
            event.modifiers & (KeyModifiers::SHIFT | KeyModifiers::CONTROL | KeyModifiers::ALT);
        if matches!(event.code, KeyCode::Char(_) | KeyCode::BackTab) {
            modifiers.remove(KeyModifiers::SHIFT);
        }
        Self { code: event.code, modifiers }
    }

    /// The character that it types into a line of text.
    pub fn typed(self) -> Option<char> {
        match self.code {
            KeyCode::Char(c) if self.modifiers.is_empty() => Some(c),
            _ => None,
        }
    }

    /// How it is written for people; arrows in words where only ASCII can be shown.
    pub fn name(self, ascii: bool) -> String {
        let code = match self.code {
            KeyCode::Char(' ') => "Space".to_owned(),
            KeyCode::Char(c) => c.to_string(),
            KeyCode::Enter => "Enter".to_owned(),
            KeyCode::Esc => "Esc".to_owned(),
            KeyCode::Tab => "Tab".to_owned(),
            KeyCode::BackTab => "Shift-Tab".to_owned(),
            KeyCode::Backspace => "Backspace".to_owned(),
            KeyCode::Delete => "Del".to_owned(),
            KeyCode::Home => "Home".to_owned(),
            KeyCode::End => "End".to_owned(),
            KeyCode::PageUp => "PgUp".to_owned(),
            KeyCode::PageDown => "PgDn".to_owned(),
            KeyCode::Up => if ascii { "Up" } else { "↑" }.to_owned(),
            KeyCode::Down => if ascii { "Down" } else { "↓" }.to_owned(),
            KeyCode::Left => if ascii { "Left" } else { "←" }.to_owned(),
            KeyCode::Right => if ascii { "Right" } else { "→" }.to_owned(),
            KeyCode::F(n) => format!("F{n}"),
            other => format!("{other:?}"),
        };
        let mut name = String::new();
        for (modifier, word) in [
            (KeyModifiers::CONTROL, "Ctrl-"),
            (KeyModifiers::ALT, "Alt-"),
            (KeyModifiers::SHIFT, "Shift-"),
        ] {
            if self.modifiers.contains(modifier) {
                name.push_str(word);
            }
        }
        if self.modifiers.contains(KeyModifiers::CONTROL) {
            name.push_str(&code.to_uppercase());
        } else {
            name.push_str(&code);
        }
        name
    }
}
