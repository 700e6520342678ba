//! What is doubtful in a book is told, each thing once, with its column and kind.

use ironhum::study::Watch;
use ironhum::study::check::{Doubt, Kind, check};
use ironhum::study::intake::{Options, What};

use crate::support::{Desk, problems};

fn told(desk: &Desk) -> Vec<Doubt> {
    check(&desk.book, None, &Watch::default()).expect("checked")
}

fn about<'a>(doubts: &'a [Doubt], key: &str) -> Vec<(&'a str, Kind)> {
    doubts.iter().filter(|d| d.key == key).map(|d| (d.column, d.kind)).collect()
}

/// A unit's name, its cells, and the doubts that are wanted.
type Case = (&'static str, &'static str, &'static [(&'static str, Kind)]);

const BASIS: &str = "name = \"plan\"\ncurrency = \"EUR\"\nfirst_year = 2027\nhorizon_years = 30\n\
    discount_rate_pct = 6\nenergy_price_per_kwh = 0.1\nlife_years = 40\nfailure_shape = 5\n\
    failure_scale_years = 60\n";

#[test]
fn doubts_about_units() {
    use Kind::{Contradictory, Estimated, Implausible, Missing};
    let mut desk = Desk::empty();
    let rows: Vec<String> = (1..=8760).map(|n| format!("{n},{}", n % 2)).collect();
    let profile = format!("interval,half\n{}\n", rows.join("\n"));
    assert!(desk.text(What::Profiles, "p.csv", &profile).stored);
    assert!(desk.text(What::Basis, "b.toml", BASIS).stored);
    let header = "unit,rated_kva,phases,hv_kv,lv_kv,hv_um_kv,vector_group,impedance_pct,no_load_loss_w,\
        load_loss_w,total_loss_w,no_load_current_pct,year_made,peak_kva,profile,load_factor_pu,\
        loss_factor_pu,in_service,replace_by_year\n";
    let cases: &[Case] = &[
        ("good", "400,3,20,0.4,24,Dyn5,4,500,4600,,0.3,1990,300,half,0.5,0.5,,2030", &[]),
        ("spare", "400,,,,,,,,,,,,,,,,no,", &[]),
        (
            "bare",
            "400,,,,,,,,,,,,,,,,,",
            &[
                ("no_load_loss_w", Missing),
                ("peak_kva", Missing),
                ("profile", Missing),
                ("hv_kv", Missing),
                ("lv_kv", Missing),
                ("phases", Missing),
                ("year_made", Missing),
            ],
        ),
        (
            "no iron",
            "400,3,20,0.4,24,Dyn5,4,,4600,,,1990,300,half,,,,",
            &[("no_load_loss_w", Missing)],
        ),
        (
            "iron from total",
            "400,3,20,0.4,24,Dyn5,4,,4600,5100,,1990,300,half,,,,",
            &[("no_load_loss_w", Estimated)],
        ),
        (
            "no copper",
            "400,3,20,0.4,24,Dyn5,4,500,,,,1990,300,half,,,,",
            &[("load_loss_w", Missing)],
        ),
        (
            "made up",
            "400,3,20,0.4,24,Dyn5,4,500,,5100,,1990,300,,0.5,,,",
            &[("load_loss_w", Estimated), ("loss_factor_pu", Estimated)],
        ),
        (
            "odd",
            "400,3,20,0.4,24,delta,9,5000,4600,,2,1990,481,half,,,,",
            &[
                ("impedance_pct", Implausible),
                ("load_loss_w", Implausible),
                ("vector_group", Implausible),
                ("peak_kva", Implausible),
            ],
        ),
        (
            "zero",
            "400,3,20,0.4,24,Dyn5,4,0,4600,,,1990,300,half,,,,",
            &[("no_load_loss_w", Implausible)],
        ),
        (
            "torn",
            "400,3,20,0.4,12,Dyn5,2,500,9000,9600,0.1,2028,300,half,0.6,0.5,,2026",
            &[
                ("impedance_pct", Contradictory),
                ("no_load_current_pct", Contradictory),
                ("total_loss_w", Contradictory),
                ("profile", Contradictory),
                ("hv_um_kv", Contradictory),
                ("year_made", Contradictory),
                ("replace_by_year", Contradictory),
            ],
        ),
    ];
    let text: String =
        cases.iter().fold(header.to_owned(), |text, (name, row, _)| text + name + "," + row + "\n");
    let report = desk.text(What::Units, "u.csv", &text);
    assert!(report.stored, "{}", problems(&report));
    let doubts = told(&desk);
    for (name, _, wanted) in cases {
        assert_eq!(about(&doubts, name), *wanted, "{name}: {doubts:#?}");
    }
    let overload = doubts.iter().find(|d| d.column == "peak_kva" && d.key == "odd").expect("told");
    assert_eq!(overload.what, "481 kVA is 120 % of the rating");
    assert_eq!(doubts.len(), cases.iter().map(|(.., wanted)| wanted.len()).sum::<usize>());
    let json = serde_json::to_string(overload).expect("json");
    assert!(
        json.starts_with(
            r#"{"subject":"unit","key":"odd","column":"peak_kva","kind":"implausible""#
        )
    );
}

