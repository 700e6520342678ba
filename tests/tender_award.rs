//! From the award to the fleet through the commands: the book keeps who, when and why and the terms of the award;
//! settlement goes by them; measured units enter the fleet once.

mod support;

use std::process::Output;

use ironhum::book::{Access, Actor, Book};
use ironhum::study::StudyError;
use ironhum::study::tender::Case;
use ironhum::study::tender::decide::{self, Choice};
use ironhum::study::tender::deliver::{Wanted, deliver};
use serde_json::{Value, json};
use support::{Program, demo_fleet};

const TENDER: &str = "ol-2027-1";

fn demo() -> Program {
    let program = Program::new();
    program.import_demo();
    program
}

fn text(output: &Output) -> (Option<i32>, String, String) {
    let read = |bytes: &[u8]| String::from_utf8_lossy(bytes).into_owned();
    (output.status.code(), read(&output.stdout), read(&output.stderr))
}

/// A command that is refused: its exit status and what it says; it prints no result and journals nothing.
fn refused(program: &Program, arguments: &[&str]) -> (Option<i32>, String) {
    let entries = || program.json(&["journal", "--top", "1000", "--format", "json"]);
    let before = entries();
    let (code, out, error) = text(&program.run(arguments));
    assert_eq!(out, "", "{arguments:?}");
    assert_eq!(entries(), before, "{arguments:?} stored something");
    (code, error)
}

fn award(program: &Program, lot: &str, bid: &str, why: &str) -> Value {
    let base = ["award", TENDER, "--lot", lot, "--bid", bid, "--format", "json"];
    let why: &[&str] = if why.is_empty() { &[] } else { &["--why", why] };
    program.json(&[&base[..], why].concat())
}

#[test]
fn the_bid_that_leads_is_awarded_without_a_reason() {
    let program = demo();
    let result = award(&program, "L1", "O1", "");
    assert_eq!(result["outcome"], "new");
    let evaluated = program.json(&["tender", TENDER, "--format", "json"]);
    let (lot, given) = (&evaluated["lots"][0], &result["award"]);
    for key in ["factor_a_per_kw", "factor_b_per_kw", "factor_aux_per_kw", "recommended"] {
        assert_eq!(given[key], lot[key], "{key}");
    }
    assert_eq!(given["owning_cost"], lot["bids"][1]["owning_cost"]);
    assert_eq!((&given["awarded_by"], &given["why"]), (&json!("tester"), &Value::Null));
    assert_eq!(lot["award"]["bid"], "O1");
    assert_eq!(evaluated["lots"][1]["award"], Value::Null);

    let again = award(&program, "L1", "O1", "again");
    assert_eq!((&again["outcome"], &again["award"]["why"]), (&json!("same"), &Value::Null));
    let journal = program.json(&["journal", "--format", "json"]);
    let entries = journal["entries"].as_array().expect("entries");
    let awards: Vec<&Value> = entries.iter().filter(|entry| entry["kind"] == "award").collect();
    assert_eq!(awards.len(), 1, "{journal}");
    assert_eq!((&awards[0]["action"], &awards[0]["who"]), (&json!("chosen"), &json!("tester")));
    assert_eq!(awards[0]["what"]["bid"], json!({ "new": "O1" }));
}

