//! 10 CFR 431.196: least efficiency of distribution transformers at the law's own load and temperature.
//! Liquid-immersed and medium-voltage dry-type levels are remembered; so is the scope.

use chrono::NaiveDate;

use super::levels::{Conditions, bands, judge};
use super::lookup::Point;
use super::tables::{Confidence, US, US_CONDITIONS};
use super::{Finding, Subject};
use crate::engine::columns::Insulation;
use crate::engine::working::Working;

/// Scope of 10 CFR 431.192 (memory): input up to 34.5 kV, output up to 600 V, 60 Hz.
const INPUT_KV: f64 = 34.5;
const OUTPUT_KV: f64 = 0.6;

const LIQUID: &str = "liquid-immersed";
const LV_DRY: &str = "low-voltage dry-type";
const MV_DRY: &str = "medium-voltage dry-type";

/// Rows that the tables leave out, so that nothing is interpolated over them: three-phase liquid from 23 April 2029
/// at 45 kVA, and above 2500 kVA.
const LEFT_OUT_KVA: [(f64, f64); 2] = [(30.0, 75.0), (2500.0, f64::INFINITY)];

pub(super) fn find(
    w: &mut Working,
    notes: &mut Vec<String>,
    s: &Subject,
    date: NaiveDate,
) -> Finding {
    let free = |why: &str| Finding::Free(why.to_owned(), Confidence::Memory);
    let open = |why: &str| Finding::Open(why.to_owned(), Confidence::Memory);
    if s.frequency_hz.is_some_and(|f| f != 60.0) {
        return free("the rule holds for 60 Hz");
    }
    if s.hv_kv.is_some_and(|kv| kv > INPUT_KV) || s.lv_kv.is_some_and(|kv| kv > OUTPUT_KV) {
        return free("the rule holds up to 34.5 kV input and 600 V output");
    }
    let Some(insulation) = s.insulation else {
        return open("insulation is blank: liquid-immersed and dry-type have tables of their own");
    };
    let class = match (insulation, s.hv_kv) {
        (Insulation::Liquid, _) => LIQUID,
        (Insulation::Dry, None) => {
            return open("hv_kv is blank: it divides low-voltage from medium-voltage dry-type");
        }
        (Insulation::Dry, Some(kv)) if kv <= OUTPUT_KV => LV_DRY,
        (Insulation::Dry, Some(_)) => MV_DRY,
    };
    let phase = match s.phases {
        Some(1) => "single",
        Some(3) => "three",
        _ => return open("phases is blank: one and three phases have tables of their own"),
    };
    let rows: Vec<_> = US
        .iter()
        .filter(|r| {
            r.equipment_class == class
                && r.phase == phase
                && r.manufactured_from_date <= date
                && r.manufactured_before_date.is_none_or(|before| date < before)
        })
        .collect();
    let Some(first) = rows.first() else {
        let first_from = US
            .iter()
            .filter(|r| r.equipment_class == class)
            .map(|r| r.manufactured_from_date)
            .min();
        return match first_from {
            Some(from) if date < from && class == LV_DRY => Finding::Free(
                format!("the rule sets levels for {class} from {from}"),
                Confidence::Text,
            ),
            Some(from) if date < from => {
                open(&format!("levels for {class} before {from} are not in the tables"))
            }
            _ => open(&format!(
                "the levels for {class} on {date} are not in the tables: look them up"
            )),
        };
    };
    let left_out = |(from, to): &(f64, f64)| *from < s.rated_kva && s.rated_kva < *to;
    if class == LIQUID
        && phase == "three"
        && first.manufactured_before_date.is_none()
        && LEFT_OUT_KVA.iter().any(left_out)
    {
        return open(
            "the level of this rating from 23 April 2029 is not in the tables: look it up",
        );
    }
    let condition = |quantity: &str| {
        US_CONDITIONS.iter().find(|c| c.equipment_class == class && c.quantity == quantity)
    };
    let Some(temperature) = condition("load_loss_reference_temp") else {
        return open("the reference temperature of this class is not in the tables");
    };
    let conditions = Conditions {
        load_pu: first.per_unit_load,
        temperature_c: temperature.value,
        confidence: temperature.confidence,
    };
    let source = format!("{} {}, {class}, {phase} phase", first.rule, first.paragraph);
    let bands = bands(rows.iter().map(|r| {
        let point = Point {
            rating: r.rated_power_kva,
            limit: r.min_efficiency_percent,
            confidence: r.confidence,
        };
        (r.bil_band.as_str(), point)
    }));
    judge(w, notes, s, &bands, &conditions, &source)
}
