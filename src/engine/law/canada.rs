//! SOR/2016-311 Division 11: least efficiency of dry-type transformers at 35 % (1.2 kV class) or 50 % load.

use chrono::NaiveDate;

use super::levels::{Conditions, bands, judge};
use super::lookup::Point;
use super::tables::{CANADA, Confidence};
use super::{Finding, Subject};
use crate::engine::columns::Insulation;
use crate::engine::working::Working;

/// Reference temperature of the load loss (°C): taken as in the US rule, with which the law was aligned (memory).
const REFERENCE_C: f64 = 75.0;

/// Highest rated voltage of the 1.2 kV class.
const LOW_CLASS_KV: f64 = 1.2;

pub(super) fn find(
    w: &mut Working,
    notes: &mut Vec<String>,
    s: &Subject,
    date: NaiveDate,
) -> Finding {
    let open = |why: &str| Finding::Open(why.to_owned(), Confidence::Text);
    match s.insulation {
        Some(Insulation::Dry) => {}
        Some(Insulation::Liquid) => {
            let why = "the regulation holds for dry-type transformers";
            return Finding::Free(why.to_owned(), Confidence::Text);
        }
        None => return open("insulation is blank: the regulation holds for dry-type transformers"),
    }
    let Some(kv) = s.hv_kv else {
        return open("hv_kv is blank: it decides the voltage class");
    };
    let class = if kv <= LOW_CLASS_KV { "1.2 kV class" } else { "> 1.2 kV" };
    let phase = match s.phases {
        Some(1) => "single",
        Some(3) => "three",
        _ => return open("phases is blank: one and three phases have tables of their own"),
    };
    let rows: Vec<_> = CANADA
        .iter()
        .filter(|r| {
            r.voltage_class == class && r.phase == phase && r.manufactured_from_date <= date
        })
        .collect();
    let Some(first) = rows.first() else {
        return open("the levels before 1 January 2016 are not in the tables");
    };
    let conditions = Conditions {
        load_pu: first.load_percent_of_nominal / 100.0,
        temperature_c: REFERENCE_C,
        confidence: Confidence::Text,
    };
    notes.push(format!("reference temperature {REFERENCE_C} °C taken as in the US rule (memory)"));
    if phase == "three" {
        notes.push("units with several high-voltage windings at a ratio other than 2:1 are allowed 0.11 point less".to_owned());
    }
    let source = format!("{} {}, {class}", first.instrument, first.section);
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
