//! Text for the clipboard of the terminal: the sequence that hands it over (OSC 52), with its limit.
//!
//! A terminal does not answer whether it took the text.

use base64::Engine as _;
use base64::engine::general_purpose::STANDARD;

/// Most bytes of text that are handed over: what terminals with the tightest buffer still take.
pub const MOST: usize = 56_000;

/// How the terminal is reached.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Clipboard {
    /// It takes no text from programs.
    None,
    /// Directly.
    #[default]
    Direct,
    /// Through tmux, which hands on what is wrapped for it.
    Tmux,
}

impl Clipboard {
    /// What `TERM` and `TMUX` say.
    pub fn of(term: &str, in_tmux: bool) -> Self {
        match term {
            "" | "dumb" | "linux" => Self::None,
            _ if in_tmux => Self::Tmux,
            _ => Self::Direct,
        }
    }

    /// What is to be written, so that the text is copied.
    ///
    /// # Errors
    /// Why it cannot be copied.
    pub fn sequence(self, text: &str) -> Result<String, String> {
        if self == Self::None {
            return Err("Not copied: this terminal takes no text from programs.".to_owned());
        }
        if text.len() > MOST {
            let (long, most) = (text.len().div_ceil(1000), MOST / 1000);
            return Err(format!(
                "Not copied: {long} kB is more than the {most} kB that terminals take."
            ));
        }
        let sequence = format!("\u{1b}]52;c;{}\u{7}", STANDARD.encode(text));
        Ok(match self {
            Self::Tmux => {
                let inner = sequence.replace('\u{1b}', "\u{1b}\u{1b}");
                format!("\u{1b}Ptmux;{inner}\u{1b}\\")
            }
            _ => sequence,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// "A = 1" in base64 (RFC 4648): QSA9IDE=.
    #[test]
    fn text_is_handed_over_as_the_terminal_wants_it() {
        let direct = Clipboard::Direct.sequence("A = 1").unwrap();
        assert!(direct.starts_with("\u{1b}]52;c;QSA9IDE="), "{direct:?}");
        let tmux = Clipboard::Tmux.sequence("A = 1").unwrap();
        assert!(tmux.starts_with("\u{1b}Ptmux;\u{1b}\u{1b}]52;c;QSA9IDE="), "{tmux:?}");
        assert!(tmux.ends_with("\u{1b}\\"));
        assert!(Clipboard::None.sequence("A").unwrap_err().contains("Not copied"));
        let long = "x".repeat(MOST + 1);
        assert!(Clipboard::Direct.sequence(&long).unwrap_err().contains("Not copied"));
    }

    #[test]
    fn the_environment_says_how() {
        assert_eq!(Clipboard::of("xterm-256color", false), Clipboard::Direct);
        assert_eq!(Clipboard::of("tmux-256color", true), Clipboard::Tmux);
        assert_eq!(Clipboard::of("linux", false), Clipboard::None);
    }
}
