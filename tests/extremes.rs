//! Every number of every column at the ends of its range, alone and many together: each answer is finite, or the
//! study refuses in words. Values are put past the import on purpose, so its rules between columns guard nothing here.

use std::fmt::Debug;

use ironhum::book::tables::{BIDS, MEASURED, OFFERS, TEST_REPORTS, Table, UNITS};
use ironhum::book::{Actor, Book};
use ironhum::engine::columns::{
    Basis, BasisRange, BasisSheet, Bid, Column, Distribution, Kind, LEAST, Lot, Measured, Money,
    Offer, Tender, TenderRate, TenderSheet, TestReport, Unit, Value,
};
use ironhum::study::rank::{By, rank};
use ironhum::study::tender::{Case, Draws};
use ironhum::study::unit::Question;
use ironhum::study::{Desk, StudyError, Watch, check, losses};
use proptest::prelude::*;

/// The records that a case may change.
#[derive(Clone, Debug)]
struct Records {
    unit: Vec<Value>,
    report: Vec<Value>,
    offer: Vec<Value>,
    basis: Vec<Value>,
    lot: Vec<Value>,
    bid: Vec<Value>,
    measured: Vec<Value>,
    ranges: Vec<BasisRange>,
}

const COLUMNS: [&[Column]; 7] = [
    Unit::COLUMNS,
    TestReport::COLUMNS,
    Offer::COLUMNS,
    Basis::COLUMNS,
    Lot::COLUMNS,
    Bid::COLUMNS,
    Measured::COLUMNS,
];

impl Records {
    /// An ordinary case.
    fn ordinary() -> Self {
        let (unit, lot) = ("U", "L");
        Self {
            unit: Unit {
                unit: unit.into(),
                phases: Some(3),
                rated_kva: 400.0,
                hv_kv: Some(20.0),
                lv_kv: Some(0.4),
                impedance_pct: Some(4.0),
                no_load_loss_w: Some(900.0),
                load_loss_w: Some(4600.0),
                year_made: Some(1985),
                peak_kva: Some(300.0),
                load_factor_pu: Some(0.5),
                loss_factor_pu: Some(0.3),
                ..Unit::blank()
            }
            .values(),
            report: TestReport {
                unit: unit.into(),
                open_circuit_voltage_v: Some(400.0),
                open_circuit_current_a: Some(8.0),
                open_circuit_power_w: Some(900.0),
                short_circuit_voltage_v: Some(800.0),
                short_circuit_current_a: Some(11.547),
                short_circuit_power_w: Some(4600.0),
                hv_resistance_ohm: Some(4.0),
                lv_resistance_ohm: Some(0.002),
                resistance_temp_c: Some(20.0),
                test_temp_c: Some(20.0),
                ..TestReport::blank()
            }
            .values(),
            offer: Offer {
                offer: "O".into(),
                rated_kva: 400.0,
                impedance_pct: Some(4.0),
                no_load_loss_w: 430.0,
                load_loss_w: 3850.0,
                price: Money(9_000_000),
                ..Offer::blank()
            }
            .values(),
            basis: Basis {
                name: "b".into(),
                currency: "EUR".into(),
                first_year: 2027,
                horizon_years: 30,
                discount_rate_pct: 6.0,
                energy_price_per_kwh: Some(0.1),
                demand_charge_per_kw_year: Some(30.0),
                life_years: Some(40.0),
                failure_shape: Some(5.0),
                failure_scale_years: Some(60.0),
                fixed_charge_rate_pct: Some(10.0),
                ..Basis::blank()
            }
            .values(),
            lot: Lot {
                lot: lot.into(),
                rated_kva: 400.0,
                peak_pu: Some(0.75),
                loss_factor_pu: Some(0.3),
                reference_temp_c: Some(75.0),
                impedance_pct: Some(4.0),
                impedance_tolerance_pct: Some(10.0),
                ..Lot::blank()
            }
            .values(),
            bid: Bid {
                tender: "T".into(),
                lot: lot.into(),
                bid: "A".into(),
                price: Money(9_000_000),
                currency: Some("USD".into()),
                no_load_loss_w: 430.0,
                load_loss_w: Some(3850.0),
                reference_temp_c: Some(75.0),
                impedance_pct: Some(4.0),
                ..Bid::blank()
            }
            .values(),
            measured: Measured {
                tender: "T".into(),
                lot: lot.into(),
                bid: "A".into(),
                serial: "s1".into(),
                no_load_loss_w: 440.0,
                load_loss_w: 3900.0,
                ..Measured::blank()
            }
            .values(),
            ranges: Vec::new(),
        }
    }

