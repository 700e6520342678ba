//! The first sheet of an XLSX workbook as rows. Numbers stay numbers: they are written out to the last digit.

use std::io::{Cursor, Read as _};

use calamine::{Cell, DataRef, Reader as _, Xlsx, XlsxError};
use chrono::{DurationRound as _, NaiveTime, TimeDelta};

use super::Decimals;
use super::recognise::Recognised;
use super::rows::{MOST_COLUMNS, ReadError, Row};
use super::source::Source;

/// Largest workbook (bytes); it is packed, and unpacks to many times that.
const LARGEST: u64 = 128 << 20;
/// Most characters of all cells of a sheet together.
const MOST_TEXT: usize = 1 << 30;

/// A sheet, read at once: its cells end to end.
pub(super) struct Sheet {
    name: String,
    text: String,
    /// Row and column from 0, where the cell's text ends, and whether it is a spreadsheet error.
    cells: Vec<(u32, u16, usize, bool)>,
    columns: usize,
    at: usize,
    pub(super) decimals: Decimals,
}

impl Sheet {
    /// Reads the first sheet.
    pub(super) fn open(source: Source) -> Result<Self, ReadError> {
        let file = source.name.clone();
        let mut bytes = Vec::new();
        source
            .into_reader(LARGEST)
            .read_to_end(&mut bytes)
            .map_err(|error| ReadError::of_io(error, &file, 1))?;
        let unread = |error: XlsxError| ReadError::Unfit {
            line: 1,
            why: format!("is not a workbook that can be read ({error}); save it as .xlsx or CSV"),
        };
        let mut book = Xlsx::new(Cursor::new(bytes)).map_err(unread)?;
        let Some(name) = book.sheet_names().first().cloned() else {
            return Err(ReadError::Unfit { line: 1, why: "has no sheet".to_owned() });
        };
        let mut sheet = Self {
            name: name.clone(),
            text: String::new(),
            cells: Vec::new(),
            columns: 0,
            at: 0,
            decimals: Decimals::POINT,
        };
        let mut cells = book.worksheet_cells_reader(&name).map_err(unread)?;
        while let Some(cell) = cells.next_cell().map_err(unread)? {
            sheet.add(&cell)?;
        }
        Ok(sheet)
    }

    fn add(&mut self, cell: &Cell<DataRef<'_>>) -> Result<(), ReadError> {
        let (row, column) = cell.get_position();
        let line = u64::from(row) + 1;
        let mut is_error = false;
        let start = self.text.len();
        match cell.get_value() {
            DataRef::Empty => return Ok(()),
            DataRef::Int(number) => self.text.push_str(&number.to_string()),
            DataRef::Float(number) => self.text.push_str(&number.to_string()),
            DataRef::SharedString(text) => self.text.push_str(text),
            DataRef::Bool(flag) => self.text.push_str(if *flag { "true" } else { "false" }),
            DataRef::String(text) | DataRef::DateTimeIso(text) | DataRef::DurationIso(text) => {
                self.text.push_str(text);
            }
            DataRef::DateTime(time) => {
                let second = TimeDelta::seconds(1);
                match time.as_datetime().and_then(|t| t.duration_round(second).ok()) {
                    Some(t) if t.time() == NaiveTime::MIN => {
                        self.text.push_str(&t.date().to_string());
                    }
                    Some(t) => self.text.push_str(&t.format("%Y-%m-%dT%H:%M:%S").to_string()),
                    None => self.text.push_str(&time.as_f64().to_string()),
                }
            }
            DataRef::Error(error) => {
                is_error = true;
                self.text.push_str(&error.to_string());
            }
        }
        if self.text[start..].trim().is_empty() {
            self.text.truncate(start);
            return Ok(());
        }
        let place = u16::try_from(column).ok().filter(|c| usize::from(*c) < MOST_COLUMNS);
        let Some(place) = place else {
            let why =
                format!("has a cell in column {}; at most {MOST_COLUMNS} are read", column + 1);
            return Err(ReadError::Unfit { line, why });
        };
        if self.text.len() > MOST_TEXT {
            let why = "holds more than 1 GiB of text; split it".to_owned();
            return Err(ReadError::Unfit { line, why });
        }
        self.cells.push((row, place, self.text.len(), is_error));
        Ok(())
    }

    /// The header: the first row that is not blank.
    pub(super) fn header(&mut self) -> Result<Row, ReadError> {
        self.columns = 0;
        let mut header = Row::default();
        if !self.next(&mut header) {
            let why = "its first sheet is empty".to_owned();
            return Err(ReadError::Unfit { line: 1, why });
        }
        self.columns = header.cells().len();
        Ok(header)
    }

    /// The next row that is not blank, filled up to the header's width; false at the end.
    pub(super) fn next(&mut self, row: &mut Row) -> bool {
        let Some((number, ..)) = self.cells.get(self.at).copied() else { return false };
        row.begin(u64::from(number) + 1);
        while let Some((_, column, end, is_error)) =
            self.cells.get(self.at).copied().filter(|(row, ..)| *row == number)
        {
            let start = self.at.checked_sub(1).map_or(0, |before| self.cells[before].2);
            while row.cells().len() < usize::from(column) {
                row.push("");
            }
            if is_error {
                row.unread.push((row.cells().len(), "is a spreadsheet error; mend the formula"));
            }
            row.push(&self.text[start..end]);
            self.at += 1;
        }
        while row.cells().len() < self.columns {
            row.push("");
        }
        true
    }

    pub(super) fn recognised(&self) -> Recognised {
        Recognised::Workbook { sheet: self.name.clone() }
    }
}
