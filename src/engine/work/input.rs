//! Inputs of trade calculations: column facts with a default and, for some, several values; and the `calc!` table.

use super::Datum;
use crate::engine::Refusal;
use crate::engine::columns::{Cell, Column, Kind, Value};

/// The facts of one input.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Input {
    /// Name, kind, range, meaning, what a blank means.
    pub column: Column,
    /// Several values, separated by commas.
    pub list: bool,
    /// What is taken where it is left out, as text; "" = nothing.
    pub default: &'static str,
}

/// Most values of a list.
const LONGEST_LIST: usize = 100_000;

impl Input {
    const fn of(column: Column) -> Self {
        Self { column, list: false, default: "" }
    }
    /// A number of a range.
    pub(super) const fn real(least: f64, most: f64) -> Self {
        Self::of(Column::real(least, most))
    }
    /// A number above `least`, up to `most`.
    pub(super) const fn above(least: f64, most: f64) -> Self {
        Self::of(Column::above(least, most))
    }
    /// One word of a list.
    pub(super) const fn choice(words: &'static [&'static str]) -> Self {
        Self::of(Column::choice(words))
    }
    /// One whole number of a list.
    pub(super) const fn integer_of(list: &'static [i64]) -> Self {
        Self::of(Column::integer_of(list))
    }
    /// A whole number of a range.
    pub(super) const fn integer(least: i64, most: i64) -> Self {
        Self::of(Column::integer(least, most))
    }
    /// Text.
    pub(super) const fn text() -> Self {
        Self::of(Column::text())
    }
    /// A date.
    pub(super) const fn date() -> Self {
        Self::of(Column::date())
    }
    /// The same, required.
    pub(super) const fn required(self) -> Self {
        Self { column: self.column.required(), ..self }
    }
    /// The same, several values.
    pub(super) const fn list(self) -> Self {
        Self { list: true, ..self }
    }
    /// The same, with what is taken where it is left out.
    pub(super) const fn default(self, default: &'static str) -> Self {
        Self { default, column: self.column.blank(default), ..self }
    }
    /// The same, with what leaving it out means.
    pub(super) const fn blank(self, blank: &'static str) -> Self {
        Self { column: self.column.blank(blank), ..self }
    }

    /// Reads the text of the input; none where it is left out.
    pub(super) fn read(&self, text: Option<&str>) -> Result<Vec<Value>, Refusal> {
        let name = self.column.name;
        let text = match text.map(str::trim) {
            Some(text) if !text.is_empty() => text,
            _ if self.column.required => {
                let unit = self.column.unit();
                let space = if unit.is_empty() { "" } else { " " };
                let list = if self.list { ", several values separated by commas" } else { "" };
                let meaning = self.column.meaning;
                let why = format!("is missing: {meaning}{space}{unit}{list}; write {name}=…");
                return Err(Refusal::new(name, "", why));
            }
            _ if self.default.is_empty() => return Ok(vec![Value::Blank]),
            _ => self.default,
        };
        let one = |text: &str| {
            let text = text.trim();
            if text.is_empty() {
                return Err(Refusal::new(name, text, "has an empty place in its list"));
            }
            self.column.read(text).map_err(|reason| {
                let why =
                    format!("{reason} ({}): check the value and its unit", self.column.meaning);
                Refusal::new(name, text, why)
            })
        };
        if !self.list {
            if text.contains(',') && self.column.kind != Kind::Text {
                let why = "is one value, with a point as decimal sign and no separators";
                return Err(Refusal::new(name, text, why));
            }
            return Ok(vec![one(text)?]);
        }
        let values = text.split(',').map(one).collect::<Result<Vec<_>, _>>()?;
        if values.len() > LONGEST_LIST {
            let why = format!("has more than {LONGEST_LIST} values");
            return Err(Refusal::new(name, values.len(), why));
        }
        Ok(values)
    }

    /// The read values as what a calculation shows of its inputs; none where there are none.
    pub(super) fn datum(&self, values: &[Value]) -> Option<Datum> {
        let number = |value: &Value| match value {
            Value::Real(x) => Some(*x),
            #[expect(clippy::cast_precision_loss, reason = "inputs are small whole numbers")]
            Value::Integer(n) => Some(*n as f64),
            _ => None,
        };
        let word = |value: &Value| match value {
            Value::Text(text) => Some(text.clone()),
            _ => None,
        };
        let numbers: Vec<f64> = values.iter().filter_map(number).collect();
        let words: Vec<String> = values.iter().filter_map(word).collect();
        match (&numbers[..], &words[..]) {
            ([], []) => None,
            ([], [one]) if !self.list => Some(Datum::Word(one.clone())),
            ([], _) => Some(Datum::Words(words)),
            ([one], _) if !self.list => Some(Datum::Number(*one)),
            _ => Some(Datum::Numbers(numbers)),
        }
    }
}

