//! The 10,000-unit fleet of `benches/peers` through import and `rank --format json`, against the results that
//! numpy, numba, polars and DuckDB agree on to 1e-9 (`tests/peers/`; sources: the scripts in `benches/peers/`).

mod support;

use std::collections::HashMap;
use std::fs;

use serde_json::Value;
use support::{Program, csv_rows, data};

const BASIS: &str = r#"
name = "peers"
currency = "EUR"
first_year = 2026
horizon_years = 30
discount_rate_pct = 5
cash_flow = "mid-year"
price_series = "hourly"
energy_escalation_pct = 2
load_growth_years = 20
capital_recovery = "full"
latest_replacement_years = 15
offer_sizes_down = 1
offer_sizes_up = 1
"#;

fn fleet() -> Program {
    let program = Program::new();
    let hourly = csv_rows(&data("peers/hourly.csv"));
    let (header, rows) = (&hourly[0], &hourly[1..]);
    let mut profiles = format!("interval,{}\n", header[2..].join(","));
    let mut prices = "interval,price_per_kwh\n".to_owned();
    for (i, row) in rows.iter().enumerate() {
        profiles += &format!("{},{}\n", i + 1, row[2..].join(","));
        let price: f64 = row[1].parse().expect("a price");
        prices += &format!("{},{}\n", i + 1, price / 1000.0);
    }
    program.import("profiles", &program.write("profiles.csv", &profiles), &[]);
    program.import("prices", &program.write("prices.csv", &prices), &["--name", "hourly"]);
    let rename = ["--map", "item=offer", "--map", "price_eur=price", "--ignore-unknown"];
    program.import("offers", &data("peers/catalogue.csv"), &rename);
    program.import("basis", &program.write("basis.toml", BASIS), &[]);
    let rename = ["--map", "growth_pct=load_growth_pct"];
    program.import("units", &data("peers/fleet_10000.csv"), &rename);
    program
}

fn number(value: &Value) -> f64 {
    value.as_f64().expect("a number")
}

fn near(got: f64, want: &str) -> bool {
    let want: f64 = want.parse().expect("a number");
    (got - want).abs() <= 1e-9 * got.abs().max(want.abs())
}

#[test]
fn every_unit_equals_the_peers() {
    let program = fleet();
    let result = program.json(&["rank", "--format", "json"]);
    let units = result["units"].as_array().expect("rows");
    let rows = csv_rows(&data("peers/all_10000.csv"));
    assert_eq!(units.len(), 10_000);
    assert_eq!(rows.len() - 1, 10_000);
    let want: HashMap<&str, &Vec<String>> =
        rows[1..].iter().map(|row| (row[0].as_str(), row)).collect();
    for unit in units {
        let name = unit["unit"].as_str().expect("a name");
        let w = want[name];
        assert!(near(number(&unit["keep_pv"]), &w[1]), "{name} keep_pv");
        assert_eq!(unit["now_offer"].as_str(), Some(w[2].as_str()), "{name} now_offer");
        assert!(near(number(&unit["now_pv"]), &w[3]), "{name} now_pv");
        let never = w[4] == "-1";
        let year = (!never).then(|| w[4].parse::<u64>().expect("a year"));
        assert_eq!(unit["best_year_offset"].as_u64(), year, "{name} best_year_offset");
        let offer = (!never).then_some(w[5].as_str());
        assert_eq!(unit["best_offer"].as_str(), offer, "{name} best_offer");
        assert!(near(number(&unit["best_pv"]), &w[6]), "{name} best_pv");
        // A difference of present values: to 1e-9 of keep_pv.
        let saving: f64 = w[7].parse().expect("a number");
        let apart = (number(&unit["saving_pv"]) - saving).abs();
        assert!(apart <= 1e-9 * number(&unit["keep_pv"]), "{name} saving_pv");
    }
    // The order, of all and of a top.
    let top = csv_rows(&data("peers/top100_10000.csv"));
    let first = |units: &[Value]| -> Vec<String> {
        units.iter().take(100).map(|u| u["unit"].as_str().unwrap_or_default().to_owned()).collect()
    };
    let wanted: Vec<String> = top[1..].iter().map(|row| row[0].clone()).collect();
    assert_eq!(first(units), wanted);
    let short = program.json(&["rank", "--top", "100", "--format", "json"]);
    assert_eq!(first(short["units"].as_array().expect("rows")), wanted);
    assert_eq!(short["totals"], result["totals"]);

    let totals: Value =
        serde_json::from_str(&fs::read_to_string(data("peers/totals_10000.json")).expect("totals"))
            .expect("is JSON");
    assert_eq!(result["totals"]["units"], totals["units"]);
    assert_eq!(result["totals"]["units_saving"], totals["units_saving"]);
    for (ours, theirs) in
        [("keep_pv", "keep_pv"), ("best_pv", "best_pv"), ("saving_pv", "positive_saving")]
    {
        let want = totals[theirs].to_string();
        assert!(near(number(&result["totals"][ours]), &want), "total {ours}");
    }
}
