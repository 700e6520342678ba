//! Bad input of a tender through the program: each fault is named, nothing is stored. And factors that look like money
//! per W: stored, with a warning wherever the tender is shown.

mod support;

use std::process::Output;

use serde_json::Value;
use support::Program;

const TENDER: &str = r#"tender = "T"
currency = "EUR"

[rates]
USD = 0.9

[[lot]]
lot = "L"
quantity = 2
rated_kva = 400
factor_a_per_kw = 9000
factor_b_per_kw = 2500
factor_aux_per_kw = 0

[[lot]]
lot = "M"
rated_kva = 630
factor_a_per_kw = 9000
factor_b_per_kw = 2500
factor_aux_per_kw = 0
"#;
const BIDS: &str = "tender,lot,bid,bidder,price,currency,quantity,no_load_loss_w,load_loss_w\n\
                    T,L,A,Nord,9000,EUR,2,430,4600\nT,L,B,Sund,9500,USD,2,400,4200\n";

fn text(output: &Output) -> (Option<i32>, String, String) {
    let read = |bytes: &[u8]| String::from_utf8_lossy(bytes).into_owned();
    (output.status.code(), read(&output.stdout), read(&output.stderr))
}

/// A book with the tender and two bids for its first lot.
fn program() -> Program {
    let program = Program::new();
    program.import("tender", &program.write("tender.toml", TENDER), &[]);
    program.import("bids", &program.write("bids.csv", BIDS), &[]);
    program
}

/// Everything that the book holds of the tender, and its journal.
fn held(program: &Program) -> (Value, Value) {
    let json = |command: &[&str]| program.json(&[command, &["--format", "json"]].concat());
    (json(&["tender", "T"]), json(&["journal", "--top", "1000"]))
}

/// An import that must be rejected: it says each of `said`, and the book is as it was.
#[track_caller]
fn rejected(program: &Program, what: &str, content: &str, said: &[&str]) {
    let before = held(program);
    let file = program.write("wrong", content);
    let (code, out, error) = text(&program.run(&["import", what, &file.to_string_lossy()]));
    assert_eq!((code, out.as_str()), (Some(3), ""), "{error}");
    for said in said {
        assert!(error.contains(said), "{said}\n{error}");
    }
    assert!(error.contains("nothing was stored"), "{error}");
    assert_eq!(held(program), before);
}

const HEAD: &str = "tender,lot,bid,bidder,price,currency,quantity,no_load_loss_w,load_loss_w\n";

#[test]
fn two_bids_of_one_name() {
    let program = program();
    let twice =
        format!("{HEAD}T,M,C,Nord,1,EUR,1,1,1\nT,M,D,Nord,1,EUR,1,1,1\nT,M,C,West,2,EUR,1,1,1\n");
    rejected(&program, "bids", &twice, &["wrong:4: bid: T/M/C: stands on line 2 already"]);
    // In another file it would quietly replace the bid of another bidder.
    let other = format!("{HEAD}T,L,A,West,1,EUR,2,1,1\n");
    rejected(
        &program,
        "bids",
        &other,
        &["wrong:2: bidder: West: has a bid A of Nord in the book: two bids of one name"],
    );
    // The same bidder may correct its bid, and a misspelt bidder can be mended on purpose.
    let corrected = format!("{HEAD}T,L,A,Nord,8900,EUR,2,430,4600\n");
    program.import("bids", &program.write("corrected.csv", corrected), &[]);
    let blank = format!("{HEAD}T,L,A,,8900,EUR,2,430,4600\n");
    program.import("bids", &program.write("blank.csv", blank), &["--clear-blank"]);
    let named = format!("{HEAD}T,L,A,Nordel,8900,EUR,2,430,4600\n");
    program.import("bids", &program.write("named.csv", named), &[]);
}

