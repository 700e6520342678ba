//! `voltage_model = "drop"` through the program: ranking and dossier agree, unknown impedances are flagged, and what
//! cannot be carried is left out or not open. Energies against numpy: `tests/public_input.rs`.

mod support;

use std::fs;

use serde_json::Value;
use support::{Program, demo_fleet};

fn demo(voltage: &str) -> Program {
    let program = Program::new();
    program.import_demo();
    let basis = fs::read_to_string(demo_fleet("basis.toml")).expect("the demo's basis");
    let basis = basis.replace("stray_share_pu", &format!("{voltage}stray_share_pu"));
    program.import("basis", &program.write("drop.toml", basis), &[]);
    program
}

fn rows(result: &Value) -> &Vec<Value> {
    result["units"].as_array().expect("rows")
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

fn flags(unit: &Value, flag: &str) -> bool {
    unit["flags"].as_array().expect("flags").iter().any(|f| f == flag)
}

#[test]
fn ranking_and_dossiers_agree() {
    let program = demo("voltage_model = \"drop\"\noperating_voltage_pu = 1.01\n");
    let rated = demo("");
    let (result, plain) =
        (program.json(&["rank", "--format", "json"]), rated.json(&["rank", "--format", "json"]));
    assert_eq!(
        (&result["voltage_model"], &plain["voltage_model"]),
        (&"drop".into(), &"rated".into())
    );
    assert_eq!(rows(&result).len(), rows(&plain).len());
    for unit in rows(&result).iter().step_by(7) {
        let name = unit["unit"].as_str().expect("a name");
        let dossier = program.json(&["unit", name, "--format", "json"]);
        let own = &dossier["keep_or_replace"];
        for key in ["keep_pv", "best_pv", "saving_pv", "now_pv"] {
            let (a, b) = (unit[key].as_f64(), own[key].as_f64());
            let near = |a: f64, b: f64| (a - b).abs() <= 1e-9 * number(&unit["keep_pv"]);
            assert!(a.zip(b).map_or(a == b, |(a, b)| near(a, b)), "{name} {key}: {a:?} {b:?}");
        }
        for key in ["best_offer", "best_year", "now_offer"] {
            assert_eq!(unit[key], own[key], "{name} {key}");
        }
        let of = |result: &Value| {
            let unit = rows(result).iter().find(|unit| unit["unit"] == name).expect("ranked");
            number(&unit["keep_pv"])
        };
        // Iron rises with the square of the voltage; copper falls with it and rises with the drop.
        assert!((of(&result) / of(&plain) - 1.0).abs() < 0.05, "{name}");
        assert_ne!(of(&result), of(&plain), "{name}");
    }
    let text = program.done(&["rank", "--top", "1"]);
    assert!(text.contains("voltage_model drop"), "{text}");
    assert!(rated.done(&["unit", "FE-0113"]).contains("voltage_model rated"));
}

const BASIS: &str = "name = \"plan\"\ncurrency = \"EUR\"\nfirst_year = 2027\nhorizon_years = 20\n\
    discount_rate_pct = 6\nenergy_price_per_kwh = 0.1\ncapital_recovery = \"full\"\nvoltage_model = \"drop\"\n";
const OFFERS: &str = "offer,rated_kva,impedance_pct,no_load_loss_w,load_loss_w,price\n";
const UNITS: &str = "unit,rated_kva,impedance_pct,no_load_loss_w,load_loss_w,peak_kva,loss_factor_pu,power_factor\n";

fn ranked(offers: &str, units: &str) -> Value {
    let program = Program::new();
    program.import("offers", &program.write("offers.csv", format!("{OFFERS}{offers}")), &[]);
    program.import("basis", &program.write("basis.toml", BASIS), &[]);
    program.import("units", &program.write("units.csv", format!("{UNITS}{units}")), &[]);
    program.json(&["rank", "--format", "json"])
}

#[test]
fn what_cannot_be_carried_is_left_out_or_not_open() {
    let offers = "small,40,40,60,700,1\nfit,400,4,300,3000,9000\n";
    let units = "heavy,100,30,300,1800,500,0.3,0.8\nsound,400,4,900,5000,300,0.3,0.9\n";
    let result = ranked(offers, units);
    let out = result["left_out"].as_array().expect("rows");
    assert_eq!((out.len(), &out[0]["unit"]), (1, &"heavy".into()));
    assert!(out[0]["why"].as_str().expect("text").contains("voltage would collapse"), "{out:?}");
    // The small one costs next to nothing, and could not hold the voltage.
    let sound = &rows(&result)[0];
    assert_eq!(sound["now_offer"], "fit", "{sound}");
    let only_small = ranked("small,40,40,60,700,1\n", units);
    let why = only_small["left_out"].to_string();
    assert!(why.contains("no offer fits") && why.contains("voltage drop"), "{why}");
}

#[test]
fn impedances_that_are_not_known_are_flagged() {
    let known = "fit,400,4,300,3000,9000\n";
    let unit = |z: &str| format!("U,400,{z},900,5000,300,0.3,0.9\n");
    let flagged = |offers: &str, z: &str| {
        let result = ranked(offers, &unit(z));
        let unit = &rows(&result)[0];
        (flags(unit, "impedance_unknown"), flags(unit, "offer_impedance_unknown"))
    };
    assert_eq!(flagged(known, "4"), (false, false));
    assert_eq!(flagged(known, ""), (true, false));
    // 5000 W on 400 kVA are 1.25 % of resistance.
    assert_eq!(flagged(known, "1.2"), (true, false));
    assert_eq!(flagged("fit,400,,300,3000,9000\n", "4"), (false, true));
}
