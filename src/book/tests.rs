//! Tests of the book: schema against the column facts, opening, writing, the journal.

use std::fmt::Write as _;
use std::fs;
use std::ops::ControlFlow;

use rusqlite::types::Value as Sql;
use rusqlite_migration::M;

use super::open::STEPS;
use super::tables::{BASES, BIDS, LOTS, OFFERS, TABLES, TENDERS, UNITS};
use super::*;
use crate::engine::columns::{
    Award, Basis, BasisBudget, BasisRange, BasisSheet, Bid, Column, Kind, LEAST, Lot, Money, Offer,
    Tender, TenderRate, TenderSheet, Unit,
};
use crate::engine::loading::{PriceSeries, Profile};

pub(crate) fn actor() -> Actor {
    Actor { who: "ana".into(), at: "2026-03-01T08:00:00Z".into(), why: Some("survey".into()) }
}

/// The journal's entries about one thing, newest first.
fn about(book: &Book, kind: &str, key: &str) -> Vec<JournalEntry> {
    let all = book.journal(usize::MAX).expect("journal");
    all.into_iter()
        .filter(|entry| entry.kind == kind && entry.key.as_deref() == Some(key))
        .collect()
}

/// Every row of every table as text.
fn dump(book: &Book) -> String {
    let mut tables = book
        .connection
        .prepare("SELECT name FROM sqlite_schema WHERE type = 'table' ORDER BY name")
        .expect("schema");
    let tables: Vec<String> =
        tables.query_map([], |row| row.get(0)).expect("names").map(|t| t.expect("name")).collect();
    let mut out = String::new();
    for table in tables {
        let mut rows = book.connection.prepare(&format!("SELECT * FROM {table}")).expect("table");
        let columns = rows.column_count();
        let mut rows = rows.query([]).expect("rows");
        while let Some(row) = rows.next().expect("row") {
            let cells: Vec<Sql> = (0..columns).map(|at| row.get(at).expect("cell")).collect();
            writeln!(out, "{table} {cells:?}").expect("text");
        }
    }
    out
}

fn unit(name: &str) -> Unit {
    Unit {
        unit: name.into(),
        rated_kva: 400.0,
        no_load_loss_w: Some(553.0),
        failure_cost: Some(Money(1_234_500)),
        ..Unit::blank()
    }
}

#[test]
fn every_column_fact_has_its_sql_column() {
    let book = Book::in_memory().expect("book");
    for table in TABLES {
        let sql =
            format!("SELECT name, type, \"notnull\" FROM pragma_table_info('{}')", table.name);
        let mut statement = book.connection.prepare(&sql).expect("info");
        let mut stored: Vec<(String, String, bool)> = statement
            .query_map([], |row| Ok((row.get::<_, String>(0)?, row.get(1)?, row.get(2)?)))
            .expect("rows")
            .map(|row| row.expect("row"))
            .filter(|(name, ..)| name != "id" && Some(name.as_str()) != table.owner)
            .collect();
        let mut wanted: Vec<(String, String, bool)> = table
            .columns
            .iter()
            .map(|column| {
                let kind = match column.kind {
                    Kind::Real(..) | Kind::Above(..) => "REAL",
                    Kind::Integer(..) | Kind::IntegerOf(_) | Kind::Flag | Kind::Money(..) => {
                        "INTEGER"
                    }
                    Kind::Id | Kind::Text | Kind::Choice(_) | Kind::Date => "TEXT",
                };
                (column.sql_name(), kind.to_owned(), column.required)
            })
            .collect();
        stored.sort();
        wanted.sort();
        assert_eq!(stored, wanted, "{}", table.name);
    }
}

