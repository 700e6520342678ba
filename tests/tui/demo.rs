//! The demo fleet as a session of the dashboard, read straight from its files.

use std::collections::HashMap;
use std::path::Path;

use ironhum::engine::columns::{
    Basis, BasisSheet, Bid, Column, Lot, Offer, Tender, TenderRate, TenderSheet, Unit, Value,
};
use ironhum::engine::decision::fleet::FleetColumns;
use ironhum::engine::loading::{PriceSeries, Profile};
use ironhum::study::Desk;
use ironhum::study::unit::terminals;
use ironhum::tui::{JournalLine, Session};

fn path(file: &str) -> std::path::PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("demo-fleet").join(file)
}

fn table(file: &str) -> (Vec<String>, Vec<Vec<String>>) {
    let mut reader = csv::Reader::from_path(path(file)).unwrap();
    let owned = |record: &csv::StringRecord| record.iter().map(str::to_owned).collect();
    let head = owned(reader.headers().unwrap());
    (head, reader.records().map(|record| owned(&record.unwrap())).collect())
}

fn records<T>(file: &str, columns: &[Column], build: fn(&[Value]) -> Option<T>) -> Vec<T> {
    let (head, rows) = table(file);
    let record = |row: &Vec<String>| {
        let values: Vec<Value> = columns
            .iter()
            .map(|column| match head.iter().position(|name| name == column.name) {
                Some(at) => column.read(&row[at]).unwrap(),
                None => Value::Blank,
            })
            .collect();
        build(&values).unwrap()
    };
    rows.iter().map(record).collect()
}

fn from_toml<T>(table: &toml::Table, columns: &[Column], build: fn(&[Value]) -> Option<T>) -> T {
    let values: Vec<Value> = columns
        .iter()
        .map(|column| match table.get(column.name) {
            None => Value::Blank,
            Some(toml::Value::String(text)) => column.read(text).unwrap(),
            Some(other) => column.read(&other.to_string()).unwrap(),
        })
        .collect();
    build(&values).unwrap()
}

fn toml_file(file: &str) -> toml::Table {
    std::fs::read_to_string(path(file)).unwrap().parse().unwrap()
}

fn tender() -> TenderSheet {
    let table = toml_file("tender.toml");
    let rates = table.get("rates").and_then(toml::Value::as_table).into_iter().flatten();
    let lots = table.get("lot").and_then(toml::Value::as_array).into_iter().flatten();
    TenderSheet {
        tender: from_toml(&table, Tender::COLUMNS, Tender::from_values),
        rates: rates
            .map(|(code, rate)| TenderRate {
                currency: code.clone(),
                rate: rate.as_float().unwrap(),
            })
            .collect(),
        lots: lots
            .map(|lot| from_toml(lot.as_table().unwrap(), Lot::COLUMNS, Lot::from_values))
            .collect(),
        bids: records("bids.csv", Bid::COLUMNS, Bid::from_values),
        measured: Vec::new(),
    }
}

/// The demo fleet, repeated until there are at least `units` units.
pub(crate) fn session(units: usize) -> Session {
    let records_of_units = records("units.csv", Unit::COLUMNS, Unit::from_values);
    let offers = records("offers.csv", Offer::COLUMNS, Offer::from_values);
    let (head, rows) = table("profiles.csv");
    let column = |rows: &[Vec<String>], at: usize| -> Vec<f64> {
        rows.iter().map(|row| row[at].parse().unwrap()).collect()
    };
    let profiles = head.iter().enumerate().skip(1).map(|(at, name)| Profile {
        profile: name.clone(),
        step_minutes: 60,
        values: column(&rows, at),
    });
    let profiles: Vec<Profile> = profiles.collect();
    let (_, rows) = table("prices.csv");
    let series = PriceSeries {
        name: "ossemar-zone".to_owned(),
        step_minutes: 60,
        price_per_kwh: column(&rows, 1),
        co2_kg_per_kwh: Some(column(&rows, 2)),
        system_load: Some(column(&rows, 3)),
    };
    let basis = from_toml(&toml_file("basis.toml"), Basis::COLUMNS, Basis::from_values);
    let sheet = BasisSheet { basis, ranges: Vec::new(), budgets: Vec::new() };
    let empty =
        Desk::new(FleetColumns::default(), Vec::new(), profiles.clone(), Vec::new(), sheet.clone());
    let empty = empty.unwrap();
    let mut fleet = FleetColumns::default();
    for round in 0.. {
        for (n, unit) in records_of_units.iter().enumerate() {
            let name = match round {
                0 => unit.unit.clone(),
                round => format!("{}-{round:04}", unit.unit),
            };
            let row = i64::try_from(n).unwrap();
            fleet.push(&name, unit.site.as_deref(), row, terminals(unit), &empty.facts(unit));
        }
        if fleet.len() >= units {
            break;
        }
    }
    let desk = Desk::new(fleet, offers, profiles, vec![series], sheet).unwrap();
    let by_name: HashMap<String, Unit> =
        records_of_units.into_iter().map(|unit| (unit.unit.clone(), unit)).collect();
    Session {
        title: "demo.sqlite".to_owned(),
        desk,
        basis_source: "the book".to_owned(),
        tenders: vec![tender()],
        journal: journal(),
        record: Some(Box::new(move |unit| by_name.get(unit).cloned())),
    }
}

fn journal() -> Vec<JournalLine> {
    let line = |at: &str, what: &str, details: &str, source: &str, why: &str| JournalLine {
        at: at.to_owned(),
        who: "planner".to_owned(),
        what: what.to_owned(),
        details: details.to_owned(),
        source: source.to_owned(),
        why: why.to_owned(),
    };
    vec![
        line(
            "2026-11-20 09:12",
            "changed basis plan-2027",
            "discount_rate_pct: 5.5 to 6",
            "",
            "board decision of November",
        ),
        line("2026-11-16 14:40", "added 9 bids", "", "bids.csv", "opening of ol-2027-1"),
        line("2026-11-02 08:05", "changed unit ZE-0101", "peak_kva: 540 to 575", "units.csv", ""),
        line("2026-11-01 16:30", "added 246 units", "", "units.csv", "first import"),
    ]
}