#[test]
fn another_bid_needs_a_reason_and_an_award_stands() {
    let program = demo();
    let to = |bid: &'static str| ["award", TENDER, "--lot", "L1", "--bid", bid];
    let (code, error) = refused(&program, &to("V1"));
    assert_eq!(code, Some(3));
    assert!(error.contains("bid V1: is not recommended (O1 is); to award it say why"), "{error}");
    // A bid that misses a limit must be meant: a reason alone may be a slip of the hand.
    let (code, error) = refused(&program, &[&to("P1")[..], &["--why", "sister units"]].concat());
    assert_eq!(code, Some(3));
    assert!(error.contains("bid P1: misses max_no_load_loss_w"), "{error}");
    assert!(error.contains("--despite --why TEXT"), "{error}");
    let (code, error) = refused(&program, &[&to("P1")[..], &["--despite", "--why", " "]].concat());
    assert_eq!(code, Some(3));
    assert!(error.contains("misses max_no_load_loss_w"), "{error}");
    let (code, error) = refused(&program, &[&to("V1")[..], &["--why", "a\u{1b}[2J"]].concat());
    assert_eq!(code, Some(3));
    assert!(error.contains("control character") && !error.contains('\u{1b}'), "{error}");
    let (code, error) = refused(&program, &to("V2"));
    assert_eq!(code, Some(2));
    assert!(error.contains("bid V2 is not in tender ol-2027-1, lot L1"), "{error}");
    let (code, _) = refused(&program, &["award", TENDER, "--lot", "L1"]);
    assert_eq!(code, Some(2), "neither a bid nor --withdraw");
    let (code, _) = refused(&program, &["award", TENDER, "--lot", "L9", "--bid", "V1"]);
    assert_eq!(code, Some(2));
    let (code, _) = refused(&program, &[&to("O1")[..], &["--read-only"]].concat());
    assert_eq!(code, Some(2));

    let why = "maker of 38 sister units; the board agreed on 3 December";
    let given = [&to("P1")[..], &["--despite", "--why", why, "--format", "json"]].concat();
    let result = program.json(&given);
    assert_eq!(result["excluded"], json!(["max_no_load_loss_w"]));
    assert_eq!(result["measured_of_others"], json!(["O1"]));
    let (code, error) = refused(&program, &[&to("O1")[..], &["--why", "second thoughts"]].concat());
    assert_eq!(code, Some(3));
    assert!(error.contains("--withdraw --why TEXT"), "{error}");
    let shown = program.done(&["tender", TENDER, "--lot", "L1"]);
    let flat = shown.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(flat.contains("Awarded to P1 (Pilzarn) by tester on"), "{shown}");
    assert!(flat.contains(&format!("because: {why}.")), "{shown}");

    let back = ["award", TENDER, "--lot", "L1", "--withdraw"];
    let (code, error) = refused(&program, &back);
    assert_eq!(code, Some(3));
    assert!(error.contains("needs a reason"), "{error}");
    program.done(&[&back[..], &["--why", "objection of Oskavend upheld"]].concat());
    assert_eq!(award(&program, "L1", "O1", "")["outcome"], "new");
    let journal = program.json(&["journal", "--format", "json"]);
    let entries = journal["entries"].as_array().expect("entries").iter();
    let of_award = entries.filter(|entry| entry["kind"] == "award");
    let said: Vec<_> =
        of_award.map(|entry| (entry["action"].as_str(), entry["why"].as_str())).collect();
    assert_eq!(
        said,
        [
            (Some("chosen"), None),
            (Some("removed"), Some("objection of Oskavend upheld")),
            (Some("chosen"), Some(why))
        ]
    );
    let (code, _) = refused(&program, &[&back[..], &["--lot", "L2", "--why", "x"]].concat());
    assert_eq!(code, Some(2), "the lot is named twice");
}

