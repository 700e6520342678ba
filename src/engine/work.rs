//! The trade calculations that can be called by name with `name=value` inputs, each with its working shown.
//!
//! One registry: a [`Calc`] states its inputs (the same column facts as files have), its source, and the function that
//! runs the scalar formulas of the engine. Command help, documentation and the list of calculations are read from it.
//! Inputs that may mean two things are asked back instead of guessed ([`Calc::asks`]).
//!
//! ```
//! use ironhum::engine::work;
//! let worked = work::run("efficiency", &["rated_kva=150", "no_load_loss_w=1400", "load_loss_w=1600"])?;
//! let best = worked.number("best_load_kva").expect("a number");
//! assert!((best - 140.312).abs() < 1e-3);
//! assert!(work::run("efficiency", &["rated_kav=150"]).is_err());
//! # Ok::<(), ironhum::engine::Refusal>(())
//! ```

mod grid;
mod heat;
mod input;
mod iron;
mod legal;
mod load;
mod money;
mod nameplate;
mod owning;
mod shape;

use crate::engine::Refusal;
use crate::engine::columns::{Value, nearest};
use crate::engine::working::{Step, Working, flatten};

pub use input::Input;
pub use owning::Paid;

/// A value that goes into or comes out of a calculation.
#[derive(Clone, Debug, PartialEq)]
pub enum Datum {
    /// There is none (no payback, no reactance).
    Nothing,
    /// A number.
    Number(f64),
    /// Numbers in order.
    Numbers(Vec<f64>),
    /// A word or a sentence.
    Word(String),
    /// Words or sentences in order.
    Words(Vec<String>),
    /// Yes or no.
    Truth(bool),
}

impl From<f64> for Datum {
    fn from(value: f64) -> Self {
        Self::Number(value)
    }
}
impl From<Option<f64>> for Datum {
    fn from(value: Option<f64>) -> Self {
        value.map_or(Self::Nothing, Self::Number)
    }
}
impl From<Vec<f64>> for Datum {
    fn from(value: Vec<f64>) -> Self {
        Self::Numbers(value)
    }
}
impl From<&str> for Datum {
    fn from(value: &str) -> Self {
        Self::Word(value.to_owned())
    }
}
impl From<Vec<String>> for Datum {
    fn from(value: Vec<String>) -> Self {
        Self::Words(value)
    }
}
impl From<bool> for Datum {
    fn from(value: bool) -> Self {
        Self::Truth(value)
    }
}

/// What a calculation gives: values by name, in order; the unit is the suffix of the name.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Results(pub Vec<(&'static str, Datum)>);

impl Results {
    /// One value more.
    #[must_use]
    fn and(mut self, name: &'static str, value: impl Into<Datum>) -> Self {
        self.0.push((name, value.into()));
        self
    }
}

/// Starts the results with one value.
fn result(name: &'static str, value: impl Into<Datum>) -> Results {
    Results::default().and(name, value)
}

/// A calculation.
#[derive(Clone, Copy, Debug)]
pub struct Calc {
    /// Its name on the command line.
    pub key: &'static str,
    /// What it gives, in a line.
    pub summary: &'static str,
    /// Where its formulas are published.
    pub source: &'static str,
    /// Its inputs, in order.
    pub inputs: &'static [Input],
    /// Names that may mean two things, with the question that is asked back.
    pub asks: &'static [(&'static str, &'static str)],
    run: fn(&[Vec<Value>], &mut Working) -> Result<Results, Refusal>,
}

