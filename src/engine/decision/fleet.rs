//! Keep or replace, a whole fleet: the formulas of [`super::keep_or_replace`] over columns.
//!
//! What depends on years only (discounting, escalation, growth, ageing) is summed once from the end of the
//! horizon backwards; a unit is then a few multiplications per offer and year. One call evaluates a chunk; the
//! caller shares chunks among cores, so the result does not depend on how many there are.

mod columns;
mod sums;

pub use columns::{FleetColumns, NUMBERS, Names};

use std::ops::Range;

use rustc_hash::FxHashMap;

use super::equal_pv;
use super::estimate::End;
use super::fit::{Candidate, fitting};
use super::place::{Context, LeftOut, Place, resolve_at};
use crate::engine::Refusal;
use crate::engine::economics::Assumptions;
use crate::engine::flags::Flags;
use crate::engine::loading::duty::peak_of_year;
use crate::engine::loading::{Duty, VoltageDrop};
use crate::engine::transformer::losses::Losses;
use crate::engine::transformer::voltage_drop::{Supply, current, mean_square_current};
use crate::engine::working::Silent;
use sums::{Ages, Caps, CapsByFailure, Horizon, PriceSums};

/// Units to a chunk. Fixed, so that totals are folded in the same order on any machine.
pub const CHUNK: usize = 4096;

/// What is best for one unit, as small as a million of them want it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Outcome {
    /// Present value of never replacing before a failure.
    pub keep_pv: f64,
    /// Least present value of replacing now; NaN where no offer is open now.
    pub now_pv: f64,
    /// Least present value.
    pub best_pv: f64,
    /// What a year's delay costs at least.
    pub waiting_pv: f64,
    /// Candidate bought now; [`Outcome::NONE`] where no offer is open now.
    pub now_offer: u32,
    /// Candidate of the best choice; [`Outcome::NONE`] = never.
    pub best_offer: u32,
    /// Years of delay of the best choice.
    pub best_year_offset: u16,
    /// Why the unit is left out.
    pub left_out: Option<LeftOut>,
    /// What is doubtful.
    pub flags: Flags,
}

impl Outcome {
    /// No offer.
    pub const NONE: u32 = u32::MAX;

    /// A unit that could not be computed.
    pub const fn left_out(why: LeftOut) -> Self {
        Self {
            keep_pv: 0.0,
            now_pv: f64::NAN,
            best_pv: 0.0,
            waiting_pv: 0.0,
            now_offer: Self::NONE,
            best_offer: Self::NONE,
            best_year_offset: 0,
            left_out: Some(why),
            flags: Flags::NONE,
        }
    }

    /// keep_pv − best_pv, never below 0.
    pub fn saving_pv(&self) -> f64 {
        if self.best_offer == Self::NONE { 0.0 } else { (self.keep_pv - self.best_pv).max(0.0) }
    }
}

/// The candidates that fit one kind of place, with what the inner loop reads of each side by side.
#[derive(Clone, Debug)]
struct Fit {
    candidates: Vec<u32>,
    no_load_w: Vec<f64>,
    /// Load loss over the squared rating, W/kVA².
    load_w_per_kva2: Vec<f64>,
    auxiliary_w: Vec<f64>,
    any_auxiliary: bool,
}

/// A basis and a catalogue made ready for a fleet.
#[derive(Debug)]
pub struct Kernel<'a> {
    ctx: &'a Context,
    candidates: &'a [Candidate],
    fits: Vec<Fit>,
    horizon: Horizon,
    caps: CapsByFailure,
}

/// What the units of a chunk share.
struct Scratch {
    /// Price sums by growth of the load.
    grown: FxHashMap<u64, PriceSums>,
    years: YearScratch,
}

/// Space for the year series of one unit.
struct YearScratch {
    series: Series,
    least: Vec<f64>,
    forced: Vec<f64>,
    relaxed: Vec<f64>,
}

impl Scratch {
    fn new(years: usize) -> Self {
        let space = || vec![0.0; years + 1];
        Self {
            grown: FxHashMap::default(),
            years: YearScratch {
                series: Series {
                    iron: space(),
                    copper: space(),
                    copper_of: Vec::new(),
                    auxiliary: space(),
                },
                least: space(),
                forced: space(),
                relaxed: space(),
            },
        }
    }
}

