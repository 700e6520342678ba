//! A file full of faults: each is told by line, column, value and reason, and the book stays as it was.

use ironhum::study::intake::{Options, What};

use crate::support::{Desk, problems};

/// Cells of a unit row that is right, in the order of [`HEADER`].
const GOOD: [&str; 17] = [
    "G", "400", "20", "0.4", "3", "Dyn5", "4", "500", "4600", "", "1990", "300", "0.5", "0.3",
    "office", "pole", "",
];
const HEADER: [&str; 17] = [
    "unit",
    "rated_kva",
    "hv_kv",
    "lv_kv",
    "phases",
    "vector_group",
    "impedance_pct",
    "no_load_loss_w",
    "load_loss_w",
    "total_loss_w",
    "year_made",
    "peak_kva",
    "load_factor_pu",
    "loss_factor_pu",
    "profile",
    "mounting",
    "note",
];

/// One fault: cells that differ from the good row, and what must be told of it.
const FAULTS: &[(&[(&str, &str)], &str)] = &[
    (&[("rated_kva", "big")], "rated_kva: big: is not a number"),
    (&[("no_load_loss_w", "-500")], "no_load_loss_w: -500: is outside 0 … 100000000 W"),
    (&[("profile", "ofice")], "profile: ofice: is no profile of the book; did you mean office?"),
    (&[("profile", "zzz")], "profile: zzz: is no profile of the book; import it first"),
    (&[("unit", "G")], "unit: G: stands on line 2 already"),
    (&[("impedance_pct", "400")], "impedance_pct: 400: is outside above 0 … 60 %"),
    (&[("load_loss_w", "NaN")], "load_loss_w: NaN: is not a number; leave the cell blank"),
    (&[("load_loss_w", "inf")], "load_loss_w: inf: is infinite"),
    (&[("peak_kva", "1e999")], "peak_kva: 1e999: is infinite or beyond the range of numbers"),
    (&[("year_made", "3998")], "year_made: 3998: is outside 1880 … 2100"),
    (&[("year_made", "1990.5")], "year_made: 1990.5: is not a whole number"),
    (&[("rated_kva", "0")], "rated_kva: 0: is outside above 0 … 2000000 kVA"),
    (&[("loss_factor_pu", "0.6")], "loss_factor_pu: 0.6: no load with load factor 0.5"),
    (&[("loss_factor_pu", "0.2")], "loss_factor_pu: 0.2: no load with load factor 0.5"),
    (&[("note", "beep\u{7}")], "note: beep\\u{7}: holds the control character"),
    (&[("mounting", "roof")], "mounting: roof: is not one of pole, pad, indoor or substation"),
    (&[("phases", "2")], "phases: 2: is outside 1 | 3"),
    (
        &[("hv_kv", "0.4"), ("lv_kv", "20")],
        "hv_kv: 0.4: is below lv_kv 20: hv_kv and lv_kv look exchanged",
    ),
    (&[("vector_group", "YNa0")], "vector_group: YNa0: is an auto-transformer"),
    (&[("vector_group", "YNyn0d11")], "vector_group: YNyn0d11: has three or more windings"),
    (&[("total_loss_w", "400")], "total_loss_w: 400: is below no_load_loss_w 500"),
    (&[("total_loss_w", "4000")], "total_loss_w: 4000: is below load_loss_w 4600"),
    (&[("peak_kva", "1,234")], "peak_kva: 1,234: has a sign that may group thousands"),
    (&[("rated_kva", "400 kVA")], "rated_kva: 400 kVA: is not a number"),
    (&[("unit", "")], "unit: (blank): is required and blank"),
    (&[("hv_kv", "20;0")], "hv_kv: 20;0: is not a number"),
];

fn row(name: &str, changes: &[(&str, &str)]) -> Vec<String> {
    let cell = |(column, good): (&&str, &&str)| {
        let changed = changes.iter().find(|(name, _)| name == column).map(|(_, value)| *value);
        changed.unwrap_or(if *column == "unit" { name } else { good }).to_owned()
    };
    HEADER.iter().zip(&GOOD).map(cell).collect()
}

