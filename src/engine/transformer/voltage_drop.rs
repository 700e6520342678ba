//! The "drop" voltage model (methods, section 2): iron at the operating voltage of the high-voltage side, copper
//! with the current that flows at the voltage left on the low-voltage side, and the energy that it loses in a year.

use super::circuit::{Circuit, PowerFactor, resistance_pu};
use super::losses::Losses;
use crate::engine::Refusal;
use crate::engine::loading::duty::peak_of_year;
use crate::engine::loading::{Duty, VoltageDrop};
use crate::engine::working::{Formula, Recorder, Silent};

/// What the drop model needs beside losses and load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Supply {
    /// Series circuit of the transformer.
    pub circuit: Circuit,
    /// Voltage of the high-voltage side over rated, `operating_voltage_pu`.
    pub v_hv_pu: f64,
    /// Power factor of the load.
    pub power_factor: PowerFactor,
}

const V_LV: Formula = Formula {
    name: "voltage left on the low-voltage side",
    symbol: "v_lv",
    formula: "√u, u the larger root of u² + (2·β·(R·cosφ + X·sinφ) − v_hv²)·u + β²·Z² = 0",
    unit: "pu",
    source: "two-bus power flow of a constant-power load; methods, section 2",
};

impl Supply {
    /// The supply of a transformer at a place; a reactance that is not known is left out.
    pub fn of(losses: &Losses, drop: &VoltageDrop) -> Self {
        Self {
            circuit: Circuit {
                r_pu: resistance_pu(&mut Silent, losses.rated_kva, losses.load_loss_w),
                x_pu: losses.reactance_pu.unwrap_or(0.0),
            },
            v_hv_pu: drop.v_hv_pu,
            power_factor: drop.power_factor,
        }
    }

    /// Whether a load can be carried at all: whether the voltage equation has a real root.
    pub fn carries(&self, load_pu: f64) -> bool {
        self.square_of_voltage(load_pu).is_ok()
    }

    /// The larger root of the voltage equation, u = v_lv².
    fn square_of_voltage(&self, load_pu: f64) -> Result<f64, Refusal> {
        let Circuit { r_pu, x_pu } = self.circuit;
        let (pf, v_hv) = (self.power_factor, self.v_hv_pu);
        // u² − p·u + q = 0.
        let p = v_hv * v_hv - 2.0 * load_pu * (r_pu * pf.cos + x_pu * pf.sin);
        let q = load_pu * load_pu * (r_pu * r_pu + x_pu * x_pu);
        let inside = p * p - 4.0 * q;
        if p > 0.0 && inside >= 0.0 {
            return Ok(0.5 * (p + inside.sqrt()));
        }
        let why = format!(
            "cannot be carried at {v_hv} pu and an impedance of {:.4} pu: the voltage would collapse; lower the load, raise operating_voltage_pu or check impedance_pct",
            self.circuit.z_pu()
        );
        Err(Refusal::new("load_pu", load_pu, why))
    }
}

/// Voltage left on the low-voltage side with `load_pu` of the rating drawn there (pu).
///
/// # Errors
/// A load that the unit cannot carry at this voltage: no real root.
pub fn low_side_voltage<R: Recorder>(
    w: &mut R,
    supply: &Supply,
    load_pu: f64,
) -> Result<f64, Refusal> {
    let value = supply.square_of_voltage(load_pu)?.sqrt();
    let Circuit { r_pu, x_pu } = supply.circuit;
    let inputs = [
        ("β", load_pu),
        ("R", r_pu),
        ("cosφ", supply.power_factor.cos),
        ("X", x_pu),
        ("sinφ", supply.power_factor.sin),
        ("v_hv", supply.v_hv_pu),
        ("Z", supply.circuit.z_pu()),
    ];
    Ok(w.step(&V_LV, &inputs, value))
}

const CURRENT: Formula = Formula {
    name: "current over rated",
    symbol: "i",
    formula: "β/v_lv",
    unit: "pu",
    source: "methods, section 2",
};

/// Current over rated current at a load (pu).
///
/// # Errors
/// As [`low_side_voltage`].
pub fn current<R: Recorder>(w: &mut R, supply: &Supply, load_pu: f64) -> Result<f64, Refusal> {
    supply.square_of_voltage(load_pu)?;
    w.open();
    let v = low_side_voltage(w, supply, load_pu)?;
    Ok(w.close(&CURRENT, &[("β", load_pu), ("v_lv", v)], load_pu / v))
}

const MEAN_SQUARE: Formula = Formula {
    name: "mean of the squared current over the parts of the load-duration histogram",
    symbol: "i_rms²",
    formula: "Σ share·(β·s)²/u(β·s), u = v_lv² as for one load with R, X, cosφ, v_hv",
    unit: "pu²",
    source: "methods, section 2",
};
const AT_RMS: Formula = Formula {
    name: "squared current at the RMS load",
    symbol: "i_rms²",
    formula: "(β_rms/v_lv)²",
    unit: "pu²",
    source: "methods, section 2: only the loss factor is known; β_rms = β·√LsF",
};