/// A later basis moves the comparison, not the settlement of what was awarded.
#[test]
fn settlement_goes_by_the_terms_of_the_award() {
    let program = demo();
    let settled = || program.json(&["settle", TENDER, "--format", "json"]);
    let before = settled();
    assert_eq!(before["lots"][0]["awarded_to"], Value::Null);
    award(&program, "L1", "O1", "");
    let flat = |text: String| text.split_whitespace().collect::<Vec<_>>().join(" ");
    let factors = || flat(program.done(&["factors", "--tender", TENDER, "--lot", "L1"]));
    let answer = || flat(program.done(&["tender", TENDER, "--lot", "L1", "--bid", "O1"]));
    let text = factors();
    assert!(text.contains("the lot is awarded to O1 on "), "{text}");
    assert!(text.contains("at A 15 218.65, B 2 840.61") && text.contains("the same as"), "{text}");
    let text = answer();
    assert!(text.contains("basis plan-2027 gives the same today:"), "{text}");
    assert!(text.contains(" A = "), "the working: {text}");
    // Lot L2 states its factors: no basis gives them.
    award(&program, "L2", "M1", "");
    let stated = flat(program.done(&["tender", TENDER, "--lot", "L2", "--bid", "M1"]));
    assert!(stated.contains("the lot states them itself, and still does."), "{stated}");
    program.done(&["award", TENDER, "--lot", "L2", "--withdraw", "--why", "not yet"]);
    let basis = std::fs::read_to_string(demo_fleet("basis.toml")).expect("the demo");
    let dearer = basis
        .replace("discount_rate_pct = 6", "discount_rate_pct = 5")
        .replace("stray_share_pu = 0.1", "stray_share_pu = 0.3");
    program.import("basis", &program.write("basis.toml", dearer), &[]);
    let after = settled();
    assert_eq!(after["lots"][0]["awarded_to"], "O1");
    for key in ["penalty", "units", "factor_a_per_kw", "owning_cost_promised"] {
        assert_eq!(after["lots"][0][key], before["lots"][0][key], "{key}");
    }
    let lot = &program.json(&["tender", TENDER, "--format", "json"])["lots"][0];
    let number = |value: &Value| value.as_f64().expect("a number");
    assert!(number(&lot["factor_a_per_kw"]) > number(&lot["award"]["factor_a_per_kw"]));
    assert!(number(&lot["award"]["owning_cost_now"]) > number(&lot["award"]["owning_cost"]));
    let shown = program.done(&["tender", TENDER, "--lot", "L1"]);
    let flat = shown.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(flat.contains("compared again now, O1 comes to"), "{shown}");
    assert!(flat.contains("instead of 26 086.30 EUR"), "{shown}");
    assert!(!flat.contains("O1 is recommended instead of O1"), "{shown}");
    // The answer to a bidder goes by the award, and says in one line what would be otherwise.
    let bid = program.done(&["tender", TENDER, "--lot", "L1", "--bid", "O1", "--working"]);
    let flat = bid.split_whitespace().collect::<Vec<_>>().join(" ");
    for said in [
        "The lot is awarded to O1 (Oskavend) by tester on",
        "goes by the factors and corrections kept with the award",
        "A 15 218.65 no-load (iron) loss kept with the award",
        "owning cost 26 086.30",
        "today's basis would say otherwise: A ",
        "stray share 0.3 instead of 0.1; O1 at ",
    ] {
        assert!(flat.contains(said), "{said}\n{bid}");
    }
    let text = answer();
    assert!(text.contains("from basis plan-2027 as it stood on "), "{text}");
    assert!(!text.contains("gives the same today"), "{text}");
    let text = factors();
    assert!(text.contains("others than here; what is settled goes by those"), "{text}");
    assert!(!text.contains("write them below [[lot]]"), "{text}");
    let aside = program.done(&["tender", TENDER, "--lot", "L1", "--bid", "O1", "--from-basis"]);
    assert!(!aside.contains("kept with the award"), "asked for the basis: {aside}");
    let now = &lot["bids"][1];
    assert_eq!(now["bid"], "O1");
    assert!(!flat.contains(&format!("= {} EUR", now["owning_cost"])), "{bid}");
    let report = program.done(&["report", "tender", TENDER, "-"]);
    assert!(report.contains("| L1 | 60 | awarded, second | O1 | Oskavend |"), "{report}");
    assert!(report.contains("lot L1: compared again now, O1 comes to"), "{report}");
    assert!(report.contains("| 26 086 |\n"), "as awarded, in the first table: {report}");
    let head = report.find("Awarded to O1 on ").expect("the award");
    assert!(head < report.find("How the factors come about").expect("below"), "{report}");
    assert!(report.contains("settled by the factors and the stray share of the award"), "{report}");

    // With two bases and none chosen the settlement of an awarded lot still needs none.
    let other = basis.replace("name = \"plan-2027\"", "name = \"plan-2028\"");
    program.import("basis", &program.write("other.toml", other), &[]);
    let (code, error) = refused(&program, &["tender", TENDER]);
    assert_eq!(code, Some(2));
    assert!(error.contains("plan-2027, plan-2028"), "{error}");
    assert_eq!(settled()["lots"][0]["penalty"], before["lots"][0]["penalty"]);
}

