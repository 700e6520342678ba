//! Fitting a file to a record: which of its columns is which, and cells into values.

use super::problem::{Problems, ROW};
use super::{Decimals, Row};
use crate::engine::columns::{Column, Kind, Value, asked_back, nearest};

/// Whether a column's cells are numbers.
pub(super) fn is_number(column: &Column) -> bool {
    matches!(
        column.kind,
        Kind::Integer(..) | Kind::IntegerOf(_) | Kind::Real(..) | Kind::Above(..) | Kind::Money(..)
    )
}

/// The name under which a file's column is taken: its own, or what the map makes of it.
pub(super) fn mapped<'a>(theirs: &'a str, map: &'a [(String, String)]) -> &'a str {
    map.iter().find(|(from, _)| from == theirs).map_or(theirs, |(_, to)| to)
}

/// The known name nearest to one of a file, however it writes capitals and spaces.
pub(super) fn near<'a>(theirs: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    nearest(&theirs.trim().to_lowercase().replace([' ', '-', '.'], "_"), known)
}

/// Holds every `theirs` of a map against a header.
pub(super) fn check_map(
    header: &Row,
    map: &[(String, String)],
    line: u64,
    problems: &mut Problems,
) {
    for (theirs, ours) in map {
        if !header.cells().iter().any(|cell| cell.trim() == theirs) {
            problems.add(line, theirs, ours, "is mapped, but the file has no such column");
        }
    }
}

/// What does not fit in a row.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault {
    /// The column, or `(row)`.
    pub column: &'static str,
    /// The value as it stands there.
    pub value: String,
    /// Why.
    pub why: String,
}

/// Whether the cells under a header cell hold numbers of a record.
pub fn holds_numbers<'a>(
    columns: &'a [Column],
    map: &'a [(String, String)],
) -> impl Fn(usize, &str) -> bool + 'a {
    move |_, name| {
        let ours = mapped(name, map);
        columns.iter().any(|column| column.name == ours && is_number(column))
    }
}

/// Which columns of a file are which of a record.
#[derive(Clone, Debug, PartialEq)]
pub struct Layout {
    columns: &'static [Column],
    /// For each column of the file its place in the record; none where it is passed over.
    places: Vec<Option<usize>>,
    /// For each column of the record where it stands in the file.
    stands: Vec<Option<usize>>,
    /// Names of the file's columns, as they stand there.
    names: Vec<String>,
}

impl Layout {
    /// Fits a header to the column facts; what does not fit is noted.
    pub fn fit(
        header: &Row,
        columns: &'static [Column],
        map: &[(String, String)],
        ignore_unknown: bool,
        problems: &mut Problems,
    ) -> Self {
        let names: Vec<String> = header.cells().iter().map(|cell| cell.trim().to_owned()).collect();
        let line = header.line;
        check_map(header, map, line, problems);
        for (_, ours) in map {
            if !columns.iter().any(|column| column.name == ours) {
                problems.add(line, ours, "", unknown(ours, columns));
            }
        }
        for (at, why) in &header.unread {
            problems.add(line, ROW, &names[*at], *why);
        }
        let mut places: Vec<Option<usize>> = Vec::with_capacity(names.len());
        for name in &names {
            let ours = mapped(name, map);
            let place = columns.iter().position(|column| column.name == ours);
            match place {
                Some(_) if places.contains(&place) => {
                    problems.add(
                        line,
                        ours,
                        name,
                        "stands twice in the header; keep one of the two",
                    );
                }
                Some(_) => {}
                None if ignore_unknown || map.iter().any(|(theirs, _)| theirs == name) => {}
                None if name.is_empty() => {
                    let why =
                        "a column without a name; name it, or pass over it with --ignore-unknown";
                    problems.add(line, ROW, "", why);
                }
                None => problems.add(line, name, "", unknown(ours, columns)),
            }
            places.push(place);
        }
        for (place, column) in columns.iter().enumerate() {
            if column.required && !places.contains(&Some(place)) {
                let why = "is required and is no column of the file";
                problems.add(line, column.name, "", why);
            }
        }
        let stands = (0..columns.len()).map(|c| places.iter().position(|p| *p == Some(c)));
        Self { columns, stands: stands.collect(), places, names }
    }

    /// Places of the record's columns that the file carries.
    pub fn present(&self) -> Vec<usize> {
        self.places.iter().copied().flatten().collect()
    }

    /// Names of the file's columns, as they stand there.
    pub fn names(&self) -> &[String] {
        &self.names
    }

    /// The cell of a record's column in a row, "" where the file has none.
    pub fn cell<'r>(&self, row: &'r Row, place: usize) -> &'r str {
        self.stands[place].and_then(|at| row.cells().get(at)).map_or("", |cell| cell.trim())
    }

    /// Turns the cells of a row into values, one for each column of the record; what does not fit is noted.
    pub fn values(
        &self,
        row: &Row,
        decimals: &mut Decimals,
        values: &mut Vec<Value>,
        faults: &mut Vec<Fault>,
    ) {
        values.clear();
        values.resize(self.columns.len(), Value::Blank);
        if row.cells().len() != self.places.len() {
            let value = counted(row.cells().len(), "cell");
            let why = format!("the header has {}", self.places.len());
            faults.push(Fault { column: ROW, value, why });
            return;
        }
        for (at, (cell, place)) in row.cells().iter().zip(&self.places).enumerate() {
            let Some(place) = *place else { continue };
            let column = &self.columns[place];
            let unread = row.unread.iter().find(|(unread, _)| *unread == at);
            let read = match unread {
                Some((_, why)) => Err((*why).to_owned()),
                None if is_number(column) => {
                    decimals.plain(cell).and_then(|number| column.read(&number))
                }
                None => column.read(cell),
            };
            match read {
                Ok(value) => values[place] = value,
                Err(why) => {
                    faults.push(Fault { column: column.name, value: cell.clone(), why });
                }
            }
        }
    }
}

/// `1 cell`, `2 cells`.
pub fn counted(number: usize, what: &str) -> String {
    format!("{number} {what}{}", if number == 1 { "" } else { "s" })
}

fn unknown(name: &str, columns: &[Column]) -> String {
    if let Some(question) = asked_back(name) {
        return question.to_owned();
    }
    let hint = match near(name, columns.iter().map(|column| column.name)) {
        Some(near) => format!("did you mean {near}?"),
        None => "its names are in the column table".to_owned(),
    };
    format!(
        "is no column of this file; {hint} (rename with --map, pass over with --ignore-unknown)"
    )
}