#[test]
fn doubts_about_offers_bids_and_bases() {
    let mut desk = Desk::empty();
    let doubts = told(&desk);
    assert_eq!(about(&doubts, ""), [("name", Kind::Missing)]);

    let basis = BASIS.replace("life_years = 40\n", "").replace("pct = 6", "pct = 0.06");
    assert!(desk.text(What::Basis, "b.toml", &basis).stored);
    let offers = "offer,rated_kva,no_load_loss_w,load_loss_w,price,vector_group,life_years\n\
        fine,400,500,4600,9000,Dyn5,40\nodd,400,5000,600,0,D,\n";
    assert!(desk.text(What::Offers, "o.csv", offers).stored);
    let tender = "tender = \"T\"\ncurrency = \"EUR\"\n[[lot]]\nlot = \"L\"\nrated_kva = 400\nreference_temp_c = 75\n";
    assert!(desk.text(What::Tender, "t.toml", tender).stored);
    let bids = "tender,lot,bid,price,no_load_loss_w,load_loss_w,total_loss_w,impedance_pct,reference_temp_c\n\
        T,L,fine,9000,500,4600,,4,75\nT,L,odd,0,500,,5100,20,\nT,L,torn,9000,500,4600,6000,4,75\n";
    assert!(desk.text(What::Bids, "b.csv", bids).stored);
    let doubts = told(&desk);
    assert_eq!(about(&doubts, "fine"), []);
    assert_eq!(
        about(&doubts, "odd"),
        [
            ("load_loss_w", Kind::Implausible),
            ("vector_group", Kind::Implausible),
            ("life_years", Kind::Missing),
            ("price", Kind::Implausible),
        ]
    );
    assert_eq!(about(&doubts, "T/L/fine"), []);
    assert_eq!(
        about(&doubts, "T/L/odd"),
        [
            ("impedance_pct", Kind::Implausible),
            ("load_loss_w", Kind::Estimated),
            ("reference_temp_c", Kind::Missing),
            ("price", Kind::Implausible),
        ]
    );
    assert_eq!(about(&doubts, "T/L/torn"), [("total_loss_w", Kind::Contradictory)]);
    assert_eq!(about(&doubts, "plan"), [("discount_rate_pct", Kind::Implausible)]);
    assert!(doubts.iter().any(|d| d.key == "plan" && d.what.contains("6 is six percent")));
    // Losses in kW, of a bid and of what was measured, and more units than the lot has.
    let in_kw = "tender,lot,bid,price,no_load_loss_w,load_loss_w,reference_temp_c\nT,L,small,9000,0.5,4.6,75\n";
    assert!(desk.text(What::Bids, "k.csv", in_kw).stored);
    let measured = "tender,lot,bid,serial,no_load_loss_w,load_loss_w\n\
        T,L,fine,1,500,4600\nT,L,fine,2,0,0\n";
    assert!(desk.text(What::Measured, "m.csv", measured).stored);
    let doubts = told(&desk);
    assert_eq!(
        about(&doubts, "T/L/small"),
        [("no_load_loss_w", Kind::Implausible), ("load_loss_w", Kind::Implausible)]
    );
    assert_eq!(about(&doubts, "T/L/fine/1"), []);
    assert_eq!(about(&doubts, "T/L/fine/2"), [("no_load_loss_w", Kind::Implausible)]);
    assert_eq!(about(&doubts, "T/L/fine"), [("serial", Kind::Contradictory)]);
    let unknown = check(&desk.book, Some("plam"), &Watch::default()).expect_err("unknown");
    assert!(unknown.to_string().contains("did you mean plan?"), "{unknown}");
}

