//! Basis and tender files: TOML, each key held against the column facts, each problem told by its line.

use std::collections::HashMap;
use std::io::Read as _;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::layout::near;
use super::problem::{FILE, Problems};
use super::rules::{self, Rules};
use super::{ReadError, Source};
use crate::engine::columns::{
    Basis, BasisBudget, BasisRange, BasisSheet, Column, Distribution, Kind, Lot, Tender,
    TenderRate, TenderSheet, Value, asked_back,
};

/// Largest file (bytes).
const LARGEST: u64 = 4 << 20;
/// Keys of a basis that stand in its `[budget]`.
const BUDGET_KEYS: [&str; 3] = ["units_per_year", "units_per_site_year", "carry_over"];

/// What a file holds, and where its keys stand.
#[derive(Clone, Debug, PartialEq)]
pub struct Sheet<T> {
    /// The content.
    pub content: T,
    lines: HashMap<String, u64>,
}

impl<T> Sheet<T> {
    /// The line on which a key stands; 1 where it is not there.
    pub fn line(&self, key: &str) -> u64 {
        self.lines.get(key).copied().unwrap_or(1)
    }
}

/// Reads the text of a TOML file.
///
/// # Errors
/// It cannot be read, is too large, or is not UTF-8.
pub fn text(source: Source) -> Result<String, ReadError> {
    let name = source.name.clone();
    let mut bytes = Vec::new();
    source
        .into_reader(LARGEST)
        .read_to_end(&mut bytes)
        .map_err(|error| ReadError::of_io(error, &name, 1))?;
    let text = String::from_utf8(bytes).map_err(|error| {
        let good = &error.as_bytes()[..error.utf8_error().valid_up_to()];
        let line = 1 + String::from_utf8_lossy(good).matches('\n').count() as u64;
        ReadError::Unfit { line, why: "is not UTF-8; TOML files are".to_owned() }
    })?;
    Ok(text.strip_prefix('\u{feff}').map_or(text.clone(), ToOwned::to_owned))
}

/// Reads a basis file; none where something in it is wrong, which is noted.
pub fn basis(text: &str, problems: &mut Problems) -> Option<Sheet<BasisSheet>> {
    let before = problems.count();
    let root = parse(text, problems)?;
    let mut reader = Reader { text, problems, lines: HashMap::new() };
    let mut values = vec![Value::Blank; Basis::COLUMNS.len()];
    let (mut ranges, mut budgets) = (Vec::new(), Vec::new());
    for (key, value) in in_order(&root) {
        match (key.get_ref().as_ref(), value.get_ref()) {
            ("range", DeValue::Table(table)) => {
                ranges.extend(
                    in_order(table).into_iter().filter_map(|(key, value)| reader.range(key, value)),
                );
            }
            ("budget", DeValue::Table(table)) => reader.budget(table, &mut values, &mut budgets),
            (name @ ("range" | "budget"), _) => {
                let line = reader.line(key);
                reader.problems.add(
                    line,
                    name,
                    "",
                    format!("is a table; write [{name}] on a line of its own"),
                );
            }
            (name, _) if BUDGET_KEYS.contains(&name) => {
                let line = reader.line(key);
                reader.problems.add(line, name, &shown(value.get_ref()), "belongs below [budget]");
            }
            _ => reader.key(
                Basis::COLUMNS,
                "a basis",
                &["range", "budget"],
                (key, value),
                &mut values,
            ),
        }
    }
    reader.required(Basis::COLUMNS, 1, &values);
    let lines = reader.lines;
    if problems.count() > before {
        return None;
    }
    let content = BasisSheet { basis: Basis::from_values(&values)?, ranges, budgets };
    Some(Sheet { content, lines })
}

