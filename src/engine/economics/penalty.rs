//! Penalty for losses above the guarantee: each excess at its factor, no credit for what is below.

use super::loss_factors::LossFactors;
use crate::engine::working::{Formula, Recorder};

/// Measured less guaranteed losses (W); negative where a loss is below its guarantee.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Excess {
    /// No-load loss.
    pub no_load_w: f64,
    /// Load loss at rated load and reference temperature.
    pub load_w: f64,
    /// Auxiliary loss.
    pub auxiliary_w: f64,
}

const PENALTY: Formula = Formula {
    name: "penalty for excess losses",
    symbol: "penalty",
    formula: "(A·max(0,ΔP0) + B·max(0,ΔPk) + A_aux·max(0,ΔP_aux))/1000",
    unit: "money",
    source: "City of Colton specification 1988; methods, section 8",
};

/// The penalty of one unit (or of the mean of a lot); each term is clamped on its own.
pub fn penalty<R: Recorder>(w: &mut R, factors: &LossFactors, excess: &Excess) -> f64 {
    let (a, b, x) = (factors.factor_a_per_kw, factors.factor_b_per_kw, factors.factor_aux_per_kw);
    let value = (a * excess.no_load_w.max(0.0)
        + b * excess.load_w.max(0.0)
        + x * excess.auxiliary_w.max(0.0))
        / 1000.0;
    let inputs = [
        ("A", a),
        ("ΔP0", excess.no_load_w),
        ("B", b),
        ("ΔPk", excess.load_w),
        ("A_aux", x),
        ("ΔP_aux", excess.auxiliary_w),
    ];
    w.step(&PENALTY, &inputs, value)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn a_low_loss_earns_no_credit() {
        let factors = LossFactors {
            factor_a_per_kw: 2400.0,
            factor_b_per_kw: 1210.0,
            factor_aux_per_kw: 100.0,
        };
        let excess = Excess { no_load_w: -500.0, load_w: 10.0, auxiliary_w: -5.0 };
        assert!((penalty(&mut Silent, &factors, &excess) - 12.1).abs() < 1e-12);
    }
}
