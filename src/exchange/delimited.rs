//! Delimited text: decoded, split into rows and cells, row by row and bounded.

use std::io::{self, Read};

use csv::{ByteRecord, Reader, ReaderBuilder};
use encoding_rs::{CoderResult, Decoder, UTF_16BE, UTF_16LE, WINDOWS_1252};

use super::Decimals;
use super::recognise::{Delimiter, Encoding, Hints, Recognised};
use super::rows::{MOST_COLUMNS, ReadError, Row};
use super::source::{HEAD, LARGEST, Source, unfit};

/// Longest row (bytes).
const LONGEST_ROW: usize = 1 << 20;
/// What the splitter takes from the source at a time (bytes).
const BUFFER: usize = 1 << 16;

/// An open text file.
pub(super) struct Text {
    reader: Reader<RowGuard>,
    record: ByteRecord,
    name: String,
    delimiter: Delimiter,
    /// None while everything was ASCII, which reads the same in UTF-8 and Windows-1252.
    encoding: Option<Encoding>,
    pub(super) decimals: Decimals,
}

impl Text {
    /// Opens a text file and reads its header.
    pub(super) fn open(
        mut source: Source,
        hints: Hints,
        holds_numbers: &dyn Fn(usize, &str) -> bool,
    ) -> Result<(Self, Row), ReadError> {
        let is_cut = source.head.len() == HEAD;
        let mark = Encoding::of_mark(&source.head);
        source.head.drain(..mark.map_or(0, |(_, length)| length));
        let encoding = hints.encoding.or(mark.map(|(encoding, _)| encoding));
        let wide = match encoding {
            Some(Encoding::Utf16Le) => Some(UTF_16LE),
            Some(Encoding::Utf16Be) => Some(UTF_16BE),
            _ => None,
        };
        let head = match wide {
            Some(wide) => {
                wide.decode_without_bom_handling(&source.head).0.into_owned().into_bytes()
            }
            None => source.head.clone(),
        };
        let delimiter = hints.delimiter.unwrap_or_else(|| Delimiter::of_header(&head));
        let decimals = match hints.decimal {
            Some(sign) => Decimals::of(sign),
            None => weigh(&head, is_cut, delimiter, holds_numbers),
        };
        let name = source.name.clone();
        let bytes = source.into_reader(LARGEST);
        let inner: Box<dyn Read + Send> = match wide {
            Some(wide) => Box::new(Utf16::new(bytes, wide.new_decoder_without_bom_handling())),
            None => Box::new(bytes),
        };
        let mut text = Self {
            reader: splitter(delimiter).from_reader(RowGuard::new(inner)),
            record: ByteRecord::new(),
            name,
            delimiter,
            encoding,
            decimals,
        };
        let mut header = Row::default();
        let unfit = |why: String| ReadError::Unfit { line: 1, why };
        loop {
            if !text.next(&mut header)? {
                return Err(unfit("holds no header; its first row names the columns".to_owned()));
            }
            if !header.is_blank() {
                break;
            }
        }
        if header.cells().len() > MOST_COLUMNS {
            let columns = header.cells().len();
            return Err(unfit(format!("has {columns} columns; at most {MOST_COLUMNS} are read")));
        }
        Ok((text, header))
    }

    /// Reads the next row; false at the end.
    pub(super) fn next(&mut self, row: &mut Row) -> Result<bool, ReadError> {
        self.reader.get_mut().taken = 0;
        let line = self.reader.position().line();
        match self.reader.read_byte_record(&mut self.record) {
            Ok(true) => {}
            Ok(false) => return Ok(false),
            Err(error) => {
                let error = match error.into_kind() {
                    csv::ErrorKind::Io(error) => error,
                    other => unfit(format!("cannot be split into rows: {other:?}")),
                };
                return Err(ReadError::of_io(error, &self.name, line));
            }
        }
        // Blank lines before a row are passed over unseen, so its line is counted back from its end: past the line
        // end behind it, and those inside its quotes.
        let (end, guard) = (self.reader.position(), self.reader.get_ref());
        let is_closed = end.byte() < guard.given || guard.last == b'\n';
        let inside = self.record.as_slice().split(|byte| *byte == b'\n').skip(1).count() as u64;
        row.begin(end.line().saturating_sub(u64::from(is_closed) + inside).max(1));
        for (at, cell) in self.record.iter().enumerate() {
            decode(&mut self.encoding, at, cell, row);
        }
        Ok(true)
    }

    /// Bytes read so far.
    pub(super) fn bytes(&self) -> u64 {
        self.reader.position().byte()
    }

    pub(super) fn recognised(&self) -> Recognised {
        Recognised::Text {
            delimiter: self.delimiter,
            decimal: self.decimals.sign(),
            encoding: self.encoding.unwrap_or(Encoding::Utf8),
        }
    }
}