impl<'a> Kernel<'a> {
    /// Prepares a basis and a catalogue for the kinds of places of a fleet.
    ///
    /// # Errors
    /// The annuity rule without a life.
    pub fn new(
        ctx: &'a Context,
        candidates: &'a [Candidate],
        fleet: &FleetColumns,
    ) -> Result<Self, Refusal> {
        let a = &ctx.assumptions;
        let fits = fleet
            .terminals
            .iter()
            .map(|terminals| {
                let list = fitting(terminals, candidates, a.offer_sizes);
                let of = |f: &dyn Fn(&Candidate) -> f64| {
                    list.iter().map(|&i| f(&candidates[i])).collect::<Vec<f64>>()
                };
                let auxiliary_w = of(&|c| c.losses.auxiliary_loss_w);
                Fit {
                    no_load_w: of(&|c| c.losses.no_load_loss_w),
                    load_w_per_kva2: of(&|c| per_kva2(c.losses.load_loss_w, c.losses.rated_kva)),
                    any_auxiliary: auxiliary_w.iter().any(|x| *x > 0.0),
                    auxiliary_w,
                    candidates: list.iter().filter_map(|&i| u32::try_from(i).ok()).collect(),
                }
            })
            .collect();
        let horizon = Horizon::new(a);
        let caps = CapsByFailure::new(a, candidates, &horizon)?;
        Ok(Self { ctx, candidates, fits, horizon, caps })
    }

    /// Evaluates the units of `range` into `out`.
    pub fn evaluate(&self, fleet: &FleetColumns, range: Range<usize>, out: &mut [Outcome]) {
        let mut space = Scratch::new(self.ctx.assumptions.years);
        for (i, out) in range.zip(out) {
            *out = self.one(fleet, i, End::Middle, &mut space);
        }
    }

    /// Evaluates one unit with its estimated losses at an end of their intervals.
    pub fn at_end(&self, fleet: &FleetColumns, i: usize, end: End) -> Outcome {
        self.one(fleet, i, end, &mut Scratch::new(self.ctx.assumptions.years))
    }

    #[inline]
    fn one(&self, fleet: &FleetColumns, i: usize, end: End, space: &mut Scratch) -> Outcome {
        let place = match resolve_at(&mut Silent, &fleet.facts(i), self.ctx, end) {
            Ok(place) => place,
            Err(why) => return Outcome::left_out(why),
        };
        let growth = place.duty.load_growth_pu;
        let sums = || self.horizon.grown(&self.ctx.assumptions, growth);
        let grown = space.grown.entry(growth.to_bits()).or_insert_with(sums);
        let fit = &self.fits[fleet.kind[i] as usize];
        self.unit(&place, fit, grown, &mut space.years)
    }

    /// First delay at which candidate number `c` of a fit carries the load to the end; none = never.
    /// With `limited` within the loading limit, else as long as its voltage holds.
    #[inline]
    fn carries_from(&self, place: &Place, fit: &Fit, c: usize, limited: bool) -> Option<usize> {
        let limit = self.ctx.assumptions.loading_limit_pu;
        if place.duty.drop.is_none() && (limit.is_none() || !limited) {
            Some(0)
        } else {
            self.found_to_carry(place, fit, c, limited)
        }
    }

    fn found_to_carry(&self, place: &Place, fit: &Fit, c: usize, limited: bool) -> Option<usize> {
        let a = &self.ctx.assumptions;
        let candidate = &self.candidates[fit.candidates[c] as usize];
        // A shrinking load is carried from some year on; a growing or level one always or never.
        let last = if place.duty.load_growth_pu < 0.0 { a.years } else { 1 };
        (0..last).find(|&t| {
            if limited {
                candidate.carries(&place.duty, t, a)
            } else {
                candidate.holds_voltage(&place.duty, t, a)
            }
        })
    }