/// The file: a good row, one row for each fault, then rows that are wrong as a whole.
fn file() -> (Vec<u8>, Vec<String>) {
    let mut csv = csv::WriterBuilder::new().flexible(true).from_writer(Vec::new());
    csv.write_record(HEADER).expect("header");
    csv.write_record(GOOD).expect("good");
    let mut told = Vec::new();
    for (line, (changes, why)) in (3..).zip(FAULTS) {
        csv.write_record(row(&format!("F{line}"), changes)).expect("row");
        told.push(format!("faults.csv:{line}: {why}"));
    }
    let line = 3 + FAULTS.len();
    csv.write_record(&row("SHORT", &[])[..9]).expect("short");
    told.push(format!("faults.csv:{line}: (row): 9 cells: the header has 17"));
    let long = "x".repeat(501);
    csv.write_record(row("LONG", &[("note", &long)])).expect("long");
    let shown = "x".repeat(60);
    told.push(format!("faults.csv:{}: note: {shown}…: is longer than 500 characters", line + 1));
    csv.write_record(row("TWO", &[("peak_kva", "-1"), ("phases", "three")])).expect("two");
    told.push(format!("faults.csv:{}: phases: three: is not a number", line + 2));
    told.push(format!("faults.csv:{}: peak_kva: -1: is outside 0 … 10000000 kVA", line + 2));
    (csv.into_inner().expect("bytes"), told)
}

fn office(desk: &mut Desk) {
    let rows: Vec<String> = (1..=8760).map(|n| format!("{n},0.{}", n % 9 + 1)).collect();
    let report =
        desk.text(What::Profiles, "p.csv", &format!("interval,office\n{}\n", rows.join("\n")));
    assert!(report.stored, "{}", problems(&report));
}

#[test]
fn each_fault_is_told_and_nothing_is_stored() {
    let mut desk = Desk::empty();
    office(&mut desk);
    let before = desk.dump();
    let (bytes, told) = file();
    let report = desk.bytes(What::Units, "faults.csv", &bytes, Options::default());
    assert!(report.rejected && !report.stored);
    let lines: Vec<String> = problems(&report).lines().map(ToOwned::to_owned).collect();
    for (line, wanted) in lines.iter().zip(&told) {
        assert!(line.starts_with(wanted), "wanted {wanted}\n   got {line}");
    }
    assert_eq!(lines.len(), told.len());
    assert_eq!(report.bad, FAULTS.len() as u64 + 3);
    assert_eq!(desk.dump(), before);
}

#[test]
fn good_rows_of_a_bad_file_can_be_kept() {
    let mut desk = Desk::empty();
    office(&mut desk);
    let (bytes, told) = file();
    let options = Options { skip_bad: true, ..Options::default() };
    let report = desk.bytes(What::Units, "faults.csv", &bytes, options);
    assert!(report.stored && !report.rejected);
    assert_eq!(report.problems.count(), told.len() as u64);
    let units = desk.book.units().expect("units");
    assert_eq!(units.iter().map(|unit| unit.unit.as_str()).collect::<Vec<_>>(), ["G"]);
}

#[test]
fn a_bad_header_is_told_at_once() {
    let mut desk = Desk::empty();
    let before = desk.dump();
    let text = "Unit,rated_kwa,rated kva,hv_kv,hv_kv,,colour\na,1,1,1,1,1,1\n";
    let options = Options { skip_bad: true, ..Options::default() };
    let report = desk.bytes(What::Units, "h.csv", text.as_bytes(), options);
    let told = problems(&report);
    for wanted in [
        "h.csv:1: Unit: (blank): is no column of this file; did you mean unit?",
        "h.csv:1: rated_kwa: (blank): is no column of this file; did you mean rated_kva?",
        "h.csv:1: rated kva: (blank): is no column of this file; did you mean rated_kva?",
        "h.csv:1: hv_kv: hv_kv: stands twice in the header",
        "h.csv:1: (row): (blank): a column without a name",
        "h.csv:1: colour: (blank): is no column of this file",
        "h.csv:1: unit: (blank): is required and is no column of the file",
        "h.csv:1: rated_kva: (blank): is required and is no column of the file",
    ] {
        assert!(told.contains(wanted), "wanted {wanted} in\n{told}");
    }
    assert_eq!(report.problems.count(), 8);
    assert!(report.rejected);
    assert_eq!(desk.dump(), before);
}