#[test]
fn unknown_currency() {
    let program = program();
    let bid = format!("{HEAD}T,L,C,Nord,1,SEK,2,1,1\n");
    rejected(
        &program,
        "bids",
        &bid,
        &["wrong:2: currency: SEK: has no rate in tender T; add it below [rates]"],
    );
    // A basis in a currency without a rate: the factor that it would give is refused by name.
    let open = TENDER.replacen("factor_a_per_kw = 9000\n", "", 1);
    program.import("tender", &program.write("open.toml", open), &[]);
    let basis = "name = \"b\"\ncurrency = \"NOK\"\nfirst_year = 2027\nhorizon_years = 20\n\
                 discount_rate_pct = 6\nenergy_price_per_kwh = 0.1\nlife_years = 40\n";
    program.import("basis", &program.write("basis.toml", basis), &[]);
    let (code, out, error) = text(&program.run(&["tender", "T"]));
    assert_eq!((code, out.as_str()), (Some(3), ""));
    assert!(error.contains("lot L: currency NOK: has no rate in this tender"), "{error}");
}

#[test]
fn rate_of_zero() {
    let program = program();
    for (rate, said) in [
        ("0", "wrong:5: USD: 0: is outside 0.000000001 …"),
        ("-0.9", "wrong:5: USD: -0.9: is outside 0.000000001 …"),
        ("nan", "wrong:5: USD: nan: is not a number"),
        ("inf", "wrong:5: USD: inf: is infinite"),
        ("\"0.9\"", "wrong:5: USD: 0.9: is a number; write it without quotes"),
    ] {
        let tender = TENDER.replace("USD = 0.9", &format!("USD = {rate}"));
        rejected(&program, "tender", &tender, &[said]);
    }
}

/// A rate on which stored bids rest stays, and the tender's own currency is worth 1.
#[test]
fn rates_that_bids_rest_on() {
    let program = program();
    let none = TENDER.replace("USD = 0.9\n", "SEK = 0.09\n");
    let said = "wrong:4: rates: (blank): rate USD has bids in the book and stays; keep it";
    rejected(&program, "tender", &none, &[said]);
    let gone = TENDER.replace("[rates]\nUSD = 0.9\n", "");
    rejected(&program, "tender", &gone, &["rate USD has bids in the book and stays"]);
    // In another currency the bids in the old one need a rate.
    let other = TENDER.replace("\"EUR\"", "\"SEK\"");
    rejected(&program, "tender", &other, &["wrong:4: rates: (blank): rate EUR has bids"]);
    let own = TENDER.replace("USD = 0.9", "USD = 0.9\nEUR = 1.1");
    let said = "wrong:6: EUR: 1.1: is the rate of EUR, the tender currency itself; take it out";
    rejected(&program, "tender", &own, &[said]);
    let one = TENDER.replace("USD = 0.9", "USD = 0.91\nEUR = 1");
    program.import("tender", &program.write("one.toml", one), &[]);
}

/// A bid that names no currency is in the tender's: another one would make other money of it without a word.
#[test]
fn a_currency_that_blank_bids_rest_on() {
    let program = program();
    let bids = BIDS.replace("9000,EUR", "9000,").replace("9500,USD", "9500,");
    let blank = bids.replace("L,A", "M,A").replace("L,B", "M,B");
    program.import("bids", &program.write("blank.csv", blank), &[]);
    let other = TENDER.replace("\"EUR\"", "\"SEK\"").replace("USD = 0.9", "USD = 9\nEUR = 11");
    let said = "wrong:2: currency: (blank): currency EUR has bids that name no currency in the book and stays";
    rejected(&program, "tender", &other, &[said]);
    // Once they name it, the tender may go over to another.
    let named = bids.replace("L,A", "M,A").replace("L,B", "M,B").replace("00,,", "00,EUR,");
    program.import("bids", &program.write("named.csv", named), &[]);
    program.import("tender", &program.write("other.toml", other), &[]);
}

#[test]
fn quantity_of_zero() {
    let program = program();
    let lot = TENDER.replace("quantity = 2", "quantity = 0");
    rejected(&program, "tender", &lot, &["wrong:9: quantity: 0: is outside 1 … 10000000"]);
    let bid = format!("{HEAD}T,L,C,Nord,1,EUR,0,1,1\n");
    rejected(&program, "bids", &bid, &["wrong:2: quantity: 0: is outside 1 … 10000000"]);
}

