//! What a file is, told from its first bytes: delimiter, decimal sign, encoding. Said to the reader, never silent.

use std::fmt;

use serde::Serialize;

/// What stands between the cells of a row.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Delimiter {
    /// `,`
    Comma,
    /// `;`
    Semicolon,
    /// The tab character.
    Tab,
}

impl Delimiter {
    /// The delimiters with their words.
    pub const WORDS: &'static [(&'static str, Self)] =
        &[("comma", Self::Comma), ("semicolon", Self::Semicolon), ("tab", Self::Tab)];

    pub(super) fn byte(self) -> u8 {
        match self {
            Self::Comma => b',',
            Self::Semicolon => b';',
            Self::Tab => b'\t',
        }
    }

    /// The delimiter of a header line: the one that stands in it most often outside quotes.
    pub(super) fn of_header(text: &[u8]) -> Self {
        let mut count = [0_usize; 3];
        let mut quoted = false;
        for byte in text {
            match byte {
                b'"' => quoted = !quoted,
                b'\n' | b'\r' if !quoted && count != [0; 3] => break,
                _ if quoted => {}
                byte => {
                    for ((_, delimiter), count) in Self::WORDS.iter().zip(&mut count) {
                        *count += usize::from(delimiter.byte() == *byte);
                    }
                }
            }
        }
        match count {
            [c, s, t] if s > c && s >= t => Self::Semicolon,
            [c, _, t] if t > c => Self::Tab,
            _ => Self::Comma,
        }
    }
}

/// The decimal sign of the numbers.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Decimal {
    /// `12.5`
    Point,
    /// `12,5`
    Comma,
}

impl Decimal {
    /// The decimal signs with their words.
    pub const WORDS: &'static [(&'static str, Self)] =
        &[("point", Self::Point), ("comma", Self::Comma)];
}

/// How characters are kept.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
pub enum Encoding {
    /// UTF-8 (plain ASCII too).
    #[serde(rename = "UTF-8")]
    Utf8,
    /// UTF-16, low byte first.
    #[serde(rename = "UTF-16LE")]
    Utf16Le,
    /// UTF-16, high byte first.
    #[serde(rename = "UTF-16BE")]
    Utf16Be,
    /// Windows-1252 (Latin-1 too).
    #[serde(rename = "Windows-1252")]
    Windows1252,
}

impl Encoding {
    /// The encodings with their words.
    pub const WORDS: &'static [(&'static str, Self)] = &[
        ("utf-8", Self::Utf8),
        ("utf-16le", Self::Utf16Le),
        ("utf-16be", Self::Utf16Be),
        ("windows-1252", Self::Windows1252),
    ];

    /// The encoding that a byte-order mark states, with the length of the mark.
    pub(super) fn of_mark(head: &[u8]) -> Option<(Self, usize)> {
        match head {
            [0xEF, 0xBB, 0xBF, ..] => Some((Self::Utf8, 3)),
            [0xFF, 0xFE, ..] => Some((Self::Utf16Le, 2)),
            [0xFE, 0xFF, ..] => Some((Self::Utf16Be, 2)),
            _ => None,
        }
    }
}

/// What the caller says about a file; it goes before what would be recognised.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Hints {
    /// The delimiter.
    pub delimiter: Option<Delimiter>,
    /// The decimal sign.
    pub decimal: Option<Decimal>,
    /// The encoding.
    pub encoding: Option<Encoding>,
}

/// What a file was taken for.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
#[serde(tag = "kind", rename_all = "lowercase")]
pub enum Recognised {
    /// Delimited text.
    Text {
        /// Between cells.
        delimiter: Delimiter,
        /// In numbers; none where no number told.
        decimal: Option<Decimal>,
        /// Of characters.
        encoding: Encoding,
    },
    /// A workbook.
    Workbook {
        /// The sheet that was read.
        sheet: String,
    },
    /// A TOML file.
    Toml,
}

impl fmt::Display for Delimiter {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Comma => "comma",
            Self::Semicolon => "semicolon",
            Self::Tab => "tab",
        })
    }
}

impl fmt::Display for Decimal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Point => "point",
            Self::Comma => "comma",
        })
    }
}

impl fmt::Display for Encoding {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Utf8 => "UTF-8",
            Self::Utf16Le => "UTF-16LE",
            Self::Utf16Be => "UTF-16BE",
            Self::Windows1252 => "Windows-1252",
        })
    }
}

impl fmt::Display for Recognised {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Text { delimiter, decimal, encoding } => {
                write!(f, "text, delimiter {delimiter}, ")?;
                match decimal {
                    Some(decimal) => write!(f, "decimal {decimal}, {encoding}"),
                    None => write!(f, "no decimals, {encoding}"),
                }
            }
            Self::Workbook { sheet } => {
                write!(f, "workbook, sheet {}", super::visible(sheet))
            }
            Self::Toml => f.write_str("TOML"),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn delimiter_of_a_header() {
        assert_eq!(Delimiter::of_header(b"unit,rated_kva\n1;2"), Delimiter::Comma);
        assert_eq!(Delimiter::of_header(b"\r\nunit;rated_kva\n1,5;2,5;"), Delimiter::Semicolon);
        assert_eq!(Delimiter::of_header(b"unit\trated_kva\n"), Delimiter::Tab);
        assert_eq!(Delimiter::of_header(b"\"a;b;c\",d\n"), Delimiter::Comma);
        assert_eq!(Delimiter::of_header(b"unit\n"), Delimiter::Comma);
    }
}
