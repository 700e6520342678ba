//! Tests of the laws: rows of the published tables found again, dates, corrections, what stays open, and the
//! cross-checks that the notes on the tables describe.

use super::tables::{CANADA, EU_INDEX_2014, EU_INDEX_2019, EU_LOSSES, US};
use super::*;
use crate::engine::columns::{Basis, Lot};

/// The columns that name a law say which there are.
#[test]
fn columns_name_every_law() {
    for column in Basis::COLUMNS.iter().chain(Lot::COLUMNS).filter(|c| c.name == "law") {
        for law in known() {
            assert!(column.meaning.contains(law.key), "{}: {}", law.key, column.meaning);
        }
    }
}

fn on(text: &str) -> NaiveDate {
    text.parse().expect("a date")
}

fn eu(kva: f64, p0: f64, pk: f64) -> Subject {
    Subject {
        phases: Some(3),
        hv_kv: Some(20.0),
        lv_kv: Some(0.4),
        insulation: Some(Insulation::Liquid),
        reference_temp_c: Some(75.0),
        ..Subject::new(kva, p0, pk)
    }
}

fn limits(verdict: &Verdict) -> Vec<f64> {
    verdict.limits.iter().map(|l| l.limit).collect()
}

fn eu_limits(subject: &Subject, date: &str) -> Vec<f64> {
    limits(&check("eu-548-2014", subject, on(date)).expect("known"))
}

#[test]
fn unknown_law_names_the_known() {
    let refusal = check("eu-584-2014", &eu(400.0, 1.0, 1.0), on("2022-01-01")).expect_err("typo");
    assert!(refusal.why.contains("nearest: eu-548-2014"));
    assert!(refusal.why.contains("us-10cfr431") && refusal.why.contains("ca-sor-2016-311"));
}

/// Table I.1: 400 kVA is 430/4600 W in tier 1, 387/3250 W in tier 2; nothing before July 2015; equality passes.
#[test]
fn eu_tiers_and_equality() {
    let at_limit = eu(400.0, 387.0, 3250.0);
    assert_eq!(eu_limits(&at_limit, "2015-06-30"), Vec::<f64>::new());
    assert_eq!(eu_limits(&at_limit, "2015-07-01"), [430.0, 4600.0]);
    assert_eq!(eu_limits(&at_limit, "2021-06-30"), [430.0, 4600.0]);
    assert_eq!(eu_limits(&at_limit, "2021-07-01"), [387.0, 3250.0]);
    let verdict = |s| check("eu-548-2014", &s, on("2024-05-05")).expect("known");
    assert_eq!(verdict(at_limit).meets, Some(true));
    assert_eq!(verdict(at_limit).confidence, Confidence::Text, "the titles of 2019 were read once");
    assert!(!verdict(at_limit).verify);
    assert_eq!(verdict(eu(400.0, 387.1, 3250.0)).meets, Some(false), "no tolerance");
    assert_eq!(verdict(eu(400.0, 387.0, 3250.1)).meets, Some(false));
}

/// Between 160 and 250 kVA on a straight line; the first row holds below; dry-type has table I.2.
#[test]
fn eu_interpolation() {
    assert_eq!(eu_limits(&eu(205.0, 1.0, 1.0), "2022-01-01"), [229.5, 2050.0]);
    assert_eq!(eu_limits(&eu(10.0, 1.0, 1.0), "2022-01-01"), [63.0, 600.0]);
    let dry = Subject { insulation: Some(Insulation::Dry), ..eu(515.0, 1.0, 1.0) };
    assert_eq!(eu_limits(&dry, "2022-01-01"), [832.5, 5800.0]);
}

