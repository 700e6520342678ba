//! Awarding a lot on the tender screen: what is said before, what is stored, and when nothing is.

use std::sync::{Arc, Mutex};

use ironhum::book::{Actor, Book};
use ironhum::engine::columns::Award;
use ironhum::study::tender::decide::{Choice, award_as_shown};
use ironhum::tui::{JournalLine, Session};

use crate::bench::{ASCII, Bench, COLOUR, PLAIN};

/// The demo on a book that takes awards.
fn session() -> (Session, Arc<Mutex<Book>>) {
    let book = Arc::new(Mutex::new(crate::demo::book()));
    let mut session = crate::demo::session();
    let into = Arc::clone(&book);
    session.award = Some(Box::new(move |asked| {
        let mut book = into.lock().unwrap();
        let actor =
            Actor { who: "ana".into(), at: "2026-12-01T09:30:00Z".into(), why: asked.why.clone() };
        let shown = (&*asked.sheet, &*asked.basis);
        let choice = Choice { lot: &asked.lot, bid: &asked.bid, despite: true };
        award_as_shown(&mut book, shown, choice, &actor)?;
        let journal = book.journal(3)?.into_iter().map(|entry| JournalLine {
            at: entry.at,
            who: entry.who,
            what: format!("{} {} {}", entry.action, entry.kind, entry.key.unwrap_or_default()),
            why: entry.why.unwrap_or_default(),
            ..JournalLine::default()
        });
        let journal = journal.collect();
        Ok((book.tender(&asked.sheet.tender.tender)?, journal))
    }));
    (session, book)
}

fn bench() -> (Bench, Arc<Mutex<Book>>) {
    let (session, book) = session();
    (Bench::on(PLAIN, 80, 24, session), book)
}

fn awards(book: &Mutex<Book>) -> Vec<Award> {
    book.lock().unwrap().tender("ol-2027-1").unwrap().awards
}

#[test]
fn who_leads_and_what_a_bid_misses_is_said_before_it_is_stored() {
    let (mut bench, book) = bench();
    // O1 leads of the near-tied ones: nothing speaks against it but that another costs less.
    let screen = bench.keys("3<Down>w").screen();
    assert!(screen.contains("Award lot L1, 60 x 400 kVA, to O1, Oskavend?"), "{screen}");
    assert!(screen.contains("owning cost 26 086 EUR a unit"), "{screen}");
    assert!(!screen.contains("a reason is needed"), "{screen}");
    let screen = bench.keys("<Esc><Up>w").screen();
    assert!(screen.contains("! O1 is recommended, not O1-ALT: a reason is needed."), "{screen}");
    let screen = bench.keys("<Esc><Down><Down>w").screen();
    assert!(screen.contains("! O1-ALT costs 401 EUR a unit less to own."), "{screen}");
    let screen = bench.keys("<Esc><End>w").screen();
    assert!(screen.contains("410 W, at most 387 W"), "{screen}");
    assert!(screen.contains("It is out, not ranked"), "{screen}");
    // q and digits are words of a reason here; Esc forgets them.
    bench.keys("q 2 reasons");
    assert!(bench.app.take_exit().is_none());
    let screen = bench.keys("<Esc>").screen();
    assert!(screen.contains("what if"), "{screen}");
    assert!(awards(&book).is_empty());
}

