//! Sums over years that units share: prices and load growth by discounted index, ageing by year made, capital
//! by candidate and delay. All run from the end of the horizon backwards: index t holds years t+1 … N.

use crate::engine::Refusal;
use crate::engine::columns::YEARS_MADE;
use crate::engine::decision::fit::Candidate;
use crate::engine::decision::keep_or_replace::age;
use crate::engine::economics::{Assumptions, capital, discounting, running_cost};
use crate::engine::loading::duty::growth;
use crate::engine::working::Silent;

/// Σ_{k>t} d_k·index_k by what is priced: energy, demand, carbon (with its price per kg).
#[derive(Clone, Debug)]
pub(super) struct PriceSums {
    energy: Vec<f64>,
    demand: Vec<f64>,
    carbon: Vec<f64>,
}

impl PriceSums {
    /// Tails of the yearly series, each year multiplied by what `of_year` says.
    fn new(years: &[[f64; 3]], of_year: impl Fn(usize) -> f64) -> Self {
        let n = years.len();
        let mut sums =
            Self { energy: vec![0.0; n + 1], demand: vec![0.0; n + 1], carbon: vec![0.0; n + 1] };
        for t in (0..n).rev() {
            let [energy, demand, carbon] = years[t];
            let factor = of_year(t + 1);
            sums.energy[t] = sums.energy[t + 1] + energy * factor;
            sums.demand[t] = sums.demand[t + 1] + demand * factor;
            sums.carbon[t] = sums.carbon[t + 1] + carbon * factor;
        }
        sums
    }

    /// energy·e + demand·d + carbon·c, for every t.
    pub(super) fn combine(&self, e: f64, d: f64, c: f64, out: &mut [f64]) {
        let series = self.energy.iter().zip(&self.demand).zip(&self.carbon);
        for (out, ((energy, demand), carbon)) in out.iter_mut().zip(series) {
            *out = energy * e + demand * d + carbon * c;
        }
    }
}

impl Horizon {
    /// Σ_{k>t} of (energy·e + carbon·c)·mean_k + demand·d·peak_k, for every t: what a watt of load loss costs where
    /// each year has squared currents of its own, the mean of the hours and that of the system peak.
    pub(super) fn combine_years(
        &self,
        (e, d, c): (f64, f64, f64),
        squares: impl Fn(usize) -> (f64, f64),
        out: &mut [f64],
    ) {
        let n = self.years.len();
        out[n] = 0.0;
        for t in (0..n).rev() {
            let [energy, demand, carbon] = self.years[t];
            let (mean, peak) = squares(t + 1);
            out[t] = out[t + 1] + (energy * e + carbon * c) * mean + demand * d * peak;
        }
    }
}

/// What the age of the old unit decides.
#[derive(Clone, Debug)]
pub(super) struct Ages {
    /// Whether failures are counted at all.
    pub(super) fails: bool,
    /// Failure probability in year k (index k, 0 unused).
    pub(super) fail: Vec<f64>,
    /// Σ_{k>t} d_k·upkeep of the old unit.
    pub(super) upkeep: Vec<f64>,
}

impl Ages {
    fn new(a: &Assumptions, year_made: Option<f64>) -> Self {
        let at = |k| age(year_made, a.first_year, k);
        let yearly = |f: &dyn Fn(usize) -> f64| {
            std::iter::once(0.0).chain((1..=a.years).map(f)).collect::<Vec<f64>>()
        };
        let weibull = a.failure.filter(|_| year_made.is_some());
        let mut upkeep = vec![0.0; a.years + 1];
        for k in (1..=a.years).rev() {
            let d = discounting::running(a.rate, k, a.cash_flow);
            upkeep[k - 1] = upkeep[k] + d * running_cost::upkeep(&mut Silent, a, at(k));
        }
        Self {
            fails: weibull.is_some(),
            fail: yearly(&|k| weibull.map_or(0.0, |m| m.fails_in_year(&mut Silent, at(k)))),
            upkeep,
        }
    }
}

/// Years of manufacture for which ages are kept ready: all that a book holds.
const MADE: std::ops::RangeInclusive<i64> = YEARS_MADE.0..=YEARS_MADE.1;

/// Everything that depends on the basis alone.
#[derive(Clone, Debug)]
pub(super) struct Horizon {
    /// d_k·index_k of energy, demand and carbon (with its price per kg), k = 1..N.
    years: Vec<[f64; 3]>,
    /// Price sums without growth.
    pub(super) plain: PriceSums,
    /// v^t, t = 0..N.
    pub(super) payment: Vec<f64>,
    /// Σ_{k>t} d_k·upkeep of a unit new at t.
    pub(super) upkeep_new: Vec<f64>,
    /// Σ_{k>t} v^k·h'_{k−t}: expected failures of a unit new at t, each worth 1.
    pub(super) failures_new: Vec<f64>,
    ages: Vec<Ages>,
    age_unknown: Ages,
}

