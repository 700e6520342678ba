//! How results are written: text tables for people, CSV and JSON for programs. One buffered handle to standard
//! output; a reader that stops early ends the program quietly.

use std::borrow::Cow;
use std::io::{self, BufWriter, Write as _};

use serde::Serialize;
use serde_json::{Map, Value};
use unicode_width::UnicodeWidthStr as _;

use super::args::Format;
use super::exit::Failure;
use crate::exchange::{Letter, visible as clean};
use crate::study::Document;
use crate::study::figures::{figure, group};

/// Writes results to standard output and problems to standard error.
pub(super) struct Printer {
    pub(super) format: Format,
    out: BufWriter<io::Stdout>,
}

/// One column of a text table.
#[derive(Clone, Debug)]
pub(super) struct TextColumn {
    pub(super) key: &'static str,
    pub(super) heading: String,
    pub(super) unit: String,
    pub(super) places: usize,
}

impl TextColumn {
    /// The column of a key, as the table of figures has it.
    pub(super) fn of(key: &'static str, currency: &str) -> Self {
        let figure = figure(key);
        let unit = figure.map_or("", |f| f.unit);
        Self {
            key,
            heading: figure.map_or(key, |f| f.heading).to_owned(),
            unit: unit.replace("money", currency),
            places: figure.map_or(2, |f| f.places),
        }
    }
    /// A column that is called as its key.
    pub(super) fn plain(key: &'static str) -> Self {
        Self { key, heading: key.to_owned(), unit: String::new(), places: 0 }
    }
    /// Several columns that are called as their keys.
    pub(super) fn plain_list(keys: &[&'static str]) -> Vec<Self> {
        keys.iter().map(|key| Self::plain(key)).collect()
    }
    /// Several columns.
    pub(super) fn list(keys: &[&'static str], currency: &str) -> Vec<Self> {
        keys.iter().map(|key| Self::of(key, currency)).collect()
    }
}

impl Printer {
    pub(super) fn new(format: Format) -> Self {
        Self { format, out: BufWriter::with_capacity(1 << 16, io::stdout()) }
    }

    pub(super) fn flush(&mut self) -> io::Result<()> {
        self.out.flush()
    }

    /// Writes text as it is.
    pub(super) fn text(&mut self, text: &str) -> io::Result<()> {
        self.out.write_all(text.as_bytes())
    }

    /// Writes a line.
    pub(super) fn line(&mut self, text: impl AsRef<str>) -> io::Result<()> {
        self.text(&clean(text.as_ref()))?;
        self.text("\n")
    }

    /// Writes a letter as text.
    pub(super) fn letter(&mut self, letter: &Letter) -> io::Result<()> {
        self.text(&letter.to_text())
    }

    /// Says something on standard error; that nobody listens there is no reason to fail.
    #[expect(clippy::unused_self, reason = "the printer is the one who speaks")]
    pub(super) fn complain(&self, text: &str) {
        let mut lines = String::new();
        for line in text.lines() {
            lines.push_str(&clean(line));
            lines.push('\n');
        }
        let _ = io::stderr().lock().write_all(lines.as_bytes());
    }

    /// Writes one JSON document.
    pub(super) fn json(&mut self, document: &impl Serialize) -> Result<(), Failure> {
        serde_json::to_writer(&mut self.out, &Document::of(document))?;
        self.out.write_all(b"\n")?;
        Ok(())
    }

    /// Writes rows as CSV: keys as header, lists joined by spaces, text that a spreadsheet would take for a
    /// formula led by an apostrophe.
    pub(super) fn csv<R: Serialize>(
        &mut self,
        header: &[&str],
        rows: impl Iterator<Item = R>,
    ) -> Result<(), Failure> {
        let mut csv = csv::Writer::from_writer(&mut self.out);
        csv.write_record(header).map_err(unwritten)?;
        for row in rows {
            let row = object(&row)?;
            let cells = header.iter().map(|key| row.get(*key).map_or(String::new(), cell));
            csv.write_record(cells).map_err(unwritten)?;
        }
        csv.flush()?;
        Ok(())
    }

    /// Width of a cell as it is shown.
    pub(super) fn width(cell: &str) -> usize {
        let shown = clean(cell);
        if shown.is_ascii() { shown.len() } else { shown.width() }
    }

    /// Writes a line of words in columns of some widths; the last is as wide as it is.
    pub(super) fn words<const N: usize>(
        &mut self,
        cells: [&str; N],
        widths: [usize; N],
    ) -> io::Result<()> {
        let mut line = String::new();
        for (at, (cell, width)) in cells.into_iter().zip(widths).enumerate() {
            line.push_str(cell);
            if at + 1 < N {
                line.extend(std::iter::repeat_n(' ', width.saturating_sub(Self::width(cell)) + 2));
            }
        }
        self.line(line.trim_end())
    }

    /// Begins lines of words as CSV, as [`Printer::csv`] writes them.
    pub(super) fn csv_lines(&mut self) -> CsvLines<'_> {
        CsvLines(csv::Writer::from_writer(&mut self.out))
    }

    /// Writes rows as a text table with headings and units.
    pub(super) fn table<R: Serialize>(
        &mut self,
        columns: &[TextColumn],
        rows: impl Iterator<Item = R>,
    ) -> Result<(), Failure> {
        let mut lines: Vec<Vec<(String, bool)>> = Vec::new();
        lines.push(columns.iter().map(|c| (c.heading.clone(), false)).collect());
        lines.push(columns.iter().map(|c| (c.unit.clone(), false)).collect());
        for row in rows {
            let row = object(&row)?;
            let cells = columns.iter().map(|c| written(row.get(c.key), c));
            lines.push(cells.collect());
        }
        let right: Vec<bool> =
            (0..columns.len()).map(|c| lines.iter().skip(2).any(|line| line[c].1)).collect();
        let width = |c: usize| lines.iter().map(|line| line[c].0.width()).max().unwrap_or(0);
        let widths: Vec<usize> = (0..columns.len()).map(width).collect();
        for line in &lines {
            if line.iter().all(|(cell, _)| cell.is_empty()) {
                continue;
            }
            let mut text = String::new();
            for (c, (cell, _)) in line.iter().enumerate() {
                let pad = " ".repeat(widths[c].saturating_sub(cell.width()));
                if c > 0 {
                    text.push_str("  ");
                }
                if right[c] {
                    text.push_str(&pad);
                    text.push_str(cell);
                } else {
                    text.push_str(cell);
                    text.push_str(&pad);
                }
            }
            self.line(text.trim_end())?;
        }
        Ok(())
    }
}

/// Lines of words as CSV.
pub(super) struct CsvLines<'a>(csv::Writer<&'a mut BufWriter<io::Stdout>>);

