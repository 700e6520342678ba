//! Trade calculations by name: the registry of the engine with results and steps as they are written in JSON.

use serde::Serialize;
use serde_json::{Map, Value};

use crate::engine::work::{Calc, Datum, known, named};
use crate::engine::working::flatten;
use crate::study::StudyError;
use crate::study::explain::StepRow;

/// A calculation that was run.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct WorkResult {
    pub calc: &'static str,
    pub inputs: Map<String, Value>,
    pub result: Map<String, Value>,
    pub steps: Vec<StepRow>,
    pub source: &'static str,
}

/// A calculation that can be run.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct CalcRow {
    pub calc: &'static str,
    pub summary: &'static str,
    pub inputs: Vec<InputRow>,
    pub source: &'static str,
}

/// An input of a calculation.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct InputRow {
    pub name: &'static str,
    pub unit: &'static str,
    pub required: bool,
    pub list: bool,
    pub default: &'static str,
    pub range: String,
    pub meaning: &'static str,
}

/// Runs a calculation with inputs written as `name=value`.
///
/// # Errors
/// What the engine refuses: an unknown calculation or input, a missing or impossible value.
pub fn work(calc: &str, inputs: &[String]) -> Result<WorkResult, StudyError> {
    let worked = named(calc)?.run(inputs)?;
    let map = |list: &[(&'static str, Datum)]| {
        list.iter().map(|(name, datum)| ((*name).to_owned(), json(datum))).collect()
    };
    // Parts before the whole, in one line: each step stands by itself.
    let steps = flatten(&worked.steps).into_iter().map(StepRow::alone).collect();
    Ok(WorkResult {
        calc: worked.calc,
        inputs: map(&worked.inputs),
        result: map(&worked.result),
        steps,
        source: worked.source,
    })
}

/// The calculations that can be run, in order; or the one that is named.
///
/// # Errors
/// An unknown calculation.
pub fn list(calc: Option<&str>) -> Result<Vec<CalcRow>, StudyError> {
    match calc {
        Some(key) => Ok(vec![row(named(key)?)]),
        None => Ok(known().map(row).collect()),
    }
}

fn row(calc: &Calc) -> CalcRow {
    let inputs = calc.inputs.iter().map(|input| InputRow {
        name: input.column.name,
        unit: input.column.unit(),
        required: input.column.required,
        list: input.list,
        default: input.default,
        range: input.column.range(),
        meaning: input.column.meaning,
    });
    CalcRow { calc: calc.key, summary: calc.summary, inputs: inputs.collect(), source: calc.source }
}

fn json(datum: &Datum) -> Value {
    match datum {
        Datum::Nothing => Value::Null,
        Datum::Number(number) => Value::from(*number),
        Datum::Numbers(numbers) => Value::from(numbers.clone()),
        Datum::Word(word) => Value::from(word.clone()),
        Datum::Words(words) => Value::from(words.clone()),
        Datum::Truth(truth) => Value::from(*truth),
    }
}
