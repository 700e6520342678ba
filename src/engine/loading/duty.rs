//! The duty of a place: all that a year there asks of whatever transformer stands in it.

use std::sync::Arc;

use crate::engine::transformer::circuit::PowerFactor;
use crate::engine::working::{Formula, Recorder};

/// The voltage of a place, where it enters the losses (drop voltage model; methods, section 2).
#[derive(Clone, Debug, PartialEq)]
pub struct VoltageDrop {
    /// Voltage of the high-voltage side over rated.
    pub v_hv_pu: f64,
    /// Power factor of the load.
    pub power_factor: PowerFactor,
    /// Load-duration histogram: share of the hours and load over peak; none: the RMS load stands for the year.
    pub duration: Option<Arc<[(f64, f64)]>>,
}

/// What a place asks of a transformer.
#[derive(Clone, Debug, PartialEq)]
pub struct Duty {
    /// Highest load of year 1.
    pub peak_kva: f64,
    /// Growth of the load a year, g.
    pub load_growth_pu: f64,
    /// Mean over peak, LF, where it is known.
    pub load_factor_pu: Option<f64>,
    /// Mean square over peak square, LsF.
    pub loss_factor_pu: f64,
    /// Hours under voltage, h.
    pub energised_hours: f64,
    /// Hours of fans and pumps.
    pub auxiliary_hours: f64,
    /// Power factor of the load, where known.
    pub power_factor: Option<f64>,
    /// Load at the system peak over own peak, PRF.
    pub responsibility_pu: f64,
    /// Price of a kWh of constant loss, c̄0.
    pub no_load_price_per_kwh: f64,
    /// Price of a kWh of load loss, c̄k.
    pub load_price_per_kwh: f64,
    /// CO2 of a kWh of constant loss, κ̄0.
    pub no_load_co2_kg_per_kwh: f64,
    /// CO2 of a kWh of load loss, κ̄k.
    pub load_co2_kg_per_kwh: f64,
    /// How voltage enters the losses; none: at rated voltage.
    pub drop: Option<VoltageDrop>,
}

const PEAK: Formula = Formula {
    name: "peak load of year k",
    symbol: "S_k",
    formula: "S_1·(1+g)^(min(k,Y)−1)",
    unit: "kVA",
    source: "methods, section 4",
};

const PEAK_PU: Formula = Formula {
    name: "peak load of year 1 over the rating",
    symbol: "β_1",
    formula: "S_1/S_r",
    unit: "pu",
    source: "methods, section 2",
};
const GROWTH_PCT: Formula = Formula {
    name: "growth of the load a year in percent",
    symbol: "g_pct",
    formula: "100·g",
    unit: "%",
    source: "methods, section 4",
};

impl Duty {
    /// Peak load of year 1 over a rating (pu).
    pub fn peak_pu<R: Recorder>(&self, w: &mut R, rated_kva: f64) -> f64 {
        let inputs = [("S_1", self.peak_kva), ("S_r", rated_kva)];
        w.step(&PEAK_PU, &inputs, self.peak_kva / rated_kva)
    }

    /// Growth of the load a year in percent.
    pub fn load_growth_pct<R: Recorder>(&self, w: &mut R) -> f64 {
        w.step(&GROWTH_PCT, &[("g", self.load_growth_pu)], 100.0 * self.load_growth_pu)
    }
}

const LOADING: Formula = Formula {
    name: "load over the rating",
    symbol: "β",
    formula: "S/S_r",
    unit: "pu",
    source: "methods, section 2",
};

/// A load over a rating (pu).
pub fn loading_pu<R: Recorder>(w: &mut R, load_kva: f64, rated_kva: f64) -> f64 {
    w.step(&LOADING, &[("S", load_kva), ("S_r", rated_kva)], load_kva / rated_kva)
}

/// Peak load of year `k` = 1, 2, … for a load that grows for `growth_years` years (kVA).
pub fn peak_of_year<R: Recorder>(w: &mut R, duty: &Duty, k: usize, growth_years: usize) -> f64 {
    let value = duty.peak_kva * growth(duty.load_growth_pu, k, growth_years);
    #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
    let inputs = [
        ("S_1", duty.peak_kva),
        ("g", duty.load_growth_pu),
        ("k", k as f64),
        ("Y", growth_years as f64),
    ];
    w.step(&PEAK, &inputs, value)
}

/// The growth factor (1+g)^(min(k,Y)−1) of year `k`.
pub fn growth(load_growth_pu: f64, k: usize, growth_years: usize) -> f64 {
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_possible_wrap,
        reason = "at most 200 years"
    )]
    let power = k.min(growth_years) as i32 - 1;
    (1.0 + load_growth_pu).powi(power)
}
