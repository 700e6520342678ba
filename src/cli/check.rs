//! `ironhum check`: everything doubtful in the book. A large fleet has millions of doubts: they are written as they are
//! found, after a first round that tells how wide they are.

use serde::ser::SerializeSeq as _;
use serde::{Serialize, Serializer};

use super::args::{Args, Format};
use super::book::{self, Opened};
use super::exit::{Exit, Failure};
use super::print::Printer;
use crate::book::Book;
use crate::study::check::{Doubt, each_doubt};
use crate::study::{StudyError, Watch};

const KEYS: [&str; 5] = ["subject", "key", "column", "kind", "what"];

/// The cells of a line.
fn cells(doubt: &Doubt) -> [&str; 5] {
    [doubt.subject, &doubt.key, doubt.column, doubt.kind.word(), &doubt.what]
}

/// What is asked.
struct Asked<'a> {
    book: &'a Book,
    basis: Option<&'a str>,
}

impl Asked<'_> {
    fn each(&self, each: &mut dyn FnMut(Doubt)) -> Result<(), StudyError> {
        each_doubt(self.book, self.basis, &Watch::default(), each)
    }

    /// Hands the doubts on until one of them fails.
    fn try_each<E>(&self, mut each: impl FnMut(&Doubt) -> Result<(), E>) -> Result<(), E>
    where
        E: From<StudyError>,
    {
        let (mut done, watch) = (Ok(()), Watch::default());
        let asked = each_doubt(self.book, self.basis, &watch, &mut |doubt| {
            if done.is_ok() {
                done = each(&doubt);
                if done.is_err() {
                    watch.stop();
                }
            }
        });
        done?;
        Ok(asked?)
    }
}

pub(super) fn check(args: &Args, printer: &mut Printer) -> Result<Exit, Failure> {
    let Opened { book, .. } = book::open_to_read(args)?;
    let asked = Asked { book: &book, basis: args.basis.as_deref() };
    let mut widths = KEYS.map(Printer::width);
    let mut count = 0_u64;
    asked.each(&mut |doubt| {
        count += 1;
        for (width, cell) in widths.iter_mut().zip(cells(&doubt)).take(KEYS.len() - 1) {
            *width = (*width).max(Printer::width(cell));
        }
    })?;
    match printer.format {
        Format::Json => printer.json(&Doubts { doubts: List(asked) })?,
        Format::Csv => {
            let mut lines = printer.csv_lines();
            lines.line(KEYS)?;
            asked.try_each(|doubt| lines.line(cells(doubt)))?;
            lines.finish()?;
        }
        Format::Text => {
            printer.words(KEYS, widths)?;
            asked.try_each(|doubt| printer.words(cells(doubt), widths).map_err(Failure::from))?;
            printer.line("")?;
            printer.line(format!("{count} doubtful points."))?;
        }
    }
    Ok(Exit::Done)
}

#[derive(Serialize)]
struct Doubts<'a> {
    doubts: List<'a>,
}

struct List<'a>(Asked<'a>);

/// A list that broke off, for the one reason or the other.
struct Broken<E>(E);

impl<E: serde::ser::Error> From<StudyError> for Broken<E> {
    fn from(error: StudyError) -> Self {
        Self(E::custom(error))
    }
}

impl Serialize for List<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut list = serializer.serialize_seq(None)?;
        self.0.try_each(|doubt| list.serialize_element(doubt).map_err(Broken)).map_err(|e| e.0)?;
        list.end()
    }
}