/// Tables I.3 and I.3a with 36 kV, point 1.3 with on-load tappings; percentages of the table add up.
#[test]
fn eu_corrections() {
    let high = Subject { hv_kv: Some(33.0), ..eu(1000.0, 1.0, 1.0) };
    assert_eq!(eu_limits(&high, "2016-01-01"), [885.5, 11550.0]);
    assert_eq!(eu_limits(&high, "2022-01-01"), [796.95, 8360.0]);
    let both = Subject { lv_kv: Some(11.0), ..high };
    assert_eq!(eu_limits(&both, "2016-01-01"), [924.0, 12075.0]);
    assert_eq!(eu_limits(&both, "2022-01-01"), [796.95, 8360.0]);
    let mv_to_mv = Subject { lv_kv: Some(6.6), ..eu(1000.0, 1.0, 1.0) };
    assert_eq!(eu_limits(&mv_to_mv, "2016-01-01"), [847.0, 11550.0]);
    assert_eq!(eu_limits(&mv_to_mv, "2022-01-01"), [693.0, 7600.0]);
    let taps = Subject { tap_changer: Some(TapChanger::OnLoad), ..eu(1000.0, 1.0, 1.0) };
    assert_eq!(eu_limits(&taps, "2016-01-01"), [924.0, 11025.0]);
    assert_eq!(eu_limits(&taps, "2022-01-01"), [762.3, 7600.0]);
    let all = Subject { tap_changer: Some(TapChanger::OnLoad), ..high };
    assert_eq!(eu_limits(&all, "2016-01-01"), [1039.5, 12075.0]);
    let dual = Subject { dual_voltage: Some(DualVoltage::BothWindings), ..eu(1000.0, 1.0, 1.0) };
    assert_eq!(eu_limits(&dual, "2022-01-01"), [831.6, 9120.0]);
    let reduced = Subject { dual_voltage: Some(DualVoltage::ReducedPower), ..dual };
    assert_eq!(eu_limits(&reduced, "2022-01-01"), [693.0, 7600.0]);
    let exact = Subject { no_load_loss_w: 796.95, load_loss_w: 8360.0, ..high };
    let verdict = check("eu-548-2014", &exact, on("2022-01-01")).expect("known");
    assert_eq!(verdict.meets, Some(true), "a value written as the corrected limit passes");
}

/// Table I.6: since November 2019 for one-to-one replacements only, then extrapolated to 400 kVA.
#[test]
fn eu_pole_mounted() {
    let pole = Subject { mounting: Some(Mounting::Pole), ..eu(160.0, 1.0, 1.0) };
    assert_eq!(eu_limits(&pole, "2016-01-01"), [300.0, 3102.0]);
    assert_eq!(eu_limits(&pole, "2022-01-01"), [189.0, 1750.0]);
    let like = Subject { replaces_like: true, ..pole };
    assert_eq!(eu_limits(&like, "2022-01-01"), [270.0, 3102.0]);
    let larger = eu_limits(&Subject { rated_kva: 400.0, ..like }, "2022-01-01");
    assert!((larger[0] - (440.0 + 80.0 * 85.0 / 65.0)).abs() < 1e-9, "{larger:?}");
    assert_eq!(eu_limits(&Subject { rated_kva: 315.0, ..pole }, "2016-01-01"), [520.0, 3900.0]);
    let above = Subject { rated_kva: 400.0, ..pole };
    assert_eq!(eu_limits(&above, "2016-01-01"), [430.0, 4600.0], "not pole-mounted above 315 kVA");
}

/// Categories: medium above 3150 kVA and large units by the index; the same unit changes table in 2019.
#[test]
fn eu_index() {
    let large =
        |kva, hv| Subject { hv_kv: Some(hv), lv_kv: Some(20.0), ..eu(kva, 20_000.0, 150_000.0) };
    assert_eq!(eu_limits(&large(40_000.0, 110.0), "2016-01-01"), [99.684]);
    assert_eq!(eu_limits(&large(40_000.0, 110.0), "2022-01-01"), [99.724]);
    assert_eq!(eu_limits(&large(300_000.0, 380.0), "2022-01-01"), [99.797]);
    assert_eq!(eu_limits(&large(4500.0, 20.0), "2016-01-01"), [99.474]);
    let dry = |kva, hv| Subject { insulation: Some(Insulation::Dry), ..large(kva, hv) };
    assert_eq!(eu_limits(&dry(5000.0, 20.0), "2022-01-01"), [99.387]);
    assert_eq!(eu_limits(&dry(5000.0, 66.0), "2022-01-01"), [99.265]);
    assert_eq!(eu_limits(&dry(5000.0, 66.0), "2016-01-01"), [99.200]);
    let small_but_high = Subject { hv_kv: Some(66.0), ..eu(1000.0, 1.0, 1.0) };
    assert_eq!(eu_limits(&small_but_high, "2022-01-01"), [99.484]);

    let verdict = check("eu-548-2014", &large(40_000.0, 110.0), on("2022-01-01")).expect("known");
    assert!(
        (verdict.limits[0].value - (100.0 - 200.0 * 20.0 / (40_000.0 * (20.0f64 / 150.0).sqrt())))
            .abs()
            < 1e-9
    );
    assert_eq!(verdict.meets, Some(true));
    assert!(verdict.verify, "the formula of the index is from memory");
    let misprint = check("eu-548-2014", &dry(2400.0, 66.0), on("2020-01-01")).expect("known");
    assert!(misprint.notes.iter().any(|n| n.contains("misprint")), "{:?}", misprint.notes);
    let away = check("eu-548-2014", &dry(5000.0, 66.0), on("2020-01-01")).expect("known");
    assert!(!away.notes.iter().any(|n| n.contains("misprint")));
}