    fn of(&mut self, record: usize) -> &mut Vec<Value> {
        match record {
            0 => &mut self.unit,
            1 => &mut self.report,
            2 => &mut self.offer,
            3 => &mut self.basis,
            4 => &mut self.lot,
            5 => &mut self.bid,
            _ => &mut self.measured,
        }
    }

    /// A book with these records, an ordinary bid beside, and the same unit and offer once more in ordinary.
    fn book(&self) -> Book {
        let actor = Actor { who: "ana".into(), at: "2026-03-01T08:00:00Z".into(), why: None };
        let mut book = Book::in_memory().expect("book");
        let change = book.change(&actor, None).expect("change");
        let put = |table: &'static Table, values: &[Value]| {
            change.put(table, None, values).expect(table.name);
        };
        let ordinary = Self::ordinary();
        let named = |values: &[Value], at: usize| {
            let mut values = values.to_vec();
            values[at] = Value::Text("other".into());
            values
        };
        for unit in [self.unit.clone(), named(&ordinary.unit, 0)] {
            put(&UNITS, &unit);
        }
        put(&TEST_REPORTS, &self.report);
        for offer in [self.offer.clone(), named(&ordinary.offer, 0)] {
            put(&OFFERS, &offer);
        }
        let basis = Basis::from_values(&self.basis).expect("basis");
        let sheet = BasisSheet { basis, ranges: self.ranges.clone(), budgets: Vec::new() };
        change.save_basis(&sheet).expect("basis");
        let tender = TenderSheet {
            tender: Tender { tender: "T".into(), currency: "EUR".into(), dated: None },
            rates: vec![TenderRate { currency: "USD".into(), rate: 0.9 }],
            lots: vec![Lot::from_values(&self.lot).expect("lot")],
            bids: Vec::new(),
            measured: Vec::new(),
            awards: Vec::new(),
        };
        change.save_tender(&tender).expect("tender");
        for bid in [self.bid.clone(), named(&ordinary.bid, 2)] {
            put(&BIDS, &bid);
        }
        put(&MEASURED, &self.measured);
        change.commit().expect("commit");
        book
    }
}

/// Whether a column holds numbers, and the ends of its range.
fn ends(column: &Column) -> Vec<Value> {
    match column.kind {
        Kind::Real(a, b) | Kind::Above(a, b) => {
            let a = if matches!(column.kind, Kind::Above(..)) { a.next_up() } else { a };
            let inside = [0.0, LEAST, -LEAST, 1.0].into_iter().filter(|x| a <= *x && *x <= b);
            [a, b].into_iter().chain(inside).map(Value::Real).collect()
        }
        Kind::Integer(a, b) => vec![Value::Integer(a), Value::Integer(b)],
        Kind::IntegerOf(list) => list.iter().map(|x| Value::Integer(*x)).collect(),
        Kind::Money(a, b) => {
            [a * 1000, b * 1000, 1].into_iter().map(|milli| Value::Money(Money(milli))).collect()
        }
        Kind::Choice(words) => words.iter().map(|word| Value::Text((*word).to_owned())).collect(),
        Kind::Flag => vec![Value::Integer(0), Value::Integer(1)],
        Kind::Id | Kind::Text | Kind::Date => Vec::new(),
    }
}

/// Every column that can be varied: its record and its place.
fn varied() -> Vec<(usize, usize)> {
    let of = |record: usize| {
        let columns = COLUMNS[record].iter().enumerate();
        columns.filter(|(_, column)| !ends(column).is_empty()).map(move |(at, _)| (record, at))
    };
    (0..COLUMNS.len()).flat_map(of).collect()
}

fn finite(what: &str, of: &impl Debug, case: &dyn Debug) {
    let text = format!("{of:?}");
    let bad = text.split(|c: char| !c.is_alphanumeric()).find(|word| ["NaN", "inf"].contains(word));
    assert!(bad.is_none(), "{what}: {case:?}\n{text}");
}

/// An answer, or none where the engine refuses, which it does in words.
fn answer<T>(what: &str, asked: Result<T, StudyError>, case: &dyn Debug) -> Option<T> {
    match asked {
        Ok(answer) => Some(answer),
        Err(StudyError::Refused { refusal, .. }) => {
            assert!(!refusal.why.is_empty(), "{what}");
            None
        }
        Err(error) => panic!("{what}: {case:?}: {error}"),
    }
}