#[test]
fn what_was_awarded_is_not_changed_by_an_import() {
    let program = demo();
    award(&program, "L1", "O1", "");
    let file = |name: &str| std::fs::read_to_string(demo_fleet(name)).expect("the demo");
    let refuse = |what: &str, text: &str, said: &str| {
        let path = program.write("again", text);
        let (code, error) = refused(&program, &["import", what, &path.to_string_lossy()]);
        assert_eq!(code, Some(3), "{error}");
        assert!(error.contains(said), "{said}\n{error}");
    };
    let bids = file("bids.csv");
    let lower = bids.replace("400,,330,2860", "400,,340,2860");
    refuse("bids", &lower, "no_load_loss_w: 340: would change bid O1: ol-2027-1/L1 is awarded");
    // The other bids are what it was compared with.
    let rival = bids.replace("O1-ALT,Oskavend,13980", "O1-ALT,Oskavend,11980");
    refuse("bids", &rival, "price: 11980: would change bid O1-ALT: ol-2027-1/L1 is awarded");
    refuse("bids", &rival, "ironhum award ol-2027-1 --lot L1 --withdraw --why TEXT");
    let late = bids.replace("ol-2027-1,L1,V1,", "ol-2027-1,L1,V9,");
    assert_ne!(late, bids);
    refuse("bids", &late, "bid: V9: is new, but ol-2027-1/L1 is awarded and takes no further bid");
    let lost = bids.replace("ol-2027-1,L1,V1,", "ol-2027-1,L7,V1,");
    refuse("bids", &lost, "is no lot of tender ol-2027-1 in the book; its lots: L1, L2");
    let tender = file("tender.toml");
    let dearer = tender.replace("SEK = 0.0885", "SEK = 0.09");
    refuse("tender", &dearer, "[rates] SEK of tender ol-2027-1 stays at 0.0885, by which lot L1");
    let at = 1 + tender.lines().position(|line| line.starts_with("SEK")).expect("a rate");
    refuse("tender", &dearer, &format!("{at}: rates: SEK"));
    refuse(
        "tender",
        &tender.replacen("tolerance = \"iec\"", "tolerance = \"none\"", 1),
        "is awarded",
    );
    refuse("tender", &tender.replace("currency = \"EUR\"", "currency = \"SEK\""), "is awarded");
    // The same files again, a remark, a bid for the other lot and that lot itself are no change of what was awarded.
    program.import("bids", &demo_fleet("bids.csv"), &[]);
    program.import("tender", &demo_fleet("tender.toml"), &[]);
    let remark = bids
        .replace("26,5,\n", "26,5,Clarified by letter of 2 December\n")
        .replace("541000,EUR", "539000,EUR");
    program.import("bids", &program.write("bids.csv", remark), &[]);
    let lot = tender.replace("max_sound_db = 75", "max_sound_db = 80");
    program.import("tender", &program.write("tender.toml", lot), &[]);
    // Once the award is withdrawn they may change.
    program.done(&["award", TENDER, "--lot", "L1", "--withdraw", "--why", "an error in a bid"]);
    program.import("bids", &program.write("bids.csv", rival), &[]);
}