/// Values just inside and just outside the range of a column.
fn edges(column: &Column) -> (Vec<Sql>, Vec<Sql>) {
    let text = |t: &str| Sql::Text(t.to_owned());
    match column.kind {
        Kind::Id => (vec![text("0")], vec![text("")]),
        Kind::Text => (vec![text("")], vec![]),
        Kind::Choice(words) => {
            (words.iter().map(|w| text(w)).collect(), vec![text("other"), text("")])
        }
        Kind::Flag => (vec![Sql::Integer(0), Sql::Integer(1)], vec![Sql::Integer(2)]),
        Kind::Integer(a, b) => {
            (vec![Sql::Integer(a), Sql::Integer(b)], vec![Sql::Integer(a - 1), Sql::Integer(b + 1)])
        }
        Kind::IntegerOf(list) => (
            list.iter().map(|x| Sql::Integer(*x)).collect(),
            vec![Sql::Integer(list[0] - 1), Sql::Integer(2)],
        ),
        Kind::Real(a, b) | Kind::Above(a, b) => {
            let open = matches!(column.kind, Kind::Above(..));
            let far = [f64::INFINITY, f64::NEG_INFINITY, b.next_up()];
            let tiny = [LEAST.next_down(), -LEAST.next_down(), f64::from_bits(1)];
            let (least, below) = if open { (a.next_up(), a) } else { (a, a.next_down()) };
            let zero = [0.0, LEAST, -LEAST].into_iter().filter(|x| a < *x && *x <= b);
            let real = |list: Vec<f64>| list.into_iter().map(Sql::Real).collect();
            let outside = [far.as_slice(), &tiny, &[below]].concat();
            (real([least, b].into_iter().chain(zero).collect()), real(outside))
        }
        Kind::Money(a, b) => (
            vec![Sql::Integer(a * 1000), Sql::Integer(b * 1000)],
            vec![Sql::Integer(a * 1000 - 1), Sql::Integer(b * 1000 + 1)],
        ),
        Kind::Date => (vec![text("2027-03-31")], vec![text("31.3.2027")]),
    }
}

#[test]
fn every_check_holds_just_the_range_of_its_column() {
    let book = Book::in_memory().expect("book");
    book.connection.execute_batch("PRAGMA foreign_keys = OFF").expect("off");
    for table in TABLES {
        for column in table.columns {
            let (inside, outside) = edges(column);
            let put = |value: &Sql| {
                let required = table
                    .columns
                    .iter()
                    .filter(|other| other.required && other.name != column.name)
                    .map(|other| (other.sql_name(), edges(other).0[0].clone()));
                let cells: Vec<(String, Sql)> = table
                    .owner
                    .iter()
                    .map(|owner| ((*owner).to_owned(), Sql::Text("x".into())))
                    .chain(required)
                    .chain([(column.sql_name(), value.clone())])
                    .collect();
                let names: Vec<_> = cells.iter().map(|(name, _)| name.as_str()).collect();
                let marks = vec!["?"; cells.len()].join(", ");
                let sql =
                    format!("INSERT INTO {} ({}) VALUES ({marks})", table.name, names.join(", "));
                let done = book
                    .connection
                    .execute(&sql, rusqlite::params_from_iter(cells.iter().map(|(_, v)| v)));
                book.connection.execute(&format!("DELETE FROM {}", table.name), []).expect("empty");
                done
            };
            for value in &inside {
                let done = put(value);
                assert!(done.is_ok(), "{}.{} {value:?}: {done:?}", table.name, column.name);
            }
            for value in &outside {
                let error = put(value).expect_err(column.name).to_string();
                assert!(error.contains("CHECK"), "{}.{}: {error}", table.name, column.name);
            }
            if column.required {
                let error = put(&Sql::Null).expect_err(column.name).to_string();
                assert!(error.contains("NOT NULL"), "{}.{}: {error}", table.name, column.name);
            }
        }
    }
}

