//! Iron loss taken apart into hysteresis and eddy currents, and carried to another voltage, frequency or sheet.

use super::circuit::positive;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

/// The law P/f = a + b·f of a core at constant volts per hertz.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CoreSplit {
    /// Hysteresis loss per hertz, a (W/Hz).
    pub hysteresis_per_hz: f64,
    /// Eddy loss per hertz squared, b (W/Hz²).
    pub eddy_per_hz2: f64,
}

/// Core loss in its two parts (W).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CoreLoss {
    /// Hysteresis.
    pub hysteresis_w: f64,
    /// Eddy currents.
    pub eddy_w: f64,
}

impl CoreLoss {
    /// Both together (W).
    pub fn total_w(&self) -> f64 {
        self.hysteresis_w + self.eddy_w
    }
}

const B: Formula = Formula {
    name: "eddy loss per hertz squared: slope of P/f over f",
    symbol: "b",
    formula: "Σ(f−f_mean)·(P/f)/Σ(f−f_mean)²",
    unit: "W/Hz²",
    source: "P/f = a + b·f at constant volts per hertz; methods, section 2",
};
const A: Formula = Formula {
    name: "hysteresis loss per hertz",
    symbol: "a",
    formula: "mean(P/f) − b·f_mean",
    unit: "W/Hz",
    source: "P/f = a + b·f at constant volts per hertz; methods, section 2",
};

/// Splits core losses measured at several frequencies and constant volts per hertz; each is (f in Hz, P in W).
/// Two give the line exactly, more a least-squares line.
///
/// # Errors
/// Fewer than two frequencies, values not above zero, a part that would be negative.
pub fn split<R: Recorder>(w: &mut R, tests: &[(f64, f64)]) -> Result<CoreSplit, Refusal> {
    for (f, p) in tests {
        positive("frequency_hz", *f, "must be above zero")?;
        positive("core_loss_w", *p, "must be above zero")?;
    }
    #[expect(clippy::cast_precision_loss, reason = "a handful of tests")]
    let n = tests.len() as f64;
    let f_mean = tests.iter().map(|(f, _)| f).sum::<f64>() / n;
    let p_mean = tests.iter().map(|(f, p)| p / f).sum::<f64>() / n;
    let spread = tests.iter().map(|(f, _)| (f - f_mean) * (f - f_mean)).sum::<f64>();
    if tests.len() < 2 || spread == 0.0 {
        let why = "two tests at different frequencies and the same volts per hertz are needed to split the core loss";
        return Err(Refusal::new("frequency_hz", f_mean, why));
    }
    let b = tests.iter().map(|(f, p)| (f - f_mean) * (p / f)).sum::<f64>() / spread;
    w.step(&B, &[("f_mean", f_mean)], b);
    let a = p_mean - b * f_mean;
    w.step(&A, &[("b", b), ("f_mean", f_mean)], a);
    if a < 0.0 || b < 0.0 {
        let why = format!(
            "hysteresis {a:.4} W/Hz and eddy {b:.6} W/Hz² cannot be negative: the tests were not at constant volts per hertz, or a reading is wrong"
        );
        return Err(Refusal::new("core_loss_w", "", why));
    }
    Ok(CoreSplit { hysteresis_per_hz: a, eddy_per_hz2: b })
}

const HYSTERESIS: Formula = Formula {
    name: "hysteresis loss",
    symbol: "P_h",
    formula: "a·f",
    unit: "W",
    source: "methods, section 2",
};
const EDDY: Formula = Formula {
    name: "eddy-current loss",
    symbol: "P_e",
    formula: "b·f²",
    unit: "W",
    source: "methods, section 2",
};

/// Core loss at frequency `f_hz` and the same volts per hertz (W).
pub fn at_frequency<R: Recorder>(w: &mut R, split: CoreSplit, f_hz: f64) -> CoreLoss {
    let (a, b) = (split.hysteresis_per_hz, split.eddy_per_hz2);
    CoreLoss {
        hysteresis_w: w.step(&HYSTERESIS, &[("a", a), ("f", f_hz)], a * f_hz),
        eddy_w: w.step(&EDDY, &[("b", b), ("f", f_hz)], b * f_hz * f_hz),
    }
}