/// How a read input becomes a typed one.
pub(super) trait Field: Sized {
    /// The field of the values; none where the kinds differ.
    fn of(values: &[Value]) -> Option<Self>;
}

impl<T: Cell> Field for T {
    fn of(values: &[Value]) -> Option<Self> {
        T::from_value(values.first()?)
    }
}

/// A list of inputs; empty where it was left out.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct List<T>(pub(super) Vec<T>);

impl<T> std::ops::Deref for List<T> {
    type Target = [T];
    fn deref(&self) -> &[T] {
        &self.0
    }
}

impl<T: Cell> Field for List<T> {
    fn of(values: &[Value]) -> Option<Self> {
        if values.first() == Some(&Value::Blank) {
            return Some(Self(Vec::new()));
        }
        values.iter().map(T::from_value).collect::<Option<_>>().map(Self)
    }
}

impl List<f64> {
    /// The list as long as another one: a single value stands for all.
    pub(super) fn as_long_as(&self, name: &'static str, n: usize) -> Result<Vec<f64>, Refusal> {
        match self[..] {
            [one] => Ok(vec![one; n]),
            _ if self.len() == n => Ok(self.0.clone()),
            _ => {
                let why = format!("has {} values where {n} are needed (one for each)", self.len());
                Err(Refusal::new(name, "", why))
            }
        }
    }
}

/// Takes an input that this way of calculating needs.
pub(super) fn need<T>(name: &'static str, value: Option<T>, why: &str) -> Result<T, Refusal> {
    value.ok_or_else(|| Refusal::new(name, "", why))
}

/// Declares a calculation: key, summary, source, questions, inputs and what is done with them.
macro_rules! calc {
    (
        $constant:ident = $key:literal, $summary:literal, $source:literal;
        $(ask $ask:literal => $question:expr;)*
        { $($field:ident : $ty:ty, $input:expr, $meaning:literal;)+ }
        |$i:ident, $w:ident| $body:block
    ) => {
        const $constant: $crate::engine::work::Calc = {
            struct Given { $($field: $ty),+ }
            fn read(values: &[Vec<$crate::engine::columns::Value>]) -> Option<Given> {
                let mut values = values.iter();
                Some(Given {
                    $($field: $crate::engine::work::input::Field::of(values.next()?)?),+
                })
            }
            fn run(
                values: &[Vec<$crate::engine::columns::Value>],
                $w: &mut $crate::engine::working::Working,
            ) -> Result<$crate::engine::work::Results, $crate::engine::Refusal> {
                let why = "could not be read into the calculation";
                let $i = $crate::engine::work::input::need("input", read(values), why)?;
                $body
            }
            const INPUTS: &[$crate::engine::work::Input] = &[
                $($crate::engine::work::Input {
                    column: $crate::engine::columns::Column {
                        name: stringify!($field), meaning: $meaning, ..$input.column
                    },
                    ..$input
                }),+
            ];
            $crate::engine::work::Calc {
                key: $key,
                summary: $summary,
                source: $source,
                inputs: INPUTS,
                asks: &[$(($ask, $question)),*],
                run,
            }
        };
    };
}
pub(super) use calc;

/// Rated power.
pub(super) const KVA: Input = Input::above(0.0, 2_000_000.0);
/// A loss.
pub(super) const LOSS_W: Input = Input::real(0.0, 1e9);
/// A voltage in kV.
pub(super) const KV: Input = Input::above(0.0, 1_200.0);
/// A share between 0 and 1.
pub(super) const SHARE: Input = Input::real(0.0, 1.0);
/// A load over the rating.
pub(super) const LOAD_PU: Input = Input::real(0.0, 100.0);
/// Money of either sign.
pub(super) const MONEY: Input = Input::real(-1e15, 1e15);
/// A rate in percent a year; the lower end is refused where it is used, with what to write instead.
pub(super) const RATE_PCT: Input = Input::real(-1e6, 1e6);
/// Years of a horizon.
pub(super) const YEARS: Input = Input::integer(1, 200);
/// Hours of a year.
pub(super) const HOURS: Input = Input::real(0.0, 8_784.0);
/// A temperature.
pub(super) const TEMPERATURE_C: Input = Input::real(-100.0, 1_000.0);
/// Percent of some rated value.
pub(super) const PERCENT: Input = Input::real(0.0, 100.0);