#[test]
fn records_come_back_as_they_went_in() {
    let mut book = Book::in_memory().expect("book");
    let units = [unit("007"), unit("T1"), Unit { rated_kva: 0.1 + 0.2, ..unit("t1") }];
    let change = book.change(&actor(), Some("fleet.csv")).expect("change");
    for unit in &units {
        assert_eq!(change.put(&UNITS, None, &unit.values()).expect("put"), Outcome::New);
    }
    assert_eq!(change.commit().expect("commit"), Tally { new: 3, changed: 0, same: 0 });
    assert_eq!(book.units().expect("units"), units);
    assert_eq!(book.unit("t1").expect("unit"), units[2]);
    assert_eq!(book.counts().expect("counts").units, 3);
    let error = book.unit("T2").expect_err("unknown").to_string();
    assert_eq!(error, "the book has no unit T2; it has 007, T1, t1");

    let mut seen = Vec::new();
    book.each_unit(|unit| {
        seen.push(unit);
        if seen.len() == 2 { ControlFlow::Break(()) } else { ControlFlow::Continue(()) }
    })
    .expect("each");
    assert_eq!(seen, units[..2]);
}

#[test]
fn the_same_rows_twice_change_nothing() {
    let mut book = Book::in_memory().expect("book");
    let write = |book: &mut Book| {
        let change = book.change(&actor(), Some("fleet.csv")).expect("change");
        for name in ["a", "b"] {
            change.put(&UNITS, None, &unit(name).values()).expect("put");
        }
        change.commit().expect("commit")
    };
    write(&mut book);
    let before = dump(&book);
    assert_eq!(write(&mut book), Tally { new: 0, changed: 0, same: 2 });
    assert_eq!(dump(&book), before);
}

#[test]
fn blanks_leave_old_values_unless_they_clear() {
    let mut book = Book::in_memory().expect("book");
    let change = book.change(&actor(), None).expect("change");
    change.put(&UNITS, None, &unit("a").values()).expect("put");
    change.commit().expect("commit");

    let present =
        ["unit", "rated_kva", "no_load_loss_w"].map(|c| UNITS.position(c).expect("column"));
    let update = |book: &mut Book, clear_blank: bool| {
        let change = book.change(&actor(), Some("update.csv")).expect("change");
        let mut row = Unit { unit: "a".into(), rated_kva: 630.0, ..Unit::blank() }.values();
        let outcome = {
            let mut upsert = change.upsert(&UNITS, None, &present, clear_blank).expect("upsert");
            let known = upsert.look_up(&mut row).expect("look up");
            upsert.put(known, &row).expect("put")
        };
        change.commit().expect("commit");
        outcome
    };
    assert_eq!(update(&mut book, false), Outcome::Changed);
    assert_eq!(book.unit("a").expect("unit"), Unit { rated_kva: 630.0, ..unit("a") });
    assert_eq!(update(&mut book, false), Outcome::Same);
    assert_eq!(update(&mut book, true), Outcome::Changed);
    let cleared = book.unit("a").expect("unit");
    assert_eq!(cleared.no_load_loss_w, None, "a blank cell of a column that is there");
    assert_eq!(cleared.failure_cost, Some(Money(1_234_500)), "a column that is not there");

    let journal = book.journal(10).expect("journal");
    let what: Vec<String> = journal.iter().map(|entry| entry.what.to_string()).collect();
    assert_eq!(
        what,
        [
            r#"{"no_load_loss_w":{"old":553.0,"new":null}}"#,
            r#"{"rated_kva":{"old":400.0,"new":630.0}}"#,
            r#"{"rows":1,"first_id":1,"last_id":1}"#,
        ]
    );
    assert_eq!(journal[0].source.as_deref(), Some("update.csv"));
    assert_eq!((journal[0].who.as_str(), journal[0].why.as_deref()), ("ana", Some("survey")));
    assert_eq!(journal[0].batch, Some(2));
    assert_eq!(about(&book, "unit", "a").len(), 3);
}

#[test]
fn the_journal_cannot_be_rewritten() {
    let mut book = Book::in_memory().expect("book");
    let change = book.change(&actor(), Some("fleet.csv")).expect("change");
    change.put(&UNITS, None, &unit("a").values()).expect("put");
    change.commit().expect("commit");
    for sql in [
        "UPDATE journal SET who = 'x'",
        "DELETE FROM journal",
        "UPDATE import_batches SET who = 'x'",
        "DELETE FROM import_batches",
    ] {
        let error = book.connection.execute(sql, []).expect_err(sql).to_string();
        assert!(error.contains("the journal is never"), "{error}");
    }
}

