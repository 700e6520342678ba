//! Years of equal steps: load profiles and prices. The first column is the time or a running number.

mod axis;

use axis::Axis;

use super::layout::{check_map, counted, mapped, near};
use super::problem::{FILE, Problems, ROW};
use super::{Decimals, ReadError, Row, Rows};
use crate::engine::columns::{Column, Value};

/// Names that the first column may bear.
const AXIS_NAMES: [&str; 2] = ["timestamp", "interval"];

/// The year of a file: its steps, and a column of values for each name.
#[derive(Clone, Debug, PartialEq)]
pub struct Series {
    /// Length of a step in minutes.
    pub step_minutes: u32,
    /// When the first step begins, as the file states it; none with running numbers.
    pub first_timestamp: Option<String>,
    /// The columns, in file order.
    pub columns: Vec<SeriesColumn>,
}

/// One column of a series file.
#[derive(Clone, Debug, PartialEq)]
pub struct SeriesColumn {
    /// Its name, after mapping.
    pub name: String,
    /// Its values; `None` where one of them could not be read.
    pub values: Option<Vec<f64>>,
}

/// Whether the cells under a header cell of a series file are numbers.
pub fn holds_numbers(at: usize, _: &str) -> bool {
    at > 0
}

/// What the columns of a series file may be called.
#[derive(Clone, Copy, Debug)]
pub enum Names<'a> {
    /// Anything that can be an identifier.
    Any,
    /// These; the first is required. Others are passed over where `ignore_unknown`.
    Of {
        /// The names, with the facts of their values.
        known: &'a [Column],
        /// Whether to pass over others.
        ignore_unknown: bool,
    },
}

impl Series {
    /// Reads a file to its end. What is wrong is noted; none where the time axis cannot be used.
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn read(
        rows: &mut Rows,
        names: Names<'_>,
        map: &[(String, String)],
        problems: &mut Problems,
    ) -> Result<Option<Self>, ReadError> {
        let Some(mut places) = header(rows.header(), names, map, problems) else { return Ok(None) };
        let width = rows.header().cells().len();
        let is_timed = mapped(rows.header().cells()[0].trim(), map) == AXIS_NAMES[0];
        let mut axis = Axis::new(is_timed);
        let mut row = Row::default();
        while rows.next(&mut row)? {
            if row.cells().len() != width {
                let why = format!("the header has {width}");
                problems.add(row.line, ROW, &counted(row.cells().len(), "cell"), why);
                axis.spoil();
                continue;
            }
            if let Err(why) = axis.step(&row.cells()[0], row.line) {
                problems.add(row.line, AXIS_NAMES[usize::from(!is_timed)], &row.cells()[0], why);
            }
            for (place, facts, column) in &mut places {
                let cell = &row.cells()[*place];
                let unread = row.unread.iter().find(|(at, _)| at == place).map(|(_, why)| *why);
                match unread
                    .map_or_else(|| number(facts, rows.decimals(), cell), |why| Err(why.to_owned()))
                {
                    Ok(value) => {
                        if let Some(values) = &mut column.values {
                            values.push(value);
                        }
                    }
                    Err(why) => {
                        problems.add(row.line, &column.name, cell, why);
                        column.values = None;
                    }
                }
            }
        }
        let columns = places.into_iter().map(|(.., column)| column).collect();
        match axis.finish() {
            Ok(Some((step_minutes, first_timestamp))) => {
                Ok(Some(Self { step_minutes, first_timestamp, columns }))
            }
            Ok(None) => Ok(None),
            Err((found, why)) => {
                problems.add(row.line.max(1), FILE, &found, why);
                Ok(None)
            }
        }
    }
}

/// The values of a profile: any finite number.
const ANY: Column = Column::real(f64::MIN, f64::MAX);

/// A value of a series; a blank is a gap.
fn number(facts: &Column, decimals: &mut Decimals, cell: &str) -> Result<f64, String> {
    match decimals.plain(cell).and_then(|text| facts.read(&text))? {
        Value::Real(value) => Ok(value),
        _ => Err("is a gap; every step needs a value".to_owned()),
    }
}

/// Places and names of the columns behind the first; none where the header does not do.
fn header(
    header: &Row,
    names: Names<'_>,
    map: &[(String, String)],
    problems: &mut Problems,
) -> Option<Vec<(usize, Column, SeriesColumn)>> {
    let before = problems.count();
    let line = header.line;
    check_map(header, map, line, problems);
    let first = header.cells()[0].trim();
    if !AXIS_NAMES.contains(&mapped(first, map)) {
        let why = "the first column is timestamp or interval; rename it with --map";
        problems.add(line, first, "", why);
    }
    let mut places: Vec<(usize, Column, SeriesColumn)> = Vec::new();
    for (at, cell) in header.cells().iter().enumerate().skip(1) {
        let name = mapped(cell.trim(), map);
        if let Err(why) = Column::id().required().read(name) {
            problems.add(line, ROW, cell, format!("a column's name {why}"));
            continue;
        }
        if places.iter().any(|(.., column)| column.name == name) {
            problems.add(line, name, cell, "stands twice in the header; keep one of the two");
        }
        let facts = match names {
            Names::Any => Some(&ANY),
            Names::Of { known, .. } => known.iter().find(|column| column.name == name),
        };
        match (facts, names) {
            (Some(facts), _) => {
                let values = SeriesColumn { name: name.to_owned(), values: Some(Vec::new()) };
                places.push((at, *facts, values));
            }
            (None, Names::Of { known, ignore_unknown: false }) => {
                let known: Vec<&str> = known.iter().map(|column| column.name).collect();
                let hint = near(name, known.iter().copied())
                    .map_or_else(|| known.join(", "), |near| format!("did you mean {near}?"));
                problems.add(line, name, "", format!("is no column of this file; {hint}"));
            }
            (None, _) => {}
        }
    }
    match names {
        Names::Of { known: [first, ..], .. } if !places.iter().any(|p| p.1.name == first.name) => {
            problems.add(line, first.name, "", "is required and is no column of the file");
        }
        _ if places.is_empty() => {
            let why = "the file has a first column only; one column of values is needed";
            problems.add(line, ROW, "", why);
        }
        _ => {}
    }
    (problems.count() == before).then_some(places)
}
