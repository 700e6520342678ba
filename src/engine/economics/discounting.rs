//! Discounting: annuities and the years of a horizon. i = 0 is an ordinary rate.

use super::Assumptions;
use crate::engine::columns::CashFlow;
use crate::engine::working::{Formula, Recorder};

const ANNUITY: Formula = Formula {
    name: "present value of 1 a year, at year ends",
    symbol: "a",
    formula: "(1 − (1+i)^−n)/i",
    unit: "years",
    source: "uniform-series present-worth factor; limit n at i = 0",
};
const GROWING: Formula = Formula {
    name: "present value of a yearly amount that grows, first paid at the end of year 1",
    symbol: "PV",
    formula: "first·(1 − ((1+g)/(1+i))^n)/(i − g)",
    unit: "money",
    source: "geometric-gradient present-worth factor; limit first·n/(1+i) at i = g",
};

/// Present value of 1 paid at the end of each of `n` years at the rate `i`; n may be broken.
pub fn annuity<R: Recorder>(w: &mut R, i: f64, n: f64) -> f64 {
    let value = if i == 0.0 { n } else { -(-n * i.ln_1p()).exp_m1() / i };
    w.step(&ANNUITY, &[("i", i), ("n", n)], value)
}

/// Present value of `first`, (1+g)·`first`, … paid at the ends of `n` years at the rate `i`.
pub fn growing_annuity<R: Recorder>(w: &mut R, first: f64, i: f64, g: f64, n: f64) -> f64 {
    // With 1+q = (1+g)/(1+i): PV = first/(1+i)·Σ(1+q)^j; the sum is n at q = 0.
    let q = (g - i) / (1.0 + i);
    let sum = if q == 0.0 { n } else { (n * q.ln_1p()).exp_m1() / q };
    let value = first / (1.0 + i) * sum;
    w.step(&GROWING, &[("first", first), ("g", g), ("i", i), ("n", n)], value)
}

/// What a running cost of year `k` is worth at time 0, d_k = (1+i)^−k or (1+i)^−(k−½).
pub fn running(i: f64, k: usize, cash_flow: CashFlow) -> f64 {
    #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
    let k = k as f64;
    match cash_flow {
        CashFlow::YearEnd => (1.0 + i).powf(-k),
        CashFlow::MidYear => (1.0 + i).powf(-(k - 0.5)),
    }
}

/// Sums over a horizon: Σ_k d_k·index_k, and the same with the squared growth of the load.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Sums {
    pub plain: f64,
    pub grown: f64,
}

/// Sums years 1 to `years` of running costs whose price escalates; `growth` is the load of year k over year 1.
pub(super) fn sums(
    i: f64,
    cash_flow: CashFlow,
    years: usize,
    escalation: f64,
    growth: impl Fn(usize) -> f64,
) -> Sums {
    let mut sums = Sums::default();
    for k in 1..=years {
        let term = running(i, k, cash_flow) * Assumptions::index(escalation, k);
        let grown = growth(k);
        sums.plain += term;
        sums.grown += term * grown * grown;
    }
    sums
}

/// What a payment at time `t` is worth at time 0, v^t.
pub fn payment(i: f64, t: usize) -> f64 {
    #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
    let t = t as f64;
    (1.0 + i).powf(-t)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// T6-annuity and T6-growing-annuity (numpy-financial).
    #[test]
    fn published_annuities() {
        let near = |got: f64, want: f64| assert!((got / want - 1.0).abs() < 1e-9, "{got} {want}");
        near(annuity(&mut Silent, 0.06, 30.0), 13.764_831_15);
        assert_eq!(annuity(&mut Silent, 0.0, 30.0), 30.0);
        near(annuity(&mut Silent, 1e-12, 30.0), 30.0);
        near(growing_annuity(&mut Silent, 100.0, 0.07, 0.03, 20.0), 1_333.166_339);
        near(growing_annuity(&mut Silent, 100.0, 0.05, 0.05, 20.0), 1_904.761_905);
        near(growing_annuity(&mut Silent, 100.0, 0.0, 0.0, 20.0), 2000.0);
    }
}
