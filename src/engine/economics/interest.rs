//! Interest: capital recovery, sinking fund, single payment, what a purchase with a yearly cost is worth, real
//! against nominal rates.

use super::discounting::annuity;
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

/// Holds a rate above −100 % (as a fraction).
///
/// # Errors
/// A rate at or below −100 %.
pub fn check_rate(quantity: &'static str, rate: f64) -> Result<(), Refusal> {
    if rate > -1.0 && rate.is_finite() {
        return Ok(());
    }
    let why = "a rate must be above −100 %; write 6 for six percent a year";
    Err(Refusal::new(quantity, 100.0 * rate, why))
}

const CRF: Formula = Formula {
    name: "capital recovery factor",
    symbol: "CRF",
    formula: "1/a",
    unit: "1/year",
    source: "inverse of the uniform-series present-worth factor",
};

/// What a payment of 1 now is worth per year over `n` years at the rate `i`.
pub fn capital_recovery<R: Recorder>(w: &mut R, i: f64, n: f64) -> f64 {
    w.open();
    let a = annuity(w, i, n);
    w.close(&CRF, &[("a", a)], 1.0 / a)
}

const SINGLE: Formula = Formula {
    name: "value now of 1 paid at the end",
    symbol: "v",
    formula: "(1+i)^−n",
    unit: "",
    source: "single-payment present-worth factor",
};

/// Value now of 1 paid in `n` years at the rate `i`.
pub fn single_payment<R: Recorder>(w: &mut R, i: f64, n: f64) -> f64 {
    w.step(&SINGLE, &[("i", i), ("n", n)], (1.0 + i).powf(-n))
}

const SINKING: Formula = Formula {
    name: "sinking fund factor",
    symbol: "SF",
    formula: "CRF − i",
    unit: "1/year",
    source: "yearly payment that grows to 1 at the end",
};

/// Yearly payment that grows to 1 in `n` years at the rate `i`.
pub fn sinking_fund<R: Recorder>(w: &mut R, i: f64, n: f64) -> f64 {
    w.open();
    let crf = capital_recovery(w, i, n);
    w.close(&SINKING, &[("CRF", crf), ("i", i)], crf - i)
}

const WORTH: Formula = Formula {
    name: "present value of a payment now and a yearly amount",
    symbol: "PV",
    formula: "P + C·a",
    unit: "money",
    source: "uniform series with a first payment",
};

/// Present value of `now` paid at once and `yearly` at the ends of `n` years at the rate `i`.
pub fn present_value<R: Recorder>(w: &mut R, now: f64, yearly: f64, i: f64, n: f64) -> f64 {
    w.open();
    let a = annuity(w, i, n);
    w.close(&WORTH, &[("P", now), ("C", yearly), ("a", a)], now + yearly * a)
}

const REAL: Formula = Formula {
    name: "real rate",
    symbol: "i_r",
    formula: "(1+i_n)/(1+f) − 1",
    unit: "1/year",
    source: "Fisher: (1+i_n) = (1+i_r)·(1+f)",
};

/// The real rate of a nominal rate at a yearly inflation; all as fractions.
///
/// # Errors
/// A rate at or below −100 %.
pub fn real_rate<R: Recorder>(w: &mut R, nominal: f64, inflation: f64) -> Result<f64, Refusal> {
    check_rate("nominal_rate_pct", nominal)?;
    check_rate("inflation_pct", inflation)?;
    let value = (nominal - inflation) / (1.0 + inflation);
    Ok(w.step(&REAL, &[("i_n", nominal), ("f", inflation)], value))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// T6-annuity: numpy-financial at 6 %, 30 years. A zero rate is ordinary.
    #[test]
    fn published_factors() {
        let near = |got: f64, want: f64| assert!((got / want - 1.0).abs() < 1e-9, "{got} {want}");
        near(capital_recovery(&mut Silent, 0.06, 30.0), 0.072_648_911_49);
        near(sinking_fund(&mut Silent, 0.06, 30.0), 0.012_648_911_49);
        near(single_payment(&mut Silent, 0.06, 30.0), 0.174_110_130_9);
        assert_eq!(sinking_fund(&mut Silent, 0.0, 25.0), 0.04);
        assert!(real_rate(&mut Silent, 0.05, -1.0).is_err());
    }
}
