//! Keep or replace, one unit: every (delay, offer) and never, valued year by year as methods section 7 defines.
//!
//! This is the scalar form: plain sums over years ([`Valuation`]), easy to read and slow. [`super::fleet`] gives
//! the same figures from cumulative sums; tests hold the two equal.

mod first_year;
mod formulas;
mod indicators;
mod valuation;

pub use first_year::Replacement;
pub use indicators::equal_yearly_cost;
pub use valuation::Valuation;

use super::equal_pv;
use super::fit::Candidate;
use super::place::Place;
use crate::engine::Refusal;
use crate::engine::economics::Assumptions;
use crate::engine::flags::Flags;
use crate::engine::working::{Formula, Recorder, Silent};

/// The best offer at one delay.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct YearChoice {
    /// Years of delay, t.
    pub offset: usize,
    /// Index of the candidate.
    pub offer: usize,
    /// Present value J(t, c).
    pub pv: f64,
}

/// What is best for one unit, and what everything else would cost.
#[derive(Clone, Debug, PartialEq)]
pub struct Decision {
    /// Present value of never replacing before a failure, R(0).
    pub keep_pv: f64,
    /// Least present value, V(0).
    pub best_pv: f64,
    /// When and with what; none = never.
    pub best: Option<YearChoice>,
    /// The best offer bought now; none where no offer is open now.
    pub now: Option<YearChoice>,
    /// The best choice after now; none where it is never.
    pub later: Option<YearChoice>,
    /// The best offer at each delay at which one is open.
    pub years: Vec<YearChoice>,
    /// V(0) by the backward recursion; equal to `best_pv`, kept to show it.
    pub recursion_pv: f64,
    /// What came up while deciding.
    pub flags: Flags,
}

impl Decision {
    /// keep_pv − best_pv, never below 0.
    pub fn saving_pv<R: Recorder>(&self, w: &mut R) -> f64 {
        let inputs = [("keep", self.keep_pv), ("best", self.best_pv)];
        w.step(&SAVING, &inputs, (self.keep_pv - self.best_pv).max(0.0))
    }

    /// What a year's delay costs at least: the least of all later choices and never, less now; 0 where now is not
    /// best.
    pub fn waiting_pv<R: Recorder>(&self, w: &mut R) -> f64 {
        if self.best.is_none_or(|best| best.offset > 0) {
            return w.step(&NO_WAITING, &[], 0.0);
        }
        let later = self.later.map_or(self.keep_pv, |choice| choice.pv);
        let inputs = [("later", later), ("now", self.best_pv)];
        w.step(&WAITING, &inputs, (later - self.best_pv).max(0.0))
    }

    /// Years of delay of the best choice; none where it is never.
    pub fn best_delay<R: Recorder>(&self, w: &mut R) -> Option<f64> {
        #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
        let t = self.best?.offset as f64;
        Some(w.step(&BEST_DELAY, &[], t))
    }

    /// Calendar year of the best choice; none where it is never.
    pub fn best_year<R: Recorder>(&self, w: &mut R, first_year: i64) -> Option<f64> {
        let t = self.best_delay(w)?;
        #[expect(clippy::cast_precision_loss, reason = "a calendar year")]
        let first_year = first_year as f64;
        Some(w.step(&BEST_YEAR, &[("first_year", first_year), ("t", t)], first_year + t))
    }
}

/// Age at the start of year `k` of a unit made in `year_made`; the years in service where unknown.
#[expect(clippy::cast_precision_loss, reason = "calendar years")]
pub fn age(year_made: Option<f64>, first_year: i64, k: usize) -> f64 {
    match year_made {
        Some(made) => (first_year as f64 + k as f64 - 1.0 - made).max(0.0),
        None => k as f64 - 1.0,
    }
}

/// Decides for one place among the candidates that fit it (`fitting`, in catalogue order).
///
/// None where no candidate is open at any delay.
///
/// # Errors
/// The annuity rule without a life.
pub fn decide(
    place: &Place,
    candidates: &[Candidate],
    fitting: &[usize],
    a: &Assumptions,
) -> Result<Option<Decision>, Refusal> {
    Valuation::new(place, candidates, fitting, a)?.decide()
}

