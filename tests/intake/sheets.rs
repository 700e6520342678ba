//! Basis and tender files: each key by its line, and nothing stored that the engine would refuse.

use ironhum::engine::columns::{Distribution, Settlement};
use ironhum::study::intake::{Options, What};

use crate::support::{Desk, problems};

const BASIS: &str = r#"name = "plan"
currency = "EUR"
first_year = 2027
horizon_years = 30
discount_rate_pct = 6
energy_price_per_kwh = 0.09
life_years = 4_0.5e0
estimate_missing = true

[range.energy_price_per_kwh]
low = 0.05
high = 0.2

[range.load_growth_pct]
distribution = "normal"
mean = 1
deviation = 0.5

[budget]
2028 = 2e6
2027 = 1_000_000
units_per_year = 5
carry_over = true
"#;

#[test]
fn a_basis_comes_in_as_it_is_written() {
    let mut desk = Desk::empty();
    let report = desk.text(What::Basis, "b.toml", &BASIS.replace("4_0.5e0", "40.5"));
    assert!(report.stored, "{}", problems(&report));
    assert_eq!((report.rows, report.tally.new), (5, 5));
    let sheet = desk.book.basis(None).expect("basis");
    assert_eq!((sheet.basis.life_years, sheet.basis.units_per_year), (Some(40.5), Some(5)));
    assert_eq!(sheet.basis.carry_over, Some(true));
    let names: Vec<&str> = sheet.ranges.iter().map(|range| range.quantity.as_str()).collect();
    assert_eq!(names, ["energy_price_per_kwh", "load_growth_pct"], "in file order");
    assert_eq!(sheet.ranges[1].distribution, Some(Distribution::Normal));
    let budgets: Vec<(i64, f64)> = sheet.budgets.iter().map(|b| (b.year, b.budget)).collect();
    assert_eq!(budgets, [(2027, 1e6), (2028, 2e6)]);
}

