//! What the terminal can show, found out once and passed down: colours, character set, chart marks.
//!
//! Owns the rules by which the environment decides; reads no environment itself, so that a test can fake one.

use super::clipboard::Clipboard;

/// How many colours may be used.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Colours {
    /// None at all: patterns, bold and reverse only.
    None,
    /// The sixteen of the terminal's own palette.
    #[default]
    Sixteen,
    /// The fixed 256.
    Many,
}

/// What the user asked for by `--color`.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum ColourWish {
    /// As the environment says.
    #[default]
    Auto,
    /// Colours, whatever the environment says.
    Always,
    /// No colours.
    Never,
}

/// The marks that charts are drawn with.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Marks {
    /// Eight dots in a cell.
    #[default]
    Braille,
    /// One dot in a cell.
    Dot,
}

/// What the terminal can show.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Caps {
    /// Colours.
    pub colours: Colours,
    /// Only the characters of ASCII.
    pub ascii: bool,
    /// Chart marks.
    pub marks: Marks,
    /// How text is handed to the terminal to be copied.
    pub clipboard: Clipboard,
}

impl Caps {
    /// What the environment and the two options say. `var` gives a variable of the environment.
    pub fn of(var: impl Fn(&str) -> Option<String>, wish: ColourWish, ascii: bool) -> Self {
        let set = |name: &str| var(name).filter(|value| !value.is_empty());
        let term = set("TERM").unwrap_or_default();
        let many = set("COLORTERM").is_some() || term.contains("256color");
        let able = if many { Colours::Many } else { Colours::Sixteen };
        let colours = match wish {
            ColourWish::Never => Colours::None,
            ColourWish::Auto if set("NO_COLOR").is_some() || term == "dumb" => Colours::None,
            ColourWish::Auto | ColourWish::Always => able,
        };
        let locale = ["LC_ALL", "LC_CTYPE", "LANG"].into_iter().find_map(set).unwrap_or_default();
        let utf8 = locale.to_lowercase().replace('-', "").contains("utf8");
        // The text console of Linux has 512 glyphs, and Braille is not among them.
        let marks = if term == "linux" { Marks::Dot } else { Marks::Braille };
        let clipboard = Clipboard::of(&term, set("TMUX").is_some());
        Self { colours, ascii: ascii || !utf8 || term == "dumb", marks, clipboard }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn caps(vars: &[(&str, &str)], wish: ColourWish, ascii: bool) -> Caps {
        let var = |name: &str| {
            vars.iter().find(|(n, _)| *n == name).map(|(_, value)| (*value).to_owned())
        };
        Caps::of(var, wish, ascii)
    }

    #[test]
    fn environment_decides_unless_told() {
        let utf8 = ("LANG", "de_DE.UTF-8");
        let xterm = ("TERM", "xterm-256color");
        let plain = caps(&[utf8, xterm], ColourWish::Auto, false);
        assert_eq!(plain, Caps { colours: Colours::Many, ..Caps::default() });
        let no_color = |value| [utf8, xterm, ("NO_COLOR", value)];
        assert_eq!(caps(&no_color("1"), ColourWish::Auto, false).colours, Colours::None);
        assert_eq!(caps(&no_color(""), ColourWish::Auto, false).colours, Colours::Many);
        assert_eq!(caps(&no_color("1"), ColourWish::Always, false).colours, Colours::Many);
        assert_eq!(caps(&[utf8, xterm], ColourWish::Never, false).colours, Colours::None);
        let dumb = caps(&[utf8, ("TERM", "dumb")], ColourWish::Auto, false);
        assert_eq!((dumb.colours, dumb.ascii), (Colours::None, true));
        assert_eq!(
            caps(&[utf8, ("TERM", "xterm")], ColourWish::Auto, false).colours,
            Colours::Sixteen
        );
    }

    #[test]
    fn ascii_where_the_locale_is_not_utf8() {
        let of = |vars: &[(&str, &str)]| caps(vars, ColourWish::Auto, false).ascii;
        assert!(of(&[]));
        assert!(of(&[("LC_ALL", "C"), ("LANG", "en_GB.UTF-8")]));
        assert!(!of(&[("LC_ALL", ""), ("LC_CTYPE", "C.utf8")]));
        assert!(caps(&[("LANG", "C.UTF-8")], ColourWish::Auto, true).ascii);
        let console = caps(&[("LANG", "C.UTF-8"), ("TERM", "linux")], ColourWish::Auto, false);
        assert_eq!(console.marks, Marks::Dot);
    }
}
