//! Regulation (EU) 548/2014 as amended by (EU) 2019/1783: largest losses up to 3150 kVA, least Peak Efficiency Index
//! above; tiers from 1 July 2015 and 2021, the definitions and corrections of 2019 from 14 November 2019.

use chrono::NaiveDate;

use super::lookup::{Ends, Outside, Point, limit};
use super::tables::{
    Confidence, CorrectionRow, EU_CORRECTIONS, EU_INDEX_2014, EU_INDEX_2019, EU_LOSSES,
    EU_TAPPINGS, IndexRow,
};
use super::{Bound, DualVoltage, Finding, Limit, Subject};
use crate::engine::columns::{Insulation, Mounting, TapChanger};
use crate::engine::transformer::efficiency_index::{IndexLosses, peak_efficiency_index};
use crate::engine::working::{Formula, Recorder, Working};

/// Reference temperature of load losses of liquid-immersed units (°C): IEC 60076-1; the regulation prints none.
const LIQUID_REFERENCE_C: f64 = 75.0;

/// Standard values of the highest voltage for equipment (kV), IEC 60076-3 (memory).
const STANDARD_UM_KV: [f64; 19] = [
    1.1, 3.6, 7.2, 12.0, 17.5, 24.0, 36.0, 52.0, 72.5, 100.0, 123.0, 145.0, 170.0, 245.0, 300.0,
    362.0, 420.0, 550.0, 1100.0,
];

/// The smallest standard Um that is not below a rated voltage.
fn standard_um(kv: f64) -> f64 {
    STANDARD_UM_KV.into_iter().find(|um| *um >= kv).unwrap_or(kv)
}

#[derive(Clone, Copy, PartialEq)]
enum Version {
    Adopted2014,
    Amended2019,
}

/// Which text and tier hold on a date; none before the first tier.
fn in_force(date: NaiveDate) -> Option<(Version, u8)> {
    let from = |y, m, d| NaiveDate::from_ymd_opt(y, m, d).is_some_and(|from| date >= from);
    let version = if from(2019, 11, 14) { Version::Amended2019 } else { Version::Adopted2014 };
    let tier = if from(2021, 7, 1) { 2 } else { 1 };
    from(2015, 7, 1).then_some((version, tier))
}

pub(super) fn find(
    w: &mut Working,
    notes: &mut Vec<String>,
    s: &Subject,
    date: NaiveDate,
) -> Finding {
    let Some((version, tier)) = in_force(date) else {
        let why = "the regulation sets limits from 1 July 2015";
        return Finding::Free(why.to_owned(), Confidence::TwoSources);
    };
    if s.frequency_hz.is_some_and(|f| f != 50.0) {
        return Finding::Free("the regulation holds for 50 Hz".to_owned(), Confidence::Memory);
    }
    let open = |why: &str| Finding::Open(why.to_owned(), Confidence::Text);
    let Some(insulation) = s.insulation else {
        return open("insulation is blank: liquid-immersed and dry-type have tables of their own");
    };
    let Some(um) = s.hv_um_kv.or_else(|| {
        let um = standard_um(s.hv_kv?);
        notes.push(format!("hv_um_kv is blank: the next standard value, {um} kV, is taken"));
        Some(um)
    }) else {
        return open("hv_um_kv and hv_kv are blank: the highest voltage decides the table");
    };
    let free = |why: &str| Finding::Free(why.to_owned(), Confidence::Text);
    if um <= 1.1 {
        return free("the regulation sets no limit up to a highest voltage of 1.1 kV");
    }
    if version == Version::Adopted2014 && s.rated_kva < 5.0 {
        return free("the regulation sets no limit below 5 kVA");
    }
    if s.rated_kva <= 3150.0 && um <= 36.0 {
        return losses(w, notes, s, insulation, um, version, tier);
    }
    index(w, notes, s, insulation, um, version, tier)
}

const RAISED: Formula = Formula {
    name: "limit raised by the corrections of the law, which add up",
    symbol: "L",
    formula: "L_table·(100 + c)/100",
    unit: "W",
    source: "Regulation (EU) 548/2014 tables I.3, I.3a, I.3b and point 1.3",
};

