//! What a choice costs over the horizon by what causes it: capital, iron, copper, fans, upkeep, failures.
//!
//! The sums of methods section 7 taken apart: J(t, c) and R(0) are sums over years of running costs, each of
//! which has its parts; what a failure brings (its cost, the forced purchase and all that follows from it) is
//! the rest.

use super::fit::Candidate;
use super::keep_or_replace::age;
use super::place::Place;
use crate::engine::Refusal;
use crate::engine::economics::{Assumptions, capital, discounting, running_cost};
use crate::engine::working::Silent;

/// A present value by what causes it; the parts sum to it.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct PolicyCost {
    /// Purchase as charged inside the horizon, removal less scrap.
    pub capital: f64,
    /// No-load loss.
    pub no_load: f64,
    /// Load loss.
    pub load: f64,
    /// Fans and pumps.
    pub auxiliary: f64,
    /// Upkeep.
    pub upkeep: f64,
    /// Failures, with the forced purchases that they bring and what these cost to run.
    pub failures: f64,
}

impl PolicyCost {
    /// The whole.
    pub fn total(&self) -> f64 {
        self.capital + self.no_load + self.load + self.auxiliary + self.upkeep + self.failures
    }
}

/// Takes the present value `pv` of a choice apart: a candidate bought after `t` years, or none for never.
///
/// # Errors
/// The annuity rule without a life.
pub fn of_choice(
    place: &Place,
    choice: Option<(&Candidate, usize)>,
    pv: f64,
    a: &Assumptions,
) -> Result<PolicyCost, Refusal> {
    let n = a.years;
    let until = choice.map_or(n, |(_, t)| t);
    let mut cost = PolicyCost::default();
    let mut add = |weight: f64, year: &running_cost::YearCost| {
        cost.no_load += weight * year.no_load;
        cost.load += weight * year.load;
        cost.auxiliary += weight * year.auxiliary;
        cost.upkeep += weight * year.upkeep;
    };
    let weibull = a.failure.filter(|_| place.year_made.is_some());
    let mut survival = 1.0;
    for k in 1..=until {
        let age = age(place.year_made, a.first_year, k);
        let year = running_cost::of_year(&mut Silent, &place.losses, &place.duty, a, k, age);
        add(survival * discounting::running(a.rate, k, a.cash_flow), &year);
        survival *= 1.0 - weibull.map_or(0.0, |w| w.fails_in_year(&mut Silent, age));
    }
    let mut paid = place.removal_less_scrap;
    if let Some((candidate, t)) = choice {
        for k in t + 1..=n {
            #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
            let age = (k - t - 1) as f64;
            let year =
                running_cost::of_year(&mut Silent, &candidate.losses, &place.duty, a, k, age);
            add(survival * discounting::running(a.rate, k, a.cash_flow), &year);
        }
        let price = candidate.price_installed();
        paid += capital::charged(&mut Silent, price, candidate.life_years, t, a)?;
    }
    cost.capital = survival * paid * discounting::payment(a.rate, until);
    cost.failures = 0.0;
    cost.failures = pv - cost.total();
    Ok(cost)
}
