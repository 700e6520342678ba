//! State before, keys, state after, as a person sees them.

use ironhum::engine::columns::TestReport;
use ironhum::tui::work::{Answer, Question};
use ironhum::tui::{App, ExitReason, Screen};

use crate::bench::{Bench, PLAIN};

fn bench() -> Bench {
    Bench::demo(PLAIN, 80, 24)
}

fn number(text: &str) -> f64 {
    text.replace(' ', "").parse().unwrap_or_else(|_| panic!("{text:?} is a number"))
}

#[test]
fn cursor_moves_both_ways() {
    let mut bench = bench();
    assert!(bench.cursor().contains("ZW-T1"));
    assert!(bench.keys("<Down>j").cursor().contains("FE-T1"));
    assert!(bench.keys("k<Up>").cursor().contains("ZW-T1"));
    assert!(bench.keys("<End>").cursor().contains("229 "));
    assert!(bench.keys("<PageUp>").cursor().contains("211 "));
    assert!(bench.keys("g").cursor().contains("ZW-T1"));
}

#[test]
fn filter_is_live_on_unit_and_site_and_keeps_the_cursor_on_its_unit() {
    let mut bench = bench();
    bench.keys("/zq-");
    assert!(bench.cursor().contains("ZQ-0105"), "{}", bench.screen());
    bench.keys("<Ctrl-u>zelmory quay");
    assert!(bench.cursor().contains("ZQ-"), "{}", bench.screen());
    let units = |bench: &Bench| bench.lines().iter().filter(|line| line.contains("ZQ-")).count();
    assert!(units(&bench) > 3);
    // q is text here, not a command.
    bench.keys("q");
    assert!(bench.app.take_exit().is_none());
    assert!(bench.screen().contains("No ranked unit has these words"));
    bench.keys("<Backspace><Down><Enter>");
    let kept = bench.cursor();
    bench.keys("<Esc>");
    assert!(bench.screen().contains("229 ranked, 17 left out"));
    let unit = kept.split_whitespace().nth(2).unwrap();
    assert!(bench.cursor().contains(unit), "{kept} / {}", bench.cursor());
}

#[test]
fn pasted_text_goes_into_the_filter_only() {
    let mut bench = bench();
    bench.app.paste("q3");
    assert_eq!(bench.app.screen(), Screen::Fleet);
    assert!(bench.app.take_exit().is_none());
    bench.keys("/");
    bench.app.paste("ZQ\n-");
    bench.work();
    assert!(bench.screen().contains("filter: ZQ-"), "{}", bench.screen());
}

#[test]
fn order_goes_round() {
    let mut bench = bench();
    let first = bench.cursor();
    for by in ["waiting", "keep", "rating", "made", "unit"] {
        // What it is ordered by is a column, and the cursor stands on its top.
        bench.keys("<End>s");
        assert!(bench.screen().contains(&format!(", by {by}")), "{}", bench.screen());
        assert!(bench.lines()[1].split_whitespace().any(|word| word == by), "{}", bench.screen());
        assert!(bench.lines()[3].starts_with('▶'), "{}", bench.screen());
    }
    // Another order starts at its top.
    assert!(bench.cursor().contains(" 007 "), "{}", bench.cursor());
    assert_eq!(bench.keys("s").cursor(), first);
}

#[test]
fn left_out_units_say_why() {
    let mut bench = bench();
    // The unit to which no offer fits, the longest reason of all.
    bench.keys("x/QU-T1<Enter>");
    let screen = bench.screen();
    assert!(screen.contains("why it is left out"));
    // The whole reason of the one under the cursor, however narrow the list.
    assert!(screen.contains("stand for its own"), "{screen}");
    assert!(!bench.keys("<Esc>").screen().contains("why it is left out"));
}

#[test]
fn a_unit_opens_and_its_neighbours_follow() {
    let mut bench = bench();
    bench.keys("<Down><Enter>");
    assert_eq!(bench.app.screen(), Screen::Unit);
    assert!(bench.lines()[1].contains("OD-T1"));
    assert!(bench.keys("<Right>").lines()[1].contains("FE-T1"));
    assert!(bench.keys("p<Left>").lines()[1].contains("ZW-T1"));
    assert!(bench.keys("t").screen().contains("◆ best"));
    bench.keys("<Esc>");
    assert_eq!(bench.app.screen(), Screen::Fleet);
}

