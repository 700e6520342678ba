//! What is told of a fit: the keys of the result.

use serde::Serialize;

use crate::study::law::VerdictRow;
use crate::study::unit::thermal::HeatRow;

/// How an offer fits a place. What is not known is null; `misses` names what does not fit, `unknown` what could not
/// be looked at.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct FitRow {
    pub proposed: String,
    pub fits: bool,
    pub misses: Vec<&'static str>,
    pub unknown: Vec<&'static str>,
    pub phases_agree: Option<bool>,
    pub hv_difference_pct: Option<f64>,
    pub lv_difference_pct: Option<f64>,
    pub voltages_agree: Option<bool>,
    pub vector_groups_agree: Option<bool>,
    /// Peak of year 1 and highest peak of the horizon over its rating.
    pub peak_pu: Option<f64>,
    pub highest_peak_pu: Option<f64>,
    pub loading_limit_pu: Option<f64>,
    pub within_loading_limit: Option<bool>,
    /// Whether the voltage holds at the highest peak; none at rated voltage, where it is not asked.
    pub holds_voltage: Option<bool>,
    /// At the peak of year 1.
    pub regulation_pct: Option<f64>,
    pub fault_level_mva: Option<f64>,
    pub fault_current_a: Option<f64>,
    pub fault_limit_mva: Option<f64>,
    pub within_fault_limit: Option<bool>,
    pub beside: Option<BesideRow>,
    /// How hot it gets under the load of year 1; none for a dry-type one.
    pub thermal: Option<HeatRow>,
    pub law: Option<VerdictRow>,
    pub notes: Vec<String>,
}

/// How it would run in parallel with another unit.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct BesideRow {
    pub unit: String,
    pub ratio_difference_pct: Option<f64>,
    pub ratios_agree: Option<bool>,
    pub vector_groups_agree: Option<bool>,
    pub impedance_difference_pct: Option<f64>,
    pub impedances_agree: Option<bool>,
    /// Peaks of year 1 of both places together.
    pub load_kva: Option<f64>,
    pub loading_pu: Option<f64>,
    pub beside_loading_pu: Option<f64>,
    pub bank_limit_kva: Option<f64>,
    /// Current at no load over its own rated current.
    pub circulating_pu: Option<f64>,
}
