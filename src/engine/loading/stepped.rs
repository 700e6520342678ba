//! Load and loss factor of a load given in steps or by its energy, and how peaks of several loads add up.

use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

/// What is left of a load when its scale is taken away.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ratios {
    /// Greatest load, in the unit of the steps.
    pub peak: f64,
    /// Mean over peak, LF.
    pub load_factor_pu: f64,
    /// Mean square over peak square, LsF.
    pub loss_factor_pu: f64,
}

const LF: Formula = Formula {
    name: "load factor, exact",
    symbol: "LF",
    formula: "Σ (|S|/S_peak)·Δt/T",
    unit: "pu",
    source: "mean over peak; methods, section 3",
};
const LSF: Formula = Formula {
    name: "loss factor, exact",
    symbol: "LsF",
    formula: "Σ (S/S_peak)²·Δt/T",
    unit: "pu",
    source: "mean square over peak square; methods, section 3",
};

/// Exact load and loss factor of a load in steps of (load, duration), at any scale of both. The magnitude of the
/// load counts: reverse flow loads the windings too. `of` says in the working whose load it is.
///
/// # Errors
/// A duration below zero or none at all, no load above zero.
pub fn ratios<R: Recorder>(
    w: &mut R,
    of: &str,
    steps: impl Iterator<Item = (f64, f64)> + Clone,
) -> Result<Ratios, Refusal> {
    let peak = steps.clone().fold(0.0, |peak: f64, (load, _)| peak.max(load.abs()));
    let (mut sum, mut square, mut duration) = (0.0, 0.0, 0.0);
    for (load, step) in steps {
        if step < 0.0 || step.is_nan() {
            return Err(Refusal::new("hours", step, "cannot be negative"));
        }
        let s = load.abs() / peak;
        sum += s * step;
        square += s * s * step;
        duration += step;
    }
    if duration <= 0.0 || peak <= 0.0 || !peak.is_finite() {
        let why = "needs at least one load above zero that stands for some hours";
        return Err(Refusal::new("load", peak, why));
    }
    let mut mean = |formula, sum: f64| {
        let value = w.step(formula, &[("S_peak", peak), ("T", duration)], sum / duration);
        w.about(&|| of.to_owned());
        value
    };
    Ok(Ratios { peak, load_factor_pu: mean(&LF, sum), loss_factor_pu: mean(&LSF, square) })
}

const WEIGHT: Formula = Formula {
    name: "weight w that would give this loss factor",
    symbol: "w",
    formula: "(LsF − LF²)/(LF − LF²)",
    unit: "pu",
    source: "LsF = w·LF + (1−w)·LF² solved for w; methods, section 3",
};

/// The weight w with which w·LF + (1−w)·LF² gives the loss factor; none for a load factor of 0 or 1.
pub fn implied_weight<R: Recorder>(
    w: &mut R,
    load_factor_pu: f64,
    loss_factor_pu: f64,
) -> Option<f64> {
    let square = load_factor_pu * load_factor_pu;
    let span = load_factor_pu - square;
    if span <= 0.0 {
        return None;
    }
    let inputs = [("LsF", loss_factor_pu), ("LF", load_factor_pu)];
    Some(w.step(&WEIGHT, &inputs, (loss_factor_pu - square) / span))
}

const LOSS_ENERGY: Formula = Formula {
    name: "energy of a loss that follows the square of the load",
    symbol: "E",
    formula: "P_peak·LsF·h",
    unit: "kWh",
    source: "definition of the loss factor",
};

/// Energy (kWh) of a loss of `peak_kw` at the peak, that follows the square of the load, in `hours`.
pub fn loss_energy<R: Recorder>(w: &mut R, peak_kw: f64, loss_factor_pu: f64, hours: f64) -> f64 {
    let inputs = [("P_peak", peak_kw), ("LsF", loss_factor_pu), ("h", hours)];
    w.step(&LOSS_ENERGY, &inputs, peak_kw * loss_factor_pu * hours)
}

const MEAN: Formula = Formula {
    name: "mean load of the hours",
    symbol: "P_mean",
    formula: "E/h",
    unit: "kW",
    source: "definition",
};
const LF_OF_ENERGY: Formula = Formula {
    name: "load factor from energy and peak",
    symbol: "LF",
    formula: "P_mean/P_peak",
    unit: "pu",
    source: "definition; methods, section 3",
};