/// Adds a cell to a row. The first cell beyond ASCII tells UTF-8 from Windows-1252.
fn decode(encoding: &mut Option<Encoding>, at: usize, cell: &[u8], row: &mut Row) {
    if *encoding == Some(Encoding::Windows1252) {
        row.push(&WINDOWS_1252.decode_without_bom_handling(cell).0);
        return;
    }
    match std::str::from_utf8(cell) {
        Ok(text) => {
            if encoding.is_none() && !text.is_ascii() {
                *encoding = Some(Encoding::Utf8);
            }
            row.push(text);
        }
        Err(_) if encoding.is_none() => {
            *encoding = Some(Encoding::Windows1252);
            row.push(&WINDOWS_1252.decode_without_bom_handling(cell).0);
        }
        Err(_) => {
            row.push(&String::from_utf8_lossy(cell));
            row.unread.push((at, "is not UTF-8 as the rest of the file; save the file as UTF-8"));
        }
    }
}

fn splitter(delimiter: Delimiter) -> ReaderBuilder {
    let mut builder = ReaderBuilder::new();
    builder.delimiter(delimiter.byte()).has_headers(false).flexible(true).buffer_capacity(BUFFER);
    builder
}

/// The decimal sign that the numbers of a file's head tell.
fn weigh(
    head: &[u8],
    is_cut: bool,
    delimiter: Delimiter,
    holds_numbers: &dyn Fn(usize, &str) -> bool,
) -> Decimals {
    let mut rows: Vec<ByteRecord> =
        splitter(delimiter).from_reader(head).byte_records().filter_map(Result::ok).collect();
    if is_cut {
        rows.pop();
    }
    let is_blank = |row: &ByteRecord| row.iter().all(|cell| cell.trim_ascii().is_empty());
    let mut rows = rows.iter().skip_while(|row| is_blank(row));
    let Some(header) = rows.next() else { return Decimals::undecided(delimiter) };
    let numeric: Vec<bool> = header
        .iter()
        .enumerate()
        .map(|(at, name)| holds_numbers(at, String::from_utf8_lossy(name).trim()))
        .collect();
    let numbers = rows.flat_map(|row| {
        row.iter().zip(&numeric).filter(|(_, numeric)| **numeric).map(|(cell, _)| cell)
    });
    Decimals::undecided(delimiter).weigh(numbers.filter_map(|cell| std::str::from_utf8(cell).ok()))
}

/// Gives every line one kind of end (CR LF and a lone CR become LF), so that lines count as an editor counts them;
/// and stops at a row that never ends: an open quote would swallow the file.
struct RowGuard {
    inner: Box<dyn Read + Send>,
    /// Bytes given since the row began.
    taken: usize,
    /// Bytes given in all.
    given: u64,
    /// The byte given last.
    last: u8,
    /// Whether a CR came last, whose LF may follow.
    after_cr: bool,
}

impl RowGuard {
    fn new(inner: Box<dyn Read + Send>) -> Self {
        Self { inner, taken: 0, given: 0, last: b'\n', after_cr: false }
    }

    /// Mends the line ends of what was read; the length that is left.
    fn one_line_end(&mut self, bytes: &mut [u8]) -> usize {
        let begins_amid = std::mem::replace(&mut self.after_cr, bytes.last() == Some(&b'\r'));
        let first = usize::from(begins_amid && bytes.first() == Some(&b'\n'));
        let (mut from, mut to) = match bytes.iter().position(|byte| *byte == b'\r') {
            _ if first == 1 => (1, 0),
            Some(at) => (at, at),
            None => return bytes.len(),
        };
        while from < bytes.len() {
            let byte = bytes[from];
            bytes[to] = if byte == b'\r' { b'\n' } else { byte };
            from += if byte == b'\r' && bytes.get(from + 1) == Some(&b'\n') { 2 } else { 1 };
            to += 1;
        }
        to
    }
}

impl Read for RowGuard {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        if self.taken > LONGEST_ROW {
            return Err(unfit("a row is longer than 1 MiB; is a quote left open?"));
        }
        loop {
            let read = self.inner.read(buffer)?;
            let left = self.one_line_end(&mut buffer[..read]);
            if left == 0 && read > 0 {
                continue;
            }
            self.taken += left;
            self.given += left as u64;
            self.last = buffer[..left].last().copied().unwrap_or(self.last);
            return Ok(left);
        }
    }
}

/// UTF-16 as UTF-8.
struct Utf16<R> {
    inner: R,
    decoder: Decoder,
    raw: Box<[u8]>,
    from: usize,
    to: usize,
    is_last: bool,
    is_done: bool,
}

impl<R: Read> Utf16<R> {
    fn new(inner: R, decoder: Decoder) -> Self {
        let raw = vec![0; BUFFER].into_boxed_slice();
        Self { inner, decoder, raw, from: 0, to: 0, is_last: false, is_done: false }
    }
}

impl<R: Read> Read for Utf16<R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        while !self.is_done {
            if self.from == self.to && !self.is_last {
                (self.from, self.to) = (0, self.inner.read(&mut self.raw)?);
                self.is_last = self.to == 0;
            }
            let raw = &self.raw[self.from..self.to];
            let (result, read, written, has_errors) =
                self.decoder.decode_to_utf8(raw, buffer, self.is_last);
            if has_errors {
                return Err(unfit("is not valid UTF-16; save it as UTF-8"));
            }
            self.from += read;
            self.is_done = self.is_last && result == CoderResult::InputEmpty;
            if written > 0 {
                return Ok(written);
            }
        }
        Ok(0)
    }
}