#[test]
fn what_is_wrong_in_a_basis_is_told_by_line() {
    let mut desk = Desk::empty();
    let before = desk.dump();
    let head = "name = \"b\"\ncurrency = \"EUR\"\nfirst_year = 2027\nhorizon_years = 30\ndiscount_rate_pct = 6\n";
    for (tail, told) in [
        ("", "b.toml:1: energy_price_per_kwh: (blank): no energy price"),
        (
            "energy_price_per_kwh = 0.1\nprice_series = \"spot\"\n",
            "b.toml:7: price_series: spot: stands beside energy_price_per_kwh",
        ),
        (
            "price_series = \"spot\"\n",
            "b.toml:6: price_series: (blank): the book has no price series spot",
        ),
        (
            "energy_price_per_kwh = \"0.1\"\n",
            "b.toml:6: energy_price_per_kwh: 0.1: is a number; write it without quotes",
        ),
        ("energy_price_per_kwh = nan\n", "b.toml:6: energy_price_per_kwh: nan: is not a number"),
        (
            "energy_price_per_kwh = -1\n",
            "b.toml:6: energy_price_per_kwh: -1: is outside 0 … 1000000",
        ),
        (
            "energy_prise_per_kwh = 0.1\n",
            "b.toml:6: energy_prise_per_kwh: 0.1: is no key of a basis; did you mean energy_price_per_kwh?",
        ),
        (
            "energy_price_per_kwh = [0.1]\n",
            "b.toml:6: energy_price_per_kwh: […]: is no single value",
        ),
        ("energy_price_per_kwh = 0.1\nlaw = 5\n", "b.toml:7: law: 5: is text; write it in quotes"),
        (
            "energy_price_per_kwh = 0.1\nestimate_missing = \"yes\"\n",
            "b.toml:7: estimate_missing: yes: is true or false, without quotes",
        ),
        (
            "energy_price_per_kwh = 0.1\ncash_flow = \"monthly\"\n",
            "b.toml:7: cash_flow: monthly: is not one of year-end or mid-year",
        ),
        (
            "energy_price_per_kwh = 0.1\nunits_per_year = 5\n",
            "b.toml:7: units_per_year: 5: belongs below [budget]",
        ),
        (
            "energy_price_per_kwh = 0.1\nfailure_scale_years = 60\n",
            "b.toml:7: failure_scale_years: 60: needs failure_shape",
        ),
        (
            "energy_price_per_kwh = 0.1\nenergy_price_per_kwh = 0.2\n",
            "b.toml:7: energy_price_per_kwh: 0.2: is not TOML: duplicate key",
        ),
        (
            "energy_price_per_kwh = 0.1\nload_growth_years = 99999999999999999999999999999999999999999\n",
            "b.toml:7: load_growth_years: 99999999999999999999999999999999999999999: is outside 1 … 200",
        ),
        (
            "energy_price_per_kwh = 0.1\nload_growth_years = 2027-03-01\n",
            "b.toml:7: load_growth_years: 2027-03-01: is a date or a time, and a number is wanted",
        ),
        (
            "energy_price_per_kwh = 0.1\nload_growth_years = 2027-13-45\n",
            "b.toml:7: load_growth_years: 2027-13-45: is not TOML: invalid date",
        ),
        ("energy_price_per_kwh = \n", "b.toml:6: energy_price_per_kwh: (blank): is not TOML"),
        (
            "[range.horizn_years]\nlow = 1\n",
            "b.toml:6: horizn_years: (blank): is no numeric input; did you mean horizon_years?",
        ),
        ("[range.load_growth_pct]\nlow = 1\n", "b.toml:6: load_growth_pct: (blank): needs high"),
        (
            "[range.load_growth_pct]\nlow = 2\nhigh = 1\n",
            "b.toml:6: load_growth_pct: 2: low is above high 1",
        ),
        (
            "[range.load_growth_pct]\nlow = 0\nhigh = 1\nbase = 3\n",
            "b.toml:6: load_growth_pct: 3: base is not between low 0 and high 1",
        ),
        (
            "[range.discount_rate_pct]\nlow = 90\nhigh = 91\n",
            "b.toml:5: discount_rate_pct: 90: is out of order in the range of discount_rate_pct; low ≤ base",
        ),
        (
            "[range.load_growth_pct]\nlow = 0\nhigh = 101\n",
            "b.toml:6: load_growth_pct: 101: is outside above -100 … 100 %",
        ),
        (
            "[range.load_growth_pct]\ndistribution = \"normal\"\n",
            "b.toml:6: load_growth_pct: (blank): needs deviation",
        ),
        (
            "[range.load_growth_pct]\nlov = 0\nhigh = 1\n",
            "b.toml:7: lov: 0: is no key of a range; did you mean low?",
        ),
        ("[range]\nload_growth_pct = 5\n", "b.toml:7: load_growth_pct: 5: a range is a table"),
        ("range = 5\n", "b.toml:6: range: (blank): is a table"),
        ("[budget]\n1800 = 5\n", "b.toml:7: 1800: 5: is outside 1950 … 2200"),
        (
            "[budget]\n2027 = \"much\"\n",
            "b.toml:7: 2027: much: is a number; write it without quotes",
        ),
        (
            "[budget]\nunits_a_year = 5\n",
            "b.toml:7: units_a_year: 5: is no key of a budget: a year, or did you mean units_per_year?",
        ),
    ] {
        let report = desk.text(What::Basis, "b.toml", &format!("{head}{tail}"));
        let lines = problems(&report);
        assert!(lines.lines().any(|line| line.starts_with(told)), "wanted {told}\ngot {lines}");
        assert!(report.rejected && !report.stored);
    }
    let report = desk.text(What::Basis, "b.toml", "currency = \"EUR\"\n");
    assert_eq!(report.problems.count(), 4, "{}", problems(&report));
    assert_eq!(desk.dump(), before);
    let bytes = [head.as_bytes(), b"law = \"\xFF\"\n"].concat();
    let report = desk.bytes(What::Basis, "b.toml", &bytes, Options::default());
    assert!(problems(&report).starts_with("b.toml:6: (file): (blank): is not UTF-8"));
}