    /// Least cost at each time of `fit`'s candidates: what `caps` says of the capital, and their losses.
    /// With `limited`, from the time on at which a candidate carries the load.
    fn least<'c>(
        &self,
        place: &Place,
        fit: &Fit,
        s: &Series,
        caps: impl Fn(u32) -> &'c [f64],
        limited: bool,
        least: &mut [f64],
    ) {
        least.fill(f64::INFINITY);
        for (c, &candidate) in fit.candidates.iter().enumerate() {
            let from = self.carries_from(place, fit, c, limited);
            let Some(from) = from.filter(|&t| t < least.len()) else { continue };
            fit.add_least(c, s, caps(candidate), from, least);
        }
    }

    fn unit(
        &self,
        place: &Place,
        fit: &Fit,
        growth: &PriceSums,
        space: &mut YearScratch,
    ) -> Outcome {
        let a = &self.ctx.assumptions;
        let latest = a.latest;
        let h = &self.horizon;
        let YearScratch { series: s, least, forced, relaxed } = space;
        s.fill(place, fit, a, h, growth);
        if let Some(drop) = &place.duty.drop {
            self.fill_drop(place, drop, fit, s);
        }
        let ages = h.ages(place.year_made);
        let caps = self.caps.of(ages.fails);
        let common = |t: usize| {
            place.removal_less_scrap * h.payment[t]
                + h.upkeep_new[t]
                + if ages.fails { h.failures_new[t] * place.failure_cost } else { 0.0 }
        };

        let least = &mut least[..=latest];
        self.least(place, fit, s, |c| caps.open(c), true, least);
        if least.iter().all(|g| g.is_infinite()) {
            return Outcome::left_out(LeftOut::NoOffer);
        }
        let mut flags = place.flags;
        if ages.fails {
            let gave_way = self.forced(place, fit, s, caps, &common, forced, relaxed);
            flags = flags.with_if(gave_way, Flags::LAW_RELAXED);
            if place.duty.drop.is_some() && forced.iter().skip(1).any(|g| g.is_infinite()) {
                return Outcome::left_out(LeftOut::NoOffer);
            }
        }

        // J(t) = before(t) + survival(t)·(common(t) + least(t)), with the least kept for now and overall.
        let copper_w_per_kva2 = per_kva2(place.losses.load_loss_w, place.losses.rated_kva);
        let own = OldUnit { place, ages, s, forced, payment: &h.payment, copper_w_per_kva2 };
        let (mut before, mut survival) = (0.0, 1.0);
        let (mut best, mut later) = (f64::INFINITY, f64::INFINITY);
        let (mut now_pv, mut now_offer) = (f64::NAN, Outcome::NONE);
        for t in 0..=latest {
            own.pass(t, &mut before, &mut survival);
            if least[t].is_infinite() {
                continue;
            }
            let pv = before + survival * (common(t) + least[t]);
            best = best.min(pv);
            if t == 0 {
                now_pv = pv;
            } else {
                later = later.min(pv);
            }
        }
        let rest = if ages.fails { latest + 1 } else { a.years };
        for t in rest..=a.years {
            own.pass(t, &mut before, &mut survival);
        }
        let keep_pv = before + survival * place.removal_less_scrap * h.payment[a.years];

        let pick = |t: usize, before: f64, survival: f64, target: f64| {
            fit.candidates.iter().enumerate().find_map(|(c, &candidate)| {
                let from = self.carries_from(place, fit, c, true)?;
                let g = fit.cost(c, s, caps.open(candidate), t);
                let pv = before + survival * (common(t) + g);
                (from <= t && g.is_finite() && equal_pv(pv, target)).then_some(candidate)
            })
        };
        if !now_pv.is_nan() {
            now_offer = pick(0, 0.0, 1.0, now_pv).unwrap_or(Outcome::NONE);
        }
        let never = keep_pv <= best || equal_pv(keep_pv, best);
        let mut outcome = Outcome {
            keep_pv,
            now_pv,
            best_pv: if never { keep_pv } else { best },
            waiting_pv: 0.0,
            now_offer,
            best_offer: Outcome::NONE,
            best_year_offset: 0,
            left_out: None,
            flags,
        };
        if !never {
            let (mut before, mut survival) = (0.0, 1.0);
            for t in 0..=latest {
                own.pass(t, &mut before, &mut survival);
                let pv = before + survival * (common(t) + least[t]);
                if least[t].is_finite()
                    && equal_pv(pv, best)
                    && let Some(offer) = pick(t, before, survival, best)
                {
                    outcome.best_offer = offer;
                    outcome.best_year_offset = u16::try_from(t).unwrap_or(u16::MAX);
                    break;
                }
            }
            if outcome.best_year_offset == 0 {
                outcome.waiting_pv = (later.min(keep_pv) - best).max(0.0);
            }
        }
        outcome
    }

    /// The series of the drop voltage model: iron at the operating voltage, and copper by the currents of each
    /// transformer, year by year. Slower than the sums that all share at rated voltage.
    #[cold]
    fn fill_drop(&self, place: &Place, drop: &VoltageDrop, fit: &Fit, s: &mut Series) {
        let (a, d) = (&self.ctx.assumptions, &place.duty);
        for iron in &mut s.iron {
            *iron *= drop.v_hv_pu * drop.v_hv_pu;
        }
        let hours = d.energised_hours / 1000.0;
        let prices = (
            hours * d.load_price_per_kwh,
            a.demand_charge_per_kw_year / 1000.0,
            hours * d.load_co2_kg_per_kwh,
        );
        let mut squares = Vec::with_capacity(a.years);
        let mut copper = |losses: &Losses, out: &mut [f64]| {
            let supply = Supply::of(losses, drop);
            squares.clear();
            for k in 1..=a.years {
                let next = match squares.last() {
                    Some(last) if d.load_growth_pu == 0.0 || k > a.load_growth_years => *last,
                    _ => {
                        let peak = peak_of_year(&mut Silent, d, k, a.load_growth_years);
                        squares_of_year(&supply, d, drop, peak / losses.rated_kva)
                    }
                };
                squares.push(next);
            }
            self.horizon.combine_years(prices, |k| squares[k - 1], out);
            // Load losses are kept over the squared rating.
            for copper in out {
                *copper *= losses.rated_kva * losses.rated_kva;
            }
        };
        copper(&place.losses, &mut s.copper);
        s.copper_of.resize(fit.candidates.len(), vec![0.0; a.years + 1]);
        for (&candidate, out) in fit.candidates.iter().zip(&mut s.copper_of) {
            copper(&self.candidates[candidate as usize].losses, out);
        }
    }

    /// G'(t) for t = 1..N−1: the loading limit, and then the law, give way where they leave nothing. Says
    /// whether the law gave way.
    #[expect(clippy::too_many_arguments, reason = "one step of `unit`, with its scratch")]
    fn forced(
        &self,
        place: &Place,
        fit: &Fit,
        s: &Series,
        caps: &Caps,
        common: &dyn Fn(usize) -> f64,
        forced: &mut [f64],
        relaxed: &mut [f64],
    ) -> bool {
        let n = self.ctx.assumptions.years;
        let (forced, end) = forced.split_at_mut(n);
        let relaxed = &mut relaxed[..n];
        end.fill(0.0);
        self.least(place, fit, s, |c| caps.forced(c), true, forced);
        let missing = |forced: &[f64]| forced.iter().skip(1).any(|g| g.is_infinite());
        let mut gave_way = false;
        // The law holds longer than the loading limit; without either, the limit returns.
        let steps: [(bool, bool); 3] = [(true, false), (false, true), (false, false)];
        for (law, limited) in steps {
            if !missing(forced) {
                break;
            }
            if law {
                self.least(place, fit, s, |c| caps.forced(c), limited, relaxed);
            } else {
                self.least(place, fit, s, |c| caps.forced_any(c), limited, relaxed);
            }
            for (forced, relaxed) in forced.iter_mut().zip(relaxed.iter()).skip(1) {
                if forced.is_infinite() {
                    *forced = *relaxed;
                    gave_way |= !law && relaxed.is_finite();
                }
            }
        }
        for (t, forced) in forced.iter_mut().enumerate() {
            *forced += common(t);
        }
        gave_way
    }
}