/// Three-phase, up to 3150 kVA and 36 kV: largest losses.
fn losses(
    w: &mut Working,
    notes: &mut Vec<String>,
    s: &Subject,
    insulation: Insulation,
    um: f64,
    version: Version,
    tier: u8,
) -> Finding {
    match s.phases {
        Some(3) => {}
        Some(_) => {
            let why = "the tables up to 3150 kVA hold for three-phase transformers";
            return Finding::Free(why.to_owned(), Confidence::Text);
        }
        None => {
            let why =
                "phases is blank: the tables up to 3150 kVA hold for three-phase transformers";
            return Finding::Open(why.to_owned(), Confidence::Text);
        }
    }
    let (table, ends) = match table_of(notes, s, insulation, version) {
        Ok(chosen) => chosen,
        Err(why) => return Finding::Open(why.to_owned(), Confidence::Text),
    };
    let rows = || EU_LOSSES.iter().filter(|r| r.table == table && r.tier == tier);
    let points = |limit: fn(&super::tables::LossRow) -> f64| -> Vec<Point> {
        rows()
            .map(|r| Point { rating: r.rated_power_kva, limit: limit(r), confidence: r.confidence })
            .collect()
    };
    let raised = corrections(notes, s, insulation, um, version, tier, table);
    let pk = match insulation {
        Insulation::Liquid => s.load_loss_at_c(w, notes, LIQUID_REFERENCE_C),
        Insulation::Dry => {
            notes.push("the load loss is compared as quoted: its reference temperature follows from the thermal class".to_owned());
            s.load_loss_w
        }
    };
    let source = format!("Regulation (EU) 548/2014 table {table}, tier {tier}");
    let mut limits = Vec::with_capacity(2);
    let sides = [
        ("no_load_loss_w", points(|r| r.max_no_load_loss_p0_w), raised.p0_pct, s.no_load_loss_w),
        ("load_loss_w", points(|r| r.max_load_loss_pk_w), raised.pk_pct, pk),
    ];
    for (quantity, points, pct, value) in sides {
        let of = format!("{quantity}, {source}");
        let (base, confidence) = match limit(w, &points, s.rated_kva, ends, &of) {
            Ok(found) => found,
            Err(Outside::Below | Outside::Above | Outside::Empty) => {
                let why = format!("table {table} has no row for {} kVA", s.rated_kva);
                return Finding::Open(why, Confidence::Text);
            }
        };
        let limit = base * (100.0 + pct) / 100.0;
        if pct != 0.0 {
            w.step(&RAISED, &[("L_table", base), ("c", pct)], limit);
            w.about(&|| of.clone());
        }
        let confidence = confidence.min(raised.confidence);
        let source = source.clone();
        limits.push(Limit { quantity, bound: Bound::Max, limit, value, source, confidence });
    }
    Finding::Limits(limits)
}

