//! Every figure of a result opens a working whose last step is the figure, to the last digit: walked over all
//! units of the demo, the ones that are left out too, its factors, its tender and its settlement.

mod support;

use ironhum::book::{Access, Book};
use ironhum::engine::columns::FactorMethod;
use ironhum::study::Desk;
use ironhum::study::explain::{Explained, Opening, StepRow};
use ironhum::study::factors::{self, LoadAsked};
use ironhum::study::settle::Settled;
use ironhum::study::tender::Case;
use ironhum::study::unit::Question;
use support::Program;

fn demo() -> (Program, Book) {
    let program = Program::new();
    program.import_demo();
    let book = Book::open(program.book(), Access::ReadOnly).expect("a book");
    (program, book)
}

/// Holds the last step of a working to a figure, bit for bit.
fn holds(of: &str, figure: f64, steps: &[StepRow]) {
    let last = steps.last().unwrap_or_else(|| panic!("{of}: no working"));
    assert_eq!(last.value.to_bits(), figure.to_bits(), "{of}: {figure} is not {}", last.value);
    assert!(last.value.is_finite() && !last.formula.is_empty() && !last.source.is_empty(), "{of}");
}

/// Opens every figure of a result; how many there are.
fn walk(result: &impl Explained) -> usize {
    let called = result.called();
    let figures = result.figures().expect("is there");
    let opened = result.workings(Opening::All).expect("all open");
    assert_eq!(opened.len(), figures.len(), "{called}");
    for ((name, figure), opened) in figures.iter().zip(&opened) {
        assert_eq!(*name, opened.figure);
        holds(&format!("{called}, {name}"), *figure, &opened.steps);
    }
    figures.len()
}

#[test]
fn every_figure_of_every_unit_opens() {
    let (_program, book) = demo();
    let desk = Desk::read(&book, None).expect("a desk");
    let context = desk.context().expect("a sound basis");
    let (mut walked, mut ranked) = (0, 0);
    for i in 0..desk.fleet.len() {
        let unit = book.unit(desk.fleet.unit.get(i)).expect("is in the book");
        let question = Question::new(&desk, &context, &unit).expect("is on the desk");
        let dossier = question.dossier().expect("can be told");
        walked += walk(&question);
        ranked += usize::from(dossier.keep_or_replace.is_some());
    }
    assert!(ranked > 100 && ranked < desk.fleet.len(), "ranked and left-out units are walked");
    assert!(walked > 50 * ranked, "{walked} figures");
}

#[test]
fn a_figure_is_found_by_the_end_of_its_name() {
    let (program, _book) = demo();
    let one = |figure| program.run(&["unit", "FE-0113", "--working", figure]);
    let said = |figure| String::from_utf8(one(figure).stdout).expect("is UTF-8");
    assert!(said("keep_pv").contains("How keep_or_replace.keep_pv comes about:"));
    let complaint = |figure| String::from_utf8(one(figure).stderr).expect("is UTF-8");
    let several = complaint("peak_pu");
    assert!(several.contains("loading.peak_pu") && several.contains("losses.peak_pu"), "{several}");
    assert!(complaint("kep_pv").contains("did you mean keep_pv?"));
}

#[test]
fn every_figure_of_factors_opens() {
    let (_program, book) = demo();
    let desk = Desk::read(&book, None).expect("a desk");
    let levelized = {
        let mut sheet = desk.sheet.clone();
        sheet.basis.factor_method = Some(FactorMethod::Levelized);
        sheet.basis.fixed_charge_rate_pct = Some(9.0);
        desk.with_basis(sheet)
    };
    let stated = |asked| LoadAsked { peak_pu: Some(0.8), load_growth_pct: Some(1.1), ..asked };
    let loads = [
        LoadAsked::default(),
        stated(LoadAsked { loss_factor_pu: Some(0.3), ..LoadAsked::default() }),
        stated(LoadAsked { load_factor_pu: Some(0.5), ..LoadAsked::default() }),
        stated(LoadAsked { profile: Some("office".into()), ..LoadAsked::default() }),
    ];
    for desk in [&desk, &levelized] {
        let context = desk.context().expect("a sound basis");
        for asked in &loads {
            let walked = walk(&factors::Question { desk, context: &context, asked });
            // The levelized method needs a fixed charge rate to stand beside the other one.
            assert_eq!(walked, if std::ptr::eq(desk, &raw const levelized) { 11 } else { 6 });
        }
    }
}

#[test]
fn every_figure_of_a_tender_and_its_settlement_opens() {
    let (_program, book) = demo();
    let case = Case::read(&book, "ol-2027-1", None).expect("a tender");
    let walked = walk(&case);
    assert!(walked > 150, "{walked} figures of the tender");
    let settled = walk(&Settled(&case));
    assert!(settled > 20, "{settled} figures of the settlement");
}