/// The old unit passing from year to year.
struct OldUnit<'a> {
    place: &'a Place,
    ages: &'a Ages,
    s: &'a Series,
    forced: &'a [f64],
    payment: &'a [f64],
    /// Load loss over the squared rating.
    copper_w_per_kva2: f64,
}

impl OldUnit<'_> {
    /// What it costs to run from time `from` to time `to`, valued at time 0.
    fn run(&self, from: usize, to: usize) -> f64 {
        let l = &self.place.losses;
        let between = |tail: &[f64]| tail[from] - tail[to];
        l.no_load_loss_w * between(&self.s.iron)
            + self.copper_w_per_kva2 * between(&self.s.copper)
            + l.auxiliary_loss_w * between(&self.s.auxiliary)
            + between(&self.ages.upkeep)
    }

    /// Brings `before`, the cost up to time `t`, and `survival`, the chance to be alive then, from `t` − 1 to
    /// `t`. Without failures the cost is read off at once.
    #[inline]
    fn pass(&self, t: usize, before: &mut f64, survival: &mut f64) {
        if !self.ages.fails {
            *before = self.run(0, t);
        } else if t > 0 {
            let h = self.ages.fail[t];
            *before += *survival
                * (self.run(t - 1, t)
                    + h * (self.place.failure_cost * self.payment[t] + self.forced[t]));
            *survival *= 1.0 - h;
        }
    }
}