#[test]
fn bid_for_an_unknown_lot() {
    let program = program();
    let bids = format!("{HEAD}T,l,C,Nord,1,EUR,1,1,1\nU,L,C,Nord,1,EUR,1,1,1\n");
    rejected(
        &program,
        "bids",
        &bids,
        &[
            "wrong:2: lot: l: is no lot of tender T in the book",
            "wrong:3: tender: U: is no tender of the book",
        ],
    );
}

#[test]
fn lot_without_bids() {
    let program = program();
    // One lot has a winner: done, the other is named.
    let (code, out, error) = text(&program.run(&["tender", "T"]));
    assert_eq!(code, Some(0));
    assert!(out.contains("No bid for lot M yet; import them: ironhum import bids FILE."), "{out}");
    assert!(error.contains("tender T: lot M has no bid; import them"), "{error}");
    // No winner at all is no solution.
    for arguments in [
        &["tender", "T", "--lot", "M"][..],
        &["tender", "T", "--lot", "M", "--risk"],
        &["report", "tender", "T", "-", "--lot", "M"],
    ] {
        let (code, _, error) = text(&program.run(arguments));
        assert_eq!(code, if arguments.contains(&"--risk") { Some(3) } else { Some(4) }, "{error}");
        let named = if arguments.contains(&"--risk") { "basis" } else { "lot M has no bid" };
        assert!(error.contains(named), "{error}");
    }
    let before = held(&program);
    let (code, out, error) =
        text(&program.run(&["award", "T", "--lot", "M", "--bid", "A", "--why", "x"]));
    assert_eq!((code, out.as_str()), (Some(2), ""));
    assert!(error.contains("bid A is not in tender T, lot M; it holds none yet"), "{error}");
    assert_eq!(held(&program), before);
    let out = format!("{HEAD}T,M,C,Nord,1,EUR,1,1,1\n");
    let heavy = TENDER.replace("rated_kva = 630", "rated_kva = 630\nmax_no_load_loss_w = 0.5");
    program.import("tender", &program.write("heavy.toml", heavy), &[]);
    program.import("bids", &program.write("out.csv", out), &[]);
    let (code, _, error) = text(&program.run(&["tender", "T", "--lot", "M"]));
    assert_eq!(code, Some(4));
    assert!(error.contains("lot M has no bid that keeps its limits"), "{error}");
}

#[test]
fn measured_units_of_another_bid() {
    let program = program();
    let head = "tender,lot,bid,serial,no_load_loss_w,load_loss_w\n";
    let measured = |rows: &str| format!("{head}{rows}");
    rejected(
        &program,
        "measured",
        &measured("T,L,C,s1,430,4600\nT,M,A,s2,430,4600\n"),
        &[
            "wrong:2: bid: C: is no bid for T/L in the book",
            "wrong:3: bid: A: is no bid for T/M in the book",
        ],
    );
    // One unit cannot be of two bids, in one file or in two.
    let both = measured("T,L,A,s1,430,4600\nT,L,B,s1,400,4200\n");
    let said = "wrong:3: serial: s1: is measured as a unit of bid A already, not of B";
    rejected(&program, "measured", &both, &[said]);
    program.import("measured", &program.write("m.csv", measured("T,L,A,s1,430,4600\n")), &[]);
    rejected(
        &program,
        "measured",
        &measured("T,L,B,s1,400,4200\n"),
        &["wrong:2: serial: s1: is measured as a unit of bid A already, not of B"],
    );
    // After the award only units of the awarded bid are taken.
    program.done(&[
        "award",
        "T",
        "--lot",
        "L",
        "--bid",
        "A",
        "--why",
        "two sisters run since 1998",
    ]);
    rejected(
        &program,
        "measured",
        &measured("T,L,A,s2,431,4600\nT,L,B,s3,400,4200\n"),
        &["wrong:3: bid: B: is another bid: T/L is awarded to A"],
    );
    let settled = program.json(&["settle", "T", "--format", "json"]);
    assert_eq!(settled["lots"].as_array().map(Vec::len), Some(1));
    assert_eq!(settled["lots"][0]["units"].as_array().map(Vec::len), Some(1));
}

