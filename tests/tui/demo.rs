//! The demo fleet as a session of the dashboard, taken in from its files once.

use std::collections::HashMap;
use std::path::Path;
use std::sync::{Arc, OnceLock};

use ironhum::book::{Actor, Book};
use ironhum::engine::columns::{TenderSheet, Unit};
use ironhum::exchange::Source;
use ironhum::study::intake::{Options, What, import};
use ironhum::study::{Desk, Watch};
use ironhum::tui::{JournalLine, Session};

struct Demo {
    desk: Desk,
    tenders: Vec<TenderSheet>,
    units: Arc<HashMap<String, Unit>>,
}

/// A book with the demo fleet.
pub(crate) fn book() -> Book {
    let mut book = Book::in_memory().unwrap();
    let actor = Actor { who: "ana".into(), at: "2026-11-01T08:00:00Z".into(), why: None };
    for (what, file) in [
        (What::Profiles, "profiles.csv"),
        (What::Prices, "prices.csv"),
        (What::Units, "units.csv"),
        (What::Offers, "offers.csv"),
        (What::Basis, "basis.toml"),
        (What::Tender, "tender.toml"),
        (What::Bids, "bids.csv"),
    ] {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("demo-fleet").join(file);
        let source = Source::read(file, std::fs::File::open(path).unwrap()).unwrap();
        let options = Options { name: Some("ossemar-zone".to_owned()), ..Options::default() };
        let report = import(&mut book, what, source, options, &actor, &Watch::default()).unwrap();
        assert!(report.problems.is_empty(), "{file}: {}", report.problems);
    }
    book
}

fn read() -> Demo {
    let book = book();
    let tenders = book.tenders().unwrap();
    let units = book.units().unwrap().into_iter().map(|unit| (unit.unit.clone(), unit));
    Demo {
        desk: Desk::read(&book, None).unwrap(),
        tenders: tenders.iter().map(|tender| book.tender(&tender.tender).unwrap()).collect(),
        units: Arc::new(units.collect()),
    }
}

/// The demo fleet.
pub(crate) fn session() -> Session {
    static DEMO: OnceLock<Demo> = OnceLock::new();
    let demo = DEMO.get_or_init(read);
    let units = Arc::clone(&demo.units);
    Session {
        title: "demo.sqlite".to_owned(),
        desk: demo.desk.clone(),
        basis_source: "the book".to_owned(),
        tenders: demo.tenders.clone(),
        journal: journal(),
        record: Some(Box::new(move |unit| units.get(unit).cloned())),
        save: None,
        award: None,
    }
}

fn journal() -> Vec<JournalLine> {
    [
        (
            "2026-11-20 09:12",
            "changed basis plan-2027",
            "discount_rate_pct: 5.5 to 6",
            "",
            "board decision of November",
        ),
        ("2026-11-16 14:40", "added 9 bids", "", "bids.csv", "opening of ol-2027-1"),
        ("2026-11-02 08:05", "changed unit ZE-0101", "peak_kva: 540 to 575", "units.csv", ""),
        ("2026-11-01 16:30", "added 246 units", "", "units.csv", "first import"),
    ]
    .map(|(at, what, details, source, why)| JournalLine {
        at: at.to_owned(),
        who: "planner".to_owned(),
        what: what.to_owned(),
        details: details.to_owned(),
        source: source.to_owned(),
        why: why.to_owned(),
    })
    .into()
}
