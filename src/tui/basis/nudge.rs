//! One step of an assumption: how large it is, where a blank starts, where it ends.

use crate::engine::columns::{Basis, Column, Kind, Value};
use crate::study::Desk;
use crate::tui::bar::round_scale;
use crate::tui::words::unit_of;

/// The value of assumption number `at` after some steps.
///
/// # Errors
/// Why it cannot be moved.
pub(super) fn moved(
    column: &Column,
    stored: &Value,
    draft: &[Value],
    at: usize,
    desk: &Desk,
    steps: i32,
    large: bool,
) -> Result<Value, String> {
    let tenfold = if large { 10 } else { 1 };
    let by = i64::from(steps * tenfold);
    let value = match &draft[at] {
        Value::Blank => start(column, draft),
        value => value.clone(),
    };
    let about = if let Value::Real(x) = stored { *x } else { 0.0 };
    let next = match (column.kind, &value) {
        (Kind::Choice(words), Value::Text(word)) => {
            Value::Text(turn(words, word, steps).to_owned())
        }
        (Kind::Choice(words), _) => Value::Text(turn(words, column.blank, steps).to_owned()),
        (Kind::Flag, Value::Integer(n)) => Value::Integer(1 - n),
        (Kind::Flag, _) => Value::Integer(1),
        (Kind::Id, Value::Text(name)) if column.name == "price_series" => {
            let names: Vec<&str> = desk.series.iter().map(|s| s.name.as_str()).collect();
            if names.len() < 2 {
                return Err("The book holds no other price series.".to_owned());
            }
            Value::Text(turn(&names, name, steps).to_owned())
        }
        (Kind::Integer(least, most), Value::Integer(n)) => {
            Value::Integer((n + by).clamp(least, most))
        }
        (Kind::Real(least, most), Value::Real(x)) => {
            Value::Real(stepped(column, about, *x, by).clamp(least, most))
        }
        (Kind::Above(least, most), Value::Real(x)) => {
            let next = stepped(column, about, *x, by).min(most);
            Value::Real(if next > least { next } else { *x })
        }
        (_, Value::Blank) if column.name == "energy_price_per_kwh" => {
            return Err("A price series is named; the flat price is not used.".to_owned());
        }
        (_, Value::Blank) => {
            return Err(
                "It is blank and has no number to start from; set it in the basis file.".to_owned()
            );
        }
        _ => return Err("It is changed in the basis file only.".to_owned()),
    };
    if next == value {
        return Err(format!("That is the end of its range: {}.", column.range()));
    }
    Ok(next)
}

fn turn<'a>(words: &[&'a str], word: &str, steps: i32) -> &'a str {
    let len = i32::try_from(words.len()).unwrap_or(1).max(1);
    let at =
        words.iter().position(|w| *w == word).and_then(|at| i32::try_from(at).ok()).unwrap_or(0);
    usize::try_from((at + steps).rem_euclid(len))
        .ok()
        .and_then(|n| words.get(n))
        .copied()
        .unwrap_or("")
}

/// Where a blank starts: at its default, where that is a number.
fn start(column: &Column, draft: &[Value]) -> Value {
    let of = |name: &str| {
        let at = Basis::COLUMNS.iter().position(|c| c.name == name);
        at.and_then(|at| draft.get(at)).cloned().unwrap_or(Value::Blank)
    };
    match (column.blank, column.kind) {
        ("horizon_years", _) => of("horizon_years"),
        ("horizon_years − 1", _) => match of("horizon_years") {
            Value::Integer(n) => Value::Integer(n - 1),
            other => other,
        },
        (number, Kind::Real(..) | Kind::Above(..)) => {
            number.parse().map_or(Value::Blank, Value::Real)
        }
        _ => Value::Blank,
    }
}

/// A step: one of a round size that suits the unit, or a hundredth of a round size about the stored value.
fn step(column: &Column, stored: f64) -> f64 {
    match unit_of(column) {
        "%" => 0.1,
        "years" => 1.0,
        "h" => 10.0,
        "/kWh" => 0.001,
        "pu" | "kg/kWh" => 0.01,
        _ if stored > 0.0 => round_scale(stored) / 100.0,
        _ => 1.0,
    }
}

/// A value after some steps; `stored` is what the step suits.
pub(in crate::tui) fn stepped(column: &Column, stored: f64, value: f64, by: i64) -> f64 {
    #[expect(clippy::cast_precision_loss, reason = "a few steps")]
    let next = value + by as f64 * step(column, stored);
    // The decimals of a step, not those of its sum in binary.
    (next * 1e9).round() / 1e9
}