#[test]
fn what_a_basis_has_estimated_or_leaves_out_is_told_of_units_and_offers() {
    let mut desk = Desk::empty();
    let units = "unit,rated_kva,phases,hv_kv,lv_kv,peak_kva,loss_factor_pu,year_made,load_loss_w\n\
        U,400,3,20,0.4,300,0.3,1990,4600\n";
    assert!(desk.text(What::Units, "u.csv", units).stored);
    let offers = "offer,rated_kva,no_load_loss_w,load_loss_w,price\nO,400,500,4600,9000\n";
    assert!(desk.text(What::Offers, "o.csv", offers).stored);
    let asked = format!("{BASIS}estimate_missing = true\nvoltage_model = \"drop\"\n");
    let mut of = |basis: &str| {
        assert!(desk.text(What::Basis, "b.toml", basis).stored);
        let doubts = told(&desk);
        ["U", "O"].map(|key| {
            let columns =
                about(&doubts, key).into_iter().map(|(column, kind)| (column.to_owned(), kind));
            columns.collect::<Vec<_>>()
        })
    };
    assert_eq!(of(BASIS), [vec![("no_load_loss_w".to_owned(), Kind::Missing)], vec![]]);
    let impedance = ("impedance_pct".to_owned(), Kind::Missing);
    let estimated = ("no_load_loss_w".to_owned(), Kind::Estimated);
    assert_eq!(of(&asked), [vec![estimated, impedance.clone()], vec![impedance]]);
}

#[test]
fn a_profile_of_another_step_than_the_prices_is_told_of_the_basis() {
    let mut desk = Desk::empty();
    let rows = |count: usize| (0..count).map(|n| format!("{n},1")).collect::<Vec<_>>().join("\n");
    let prices = format!("interval,price_per_kwh\n{}\n", rows(8760));
    let named = Options { name: Some("spot".into()), ..Options::default() };
    assert!(desk.bytes(What::Prices, "s.csv", prices.as_bytes(), named).stored);
    let profile = format!("interval,quarter\n{}\n", rows(35040));
    assert!(desk.text(What::Profiles, "p.csv", &profile).stored);
    let basis = BASIS.replace("energy_price_per_kwh = 0.1", "price_series = \"spot\"");
    assert!(desk.text(What::Basis, "b.toml", &basis).stored);
    let doubts = told(&desk);
    assert_eq!(about(&doubts, "plan"), [("profile", Kind::Contradictory)]);
    assert!(doubts[0].what.contains("bring both to one step and length"), "{doubts:?}");
}

#[test]
fn the_demo_fleet_has_doubts_of_every_kind() {
    let desk = Desk::demo();
    let doubts = told(&desk);
    for kind in [Kind::Missing, Kind::Estimated, Kind::Implausible, Kind::Contradictory] {
        assert!(doubts.iter().any(|doubt| doubt.kind == kind), "{kind:?}");
    }
    let watch = Watch::default();
    watch.stop();
    assert_eq!(check(&desk.book, None, &watch).expect_err("stopped").to_string(), "stopped");
}

#[test]
fn doubts_about_test_reports() {
    let mut desk = Desk::empty();
    let units = "unit,rated_kva,phases,hv_kv,lv_kv,no_load_loss_w,load_loss_w,peak_kva,load_factor_pu\n\
                 A,400,3,20,0.4,900,4600,300,0.5\nB,400,3,20,0.4,900,4600,300,0.5\n";
    assert!(desk.text(What::Units, "u.csv", units).stored);
    let header = "unit,open_circuit_voltage_v,open_circuit_current_a,open_circuit_power_w,\
                  short_circuit_voltage_v,short_circuit_current_a,short_circuit_power_w\n";
    // B: millivolts, and the current of the short circuit in kA.
    let reports =
        format!("{header}A,400,8,910,800,11.547,4500\nB,400000,8,910,800,0.011547,4500\n");
    let report = desk.text(What::Tests, "t.csv", &reports);
    assert!(report.stored, "{}", problems(&report));
    let doubts = told(&desk);
    let of = |unit: &str| {
        let own = doubts.iter().filter(|d| d.key == unit && d.what.starts_with("test report"));
        own.map(|d| (d.column, d.kind, &*d.what)).collect::<Vec<_>>()
    };
    assert!(of("A").is_empty());
    let [(column, kind, what)] = of("B")[..] else { panic!("{:?}", of("B")) };
    assert_eq!((column, kind), ("open_circuit_voltage_v", Kind::Contradictory));
    assert!(what.contains("is not the rated 400 V of the winding that was fed"), "{what}");
}
