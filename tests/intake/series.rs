//! Years of equal steps: every step and length, by number and by time, and what spoils them.

use std::fmt::Write as _;

use ironhum::study::intake::{IntakeError, Options, What};

use crate::support::{Desk, problems};

/// A file of `count` rows with running numbers.
fn running(header: &str, count: usize, row: impl Fn(usize) -> String) -> String {
    let mut text = format!("interval,{header}\n");
    for number in 0..count {
        writeln!(text, "{number},{}", row(number)).expect("text");
    }
    text
}

/// A file of `count` rows with times of `step` minutes, local or with an offset.
fn timed(header: &str, count: i64, step: i64, offset: &str) -> String {
    let first = chrono::NaiveDate::from_ymd_opt(2028, 1, 1).expect("date").and_hms_opt(0, 0, 0);
    let mut text = format!("timestamp,{header}\n");
    for number in 0..count {
        let time = first.expect("time") + chrono::TimeDelta::minutes(number * step);
        writeln!(text, "{}{offset},{}", time.format("%Y-%m-%dT%H:%M"), number % 7).expect("text");
    }
    text
}

#[test]
fn profiles_of_every_step_come_in() {
    let mut desk = Desk::empty();
    for (count, step) in
        [(8760, 60), (8784, 60), (17520, 30), (35040, 15), (35136, 15), (105_120, 5)]
    {
        let name = format!("p{count}");
        let text = running(&name, count, |n| format!("-{}.5", 2 + n % 24));
        let report = desk.text(What::Profiles, "p.csv", &text);
        assert!(report.stored, "{count}: {}", problems(&report));
        let profiles = desk.book.profiles().expect("profiles");
        let profile = profiles.last().expect("profile");
        assert_eq!((profile.profile.as_str(), profile.step_minutes), (name.as_str(), step));
        assert_eq!((profile.values.len(), profile.values[0]), (count, -2.5), "reverse flow counts");
    }
    for offset in ["", "Z", "+02:00"] {
        let report = desk.text(What::Profiles, "t.csv", &timed("timed", 35136, 15, offset));
        assert!(report.stored, "{offset}: {}", problems(&report));
    }
}

#[test]
fn what_spoils_a_profile_is_told_by_line() {
    let mut desk = Desk::empty();
    let before = desk.dump();
    let good = timed("a,b", 8784, 60, "").replace(",0\n", ",0,1\n");
    let lines: Vec<String> = timed("a", 8784, 60, "").lines().map(ToOwned::to_owned).collect();
    let with = |change: &dyn Fn(&mut Vec<String>)| {
        let mut lines = lines.clone();
        change(&mut lines);
        lines.join("\n")
    };
    for (text, told) in [
        (
            with(&|l| drop(l.remove(100))),
            "p.csv:101: timestamp: 2028-01-05T04:00: comes 7200 s after line 100",
        ),
        (
            with(&|l| l.insert(50, l[49].clone())),
            "p.csv:51: timestamp: 2028-01-03T00:00: is the time of line 50 again",
        ),
        (
            with(&|l| l.swap(10, 11)),
            "p.csv:12: timestamp: 2028-01-01T09:00: goes back behind line 11",
        ),
        (with(&|l| l[5] = "soon,1".into()), "p.csv:6: timestamp: soon: is not a time like"),
        (
            with(&|l| l[5] = "2028-01-01T04:00,".into()),
            "p.csv:6: a: (blank): is a gap; every step needs a value",
        ),
        (with(&|l| l[5] = "2028-01-01T04:00,x".into()), "p.csv:6: a: x: is not a number"),
        (with(&|l| l[5] = "2028-01-01T04:00,NaN".into()), "p.csv:6: a: NaN: is not a number"),
        (
            with(&|l| l[5] = "2028-01-01T04:00Z,1".into()),
            "p.csv:6: timestamp: 2028-01-01T04:00Z: write all times with an offset",
        ),
        (
            with(&|l| l.truncate(8001)),
            "p.csv:8001: (file): 8000 rows: are no full year; it has 8760 or 8784 steps of 60 min",
        ),
        (good, "p.csv:3: (row): 2 cells: the header has 3"),
        (running("dead", 8760, |_| "0".into()), "p.csv:1: dead: (blank): has no value above zero"),
        (running("a,a", 8760, |_| "1,1".into()), "p.csv:1: a: a: stands twice in the header"),
        (running("a", 9000, |_| "1".into()), "p.csv:9001: (file): 9000 rows: are no full year"),
        (
            "hour,a\n1,1\n".into(),
            "p.csv:1: hour: (blank): the first column is timestamp or interval",
        ),
        ("interval\n1\n".into(), "p.csv:1: (row): (blank): the file has a first column only"),
        ("interval,a\n5,1\n".into(), "p.csv:2: interval: 5: the running number begins with 0 or 1"),
        (
            "interval,a\n1,1\n3,1\n".into(),
            "p.csv:3: interval: 3: comes 2 after line 2, steps are 1: there is a gap",
        ),
    ] {
        let report = desk.text(What::Profiles, "p.csv", &text);
        let lines = problems(&report);
        assert!(lines.lines().any(|line| line.starts_with(told)), "wanted {told}\ngot {lines}");
        assert!(report.rejected && !report.stored);
    }
    assert_eq!(desk.dump(), before);
}