/// The loss table of a unit, and what holds beyond its rows.
fn table_of(
    notes: &mut Vec<String>,
    s: &Subject,
    insulation: Insulation,
    version: Version,
) -> Result<(&'static str, Ends), &'static str> {
    let below = Ends { below: true, ..Ends::default() };
    if insulation == Insulation::Dry {
        return Ok(("I.2", below));
    }
    if s.mounting == Some(Mounting::Pole) {
        match version {
            Version::Adopted2014 if s.rated_kva > 315.0 => {}
            Version::Adopted2014 if s.rated_kva < 25.0 => {
                return Err("table I.6 has no pole-mounted transformer below 25 kVA");
            }
            Version::Adopted2014 => return Ok(("I.6", Ends::default())),
            Version::Amended2019 if !(25.0..=400.0).contains(&s.rated_kva) => {}
            Version::Amended2019 if s.replaces_like => {
                return Ok(("I.6", Ends { extrapolate: true, ..Ends::default() }));
            }
            Version::Amended2019 => notes.push(
                "held to table I.1; a one-to-one replacement of a pole-mounted unit would be held to table I.6".to_owned(),
            ),
        }
    }
    Ok(("I.1", below))
}

/// What the corrections allow beyond the table.
struct Raised {
    p0_pct: f64,
    pk_pct: f64,
    confidence: Confidence,
}

fn corrections(
    notes: &mut Vec<String>,
    s: &Subject,
    insulation: Insulation,
    um: f64,
    version: Version,
    tier: u8,
    table: &str,
) -> Raised {
    let mut raised = Raised { p0_pct: 0.0, pk_pct: 0.0, confidence: Confidence::TwoSources };
    let mut raise = |why: &str, p0: f64, pk: f64, confidence: Confidence| {
        raised.p0_pct += p0;
        raised.pk_pct += pk;
        raised.confidence = raised.confidence.min(confidence);
        if p0 != 0.0 || pk != 0.0 {
            notes.push(format!("{why}: P0 +{p0} %, Pk +{pk} % of the table"));
        }
    };
    let (by_voltage, by_dual, border) = match version {
        Version::Adopted2014 => ("I.3", "I.3", 1.1),
        Version::Amended2019 => ("I.3a", "I.3b", 3.6),
    };
    // In the text of 2014 the corrections by voltage are of tables I.1 and I.2 only.
    if version == Version::Amended2019 || table != "I.6" {
        let primary = if um <= 24.0 { "Um ≤ 24 kV" } else { "Um = 36 kV" };
        let low_um = standard_um(s.lv_kv.unwrap_or(0.4));
        let sign = if low_um > border { ">" } else { "≤" };
        let secondary = format!("Um {sign} {border} kV");
        let fits = |r: &&CorrectionRow| {
            r.table == by_voltage
                && (r.insulation == "both" || r.insulation == insulation.word())
                && r.primary_um_condition == primary
                && r.secondary_um_condition == secondary
        };
        if let Some(r) = EU_CORRECTIONS.iter().find(fits) {
            let why = format!("table {by_voltage}, {primary} and {secondary}");
            raise(&why, r.p0_increase_percent, r.pk_increase_percent, r.confidence);
        }
        let case = s.dual_voltage.map(|dual| match dual {
            DualVoltage::ReducedPower => "0.85",
            DualVoltage::OneWinding => "one winding, full",
            DualVoltage::BothWindings => "both windings",
        });
        let fits = |r: &&CorrectionRow| {
            r.table == by_dual && case.is_some_and(|case| r.dual_voltage_case.contains(case))
        };
        if let Some(r) = EU_CORRECTIONS.iter().find(fits) {
            let why = format!("table {by_dual}, {}", r.dual_voltage_case);
            raise(&why, r.p0_increase_percent, r.pk_increase_percent, r.confidence);
        }
    }
    if s.tap_changer == Some(TapChanger::OnLoad)
        && table != "I.6"
        && let Some(r) = EU_TAPPINGS.iter().find(|r| r.tier == tier)
    {
        let why = "point 1.3, tappings operated on load";
        raise(why, r.p0_increase_percent, r.pk_increase_percent, r.confidence);
    }
    raised
}

/// Above 3150 kVA or 36 kV: least Peak Efficiency Index.
fn index(
    w: &mut Working,
    notes: &mut Vec<String>,
    s: &Subject,
    insulation: Insulation,
    um: f64,
    version: Version,
    tier: u8,
) -> Finding {
    let rows: &[IndexRow] = match version {
        Version::Adopted2014 => &EU_INDEX_2014,
        Version::Amended2019 => &EU_INDEX_2019,
    };
    let medium = version == Version::Adopted2014 && um <= 36.0 && s.rated_kva < 40_000.0;
    let table = match (insulation, version) {
        (Insulation::Liquid, _) if medium => "I.4",
        (Insulation::Dry, _) if medium => "I.5",
        (Insulation::Liquid, _) => "I.7",
        (Insulation::Dry, Version::Amended2019) if um > 36.0 => "I.9",
        (Insulation::Dry, _) => "I.8",
    };
    let mut rows: Vec<&IndexRow> =
        rows.iter().filter(|r| r.table == table && r.tier == tier).collect();
    rows.sort_by(|a, b| a.rated_power_mva.total_cmp(&b.rated_power_mva));
    let points: Vec<Point> = rows
        .iter()
        .map(|r| Point {
            rating: r.rated_power_mva,
            limit: r.min_pei_percent,
            confidence: r.confidence,
        })
        .collect();
    let ends = Ends {
        below: rows.first().is_some_and(|r| r.rating_label.contains('≤')),
        above: rows.last().is_some_and(|r| r.rating_label.contains('≥')),
        extrapolate: false,
    };
    let source = format!("Regulation (EU) 548/2014 table {table}, tier {tier}");
    let of = format!("peak_efficiency_index_pct, {source}");
    let mva = s.rated_kva / 1000.0;
    let Ok((limit, confidence)) = limit(w, &points, mva, ends, &of) else {
        let why = format!("table {table} has no row for {mva} MVA");
        return Finding::Open(why, Confidence::Text);
    };
    if version == Version::Amended2019 {
        let near = |r: &&&IndexRow| {
            let at = r.rated_power_mva;
            !r.note.is_empty() && points.iter().all(|p| !between(p.rating, at, mva))
        };
        for row in rows.iter().filter(near) {
            notes.push(format!("table {table} at {} MVA: {}", row.rated_power_mva, row.note));
        }
    }
    let load_loss_w = match insulation {
        Insulation::Liquid => s.load_loss_at_c(w, notes, LIQUID_REFERENCE_C),
        Insulation::Dry => s.load_loss_w,
    };
    if s.no_load_cooling_w.is_none() {
        notes.push("no cooling power is given: taken as zero, as for ONAN".to_owned());
    }
    let counted = IndexLosses {
        rated_kva: s.rated_kva,
        no_load_loss_w: s.no_load_loss_w,
        no_load_cooling_w: s.no_load_cooling_w.unwrap_or(0.0),
        load_cooling_w: match version {
            Version::Adopted2014 => 0.0,
            Version::Amended2019 => s.load_cooling_w.unwrap_or(0.0),
        },
        load_loss_w,
    };
    let value = match peak_efficiency_index(w, &counted) {
        Ok((pei, _)) => 100.0 * pei,
        Err(refusal) => return Finding::Open(refusal.to_string(), confidence),
    };
    // The formula of the index is an image in the public copies, so it is from memory.
    let confidence = confidence.min(Confidence::Memory);
    Finding::Limits(vec![Limit {
        quantity: "peak_efficiency_index_pct",
        bound: Bound::Min,
        limit,
        value,
        source,
        confidence,
    }])
}

/// Whether `x` lies strictly between two ratings.
fn between(x: f64, a: f64, b: f64) -> bool {
    a.min(b) < x && x < a.max(b)
}
