//! Whatever is typed behind `work CALC`: a result whose numbers are finite, or a refusal that says why. Never a panic.

use ironhum::engine::columns::Kind;
use ironhum::engine::work::{self, Calc, Input};
use proptest::prelude::*;

/// Values that people mistype, and ends of ranges.
const TYPED: &[&str] = &[
    "",
    "0",
    "-0",
    "1",
    "-1",
    "0.5",
    "0.8",
    "2",
    "3",
    "100",
    "1e-9",
    "1e9",
    "1e300",
    "-1e300",
    "nan",
    "inf",
    "1,2",
    "1,2,3",
    "3,",
    "x",
    "12.47",
    "400",
    "98.7",
    "0.999999999",
];

/// What could stand behind `name=`: a word of the input's own list, its default, or something typed.
fn text_for(input: &Input, pick: usize) -> String {
    let own: Vec<String> = match input.column.kind {
        Kind::Choice(words) => words.iter().map(ToString::to_string).collect(),
        Kind::IntegerOf(list) => list.iter().map(ToString::to_string).collect(),
        Kind::Real(a, b) | Kind::Above(a, b) => [a, b, f64::midpoint(a, b), a + (b - a) * 1e-6]
            .iter()
            .map(ToString::to_string)
            .collect(),
        Kind::Date => vec!["2015-07-01".to_owned(), "2024-02-29".to_owned()],
        Kind::Text => ["Dyn11", "YNa0", "eu-548-2014", "us-10cfr431", "ca-sor-2016-311"]
            .iter()
            .map(ToString::to_string)
            .collect(),
        _ => Vec::new(),
    };
    let pick = pick % (own.len() + TYPED.len());
    own.get(pick).cloned().unwrap_or_else(|| TYPED[pick - own.len()].to_owned())
}

fn calcs() -> Vec<&'static Calc> {
    work::known().collect()
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 20000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn every_input_is_answered(which in 0..1000usize, picks in prop::collection::vec((any::<bool>(), 0..1000usize), 40)) {
        let calcs = calcs();
        let calc = calcs[which % calcs.len()];
        let inputs: Vec<String> = calc
            .inputs
            .iter()
            .zip(&picks)
            .filter(|(input, (given, _))| *given || input.column.required)
            .map(|(input, (_, pick))| format!("{}={}", input.column.name, text_for(input, *pick)))
            .collect();
        match calc.run(&inputs) {
            Ok(worked) => {
                let json = serde_json::to_value(&worked).expect("plain values");
                prop_assert!(json["result"].as_object().is_some_and(|result| !result.is_empty()));
                prop_assert_eq!(json["calc"].as_str(), Some(calc.key));
            }
            Err(refusal) => prop_assert!(!refusal.why.is_empty() && !refusal.quantity.is_empty()),
        }
    }
}