/// Reads a tender file; none where something in it is wrong, which is noted.
pub fn tender(text: &str, problems: &mut Problems) -> Option<Sheet<TenderSheet>> {
    let before = problems.count();
    let root = parse(text, problems)?;
    let mut reader = Reader { text, problems, lines: HashMap::new() };
    let mut values = vec![Value::Blank; Tender::COLUMNS.len()];
    let (mut rates, mut lots): (Vec<TenderRate>, Vec<Lot>) = (Vec::new(), Vec::new());
    for (key, value) in in_order(&root) {
        match (key.get_ref().as_ref(), value.get_ref()) {
            ("rates", DeValue::Table(table)) => {
                let line = reader.line(key);
                reader.lines.insert("rates".to_owned(), line);
                for (code, rate) in in_order(table) {
                    let line = reader.line(code);
                    reader.lines.insert(format!("rates.{}", code.get_ref()), line);
                    rates.extend(reader.rate(code, rate));
                }
            }
            ("lot", DeValue::Array(array)) => {
                for lot in array {
                    let Some(lot) = reader.lot(lot) else { continue };
                    if lots.iter().any(|other| other.lot == lot.lot) {
                        let line = reader.lines.get(&format!("{}.lot", lot.lot)).copied();
                        let line = line.unwrap_or_else(|| reader.line(key));
                        reader.problems.add(line, "lot", &lot.lot, "stands twice in the tender");
                    }
                    lots.push(lot);
                }
            }
            (name @ ("rates" | "lot"), _) => {
                let line = reader.line(key);
                let why = "write [rates] for the rates, [[lot]] for each lot, on a line of its own";
                reader.problems.add(line, name, "", why);
            }
            _ => reader.key(
                Tender::COLUMNS,
                "a tender",
                &["rates", "lot"],
                (key, value),
                &mut values,
            ),
        }
    }
    reader.required(Tender::COLUMNS, 1, &values);
    if lots.is_empty() && reader.problems.count() == before {
        reader.problems.add(1, "lot", "", "the tender has no lot; write one below [[lot]]");
    }
    let lines = reader.lines;
    if problems.count() > before {
        return None;
    }
    let content = TenderSheet {
        tender: Tender::from_values(&values)?,
        rates,
        lots,
        bids: Vec::new(),
        measured: Vec::new(),
        awards: Vec::new(),
    };
    Some(Sheet { content, lines })
}

fn parse<'t>(text: &'t str, problems: &mut Problems) -> Option<DeTable<'t>> {
    let (root, errors) = DeTable::parse_recoverable(text);
    for error in &errors {
        let start = error.span().map_or(0, |span| span.start);
        let (key, value) = entry_at(text, start).unwrap_or((FILE, ""));
        problems.add(line_at(text, start), key, value, format!("is not TOML: {}", error.message()));
    }
    errors.is_empty().then(|| root.into_inner())
}

type Key<'t> = Spanned<std::borrow::Cow<'t, str>>;
type Item<'t> = Spanned<DeValue<'t>>;

/// The entries of a table in the order of the file.
fn in_order<'a, 't>(table: &'a DeTable<'t>) -> Vec<(&'a Key<'t>, &'a Item<'t>)> {
    let mut entries: Vec<_> = table.iter().collect();
    entries.sort_by_key(|(key, _)| key.span().start);
    entries
}

fn line_at(text: &str, at: usize) -> u64 {
    1 + text.get(..at).map_or(0, |before| before.matches('\n').count() as u64)
}

/// The key and the value of the line at a place, where it is written as one.
fn entry_at(text: &str, at: usize) -> Option<(&str, &str)> {
    let from = text.get(..at)?.rfind('\n').map_or(0, |before| before + 1);
    let (key, value) = text.get(from..)?.lines().next()?.split_once('=')?;
    let key = key.trim();
    let bare = |c: char| c.is_ascii_alphanumeric() || "_-.\"".contains(c);
    (!key.is_empty() && key.chars().all(bare)).then_some((key, value.trim()))
}

/// A value as it is shown in a problem.
fn shown(value: &DeValue<'_>) -> String {
    match value {
        DeValue::String(text) => text.to_string(),
        DeValue::Integer(number) => number.to_string(),
        DeValue::Float(number) => number.to_string(),
        DeValue::Boolean(flag) => flag.to_string(),
        DeValue::Datetime(time) => time.to_string(),
        DeValue::Array(_) => "[…]".to_owned(),
        DeValue::Table(_) => "{…}".to_owned(),
    }
}

/// Reads a value by the facts of its column.
fn read(column: &Column, value: &DeValue<'_>) -> Result<Value, String> {
    let is_text = matches!(column.kind, Kind::Id | Kind::Text | Kind::Choice(_) | Kind::Date);
    let is_flag = column.kind == Kind::Flag;
    match value {
        DeValue::String(text) if is_text => column.read(text),
        DeValue::Datetime(time) if column.kind == Kind::Date => column.read(&time.to_string()),
        DeValue::Boolean(flag) if is_flag => column.read(if *flag { "true" } else { "false" }),
        DeValue::Integer(number) if !is_text && !is_flag => {
            match i128::from_str_radix(number.as_str(), number.radix()) {
                Ok(number) => column.read(&number.to_string()),
                Err(_) => column.read(number.as_str()),
            }
        }
        DeValue::Float(number) if !is_text && !is_flag => column.read(number.as_str()),
        DeValue::Datetime(_) if !is_text && !is_flag => {
            Err("is a date or a time, and a number is wanted".to_owned())
        }
        DeValue::Array(_) | DeValue::Table(_) => Err("is no single value".to_owned()),
        _ if is_text => Err("is text; write it in quotes".to_owned()),
        _ if is_flag => Err("is true or false, without quotes".to_owned()),
        _ => Err("is a number; write it without quotes".to_owned()),
    }
}

