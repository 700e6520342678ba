//! The rows that were not taken, as CSV with their reason, to be mended and imported again.

use std::borrow::Cow;
use std::io::Write;

/// A text that a spreadsheet would run as a formula, made harmless. Numbers stay numbers.
pub fn defused(cell: &str) -> Cow<'_, str> {
    if cell.starts_with(['=', '+', '-', '@', '\t', '\r']) && cell.trim().parse::<f64>().is_err() {
        Cow::Owned(format!("'{cell}"))
    } else {
        Cow::Borrowed(cell)
    }
}

/// Where rejected rows go.
pub struct Rejects<W: Write> {
    csv: csv::Writer<W>,
}

impl<W: Write> std::fmt::Debug for Rejects<W> {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Rejects").finish_non_exhaustive()
    }
}

impl<W: Write> Rejects<W> {
    /// Begins the file with the header of the rejected one, and two columns more: `line` and `why`.
    ///
    /// # Errors
    /// It cannot be written.
    pub fn begin(to: W, header: &[String]) -> std::io::Result<Self> {
        let csv = csv::WriterBuilder::new().flexible(true).from_writer(to);
        let mut rejects = Self { csv };
        rejects.write(header, "line", "why")?;
        Ok(rejects)
    }

    /// Adds a row.
    ///
    /// # Errors
    /// It cannot be written.
    pub fn add(&mut self, cells: &[String], line: u64, why: &str) -> std::io::Result<()> {
        self.write(cells, &line.to_string(), why)
    }

    fn write(&mut self, cells: &[String], line: &str, why: &str) -> std::io::Result<()> {
        for cell in cells.iter().map(String::as_str).chain([line, why]) {
            self.csv.write_field(defused(cell).as_bytes()).map_err(to_io)?;
        }
        self.csv.write_record(None::<&[u8]>).map_err(to_io)
    }

    /// Writes out what is held back.
    ///
    /// # Errors
    /// It cannot be written.
    pub fn finish(mut self) -> std::io::Result<()> {
        self.csv.flush()
    }
}

fn to_io(error: csv::Error) -> std::io::Error {
    match error.into_kind() {
        csv::ErrorKind::Io(error) => error,
        other => std::io::Error::other(format!("{other:?}")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn formulas_are_defused_and_numbers_stay() {
        let mut out = Vec::new();
        let cells = |c: &[&str]| c.iter().map(ToString::to_string).collect::<Vec<_>>();
        let mut rejects = Rejects::begin(&mut out, &cells(&["unit", "peak_kva"])).expect("begin");
        rejects.add(&cells(&["=1+1", "-5"]), 7, "is, \"odd\"").expect("add");
        rejects.finish().expect("finish");
        let text = String::from_utf8(out).expect("text");
        assert_eq!(text, "unit,peak_kva,line,why\n'=1+1,-5,7,\"is, \"\"odd\"\"\"\n");
    }
}