#[test]
fn digits_and_tab_lead_to_the_screens() {
    let mut bench = bench();
    for (keys, screen) in [
        ("2", Screen::Unit),
        ("3", Screen::Tender),
        ("4", Screen::Basis),
        ("5", Screen::Journal),
        ("1", Screen::Fleet),
        ("<Tab>", Screen::Unit),
        ("<BackTab><BackTab>", Screen::Journal),
    ] {
        bench.keys(keys);
        assert_eq!(bench.app.screen(), screen, "{keys}");
        assert!(!bench.screen().contains("needs"));
    }
}

#[test]
fn leaving_says_how() {
    let exit = |keys: &str| -> Option<u8> {
        let mut bench = bench();
        bench.keys(keys);
        bench.app.take_exit().map(|exit| exit.unwrap().code())
    };
    assert_eq!(exit("q"), Some(0));
    assert_eq!(exit("<Ctrl-c>"), Some(130));
    assert_eq!(exit("/<Ctrl-c>"), Some(130));
    assert_eq!(exit("?q"), None, "closes the help");
    assert_eq!(exit("?qq"), Some(0));
    assert_eq!(exit("<Esc>"), None);
    assert_eq!(ExitReason::Signal(15).code(), 143);
}

#[test]
fn tender_shows_lots_map_and_moves() {
    let mut bench = bench();
    bench.keys("3");
    assert!(bench.screen().contains("lot L1 (1 of 2)"));
    assert!(bench.screen().contains("iron 410 W, at most 387 W"));
    assert!(bench.keys("n").screen().contains("lot L2 (2 of 2)"));
    assert!(bench.keys("p").screen().contains("lot L1 (1 of 2)"));
    assert!(bench.keys("m").screen().contains("◆ today"));
    assert!(bench.keys("m").screen().contains("discount_rate_pct"));
    assert!(bench.keys("m").screen().contains("owning cost"));
    // Back leads to the bids first.
    assert!(bench.keys("mm<Esc>").screen().contains("owning cost"));
    bench.keys("<Esc>");
    assert_eq!(bench.app.screen(), Screen::Fleet);
    // Where all is seen nothing turns, and no key for it is named.
    bench.resize(160, 50);
    assert!(!bench.keys("3").screen().contains("map/changes"));
    bench.keys("m<Esc>");
    assert_eq!(bench.app.screen(), Screen::Fleet);
}

/// Columns, their places and the scale of the bars do not move while the list is scrolled.
#[test]
fn the_fleet_stands_still_while_it_is_scrolled() {
    for width in [80, 160] {
        let mut bench = Bench::demo(PLAIN, width, 24);
        let list = |line: &str| line.split('│').next().map(str::to_owned);
        let head = |bench: &Bench| [1, 2].map(|y| list(&bench.lines()[y]));
        let before = head(&bench);
        for key in ["<PageDown>", "<PageDown>", "<End>"] {
            bench.keys(key);
            assert_eq!(head(&bench), before);
        }
    }
}

/// Every year of a long horizon with its whole amount, on the smallest screens.
#[test]
fn the_money_of_the_years_is_never_cut() {
    for (width, height) in [(60, 16), (80, 24), (109, 30), (110, 24), (160, 50)] {
        let mut session = crate::demo::session();
        session.desk.sheet.basis.latest_replacement_years = Some(29);
        let mut bench = Bench::on(PLAIN, width, height, session);
        bench.keys("<Enter>t");
        let mut seen = std::collections::BTreeSet::new();
        for _ in 0..40 {
            let years = bench.lines();
            let years = years.iter().skip_while(|l| !l.contains("Replacing in each year")).skip(1);
            for line in years.filter(|line| !line.contains("quit")) {
                for at in 2027..2057 {
                    let Some((_, rest)) = line.split_once(&format!(" {at}  ")) else { continue };
                    let money: String =
                        rest.trim_start().chars().take_while(|c| *c != '…').take(7).collect();
                    assert!(money.replace(' ', "").len() >= 5, "{width}x{height}: {line}");
                    seen.insert(at);
                }
            }
            bench.keys("<Down>");
        }
        // The first two years are shorter than the lead time.
        let years = (2029..2057).collect();
        assert_eq!(seen, years, "{width}x{height}\n{}", bench.screen());
    }
}

