//! Units without losses: ranked and flagged where the basis has them estimated, told apart where that is impossible.

mod support;

use serde_json::Value;
use support::{Program, csv_rows, demo_fleet};

/// Units of the demo that have no peak, no shape of their load or are out of service are left out all the same.
const NOT_RANKED: &[&str] = &["ZE-0106", "QH-0101", "TO-0114", "OH-0108", "IS-0106"];

fn rows(result: &Value) -> &Vec<Value> {
    result["units"].as_array().expect("rows")
}

fn flagged(unit: &Value) -> bool {
    unit["flags"].as_array().expect("flags").iter().any(|flag| flag == "loss_estimated")
}

fn named<'a>(result: &'a Value, name: &str) -> &'a Value {
    rows(result).iter().find(|unit| unit["unit"] == name).unwrap_or_else(|| panic!("{name}"))
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

/// The demo's units of which no-load or load loss neither is stated nor follows from the total.
fn without_losses() -> Vec<String> {
    let rows = csv_rows(&demo_fleet("units.csv"));
    let at = |name: &str| rows[0].iter().position(|column| column == name).expect("a column");
    let (p0, pk, total) = (at("no_load_loss_w"), at("load_loss_w"), at("total_loss_w"));
    let missing = |row: &&Vec<String>| {
        let blank = [p0, pk, total].iter().filter(|&&column| row[column].is_empty()).count();
        blank >= 2
    };
    rows[1..].iter().filter(missing).map(|row| row[0].clone()).collect()
}

#[test]
fn the_demo_ranks_and_flags_units_without_losses() {
    let program = Program::new();
    program.import_demo();
    let missing = without_losses();
    assert_eq!(missing.len(), 19, "{missing:?}");
    let result = program.json(&["rank", "--format", "json"]);
    for unit in rows(&result) {
        let name = unit["unit"].as_str().expect("a name");
        assert_eq!(flagged(unit), missing.iter().any(|m| m == name), "{name}");
        let ranks = [&unit["rank_low"], &unit["rank_high"]];
        if flagged(unit) {
            assert!(ranks.iter().all(|rank| rank.as_u64().is_some()), "{unit}");
        } else {
            assert!(ranks.iter().all(|rank| rank.is_null()), "{unit}");
        }
    }
    let ranked = |name: &str| rows(&result).iter().any(|unit| unit["unit"] == name);
    let lost: Vec<&String> = missing.iter().filter(|name| !ranked(name)).collect();
    let reasons = result["left_out"].as_array().expect("left out");
    for name in lost {
        let why = reasons.iter().find(|row| row["unit"] == **name).expect("a reason");
        assert!(NOT_RANKED.contains(&name.as_str()), "{why}");
    }
    // Everywhere it appears.
    let losses = program.json(&["losses", "--format", "json"]);
    assert!(flagged(named(&losses, "ZE-0108")));
    let unit = program.json(&["unit", "ZE-0108", "--format", "json"]);
    assert!(flagged(&unit) && flagged(&unit["keep_or_replace"]));
    let text = program.done(&["unit", "ZE-0108"]);
    assert!(text.contains("Estimated no_load_loss_w: ") && text.contains("! loss_estimated: "));
    assert!(program.done(&["rank"]).contains("with estimated losses"));
}

