//! What every choice at one place costs: J(t, c) and R(0) of methods section 7, each a sum over years that a
//! [`Recorder`] can take down to the running cost of a single year.

use super::formulas::{
    BUYING, CHOICE, END, FAILURE, FAILURES, FORCED, FORCED_PRICE, KEEP, NEW_FAILURE, NEW_FAILURES,
    NEW_MID_YEAR, NEW_YEAR, NEW_YEARS, OLD_MID_YEAR, OLD_YEAR, OLD_YEARS, PURCHASE, STANDS,
};
use super::{YearChoice, age};
use crate::engine::Refusal;
use crate::engine::columns::CashFlow;
use crate::engine::decision::fit::Candidate;
use crate::engine::decision::place::Place;
use crate::engine::economics::failure::Weibull;
use crate::engine::economics::{Assumptions, capital, discounting, running_cost};
use crate::engine::transformer::losses::Losses;
use crate::engine::working::{Formula, Recorder, Silent};

/// One place with the candidates that fit it, its yearly costs worked out: ready to value any choice.
#[derive(Debug)]
pub struct Valuation<'a> {
    pub(super) a: &'a Assumptions,
    pub(super) place: &'a Place,
    candidates: &'a [Candidate],
    pub(super) fitting: &'a [usize],
    /// d_k, index k = 1..N.
    pub(super) running: Vec<f64>,
    /// v^t, index t = 0..N.
    pub(super) payment: Vec<f64>,
    /// Failure probability of the old unit, index k.
    pub(super) fails: Vec<f64>,
    /// Failure probability of a new unit in its year of service j.
    fails_new: Vec<f64>,
    /// Chance that the old unit still stands at time t.
    survival: Vec<f64>,
    /// Running cost of the old unit, index k.
    pub(super) old: Vec<f64>,
    /// Loss cost of each fitting candidate, index k.
    new: Vec<Vec<f64>>,
    /// Upkeep of a new unit in its year of service j.
    upkeep_new: Vec<f64>,
    /// G'(t): the least cost of a forced purchase at time t.
    pub(super) forced: Vec<f64>,
    /// Whether the law gives way in some year.
    pub(super) relaxed: bool,
}

/// Years of service before year of service `j`.
#[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
fn service(j: usize) -> f64 {
    j as f64 - 1.0
}

#[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
fn real(k: usize) -> f64 {
    k as f64
}

/// Σ of what the years `from` to `to` cost, each stated below the sum.
fn sum<R: Recorder>(
    w: &mut R,
    formula: &'static Formula,
    (from, to): (usize, usize),
    year: impl Fn(&mut R, usize) -> Result<f64, Refusal>,
) -> Result<f64, Refusal> {
    w.open();
    let mut sum = 0.0;
    for k in from..=to {
        sum += year(w, k)?;
    }
    Ok(w.close(formula, &[], sum))
}

impl<'a> Valuation<'a> {
    /// Works the years of a place out. `fitting` are the candidates that fit it, in catalogue order.
    ///
    /// # Errors
    /// The annuity rule without a life.
    pub fn new(
        place: &'a Place,
        candidates: &'a [Candidate],
        fitting: &'a [usize],
        a: &'a Assumptions,
    ) -> Result<Self, Refusal> {
        let n = a.years;
        // Index 0 of the yearly series is not used: years are counted from 1.
        let yearly = |f: &dyn Fn(usize) -> f64| {
            std::iter::once(0.0).chain((1..=n).map(f)).collect::<Vec<f64>>()
        };
        let mut years = Self {
            a,
            place,
            candidates,
            fitting,
            running: yearly(&|k| discounting::running(a.rate, k, a.cash_flow)),
            payment: (0..=n).map(|t| discounting::payment(a.rate, t)).collect(),
            fails: Vec::new(),
            fails_new: Vec::new(),
            survival: vec![1.0],
            old: Vec::new(),
            new: Vec::new(),
            upkeep_new: yearly(&|j| running_cost::upkeep(&mut Silent, a, service(j))),
            forced: vec![0.0; n + 1],
            relaxed: false,
        };
        years.fails = yearly(&|k| years.fails_at(&mut Silent, years.old_age(k)));
        years.fails_new = yearly(&|j| years.fails_at(&mut Silent, service(j)));
        for k in 1..=n {
            years.survival.push(years.survival[k - 1] * (1.0 - years.fails[k]));
        }
        years.old = yearly(&|k| years.running_old(&mut Silent, k));
        let loss_cost = |losses: &Losses, k| {
            running_cost::of_year(&mut Silent, losses, &place.duty, a, k, 0.0).loss_cost()
        };
        years.new =
            fitting.iter().map(|&c| yearly(&|k| loss_cost(&candidates[c].losses, k))).collect();
        if years.weibull().is_some() {
            for t in 1..n {
                let (pv, relaxed) = years.forced_purchase(&mut Silent, t)?;
                years.forced[t] = pv;
                years.relaxed |= relaxed;
            }
        }
        Ok(years)
    }

