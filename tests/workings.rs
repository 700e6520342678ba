//! Every figure of a result opens a working whose last step is the figure, to the last digit: walked over all
//! units of the demo, the ones that are left out too, its factors, its tender and its settlement.

mod support;

use ironhum::book::{Access, Book};
use ironhum::study::Desk;
use ironhum::study::explain::StepRow;
use ironhum::study::unit::{Opening, Question};
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
        let figures = dossier.figures();
        let opened = question.workings(&dossier, Opening::All).expect("all open");
        assert_eq!(opened.len(), figures.len(), "{}", unit.unit);
        for ((name, figure), opened) in figures.iter().zip(&opened) {
            assert_eq!(*name, opened.figure);
            holds(&format!("{} {name}", unit.unit), *figure, &opened.steps);
            walked += 1;
        }
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