#[test]
fn where_nothing_can_be_bought_now_it_is_said_why_and_from_when() {
    let mut session = crate::demo::session();
    let mut offers = session.desk.offers.to_vec();
    for offer in &mut offers {
        offer.lead_time_years = Some(2.0);
    }
    let desk = &session.desk;
    session.desk = ironhum::study::Desk::new(
        std::sync::Arc::clone(&desk.fleet),
        offers,
        desk.profiles.to_vec(),
        desk.series.to_vec(),
        desk.sheet.clone(),
    )
    .unwrap();
    let mut bench = Bench::on(PLAIN, 80, 24, session);
    assert!(bench.keys("<Enter>").screen().contains("none open before 2029: lead time"));
    bench.resize(160, 50);
    assert!(bench.keys("1").screen().contains("now: none open before 2029: lead time"));
}

/// The bids in their order, by the words of their lines: place, bid, owning cost last but one.
fn order(bench: &Bench) -> Vec<String> {
    let rows = bench.lines().into_iter().skip(5);
    rows.take_while(|line| !line.trim().is_empty())
        .map(|line| line.replace(['▶', '='], " ").split_whitespace().nth(1).unwrap().to_owned())
        .collect()
}

#[test]
fn a_bid_moves_with_its_price_and_back() {
    let mut bench = bench();
    let before = bench.keys("3<Down>").screen();
    let (was, bid) = (order(&bench), order(&bench)[1].clone());
    bench.keys("v");
    assert!(bench.screen().contains(&format!("What if, for bid {bid}")), "{}", bench.screen());
    // Price is the third input; far dearer, it falls back, and the cursor stays with it.
    bench.keys("<Down><Down>>>>");
    assert!(bench.screen().contains("changed, not stored"), "{}", bench.screen());
    assert_ne!(order(&bench), was);
    assert!(order(&bench).iter().position(|b| *b == bid) > Some(1), "{}", bench.screen());
    let cursor = bench.lines().into_iter().filter(|line| line.starts_with('▶'));
    assert!(cursor.clone().any(|line| line.contains(&bid)), "{}", bench.screen());
    // It stays when the inputs are closed, and follows the basis.
    bench.keys("<Esc>");
    assert!(bench.screen().contains("changed, not stored"));
    bench.keys("4<Down><Down>>3");
    assert!(bench.screen().contains("changed, not stored"));
    bench.keys("4R3vr<Esc>");
    assert_eq!(bench.screen(), before);
}

#[test]
fn factors_can_be_moved_both_ways_and_all_put_back() {
    let mut bench = bench();
    let line = |bench: &Bench| bench.lines().into_iter().find(|l| l.contains("A aux")).unwrap();
    let before = line(bench.keys("3v"));
    let less = line(bench.keys("-"));
    assert_ne!(less, before);
    assert!(less.contains("(tender)") && less.ends_with("(basis)"), "{less}");
    let more = line(bench.keys("<Right><Right>"));
    assert_ne!(more, less);
    // A loss never goes below nothing; what cannot be is told.
    bench.keys("<End><Up>").keys(&"<".repeat(20));
    assert!(bench.screen().contains("is outside 0"), "{}", bench.screen());
    assert_eq!(line(bench.keys("R")), before);
    assert!(!bench.screen().contains("not stored "));
}

#[test]
fn how_sure_the_winner_is_is_drawn_and_falls_with_what_it_is_of() {
    let mut bench = bench();
    bench.keys("3u");
    let screen = bench.screen();
    assert!(screen.contains("of 10 000 draws (seed 1)"), "{screen}");
    assert!(bench.lines()[3].contains("cheapest"), "{screen}");
    assert!(bench.keys("m").screen().contains('•'), "{}", bench.screen());
    // Of another basis, or with something moved, it no longer holds.
    bench.keys("m").keys("m");
    bench.keys("4<Down><Down>>3");
    assert!(!bench.screen().contains("draws (seed"), "{}", bench.screen());
    assert!(bench.keys("<F9>").screen().contains("draws (seed"));
    bench.keys("v>");
    assert!(!bench.keys("<Esc>").screen().contains("draws (seed"));
}

