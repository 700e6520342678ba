//! Penalty for losses above the guarantee: each excess at its factor, no credit for what is below.

use super::loss_factors::LossFactors;
use crate::engine::working::{Formula, Recorder};

/// Losses above the guarantee (W), measured less guaranteed; below it they are negative.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Excess {
    /// Of the no-load loss.
    pub no_load_w: f64,
    /// Of the load loss at rated load and reference temperature.
    pub load_w: f64,
    /// Of the auxiliary loss; none where it was not measured, which is no excess.
    pub auxiliary_w: Option<f64>,
}

const PENALTY: Formula = Formula {
    name: "penalty for losses above the guarantee, each loss on its own, no credit",
    symbol: "penalty",
    formula: "(A·max(0, ΔP0) + B·max(0, ΔPk) + A_aux·max(0, ΔPa))/1000",
    unit: "money",
    source: "rule of City of Colton purchase specification, June 1988; methods, section 8",
};

/// The penalty of one unit (or of the mean unit of a lot). `factors` hold B for the rating of the bid.
pub fn penalty<R: Recorder>(w: &mut R, factors: &LossFactors, excess: &Excess) -> f64 {
    let (a, b, x) = (factors.factor_a_per_kw, factors.factor_b_per_kw, factors.factor_aux_per_kw);
    let auxiliary = excess.auxiliary_w.unwrap_or(0.0);
    let value =
        (a * excess.no_load_w.max(0.0) + b * excess.load_w.max(0.0) + x * auxiliary.max(0.0))
            / 1000.0;
    let inputs = [
        ("A", a),
        ("ΔP0", excess.no_load_w),
        ("B", b),
        ("ΔPk", excess.load_w),
        ("A_aux", x),
        ("ΔPa", auxiliary),
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
        let excess = Excess { no_load_w: -500.0, load_w: 10.0, auxiliary_w: Some(-5.0) };
        assert!((penalty(&mut Silent, &factors, &excess) - 12.1).abs() < 1e-12);
    }
}