#[test]
fn what_is_not_committed_never_happened() {
    let mut book = Book::in_memory().expect("book");
    let before = dump(&book);
    let change = book.change(&actor(), Some("fleet.csv")).expect("change");
    change.put(&UNITS, None, &unit("a").values()).expect("put");
    assert_eq!(change.tally().new, 1);
    drop(change);
    assert_eq!(dump(&book), before);
}

#[test]
fn the_same_key_twice_is_noticed_in_an_empty_table() {
    let mut book = Book::in_memory().expect("book");
    let change = book.change(&actor(), None).expect("change");
    let all: Vec<usize> = (0..Unit::COLUMNS.len()).collect();
    let mut upsert = change.upsert(&UNITS, None, &all, false).expect("upsert");
    upsert.put(None, &unit("a").values()).expect("first");
    let error = upsert.put(None, &unit("a").values()).expect_err("second");
    assert!(matches!(error, BookError::Twice { kind: "unit" }), "{error}");
}

#[test]
fn an_updated_offer_keeps_its_place() {
    let mut book = Book::in_memory().expect("book");
    let offer = |name: &str, price| Offer {
        offer: name.into(),
        price: Money(price),
        rated_kva: 1.0,
        ..Offer::blank()
    };
    for offers in [[offer("b", 1), offer("a", 1)], [offer("a", 2), offer("b", 3)]] {
        let change = book.change(&actor(), None).expect("change");
        for offer in &offers {
            change.put(&OFFERS, None, &offer.values()).expect("put");
        }
        change.commit().expect("commit");
    }
    assert_eq!(book.offers().expect("offers"), [offer("b", 3), offer("a", 2)]);
}

fn sheet(name: &str) -> BasisSheet {
    let basis = Basis {
        name: name.into(),
        currency: "EUR".into(),
        first_year: 2026,
        horizon_years: 30,
        discount_rate_pct: 5.0,
        energy_price_per_kwh: Some(0.1),
        estimate_missing: Some(true),
        ..Basis::blank()
    };
    let range = |quantity: &str| BasisRange {
        quantity: quantity.into(),
        low: Some(0.05),
        high: Some(0.2),
        ..BasisRange::blank()
    };
    BasisSheet {
        basis,
        ranges: vec![range("energy_price_per_kwh"), range("discount_rate_pct")],
        budgets: vec![
            BasisBudget { year: 2026, budget: 1e6 },
            BasisBudget { year: 2027, budget: 2e6 },
        ],
    }
}

#[test]
fn a_basis_is_saved_as_a_whole() {
    let mut book = Book::in_memory().expect("book");
    let error = book.basis(None).expect_err("none yet").to_string();
    assert_eq!(error, "the book has no basis yet; import one: ironhum import basis FILE");
    book.save_basis(&sheet("plan"), &actor()).expect("save");
    assert_eq!(book.basis(None).expect("only one"), sheet("plan"));
    let before = dump(&book);
    book.save_basis(&sheet("plan"), &actor()).expect("save again");
    assert_eq!(dump(&book), before);

    let mut less = sheet("plan");
    less.basis.energy_price_per_kwh = Some(0.2);
    less.basis.estimate_missing = None;
    less.ranges.remove(0);
    less.budgets.remove(1);
    book.save_basis(&less, &actor()).expect("save less");
    assert_eq!(book.basis(Some("plan")).expect("basis"), less);
    let removed: Vec<_> = book
        .journal(9)
        .expect("journal")
        .into_iter()
        .filter(|entry| entry.action == "removed")
        .map(|entry| entry.key)
        .collect();
    assert_eq!(removed, [Some("plan/2027".into()), Some("plan/energy_price_per_kwh".into())]);

    book.save_basis(&sheet("low"), &actor()).expect("second");
    let error = book.basis(None).expect_err("two").to_string();
    assert_eq!(
        error,
        "which basis? name one with --basis: plan, low; to make one of them the current one, import its file with --current"
    );
    let error = book.basis(Some("paln")).expect_err("unknown").to_string();
    assert_eq!(error, "the book has no basis paln; did you mean plan?");
    book.set_current_basis("low", &actor()).expect("choose");
    assert_eq!(book.basis(None).expect("chosen").basis.name, "low");
    assert_eq!(book.journal(1).expect("journal")[0].action, "chosen");
    assert!(book.set_current_basis("none", &actor()).is_err());

    let mut series = sheet("series");
    series.basis.price_series = Some("spot".into());
    let error = book.save_basis(&series, &actor()).expect_err("unknown series").to_string();
    assert_eq!(error, "the book has no price series spot");
    assert_eq!(book.bases().expect("bases"), ["plan", "low"]);
}