#[test]
fn a_figure_of_a_bid_opens_and_is_copied() {
    use ironhum::tui::app::Wish;
    let mut bench = bench();
    bench.keys("3<Down>");
    let bid = bench.cursor().split_whitespace().nth(2).unwrap().to_owned();
    bench.keys("e");
    let screen = bench.screen();
    assert!(screen.contains(&format!("bid {bid}")) && screen.contains("[owning cost]"), "{screen}");
    assert!(screen.contains(" = "), "{screen}");
    bench.keys("n");
    assert!(bench.screen().contains("[at tolerance]"));
    bench.keys("ny");
    // "ol-2027-1, lot …" in base64.
    let Some(Wish::Write(written)) = bench.app.take_wish() else { panic!("nothing was written") };
    assert!(written.starts_with("\u{1b}]52;c;b2wtMjAyNy0x"), "{written:?}");
    assert!(bench.screen().contains("Handed to the terminal"));
    bench.keys("<Esc>");
    assert_eq!(bench.app.screen(), Screen::Tender);
    assert!(bench.cursor().contains(&bid));
}

#[test]
fn every_figure_of_a_unit_opens_both_ways() {
    let mut bench = bench();
    bench.keys("<Down><Enter>").keys("e");
    let first = bench.screen();
    assert!(first.contains("unit OD-T1") && first.contains("saving_pv]"), "{first}");
    let mut seen = std::collections::BTreeSet::new();
    for _ in 0..100 {
        let screen = bench.keys("<Right>").screen();
        assert!(screen.contains(" = "), "{screen}");
        seen.insert(bench.lines()[2].clone());
    }
    assert!(seen.len() > 10, "{seen:?}");
    bench.keys("q").keys("e");
    assert_eq!(bench.keys("<Right><Left>").screen(), first);
    bench.keys("e<Esc>");
    assert_eq!(bench.app.screen(), Screen::Fleet);
    assert!(bench.keys("e").screen().contains("unit OD-T1"));
}

#[test]
fn in_ascii_units_and_ranges_are_spelt() {
    let mut bench = Bench::demo(crate::bench::ASCII, 160, 50);
    assert!(bench.keys("<Enter>").screen().contains("75 degC"), "{}", bench.screen());
    assert!(bench.keys("4").screen().contains(" to 2200"), "{}", bench.screen());
    let steps = bench.keys("3e").screen();
    assert!(steps.contains("A*P0/1000"), "{steps}");
    assert_eq!(steps.matches('?').count(), 1, "only the key of the help: {steps}");
    assert!(steps.contains(" EUR [") && !steps.contains("money"), "{steps}");
}

/// A row of the totals on the basis screen: before and after.
fn totals(bench: &Bench, name: &str) -> (f64, f64) {
    let line = bench.lines().into_iter().find(|line| line.trim_start().starts_with(name)).unwrap();
    let cells: Vec<char> = line.chars().collect();
    let cell = |from: usize, to: usize| number(cells[from..to].iter().collect::<String>().trim());
    (cell(13, 27), cell(27, 41))
}

#[test]
fn a_nudge_moves_the_ranking_and_reset_brings_it_back() {
    let mut bench = bench();
    bench.keys("4");
    let (stored, now) = totals(&bench, "saving EUR");
    assert_eq!(stored, now);
    bench.keys("<Down><Down>>");
    assert!(bench.cursor().contains("discount_rate_pct") && bench.cursor().contains("7 %"));
    let (same, higher) = totals(&bench, "saving EUR");
    assert_eq!(same, stored);
    assert!(higher < stored, "dearer money makes replacing worth less: {higher} < {stored}");
    assert!(bench.lines()[0].contains("basis changed"));
    // Smaller steps add up to a large one; the last bit of the figures is the same.
    let screen = bench.screen();
    bench.keys("r<Right><Right><Right><Right><Right>+++++");
    assert_eq!(bench.screen(), screen);
    // The fleet and an open unit follow.
    bench.keys("12");
    let changed = bench.screen();
    bench.keys("4R2");
    assert_ne!(bench.screen(), changed);
    assert!(!bench.lines()[0].contains("basis changed"));
    assert_eq!(totals(bench.keys("4"), "saving EUR"), (stored, stored));
}