#[test]
fn eu_blank_facts_stay_open_and_other_kinds_are_free() {
    let meets = |s: Subject| check("eu-548-2014", &s, on("2022-01-01")).expect("known").meets;
    assert_eq!(meets(Subject { insulation: None, ..eu(400.0, 9e9, 9e9) }), None);
    assert_eq!(meets(Subject { hv_kv: None, ..eu(400.0, 9e9, 9e9) }), None);
    assert_eq!(meets(Subject { phases: None, ..eu(400.0, 9e9, 9e9) }), None);
    assert_eq!(meets(Subject { phases: Some(1), ..eu(400.0, 9e9, 9e9) }), Some(true));
    assert_eq!(meets(Subject { frequency_hz: Some(60.0), ..eu(400.0, 9e9, 9e9) }), Some(true));
    assert_eq!(meets(Subject { hv_kv: Some(0.69), ..eu(400.0, 9e9, 9e9) }), Some(true));
}

/// A load loss quoted at 115 °C (copper, no stray) is brought down to 75 °C before it is compared.
#[test]
fn eu_reference_temperature() {
    let hot = Subject { reference_temp_c: Some(115.0), ..eu(400.0, 300.0, 3250.0) };
    let verdict = check("eu-548-2014", &hot, on("2022-01-01")).expect("known");
    assert!((verdict.limits[1].value - 3250.0 * 310.0 / 350.0).abs() < 1e-9);
    let blank = Subject { reference_temp_c: None, ..hot };
    let verdict = check("eu-548-2014", &blank, on("2022-01-01")).expect("known");
    assert_eq!(verdict.limits[1].value, 3250.0);
    assert!(verdict.notes.iter().any(|n| n.contains("reference_temp_c is blank")));
}

/// Table I.7 of 2019 up to 3.15 MVA is 1 − 2·√(1.15·P0·1.10·Pk)/S of table I.1, to 0.001 point, both tiers.
#[test]
fn eu_table_i7_follows_from_table_i1() {
    let mut compared = 0;
    for row in EU_LOSSES.iter().filter(|r| r.table == "I.1") {
        let losses = 1.15 * row.max_no_load_loss_p0_w * 1.10 * row.max_load_loss_pk_w;
        let pei = 100.0 * (1.0 - 2.0 * losses.sqrt() / (1000.0 * row.rated_power_kva));
        let printed = EU_INDEX_2019
            .iter()
            .find(|r| {
                r.table == "I.7"
                    && r.tier == row.tier
                    && r.rated_power_mva * 1000.0 == row.rated_power_kva
            })
            .expect("same ratings");
        assert!((pei - printed.min_pei_percent).abs() < 0.001, "{row:?} {pei} {printed:?}");
        compared += 1;
    }
    assert_eq!(compared, 32);
}