const FLUX: Formula = Formula {
    name: "flux density, new over old",
    symbol: "B_r",
    formula: "v_r/f_r",
    unit: "pu",
    source: "flux follows volts per hertz",
};
const HYSTERESIS_NEW: Formula = Formula {
    name: "hysteresis loss at the new voltage and frequency",
    symbol: "P_h2",
    formula: "P_h·f_r·B_r^n",
    unit: "W",
    source: "Steinmetz; Dorf handbook eq. 64.2; methods, section 2",
};
const EDDY_NEW: Formula = Formula {
    name: "eddy-current loss at the new flux density, frequency and sheet thickness",
    symbol: "P_e2",
    formula: "P_e·(f_r·B_r·t_r)²",
    unit: "W",
    source: "Dorf handbook eq. 64.1; methods, section 2",
};

/// Core loss at another voltage and frequency: `voltage_ratio` and `frequency_ratio` are new over old, `exponent`
/// that of flux density in hysteresis, 1.6 by Steinmetz (W).
///
/// # Errors
/// A ratio that is not above zero.
pub fn at_voltage_and_frequency<R: Recorder>(
    w: &mut R,
    loss: CoreLoss,
    voltage_ratio: f64,
    frequency_ratio: f64,
    exponent: f64,
) -> Result<CoreLoss, Refusal> {
    positive("voltage_v", voltage_ratio, "old and new voltage must be above zero")?;
    positive("frequency_hz", frequency_ratio, "old and new frequency must be above zero")?;
    let flux = voltage_ratio / frequency_ratio;
    w.step(&FLUX, &[("v_r", voltage_ratio), ("f_r", frequency_ratio)], flux);
    let hysteresis = loss.hysteresis_w * frequency_ratio * flux.powf(exponent);
    let inputs =
        [("P_h", loss.hysteresis_w), ("f_r", frequency_ratio), ("B_r", flux), ("n", exponent)];
    w.step(&HYSTERESIS_NEW, &inputs, hysteresis);
    let eddy = eddy_at(w, loss.eddy_w, frequency_ratio, flux, 1.0);
    Ok(CoreLoss { hysteresis_w: hysteresis, eddy_w: eddy })
}

/// Eddy-current loss for other frequency, flux density and sheet thickness, each new over old (W).
pub fn eddy_at<R: Recorder>(
    w: &mut R,
    eddy_w: f64,
    frequency_ratio: f64,
    flux_ratio: f64,
    thickness_ratio: f64,
) -> f64 {
    let factor = frequency_ratio * flux_ratio * thickness_ratio;
    let inputs =
        [("P_e", eddy_w), ("f_r", frequency_ratio), ("B_r", flux_ratio), ("t_r", thickness_ratio)];
    w.step(&EDDY_NEW, &inputs, eddy_w * factor * factor)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// Theraja Ex 32.29: 52 W at 40 Hz and 90 W at 60 Hz give 45 W and 25 W at 50 Hz.
    #[test]
    fn published_split() {
        let law = split(&mut Silent, &[(40.0, 52.0), (60.0, 90.0)]).expect("sound");
        let at = at_frequency(&mut Silent, law, 50.0);
        assert!((at.hysteresis_w - 45.0).abs() < 1e-9 && (at.eddy_w - 25.0).abs() < 1e-9);
        let more = split(&mut Silent, &[(40.0, 52.0), (50.0, 70.0), (60.0, 90.0)]).expect("sound");
        assert!(
            (more.eddy_per_hz2 - 0.01).abs() < 1e-12,
            "a third point on the line changes nothing"
        );
    }

    #[test]
    fn impossible_splits_are_refused() {
        assert!(split(&mut Silent, &[(50.0, 70.0)]).is_err());
        assert!(split(&mut Silent, &[(50.0, 70.0), (50.0, 71.0)]).is_err());
        assert!(split(&mut Silent, &[(40.0, 90.0), (60.0, 52.0)]).is_err());
    }
}
