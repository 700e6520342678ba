//! What a column fact is: kinds, ranges, cell values and exact money. Owns the check of one cell's text.

use std::fmt;

/// Exact money in thousandths of the currency unit.
///
/// Quoted prices are kept exactly; every currency of ISO 4217 in use for tenders fits (at most three
/// decimals). Evaluation uses [`Money::amount`].
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub struct Money(pub i64);

impl Money {
    /// The amount as a float: the double nearest to the written decimal.
    #[expect(clippy::cast_precision_loss, reason = "below 2^53 thousandths, checked on the way in")]
    pub fn amount(self) -> f64 {
        self.0 as f64 / 1000.0
    }

    /// Reads a plain decimal (`-1234.5`, also `1.2e4`) exactly.
    ///
    /// # Errors
    /// Says why the text is not an amount: not a number, more than three decimals, out of range.
    pub fn parse(text: &str) -> Result<Self, String> {
        let number: f64 = text.parse().map_err(|_| "is not a number".to_owned())?;
        if !number.is_finite() {
            return Err("is not a finite number".to_owned());
        }
        if number.abs() > 9e12 {
            return Err("is beyond the range of money (9e12)".to_owned());
        }
        #[expect(clippy::cast_possible_truncation, reason = "range checked above")]
        let milli = (number * 1000.0).round() as i64;
        let money = Self(milli);
        if (money.amount() - number).abs() > 1e-9 * number.abs().max(1e-3) {
            return Err("has more than three decimals; round it to a thousandth".to_owned());
        }
        Ok(money)
    }
}

impl fmt::Display for Money {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let sign = if self.0 < 0 { "-" } else { "" };
        let (whole, milli) = (self.0.unsigned_abs() / 1000, self.0.unsigned_abs() % 1000);
        match milli {
            0 => write!(f, "{sign}{whole}"),
            m => write!(f, "{sign}{}", format!("{whole}.{m:03}").trim_end_matches('0')),
        }
    }
}

/// One cell, typed.
#[derive(Clone, Debug, PartialEq)]
pub enum Value {
    /// Unknown; never zero.
    Blank,
    /// Text, an identifier, a choice or a date.
    Text(String),
    /// A whole number.
    Integer(i64),
    /// A finite number.
    Real(f64),
    /// Exact money.
    Money(Money),
}

/// What a column holds, with its physical range.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Kind {
    /// An identifier: text, not empty; case and leading zeros count.
    Id,
    /// Free text.
    Text,
    /// One word of a list.
    Choice(&'static [&'static str]),
    /// `true` or `false` (also yes and no); kept as an integer 1 or 0.
    Flag,
    /// A whole number of a range, both ends included.
    Integer(i64, i64),
    /// One whole number of a list.
    IntegerOf(&'static [i64]),
    /// A number of a range, both ends included.
    Real(f64, f64),
    /// A number above the first and up to the second.
    Above(f64, f64),
    /// Exact money of a range, in whole currency units.
    Money(i64, i64),
    /// A calendar date, `YYYY-MM-DD`.
    Date,
}

/// The facts of one column.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Column {
    /// The name everywhere: file header, SQL, struct field, JSON key.
    pub name: &'static str,
    /// What it holds.
    pub kind: Kind,
    /// A row without it is rejected.
    pub required: bool,
    /// What a blank falls to ("" = stays unknown).
    pub blank: &'static str,
    /// What it is, in a line.
    pub meaning: &'static str,
}