#[test]
fn an_award_is_stored_with_who_when_and_why() {
    let (mut bench, book) = bench();
    let screen = bench.keys("3w<Enter>").screen();
    assert!(screen.contains("O1 is recommended; to award another bid, say why."), "{screen}");
    assert!(awards(&book).is_empty());
    // The line is open still, and what is typed takes the message away.
    let screen = bench.keys("b").screen();
    assert!(!screen.contains("say why."), "{screen}");
    let screen = bench.keys("oard of 1 December<Enter>").screen();
    assert!(screen.contains("Lot L1 is awarded to O1-ALT"), "{screen}");
    let stored = awards(&book);
    assert_eq!(stored.len(), 1);
    assert_eq!((stored[0].lot.as_str(), stored[0].bid.as_str()), ("L1", "O1-ALT"));
    assert_eq!(stored[0].awarded_by, "ana");
    assert_eq!(stored[0].why.as_deref(), Some("board of 1 December"));
    let screen = bench.keys("k").screen();
    assert!(screen.contains("awarded to O1-ALT"), "{screen}");
    let said = "Awarded to O1-ALT (Oskavend) by ana on 2026-12-01, because: board of 1";
    assert!(screen.contains(said), "{screen}");
    // Not a second time, nor to another; the other lot is open.
    let screen = bench.keys("<Down>w").screen();
    assert!(screen.contains("It is awarded to O1-ALT"), "{screen}");
    let screen = bench.keys("nw").screen();
    assert!(screen.contains("Award lot L2"), "{screen}");
    let screen = bench.keys("<Esc>5").screen();
    assert!(screen.contains("chosen award ol-2027-1/L1"), "{screen}");
    assert!(screen.contains("why: board of 1 December"), "{screen}");
    assert_eq!(awards(&book).len(), 1);
}

/// A reason alone may be a slip of the hand: a bid that misses a limit must be meant.
#[test]
fn a_bid_that_is_out_is_asked_for_twice() {
    let (mut bench, book) = bench();
    let screen = bench.keys("3<End>w").screen();
    assert!(screen.contains("begin the reason with: despite"), "{screen}");
    bench.keys("sister units<Enter>");
    assert!(awards(&book).is_empty());
    bench.keys("<Ctrl-u>despite<Enter>");
    assert!(awards(&book).is_empty(), "the word alone is no reason");
    bench.keys(" the iron: sister units<Enter>");
    assert_eq!(awards(&book)[0].why.as_deref(), Some("despite the iron: sister units"));
}

#[test]
fn what_is_shown_is_what_is_awarded() {
    let (mut bench, book) = bench();
    let screen = bench.keys("3v<Down><Down>><Esc>w").screen();
    assert!(screen.contains("It shows a what if"), "{screen}");
    let screen = bench.keys("vR<Esc>4<Down><Down>>").keys("3w").screen();
    assert!(screen.contains("The basis is changed and not stored"), "{screen}");
    let screen = bench.keys("4R").keys("3w").screen();
    assert!(screen.contains("Award lot L1"), "{screen}");
    // Somebody else changes the basis meanwhile.
    {
        let mut book = book.lock().unwrap();
        let mut sheet = book.basis(None).unwrap();
        sheet.basis.discount_rate_pct = 9.0;
        let at = "2026-12-01T09:00:00Z".into();
        book.save_basis(&sheet, &Actor { who: "bo".into(), at, why: None }).unwrap();
    }
    let screen = bench.keys("it is time<Enter>").screen();
    assert!(screen.contains("was changed in the book since"), "{screen}");
    assert!(awards(&book).is_empty());
}

#[test]
fn a_book_for_reading_awards_nothing() {
    let mut bench = Bench::demo(PLAIN, 80, 24);
    let screen = bench.keys("3w").screen();
    assert!(screen.contains("open for reading only"), "{screen}");
}

#[test]
fn award_as_it_looks() {
    for (width, height) in [(80, 24), (160, 50)] {
        let mut out = String::new();
        for (word, caps) in [("colour", COLOUR), ("patterns", PLAIN), ("ascii", ASCII)] {
            let mut bench = Bench::on(caps, width, height, session().0);
            bench.keys("3<End>wdespite it their works had room");
            out.push_str(&format!("== {word}\n{}\n", bench.screen()));
            bench.keys("<Enter>k");
            out.push_str(&format!("== {word}, awarded\n{}\n", bench.screen()));
        }
        insta::assert_snapshot!(format!("award_{width}x{height}"), out);
    }
}