    /// Age at failure; without a year of manufacture no failure is counted.
    fn weibull(&self) -> Option<Weibull> {
        self.a.failure.filter(|_| self.place.year_made.is_some())
    }

    fn old_age(&self, k: usize) -> f64 {
        age(self.place.year_made, self.a.first_year, k)
    }

    /// Probability that a unit of an age fails within the year.
    fn fails_at<R: Recorder>(&self, w: &mut R, age: f64) -> f64 {
        self.weibull().map_or(0.0, |weibull| weibull.fails_in_year(w, age))
    }

    /// Calendar year of year k, in words.
    fn year(&self, k: usize) -> String {
        let year = i64::try_from(k).unwrap_or(0) + self.a.first_year - 1;
        year.to_string()
    }

    fn running_old<R: Recorder>(&self, w: &mut R, k: usize) -> f64 {
        let (place, a) = (self.place, self.a);
        running_cost::of_year(w, &place.losses, &place.duty, a, k, self.old_age(k)).total()
    }

    pub(super) fn candidate(&self, c: usize) -> &Candidate {
        &self.candidates[self.fitting[c]]
    }

    /// Running cost of the old unit in year `k`, as it counts at time 0.
    fn old_year<R: Recorder>(&self, w: &mut R, k: usize) -> f64 {
        w.open();
        let run = if w.listens() { self.running_old(w, k) } else { self.old[k] };
        let value = self.survival[k - 1] * self.running[k] * run;
        let formula = self.by_cash_flow(&OLD_YEAR, &OLD_MID_YEAR);
        let (s, i) = (self.survival[k - 1], self.a.rate);
        w.close(formula, &[("S", s), ("run", run), ("i", i), ("k", real(k))], value);
        w.about(&|| self.year(k));
        value
    }

    /// Failure of the old unit in year `k` with all that follows from it, as it counts at time 0.
    fn old_failure<R: Recorder>(&self, w: &mut R, k: usize) -> Result<f64, Refusal> {
        if self.fails[k] == 0.0 {
            return Ok(0.0);
        }
        w.open();
        if w.listens() {
            self.fails_at(w, self.old_age(k));
            self.forced_purchase(w, k)?;
        }
        let (s, h, cost) = (self.survival[k - 1], self.fails[k], self.place.failure_cost);
        let value = s * (h * (cost * self.payment[k] + self.forced[k]));
        let inputs = [
            ("S", s),
            ("h", h),
            ("F", cost),
            ("i", self.a.rate),
            ("k", real(k)),
            ("G′", self.forced[k]),
        ];
        w.close(&FAILURE, &inputs, value);
        w.about(&|| self.year(k));
        Ok(value)
    }

    /// Running cost and failures of the old unit until time `t`, and the chance that it still stands then.
    fn standing<R: Recorder>(&self, w: &mut R, t: usize) -> Result<(f64, f64, f64), Refusal> {
        let running = sum(w, &OLD_YEARS, (1, t), |w, k| Ok(self.old_year(w, k)))?;
        let mut failures = 0.0;
        if self.weibull().is_some() {
            failures = sum(w, &FAILURES, (1, t), |w, k| self.old_failure(w, k))?;
            w.step(&STANDS, &[], self.survival[t]);
            w.about(&|| format!("after {t} years"));
        }
        Ok((running, failures, self.survival[t]))
    }