/// The unit suffixes of names and how they are written for people.
const UNITS: &[(&str, &str)] = &[
    ("_per_kw_year", "money/(kW·year)"),
    ("_per_customer", "money/customer"),
    ("_cost_per_kw", "money/kW"),
    ("_kg_per_kwh", "kg/kWh"),
    ("_per_kwh", "/kWh"),
    ("_per_kw", "money/kW"),
    ("_per_t", "money/t"),
    ("upkeep_per_year", "money/year"),
    ("_per_year", "per year"),
    ("_kva", "kVA"),
    ("_mva", "MVA"),
    ("_kwh", "kWh"),
    ("_ohm", "Ω"),
    ("_pct", "%"),
    ("_pu", "pu"),
    ("_years", "years"),
    ("_minutes", "min"),
    ("_weeks", "weeks"),
    ("_year", "year"),
    ("_hours", "h"),
    ("_ppm", "mg/kg"),
    ("_kvar", "kvar"),
    ("_deg", "°"),
    ("_ka", "kA"),
    ("_mm", "mm"),
    ("_kv", "kV"),
    ("_kw", "kW"),
    ("_hz", "Hz"),
    ("_db", "dB"),
    ("_kg", "kg"),
    ("_w", "W"),
    ("_v", "V"),
    ("_a", "A"),
    ("_h", "h"),
    ("_c", "°C"),
    ("_cost", "money"),
    ("_value", "money"),
    ("_k", "K"),
    ("_t", "T"),
];