#[test]
fn measured_units_enter_the_fleet_once() {
    let program = demo();
    let (code, error) = refused(&program, &["deliver", TENDER]);
    assert_eq!(code, Some(3));
    assert!(error.contains("lot L1 is not awarded, lot L2 is not awarded"), "{error}");
    award(&program, "L2", "M1", "");
    let (code, error) = refused(&program, &["deliver", TENDER, "--lot", "L2"]);
    assert_eq!(code, Some(3));
    assert!(error.contains("lot L2 has no measured unit of the awarded bid"), "{error}");
    award(&program, "L1", "O1", "");
    let (code, error) = refused(&program, &["deliver", TENDER, "--except", "0427-99"]);
    assert_eq!(code, Some(2));
    assert!(error.contains("serial 0427-99 is not in tender"), "{error}");

    let deliver = |more: &[&str]| {
        program.json(&[&["deliver", TENDER, "--format", "json", "--prefix", "T-"], more].concat())
    };
    let first = deliver(&["--except", "0427-04"]);
    let outcomes = |result: &Value| -> Vec<String> {
        let units = result["units"].as_array().expect("units");
        units.iter().map(|unit| unit["outcome"].as_str().expect("a word").to_owned()).collect()
    };
    assert_eq!(outcomes(&first), vec!["new".to_owned(); 7]);
    assert_eq!(
        first["left_out"][0],
        json!({"lot": "L1", "serial": "0427-04", "why": "is excepted"})
    );
    // Beyond tolerance it does not slip in later.
    let again = program.json(&["deliver", TENDER, "--format", "json"]);
    assert_eq!(again["left_out"][0]["serial"], "0427-04");
    let why = again["left_out"][0]["why"].as_str().expect("a reason");
    assert!(why.contains("is beyond tolerance") && why.contains("--also SERIAL"), "{why}");
    assert_eq!(again["units"][0]["unit"], "T-0427-01", "the unit keeps its name");
    assert_eq!(outcomes(&again), vec!["same".to_owned(); 7]);

    // Cold tests are at the lot's reference temperature, as the settlement has them.
    let settled = program.json(&["settle", TENDER, "--format", "json"]);
    let unit = program.json(&["unit", "T-0427-07", "--format", "json"]);
    let plate = &unit["nameplate"];
    assert_eq!(plate["load_loss_w"], settled["lots"][0]["units"][6]["load_loss_w"]);
    for (key, value) in [
        ("no_load_loss_w", json!(326.0)),
        ("reference_temp_c", json!(75.0)),
        ("rated_kva", json!(400.0)),
        ("hv_kv", json!(20.0)),
        ("lv_kv", json!(0.4)),
        ("phases", json!(3)),
        ("vector_group", json!("Dyn11")),
        ("year_made", json!(2027)),
    ] {
        assert_eq!(plate[key], value, "{key}");
    }

    // What the planner adds stays; a corrected measurement comes through; the unit is ranked like any other.
    let place = "unit,rated_kva,site,peak_kva,loss_factor_pu,vector_group\n\
                 T-0427-07,400,Zelmory,300,0.3,Dyn5\n";
    program.import("units", &program.write("place.csv", place), &[]);
    assert_eq!(outcomes(&deliver(&["--except", "0427-04"])), vec!["same".to_owned(); 7]);
    let measured = std::fs::read_to_string(demo_fleet("measured.csv")).expect("the demo");
    let corrected = measured.replace("0427-07,326,2467", "0427-07,327,2467");
    let corrected = program.write("measured.csv", corrected);
    let (code, error) = refused(&program, &["import", "measured", &corrected.to_string_lossy()]);
    assert_eq!(code, Some(3));
    let said =
        "no_load_loss_w: 327: would change what 0427-07 measured: it is in the fleet as T-0427-07";
    assert!(error.contains(said) && error.contains("--why TEXT"), "{error}");
    let corrected_path = corrected.to_string_lossy();
    let blank = ["import", "measured", &*corrected_path, "--why", " "];
    assert!(refused(&program, &blank).1.contains(said), "a blank is no reason");
    program.import("measured", &corrected, &["--why", "misread, report of 3 June"]);
    let third = deliver(&["--also", "0427-04"]);
    assert_eq!(third["units"][6]["outcome"], "changed");
    assert_eq!(third["units"][3]["outcome"], "new", "0427-04 is accepted after all");
    assert_eq!(third["units"][3]["rejectable"], true);
    let unit = program.json(&["unit", "T-0427-07", "--format", "json"]);
    assert_eq!(unit["nameplate"]["no_load_loss_w"], 327.0);
    assert_eq!(unit["nameplate"]["vector_group"], "Dyn5");
    let losses = program.json(&["losses", "--format", "json"]);
    let units = losses["units"].as_array().expect("units");
    let own = units.iter().find(|unit| unit["unit"] == "T-0427-07").expect("is computed");
    // 327 W over 8760 h.
    assert_eq!(own["no_load_energy_kwh"], 0.327 * 8760.0);

    let back = ["award", TENDER, "--lot", "L1", "--withdraw", "--why", "x"];
    let (code, error) = refused(&program, &back);
    assert_eq!(code, Some(3));
    assert!(error.contains("are in the fleet"), "{error}");
}