/// Table I.9 up to 3.15 MVA is table I.2 with losses × 1.640, but for the misprint at 2.5 MVA in tier 1. Half a unit
/// of the last place of the factor and of the table together are up to 0.0016 point at 50 kVA.
#[test]
fn eu_table_i9_follows_from_table_i2() {
    for row in EU_LOSSES.iter().filter(|r| r.table == "I.2") {
        let losses = (row.max_no_load_loss_p0_w * row.max_load_loss_pk_w).sqrt();
        let pei = 100.0 * (1.0 - 2.0 * 1.640 * losses / (1000.0 * row.rated_power_kva));
        let printed = EU_INDEX_2019
            .iter()
            .find(|r| {
                r.table == "I.9"
                    && r.tier == row.tier
                    && r.rated_power_mva * 1000.0 == row.rated_power_kva
            })
            .expect("same ratings");
        let misprint = row.rated_power_kva == 2500.0 && row.tier == 1;
        let near = (pei - printed.min_pei_percent).abs() < 0.0016;
        assert_eq!(near, !misprint, "{row:?} {pei} {printed:?}");
    }
}

/// Tables I.4 and I.5 of 2014 stand again in I.7 and I.8 of 2019.
#[test]
fn eu_old_medium_tables_live_on() {
    for row in EU_INDEX_2014.iter().filter(|r| r.table == "I.4" || r.table == "I.5") {
        let heir = if row.table == "I.4" { "I.7" } else { "I.8" };
        let same = EU_INDEX_2019.iter().find(|r| {
            r.table == heir && r.tier == row.tier && r.rated_power_mva == row.rated_power_mva
        });
        assert_eq!(same.expect("same ratings").min_pei_percent, row.min_pei_percent, "{row:?}");
    }
}

fn us(kva: f64, insulation: Insulation, hv_kv: f64) -> Subject {
    Subject {
        phases: Some(3),
        hv_kv: Some(hv_kv),
        lv_kv: Some(0.48),
        insulation: Some(insulation),
        reference_temp_c: Some(if insulation == Insulation::Liquid { 55.0 } else { 75.0 }),
        ..Subject::new(kva, 200.0, 1500.0)
    }
}

/// 10 CFR 431.196 at 50 % load, 55 °C; remembered levels ask to be verified; 2029 is another rule.
#[test]
fn us_liquid() {
    let verdict = |s: &Subject, date| check("us-10cfr431", s, on(date)).expect("known");
    let s = us(150.0, Insulation::Liquid, 12.47);
    let v = verdict(&s, "2024-01-01");
    assert_eq!(limits(&v), [99.16]);
    assert!((v.limits[0].value - 100.0 * 75_000.0 / (75_000.0 + 200.0 + 375.0)).abs() < 1e-9);
    assert_eq!((v.meets, v.verify), (Some(true), true));
    assert_eq!(limits(&verdict(&s, "2029-04-22")), [99.16]);
    assert_eq!(limits(&verdict(&s, "2029-04-23")), [99.33]);
    assert_eq!(verdict(&s, "2029-04-23").meets, Some(false));
    let hot = Subject { reference_temp_c: Some(85.0), ..s };
    let cooler = 1500.0 * (235.0 + 55.0) / (235.0 + 85.0) / 4.0;
    let value = verdict(&hot, "2024-01-01").limits[0].value;
    assert!((value - 100.0 * 75_000.0 / (75_200.0 + cooler)).abs() < 1e-9);
    assert_eq!(verdict(&s, "2015-12-31").meets, None, "the level before 2016 is not in the tables");
    let left_out = us(45.0, Insulation::Liquid, 12.47);
    assert_eq!(limits(&verdict(&left_out, "2024-01-01")), [98.92]);
    assert_eq!(verdict(&left_out, "2030-01-01").meets, None, "the row was left out");
    let subtransmission = Subject { hv_kv: Some(69.0), ..s };
    assert_eq!(verdict(&subtransmission, "2024-01-01").meets, Some(true), "outside the scope");
}

