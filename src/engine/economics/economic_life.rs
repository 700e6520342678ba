//! Economic life: the equivalent uniform annual cost (EUAC) of keeping a thing n years, the marginal cost of each
//! further year, and how long a defender is kept against a challenger.

use super::interest::{capital_recovery, check_rate, single_payment};
use crate::engine::Refusal;
use crate::engine::working::{Formula, Recorder};

/// Costs of keeping a thing to the end of year n.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct KeptYears {
    /// Equivalent uniform annual cost of years 1 to n.
    pub euac: f64,
    /// Marginal cost of year n: loss of market value with interest, and its running cost.
    pub marginal_cost: f64,
}

const EUAC: Formula = Formula {
    name: "equivalent uniform annual cost of n years",
    symbol: "EUAC_n",
    formula: "(P − M_n·v + Σ_k C_k·(1+i)^−k)·CRF",
    unit: "money",
    source: "Newnan ch. 13; methods, section 7",
};
const MARGINAL: Formula = Formula {
    name: "marginal cost of year n",
    symbol: "MC_n",
    formula: "M_before·(1+i) − M_n + C_n",
    unit: "money",
    source: "Newnan Ex 13-2",
};

/// EUAC and marginal cost for every length of service: `first_cost` now (price, or market value of what is owned:
/// what was once paid does not count), `market_value` and `running_cost` at the ends of the years, at the rate `i`.
/// Years beyond the given market values have none.
///
/// # Errors
/// No year, more market values than years, a rate at or below −100 %.
pub fn lengths_of_service<R: Recorder>(
    w: &mut R,
    first_cost: f64,
    market_value: &[f64],
    running_cost: &[f64],
    i: f64,
) -> Result<Vec<KeptYears>, Refusal> {
    check_rate("discount_rate_pct", i)?;
    if running_cost.is_empty() || market_value.len() > running_cost.len() {
        let why = format!(
            "stand beside {} market values; give one running cost for each year, and at most as many market values",
            market_value.len()
        );
        return Err(Refusal::new("running_cost", running_cost.len(), why));
    }
    let (mut running, mut before) = (0.0, first_cost);
    let mut years = Vec::with_capacity(running_cost.len());
    let mut n = 0.0;
    for (index, cost) in running_cost.iter().enumerate() {
        n += 1.0;
        let market = market_value.get(index).copied().unwrap_or(0.0);
        let about = || format!("year {}", index + 1);
        w.open();
        let v = single_payment(w, i, n);
        running += cost * v;
        let crf = capital_recovery(w, i, n);
        let euac = (first_cost - market * v + running) * crf;
        let inputs = [("P", first_cost), ("M_n", market), ("v", v), ("i", i), ("CRF", crf)];
        w.close(&EUAC, &inputs, euac);
        w.about(&about);
        let marginal = before * (1.0 + i) - market + cost;
        let inputs = [("M_before", before), ("i", i), ("M_n", market), ("C_n", *cost)];
        w.step(&MARGINAL, &inputs, marginal);
        w.about(&about);
        before = market;
        years.push(KeptYears { euac, marginal_cost: marginal });
    }
    Ok(years)
}

/// The length of service of least EUAC in years, from 1; the first of equals (1e-12).
pub fn economic_life(years: &[KeptYears]) -> usize {
    let mut best = 0;
    for (n, year) in years.iter().enumerate() {
        if year.euac < years[best].euac - 1e-12 * years[best].euac.abs() {
            best = n;
        }
    }
    best + 1
}

const KEEP: Formula = Formula {
    name: "present cost of keeping the defender n years, over that of replacing it now",
    symbol: "Δ_n",
    formula: "Σ_{k≤n} (MC_k − EUAC)·(1+i)^−k",
    unit: "money",
    source: "challenger repeatable at its least EUAC; every n is looked at, methods, section 7",
};

/// Years to keep a defender of `marginal_cost` by year against a challenger that can be had at any time at `euac`
/// a year: the n of least present cost, 0 = replace now. All years are looked at, so costs need not rise.
///
/// # Errors
/// A rate at or below −100 %.
pub fn years_to_keep<R: Recorder>(
    w: &mut R,
    marginal_cost: &[f64],
    euac: f64,
    i: f64,
) -> Result<usize, Refusal> {
    check_rate("discount_rate_pct", i)?;
    let (mut sum, mut least, mut best) = (0.0, 0.0, 0);
    let mut factor = 1.0;
    for (index, cost) in marginal_cost.iter().enumerate() {
        factor /= 1.0 + i;
        sum += (cost - euac) * factor;
        w.step(&KEEP, &[("EUAC", euac), ("i", i)], sum);
        w.about(&|| format!("n = {}", index + 1));
        if sum < least {
            (least, best) = (sum, index + 1);
        }
    }
    Ok(best)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::Silent;

    /// The EUAC of n years is the annuity of the marginal costs of these years.
    #[test]
    fn euac_levels_the_marginal_costs() {
        let market = [18_000.0, 13_000.0, 9_000.0];
        let years = lengths_of_service(&mut Silent, 25_000.0, &market, &[7e3, 7.5e3, 8e3], 0.15)
            .expect("sound");
        let mut worth = 0.0;
        for (n, year) in years.iter().enumerate() {
            let n = f64::from(u32::try_from(n + 1).expect("small"));
            worth += year.marginal_cost * single_payment(&mut Silent, 0.15, n);
            let level = worth * capital_recovery(&mut Silent, 0.15, n);
            assert!((level / year.euac - 1.0).abs() < 1e-12);
        }
    }

    /// Where marginal cost falls again after a hump, the first crossing is not the answer.
    #[test]
    fn a_hump_does_not_mislead() {
        let keep = |mc: &[f64]| years_to_keep(&mut Silent, mc, 100.0, 0.05).expect("sound");
        assert_eq!(keep(&[110.0, 60.0, 60.0]), 3);
        assert_eq!(keep(&[110.0, 120.0]), 0);
        assert_eq!(keep(&[90.0, 99.0, 101.0]), 2);
    }

    #[test]
    fn a_market_value_without_a_year_is_refused() {
        assert!(lengths_of_service(&mut Silent, 1.0, &[1.0, 1.0], &[1.0], 0.1).is_err());
        assert!(lengths_of_service(&mut Silent, 1.0, &[], &[], 0.1).is_err());
    }
}
