//! The levelised (equivalent) peak load of a growing load: the constant peak that makes the same copper loss in
//! present value; and the growth rate of a load that doubles in some years.

use super::discounting::{Sums, sums};
use super::interest::check_rate;
use crate::engine::Refusal;
use crate::engine::columns::{CashFlow, choice};
use crate::engine::loading::duty;
use crate::engine::working::{Formula, Recorder};

choice! {
    /// How a load grows.
    Growth {
        /// By the same percentage of the year before.
        Compound = "compound",
        /// By the same percentage of the first year.
        Linear = "linear",
    }
}

const COMPOUND: Formula = Formula {
    name: "levelised peak load, compound growth",
    symbol: "P_eq",
    formula: "P_1·√(Σ_k (1+g)^(2·(k−1))·d_k/Σ_k d_k)",
    unit: "pu",
    source: "RUS 1724E-301 appendix A, IEEE C57.120 (memory); methods, section 5",
};
const LINEAR: Formula = Formula {
    name: "levelised peak load, linear growth",
    symbol: "P_eq",
    formula: "P_1·√(Σ_k (1+g·(k−1))²·d_k/Σ_k d_k)",
    unit: "pu",
    source: "RUS 1724E-301 appendix A, IEEE C57.120 (memory); methods, section 5",
};

/// The levelised peak of `years` of growth at `g` from `first_peak` (same unit), discounted at `rate`.
/// The square is levelised, because copper loss follows it.
///
/// # Errors
/// No year, a rate or growth at or below −100 %.
pub fn equivalent_peak<R: Recorder>(
    w: &mut R,
    first_peak: f64,
    g: f64,
    growth: Growth,
    years: usize,
    rate: f64,
    cash_flow: CashFlow,
) -> Result<f64, Refusal> {
    check_rate("discount_rate_pct", rate)?;
    check_rate("load_growth_pct", g)?;
    if years == 0 || years > 200 {
        return Err(Refusal::new("years", years, "lie between 1 and 200"));
    }
    #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
    let grown = |k: usize| match growth {
        Growth::Compound => duty::growth(g, k, years),
        Growth::Linear => 1.0 + g * (k - 1) as f64,
    };
    let Sums { plain, grown: square } = sums(rate, cash_flow, years, 0.0, grown);
    let formula = if growth == Growth::Compound { &COMPOUND } else { &LINEAR };
    let value = first_peak * (square / plain).sqrt();
    Ok(w.step(formula, &[("P_1", first_peak), ("g", g)], value))
}

const DOUBLING: Formula = Formula {
    name: "growth rate of a load that doubles in n years",
    symbol: "g",
    formula: "2^(1/n) − 1",
    unit: "1/year",
    source: "definition (Gonen Ex 2.10)",
};

/// Yearly growth (fraction) of what doubles in `years`.
///
/// # Errors
/// Years that are not above zero.
pub fn growth_of_doubling<R: Recorder>(w: &mut R, years: f64) -> Result<f64, Refusal> {
    if years.is_nan() || years <= 0.0 {
        return Err(Refusal::new("doubling_years", years, "must be above zero"));
    }
    Ok(w.step(&DOUBLING, &[("n", years)], (std::f64::consts::LN_2 / years).exp_m1()))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    #[test]
    fn a_load_that_does_not_grow_is_its_own_equivalent() {
        for growth in [Growth::Compound, Growth::Linear] {
            let p = equivalent_peak(&mut Silent, 0.6, 0.0, growth, 30, 0.0, CashFlow::MidYear);
            assert!((p.expect("sound") - 0.6).abs() < 1e-15);
        }
        let two = |growth| {
            equivalent_peak(&mut Silent, 1.0, 0.1, growth, 2, 0.07, CashFlow::YearEnd)
                .expect("sound")
        };
        assert!((two(Growth::Compound) - two(Growth::Linear)).abs() < 1e-15, "same in two years");
        assert!(growth_of_doubling(&mut Silent, 0.0).is_err());
        assert_eq!(growth_of_doubling(&mut Silent, 1.0), Ok(1.0));
    }
}
