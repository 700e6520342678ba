//! Ageing of paper by its hot-spot temperature: relative rate, equivalent ageing factor, life used
//! (IEC 60076-7 and IEEE C57.91).

use super::circuit::positive;
use crate::engine::Refusal;
use crate::engine::columns::choice;
use crate::engine::working::{Formula, Recorder};

choice! {
    /// The paper of the windings.
    Paper {
        /// Not thermally upgraded: rated at 98 °C.
        Normal = "normal",
        /// Thermally upgraded: rated at 110 °C.
        Upgraded = "upgraded",
    }
}

const NORMAL: Formula = Formula {
    name: "relative ageing rate, paper not upgraded",
    symbol: "V",
    formula: "2^((θh − 98)/6)",
    unit: "",
    source: "IEC 60076-7",
};
const UPGRADED: Formula = Formula {
    name: "relative ageing rate, thermally upgraded paper",
    symbol: "V",
    formula: "exp(15000/383 − 15000/(θh + 273))",
    unit: "",
    source: "IEC 60076-7",
};

impl Paper {
    /// Relative ageing rate V at a hot-spot temperature (°C).
    pub fn ageing_rate<R: Recorder>(self, w: &mut R, hot_spot_c: f64) -> f64 {
        let inputs = [("θh", hot_spot_c)];
        match self {
            Self::Normal => w.step(&NORMAL, &inputs, ((hot_spot_c - 98.0) / 6.0).exp2()),
            Self::Upgraded => {
                let value = (15_000.0 / 383.0 - 15_000.0 / (hot_spot_c + 273.0)).exp();
                w.step(&UPGRADED, &inputs, value)
            }
        }
    }
}

const F_AA: Formula = Formula {
    name: "ageing acceleration factor",
    symbol: "F_AA",
    formula: "exp(15000/(θ_ref + 273) − 15000/(θh + 273))",
    unit: "",
    source: "IEEE C57.91",
};

/// Ageing acceleration factor at a hot-spot temperature (°C); the reference is 110 °C for units with 65 °C average
/// rise, 95 °C for 55 °C rise (IEEE C57.91).
pub fn acceleration<R: Recorder>(w: &mut R, hot_spot_c: f64, reference_c: f64) -> f64 {
    let value = (15_000.0 / (reference_c + 273.0) - 15_000.0 / (hot_spot_c + 273.0)).exp();
    w.step(&F_AA, &[("θ_ref", reference_c), ("θh", hot_spot_c)], value)
}

const F_EQA: Formula = Formula {
    name: "equivalent ageing factor of the hours",
    symbol: "F_EQA",
    formula: "Σ F_AA·Δt/Σ Δt",
    unit: "",
    source: "IEEE C57.91",
};

/// Equivalent ageing factor of hot-spot temperatures (°C), each with its hours.
///
/// # Errors
/// No hours at all, negative hours.
pub fn equivalent<R: Recorder>(
    w: &mut R,
    hours: &[(f64, f64)],
    reference_c: f64,
) -> Result<f64, Refusal> {
    let (mut aged, mut all) = (0.0, 0.0);
    w.open();
    for (hot_spot_c, h) in hours {
        if *h < 0.0 {
            return Err(Refusal::new("hours", h, "cannot be negative"));
        }
        aged += acceleration(w, *hot_spot_c, reference_c) * h;
        all += h;
    }
    positive("hours", all, "add up to nothing; give the hours of each temperature")?;
    Ok(w.close(&F_EQA, &[], aged / all))
}

const LIFE_LOST: Formula = Formula {
    name: "life lost in the hours",
    symbol: "L",
    formula: "100·F·h/h_life",
    unit: "%",
    source: "IEEE C57.91",
};

/// Life lost in `hours` of equivalent ageing factor `factor`, in percent of `life_hours`: 180 000 h by functional
/// tests (IEEE C57.91); 65 000, 135 000 and 150 000 h by other criteria of the end of life (memory).
///
/// # Errors
/// A life that is not above zero.
pub fn life_lost<R: Recorder>(
    w: &mut R,
    factor: f64,
    hours: f64,
    life_hours: f64,
) -> Result<f64, Refusal> {
    positive("normal_life_hours", life_hours, "must be above zero")?;
    let inputs = [("F", factor), ("h", hours), ("h_life", life_hours)];
    Ok(w.step(&LIFE_LOST, &inputs, 100.0 * factor * hours / life_hours))
}

const PER_UNIT_LIFE: Formula = Formula {
    name: "per-unit life at a constant hot spot",
    symbol: "L_pu",
    formula: "9.8e-18·exp(15000/(θh + 273))",
    unit: "pu",
    source: "IEEE C57.91",
};

/// Per-unit life at a constant hot-spot temperature (°C).
pub fn per_unit_life<R: Recorder>(w: &mut R, hot_spot_c: f64) -> f64 {
    let value = 9.8e-18 * (15_000.0 / (hot_spot_c + 273.0)).exp();
    w.step(&PER_UNIT_LIFE, &[("θh", hot_spot_c)], value)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn rated_temperatures_age_at_one() {
        assert_eq!(Paper::Normal.ageing_rate(&mut Silent, 98.0), 1.0);
        assert_eq!(Paper::Upgraded.ageing_rate(&mut Silent, 110.0), 1.0);
        assert_eq!(acceleration(&mut Silent, 95.0, 95.0), 1.0);
        assert_eq!(equivalent(&mut Silent, &[(110.0, 5.0)], 110.0), Ok(1.0));
        assert!(equivalent(&mut Silent, &[], 110.0).is_err());
    }
}
