//! Records: units, test reports, offers, bids, measured units.

use ironhum::engine::columns::{Column, Kind, Unit};
use ironhum::engine::columns::{Money, Value};
use ironhum::study::intake::{Options, What};
use proptest::prelude::*;

use crate::support::{Desk, actor, problems};

#[test]
fn the_demo_fleet_comes_in_and_a_second_time_changes_nothing() {
    let mut desk = Desk::demo();
    let counts = desk.book.counts().expect("counts");
    assert!(counts.units > 100 && counts.profiles == 8 && counts.bids > 0 && counts.measured > 0);
    assert_eq!(counts.journal, 12, "one entry for new rows of each kind");
    let before = desk.dump();
    for (what, file) in [
        (What::Profiles, "profiles.csv"),
        (What::Prices, "prices.csv"),
        (What::Units, "units.csv"),
        (What::Offers, "offers.csv"),
        (What::Basis, "basis.toml"),
        (What::Tender, "tender.toml"),
        (What::Bids, "bids.csv"),
        (What::Measured, "measured.csv"),
    ] {
        let report = desk.demo_file(what, file);
        assert!(report.stored, "{file}");
        assert_eq!((report.tally.new, report.tally.changed), (0, 0), "{file}");
        assert!(report.tally.same > 0, "{file}");
    }
    assert_eq!(desk.dump(), before);
}

#[test]
fn identifiers_are_text_and_blanks_are_unknown() {
    let mut desk = Desk::empty();
    let report = desk.text(
        What::Units,
        "u.csv",
        "unit,rated_kva,no_load_loss_w,in_service,failure_cost\n007,400,,YES,12.5\n7,1e3,0,no,\nT1,25,,,\n",
    );
    assert!(report.stored, "{}", problems(&report));
    let units = desk.book.units().expect("units");
    let names: Vec<&str> = units.iter().map(|unit| unit.unit.as_str()).collect();
    assert_eq!(names, ["007", "7", "T1"]);
    assert_eq!(units[0].no_load_loss_w, None);
    assert_eq!(units[0].failure_cost, Some(Money(12_500)));
    assert_eq!((units[1].rated_kva, units[1].no_load_loss_w), (1000.0, Some(0.0)));
}

#[test]
fn a_trial_says_what_would_change_and_stores_nothing() {
    let mut desk = Desk::empty();
    let text = "unit,rated_kva\na,400\nb,630\n";
    let trial = || Options { dry_run: true, ..Options::default() };
    let before = desk.dump();
    let report = desk.bytes(What::Units, "u.csv", text.as_bytes(), trial());
    assert_eq!((report.tally.new, report.stored, report.rejected), (2, false, false));
    assert_eq!(desk.dump(), before);
    assert!(desk.text(What::Units, "u.csv", text).stored);
    let report = desk.bytes(What::Units, "u.csv", b"unit,rated_kva\na,500\nb,630\nc,1\n", trial());
    let tally = report.tally;
    assert_eq!((tally.new, tally.changed, tally.same), (1, 1, 1));
}

#[test]
fn rules_judge_what_the_book_knows_too() {
    let mut desk = Desk::empty();
    let first = "unit,rated_kva,load_factor_pu,no_load_loss_w,hv_kv\na,400,0.5,500,20\n";
    assert!(desk.text(What::Units, "u.csv", first).stored);
    let report = desk.text(
        What::Units,
        "v.csv",
        "unit,rated_kva,loss_factor_pu,total_loss_w,lv_kv\na,400,0.6,400,30\n",
    );
    let text = problems(&report);
    assert!(text.contains("v.csv:2: loss_factor_pu: 0.6: no load with load factor 0.5"), "{text}");
    assert!(text.contains("v.csv:2: total_loss_w: 400: is below no_load_loss_w 500"), "{text}");
    assert!(text.contains("v.csv:2: hv_kv: 20: is below lv_kv 30"), "{text}");
    assert!(report.rejected);
    assert!(desk.text(What::Units, "w.csv", "unit,rated_kva,loss_factor_pu\na,400,0.4\n").stored);
    let unit = desk.book.unit("a").expect("unit");
    assert_eq!((unit.load_factor_pu, unit.loss_factor_pu), (Some(0.5), Some(0.4)));
}

#[test]
fn columns_are_renamed_and_passed_over() {
    let mut desk = Desk::empty();
    let text = "ID,kVA,growth,colour\na,400,1.5,red\n";
    let map = |pairs: &[(&str, &str)]| {
        pairs.iter().map(|(t, o)| ((*t).to_owned(), (*o).to_owned())).collect()
    };
    let report = desk.text(What::Units, "u.csv", text);
    assert!(problems(&report).contains("u.csv:1: rated_kva: (blank): is required"), "{report:?}");
    let good = [("ID", "unit"), ("kVA", "rated_kva"), ("growth", "load_growth_pct")];
    let report = desk.bytes(
        What::Units,
        "u.csv",
        text.as_bytes(),
        Options { map: map(&good), ..Options::default() },
    );
    let told = problems(&report);
    assert_eq!(told.lines().count(), 1, "{told}");
    assert!(told.starts_with("u.csv:1: colour: (blank): is no column of this file"), "{told}");
    let report = desk.bytes(
        What::Units,
        "u.csv",
        text.as_bytes(),
        Options { map: map(&good), ignore_unknown: true, ..Options::default() },
    );
    assert!(report.stored, "{}", problems(&report));
    assert_eq!(desk.book.unit("a").expect("unit").load_growth_pct, Some(1.5));

    let bad = [("id", "unit"), ("kVA", "rated_kw")];
    let report = desk.bytes(
        What::Units,
        "u.csv",
        text.as_bytes(),
        Options { map: map(&bad), ignore_unknown: true, ..Options::default() },
    );
    let told = problems(&report);
    assert!(
        told.contains("u.csv:1: id: unit: is mapped, but the file has no such column"),
        "{told}"
    );
    assert!(told.contains("did you mean rated_kva?"), "{told}");
}