#[test]
fn a_tender_is_saved_as_a_whole() {
    let mut book = Book::in_memory().expect("book");
    let lot = |name: &str| Lot { lot: name.into(), rated_kva: 630.0, ..Lot::blank() };
    let mut tender = TenderSheet {
        tender: Tender { tender: "T1".into(), currency: "EUR".into(), dated: None },
        rates: vec![TenderRate { currency: "USD".into(), rate: 0.9 }],
        lots: vec![lot("L2"), lot("L1")],
        bids: vec![],
        measured: vec![],
        awards: vec![],
    };
    let save = |book: &mut Book, tender: &TenderSheet| {
        let change = book.change(&actor(), Some("t1.toml"))?;
        change.save_tender(tender)?;
        change.commit()
    };
    save(&mut book, &tender).expect("save");
    assert_eq!(book.tender("T1").expect("tender"), tender);
    book.connection
        .execute("INSERT INTO bids (tender, lot, bid, price_milli, no_load_loss_w) VALUES ('T1', 'L1', 'B1', 1, 1.0)", [])
        .expect("bid");
    tender.lots.remove(1);
    let error = save(&mut book, &tender).expect_err("in use").to_string();
    assert_eq!(error, "lot L1 has bids in the book and stays; keep it in the file");
    tender.lots = vec![lot("L1")];
    tender.rates.clear();
    save(&mut book, &tender).expect("lot without bids goes");
    let stored = book.tender("T1").expect("tender");
    assert_eq!((stored.lots, stored.rates, stored.bids.len()), (vec![lot("L1")], vec![], 1));
    let change = book.change(&actor(), None).expect("change");
    assert!(change.has(&LOTS, &["T1", "L1"]).expect("has"));
    assert!(!change.has(&LOTS, &["T1", "L2"]).expect("has"));
    assert!(
        change.has(&TENDERS, &["T1"]).expect("has") && !change.has(&BASES, &["T1"]).expect("has")
    );
}

#[test]
fn series_come_back_to_the_bit_and_old_values_stay_in_the_journal() {
    let mut book = Book::in_memory().expect("book");
    let values = vec![0.1 + 0.2, -5e-324, 1e300, 0.0];
    let first_timestamp = Some("2026-01-01T00:00:00Z".to_owned());
    let profile = Profile {
        profile: "rural".into(),
        step_minutes: 60,
        first_timestamp: first_timestamp.clone(),
        values,
    };
    let prices = PriceSeries {
        name: "spot".into(),
        step_minutes: 60,
        first_timestamp,
        price_per_kwh: vec![0.1, -0.2],
        co2_kg_per_kwh: None,
        system_load: Some(vec![1.0, 2.0]),
    };
    let put = |book: &mut Book, profile: &Profile, prices: &PriceSeries| {
        let change = book.change(&actor(), Some("hourly.csv")).expect("change");
        let outcomes = (
            change.put_profile(profile).expect("profile"),
            change.put_price_series(prices).expect("prices"),
        );
        change.commit().expect("commit");
        outcomes
    };
    assert_eq!(put(&mut book, &profile, &prices), (Outcome::New, Outcome::New));
    assert_eq!(book.profiles().expect("profiles"), std::slice::from_ref(&profile));
    assert_eq!(book.price_series("spot").expect("prices"), prices);
    let before = dump(&book);
    assert_eq!(put(&mut book, &profile, &prices), (Outcome::Same, Outcome::Same));
    assert_eq!(dump(&book), before);

    let other = Profile { values: vec![1.0; 2], ..profile.clone() };
    let dearer = PriceSeries { price_per_kwh: vec![0.3, 0.4], ..prices };
    assert_eq!(put(&mut book, &other, &dearer), (Outcome::Changed, Outcome::Changed));
    assert_eq!(book.profiles().expect("profiles"), [other]);
    assert_eq!(book.price_series("spot").expect("prices"), dearer);
    let kept = |kind: &str| -> Vec<f64> {
        let sql = "SELECT replaced FROM journal WHERE kind = ?1 AND replaced IS NOT NULL";
        let bytes: Vec<u8> =
            book.connection.query_row(sql, [kind], |row| row.get(0)).expect("kept");
        bytes.chunks(8).map(|b| f64::from_le_bytes(b.try_into().expect("8"))).collect()
    };
    assert_eq!(kept("profile"), profile.values);
    assert_eq!(kept("price series"), [0.1, -0.2, 1.0, 2.0]);
    assert_eq!(
        book.price_series("sport").expect_err("unknown").to_string(),
        "the book has no price series sport; did you mean spot?"
    );
}