/// Squared currents of a year with its peak at `peak_pu` of the rating: mean of the hours, at the system peak.
/// Infinite where the load cannot be carried.
fn squares_of_year(supply: &Supply, duty: &Duty, drop: &VoltageDrop, peak_pu: f64) -> (f64, f64) {
    let (w, parts) = (&mut Silent, drop.duration.as_deref());
    let mean = mean_square_current(w, supply, peak_pu, duty.loss_factor_pu, parts);
    let system = current(w, supply, duty.responsibility_pu * peak_pu);
    (mean.unwrap_or(f64::INFINITY), system.map_or(f64::INFINITY, |i| i * i))
}

/// Value at time 0 of a watt from year t+1 to the end, by t: of iron, of copper (per W/kVA²), of auxiliaries.
struct Series {
    iron: Vec<f64>,
    /// Of the old unit; at rated voltage of every transformer.
    copper: Vec<f64>,
    /// Of each candidate of a fit; empty at rated voltage.
    copper_of: Vec<Vec<f64>>,
    auxiliary: Vec<f64>,
}

impl Series {
    /// Copper of candidate number `c` of a fit.
    #[inline]
    fn copper(&self, c: usize) -> &[f64] {
        self.copper_of.get(c).unwrap_or(&self.copper)
    }

    fn fill(&mut self, place: &Place, fit: &Fit, a: &Assumptions, h: &Horizon, growth: &PriceSums) {
        let d = &place.duty;
        let demand = a.demand_charge_per_kw_year / 1000.0;
        let hours = d.energised_hours / 1000.0;
        h.plain.combine(
            hours * d.no_load_price_per_kwh,
            demand,
            hours * d.no_load_co2_kg_per_kwh,
            &mut self.iron,
        );
        let square = d.peak_kva * d.peak_kva;
        let loss_hours = square * hours * d.loss_factor_pu;
        growth.combine(
            loss_hours * d.load_price_per_kwh,
            square * demand * (d.responsibility_pu * d.responsibility_pu),
            loss_hours * d.load_co2_kg_per_kwh,
            &mut self.copper,
        );
        if fit.any_auxiliary || place.losses.auxiliary_loss_w > 0.0 {
            let hours = d.auxiliary_hours / 1000.0;
            h.plain.combine(
                hours * d.no_load_price_per_kwh,
                0.0,
                hours * d.no_load_co2_kg_per_kwh,
                &mut self.auxiliary,
            );
        }
    }
}

impl Fit {
    /// Cost of candidate number `c` bought at time `t`, less what is common to all.
    fn cost(&self, c: usize, s: &Series, cap: &[f64], t: usize) -> f64 {
        let losses =
            cap[t] + self.no_load_w[c] * s.iron[t] + self.load_w_per_kva2[c] * s.copper(c)[t];
        if self.auxiliary_w[c] > 0.0 {
            losses + self.auxiliary_w[c] * s.auxiliary[t]
        } else {
            losses
        }
    }

    /// Lowers `least` to the cost of candidate number `c`, from time `from` on.
    fn add_least(&self, c: usize, s: &Series, cap: &[f64], from: usize, least: &mut [f64]) {
        let (p0, b, x) = (self.no_load_w[c], self.load_w_per_kva2[c], self.auxiliary_w[c]);
        let to = least.len();
        let (least, cap) = (&mut least[from..], &cap[from..to]);
        let (iron, copper) = (&s.iron[from..to], &s.copper(c)[from..to]);
        let rows = least.iter_mut().zip(cap).zip(iron).zip(copper);
        if x > 0.0 {
            for ((((least, cap), iron), copper), aux) in rows.zip(&s.auxiliary[from..to]) {
                let cost = cap + p0 * iron + b * copper + x * aux;
                *least = if cost < *least { cost } else { *least };
            }
        } else {
            for (((least, cap), iron), copper) in rows {
                let cost = cap + p0 * iron + b * copper;
                *least = if cost < *least { cost } else { *least };
            }
        }
    }
}

/// Load loss over the squared rating (W/kVA²).
fn per_kva2(load_loss_w: f64, rated_kva: f64) -> f64 {
    load_loss_w / (rated_kva * rated_kva)
}

#[cfg(test)]
mod tests;