/// 9.0 and 2.5 are EUR per W: per kW they make the losses worth 0.2 % of the price.
#[test]
fn factors_that_look_like_money_per_watt() {
    let program = Program::new();
    let per_watt = TENDER
        .replace("factor_a_per_kw = 9000", "factor_a_per_kw = 9.0")
        .replace("factor_b_per_kw = 2500", "factor_b_per_kw = 2.5");
    program.import("tender", &program.write("tender.toml", per_watt), &[]);
    program.import("bids", &program.write("bids.csv", BIDS), &[]);
    let measured = "tender,lot,bid,serial,no_load_loss_w,load_loss_w\nT,L,A,s1,430,4600\n";
    program.import("measured", &program.write("measured.csv", measured), &[]);
    let warning = "check that the factors are per kW, not per W";
    let json = program.json(&["tender", "T", "--lot", "L", "--format", "json"]);
    assert_eq!(json["lots"][0]["flags"], serde_json::json!(["factor_scale"]), "stored and told");
    assert_eq!(json["lots"][0]["factor_a_per_kw"], 9.0);
    let shown = |arguments: &[&str]| {
        let (code, out, error) = text(&program.run(arguments));
        assert_eq!(code, Some(0), "{error}");
        let flat = |text: &str| text.split_whitespace().collect::<Vec<_>>().join(" ");
        (flat(&out), flat(&error))
    };
    for arguments in [
        &["tender", "T", "--lot", "L"][..],
        &["settle", "T"],
        &["factors", "--tender", "T", "--lot", "L"],
        &["report", "tender", "T", "-"],
        &["award", "T", "--lot", "L", "--bid", "A", "--why", "spares"],
        &["check"],
    ] {
        let (out, _) = shown(arguments);
        assert!(out.contains(warning), "{arguments:?}: {out}");
        if arguments[0] == "tender" {
            let at = out.find(warning).expect("is there");
            assert!(at < out.find("9 000").expect("a price"), "before the figures: {out}");
        }
    }
    for command in ["tender", "settle"] {
        let (out, error) = shown(&[command, "T", "--format", "csv"]);
        assert!(!out.contains(warning) && error.contains(warning), "{command}: {error}");
    }
    // One bid whose losses weigh more than 1 % lifts the doubt: the factors may be meant so.
    program.done(&["award", "T", "--lot", "L", "--withdraw", "--why", "a further bid"]);
    let heavy = format!("{HEAD}T,L,C,West,90,EUR,2,430,4600\n");
    program.import("bids", &program.write("heavy.csv", heavy), &[]);
    let (out, _) = shown(&["tender", "T", "--lot", "L"]);
    assert!(!out.contains(warning), "{out}");
}

