//! What is wrong in a file, said by line, column, value and reason. Hostile text is made visible here.

use std::fmt;

use serde::Serialize;

use super::visible;

/// One thing that is wrong in a file. Prints as `FILE:LINE: column: value: why`.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Problem {
    /// The file, `-` for standard input.
    pub file: String,
    /// The line (of a workbook: the row), from 1.
    pub line: u64,
    /// The column by its name, `(row)` or `(file)` where it is about the whole.
    pub column: String,
    /// The value as it stands there, `(blank)` where there is none.
    pub value: String,
    /// Why, and what to do.
    pub why: String,
}

impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { file, line, column, value, why } = self;
        write!(f, "{}:{line}: {column}: {value}: {why}", visible(file))
    }
}

/// A problem's column where the whole row is meant.
pub const ROW: &str = "(row)";
/// A problem's column where the whole file is meant.
pub const FILE: &str = "(file)";

/// The problems of one file: the first thousand kept, and those of the file as a whole; all counted.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Problems {
    file: String,
    list: Vec<Problem>,
    count: u64,
}

impl Problems {
    /// How many are kept.
    pub const KEPT: usize = 1000;
    /// How many characters of a value are shown.
    const SHOWN: usize = 60;

    /// No problem yet.
    pub fn new(file: &str) -> Self {
        Self { file: file.to_owned(), list: Vec::new(), count: 0 }
    }

    /// Adds a problem. Values are cut and made visible.
    pub fn add(&mut self, line: u64, column: &str, value: &str, why: impl Into<String>) {
        self.count += 1;
        // What is wrong with the file as a whole is said whatever else is.
        if self.list.len() < Self::KEPT || column == FILE {
            self.list.push(Problem {
                file: self.file.clone(),
                line,
                column: cut(column),
                value: if value.trim().is_empty() { "(blank)".to_owned() } else { cut(value) },
                why: visible(&why.into()).into_owned(),
            });
        }
    }

    /// The first problems.
    pub fn list(&self) -> &[Problem] {
        &self.list
    }

    /// How many there are in all.
    pub fn count(&self) -> u64 {
        self.count
    }

    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.count == 0
    }
}

impl fmt::Display for Problems {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for problem in &self.list {
            writeln!(f, "{problem}")?;
        }
        match self.count - self.list.len() as u64 {
            0 => Ok(()),
            more => writeln!(f, "{}: and {more} more, {} in all", visible(&self.file), self.count),
        }
    }
}

fn cut(text: &str) -> String {
    match text.char_indices().nth(Problems::SHOWN) {
        Some((end, _)) => format!("{}…", visible(&text[..end])),
        None => visible(text).into_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_are_cut_and_visible() {
        let mut problems = Problems::new("a\u{1b}.csv");
        problems.add(7, "note", &"x\u{1b}[2J\u{202e}".repeat(30), "is odd");
        let text = problems.list()[0].to_string();
        assert!(text.starts_with("a␛.csv:7: note: x␛[2J␦x"), "{text}");
        assert!(text.ends_with("…: is odd"), "{text}");
        problems.add(8, "unit", "  ", "is required and blank");
        assert_eq!(
            problems.list()[1].to_string(),
            "a␛.csv:8: unit: (blank): is required and blank"
        );
    }

    #[test]
    fn the_first_thousand_then_a_count() {
        let mut problems = Problems::new("f.csv");
        for line in 0..1203 {
            problems.add(line, "c", "v", "w");
        }
        let text = problems.to_string();
        assert_eq!(text.lines().count(), 1001);
        assert!(text.ends_with("f.csv: and 203 more, 1203 in all\n"));
    }
}