#[test]
fn good_rows_are_kept_and_bad_ones_written_with_their_reason() {
    let mut desk = Desk::empty();
    let text = "unit,rated_kva,note\na,400,fine\nb,none,=cmd()\nc,630,\n";
    let mut rejects = Vec::new();
    let report = desk.bytes(
        What::Units,
        "u.csv",
        text.as_bytes(),
        Options { skip_bad: true, rejects: Some(Box::new(&mut rejects)), ..Options::default() },
    );
    assert!(report.stored && !report.rejected);
    assert_eq!((report.rows, report.tally.new, report.bad), (3, 2, 1));
    assert_eq!(
        String::from_utf8(rejects).expect("text"),
        "unit,rated_kva,note,line,why\nb,none,'=cmd(),3,rated_kva none: is not a number\n"
    );
    assert_eq!(desk.book.counts().expect("counts").units, 2);
}

#[test]
fn a_stopped_import_leaves_nothing() {
    let mut desk = Desk::empty();
    let before = desk.dump();
    let watch = ironhum::study::Watch::default();
    watch.stop();
    let source =
        ironhum::exchange::Source::read("u.csv", &b"unit,rated_kva\na,400\n"[..]).expect("source");
    let stopped = ironhum::study::intake::import(
        &mut desk.book,
        What::Units,
        source,
        Options::default(),
        &actor(),
        &watch,
    );
    assert!(stopped.expect_err("stopped").to_string().contains("nothing was stored"));
    assert_eq!(desk.dump(), before);
}

/// A value that a column may hold, or a blank.
fn value(column: &'static Column) -> BoxedStrategy<Value> {
    let text = "[A-Za-z0-9äéß ,;\"'._-]{1,20}".prop_map(|text| Value::Text(text.trim().to_owned()));
    let given = match column.kind {
        Kind::Id | Kind::Text => {
            text.prop_filter("not blank", |v| *v != Value::Text(String::new())).boxed()
        }
        Kind::Choice(words) => {
            proptest::sample::select(words).prop_map(|w| Value::Text(w.to_owned())).boxed()
        }
        Kind::Flag => (0_i64..=1).prop_map(Value::Integer).boxed(),
        Kind::Integer(a, b) => (a..=b).prop_map(Value::Integer).boxed(),
        Kind::IntegerOf(list) => proptest::sample::select(list).prop_map(Value::Integer).boxed(),
        Kind::Real(a, b) => (a..=b).prop_map(Value::Real).boxed(),
        Kind::Above(a, b) => (a.next_up()..=b).prop_map(Value::Real).boxed(),
        Kind::Money(a, b) => (a * 1000..=b * 1000).prop_map(|m| Value::Money(Money(m))).boxed(),
        Kind::Date => Just(Value::Text("2027-03-31".to_owned())).boxed(),
    };
    // These are tied to other records or to each other; the rules have tests of their own.
    let is_tied = ["profile", "vector_group", "loss_factor_pu", "total_loss_w", "lv_kv"];
    if is_tied.contains(&column.name) {
        Just(Value::Blank).boxed()
    } else if column.required {
        given
    } else {
        prop_oneof![Just(Value::Blank), given].boxed()
    }
}

fn unit() -> impl Strategy<Value = Unit> {
    Unit::COLUMNS
        .iter()
        .map(value)
        .collect::<Vec<_>>()
        .prop_map(|values| Unit::from_values(&values).expect("typed"))
}

fn cell(value: &Value) -> String {
    match value {
        Value::Blank => String::new(),
        Value::Text(text) => text.clone(),
        Value::Integer(number) => number.to_string(),
        Value::Real(number) => number.to_string(),
        Value::Money(money) => money.to_string(),
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]
    #[test]
    fn random_units_come_back_to_the_bit(units in proptest::collection::vec(unit(), 1..12)) {
        let mut units = units;
        units.sort_by(|a, b| a.unit.cmp(&b.unit));
        units.dedup_by(|a, b| a.unit == b.unit);
        let mut csv = csv::Writer::from_writer(Vec::new());
        csv.write_record(Unit::COLUMNS.iter().map(|column| column.name)).expect("header");
        for unit in &units {
            csv.write_record(unit.values().iter().map(cell)).expect("row");
        }
        let bytes = csv.into_inner().expect("bytes");
        let mut desk = Desk::empty();
        let report = desk.bytes(What::Units, "u.csv", &bytes, Options::default());
        prop_assert!(report.stored, "{}", report.problems);
        prop_assert_eq!(desk.book.units().expect("units"), units);
    }
}