/// The places at the ends, against a book in which the unit states the losses of that end: the others as they were.
#[test]
fn the_places_at_the_ends_are_those_of_stated_losses() {
    let program = Program::new();
    program.import_demo();
    let result = program.json(&["rank", "--format", "json"]);
    let mut moved = 0;
    // Nothing known, no no-load loss, only a total.
    for name in ["ZE-0101", "ZE-0108", "BR-0118"] {
        let dossier = program.json(&["unit", name, "--format", "json"]);
        let estimated = &dossier["estimated"];
        let stated = |key: &str| dossier["nameplate"][key].as_f64();
        let row = named(&result, name);
        for (end, key) in [("low_w", "rank_low"), ("high_w", "rank_high")] {
            let of = |loss: &str| estimated[loss][end].as_f64().or_else(|| stated(loss));
            let p0 = of("no_load_loss_w").expect("estimated or stated");
            let pk = of("load_loss_w")
                .or_else(|| Some(stated("total_loss_w")? - p0))
                .expect("estimated, stated or what the total leaves");
            let other = Program::new();
            other.import_demo();
            let units = format!(
                "unit,rated_kva,no_load_loss_w,load_loss_w\n{name},{},{p0},{pk}\n",
                stated("rated_kva").expect("a rating")
            );
            other.import("units", &other.write("one.csv", units), &[]);
            let now = other.json(&["rank", "--format", "json"]);
            let now = named(&now, name);
            assert!(!flagged(now), "{now}");
            let saving = number(&now["saving_pv"]);
            let ahead = rows(&result).iter().filter(|other| {
                let saved = number(&other["saving_pv"]);
                other["unit"] != name
                    && (saved > saving || saved == saving && other["unit"].as_str() < Some(name))
            });
            let place = 1 + ahead.count() as u64;
            assert_eq!(row[key].as_u64(), Some(place), "{name} {key}");
            moved += u64::from(row["rank"].as_u64() != Some(place));
        }
    }
    assert!(moved > 0, "the ends make a difference");
}

const BASIS: &str = "name = \"plan\"\ncurrency = \"EUR\"\nfirst_year = 2027\nhorizon_years = 20\n\
    discount_rate_pct = 6\nenergy_price_per_kwh = 0.1\ncapital_recovery = \"full\"\n";
const OFFER: &str = "offer,rated_kva,no_load_loss_w,load_loss_w,price\nO,100,100,1200,5000\n";

fn left_out(units: &str, basis: &str) -> Vec<(String, String)> {
    let program = Program::new();
    program.import("offers", &program.write("offers.csv", OFFER), &[]);
    program.import("basis", &program.write("basis.toml", basis), &[]);
    let header = "unit,rated_kva,no_load_loss_w,load_loss_w,total_loss_w,peak_kva,loss_factor_pu\n";
    program.import("units", &program.write("units.csv", format!("{header}{units}")), &[]);
    let result = program.json(&["rank", "--format", "json"]);
    let text = |row: &Value, key: &str| row[key].as_str().expect("text").to_owned();
    let rows = result["left_out"].as_array().expect("rows");
    rows.iter().map(|row| (text(row, "unit"), text(row, "why"))).collect()
}

#[test]
fn what_is_left_out_says_what_to_do() {
    let asked = format!("{BASIS}estimate_missing = true\n");
    let known = |sizes: &[u32]| -> String {
        let row = |(n, kva): (usize, &u32)| format!("K{n},{kva},{kva},{},,50,0.3\n", 10 * kva);
        sizes.iter().enumerate().map(row).collect()
    };
    let blank = "X,100,,,,50,0.3\n";
    let sizes = [50, 100, 160, 250, 400];

    let why = &left_out(&format!("{}{blank}", known(&sizes)), BASIS);
    assert_eq!(why.len(), 1);
    assert!(why[0].1.contains("set estimate_missing in the basis"), "{why:?}");

    assert_eq!(left_out(&format!("{}{blank}", known(&sizes)), &asked), []);
    for (units, word) in [
        (format!("{}{blank}", known(&sizes[..4])), "fewer than 5 units"),
        (format!("{}{blank}", known(&[100; 6])), "of one rating"),
        (format!("{}X,801,,,,50,0.3\n", known(&sizes)), "above twice"),
        (format!("{}X,100,,,20,50,0.3\n", known(&sizes)), "total_loss_w is below one of its parts"),
    ] {
        let why = left_out(&units, &asked);
        assert_eq!(why.len(), 1, "{why:?}");
        assert_eq!(why[0].0, "X");
        assert!(why[0].1.contains(word) && !why[0].1.contains("set estimate_missing"), "{why:?}");
    }
}
