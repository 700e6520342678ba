//! What the check values share: the inputs of an entry, running a calculation, the figures that come out.

use std::collections::BTreeMap;

use ironhum::engine::work::{Worked, run};
use serde_json::Value;

/// What an entry gives when recomputed.
pub(crate) enum Outcome {
    /// The figures by name, and tighter tolerances for some of them.
    Figures(Figures),
    /// The entry only publishes figures; why nothing can be computed from it.
    Published(&'static str),
}

#[derive(Default)]
pub(crate) struct Figures {
    pub(crate) got: BTreeMap<&'static str, Got>,
    pub(crate) tighter: BTreeMap<&'static str, f64>,
}

pub(crate) enum Got {
    Numbers(Vec<f64>),
    Word(String),
}

impl Figures {
    pub(crate) fn of(name: &'static str, value: f64) -> Self {
        Self::default().and(name, value)
    }
    pub(crate) fn and(self, name: &'static str, value: f64) -> Self {
        self.list(name, &[value])
    }
    pub(crate) fn list(mut self, name: &'static str, values: &[f64]) -> Self {
        assert!(self.got.insert(name, Got::Numbers(values.to_vec())).is_none(), "{name} twice");
        self
    }
    pub(crate) fn word(mut self, name: &'static str, word: &str) -> Self {
        self.got.insert(name, Got::Word(word.to_owned()));
        self
    }
    pub(crate) fn tighter(mut self, name: &'static str, tolerance: f64) -> Self {
        self.tighter.insert(name, tolerance);
        self
    }
}

impl From<Figures> for Outcome {
    fn from(figures: Figures) -> Self {
        Self::Figures(figures)
    }
}

/// The inputs of an entry.
pub(crate) struct In<'a>(pub(crate) &'a Value);

impl In<'_> {
    pub(crate) fn n(&self, name: &str) -> f64 {
        self.0[name].as_f64().unwrap_or_else(|| panic!("input {name} of {}", self.0))
    }
    pub(crate) fn list(&self, name: &str) -> Vec<f64> {
        let values = self.0[name].as_array().unwrap_or_else(|| panic!("input {name}"));
        values.iter().map(|v| v.as_f64().expect("a number")).collect()
    }
}

/// An input of a calculation.
pub(crate) enum Arg {
    Number(f64),
    Numbers(Vec<f64>),
    Word(&'static str),
}
impl From<f64> for Arg {
    fn from(x: f64) -> Self {
        Self::Number(x)
    }
}
impl From<Vec<f64>> for Arg {
    fn from(x: Vec<f64>) -> Self {
        Self::Numbers(x)
    }
}
impl From<&'static str> for Arg {
    fn from(x: &'static str) -> Self {
        Self::Word(x)
    }
}

pub(crate) fn worked(calc: &str, inputs: Vec<(&str, Arg)>) -> Worked {
    let text = |arg| match arg {
        Arg::Number(x) => x.to_string(),
        Arg::Numbers(all) => all.iter().map(f64::to_string).collect::<Vec<_>>().join(","),
        Arg::Word(word) => word.to_owned(),
    };
    let pairs: Vec<String> =
        inputs.into_iter().map(|(name, arg)| format!("{name}={}", text(arg))).collect();
    let worked = run(calc, &pairs).unwrap_or_else(|refusal| panic!("{calc}: {refusal}"));
    assert!(!worked.steps.is_empty(), "{calc} shows no working");
    worked
}

/// Runs a calculation: `work!("efficiency", rated_kva = 150.0, …)`.
macro_rules! work {
    ($calc:literal $(, $name:ident = $value:expr)* $(,)?) => {
        $crate::harness::worked(
            $calc,
            vec![$((stringify!($name), $crate::harness::Arg::from($value))),*],
        )
    };
}
pub(crate) use work;

pub(crate) trait Answers {
    fn n(&self, name: &str) -> f64;
    fn l(&self, name: &str) -> Vec<f64>;
}
impl Answers for Worked {
    fn n(&self, name: &str) -> f64 {
        self.number(name).unwrap_or_else(|| panic!("{} has no number {name}", self.calc))
    }
    fn l(&self, name: &str) -> Vec<f64> {
        self.numbers(name).unwrap_or_else(|| panic!("{} has no list {name}", self.calc)).to_vec()
    }
}

pub(crate) fn least(values: &[f64]) -> f64 {
    values.iter().copied().fold(f64::INFINITY, f64::min)
}

/// A source's wrong figure must not come out.
pub(crate) fn not_the_wrong_one(id: &str, got: f64, wrong: f64) {
    assert!((got / wrong - 1.0).abs() > 1e-3, "{id}: {got} is the known error {wrong}");
}