impl Valuation<'_> {
    /// Finds the best choice; none where no candidate is open at any delay.
    ///
    /// # Errors
    /// The annuity rule without a life.
    pub fn decide(&self) -> Result<Option<Decision>, Refusal> {
        let a = self.a;
        let mut all: Vec<YearChoice> = Vec::new();
        for offset in 0..=a.latest {
            for (c, &offer) in self.fitting.iter().enumerate() {
                if self.open(c, offset) {
                    let pv = self.choice_pv(&mut Silent, c, offset)?;
                    all.push(YearChoice { offset, offer, pv });
                }
            }
        }
        if all.is_empty() || self.forced.iter().any(|pv| pv.is_infinite()) {
            return Ok(None);
        }
        let keep_pv = self.keep_pv(&mut Silent)?;
        let least = |choices: &[YearChoice]| {
            let least = choices.iter().fold(f64::INFINITY, |least, c| least.min(c.pv));
            choices.iter().find(|c| equal_pv(c.pv, least)).copied()
        };
        // Never before any: a purchase has to cost less than keeping.
        let best = least(&all).filter(|best| best.pv < keep_pv && !equal_pv(keep_pv, best.pv));
        let at = |t: usize| all.iter().filter(|c| c.offset == t).copied().collect::<Vec<_>>();
        let years: Vec<YearChoice> = (0..=a.latest).filter_map(|t| least(&at(t))).collect();
        let later = years.iter().filter(|c| c.offset > 0 && c.pv < keep_pv);
        let later = later.min_by(|a, b| a.pv.total_cmp(&b.pv)).copied();
        let best_pv = best.map_or(keep_pv, |best| best.pv);
        Ok(Some(Decision {
            keep_pv,
            best_pv,
            best,
            now: years.first().filter(|c| c.offset == 0).copied(),
            later,
            years,
            recursion_pv: self.recursion_pv()?,
            flags: self.place.flags.with_if(self.relaxed, Flags::LAW_RELAXED),
        }))
    }

    /// Whether the fitting candidate number `c` can be bought at time `t`.
    fn open(&self, c: usize, t: usize) -> bool {
        let candidate = self.candidate(c);
        candidate.delivered_by(t)
            && candidate.lawful_at(t)
            && candidate.carries(&self.place.duty, t, self.a)
    }

    /// V(0), by backward induction.
    fn recursion_pv(&self) -> Result<f64, Refusal> {
        let n = self.a.years;
        let mut value = self.place.removal_less_scrap * self.payment[n];
        for t in (0..n).rev() {
            let h = self.fails[t + 1];
            let cost = self.place.failure_cost * self.payment[t + 1] + self.forced[t + 1];
            value = self.running[t + 1] * self.old[t + 1] + h * cost + (1.0 - h) * value;
            if t <= self.a.latest {
                for c in (0..self.fitting.len()).filter(|&c| self.open(c, t)) {
                    value = value.min(self.buying(&mut Silent, c, t)?);
                }
            }
        }
        Ok(value)
    }
}

const SAVING: Formula = Formula {
    name: "what the best choice saves",
    symbol: "saving",
    formula: "keep − best",
    unit: "money",
    source: "methods, section 7",
};
const WAITING: Formula = Formula {
    name: "what a year's delay costs at least: the least of all later choices, less now",
    symbol: "waiting",
    formula: "later − now",
    unit: "money",
    source: "methods, section 7",
};
const NO_WAITING: Formula = Formula {
    name: "what a year's delay costs: nothing, to buy now is not the best choice or not open",
    formula: "0",
    ..WAITING
};
const BEST_DELAY: Formula = Formula {
    name: "delay of the best choice",
    symbol: "t",
    formula: "the t of the least J(t, c), where that is less than keeping",
    unit: "years",
    source: "methods, section 7",
};
const BEST_YEAR: Formula = Formula {
    name: "year of the best choice",
    symbol: "year",
    formula: "first_year + t",
    unit: "",
    source: "methods, section 7",
};