    /// R(0): the present value of never replacing before a failure.
    ///
    /// # Errors
    /// The annuity rule without a life.
    pub fn keep_pv<R: Recorder>(&self, w: &mut R) -> Result<f64, Refusal> {
        let n = self.a.years;
        w.open();
        let (run, fail, stands) = self.standing(w, n)?;
        let scrap = self.place.removal_less_scrap;
        let end = stands * scrap * self.payment[n];
        let inputs =
            [("S", stands), ("removal_less_scrap", scrap), ("i", self.a.rate), ("N", real(n))];
        w.step(&END, &inputs, end);
        let inputs = [("run_old", run), ("fail_old", fail), ("end", end)];
        Ok(w.close(&KEEP, &inputs, run + fail + end))
    }

    /// J(t, c): the present value of buying the fitting candidate number `c` at time `t`.
    ///
    /// # Errors
    /// The annuity rule without a life.
    pub fn choice_pv<R: Recorder>(&self, w: &mut R, c: usize, t: usize) -> Result<f64, Refusal> {
        w.open();
        let (run, fail, stands) = self.standing(w, t)?;
        let buying = self.buying(w, c, t)?;
        let inputs = [("run_old", run), ("fail_old", fail), ("S", stands), ("G", buying)];
        w.close(&CHOICE, &inputs, run + fail + stands * buying);
        w.about(&|| self.bought(c, t));
        Ok(run + fail + stands * buying)
    }

    /// The present value of a choice among the offers that fit; none = never.
    ///
    /// # Errors
    /// The annuity rule without a life; an offer that does not fit.
    pub fn policy_pv<R: Recorder>(
        &self,
        w: &mut R,
        choice: Option<YearChoice>,
    ) -> Result<f64, Refusal> {
        let Some(choice) = choice else { return self.keep_pv(w) };
        let Some(c) = self.fitting.iter().position(|&c| c == choice.offer) else {
            let name = self.candidates.get(choice.offer).map_or("", |c| &c.offer);
            return Err(Refusal::new("offer", name, "does not fit the unit"));
        };
        self.choice_pv(w, c, choice.offset)
    }

    fn bought(&self, c: usize, t: usize) -> String {
        format!("{} at the start of {}", self.candidate(c).offer, self.year(t + 1))
    }

    /// G_c(t): the cost from a purchase of the fitting candidate number `c` at time `t` on.
    ///
    /// # Errors
    /// The annuity rule without a life.
    pub fn buying<R: Recorder>(&self, w: &mut R, c: usize, t: usize) -> Result<f64, Refusal> {
        w.open();
        let capital = self.purchase(w, c, t, 0.0)?;
        let run = self.new_years(w, c, t)?;
        let fail = self.new_failures(w, c, t)?;
        Ok(close_buying(w, &BUYING, capital, run, fail))
    }

    /// What a purchase at time `t` costs, with a surcharge, as it counts at time 0.
    fn purchase<R: Recorder>(
        &self,
        w: &mut R,
        c: usize,
        t: usize,
        premium: f64,
    ) -> Result<f64, Refusal> {
        let candidate = self.candidate(c);
        w.open();
        let planned = candidate.capital(w);
        let price = planned * (1.0 + premium);
        if premium != 0.0 {
            w.step(&FORCED_PRICE, &[("P_planned", planned), ("premium", premium)], price);
        }
        let charged = capital::charged(w, price, candidate.life_years, t, self.a)?;
        let scrap = self.place.removal_less_scrap;
        let inputs =
            [("K", charged), ("removal_less_scrap", scrap), ("i", self.a.rate), ("t", real(t))];
        Ok(w.close(&PURCHASE, &inputs, (charged + scrap) * self.payment[t]))
    }