/// A column of numbers that a basis or a lot holds: what a range can be about.
fn ranged(name: &str) -> Option<&'static Column> {
    Basis::COLUMNS
        .iter()
        .chain(Lot::COLUMNS)
        .filter(|column| super::layout::is_number(column))
        .find(|column| column.name == name)
}

struct Reader<'t, 'p> {
    text: &'t str,
    problems: &'p mut Problems,
    lines: HashMap<String, u64>,
}

impl Reader<'_, '_> {
    fn line<T>(&self, of: &Spanned<T>) -> u64 {
        line_at(self.text, of.span().start)
    }

    /// Reads one key of a record into its values.
    fn key(
        &mut self,
        columns: &'static [Column],
        what: &str,
        tables: &[&str],
        (key, value): (&Key<'_>, &Item<'_>),
        values: &mut [Value],
    ) {
        let (name, line) = (key.get_ref().as_ref(), self.line(key));
        self.lines.entry(name.to_owned()).or_insert(line);
        let Some(place) = columns.iter().position(|column| column.name == name) else {
            let known = columns.iter().map(|column| column.name).chain(tables.iter().copied());
            let why = asked_back(name).map_or_else(
                || {
                    let hint = near(name, known)
                        .map_or_else(String::new, |near| format!("; did you mean {near}?"));
                    format!("is no key of {what}{hint}")
                },
                str::to_owned,
            );
            self.problems.add(line, name, &shown(value.get_ref()), why);
            return;
        };
        match read(&columns[place], value.get_ref()) {
            Ok(value) => values[place] = value,
            Err(why) => self.problems.add(line, name, &shown(value.get_ref()), why),
        }
    }

    /// Notes required columns that are blank and were not noted as wrong.
    fn required(&mut self, columns: &[Column], line: u64, values: &[Value]) {
        for (column, value) in columns.iter().zip(values) {
            if column.required && *value == Value::Blank && !self.lines.contains_key(column.name) {
                self.problems.add(line, column.name, "", "is required and not in the file");
            }
        }
    }

    /// Reads the keys of a table of its own into a record's values; none where one is wrong.
    fn record(
        &mut self,
        columns: &'static [Column],
        what: &str,
        table: &DeTable<'_>,
        line: u64,
        values: &mut [Value],
    ) -> Option<()> {
        let before = self.problems.count();
        let outer = std::mem::take(&mut self.lines);
        for entry in in_order(table) {
            self.key(columns, what, &[], entry, values);
        }
        self.required(columns, line, values);
        self.lines = outer;
        (self.problems.count() == before).then_some(())
    }

    fn range(&mut self, key: &Key<'_>, value: &Item<'_>) -> Option<BasisRange> {
        let (name, line) = (key.get_ref().as_ref(), self.line(key));
        let Some(column) = ranged(name) else {
            let known =
                Basis::COLUMNS.iter().chain(Lot::COLUMNS).filter(|c| super::layout::is_number(c));
            let hint = near(name, known.map(|column| column.name))
                .map_or_else(String::new, |near| format!("; did you mean {near}?"));
            self.problems.add(line, name, "", format!("is no numeric input{hint}"));
            return None;
        };
        let DeValue::Table(table) = value.get_ref() else {
            let why = format!("a range is a table; write [range.{name}] with low and high");
            self.problems.add(line, name, &shown(value.get_ref()), why);
            return None;
        };
        let mut values = vec![Value::Blank; BasisRange::COLUMNS.len()];
        values[0] = Value::Text(name.to_owned());
        self.record(&BasisRange::COLUMNS[1..], "a range", table, line, &mut values[1..])?;
        let range = BasisRange::from_values(&values)?;
        match misfit(&range, column) {
            None => Some(range),
            Some((value, why)) => {
                self.problems.add(line, name, &value, why);
                None
            }
        }
    }

