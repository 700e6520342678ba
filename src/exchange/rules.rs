//! Rules that hold between the columns of one record. They judge the whole record: what a file brings, joined
//! with what the book already knows of it.

use crate::engine::columns::{Column, Value};
use crate::engine::loading::factors;
use crate::engine::transformer::vector_group::two_windings;

/// A rule between columns. What breaks it is said of the first of them.
#[derive(Debug)]
pub struct Rule {
    /// The columns it looks at.
    pub columns: &'static [&'static str],
    judge: fn(&[&Value]) -> Result<(), String>,
}

/// Most columns that one rule looks at.
const MOST: usize = 3;

/// Rules of units.
pub const UNITS: &[Rule] = &[LOSS_FACTOR, TOTAL_ABOVE_PARTS, VOLTAGES, TWO_WINDINGS];
/// Rules of offers.
pub const OFFERS: &[Rule] = &[VOLTAGES, TWO_WINDINGS];
/// Rules of lots.
pub const LOTS: &[Rule] = &[VOLTAGES, TWO_WINDINGS];
/// Rules of bids.
pub const BIDS: &[Rule] = &[LOAD_LOSS_KNOWN, TOTAL_ABOVE_PARTS, TWO_WINDINGS];
/// Where nothing holds between columns.
pub const NONE: &[Rule] = &[];

const LOSS_FACTOR: Rule = Rule {
    columns: &["loss_factor_pu", "load_factor_pu"],
    judge: |v| match (number(v[0]), number(v[1])) {
        (Some(lsf), Some(lf)) => factors::check(lf, lsf).map_err(|refusal| refusal.why),
        _ => Ok(()),
    },
};
const TOTAL_ABOVE_PARTS: Rule = Rule {
    columns: &["total_loss_w", "no_load_loss_w", "load_loss_w"],
    judge: |v| {
        let Some(total) = number(v[0]) else { return Ok(()) };
        let parts = [("no_load_loss_w", number(v[1])), ("load_loss_w", number(v[2]))];
        match parts.into_iter().find(|(_, part)| part.is_some_and(|part| total < part)) {
            Some((name, part)) => Err(format!(
                "is below {name} {}; the total is no-load plus load loss",
                part.unwrap_or_default()
            )),
            None => Ok(()),
        }
    },
};
const VOLTAGES: Rule = Rule {
    columns: &["hv_kv", "lv_kv"],
    judge: |v| match (number(v[0]), number(v[1])) {
        (Some(hv), Some(lv)) if lv > hv => {
            Err(format!("is below lv_kv {lv}: hv_kv and lv_kv look exchanged"))
        }
        _ => Ok(()),
    },
};
const TWO_WINDINGS: Rule = Rule {
    columns: &["vector_group"],
    judge: |v| match v[0] {
        Value::Text(group) => two_windings(group).map_err(|refusal| refusal.why),
        _ => Ok(()),
    },
};
const LOAD_LOSS_KNOWN: Rule = Rule {
    columns: &["load_loss_w", "total_loss_w"],
    judge: |v| match (v[0], v[1]) {
        (Value::Blank, Value::Blank) => {
            Err("is blank, and so is total_loss_w; one of the two is required".to_owned())
        }
        _ => Ok(()),
    },
};

fn number(value: &Value) -> Option<f64> {
    if let Value::Real(number) = value { Some(*number) } else { None }
}

/// Rules made ready for the columns of a record.
#[derive(Debug)]
pub struct Rules(Vec<(&'static Rule, Vec<usize>)>);

impl Rules {
    /// Finds the places of the columns that the rules look at.
    pub fn of(rules: &'static [Rule], columns: &[Column]) -> Self {
        let place = |name: &&str| columns.iter().position(|column| column.name == *name);
        let found = |rule: &Rule| rule.columns.iter().map(place).collect::<Option<Vec<_>>>();
        Self(rules.iter().filter_map(|rule| Some((rule, found(rule)?))).collect())
    }

    /// Holds a record against the rules; `broken` hears the place of the column and why.
    pub fn judge(&self, record: &[Value], mut broken: impl FnMut(usize, String)) {
        for (rule, places) in &self.0 {
            let mut values = [&Value::Blank; MOST];
            for (value, place) in values.iter_mut().zip(places) {
                *value = &record[*place];
            }
            if let Err(why) = (rule.judge)(&values) {
                broken(places[0], why);
            }
        }
    }
}