#[test]
fn what_is_no_book_is_refused_and_left_alone() {
    let dir = tempfile::tempdir().expect("dir");
    let refused =
        |path: &std::path::Path, access| Book::open(path, access).expect_err("refused").to_string();
    let path = dir.path().join("none.book");
    assert!(refused(&path, Access::ReadWrite).starts_with("there is no book at"));
    assert!(!path.exists());
    for access in [Access::ReadOnly, Access::ReadWrite, Access::Create] {
        assert!(refused(dir.path(), access).ends_with("it is a directory"));
        let text = dir.path().join("text.csv");
        fs::write(&text, "unit,rated_kva\n".repeat(100)).expect("write");
        assert!(refused(&text, access).ends_with("it is no SQLite file"));
        let other = dir.path().join("other.db");
        drop(fs::remove_file(&other));
        let store = rusqlite::Connection::open(&other).expect("open");
        store.execute_batch("CREATE TABLE t (x)").expect("table");
        drop(store);
        let before = fs::read(&other).expect("read");
        assert!(refused(&other, access).ends_with("it is a database of another program"));
        assert_eq!(fs::read(&other).expect("read"), before);
    }
    let empty = dir.path().join("empty");
    fs::write(&empty, "").expect("write");
    assert!(refused(&empty, Access::ReadWrite).ends_with("it is empty"));
    Book::open(&empty, Access::Create).expect("an empty file becomes a book");
    Book::open(&empty, Access::ReadOnly).expect("now it is one");
}

#[test]
fn a_newer_book_is_refused_before_any_write() {
    let dir = tempfile::tempdir().expect("dir");
    let path = dir.path().join("fleet.book");
    let newer = [STEPS, &[M::up("CREATE TABLE later (x INTEGER) STRICT")]].concat();
    drop(Book::open_with(&path, Access::Create, &newer).expect("newer program"));
    let before = fs::read(&path).expect("read");
    for access in [Access::ReadOnly, Access::ReadWrite, Access::Create] {
        let error = Book::open(&path, access).expect_err("newer").to_string();
        let (newer, own) =
            (format!("version {}", STEPS.len() + 1), format!("up to {}", STEPS.len()));
        assert!(error.contains(&newer) && error.contains(&own), "{error}");
    }
    assert_eq!(fs::read(&path).expect("read"), before);
}