    /// Running cost of a candidate bought at time `t`, to the end of the horizon.
    fn new_years<R: Recorder>(&self, w: &mut R, c: usize, t: usize) -> Result<f64, Refusal> {
        let (place, a) = (self.place, self.a);
        let losses = &self.candidate(c).losses;
        let formula = self.by_cash_flow(&NEW_YEAR, &NEW_MID_YEAR);
        sum(w, &NEW_YEARS, (t + 1, a.years), |w, k| {
            w.open();
            let run = if w.listens() {
                running_cost::of_year(w, losses, &place.duty, a, k, service(k - t)).total()
            } else {
                self.new[c][k] + self.upkeep_new[k - t]
            };
            let value = self.running[k] * run;
            w.close(formula, &[("run", run), ("i", a.rate), ("k", real(k))], value);
            w.about(&|| self.year(k));
            Ok(value)
        })
    }

    /// Failures of a candidate bought at time `t`, to the end of the horizon.
    fn new_failures<R: Recorder>(&self, w: &mut R, c: usize, t: usize) -> Result<f64, Refusal> {
        if self.weibull().is_none() {
            return Ok(0.0);
        }
        let (cost, price) = (self.place.failure_cost, self.candidate(c).price_installed());
        sum(w, &NEW_FAILURES, (t + 1, self.a.years), |w, k| {
            w.open();
            let h = self.fails_new[k - t];
            if w.listens() {
                self.fails_at(w, service(k - t));
            }
            let value = h * (cost + price) * self.payment[k];
            let inputs = [("h", h), ("F", cost), ("P", price), ("i", self.a.rate), ("k", real(k))];
            w.close(&NEW_FAILURE, &inputs, value);
            w.about(&|| self.year(k));
            Ok(value)
        })
    }

    /// G'(t): the least cost of a forced purchase at time `t`; the loading limit, and then the law, give way
    /// where they leave nothing (infinite where no voltage holds). Says whether the law gave way. At the end of the horizon nothing is bought.
    fn forced_purchase<R: Recorder>(&self, w: &mut R, t: usize) -> Result<(f64, bool), Refusal> {
        if t == self.a.years {
            return Ok((0.0, false));
        }
        let carries = |c: usize| self.candidate(c).carries(&self.place.duty, t, self.a);
        let holds = |c: &usize| self.candidate(*c).holds_voltage(&self.place.duty, t, self.a);
        let all: Vec<usize> = (0..self.fitting.len()).filter(holds).collect();
        let lawful: Vec<usize> =
            all.iter().copied().filter(|&c| self.candidate(c).lawful_at(t)).collect();
        let relaxed = lawful.is_empty();
        let pool = if relaxed { all } else { lawful };
        let able: Vec<usize> = pool.iter().copied().filter(|&c| carries(c)).collect();
        let mut least: Option<(f64, usize)> = None;
        for c in if able.is_empty() { pool } else { able } {
            let pv = self.forced_on(&mut Silent, c, t)?;
            if least.is_none_or(|(least, _)| pv < least) {
                least = Some((pv, c));
            }
        }
        let Some((pv, c)) = least else { return Ok((f64::INFINITY, relaxed)) };
        if w.listens() {
            self.forced_on(w, c, t)?;
        }
        Ok((pv, relaxed))
    }

    /// The cost from a forced purchase of one candidate on; its years are summed without a word for each.
    fn forced_on<R: Recorder>(&self, w: &mut R, c: usize, t: usize) -> Result<f64, Refusal> {
        w.open();
        let capital = self.purchase(w, c, t, self.a.emergency_premium)?;
        let run = w.step(&NEW_YEARS, &[], self.new_years(&mut Silent, c, t)?);
        let fail = self.new_failures(&mut Silent, c, t)?;
        if fail != 0.0 {
            w.step(&NEW_FAILURES, &[], fail);
        }
        let value = close_buying(w, &FORCED, capital, run, fail);
        w.about(&|| self.bought(c, t));
        Ok(value)
    }

    fn by_cash_flow(
        &self,
        year_end: &'static Formula,
        mid_year: &'static Formula,
    ) -> &'static Formula {
        match self.a.cash_flow {
            CashFlow::YearEnd => year_end,
            CashFlow::MidYear => mid_year,
        }
    }
}

fn close_buying<R: Recorder>(
    w: &mut R,
    formula: &'static Formula,
    capital: f64,
    run: f64,
    fail: f64,
) -> f64 {
    let inputs = [("capital", capital), ("run_new", run), ("fail_new", fail)];
    w.close(formula, &inputs, capital + run + fail)
}