impl CsvLines<'_> {
    /// Writes a line.
    pub(super) fn line<const N: usize>(&mut self, cells: [&str; N]) -> Result<(), Failure> {
        for cell in cells {
            self.0.write_field(defused(cell).as_bytes()).map_err(unwritten)?;
        }
        self.0.write_record(None::<&[u8]>).map_err(unwritten)
    }

    /// Writes out what is held back.
    pub(super) fn finish(mut self) -> io::Result<()> {
        self.0.flush()
    }
}

/// Why a line of CSV could not be written.
fn unwritten(error: csv::Error) -> Failure {
    match error.into_kind() {
        csv::ErrorKind::Io(error) => error.into(),
        other => Failure::new(super::Exit::Failed, format!("{other:?}")),
    }
}

/// Text that a spreadsheet would take for a formula, led by an apostrophe.
fn defused(text: &str) -> Cow<'_, str> {
    if text.starts_with(['=', '+', '-', '@', '\t', '\r', '−']) {
        Cow::Owned(format!("'{text}"))
    } else {
        Cow::Borrowed(text)
    }
}

/// A row as an object.
fn object(row: &impl Serialize) -> Result<Map<String, Value>, Failure> {
    match serde_json::to_value(row)? {
        Value::Object(map) => Ok(map),
        other => Err(Failure::new(super::Exit::Failed, format!("not a row: {other}"))),
    }
}

/// A cell of a CSV file.
fn cell(value: &Value) -> String {
    match value {
        Value::Null => String::new(),
        Value::String(text) => defused(text).into_owned(),
        Value::Array(list) => list.iter().map(cell).collect::<Vec<_>>().join(" "),
        other => other.to_string(),
    }
}

/// A cell of a text table, and whether it is a number.
fn written(value: Option<&Value>, column: &TextColumn) -> (String, bool) {
    match value {
        None | Some(Value::Null) => ("–".to_owned(), false),
        Some(Value::Number(number)) => {
            let number = number.as_f64().unwrap_or(0.0);
            let plain = column.key.ends_with("year") || column.key == "year_made";
            let text = if plain { format!("{number}") } else { group(number, column.places) };
            (text, true)
        }
        Some(Value::String(text)) => (clean(text).into_owned(), false),
        Some(Value::Bool(yes)) => ((if *yes { "yes" } else { "no" }).to_owned(), false),
        Some(Value::Array(list)) => {
            (list.iter().map(|v| written(Some(v), column).0).collect::<Vec<_>>().join(" "), false)
        }
        Some(Value::Object(_)) => ("…".to_owned(), false),
    }
}