#[test]
fn an_older_book_is_backed_up_before_it_is_changed() {
    let dir = tempfile::tempdir().expect("dir");
    let path = dir.path().join("fleet.book");
    let mut book = Book::open(&path, Access::Create).expect("create");
    book.save_basis(&sheet("plan"), &actor()).expect("save");
    let before = dump(&book);
    drop(book);
    let newer = [STEPS, &[M::up("ALTER TABLE settings ADD COLUMN x TEXT")]].concat();
    let error = Book::open_with(&path, Access::ReadOnly, &newer).expect_err("older").to_string();
    let (own, next) = (STEPS.len(), STEPS.len() + 1);
    let versions = [own, next].map(|version| format!("version {version}"));
    assert!(versions.iter().all(|version| error.contains(version)), "{error}");
    let book = Book::open_with(&path, Access::ReadWrite, &newer).expect("migrate");
    assert_eq!(book.bases().expect("bases"), ["plan"]);
    let copy = dir.path().join(format!("fleet.book.before-v{next}"));
    assert_eq!(dump(&Book::open(&copy, Access::ReadOnly).expect("backup")), before);

    // A step that fails leaves the book as it was, and a second backup takes another name.
    drop(book);
    let broken = [&newer[..], &[M::up("CREATE TABLE y (x INTEGER) STRICT; NO SQL")]].concat();
    assert!(Book::open_with(&path, Access::ReadWrite, &broken).is_err());
    assert!(Book::open_with(&path, Access::ReadWrite, &broken).is_err());
    assert!(dir.path().join(format!("fleet.book.before-v{}-2", next + 1)).exists());
    Book::open_with(&path, Access::ReadWrite, &newer).expect("as it was");
}

/// A book of every earlier version opens in this one with all that it held.
#[test]
fn books_of_earlier_versions_are_brought_up_to_date() {
    for steps in 1..STEPS.len() {
        let dir = tempfile::tempdir().expect("dir");
        let path = dir.path().join("fleet.book");
        let mut old = Book::open_with(&path, Access::Create, &STEPS[..steps]).expect("older");
        old.save_basis(&sheet("plan"), &actor()).expect("save");
        let before = dump(&old);
        drop(old);
        let book = Book::open(&path, Access::ReadWrite).expect("migrate");
        let after = dump(&book);
        assert!(before.lines().all(|line| after.contains(line)), "{after}");
        assert!(book.deliveries("T1").expect("deliveries").is_empty());
    }
}

fn awarded(lot: &str, bid: &str) -> Award {
    Award {
        lot: lot.into(),
        bid: bid.into(),
        factor_a_per_kw: 12_000.5,
        owning_cost: 26_086.3,
        recommended: Some("A".into()),
        program: "0.1.0".into(),
        awarded_at: actor().at,
        awarded_by: actor().who,
        why: actor().why,
        ..Award::blank()
    }
}

/// A tender `T1` with a lot and the bids A and B.
fn with_bids(book: &mut Book) -> TenderSheet {
    let lot = Lot { lot: "L1".into(), rated_kva: 630.0, ..Lot::blank() };
    let tender = TenderSheet {
        tender: Tender { tender: "T1".into(), currency: "EUR".into(), dated: None },
        rates: vec![TenderRate { currency: "USD".into(), rate: 0.9 }],
        lots: vec![lot],
        bids: vec![],
        measured: vec![],
        awards: vec![],
    };
    let change = book.change(&actor(), Some("t1.toml")).expect("change");
    change.save_tender(&tender).expect("save");
    for name in ["A", "B"] {
        let (tender, lot) = ("T1".into(), "L1".into());
        let bid = Bid { tender, lot, bid: name.into(), ..Bid::blank() };
        change.put(&BIDS, None, &bid.values()).expect("put");
    }
    change.commit().expect("commit");
    tender
}