const TENDER: &str = r#"tender = "T1"
currency = "EUR"
dated = 2026-11-16

[rates]
SEK = 0.09

[[lot]]
lot = "L1"
rated_kva = 400
quantity = 60
settlement = "lot-mean"

[[lot]]
lot = "L2"
rated_kva = 1e3
hv_kv = 20
lv_kv = 0.4
"#;

#[test]
fn a_tender_comes_in_as_it_is_written() {
    let mut desk = Desk::empty();
    let report = desk.text(What::Tender, "t.toml", TENDER);
    assert!(report.stored, "{}", problems(&report));
    let sheet = desk.book.tender("T1").expect("tender");
    assert_eq!(sheet.tender.dated.as_deref(), Some("2026-11-16"));
    assert_eq!((sheet.rates[0].currency.as_str(), sheet.rates[0].rate), ("SEK", 0.09));
    assert_eq!(sheet.lots.len(), 2);
    assert_eq!(
        (sheet.lots[0].quantity, sheet.lots[0].settlement),
        (Some(60), Some(Settlement::LotMean))
    );
    assert_eq!((sheet.lots[1].rated_kva, sheet.lots[1].hv_kv), (1000.0, Some(20.0)));

    let bids = "tender,lot,bid,price,no_load_loss_w,load_loss_w\nT1,L1,B,1,1,1\n";
    assert!(desk.text(What::Bids, "b.csv", bids).stored);
    let before = desk.dump();
    let gone = TENDER.replace("\"L1\"", "\"L3\"");
    let report = desk.text(What::Tender, "t.toml", &gone);
    assert!(problems(&report).contains("lot L1 has bids in the book and stays"), "{report:?}");
    assert_eq!(desk.dump(), before);
}

#[test]
fn what_is_wrong_in_a_tender_is_told_by_line() {
    let mut desk = Desk::empty();
    let before = desk.dump();
    for (from, to, told) in [
        ("dated = 2026-11-16", "dated = \"soon\"", "t.toml:3: dated: soon: is not a date like"),
        ("SEK = 0.09", "SEK = 0", "t.toml:6: SEK: 0: is outside 0.000000001 …"),
        ("[rates]", "[rate]", "t.toml:5: rate: {…}: is no key of a tender; did you mean rates?"),
        (
            "rated_kva = 400",
            "rated_kva = 0",
            "t.toml:10: rated_kva: 0: is outside 0.1 … 2000000 kVA",
        ),
        ("rated_kva = 400", "", "t.toml:8: rated_kva: (blank): is required and not in the file"),
        ("quantity = 60", "quantity = 1.5", "t.toml:11: quantity: 1.5: is not a whole number"),
        (
            "quantity = 60",
            "quanity = 60",
            "t.toml:11: quanity: 60: is no key of a lot; did you mean quantity?",
        ),
        ("\"L2\"", "\"L1\"", "t.toml:15: lot: L1: stands twice in the tender"),
        (
            "hv_kv = 20",
            "hv_kv = 0.2",
            "t.toml:17: hv_kv: 0.2: is below lv_kv 0.4: hv_kv and lv_kv look exchanged",
        ),
        ("lv_kv = 0.4", "law = \"EU\"", "t.toml:18: law: EU: is not known; known are eu-548-2014"),
        ("\"lot-mean\"", "\"mean\"", "t.toml:12: settlement: mean: is not one of unit or lot-mean"),
    ] {
        let report = desk.text(What::Tender, "t.toml", &TENDER.replacen(from, to, 1));
        let lines = problems(&report);
        assert!(lines.lines().any(|line| line.starts_with(told)), "wanted {told}\ngot {lines}");
        assert!(report.rejected && !report.stored);
    }
    let report = desk.text(What::Tender, "t.toml", "tender = \"T\"\ncurrency = \"EUR\"\n");
    assert!(problems(&report).starts_with("t.toml:1: lot: (blank): the tender has no lot"));
    assert_eq!(desk.dump(), before);
}