impl Column {
    const fn of(kind: Kind) -> Self {
        Self { name: "", kind, required: false, blank: "", meaning: "" }
    }
    /// An identifier.
    pub const fn id() -> Self {
        Self::of(Kind::Id)
    }
    /// Free text.
    pub const fn text() -> Self {
        Self::of(Kind::Text)
    }
    /// One word of a list.
    pub const fn choice(words: &'static [&'static str]) -> Self {
        Self::of(Kind::Choice(words))
    }
    /// True or false.
    pub const fn flag() -> Self {
        Self::of(Kind::Flag)
    }
    /// A whole number of a range.
    pub const fn integer(least: i64, most: i64) -> Self {
        Self::of(Kind::Integer(least, most))
    }
    /// One whole number of a list.
    pub const fn integer_of(list: &'static [i64]) -> Self {
        Self::of(Kind::IntegerOf(list))
    }
    /// A number of a range.
    pub const fn real(least: f64, most: f64) -> Self {
        Self::of(Kind::Real(least, most))
    }
    /// A number above `least`, up to `most`.
    pub const fn above(least: f64, most: f64) -> Self {
        Self::of(Kind::Above(least, most))
    }
    /// Money, not negative.
    pub const fn money() -> Self {
        Self::of(Kind::Money(0, 1_000_000_000_000))
    }
    /// Money that may be negative (an adder can be a rebate).
    pub const fn signed_money() -> Self {
        Self::of(Kind::Money(-1_000_000_000_000, 1_000_000_000_000))
    }
    /// A date.
    pub const fn date() -> Self {
        Self::of(Kind::Date)
    }
    /// The same, required.
    #[must_use]
    pub const fn required(self) -> Self {
        Self { required: true, ..self }
    }
    /// The same, with what a blank falls to.
    #[must_use]
    pub const fn blank(self, blank: &'static str) -> Self {
        Self { blank, ..self }
    }

    /// The unit, read from the suffix of the name; "" for a bare number or text, "money" for money.
    pub fn unit(&self) -> &'static str {
        if matches!(self.kind, Kind::Money(..)) {
            return "money";
        }
        if !matches!(self.kind, Kind::Real(..) | Kind::Above(..) | Kind::Integer(..)) {
            return "";
        }
        let bare = |suffix: &str| suffix.strip_prefix('_') == Some(self.name);
        let found = UNITS.iter().find(|(suffix, _)| self.name.ends_with(suffix) || bare(suffix));
        found.map_or("", |(_, unit)| unit)
    }

    /// The column's name in the book. Money is kept in whole thousandths there, and its name says so.
    pub fn sql_name(&self) -> String {
        match self.kind {
            Kind::Money(..) => format!("{}_milli", self.name),
            _ => self.name.to_owned(),
        }
    }

    /// The range in words, "" where there is none.
    pub fn range(&self) -> String {
        match self.kind {
            Kind::Id | Kind::Text | Kind::Date => String::new(),
            Kind::Choice(words) => words.join(" | "),
            Kind::Flag => "true | false".to_owned(),
            Kind::Integer(a, b) | Kind::Money(a, b) => format!("{a} … {b}"),
            Kind::IntegerOf(list) => {
                list.iter().map(ToString::to_string).collect::<Vec<_>>().join(" | ")
            }
            Kind::Real(a, b) => format!("{a} … {b}"),
            Kind::Above(a, b) => format!("above {a} … {b}"),
        }
    }

    /// Reads one cell. The text has its decimal sign already as a point.
    ///
    /// # Errors
    /// The reason, fit to stand behind `FILE:LINE: column: value:`.
    pub fn read(&self, text: &str) -> Result<Value, String> {
        let text = text.trim();
        if text.is_empty() {
            return if self.required {
                Err("is required and blank".to_owned())
            } else {
                Ok(Value::Blank)
            };
        }
        match self.kind {
            Kind::Id | Kind::Text => match text.chars().find(|c| c.is_control()) {
                Some(c) => Err(format!("holds the control character {c:?}; remove it")),
                None if text.chars().count() > 500 => {
                    Err("is longer than 500 characters".to_owned())
                }
                None => Ok(Value::Text(text.to_owned())),
            },
            Kind::Choice(words) => {
                let lower = text.to_lowercase();
                match words.iter().find(|w| **w == lower) {
                    Some(w) => Ok(Value::Text((*w).to_owned())),
                    None => Err(format!("is not one of {}", choices(words))),
                }
            }
            Kind::Flag => match text.to_lowercase().as_str() {
                "true" | "yes" | "1" => Ok(Value::Integer(1)),
                "false" | "no" | "0" => Ok(Value::Integer(0)),
                _ => Err("is not true or false".to_owned()),
            },
            Kind::Date => match chrono::NaiveDate::parse_from_str(text, "%Y-%m-%d") {
                Ok(date) => Ok(Value::Text(date.format("%Y-%m-%d").to_string())),
                Err(_) => Err("is not a date like 2027-03-31".to_owned()),
            },
            Kind::Integer(..) | Kind::IntegerOf(..) => {
                let number: f64 = number(text)?;
                if number.fract() != 0.0 || number.abs() > 9e15 {
                    return Err("is not a whole number".to_owned());
                }
                #[expect(clippy::cast_possible_truncation, reason = "whole and below 9e15")]
                self.check(Value::Integer(number as i64))
            }
            Kind::Real(..) | Kind::Above(..) => self.check(Value::Real(number(text)?)),
            Kind::Money(..) => self.check(Value::Money(Money::parse(text)?)),
        }
    }

    /// Holds a typed value against the range.
    ///
    /// # Errors
    /// The reason, with the range.
    pub fn check(&self, value: Value) -> Result<Value, String> {
        let inside = match (&self.kind, &value) {
            (Kind::Integer(a, b), Value::Integer(x)) => a <= x && x <= b,
            (Kind::IntegerOf(list), Value::Integer(x)) => list.contains(x),
            (Kind::Real(a, b), Value::Real(x)) => a <= x && x <= b,
            (Kind::Above(a, b), Value::Real(x)) => a < x && x <= b,
            (Kind::Money(a, b), Value::Money(m)) => a * 1000 <= m.0 && m.0 <= b * 1000,
            _ => true,
        };
        if inside {
            return Ok(value);
        }
        let unit = self.unit();
        let space = if unit.is_empty() { "" } else { " " };
        Err(format!("is outside {}{space}{unit}", self.range()))
    }
}

fn number(text: &str) -> Result<f64, String> {
    let number: f64 = text.parse().map_err(|_| "is not a number".to_owned())?;
    if number.is_nan() {
        return Err("is not a number; leave the cell blank where the value is unknown".to_owned());
    }
    if number.is_infinite() {
        return Err("is infinite or beyond the range of numbers".to_owned());
    }
    Ok(number)
}