#[test]
fn the_tender_follows_the_basis() {
    let mut bench = bench();
    let line =
        |bench: &Bench| bench.lines().into_iter().find(|l| l.contains("a kW of loss")).unwrap();
    let before = line(bench.keys("3"));
    let after = line(bench.keys("4<Down><Down>>3"));
    assert_ne!(before, after);
}

#[test]
fn words_and_blanks_can_be_nudged_and_ends_are_told() {
    let mut bench = bench();
    bench.keys("4<Down><Down><Down><Right>");
    assert!(bench.cursor().contains("year-end"), "{}", bench.cursor());
    bench.keys("<Left>");
    assert!(bench.cursor().contains("mid-year"));
    // energy_price_per_kwh: blank, because a series is named.
    bench.keys("<Down><Right>");
    assert!(bench.screen().contains("A price series is named"));
    // horizon_years goes down to 1 and no further.
    bench.keys("<Up><Up><Up><<<<<");
    assert!(bench.cursor().contains("1 years"), "{}", bench.cursor());
    assert!(bench.screen().contains("end of its range: 1 … 200"));
}

#[test]
fn what_cannot_be_computed_is_told_and_the_figures_stay() {
    let mut session = crate::demo::session();
    session.desk.sheet.basis.factor_method = None;
    session.desk.sheet.basis.fixed_charge_rate_pct = None;
    let mut bench = Bench::on(PLAIN, 80, 24, session);
    bench.keys("4");
    let before = totals(&bench, "saving EUR");
    for _ in 0..60 {
        if bench.cursor().contains("factor_method") {
            break;
        }
        bench.keys("<Down>");
    }
    bench.keys("<Right>");
    assert!(bench.screen().contains("fixed_charge_rate_pct: is required"), "{}", bench.screen());
    assert_eq!(totals(&bench, "saving EUR"), before);
    bench.keys("<Up>");
    assert!(
        bench.screen().contains("The figures are of the last basis that could be computed with")
    );
    bench.keys("<Down>r");
    assert!(!bench.lines()[0].contains("basis changed"));
}

#[test]
fn esc_stops_a_ranking_and_the_assumption_goes_back() {
    let mut bench = bench();
    bench.keys("4<Down><Down>");
    bench.press(">");
    assert!(bench.app.is_busy());
    let job = bench.app.take_questions().pop().unwrap();
    assert!(bench.screen().contains("Ranking the fleet"));
    bench.press("<Esc>");
    assert!(job.watch.is_stopped());
    assert!(!bench.app.is_busy());
    assert!(bench.screen().contains("Stopped."), "{}", bench.screen());
    assert!(bench.cursor().contains("6 %"));
    // Its late answer changes nothing.
    let before = bench.screen();
    bench.answer(job);
    assert_eq!(bench.screen(), before);
}

#[test]
fn late_answers_of_older_questions_are_dropped() {
    let mut bench = bench();
    bench.keys("4<Down><Down>");
    bench.press(">");
    let older = bench.app.take_questions().pop().unwrap();
    bench.press(">");
    let newer = bench.app.take_questions().pop().unwrap();
    assert!(older.watch.is_stopped(), "the older one is called off");
    bench.answer(newer);
    let screen = bench.screen();
    assert!(bench.cursor().contains("8 %"));
    bench.answer(older);
    assert_eq!(bench.screen(), screen);
}

#[test]
fn keys_before_the_data_do_no_harm() {
    let mut app = App::new(PLAIN, ratatui::layout::Size { width: 80, height: 24 });
    for c in "12345sxtmr<>+-jkgG/?".chars() {
        app.key(ratatui::crossterm::event::KeyEvent::from(
            ratatui::crossterm::event::KeyCode::Char(c),
        ));
    }
    let questions = app.take_questions();
    assert!(matches!(questions[..], [ironhum::tui::work::Job { question: Question::Open, .. }]));
}