/// A slip that makes a bid win is said beside the result and by `check`; it is no reason to refuse it.
#[test]
fn what_makes_a_bid_win_by_a_slip() {
    let program = program();
    let head = HEAD.trim_end();
    let odd = format!(
        "{head},adder_cost,loss_base_kva\n\
         T,L,C,West,9000,EUR,1,430,4600,-1000000000000,\nT,L,D,West,9000,EUR,2,430,4600,,400000\n\
         T,L,E,West,9000,EUR,2,0,4600,,\nT,L,F,West,9000,EUR,2,430,4600,-4500,400\n"
    );
    program.import("bids", &program.write("odd.csv", odd), &[]);
    let json = program.json(&["tender", "T", "--lot", "L", "--format", "json"]);
    let bids = json["lots"][0]["bids"].as_array().expect("bids");
    let flags = |bid: &str| {
        let bid = bids.iter().find(|b| b["bid"] == bid).expect("is there");
        let flags = bid["flags"].as_array().expect("flags");
        let keys = flags.iter().map(|f| f.as_str().expect("a key").to_owned());
        keys.filter(|key| key != "no_reference_temp").collect::<Vec<_>>()
    };
    assert_eq!(bids[0]["bid"], "C", "it wins all the same");
    assert_eq!(flags("C"), ["quantity_short", "adders_lower_price"]);
    assert_eq!(flags("D"), ["loss_base_differs", "losses_swapped", "loss_base_far", "loss_scale"]);
    assert_eq!(flags("E"), ["loss_scale"]);
    assert!(flags("F").is_empty() && flags("A").is_empty());
    let flat = |text: String| text.split_whitespace().collect::<Vec<_>>().join(" ");
    for arguments in [&["tender", "T", "--lot", "L"][..], &["report", "tender", "T", "-"]] {
        let shown = flat(program.done(arguments));
        for said in [
            "the bid offers fewer units than the lot asks for",
            "the adders take off more than half of the price",
            "which no cooling stages are",
            "were kW written in a column of W",
        ] {
            assert!(shown.contains(said), "{said}\n{shown}");
        }
    }
    let doubts = flat(program.done(&["check"]));
    for said in [
        "bid T/L/C adder_cost implausible the adders take off",
        "bid T/L/D loss_base_kva implausible loss_base_kva is below a quarter",
        "bid T/L/E no_load_loss_w implausible is 0 W",
    ] {
        assert!(doubts.contains(said), "{said}\n{doubts}");
    }
}

/// The lot has two units; a third serial number is taken with a warning.
#[test]
fn more_measured_units_than_the_lot_has() {
    let program = program();
    let take = |serials: &[&str]| {
        let rows = serials.iter().map(|serial| format!("T,L,A,{serial},430,4600\n"));
        let head = "tender,lot,bid,serial,no_load_loss_w,load_loss_w\n".to_owned();
        let file = program.write("measured.csv", head + &rows.collect::<String>());
        text(&program.run(&["import", "measured", &file.to_string_lossy()]))
    };
    let (code, _, error) = take(&["s1", "s2"]);
    assert_eq!((code, error.contains("are measured")), (Some(0), false), "{error}");
    let (code, out, error) = take(&["S2"]);
    assert_eq!((code, out.as_str()), (Some(0), "measured: 1 new, 0 changed, 0 the same.\n"));
    assert!(
        error.contains("3 units of bid A are measured, but lot L of tender T has 2"),
        "{error}"
    );
}

/// A bid in kW would own best of all: it is told before the figures, at the award, in the report and beside CSV.
#[test]
fn losses_in_kw_are_told_wherever_the_bid_is_shown() {
    let program = program();
    let in_kw = format!("{HEAD}T,L,C,West,9100,EUR,2,0.43,4.6\n");
    program.import("bids", &program.write("kw.csv", in_kw), &[]);
    let warning = "were kW written in a column of W?";
    let shown = |arguments: &[&str]| {
        let (code, out, error) = text(&program.run(arguments));
        assert_eq!(code, Some(0), "{error}");
        let flat = |text: &str| text.split_whitespace().collect::<Vec<_>>().join(" ");
        (flat(&out), flat(&error))
    };
    for arguments in [
        &["tender", "T", "--lot", "L"][..],
        &["tender", "T", "--bid", "C"],
        &["report", "tender", "T", "-"],
        &["award", "T", "--lot", "L", "--bid", "C"],
        &["check"],
    ] {
        let (out, _) = shown(arguments);
        assert!(out.contains(warning), "{arguments:?}: {out}");
        if arguments == ["tender", "T", "--lot", "L"] {
            assert_eq!(out.matches(warning).count(), 1, "{out}");
            assert!(out.find(warning) < out.find("9 100"), "before the figures: {out}");
        }
    }
    let (out, error) = shown(&["tender", "T", "--format", "csv"]);
    assert!(!out.contains(warning) && error.contains(warning), "{error}");
    let (out, _) = shown(&["tender", "T", "--bid", "A"]);
    assert!(!out.contains(warning), "not the matter of another bidder: {out}");
}
