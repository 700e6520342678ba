//! Keep or replace, one unit: every (delay, offer) and never, valued year by year as methods section 7 defines.
//!
//! This is the scalar form: plain sums over years, easy to read and slow. [`super::fleet`] gives the same
//! figures from cumulative sums; tests hold the two equal.

use super::equal_pv;
use super::fit::Candidate;
use super::place::Place;
use crate::engine::Refusal;
use crate::engine::economics::{Assumptions, capital, discounting, running_cost};
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
    /// What a year's delay costs at least; 0 where now is not best.
    pub waiting_pv: f64,
    /// The best offer at each delay at which one is open.
    pub years: Vec<YearChoice>,
    /// V(0) by the backward recursion; equal to `best_pv`, kept to show it.
    pub recursion_pv: f64,
    /// What came up while deciding.
    pub flags: Flags,
}

impl Decision {
    /// keep_pv − best_pv, never below 0.
    pub fn saving_pv(&self) -> f64 {
        if self.best.is_some() { (self.keep_pv - self.best_pv).max(0.0) } else { 0.0 }
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

/// The costs of a place, year by year, from which every policy is summed.
struct Years<'a> {
    a: &'a Assumptions,
    place: &'a Place,
    candidates: &'a [Candidate],
    fitting: &'a [usize],
    /// d_k, index k = 1..N.
    running: Vec<f64>,
    /// v^t, index t = 0..N.
    payment: Vec<f64>,
    /// Failure probability of the old unit, index k.
    fails: Vec<f64>,
    /// Failure probability of a new unit in its year of service j.
    fails_new: Vec<f64>,
    /// Running cost of the old unit, index k.
    old: Vec<f64>,
    /// Loss cost of each fitting candidate, index k.
    new: Vec<Vec<f64>>,
    /// Upkeep of a new unit in its year of service j.
    upkeep_new: Vec<f64>,
}

impl<'a> Years<'a> {
    fn new(
        place: &'a Place,
        candidates: &'a [Candidate],
        fitting: &'a [usize],
        a: &'a Assumptions,
    ) -> Self {
        let n = a.years;
        let w = &mut Silent;
        let weibull = a.failure.filter(|_| place.year_made.is_some());
        let fails_at = |age: f64| weibull.map_or(0.0, |m| m.fails_in_year(&mut Silent, age));
        let old_age = |k| age(place.year_made, a.first_year, k);
        #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
        let service = |j: usize| j as f64 - 1.0;
        // Index 0 of the yearly series is not used: years are counted from 1.
        let yearly = |f: &mut dyn FnMut(usize) -> f64| {
            std::iter::once(0.0).chain((1..=n).map(f)).collect::<Vec<f64>>()
        };
        let running = yearly(&mut |k| discounting::running(a.rate, k, a.cash_flow));
        let old = yearly(&mut |k| {
            running_cost::of_year(w, &place.losses, &place.duty, a, k, old_age(k)).total()
        });
        let new = fitting
            .iter()
            .map(|&c| {
                let losses = &candidates[c].losses;
                yearly(&mut |k| {
                    running_cost::of_year(&mut Silent, losses, &place.duty, a, k, 0.0).loss_cost()
                })
            })
            .collect();
        Self {
            a,
            place,
            candidates,
            fitting,
            running,
            payment: (0..=n).map(|t| discounting::payment(a.rate, t)).collect(),
            fails: yearly(&mut |k| fails_at(old_age(k))),
            fails_new: yearly(&mut |j| fails_at(service(j))),
            old,
            new,
            upkeep_new: yearly(&mut |j| running_cost::upkeep(&mut Silent, a, service(j))),
        }
    }

    /// G_c(t): buying the fitting candidate number `c` at time `t`, with a surcharge on the purchase.
    fn buying(&self, c: usize, t: usize, premium: f64) -> Result<f64, Refusal> {
        let candidate = &self.candidates[self.fitting[c]];
        let price = candidate.price_installed();
        let capital = capital::charged(
            &mut Silent,
            price * (1.0 + premium),
            candidate.life_years,
            t,
            self.a,
        )?;
        let mut pv = (capital + self.place.removal_less_scrap) * self.payment[t];
        for k in t + 1..=self.a.years {
            let j = k - t;
            pv += self.running[k] * (self.new[c][k] + self.upkeep_new[j])
                + self.payment[k] * self.fails_new[j] * (self.place.failure_cost + price);
        }
        Ok(pv)
    }