/// The words of a choice as a reader says them: `a, b or c`.
pub fn choices(words: &[&str]) -> String {
    match words {
        [] => String::new(),
        [one] => (*one).to_owned(),
        [head @ .., last] => format!("{} or {last}", head.join(", ")),
    }
}

/// The known name nearest to a mistyped one, where one is near.
pub fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    known
        .into_iter()
        .map(|k| {
            let same = word.to_lowercase() == k.to_lowercase();
            (if same { 1.0 } else { strsim::jaro_winkler(word, k) }, k)
        })
        .filter(|(score, _)| *score > 0.75)
        .max_by(|a, b| a.0.total_cmp(&b.0))
        .map(|(_, k)| k)
}

/// A field type of a record: how it is read from and written to a [`Value`].
pub trait Cell: Sized {
    /// The field of a value; none where the kinds differ.
    fn from_value(value: &Value) -> Option<Self>;
    /// The value of the field.
    fn to_value(&self) -> Value;
    /// What an untouched field holds.
    fn blank() -> Self;
}

impl Cell for String {
    fn from_value(value: &Value) -> Option<Self> {
        if let Value::Text(t) = value { Some(t.clone()) } else { None }
    }
    fn to_value(&self) -> Value {
        Value::Text(self.clone())
    }
    fn blank() -> Self {
        Self::new()
    }
}

impl Cell for f64 {
    fn from_value(value: &Value) -> Option<Self> {
        if let Value::Real(x) = value { Some(*x) } else { None }
    }
    fn to_value(&self) -> Value {
        Value::Real(*self)
    }
    fn blank() -> Self {
        0.0
    }
}

impl Cell for i64 {
    fn from_value(value: &Value) -> Option<Self> {
        if let Value::Integer(x) = value { Some(*x) } else { None }
    }
    fn to_value(&self) -> Value {
        Value::Integer(*self)
    }
    fn blank() -> Self {
        0
    }
}

impl Cell for bool {
    fn from_value(value: &Value) -> Option<Self> {
        if let Value::Integer(x) = value { Some(*x != 0) } else { None }
    }
    fn to_value(&self) -> Value {
        Value::Integer(i64::from(*self))
    }
    fn blank() -> Self {
        false
    }
}

impl Cell for Money {
    fn from_value(value: &Value) -> Option<Self> {
        if let Value::Money(m) = value { Some(*m) } else { None }
    }
    fn to_value(&self) -> Value {
        Value::Money(*self)
    }
    fn blank() -> Self {
        Self(0)
    }
}

impl<T: Cell> Cell for Option<T> {
    fn from_value(value: &Value) -> Option<Self> {
        match value {
            Value::Blank => Some(None),
            other => T::from_value(other).map(Some),
        }
    }
    fn to_value(&self) -> Value {
        self.as_ref().map_or(Value::Blank, T::to_value)
    }
    fn blank() -> Self {
        None
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn money_is_exact_to_a_thousandth() {
        assert_eq!(Money::parse("12345.67"), Ok(Money(12_345_670)));
        assert_eq!(Money(12_345_670).amount(), 12_345.67);
        assert_eq!(Money(12_345_670).to_string(), "12345.67");
        assert_eq!(Money(-500).to_string(), "-0.5");
        assert!(Money::parse("0.0005").is_err());
        assert!(Money::parse("inf").is_err());
    }

    #[test]
    fn unit_is_the_suffix() {
        let column = |name| Column { name, ..Column::real(0.0, 1.0) };
        assert_eq!(column("rated_kva").unit(), "kVA");
        assert_eq!(column("energy_price_per_kwh").unit(), "/kWh");
        assert_eq!(column("no_load_loss_w").unit(), "W");
        assert_eq!(column("reference_temp_c").unit(), "°C");
    }
}