/// Low-voltage dry-type is read law: no mark; medium-voltage levels depend on the impulse level.
#[test]
fn us_dry() {
    let verdict = |s: &Subject, date| check("us-10cfr431", s, on(date)).expect("known");
    let low = Subject { no_load_loss_w: 300.0, ..us(75.0, Insulation::Dry, 0.48) };
    let v = verdict(&low, "2020-01-01");
    assert_eq!((limits(&v), v.verify), (vec![98.60], false));
    assert_eq!(limits(&verdict(&low, "2010-01-01")), [98.0]);
    assert_eq!(verdict(&low, "2006-01-01").meets, Some(true));
    let value = 100.0 * 26_250.0 / (26_250.0 + 300.0 + 1500.0 * 0.35 * 0.35);
    assert!((v.limits[0].value - value).abs() < 1e-9, "35 % load");

    let mut medium = us(500.0, Insulation::Dry, 13.8);
    (medium.no_load_loss_w, medium.load_loss_w) = (1000.0, 6000.0);
    let v = verdict(&medium, "2020-01-01");
    assert_eq!(v.meets, None, "98.89 to 99.09 %: it depends");
    assert!(v.why.contains("bil_kv"));
    let with_bil = |bil| verdict(&Subject { bil_kv: Some(bil), ..medium }, "2020-01-01");
    assert_eq!(limits(&with_bil(45.0)), [99.09]);
    assert_eq!(limits(&with_bil(60.0)), [98.99]);
    assert_eq!(limits(&with_bil(110.0)), [98.89]);
    let good = Subject { no_load_loss_w: 500.0, ..medium };
    assert_eq!(verdict(&good, "2020-01-01").meets, Some(true), "meets the strictest band");
    let bad = Subject { no_load_loss_w: 5000.0, ..medium };
    assert_eq!(verdict(&bad, "2020-01-01").meets, Some(false), "fails the mildest band");
    assert_eq!(verdict(&good, "2030-01-01").meets, None, "2029 levels are not in the tables");
}

/// The remembered US medium-voltage dry-type levels equal the Canadian text, all 68.
#[test]
fn us_medium_voltage_dry_equals_canada() {
    let band = |words: &str| match words {
        "20-45 kV" => "20-45 kV",
        "46-95 kV" => "> 45-95 kV",
        "≥ 96 kV" => "> 95-199 kV",
        other => panic!("{other}"),
    };
    let mut compared = 0;
    for row in US.iter().filter(|r| r.equipment_class.starts_with("medium")) {
        let same = CANADA.iter().find(|c| {
            c.phase == row.phase
                && c.bil_band == band(&row.bil_band)
                && c.rated_power_kva == row.rated_power_kva
        });
        let same = same.expect("the same rating");
        assert_eq!(same.min_efficiency_percent, row.min_efficiency_percent);
        assert_eq!(same.load_percent_of_nominal, 100.0 * row.per_unit_load);
        compared += 1;
    }
    assert_eq!(compared, 68);
}

#[test]
fn canada() {
    let verdict = |s: &Subject, date| check("ca-sor-2016-311", s, on(date)).expect("known");
    let s = Subject { no_load_loss_w: 300.0, ..us(75.0, Insulation::Dry, 0.6) };
    let v = verdict(&s, "2020-01-01");
    assert_eq!((limits(&v), v.confidence), (vec![98.60], Confidence::Text));
    let between = Subject { rated_kva: 60.0, ..s };
    assert!((limits(&verdict(&between, "2020-01-01"))[0] - 98.5).abs() < 1e-9);
    let liquid = us(75.0, Insulation::Liquid, 12.0);
    assert_eq!(verdict(&liquid, "2020-01-01").meets, Some(true));
    assert_eq!(verdict(&s, "2015-01-01").meets, None);
    assert_eq!(verdict(&Subject { rated_kva: 9000.0, ..s }, "2020-01-01").meets, Some(true));
}

/// Every verdict with limits can be opened into steps.
#[test]
fn a_verdict_shows_its_working() {
    let high = Subject { hv_kv: Some(33.0), ..eu(205.0, 200.0, 2000.0) };
    let verdict = check("eu-548-2014", &high, on("2022-01-01")).expect("known");
    assert!(
        verdict
            .working
            .iter()
            .any(|s| s.substituted == "189 + (270 − 189)·(205 − 160)/(250 − 160)")
    );
    assert!(verdict.working.iter().any(|s| s.substituted == "229.5·(100 + 15)/100"));
    assert!(at_start_of(2027).is_some_and(|d| d == on("2027-01-01")));
}