    /// G'(t): the least cost of a forced purchase at time `t`; the loading limit, and then the law, give way
    /// where they leave nothing. Says whether the law gave way.
    fn forced(&self, t: usize) -> Result<(f64, bool), Refusal> {
        if t == self.a.years {
            return Ok((0.0, false));
        }
        let candidate = |c: usize| &self.candidates[self.fitting[c]];
        let carries = |c: usize| candidate(c).carries(&self.place.duty, t, self.a);
        let all: Vec<usize> = (0..self.fitting.len()).collect();
        let lawful: Vec<usize> =
            all.iter().copied().filter(|&c| candidate(c).lawful_at(t)).collect();
        let relaxed = lawful.is_empty();
        let pool = if relaxed { all } else { lawful };
        let able: Vec<usize> = pool.iter().copied().filter(|&c| carries(c)).collect();
        let mut least = f64::INFINITY;
        for c in if able.is_empty() { pool } else { able } {
            least = least.min(self.buying(c, t, self.a.emergency_premium)?);
        }
        Ok((least, relaxed))
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
    let n = a.years;
    let y = Years::new(place, candidates, fitting, a);
    let open = |c: usize, t: usize| {
        let candidate = &candidates[fitting[c]];
        candidate.delivered_by(t) && candidate.lawful_at(t) && candidate.carries(&place.duty, t, a)
    };
    let mut flags = place.flags;
    let mut forced = vec![0.0; n + 1];
    if y.fails.iter().any(|h| *h > 0.0) {
        for t in 1..=n {
            let (pv, relaxed) = y.forced(t)?;
            forced[t] = pv;
            flags = flags.with_if(relaxed, Flags::LAW_RELAXED);
        }
    }

    // J(t, c), and G(t) for the recursion.
    let mut all: Vec<YearChoice> = Vec::new();
    let mut buying = vec![f64::INFINITY; n + 1];
    let (mut survival, mut before) = (1.0, 0.0);
    for t in 0..=a.latest {
        if t > 0 {
            let h = y.fails[t];
            before += survival
                * (y.running[t] * y.old[t] + h * (place.failure_cost * y.payment[t] + forced[t]));
            survival *= 1.0 - h;
        }
        for c in 0..fitting.len() {
            if open(c, t) {
                let g = y.buying(c, t, 0.0)?;
                buying[t] = buying[t].min(g);
                all.push(YearChoice { offset: t, offer: fitting[c], pv: before + survival * g });
            }
        }
    }
    if all.is_empty() {
        return Ok(None);
    }

    // R(t) and V(t), backwards.
    let end = place.removal_less_scrap * y.payment[n];
    let (mut keep, mut value) = (end, end);
    for t in (0..n).rev() {
        let h = y.fails[t + 1];
        let year = y.running[t + 1] * y.old[t + 1]
            + h * (place.failure_cost * y.payment[t + 1] + forced[t + 1]);
        keep = year + (1.0 - h) * keep;
        let wait = year + (1.0 - h) * value;
        value = if t <= a.latest { wait.min(buying[t]) } else { wait };
    }

    let least = all.iter().fold(keep, |least, choice| least.min(choice.pv));
    let first_least = |choices: &[YearChoice]| {
        let least = choices.iter().fold(f64::INFINITY, |least, c| least.min(c.pv));
        choices.iter().find(|c| equal_pv(c.pv, least)).copied()
    };
    let best = if equal_pv(keep, least) {
        None
    } else {
        all.iter().find(|choice| equal_pv(choice.pv, least)).copied()
    };
    let years: Vec<YearChoice> = (0..=a.latest)
        .filter_map(|t| {
            let at: Vec<_> = all.iter().filter(|c| c.offset == t).copied().collect();
            first_least(&at)
        })
        .collect();
    let best_pv = if best.is_some() { least } else { keep };
    let waiting_pv = match best {
        Some(YearChoice { offset: 0, .. }) => {
            let later = years.iter().filter(|c| c.offset > 0).fold(keep, |m, c| m.min(c.pv));
            (later - best_pv).max(0.0)
        }
        _ => 0.0,
    };
    Ok(Some(Decision {
        keep_pv: keep,
        best_pv,
        best,
        now: years.first().filter(|c| c.offset == 0).copied(),
        waiting_pv,
        years,
        recursion_pv: value,
        flags,
    }))
}

const PAYBACK: Formula = Formula {
    name: "simple payback of the replacement, undiscounted",
    symbol: "payback",
    formula: "(P + removal_less_scrap)/(run_old − run_new)",
    unit: "years",
    source: "methods, section 7",
};

/// Simple payback of buying a candidate at time `t`; none where nothing is saved in its first year.
pub fn payback_years<R: Recorder>(
    w: &mut R,
    place: &Place,
    candidate: &Candidate,
    t: usize,
    a: &Assumptions,
) -> Option<f64> {
    let k = t + 1;
    let old_age = age(place.year_made, a.first_year, k);
    let old = running_cost::of_year(&mut Silent, &place.losses, &place.duty, a, k, old_age).total();
    let new = running_cost::of_year(&mut Silent, &candidate.losses, &place.duty, a, k, 0.0).total();
    let capital = candidate.price_installed() + place.removal_less_scrap;
    (old - new > 0.0).then(|| {
        let inputs = [
            ("P", candidate.price_installed()),
            ("removal_less_scrap", place.removal_less_scrap),
            ("run_old", old),
            ("run_new", new),
        ];
        w.step(&PAYBACK, &inputs, capital / (old - new))
    })
}
