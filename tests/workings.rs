//! Every figure of a result opens a working whose last step is the figure, to the last digit: walked over all
//! units of the demo, the ones that are left out too, its factors, its tender and its settlement.

mod support;

use ironhum::book::{Access, Book};
use ironhum::engine::columns::{
    Award, CapitalRecovery, CashFlow, FactorMethod, Measured, VoltageModel,
};
use ironhum::study::Desk;
use ironhum::study::explain::{Explained, Opening, StepRow};
use ironhum::study::factors::{self, LoadAsked};
use ironhum::study::settle::Settled;
use ironhum::study::tender::{Case, LotQuestion};
use ironhum::study::unit::{FitAsked, Question};
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

/// Opens every figure of the units of a desk, each `step`-th; how many figures, units and ranked units there are.
fn walk_units(book: &Book, desk: &Desk, step: usize) -> (usize, usize, usize) {
    let context = desk.context().expect("a sound basis");
    let (mut figures, mut units, mut ranked) = (0, 0, 0);
    for i in (0..desk.fleet.len()).step_by(step) {
        let unit = book.unit(desk.fleet.unit.get(i)).expect("is in the book");
        let question = Question::new(desk, &context, &unit).expect("is on the desk");
        figures += walk(&question);
        units += 1;
        ranked += usize::from(question.dossier().expect("is told").keep_or_replace.is_some());
    }
    (figures, units, ranked)
}

#[test]
fn every_figure_of_every_unit_opens() {
    let (_program, book) = demo();
    let desk = Desk::read(&book, None).expect("a desk");
    let (figures, units, ranked) = walk_units(&book, &desk, 1);
    assert!(ranked > 100 && ranked < units, "ranked and left-out units are walked");
    assert!(figures > 50 * ranked, "{figures} figures");
}

/// Other rules: no failures, money at year ends, purchases charged whole, a law, nothing estimated.
#[test]
fn figures_open_under_another_basis() {
    let (_program, book) = demo();
    let desk = Desk::read(&book, None).expect("a desk");
    let mut sheet = desk.sheet.clone();
    let basis = &mut sheet.basis;
    (basis.failure_shape, basis.failure_scale_years) = (None, None);
    basis.cash_flow = Some(CashFlow::YearEnd);
    basis.capital_recovery = Some(CapitalRecovery::Full);
    basis.law = Some("eu-548-2014".to_owned());
    basis.estimate_missing = Some(false);
    basis.upkeep_per_year = None;
    let (figures, units, ranked) = walk_units(&book, &desk.with_basis(sheet), 5);
    assert!(ranked > 20 && ranked < units && figures > 50 * ranked, "{figures} of {units}");
}

/// An offer and a bid fitted to a place, beside another unit.
#[test]
fn every_figure_of_a_fit_opens() {
    let (_program, book) = demo();
    let desk = Desk::read(&book, None).expect("a desk");
    let mut sheet = desk.sheet.clone();
    sheet.basis.law = Some("eu-548-2014".to_owned());
    let desk = desk.with_basis(sheet);
    let context = desk.context().expect("a sound basis");
    let unit = book.unit("FE-0138").expect("is in the book");
    let tender = book.tender("ol-2027-1").expect("is in the book");
    let offer = FitAsked::of_offer(desk.offer("L630").expect("is in the book"));
    let bid = FitAsked::of_bid(&tender, "L1", "O1");
    for mut asked in [offer.expect("sound"), bid.expect("sound")] {
        asked.beside = Some(book.unit("FE-0113").expect("is in the book"));
        asked.network_mva = Some(250.0);
        let mut question = Question::new(&desk, &context, &unit).expect("is on the desk");
        let before = question.figures().expect("is told").len();
        question.fit = Some(&asked);
        assert!(walk(&question) > before + 20, "the fit has figures of its own");
    }
}

#[test]
fn figures_with_voltage_drop_open() {
    let (_program, book) = demo();
    let desk = Desk::read(&book, None).expect("a desk");
    let mut sheet = desk.sheet.clone();
    sheet.basis.voltage_model = Some(VoltageModel::Drop);
    sheet.basis.operating_voltage_pu = Some(1.02);
    let desk = desk.with_basis(sheet);
    let context = desk.context().expect("a sound basis");
    for i in (0..desk.fleet.len()).step_by(9) {
        let unit = book.unit(desk.fleet.unit.get(i)).expect("is in the book");
        walk(&Question::new(&desk, &context, &unit).expect("is on the desk"));
    }
    let unit = book.unit("ZE-0135").expect("is in the book");
    let question = Question::new(&desk, &context, &unit).expect("is on the desk");
    let steps = question.working("losses.load_energy_kwh").expect("opens");
    let text = StepRow::lines(&steps, 0, "EUR").join("\n");
    assert!(text.contains("v_hv = 1.02") && text.contains("load-duration histogram"), "{text}");
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
    for lot in ["L1", "L2"] {
        assert!(
            walk(&LotQuestion { case: &case, lot }) >= 9,
            "the factors of a lot, in two currencies"
        );
    }
    let mut sheet = case.sheet.clone();
    sheet.lots[0].law = Some("eu-548-2014".to_owned());
    let mut desk = Desk::read(&book, None).expect("a desk");
    desk.sheet.basis.fixed_charge_rate_pct = Some(9.0);
    let lawful = Case::new(sheet, Some(desk)).expect("sound");
    let walked = walk(&LotQuestion { case: &lawful, lot: "L1" });
    assert_eq!(walked, 9 + 5 + 4, "the other method, two limits for each insulation");
    let settled = walk(&Settled(&case));
    assert!(settled > 20, "{settled} figures of the settlement");
    // Awarded under other factors, and settled in another currency on the mean of the lot, one unit beyond tolerance.
    let mut sheet = case.sheet.clone();
    let award = |lot: &str, bid: &str| Award {
        lot: lot.into(),
        bid: bid.into(),
        factor_a_per_kw: 12_345.0,
        factor_b_per_kw: 2345.0,
        factor_aux_per_kw: 345.0,
        stray_share_pu: 0.2,
        ..Award::blank()
    };
    sheet.awards = vec![award("L1", "O1"), award("L2", "M1")];
    let of_mean = |serial: &str, no_load_loss_w: f64| Measured {
        tender: "ol-2027-1".into(),
        lot: "L2".into(),
        bid: "M1".into(),
        serial: serial.into(),
        no_load_loss_w,
        load_loss_w: 110_000.0,
        auxiliary_loss_w: Some(1600.0),
        ..Measured::blank()
    };
    sheet.measured.extend([of_mean("m-1", 10_500.0), of_mean("m-2", 13_000.0)]);
    let awarded = Case::new(sheet, Some(Desk::read(&book, None).expect("a desk"))).expect("sound");
    let more = walk(&Settled(&awarded));
    assert!(more > settled + 20, "{more} figures");
}