#[test]
fn a_bad_profile_can_be_left_and_the_others_kept() {
    let mut desk = Desk::empty();
    let text = running("dead,gap,live", 8760, |n| {
        format!("0,{},{}", if n == 9 { "" } else { "1" }, n % 5)
    });
    let options = Options { skip_bad: true, ..Options::default() };
    let report = desk.bytes(What::Profiles, "p.csv", text.as_bytes(), options);
    assert!(report.stored && !report.rejected, "{}", problems(&report));
    assert_eq!((report.rows, report.bad, report.tally.new), (3, 2, 1));
    assert_eq!(desk.book.profile_names().expect("names"), ["live"]);
}

#[test]
fn prices_take_a_name_and_their_own_columns() {
    let mut desk = Desk::empty();
    let text = running("price_per_kwh,system_load", 8760, |n| format!("-0.0{},{n}", n % 9));
    let named =
        |name: Option<&str>| Options { name: name.map(ToOwned::to_owned), ..Options::default() };
    let report = desk.bytes(What::Prices, "x.csv", text.as_bytes(), named(Some("spot")));
    assert!(report.stored, "{}", problems(&report));
    let series = desk.book.price_series("spot").expect("series");
    assert_eq!((series.price_per_kwh[1], series.co2_kg_per_kwh.is_none()), (-0.01, true));
    assert_eq!(series.system_load.expect("load")[8759], 8759.0);

    let path = desk.dir.path().join("day-ahead.csv");
    std::fs::write(&path, &text).expect("write");
    assert!(desk.file(What::Prices, &path, Options::default()).expect("judged").stored);
    assert_eq!(desk.book.price_series_names().expect("names"), ["spot", "day-ahead"]);
    let source = ironhum::exchange::Source::read("-", std::io::Cursor::new(text)).expect("source");
    let watch = ironhum::study::Watch::default();
    let nameless = ironhum::study::intake::import(
        &mut desk.book,
        What::Prices,
        source,
        Options::default(),
        &crate::support::actor(),
        &watch,
    );
    assert!(matches!(nameless, Err(IntakeError::NoName)));

    let wrong = running("prise_per_kwh,co2_kg_per_kwh", 8760, |_| "1,1".into());
    let report = desk.bytes(What::Prices, "x.csv", wrong.as_bytes(), named(Some("y")));
    let told = problems(&report);
    assert!(
        told.contains(
            "prise_per_kwh: (blank): is no column of this file; did you mean price_per_kwh?"
        ),
        "{told}"
    );
    assert!(told.contains("price_per_kwh: (blank): is required and is no column"), "{told}");
    let negative = running("price_per_kwh,co2_kg_per_kwh", 8760, |_| "1,-1".into());
    let report = desk.bytes(What::Prices, "x.csv", negative.as_bytes(), named(Some("y")));
    assert!(
        problems(&report).contains("x.csv:2: co2_kg_per_kwh: -1: is outside 0 … 1000"),
        "{report:?}"
    );
}