/// Mean load (kW) and load factor of an energy (kWh) taken in `hours` with a peak (kW).
///
/// # Errors
/// A peak or hours not above zero, a mean above the peak.
pub fn load_factor_of_energy<R: Recorder>(
    w: &mut R,
    energy_kwh: f64,
    peak_kw: f64,
    hours: f64,
) -> Result<(f64, f64), Refusal> {
    if hours.is_nan() || hours <= 0.0 {
        return Err(Refusal::new("hours", hours, "must be above zero"));
    }
    let mean = w.step(&MEAN, &[("E", energy_kwh), ("h", hours)], energy_kwh / hours);
    if peak_kw.is_nan() || peak_kw <= 0.0 || mean > peak_kw * (1.0 + 1e-12) || mean < 0.0 {
        let why = format!(
            "does not go with a mean load of {mean:.4} kW: the peak is above zero and not below the mean; check energy, peak and hours"
        );
        return Err(Refusal::new("peak_kw", peak_kw, why));
    }
    let value = mean / peak_kw;
    Ok((mean, w.step(&LF_OF_ENERGY, &[("P_mean", mean), ("P_peak", peak_kw)], value)))
}

const ADDED_COST: Formula = Formula {
    name: "yearly cost of a constant load that is added",
    symbol: "C",
    formula: "P·(12·c_month + h·c)",
    unit: "money",
    source: "Gonen Ex 2.8",
};

/// Yearly cost of a constant load of `kw`: capacity per kW and month, energy per kWh in `hours`.
pub fn added_cost<R: Recorder>(
    w: &mut R,
    kw: f64,
    capacity_per_kw_month: f64,
    price_per_kwh: f64,
    hours: f64,
) -> f64 {
    let value = kw * (12.0 * capacity_per_kw_month + hours * price_per_kwh);
    let inputs =
        [("P", kw), ("c_month", capacity_per_kw_month), ("h", hours), ("c", price_per_kwh)];
    w.step(&ADDED_COST, &inputs, value)
}

const DIVERSITY: Formula = Formula {
    name: "diversity factor",
    symbol: "F_D",
    formula: "Σ S_peak/S_system",
    unit: "",
    source: "definition (Gonen Ex 2.5)",
};
const COINCIDENCE: Formula = Formula {
    name: "coincidence factor",
    symbol: "F_C",
    formula: "1/F_D",
    unit: "",
    source: "definition (Gonen Ex 2.5)",
};

/// Diversity factor of loads with their own `peaks` and a common peak of `system_peak`; its inverse is the
/// coincidence factor, second.
///
/// # Errors
/// A system peak that is not above zero, or above the sum of the peaks.
pub fn diversity<R: Recorder>(
    w: &mut R,
    peaks: &[f64],
    system_peak: f64,
) -> Result<(f64, f64), Refusal> {
    let sum = peaks.iter().sum::<f64>();
    if system_peak.is_nan() || system_peak <= 0.0 || system_peak > sum * (1.0 + 1e-12) {
        let why = format!(
            "lies above zero and at most at {sum}, the sum of the single peaks: together the loads cannot take more"
        );
        return Err(Refusal::new("system_peak_kw", system_peak, why));
    }
    let value = sum / system_peak;
    let d = w.step(&DIVERSITY, &[("S_system", system_peak)], value);
    Ok((d, w.step(&COINCIDENCE, &[("F_D", d)], 1.0 / d)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::loading::factors;
    use crate::engine::working::Silent;

    fn of(steps: &[(f64, f64)]) -> Result<Ratios, Refusal> {
        ratios(&mut Silent, "", steps.iter().copied())
    }

    /// T2-exact-two-level; the implied weight gives the loss factor back.
    #[test]
    fn two_level_load() {
        let r = of(&[(1.0, 6.0), (-0.25, 18.0)]).expect("loaded");
        assert_eq!((r.load_factor_pu, r.loss_factor_pu), (0.4375, 0.296_875));
        let w = implied_weight(&mut Silent, r.load_factor_pu, r.loss_factor_pu).expect("inside");
        let back = factors::loss_factor(&mut Silent, r.load_factor_pu, w);
        assert!((back - 0.296_875).abs() < 1e-15);
        assert_eq!(implied_weight(&mut Silent, 1.0, 1.0), None);
    }

    #[test]
    fn impossible_loads_are_refused() {
        assert!(of(&[(0.0, 24.0)]).is_err());
        assert!(of(&[]).is_err());
        assert!(of(&[(1.0, -1.0)]).is_err());
        assert!(load_factor_of_energy(&mut Silent, 8760.0, 0.5, 8760.0).is_err());
        assert!(diversity(&mut Silent, &[1.0, 2.0], 3.5).is_err());
        assert_eq!(diversity(&mut Silent, &[1.0, 2.0], 3.0).expect("together"), (1.0, 1.0));
    }
}
