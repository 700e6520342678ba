//! Rows of a file, text and workbook alike: a header and cells with their line, decoded, not yet understood.

use std::io;

use super::problem::{FILE, Problems};
use super::recognise::{Encoding, Hints, Recognised};
use super::source::{Source, SourceError};
use super::{Decimals, delimited, workbook};

/// Most columns of a file.
pub(super) const MOST_COLUMNS: usize = 500;

/// One row. Kept by the reader of the file and filled anew for each row.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Row {
    /// Line of the file on which the row begins, from 1.
    pub line: u64,
    cells: Vec<String>,
    filled: usize,
    /// Cells that could not be read as text, with the reason.
    pub unread: Vec<(usize, &'static str)>,
}

impl Row {
    /// The cells.
    pub fn cells(&self) -> &[String] {
        &self.cells[..self.filled]
    }

    /// Whether every cell is blank.
    pub fn is_blank(&self) -> bool {
        self.unread.is_empty() && self.cells().iter().all(|cell| cell.trim().is_empty())
    }

    pub(super) fn begin(&mut self, line: u64) {
        self.line = line;
        self.filled = 0;
        self.unread.clear();
    }

    /// Adds a cell, its room used again.
    pub(super) fn push(&mut self, text: &str) {
        match self.cells.get_mut(self.filled) {
            Some(cell) => {
                cell.clear();
                cell.push_str(text);
            }
            None => self.cells.push(text.to_owned()),
        }
        self.filled += 1;
    }
}

/// Why a file ends before its end.
#[derive(Debug)]
pub enum ReadError {
    /// What is in it cannot be taken: a line and why.
    Unfit {
        /// The line.
        line: u64,
        /// Why, and what to do.
        why: String,
    },
    /// It cannot be read.
    Source(SourceError),
}

impl ReadError {
    /// Notes what is unfit as a problem of the file; a source that cannot be read stays an error.
    ///
    /// # Errors
    /// The source cannot be read.
    pub fn into_problem(self, problems: &mut Problems) -> Result<(), SourceError> {
        match self {
            Self::Unfit { line, why } => {
                problems.add(line, FILE, "", why);
                Ok(())
            }
            Self::Source(error) => Err(error),
        }
    }

    pub(super) fn of_io(error: io::Error, name: &str, line: u64) -> Self {
        if error.kind() == io::ErrorKind::InvalidData {
            Self::Unfit { line, why: error.to_string() }
        } else {
            Self::Source(SourceError::System { name: name.to_owned(), error })
        }
    }
}

enum Kind {
    Text(Box<delimited::Text>),
    Workbook(workbook::Sheet),
}

/// The rows of an open file.
pub struct Rows {
    kind: Kind,
    header: Row,
}

impl std::fmt::Debug for Rows {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Rows").field("header", &self.header).finish_non_exhaustive()
    }
}

impl Rows {
    /// Recognises a file and reads its header. `holds_numbers` says of a header cell whether the column below it
    /// holds numbers: those tell the decimal sign.
    ///
    /// # Errors
    /// The file is empty, binary, too large, or cannot be read.
    pub fn open(
        source: Source,
        hints: Hints,
        holds_numbers: &dyn Fn(usize, &str) -> bool,
    ) -> Result<Self, ReadError> {
        let unfit = |why: &str| Err(ReadError::Unfit { line: 1, why: why.to_owned() });
        let head = source.head.as_slice();
        if head.is_empty() {
            return unfit("is empty");
        }
        if head.starts_with(b"PK\x03\x04") {
            let mut sheet = workbook::Sheet::open(source)?;
            let header = sheet.header()?;
            return Ok(Self { kind: Kind::Workbook(sheet), header });
        }
        if head.starts_with(&[0xD0, 0xCF, 0x11, 0xE0]) {
            return unfit(
                "is an old workbook or a protected one; save it as .xlsx without a password, or as CSV",
            );
        }
        let mark = Encoding::of_mark(head);
        let wide = [mark.map(|(encoding, _)| encoding), hints.encoding]
            .iter()
            .any(|encoding| matches!(encoding, Some(Encoding::Utf16Le | Encoding::Utf16Be)));
        if !wide && head.contains(&0) {
            return unfit(
                "is a binary file, or UTF-16 without a byte-order mark; save it as CSV in UTF-8",
            );
        }
        let (text, header) = delimited::Text::open(source, hints, holds_numbers)?;
        Ok(Self { kind: Kind::Text(Box::new(text)), header })
    }

    /// The header.
    pub fn header(&self) -> &Row {
        &self.header
    }

    /// Reads the next row that is not blank; false at the end.
    ///
    /// # Errors
    /// The file cannot be read, or a row is too long.
    pub fn next(&mut self, row: &mut Row) -> Result<bool, ReadError> {
        loop {
            let more = match &mut self.kind {
                Kind::Text(text) => text.next(row)?,
                Kind::Workbook(sheet) => sheet.next(row),
            };
            if !more || !row.is_blank() {
                return Ok(more);
            }
        }
    }

    /// The decimal sign, decided so far.
    pub fn decimals(&mut self) -> &mut Decimals {
        match &mut self.kind {
            Kind::Text(text) => &mut text.decimals,
            Kind::Workbook(sheet) => &mut sheet.decimals,
        }
    }

    /// Bytes read so far; none of a workbook, which is read at once.
    pub fn bytes(&self) -> Option<u64> {
        match &self.kind {
            Kind::Text(text) => Some(text.bytes()),
            Kind::Workbook(_) => None,
        }
    }

    /// What the file was taken for. Final at the end of the file: a decimal sign or an encoding may show late.
    pub fn recognised(&self) -> Recognised {
        match &self.kind {
            Kind::Text(text) => text.recognised(),
            Kind::Workbook(sheet) => sheet.recognised(),
        }
    }
}