#[test]
fn what_bids_and_measured_units_name_must_be_there() {
    let mut desk = Desk::demo();
    let before = desk.dump();
    let report = desk.text(
        What::Bids,
        "b.csv",
        "tender,lot,bid,price,currency,no_load_loss_w,load_loss_w,total_loss_w\n\
         ol-2027-2,L1,X,1,EUR,1,1,\nol-2027-1,L9,X,1,EUR,1,1,\nol-2027-1,L1,X,1,USD,1,1,\n\
         ol-2027-1,L1,Y,1,EUR,1,,\nol-2027-1,L1,Z,1,SEK,1,,0.5\nol-2027-1,L1,W,1.2345,,1,1,\n",
    );
    let told = problems(&report);
    let wanted = [
        "b.csv:2: tender: ol-2027-2: is no tender of the book; did you mean ol-2027-1?",
        "b.csv:3: lot: L9: is no lot of tender ol-2027-1 in the book",
        "b.csv:4: currency: USD: has no rate in tender ol-2027-1; add it below [rates]",
        "b.csv:5: load_loss_w: (blank): is blank, and so is total_loss_w",
        "b.csv:6: total_loss_w: 0.5: is below no_load_loss_w 1",
        "b.csv:7: price: 1.2345: has more than three decimals",
    ];
    for (line, wanted) in told.lines().zip(wanted) {
        assert!(line.starts_with(wanted), "wanted {wanted}\n   got {line}");
    }
    assert_eq!(report.problems.count(), 6, "{told}");

    let report = desk.text(
        What::Measured,
        "m.csv",
        "tender,lot,bid,serial,no_load_loss_w,load_loss_w,tested_on\n\
         ol-2027-1,L1,NONE,1,1,1,\nol-2027-1,L1,O1,1,1,1,11.5.2027\nol-2027-1,L1,O1,,1,1,\n",
    );
    let told = problems(&report);
    for wanted in [
        "m.csv:2: bid: NONE: is no bid for ol-2027-1/L1 in the book",
        "m.csv:3: tested_on: 11.5.2027: is not a date like 2027-03-31",
        "m.csv:4: serial: (blank): is required and blank",
    ] {
        assert!(told.contains(wanted), "wanted {wanted} in\n{told}");
    }

    let report =
        desk.text(What::Tests, "t.csv", "unit,open_circuit_power_w\nnone,5\nZE-0101,1180\n");
    assert!(problems(&report).starts_with("t.csv:2: unit: none: is no unit of the book"));
    assert_eq!(report.problems.count(), 1);
    let offers =
        "offer,rated_kva,no_load_loss_w,load_loss_w,price,hv_kv,lv_kv\nX,1,1,1,-5,0.4,20\n";
    let report = desk.text(What::Offers, "o.csv", offers);
    assert!(problems(&report).starts_with("o.csv:2: price: -5: is outside 0"));
    assert_eq!(desk.dump(), before);
    let good = desk.text(What::Tests, "t.csv", "unit,open_circuit_power_w\nZE-0101,1180\n");
    assert!(good.stored);
    let tested = desk.book.tested_units().expect("store");
    let (unit, report) = &tested[0];
    assert_eq!((tested.len(), unit.unit.as_str()), (1, "ZE-0101"));
    assert_eq!(report.open_circuit_power_w, Some(1180.0));
}