/// Asks everything of a book.
fn ask(records: &Records, case: &dyn Debug) {
    let book = records.book();
    let desk = Desk::read(&book, None).expect("desk");
    if let Some(ranking) = answer("rank", rank(&desk, By::Saving, None, &Watch::default()), case) {
        finite("totals", &ranking.totals, case);
        for place in 0..ranking.order.len() {
            finite("rank", &ranking.row(&desk, place), case);
        }
    }
    if let Some(losses) = answer("losses", losses::losses(&desk), case) {
        finite("losses", &losses, case);
    }
    if let Some(doubts) = answer("check", check::check(&book, None, &Watch::default()), case) {
        for doubt in &doubts {
            assert!(!doubt.what.contains("NaN") && !doubt.what.contains("inf"), "{doubt:?}");
        }
    }
    if let Some(case_) = answer("case", Case::read(&book, "T", None), case) {
        if let Some(mut result) = answer("tender", case_.evaluate(None), case) {
            let draws = Draws { draws: 20, ..Draws::default() };
            answer("risk", case_.add_risk(&mut result, &draws), case);
            finite("tender", &result, case);
        }
        if let Some(settled) = answer("settle", case_.settle(None), case) {
            finite("settle", &settled, case);
        }
        if let Some(factors) = answer("factors", case_.factors("L"), case) {
            finite("factors", &factors, case);
        }
    }
    let unit = book.unit("U").expect("unit");
    if let Some(context) = answer("context", desk.context(), case)
        && let Some(question) = answer("unit", Question::new(&desk, &context, &unit), case)
        && let Some(dossier) = answer("dossier", question.dossier(), case)
    {
        finite("dossier", &dossier, case);
    }
}

#[test]
fn each_number_at_the_ends_of_its_range() {
    for (record, at) in varied() {
        for value in ends(&COLUMNS[record][at]) {
            let mut records = Records::ordinary();
            let case = (COLUMNS[record][at].name, record, value.clone());
            records.of(record)[at] = value;
            ask(&records, &case);
        }
    }
}

#[test]
fn each_input_drawn_over_all_its_range() {
    let numeric = |column: &&Column| !matches!(column.kind, Kind::Choice(_) | Kind::Flag);
    let columns = Basis::COLUMNS.iter().filter(numeric);
    for column in columns.filter(|column| !ends(column).is_empty()) {
        let (low, high) = match column.kind {
            Kind::Real(a, b) => (a, b),
            Kind::Above(a, b) => (a.next_up(), b),
            _ => (1.0, 100.0),
        };
        let of = |distribution| BasisRange {
            quantity: column.name.into(),
            distribution: Some(distribution),
            low: Some(low),
            high: Some(high),
            mean: Some(high),
            deviation: Some(1e12),
            ..BasisRange::blank()
        };
        for distribution in [Distribution::Uniform, Distribution::Normal, Distribution::Lognormal] {
            let mut records = Records::ordinary();
            records.ranges = vec![of(distribution)];
            ask(&records, &records.ranges.clone());
        }
    }
}

#[test]
fn what_is_no_measurement_is_refused() {
    for (record, at) in varied() {
        let column = &COLUMNS[record][at];
        if let Kind::Real(..) | Kind::Above(..) = column.kind {
            for tiny in ["1e-320", "-1e-320", "4.9e-324", "9.9e-13"] {
                assert!(column.read(tiny).is_err(), "{} {tiny}", column.name);
            }
            for great in ["1e308", "-1e308", "1e400", "inf", "nan"] {
                assert!(column.read(great).is_err(), "{} {great}", column.name);
            }
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn many_numbers_at_the_ends_of_their_ranges(
        picks in prop::collection::vec((any::<prop::sample::Index>(), any::<prop::sample::Index>()), 1..40),
    ) {
        let varied = varied();
        let mut records = Records::ordinary();
        let mut case = Vec::new();
        for (which, value) in picks {
            let (record, at) = varied[which.index(varied.len())];
            let column = &COLUMNS[record][at];
            let ends = ends(column);
            let value = value.get(&ends).clone();
            case.push((record, column.name, value.clone()));
            records.of(record)[at] = value;
        }
        ask(&records, &case);
    }
}