    fn budget(
        &mut self,
        table: &DeTable<'_>,
        values: &mut [Value],
        budgets: &mut Vec<BasisBudget>,
    ) {
        for (key, value) in in_order(table) {
            let (name, line) = (key.get_ref().as_ref(), self.line(key));
            if !name.starts_with(|c: char| c.is_ascii_digit()) {
                if BUDGET_KEYS.contains(&name) {
                    self.key(Basis::COLUMNS, "a budget", &[], (key, value), values);
                } else {
                    let hint = near(name, BUDGET_KEYS).map_or_else(
                        || BUDGET_KEYS.join(", "),
                        |near| format!("did you mean {near}?"),
                    );
                    let why = format!("is no key of a budget: a year, or {hint}");
                    self.problems.add(line, name, &shown(value.get_ref()), why);
                }
                continue;
            }
            let year = BasisBudget::COLUMNS[0].read(name);
            let money = read(&BasisBudget::COLUMNS[1], value.get_ref());
            match (year, money) {
                (Ok(year), Ok(money)) => budgets.extend(BasisBudget::from_values(&[year, money])),
                (year, money) => {
                    for why in [year.err(), money.err()].into_iter().flatten() {
                        self.problems.add(line, name, &shown(value.get_ref()), why);
                    }
                }
            }
        }
        budgets.sort_by_key(|budget| budget.year);
    }

    fn rate(&mut self, key: &Key<'_>, value: &Item<'_>) -> Option<TenderRate> {
        let (name, line) = (key.get_ref().as_ref(), self.line(key));
        let code = TenderRate::COLUMNS[0].read(name);
        let rate = read(&TenderRate::COLUMNS[1], value.get_ref());
        match (code, rate) {
            (Ok(code), Ok(rate)) => TenderRate::from_values(&[code, rate]),
            (code, rate) => {
                for why in [code.err(), rate.err()].into_iter().flatten() {
                    self.problems.add(line, name, &shown(value.get_ref()), why);
                }
                None
            }
        }
    }

    fn lot(&mut self, value: &Item<'_>) -> Option<Lot> {
        let line = self.line(value);
        let DeValue::Table(table) = value.get_ref() else {
            self.problems.add(line, "lot", &shown(value.get_ref()), "write [[lot]] for each lot");
            return None;
        };
        let mut values = vec![Value::Blank; Lot::COLUMNS.len()];
        self.record(Lot::COLUMNS, "a lot", table, line, &mut values)?;
        if let Value::Text(lot) = &values[0] {
            for (key, _) in in_order(table) {
                let line = self.line(key);
                self.lines.insert(format!("{lot}.{}", key.get_ref()), line);
            }
        }
        let before = self.problems.count();
        Rules::of(rules::LOTS, Lot::COLUMNS).judge(&values, |place, why| {
            let name = Lot::COLUMNS[place].name;
            let entry = in_order(table).into_iter().find(|(key, _)| key.get_ref() == name);
            let (line, value) = entry.map_or((line, String::new()), |(key, value)| {
                (line_at(self.text, key.span().start), shown(value.get_ref()))
            });
            self.problems.add(line, name, &value, why);
        });
        if self.problems.count() > before { None } else { Lot::from_values(&values) }
    }
}

/// What does not fit together in a range: the value and why.
fn misfit(range: &BasisRange, column: &Column) -> Option<(String, String)> {
    let inside = |value: f64| {
        let value = if matches!(column.kind, Kind::Integer(..) | Kind::IntegerOf(_)) {
            column.read(&value.to_string())
        } else {
            column.check(Value::Real(value))
        };
        value.err()
    };
    for value in [range.low, range.base, range.high].into_iter().flatten() {
        if let Some(why) = inside(value) {
            return Some((value.to_string(), why));
        }
    }
    let missing = |name: &str| {
        Some((
            String::new(),
            format!("needs {name}; give low and high, or a distribution with its parameters"),
        ))
    };
    match range.distribution.unwrap_or(Distribution::Triangular) {
        Distribution::Triangular | Distribution::Uniform => {
            let Some(low) = range.low else { return missing("low") };
            let Some(high) = range.high else { return missing("high") };
            if low > high {
                return Some((low.to_string(), format!("low is above high {high}")));
            }
            let base = range.base?;
            (base < low || base > high).then(|| {
                (base.to_string(), format!("base is not between low {low} and high {high}"))
            })
        }
        Distribution::Normal | Distribution::Lognormal => {
            if range.deviation.is_none() {
                missing("deviation")
            } else {
                None
            }
        }
    }
}