impl Horizon {
    pub(super) fn new(a: &Assumptions) -> Self {
        let n = a.years;
        #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
        let age_new = |k: usize, t: usize| (k - t - 1) as f64;
        let from = |of: &dyn Fn(usize, usize) -> f64| {
            (0..=n).map(|t| (t + 1..=n).map(|k| of(k, t)).sum()).collect::<Vec<f64>>()
        };
        #[expect(clippy::cast_precision_loss, reason = "calendar years")]
        let ages = MADE.map(|made| Ages::new(a, Some(made as f64))).collect();
        let years: Vec<[f64; 3]> = (1..=n)
            .map(|k| {
                let d = discounting::running(a.rate, k, a.cash_flow);
                let carbon = a.carbon_price_per_t / 1000.0;
                [
                    d * Assumptions::index(a.energy_escalation, k),
                    d * Assumptions::index(a.demand_escalation, k),
                    d * Assumptions::index(a.carbon_escalation, k) * carbon,
                ]
            })
            .collect();
        Self {
            plain: PriceSums::new(&years, |_| 1.0),
            years,
            payment: (0..=n).map(|t| discounting::payment(a.rate, t)).collect(),
            upkeep_new: from(&|k, t| {
                discounting::running(a.rate, k, a.cash_flow)
                    * running_cost::upkeep(&mut Silent, a, age_new(k, t))
            }),
            failures_new: from(&|k, t| {
                discounting::payment(a.rate, k)
                    * a.failure.map_or(0.0, |m| m.fails_in_year(&mut Silent, age_new(k, t)))
            }),
            ages,
            age_unknown: Ages::new(a, None),
        }
    }

    /// Price sums with the squared growth of the load, for one growth rate.
    pub(super) fn grown(&self, a: &Assumptions, load_growth_pu: f64) -> PriceSums {
        PriceSums::new(&self.years, |k| growth(load_growth_pu, k, a.load_growth_years).powi(2))
    }

    /// The ages of a unit made in a year; the range of `year_made` is that of its column fact.
    pub(super) fn ages(&self, year_made: Option<f64>) -> &Ages {
        #[expect(clippy::cast_possible_truncation, reason = "a calendar year")]
        let made = year_made.map(|year| year as i64 - MADE.start());
        made.and_then(|at| self.ages.get(usize::try_from(at).ok()?)).unwrap_or(&self.age_unknown)
    }
}

/// Capital of every candidate at every time, valued at time 0; infinite where it may not be bought.
#[derive(Clone, Debug)]
pub(super) struct Caps {
    years: usize,
    /// Bought by choice: lead time and law hold.
    open: Vec<f64>,
    /// Bought after a failure, with the premium; the law holds.
    forced: Vec<f64>,
    /// The same where the law has to give way.
    forced_any: Vec<f64>,
}

/// Capital with and without the expected failures of what is bought.
#[derive(Clone, Debug)]
pub(super) struct CapsByFailure {
    with: Caps,
    without: Caps,
}

impl CapsByFailure {
    pub(super) fn new(
        a: &Assumptions,
        candidates: &[Candidate],
        horizon: &Horizon,
    ) -> Result<Self, Refusal> {
        Ok(Self {
            with: Caps::new(a, candidates, horizon, &horizon.failures_new)?,
            without: Caps::new(a, candidates, horizon, &vec![0.0; a.years + 1])?,
        })
    }

    pub(super) fn of(&self, fails: bool) -> &Caps {
        if fails { &self.with } else { &self.without }
    }
}

impl Caps {
    fn new(
        a: &Assumptions,
        candidates: &[Candidate],
        horizon: &Horizon,
        failures: &[f64],
    ) -> Result<Self, Refusal> {
        let size = candidates.len() * a.years;
        let mut caps = Self {
            years: a.years,
            open: Vec::with_capacity(size),
            forced: Vec::with_capacity(size),
            forced_any: Vec::with_capacity(size),
        };
        for c in candidates {
            let price = c.price_installed();
            for (t, expected) in failures.iter().enumerate().take(a.years) {
                let charged = |price| capital::charged(&mut Silent, price, c.life_years, t, a);
                let v = horizon.payment[t];
                let failing = expected * price;
                let open = charged(price)? * v + failing;
                let forced = charged(price * (1.0 + a.emergency_premium))? * v + failing;
                let only = |allowed: bool, value: f64| if allowed { value } else { f64::INFINITY };
                caps.open.push(only(c.delivered_by(t) && c.lawful_at(t), open));
                caps.forced.push(only(c.lawful_at(t), forced));
                caps.forced_any.push(forced);
            }
        }
        Ok(caps)
    }

    fn row<'a>(&self, of: &'a [f64], candidate: u32) -> &'a [f64] {
        let from = candidate as usize * self.years;
        &of[from..from + self.years]
    }
    pub(super) fn open(&self, candidate: u32) -> &[f64] {
        self.row(&self.open, candidate)
    }
    pub(super) fn forced(&self, candidate: u32) -> &[f64] {
        self.row(&self.forced, candidate)
    }
    pub(super) fn forced_any(&self, candidate: u32) -> &[f64] {
        self.row(&self.forced_any, candidate)
    }
}