#[test]
fn a_book_that_cannot_be_read_ends_the_dashboard_with_its_message() {
    use ironhum::study::StudyError;
    use ironhum::tui::work::Worker;
    let mut app = App::new(PLAIN, ratatui::layout::Size { width: 80, height: 24 });
    let mut worker = Worker::new(|_: &ironhum::study::Watch| {
        Err(StudyError::unknown("basis", "b", "the book", ["a"]))
    });
    for job in app.take_questions() {
        let done = worker.answer(job);
        assert!(!matches!(done.answer, Ok(Answer::Opened(..))));
        app.done(done);
    }
    let error = app.take_exit().unwrap().unwrap_err();
    assert_eq!(error.to_string(), "basis b is not in the book; it holds a");
}

/// A session that stores into a list.
fn storing() -> (Bench, std::sync::Arc<std::sync::Mutex<Vec<f64>>>) {
    let stored = std::sync::Arc::new(std::sync::Mutex::new(Vec::new()));
    let into = std::sync::Arc::clone(&stored);
    let mut session = crate::demo::session();
    session.save = Some(Box::new(move |sheet| {
        into.lock().unwrap().push(sheet.basis.discount_rate_pct);
        let what = "changed basis plan-2027".to_owned();
        Ok(vec![ironhum::tui::JournalLine { what, ..Default::default() }])
    }));
    (Bench::on(PLAIN, 80, 24, session), stored)
}

#[test]
fn a_basis_is_stored_only_when_asked_twice() {
    let (mut bench, stored) = storing();
    bench.keys("4<Down><Down>w");
    assert!(bench.screen().contains("Nothing was changed."));
    bench.keys(">").keys("w");
    assert!(bench.screen().contains("Store 1 change in basis plan-2027? w again stores"));
    bench.keys("<Up>w<Down>");
    assert!(stored.lock().unwrap().is_empty(), "another key came between");
    for other in ["y", "<Enter>", "<PageDown>"] {
        bench.keys("w").keys(other);
        assert!(!bench.screen().contains("w again stores"), "{other}");
        bench.keys("w<Esc>4");
        assert!(stored.lock().unwrap().is_empty(), "{other}");
    }
    bench.keys("ww");
    assert_eq!(*stored.lock().unwrap(), [7.0]);
    assert!(bench.screen().contains("Stored."));
    assert!(!bench.lines()[0].contains("basis changed"));
    let (before, now) = totals(&bench, "saving EUR");
    assert_eq!(before, now, "what is stored is what is compared with");
    bench.keys("5");
    assert_eq!(bench.lines().iter().filter(|line| line.contains("plan-2027 ")).count(), 1);
}

#[test]
fn leaving_waits_for_what_is_being_stored() {
    let (mut bench, stored) = storing();
    bench.keys("4<Down><Down>>");
    bench.press("wwq");
    assert!(bench.app.take_exit().is_none());
    bench.press(">");
    assert!(bench.cursor().contains("7 %"), "what is being stored stays");
    bench.work();
    assert_eq!(*stored.lock().unwrap(), [7.0]);
    assert_eq!(bench.app.take_exit().unwrap().unwrap(), ExitReason::Quit);
}

#[test]
fn a_book_for_reading_stores_nothing() {
    let mut bench = bench();
    bench.keys("4<Down><Down>>ww");
    assert!(bench.screen().contains("open for reading only"), "{}", bench.screen());
}

