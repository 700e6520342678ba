//! Every entry of `tests/reference/check-values.json` recomputed: published examples, library figures, self-checks.
//!
//! Each expected figure must be computed, through `work` where a calculation fits, and lie within the entry's
//! tolerance (or a tighter one, where the note gives it). An entry without a handler fails the test. Entries that only
//! publish figures are named as such. Run with `--nocapture` for the table: id, figure, expected, got, source.

#![expect(clippy::print_stdout, reason = "the table is for --nocapture")]

#[path = "check_values/grid.rs"]
mod grid;
#[path = "check_values/harness.rs"]
mod harness;
#[path = "check_values/heat.rs"]
mod heat;
#[path = "check_values/load.rs"]
mod load;
#[path = "check_values/losses.rs"]
mod losses;
#[path = "check_values/money.rs"]
mod money;
#[path = "check_values/owning.rs"]
mod owning;
#[path = "check_values/unit.rs"]
mod unit;

use harness::{Answers, Figures, Got, In, Outcome, work};
use serde_json::Value;

/// Whether a figure is the printed one in all of its digits, of which there are ten at least: some entries state
/// a tolerance below the last digit that they print.
fn rounds_to(got: f64, printed: &str) -> bool {
    let digits = printed.trim_start_matches(['0', '.', '-']).chars().filter(char::is_ascii_digit);
    let places = printed.split_once('.').map_or(0, |(_, fraction)| fraction.len());
    digits.count() >= 10 && format!("{got:.places$}") == printed
}

fn recompute(id: &str, i: &In) -> Outcome {
    match id {
        "T7-parallel-switching" => {
            let p = work!(
                "units-in-parallel",
                rated_kva = i.n("Sr_kVA"),
                no_load_loss_w = 1000.0 * i.n("P0_kW"),
                load_loss_w = 1000.0 * i.n("Pk_kW"),
            );
            let loads = p.l("switching_load_kva");
            Figures::of("switch_1_to_2_kVA", loads[0]).and("switch_2_to_3_kVA", loads[1]).into()
        }
        "T7-PEI" => {
            let p = work!(
                "peak-efficiency-index",
                rated_kva = i.n("Sr_kVA"),
                no_load_loss_w = 1000.0 * i.n("P0_kW"),
                no_load_cooling_w = 1000.0 * i.n("Pc0_kW"),
                load_loss_w = 1000.0 * i.n("Pk_kW"),
            );
            Figures::of("PEI", p.n("peak_efficiency_index_pct") / 100.0)
                .and("kPEI", p.n("load_at_index_pu"))
                .into()
        }
        _ if id.starts_with("T1-") || id.starts_with("T7-") => owning::owning_cost(id, i),
        _ if id.starts_with("T2-") => load::load(id, i),
        _ if id.starts_with("T3-") => unit::tests_and_efficiency(id, i),
        _ if id.starts_with("T4-") => losses::losses(id, i),
        _ if id.starts_with("T5-") => heat::heat(id, i),
        _ if id.starts_with("T6-") => money::money(id, i),
        _ => panic!("{id} has no handler: add one"),
    }
}

#[test]
fn every_check_value_is_recomputed() {
    let text = include_str!("reference/check-values.json");
    let entries: Vec<Value> = serde_json::from_str(text).expect("the file is JSON");
    assert_eq!(entries.len(), 76, "entries came or went: look at the new ones");
    let (mut compared, mut published, mut wrong) = (0, 0, Vec::new());
    println!("| entry | figure | expected | got | tolerance | source |\n|---|---|---|---|---|---|");
    for entry in &entries {
        let id = entry["id"].as_str().expect("an id");
        let source = entry["source"].as_str().expect("a source");
        let expected = entry["expected"].as_object().expect("expected figures");
        let relative = entry["tolerance_kind"] == "relative";
        let tolerance = entry["tolerance"].as_f64().expect("a tolerance");
        let figures = match recompute(id, &In(&entry["inputs"])) {
            Outcome::Figures(figures) => figures,
            Outcome::Published(why) => {
                for (name, value) in expected {
                    println!("| {id} | {name} | {value} | published only: {why} | | {source} |");
                }
                published += 1;
                continue;
            }
        };
        for name in figures.got.keys() {
            assert!(expected.contains_key(*name), "{id}: {name} is not expected");
        }
        for (name, value) in expected {
            let Some(got) = figures.got.get(name.as_str()) else {
                panic!("{id}: {name} is expected and was not computed")
            };
            let got = match got {
                Got::Word(word) => {
                    println!("| {id} | {name} | {value} | {word} | exact | {source} |");
                    if value != word.as_str() {
                        wrong.push(format!("{id} {name}: expected {value}, got {word}"));
                    }
                    compared += 1;
                    continue;
                }
                Got::Numbers(numbers) => numbers,
            };
            let limit = figures.tighter.get(name.as_str()).copied().unwrap_or(tolerance);
            assert!(limit <= tolerance, "{id}: {name} may only be held tighter");
            let wanted: Vec<f64> = match value {
                Value::Array(all) => all.iter().map(|v| v.as_f64().expect("a number")).collect(),
                one => vec![one.as_f64().expect("a number")],
            };
            let printed: Vec<String> = match value {
                Value::Array(all) => all.iter().map(ToString::to_string).collect(),
                one => vec![one.to_string()],
            };
            assert_eq!(wanted.len(), got.len(), "{id}: {name} has another length");
            for (n, (want, got)) in wanted.iter().zip(got).enumerate() {
                let place = if wanted.len() > 1 { format!("[{n}]") } else { String::new() };
                let kind = if relative { "relative" } else { "absolute" };
                println!("| {id} | {name}{place} | {want} | {got} | {limit} {kind} | {source} |");
                let off = (got - want).abs();
                let allowed = if relative { limit * want.abs() } else { limit };
                if off > allowed && !rounds_to(*got, &printed[n]) {
                    wrong
                        .push(format!("{id} {name}{place}: expected {want}, got {got}, off {off}"));
                }
                compared += 1;
            }
        }
    }
    println!("\n{compared} figures of {} entries, {published} published only", entries.len());
    assert!(wrong.is_empty(), "{} figures differ:\n{}", wrong.len(), wrong.join("\n"));
    assert_eq!(published, 2);
}