#[test]
fn a_unit_of_that_name_from_elsewhere_is_not_touched() {
    let program = demo();
    award(&program, "L1", "O1", "");
    let other = "unit,rated_kva,no_load_loss_w,load_loss_w\n0427-03,100,200,1500\n";
    program.import("units", &program.write("other.csv", other), &[]);
    let (code, error) = refused(&program, &["deliver", TENDER]);
    assert_eq!(code, Some(3));
    assert!(error.contains("unit 0427-03: is in the fleet already"), "{error}");
    assert!(error.contains("--prefix TEXT"), "{error}");
    assert_eq!(
        program.json(&["unit", "0427-03", "--format", "json"])["nameplate"]["rated_kva"],
        100.0
    );
    let shown = program.done(&["deliver", TENDER, "--prefix", "ol-"]);
    assert!(shown.contains("7 new, 0 changed"), "{shown}");
    let flat = shown.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(flat.contains("0427-04 of lot L1 is beyond tolerance"), "{shown}");
    assert!(flat.contains("in_service = no"), "{shown}");
    let csv = program.done(&["deliver", TENDER, "--format", "csv"]);
    assert!(csv.starts_with("unit,serial,lot,bid,rated_kva,"), "{csv}");
    assert!(
        csv.contains("\nol-0427-01,0427-01,L1,O1,400.0,328.0,2841.0,75.0,same,false\n"),
        "{csv}"
    );
}

/// Where a tender has one lot it need not be named; else the lots are.
#[test]
fn the_lot_of_factors_is_the_only_one() {
    let program = demo();
    let (code, error) = refused(&program, &["factors", "--tender", TENDER]);
    assert_eq!(code, Some(2));
    assert!(error.contains("the lots of tender ol-2027-1: L1, L2"), "{error}");
    let tender = std::fs::read_to_string(demo_fleet("tender.toml")).expect("the demo");
    let until = tender.rfind("[[lot]]").expect("two lots");
    let one = tender[..until].replace(TENDER, "one");
    program.import("tender", &program.write("one.toml", one), &[]);
    let shown = program.done(&["factors", "--tender", "one"]);
    assert!(shown.contains("Loss factors of tender one, lot L1"), "{shown}");
}

/// Without a book nothing is made.
/// What is signed is what was compared: between the two nobody else may have written.
#[test]
fn a_book_that_others_changed_is_not_awarded() {
    let program = demo();
    let open = || Book::open(program.book(), Access::ReadWrite).expect("the book");
    let actor =
        Actor { who: "tester".into(), at: "2027-05-04T08:00:00Z".into(), why: Some("x".into()) };
    let choice = Choice { lot: "L1", bid: "O1", despite: false };
    let mut book = open();
    let case = Case::read(&book, TENDER, None).expect("the tender");

    let mut sheet = book.basis(None).expect("the basis");
    sheet.basis.discount_rate_pct += 3.0;
    open().save_basis(&sheet, &actor).expect("another program");
    let busy = |result: Result<_, StudyError>| assert!(matches!(result, Err(StudyError::Busy)));
    busy(decide::award(&mut book, &case, choice, &actor).map(drop));
    assert!(book.tender(TENDER).expect("the tender").awards.is_empty());

    let case = Case::read(&book, TENDER, None).expect("read again");
    decide::award(&mut book, &case, choice, &actor).expect("awarded");
    let case = Case::read(&book, TENDER, None).expect("read again");
    open().save_basis(&sheet, &actor).expect("nothing new");
    sheet.basis.discount_rate_pct += 3.0;
    open().save_basis(&sheet, &actor).expect("another program");
    let wanted = Wanted { lot: None, except: &[], also: &[], prefix: "" };
    busy(deliver(&mut book, &case, &wanted, &actor).map(drop));
    busy(decide::withdraw(&mut book, &case, "L1", &actor).map(drop));
    assert_eq!(book.tender(TENDER).expect("the tender").awards.len(), 1);
}

#[test]
fn no_book_no_award() {
    let program = Program::new();
    let (code, out, error) = text(&program.run(&["award", TENDER, "--lot", "L1", "--bid", "O1"]));
    assert_eq!((code, out.as_str()), (Some(1), ""));
    assert!(error.contains("there is no book at"), "{error}");
    assert!(!program.book().exists());
}