#[test]
fn a_value_of_the_basis_is_typed_and_held_against_its_column() {
    let mut bench = bench();
    bench.keys("4<Down><Down><Enter>");
    assert!(bench.screen().contains("discount_rate_pct, now 6: "), "{}", bench.screen());
    assert!(bench.screen().contains("-50 … 1000 %"), "{}", bench.screen());
    // A comma could be either sign.
    let screen = bench.keys("6,25<Enter>").screen();
    assert!(screen.contains("6,25 is not a number; the decimal sign is a point"), "{screen}");
    // Typing on takes the message away and gives the keys back.
    let screen = bench.keys("<Ctrl-u>2000").screen();
    assert!(!screen.contains("not a number") && screen.contains("Esc leave"), "{screen}");
    assert!(bench.keys("<Enter>").screen().contains("is outside"), "{}", bench.screen());
    assert!(bench.keys("<Ctrl-u>blank<Enter>").screen().contains("is required"));
    bench.keys("<Esc>");
    assert!(bench.cursor().contains("6 %"), "{}", bench.cursor());
    let before = totals(&bench, "saving EUR");
    bench.keys("<Enter>6.25<Enter>");
    assert!(bench.cursor().contains("6.25 %"), "{}", bench.cursor());
    assert!(bench.cursor().contains("changed"), "{}", bench.cursor());
    assert!(bench.screen().contains("not stored"), "{}", bench.screen());
    let after = totals(&bench, "saving EUR");
    assert!(after.0 == before.0 && after.1 < before.1, "{before:?} {after:?}");
    // Nothing typed changes nothing; a word of a choice, a blank, and what is changed in the file only.
    bench.keys("<Enter><Enter>");
    assert!(bench.cursor().contains("6.25 %"), "{}", bench.cursor());
    bench.keys("<Down><Enter>weekly<Enter>");
    assert!(bench.screen().contains("is not one of"), "{}", bench.screen());
    bench.keys("<Ctrl-u>year-end<Enter>");
    assert!(bench.cursor().contains("year-end"), "{}", bench.cursor());
    bench.keys("<Home><Enter>");
    assert!(bench.screen().contains("changed in the basis file only"), "{}", bench.screen());
}

#[test]
fn a_unit_says_its_other_measures_its_heat_and_its_law() {
    let mut session = crate::demo::session();
    session.desk.sheet.basis.law = Some("eu-548-2014".to_owned());
    let record = session.record.as_mut().and_then(|read| read("FW-0103")).unwrap();
    let tested_on = Some("2019-05-07".to_owned());
    let report = TestReport { unit: "FW-0103".to_owned(), tested_on, ..TestReport::blank() };
    session.desk = session.desk.with_tests(vec![(record, report)]);
    let mut bench = Bench::on(PLAIN, 160, 50, session);
    let screen = bench.keys("/FW-0103").keys("<Enter><Enter>").screen();
    for said in [
        "rate of return, now",
        "Estimated, and with 95 % between",
        "Test report of 2019-05-07",
        "not used: ",
        "discounted payback",
        "CO2 avoided",
        "equal yearly: keep",
        "Heat, 20 °C all year, normal paper",
        "hottest in hour",
        "h above 120 °C",
        "life used h",
        "Screening, not a loading instruction",
        "Law eu-548-2014, were it bought on",
    ] {
        assert!(screen.contains(said), "{said}\n{screen}");
    }
    // Its losses are estimated: how far its place may be off stands beside it.
    assert!(screen.contains("by saving, could be "), "{screen}");
    // What is shown can be opened; > leads from part to part.
    bench.keys("e");
    let mut parts = std::collections::BTreeSet::new();
    for _ in 0..12 {
        bench.keys(">");
        let line = bench.lines()[2].clone();
        let title = line.split(['[', ']']).nth(1).unwrap().trim().to_owned();
        parts.insert(title.split('.').next().unwrap().to_owned());
    }
    for part in ["keep_or_replace", "losses", "loading", "estimated", "thermal", "law"] {
        assert!(parts.contains(part), "{parts:?}");
    }
}

#[test]
fn help_names_every_key_of_the_place() {
    for keys in ["1", "<Enter>", "3", "4", "5", "3v", "<Enter>e", "4<Enter>"] {
        let mut bench = Bench::demo(PLAIN, 120, 200);
        bench.keys(keys);
        let places = bench.app.places();
        let help = bench.keys("<F1>").screen();
        for (def, _) in ironhum::tui::action::reachable(&places) {
            let said = def.help.split([',', ';', '.', ':']).next().unwrap();
            assert!(help.contains(said), "{keys}: {}\n{help}", def.id);
        }
    }
}