#[test]
fn an_award_stays_until_it_is_withdrawn() {
    let mut book = Book::in_memory().expect("book");
    let mut tender = with_bids(&mut book);
    let change = book.change(&actor(), None).expect("change");
    change.award("T1", &awarded("L1", "A")).expect("award");
    let again = change.award("T1", &awarded("L1", "B")).expect_err("awarded").to_string();
    assert!(again.starts_with("lot L1 of tender T1 is awarded"), "{again}");
    assert!(change.award("T1", &awarded("L2", "A")).is_err(), "no such lot");
    change.commit().expect("commit");
    assert_eq!(book.tender("T1").expect("tender").awards, [awarded("L1", "A")]);
    let entry = &book.journal(1).expect("journal")[0];
    assert_eq!((entry.action.as_str(), entry.kind.as_str()), ("chosen", "award"));
    assert_eq!((entry.who.as_str(), entry.why.as_deref()), ("ana", Some("survey")));
    assert_eq!(entry.key.as_deref(), Some("T1/L1"));
    assert_eq!(entry.what["bid"]["new"], "A");
    assert_eq!(entry.what["factor_a_per_kw"]["new"], 12_000.5);

    // The same sheet is let in, another rate, currency or lot is not; a further lot is.
    let save = |book: &mut Book, sheet: &TenderSheet| {
        let change = book.change(&actor(), None).expect("change");
        change.save_tender(sheet).map(|()| change.commit().expect("commit").changed)
    };
    assert_eq!(save(&mut book, &tender).expect("the same"), 0);
    let refused = |book: &mut Book, sheet: &TenderSheet| {
        let saved = save(book, sheet);
        assert!(matches!(saved, Err(BookError::Awarded { .. } | BookError::AwardedRate { .. })));
    };
    let mut other = tender.clone();
    other.rates[0].rate = 0.8;
    refused(&mut book, &other);
    other = tender.clone();
    other.tender.currency = "USD".into();
    refused(&mut book, &other);
    other = tender.clone();
    other.lots[0].tolerance = Some(crate::engine::columns::Tolerance::None);
    refused(&mut book, &other);
    tender.lots.push(Lot { lot: "L2".into(), rated_kva: 100.0, ..Lot::blank() });
    save(&mut book, &tender).expect("another lot");

    let change = book.change(&actor(), None).expect("change");
    assert!(change.withdraw("T1", "L2").is_err(), "not awarded");
    assert_eq!(change.withdraw("T1", "L1").expect("withdraw"), awarded("L1", "A"));
    change.award("T1", &awarded("L1", "B")).expect("award");
    change.commit().expect("commit");
    let actions: Vec<_> = about(&book, "award", "T1/L1").into_iter().map(|e| e.action).collect();
    assert_eq!(actions, ["chosen", "removed", "chosen"], "newest first");
}

#[test]
fn a_backup_overwrites_nothing_and_a_second_writer_waits_its_turn() {
    let dir = tempfile::tempdir().expect("dir");
    let path = dir.path().join("fleet.book");
    let mut book = Book::open(&path, Access::Create).expect("create");
    assert_eq!(book.path(), Some(path.as_path()));
    let mut other = Book::open(&path, Access::ReadWrite).expect("second");
    other.connection.busy_timeout(std::time::Duration::from_millis(20)).expect("timeout");
    let change = book.change(&actor(), None).expect("change");
    let error = other.change(&actor(), None).expect_err("locked").to_string();
    assert!(error.starts_with("another program is writing to the book"), "{error}");
    change.put(&UNITS, None, &unit("a").values()).expect("put");
    let copy = dir.path().join("copy.book");
    other.backup(&copy, &|| false).expect("backup beside a writer");
    change.commit().expect("commit");
    assert_eq!(
        Book::open(&copy, Access::ReadOnly).expect("copy").counts().expect("counts").units,
        0
    );
    assert!(matches!(book.backup(&copy, &|| false), Err(BookError::Exists { .. })));
    assert!(book.backup(&dir.path().join("no/such/dir"), &|| false).is_err());
    // A copy that is stopped leaves nothing, under no name.
    let names = || fs::read_dir(dir.path()).expect("folder").count();
    let (before, other) = (names(), dir.path().join("other"));
    assert!(matches!(book.backup(&other, &|| true), Err(BookError::Stopped)));
    assert_eq!((names(), other.exists()), (before, false));

    let mut reader = Book::open(&path, Access::ReadOnly).expect("reader");
    assert_eq!(reader.counts().expect("counts").units, 1);
    assert!(matches!(reader.change(&actor(), None), Err(BookError::ReadOnly)));
}