/// A calculation that was run.
#[derive(Clone, Debug, PartialEq)]
pub struct Worked {
    /// Key of the calculation.
    pub calc: &'static str,
    /// All inputs, defaults included; what was left out and has no default is absent.
    pub inputs: Vec<(&'static str, Datum)>,
    /// The results.
    pub result: Vec<(&'static str, Datum)>,
    /// The steps, parts inside the whole; [`crate::engine::working::flatten`] puts them in one line.
    pub steps: Vec<Step>,
    /// Where the formulas are published.
    pub source: &'static str,
}

impl Worked {
    /// A result by its name.
    pub fn get(&self, name: &str) -> Option<&Datum> {
        self.result.iter().find(|(n, _)| *n == name).map(|(_, datum)| datum)
    }
    /// A result that is a number.
    pub fn number(&self, name: &str) -> Option<f64> {
        match self.get(name) {
            Some(Datum::Number(value)) => Some(*value),
            _ => None,
        }
    }
    /// A result that is a list of numbers; none else.
    pub fn numbers(&self, name: &str) -> Option<&[f64]> {
        match self.get(name) {
            Some(Datum::Numbers(values)) => Some(values),
            _ => None,
        }
    }
}

/// Every calculation, in the order in which they are listed.
pub fn known() -> impl Iterator<Item = &'static Calc> {
    [nameplate::CALCS, iron::CALCS, grid::CALCS, load::CALCS, owning::CALCS, money::CALCS]
        .into_iter()
        .chain([heat::CALCS, legal::CALCS])
        .flatten()
}

/// The calculation of a key.
///
/// # Errors
/// A key that is not known; the message names the nearest.
pub fn named(key: &str) -> Result<&'static Calc, Refusal> {
    known().find(|calc| calc.key == key).ok_or_else(|| {
        let near = nearest(key, known().map(|calc| calc.key));
        let why = match near {
            Some(near) => format!("is not a known calculation; the nearest is {near}"),
            None => "is not a known calculation; `work` alone lists them".to_owned(),
        };
        Refusal::new("calc", key, why)
    })
}

/// Runs a calculation with inputs written as `name=value`, lists as `name=1,2,3`.
///
/// # Errors
/// An unknown calculation or input, an input that is missing, repeated or out of range, and whatever the formulas refuse.
pub fn run<S: AsRef<str>>(key: &str, inputs: &[S]) -> Result<Worked, Refusal> {
    named(key)?.run(inputs)
}

impl Calc {
    /// Runs the calculation; see [`run`].
    ///
    /// # Errors
    /// As [`run`].
    pub fn run<S: AsRef<str>>(&'static self, inputs: &[S]) -> Result<Worked, Refusal> {
        let mut texts: Vec<Option<&str>> = vec![None; self.inputs.len()];
        for pair in inputs {
            let (name, text) = self.place(pair.as_ref())?;
            if texts[name].replace(text).is_some() {
                let why = "is given twice; give it once (lists are separated by commas)";
                return Err(Refusal::new("input", self.inputs[name].column.name, why));
            }
        }
        let mut values = Vec::with_capacity(self.inputs.len());
        let mut given = Vec::new();
        for (input, text) in self.inputs.iter().zip(texts) {
            let read = input.read(text)?;
            if let Some(datum) = input.datum(&read) {
                given.push((input.column.name, datum));
            }
            values.push(read);
        }
        let mut working = Working::default();
        let Results(result) = (self.run)(&values, &mut working)?;
        let steps = working.into_steps();
        let numbers = result.iter().flat_map(|(_, datum)| match datum {
            Datum::Number(x) => std::slice::from_ref(x),
            Datum::Numbers(all) => all,
            _ => &[],
        });
        let values = flatten(&steps).into_iter().map(|step| step.value);
        if !numbers.copied().chain(values).all(f64::is_finite) {
            let why = "leaves the range of numbers with these inputs; check their sizes and units";
            return Err(Refusal::new("result", "", why));
        }
        Ok(Worked { calc: self.key, inputs: given, result, steps, source: self.source })
    }

    /// The place of the input that a `name=value` names, and its text.
    fn place<'a>(&self, pair: &'a str) -> Result<(usize, &'a str), Refusal> {
        let Some((name, text)) = pair.split_once('=') else {
            let why = format!("is not name=value; inputs of {} are {}", self.key, self.names());
            return Err(Refusal::new("input", pair, why));
        };
        let name = name.trim();
        if let Some(n) = self.inputs.iter().position(|input| input.column.name == name) {
            return Ok((n, text));
        }
        if let Some((_, question)) = self.asks.iter().find(|(ask, _)| *ask == name) {
            return Err(Refusal::new("input", name, *question));
        }
        let near = nearest(name, self.inputs.iter().map(|input| input.column.name));
        let near = near.map_or(String::new(), |near| format!("; the nearest is {near}"));
        let why = format!("is not an input of {}{near}; its inputs are {}", self.key, self.names());
        Err(Refusal::new("input", name, why))
    }

    fn names(&self) -> String {
        let names: Vec<&str> = self.inputs.iter().map(|input| input.column.name).collect();
        names.join(", ")
    }
}

#[cfg(test)]
mod tests;