/// Mean of the squared current over rated in the hours of a year with its peak at `peak_pu` of the rating: over
/// the load-duration histogram, or at the RMS load where there is none.
///
/// # Errors
/// As [`low_side_voltage`].
pub fn mean_square_current<R: Recorder>(
    w: &mut R,
    supply: &Supply,
    peak_pu: f64,
    loss_factor_pu: f64,
    duration: Option<&[(f64, f64)]>,
) -> Result<f64, Refusal> {
    let Some(parts) = duration else {
        let rms = peak_pu * loss_factor_pu.sqrt();
        supply.square_of_voltage(rms)?;
        w.open();
        let v = low_side_voltage(w, supply, rms)?;
        let i = rms / v;
        return Ok(w.close(&AT_RMS, &[("β_rms", rms), ("v_lv", v)], i * i));
    };
    let mut sum = 0.0;
    for (share, s) in parts {
        let load = peak_pu * s;
        sum += share * (load * load / supply.square_of_voltage(load)?);
    }
    let Supply { circuit, v_hv_pu, power_factor } = supply;
    let inputs = [
        ("β", peak_pu),
        ("R", circuit.r_pu),
        ("X", circuit.x_pu),
        ("cosφ", power_factor.cos),
        ("v_hv", *v_hv_pu),
    ];
    Ok(w.step(&MEAN_SQUARE, &inputs, sum))
}

const LOAD_ENERGY: Formula = Formula {
    name: "energy of the load loss in year k",
    symbol: "Ek",
    formula: "Pk·i_rms²·h/1000",
    unit: "kWh",
    source: "methods, sections 2 and 4 (drop voltage model)",
};

/// Energy of the load loss in year `k` by the drop model (kWh); [`super::losses::annual_energy`] asks for it.
/// Infinite where the load cannot be carried.
pub(super) fn load_energy<R: Recorder>(
    w: &mut R,
    losses: &Losses,
    drop: &VoltageDrop,
    duty: &Duty,
    k: usize,
    growth_years: usize,
) -> f64 {
    w.open();
    resistance_pu(w, losses.rated_kva, losses.load_loss_w);
    let peak = peak_of_year(w, duty, k, growth_years) / losses.rated_kva;
    let parts = drop.duration.as_deref();
    let supply = Supply::of(losses, drop);
    let square = mean_square_current(w, &supply, peak, duty.loss_factor_pu, parts);
    let (square, h) = (square.unwrap_or(f64::INFINITY), duty.energised_hours);
    let value = losses.load_loss_w * square * h / 1000.0;
    let inputs = [("Pk", losses.load_loss_w), ("i_rms", square.sqrt()), ("h", h)];
    w.close(&LOAD_ENERGY, &inputs, value)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::transformer::regulation::source_voltage;
    use crate::engine::working::Silent;

    fn supply(pf: f64) -> Supply {
        Supply {
            circuit: Circuit { r_pu: 0.01, x_pu: 0.06 },
            v_hv_pu: 1.0,
            power_factor: PowerFactor::lagging(pf).expect("sound"),
        }
    }

    /// The voltage that is left, put back into the series circuit, needs the source voltage again.
    #[test]
    fn root_satisfies_the_circuit() {
        for pf in [1.0, 0.9, 0.8] {
            for beta in [0.0, 0.3, 1.0, 1.4] {
                let s = supply(pf);
                let v = low_side_voltage(&mut Silent, &s, beta).expect("carried");
                let back = source_voltage(&mut Silent, &s.circuit, beta, s.power_factor, v);
                assert!((back.expect("sound") - 1.0).abs() < 1e-13);
            }
        }
    }

    #[test]
    fn a_load_beyond_the_nose_is_refused() {
        let refusal = low_side_voltage(&mut Silent, &supply(0.8), 9.0).expect_err("collapse");
        assert!(refusal.why.contains("cannot be carried"));
    }

    /// With no impedance and rated voltage the drop model is the rated model.
    #[test]
    fn without_impedance_it_is_the_rated_model() {
        let supply = Supply { circuit: Circuit { r_pu: 0.0, x_pu: 0.0 }, ..supply(0.9) };
        let parts = [(0.75, 0.25), (0.25, 1.0)];
        let square = |parts| {
            mean_square_current(&mut Silent, &supply, 0.8, 0.296_875, parts).expect("sound")
        };
        assert!((square(Some(&parts)) - 0.64 * 0.296_875).abs() < 1e-15);
        assert!((square(None) - 0.64 * 0.296_875).abs() < 1e-15);
    }
}
