//! Test reports from a file to the nameplate, the ranking, the dossier and the doubts.

mod support;

use ironhum::book::{Access, Book};
use ironhum::study::Desk;
use ironhum::study::explain::{Explained as _, Opening};
use ironhum::study::unit::Question;
use support::Program;

/// Two units without losses; their reports are the textbook tests of T3-OC-SC in `tests/reference/check-values.json`
/// (20 kVA, 2200/220 V; see the source beside it), the second with a power that its current cannot carry.
fn tested() -> Program {
    let program = Program::new();
    program.import_demo();
    let head = "unit,rated_kva,phases,hv_kv,lv_kv,peak_kva,loss_factor_pu,year_made,no_load_loss_w";
    let units = format!(
        "{head}\nTX,20,1,2.2,0.22,12,0.4,1990,\nTY,20,1,2.2,0.22,12,0.4,1990,\nTZ,20,1,2.2,0.22,12,0.4,1990,120\n"
    );
    program.import("units", &program.write("units.csv", units), &[]);
    let head = "unit,open_circuit_voltage_v,open_circuit_current_a,open_circuit_power_w,short_circuit_voltage_v,short_circuit_current_a,short_circuit_power_w,tested_on";
    let reports = format!(
        "{head}\nTX,220,4.2,148,86,10.5,360,1990-05-02\nTY,220,0.5,148,86,10.5,360,1990-05-02\nTZ,220,4.2,148,86,10.5,360,1990-05-02\n"
    );
    program.import("tests", &program.write("tests.csv", reports), &[]);
    program
}

fn number(value: &serde_json::Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

#[test]
fn a_report_fills_what_the_nameplate_leaves_blank() {
    let program = tested();
    let work = program.json(&[
        "work",
        "tests-to-nameplate",
        "rated_kva=20",
        "phases=1",
        "hv_kv=2.2",
        "lv_kv=0.22",
        "open_circuit_voltage_v=220",
        "open_circuit_current_a=4.2",
        "open_circuit_power_w=148",
        "short_circuit_voltage_v=86",
        "short_circuit_current_a=10.5",
        "short_circuit_power_w=360",
        "--format",
        "json",
    ]);
    let dossier = program.json(&["unit", "TX", "--format", "json"]);
    let tests = &dossier["tests"];
    for key in
        ["no_load_loss_w", "no_load_current_pct", "load_loss_w", "impedance_pct", "r_pu", "x_pu"]
    {
        assert_eq!(number(&tests[key]), number(&work["result"][key]), "{key}");
    }
    assert_eq!(
        tests["fills"],
        serde_json::json!([
            "impedance_pct",
            "no_load_loss_w",
            "load_loss_w",
            "no_load_current_pct"
        ])
    );
    assert!(dossier["nameplate"]["load_loss_w"].is_null(), "the book keeps its blank");
    assert!(dossier["flags"].as_array().expect("flags").iter().any(|flag| flag == "from_test"));
    // A year of the textbook's losses: 8760 h at rated voltage, copper by (12/20)²·0.4 of the load loss.
    let hours = number(&dossier["loading"]["energised_hours"]);
    assert_eq!(number(&dossier["losses"]["no_load_energy_kwh"]), 148.0 * hours / 1000.0);
    let copper = number(&tests["load_loss_w"]) * 0.36 * 0.4 * hours / 1000.0;
    assert!((number(&dossier["losses"]["load_energy_kwh"]) / copper - 1.0).abs() < 1e-12);
    assert_eq!(number(&dossier["circuit"]["r_pu"]), number(&tests["r_pu"]));
    let shown = program.done(&["unit", "TX"]);
    assert!(shown.contains("Test report of 1990-05-02: no-load loss 148.0 W"), "{shown}");
    let shown = program.done(&["unit", "TX", "--working", "tests.impedance_pct"]);
    assert!(shown.contains("V·(I_r/I)") && shown.contains("100·Z"), "{shown}");
}

#[test]
fn a_report_that_contradicts_is_told_and_not_used() {
    let program = tested();
    let dossier = program.json(&["unit", "TY", "--format", "json"]);
    assert!(dossier["tests"]["why"].as_str().expect("why").contains("open_circuit_current_a 0.5"));
    assert_eq!(dossier["tests"]["fills"], serde_json::json!([]));
    let check = program.json(&["check", "--format", "json"]);
    let of = |unit: &str| -> Vec<String> {
        let all = check["doubts"].as_array().expect("doubts");
        let own = all.iter().filter(|doubt| doubt["key"] == unit);
        own.map(|d| format!("{} {} {}", d["column"], d["kind"], d["what"])).collect()
    };
    assert!(
        of("TY")
            .iter()
            .any(|d| d.contains("open_circuit_current_a") && d.contains("contradictory")),
        "{:?}",
        of("TY")
    );
    assert!(of("TX").iter().all(|d| !d.contains("_loss_w")), "{:?}", of("TX"));
    assert!(
        of("TZ").iter().any(|d| d.contains("no_load_loss_w")
            && d.contains("+23.3 % off: the test report gives 148")),
        "{:?}",
        of("TZ")
    );
}

/// Warm tests, with and without resistances: each figure opens to its last digit, and the basis's stray share counts
/// where the split is not measured, also when it is changed on the desk.
#[test]
fn every_figure_of_a_report_opens() {
    let program = tested();
    let head = "unit,short_circuit_voltage_v,short_circuit_current_a,short_circuit_power_w,test_temp_c,hv_resistance_ohm,lv_resistance_ohm";
    let reports = format!("{head}\nTX,86,10.5,360,22,1.2,0.012\nTY,86,10.5,360,22,,\n");
    let reports = program.write("warm.csv", reports);
    program.import("tests", &reports, &[]);
    let fixed = "unit,open_circuit_current_a\nTY,4.2\n";
    program.import("tests", &program.write("fixed.csv", fixed), &[]);
    let book = Book::open(program.book(), Access::ReadOnly).expect("a book");
    let desk = Desk::read(&book, None).expect("a desk");
    let mut sheet = desk.sheet.clone();
    sheet.basis.stray_share_pu = Some(0.25);
    let other = desk.with_basis(sheet);
    let mut losses = Vec::new();
    for (desk, name) in [(&desk, "TX"), (&desk, "TY"), (&other, "TX"), (&other, "TY")] {
        let context = desk.context().expect("sound");
        let unit = book.unit(name).expect("is in the book");
        let question = Question::new(desk, &context, &unit).expect("is on the desk");
        let figures = question.figures().expect("are told");
        let opened = question.workings(Opening::All).expect("open");
        let mut seen = 0;
        for ((figure, value), opened) in figures.iter().zip(&opened) {
            let last = opened.steps.last().map(|step| step.value.to_bits());
            assert_eq!(last, Some(value.to_bits()), "{name} {figure}");
            seen += usize::from(figure.starts_with("tests."));
        }
        assert_eq!(seen, if name == "TX" { 8 } else { 6 });
        losses.push(desk.fleet.facts(desk.find(name).expect("is there")).load_loss_w);
    }
    assert_eq!(losses[0].to_bits(), losses[2].to_bits(), "a measured split needs no share");
    assert!(losses[3] < losses[1], "stray loss falls with temperature");
}
