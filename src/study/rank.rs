//! Which units to replace, when and with what: the fleet ranked by what the best choice saves.

use std::cmp::Ordering;

use rayon::prelude::*;
use rustc_hash::FxHashMap;
use serde::ser::{SerializeSeq, SerializeStruct};
use serde::{Serialize, Serializer};

use crate::engine::decision::estimate::End;
use crate::engine::decision::fleet::{CHUNK, Kernel, Outcome};
use crate::engine::decision::keep_or_replace::Replacement;
use crate::engine::decision::place::resolve;
use crate::engine::decision::{Context, LeftOut};
use crate::engine::exact_sum::ExactSum;
use crate::engine::flags::Flags;
use crate::engine::working::Silent;
use crate::study::offers_open::left_out_because;
use crate::study::{Desk, StudyError, Watch};

/// By what the ranking is ordered.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum By {
    /// What the best choice saves in present value, greatest first.
    #[default]
    Saving,
    /// What a year's delay costs, greatest first.
    Waiting,
    /// What keeping costs, greatest first.
    Keep,
    /// Rating, greatest first.
    Rating,
    /// Year of manufacture, oldest first, unknown last.
    Made,
    /// Identifier.
    Unit,
}

impl By {
    /// All orders with their words.
    pub const WORDS: [(Self, &str); 6] = [
        (Self::Saving, "saving"),
        (Self::Waiting, "waiting"),
        (Self::Keep, "keep"),
        (Self::Rating, "rating"),
        (Self::Made, "made"),
        (Self::Unit, "unit"),
    ];
    /// The word of this order.
    pub fn word(self) -> &'static str {
        Self::WORDS.iter().find(|(by, _)| *by == self).map_or("", |(_, word)| word)
    }
}

/// A ranked fleet: outcomes of all units, and the order.
#[derive(Clone, Debug)]
pub struct Ranking {
    /// The resolved basis.
    pub context: Context,
    /// One outcome for each unit of the desk's fleet.
    pub outcomes: Vec<Outcome>,
    /// Indices of ranked units, best first; only the first of them where a top was asked for.
    pub order: Vec<u32>,
    /// Indices of the units left out, in book order.
    pub left_out: Vec<u32>,
    /// Sums over all ranked units.
    pub totals: Totals,
    /// Where the units of `order` whose losses are estimated could stand; by index of the unit.
    pub could_stand: FxHashMap<u32, CouldStand>,
}

/// Places that a unit of estimated losses would take if these were at the ends of their intervals and all other
/// units stood as they do; none where it would be left out.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct CouldStand {
    /// With losses at the lower ends.
    pub low: Option<usize>,
    /// With losses at the upper ends.
    pub high: Option<usize>,
}

/// Sums over all ranked units.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize)]
pub struct Totals {
    /// Units ranked.
    pub units: usize,
    /// Sum of keep_pv.
    pub keep_pv: f64,
    /// Sum of best_pv.
    pub best_pv: f64,
    /// Sum of saving_pv.
    pub saving_pv: f64,
    /// Units of which the saving is above 0.
    pub units_saving: usize,
}

/// A line of the ranking.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct RankRow<'a> {
    pub rank: usize,
    pub unit: &'a str,
    pub site: Option<&'a str>,
    pub rated_kva: f64,
    pub year_made: Option<i64>,
    pub peak_pu: f64,
    pub keep_pv: f64,
    pub now_offer: Option<&'a str>,
    pub now_pv: Option<f64>,
    pub best_offer: Option<&'a str>,
    pub best_year_offset: Option<u16>,
    pub best_year: Option<i64>,
    pub best_pv: f64,
    pub saving_pv: f64,
    pub waiting_pv: f64,
    pub payback_years: Option<f64>,
    pub capital: Option<f64>,
    pub energy_saved_kwh: Option<f64>,
    pub co2_saved_kg: Option<f64>,
    pub flags: Vec<&'static str>,
    pub rank_low: Option<usize>,
    pub rank_high: Option<usize>,
}

/// A unit that could not be ranked.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct LeftOutRow<'a> {
    pub unit: &'a str,
    pub why: &'static str,
}

/// Ranks the fleet of a desk. `top` keeps only the first so many in order; the totals are over all.
///
/// # Errors
/// What the engine refuses of the basis; a stopped watch.
pub fn rank(desk: &Desk, by: By, top: Option<usize>, watch: &Watch) -> Result<Ranking, StudyError> {
    let context = desk.context()?;
    let n = desk.fleet.len();
    let mut outcomes = vec![Outcome::left_out(LeftOut::NoOffer); n];
    let kernel = Kernel::new(&context, &context.candidates, &desk.fleet)?;
    watch.expect(n);
    let parts: Vec<(Sums, Vec<u32>)> = outcomes
        .par_chunks_mut(CHUNK)
        .enumerate()
        .map(|(chunk, out)| {
            let from = chunk * CHUNK;
            if !watch.is_stopped() {
                kernel.evaluate(&desk.fleet, from..from + out.len(), out);
                watch.advance(out.len());
            }
            sum_up(from, out)
        })
        .collect();
    if watch.is_stopped() {
        return Err(StudyError::Stopped);
    }
    let (mut sums, mut left_out) = (Sums::default(), Vec::new());
    for (part, out) in parts {
        sums.units += part.units;
        sums.keep_pv.merge(part.keep_pv);
        sums.best_pv.merge(part.best_pv);
        sums.saving_pv.merge(part.saving_pv);
        sums.units_saving += part.units_saving;
        left_out.extend(out);
    }
    let by = Order { desk, by };
    let order: Vec<u32> = by.of(&outcomes, top).into_iter().map(|(_, i)| i).collect();
    let could_stand = could_stand(&kernel, &by, &outcomes, &order);
    Ok(Ranking { context, outcomes, order, left_out, totals: sums.totals(), could_stand })
}

/// The totals while they are summed: the order of the units and the cut into chunks change no bit of them.
#[derive(Default)]
struct Sums {
    units: usize,
    keep_pv: ExactSum,
    best_pv: ExactSum,
    saving_pv: ExactSum,
    units_saving: usize,
}

impl Sums {
    fn totals(&self) -> Totals {
        Totals {
            units: self.units,
            keep_pv: self.keep_pv.value(),
            best_pv: self.best_pv.value(),
            saving_pv: self.saving_pv.value(),
            units_saving: self.units_saving,
        }
    }
}

/// Where the units of `shown` whose losses are estimated could stand.
fn could_stand(
    kernel: &Kernel<'_>,
    by: &Order<'_>,
    outcomes: &[Outcome],
    shown: &[u32],
) -> FxHashMap<u32, CouldStand> {
    let estimated: Vec<u32> = shown
        .iter()
        .copied()
        .filter(|&i| outcomes[i as usize].flags.has(Flags::LOSS_ESTIMATED))
        .collect();
    if estimated.is_empty() {
        return FxHashMap::default();
    }
    let all = by.of(outcomes, None);
    let place = |i: u32, end: End| {
        let outcome = kernel.at_end(&by.desk.fleet, i as usize, end);
        let key = (by.figure(&outcome, i), i);
        let before = |other: &(f64, u32)| by.compare(other, &key) == Ordering::Less;
        // As it stands it does not stand before itself.
        let itself = before(&(by.figure(&outcomes[i as usize], i), i));
        let ahead = all.partition_point(before) - usize::from(itself);
        outcome.left_out.is_none().then_some(ahead + 1)
    };
    let ends = |i: u32| (i, CouldStand { low: place(i, End::Low), high: place(i, End::High) });
    estimated.into_par_iter().map(ends).collect::<Vec<_>>().into_iter().collect()
}

fn sum_up(from: usize, out: &[Outcome]) -> (Sums, Vec<u32>) {
    let (mut sums, mut left_out) = (Sums::default(), Vec::new());
    for (i, outcome) in out.iter().enumerate() {
        if outcome.left_out.is_some() {
            left_out.push(u32::try_from(from + i).unwrap_or(u32::MAX));
            continue;
        }
        let saving = outcome.saving_pv();
        sums.units += 1;
        sums.keep_pv.add(outcome.keep_pv);
        sums.best_pv.add(outcome.best_pv);
        sums.saving_pv.add(saving);
        sums.units_saving += usize::from(saving > 0.0);
    }
    (sums, left_out)
}

/// An order of the ranked units: by a figure, greatest first, then by the bytes of the identifier.
struct Order<'a> {
    desk: &'a Desk,
    by: By,
}

impl Order<'_> {
    /// The figure of unit number `i` with an outcome.
    fn figure(&self, outcome: &Outcome, i: u32) -> f64 {
        match self.by {
            By::Saving => outcome.saving_pv(),
            By::Waiting => outcome.waiting_pv,
            By::Keep => outcome.keep_pv,
            By::Rating => self.desk.fleet.rated_kva.get(i as usize),
            By::Made => Some(-self.desk.fleet.year_made.get(i as usize))
                .filter(|made| !made.is_nan())
                .unwrap_or(f64::NEG_INFINITY),
            By::Unit => 0.0,
        }
    }

    fn compare(&self, a: &(f64, u32), b: &(f64, u32)) -> Ordering {
        let name = |i: u32| self.desk.fleet.unit.get(i as usize).as_bytes();
        b.0.total_cmp(&a.0).then_with(|| name(a.1).cmp(name(b.1)))
    }

    /// The ranked units with their figures, in order; only the first `top` of them.
    fn of(&self, outcomes: &[Outcome], top: Option<usize>) -> Vec<(f64, u32)> {
        let mut keyed: Vec<(f64, u32)> = (0u32..)
            .zip(outcomes)
            .filter(|(_, outcome)| outcome.left_out.is_none())
            .map(|(i, outcome)| (self.figure(outcome, i), i))
            .collect();
        let compare = |a: &(f64, u32), b: &(f64, u32)| self.compare(a, b);
        if let Some(top) = top.filter(|&top| top < keyed.len()) {
            if top > 0 {
                keyed.select_nth_unstable_by(top - 1, compare);
            }
            keyed.truncate(top);
        }
        keyed.par_sort_unstable_by(compare);
        keyed
    }
}

impl Ranking {
    /// Line number `place` (0 = best) of the ranking; none beyond its end.
    pub fn row<'a>(&self, desk: &'a Desk, place: usize) -> Option<RankRow<'a>> {
        let unit = *self.order.get(place)?;
        let i = unit as usize;
        let could_stand = self.could_stand.get(&unit).copied().unwrap_or_default();
        let outcome = &self.outcomes[i];
        let facts = desk.fleet.facts(i);
        let resolved = resolve(&mut Silent, &facts, &self.context).ok()?;
        let a = &self.context.assumptions;
        let offer = |o: u32| (o != Outcome::NONE).then(|| desk.offer_name(o as usize));
        let t = outcome.best_year_offset;
        let candidate = (outcome.best_offer != Outcome::NONE)
            .then(|| &self.context.candidates[outcome.best_offer as usize]);
        let first_year = candidate.map(|candidate| Replacement {
            place: &resolved,
            candidate,
            offset: usize::from(t),
            assumptions: a,
        });
        #[expect(clippy::cast_possible_truncation, reason = "a calendar year")]
        let year_made = (!facts.year_made.is_nan()).then_some(facts.year_made as i64);
        Some(RankRow {
            rank: place + 1,
            unit: desk.fleet.unit.get(i),
            site: desk.fleet.site(i),
            rated_kva: facts.rated_kva,
            year_made,
            peak_pu: facts.peak_kva / facts.rated_kva,
            keep_pv: outcome.keep_pv,
            now_offer: offer(outcome.now_offer),
            now_pv: (!outcome.now_pv.is_nan()).then_some(outcome.now_pv),
            best_offer: offer(outcome.best_offer),
            best_year_offset: candidate.map(|_| t),
            best_year: candidate.map(|_| a.first_year + i64::from(t)),
            best_pv: outcome.best_pv,
            saving_pv: outcome.saving_pv(),
            waiting_pv: outcome.waiting_pv,
            payback_years: first_year.and_then(|year| year.payback_years(&mut Silent)),
            capital: candidate.map(crate::engine::decision::Candidate::price_installed),
            energy_saved_kwh: first_year.map(|year| year.energy_saved_kwh(&mut Silent)),
            co2_saved_kg: first_year.map(|year| year.co2_saved_kg(&mut Silent)),
            flags: outcome
                .flags
                .with_if(
                    candidate.is_some_and(|c| c.overloaded(&resolved.duty, usize::from(t), a)),
                    Flags::OFFER_OVERLOADED,
                )
                .keys(),
            rank_low: could_stand.low,
            rank_high: could_stand.high,
        })
    }

    /// The ranked units in another order, as places in this ranking.
    pub fn places(&self, desk: &Desk, by: By) -> Vec<u32> {
        let mut place = vec![u32::MAX; self.outcomes.len()];
        for (at, i) in (0u32..).zip(&self.order) {
            place[*i as usize] = at;
        }
        let ordered = Order { desk, by }.of(&self.outcomes, None);
        ordered.into_iter().map(|(_, i)| place[i as usize]).filter(|at| *at != u32::MAX).collect()
    }

    /// Unit number `n` of those left out; none beyond the last.
    pub fn left_out_row<'a>(&self, desk: &'a Desk, n: usize) -> Option<LeftOutRow<'a>> {
        let i = *self.left_out.get(n)? as usize;
        let why = left_out_because(desk, &self.context, i, self.outcomes[i].left_out?);
        Some(LeftOutRow { unit: desk.fleet.unit.get(i), why })
    }

    /// The result as it is written in JSON; rows are made while they are written.
    pub fn result<'a>(&'a self, desk: &'a Desk) -> RankResult<'a> {
        RankResult { ranking: self, desk }
    }
}

/// The JSON result of a ranking.
#[derive(Clone, Copy, Debug)]
pub struct RankResult<'a> {
    ranking: &'a Ranking,
    desk: &'a Desk,
}

struct Rows<F>(usize, F);

impl<T: Serialize, F: Fn(usize) -> Option<T>> Serialize for Rows<F> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut rows = serializer.serialize_seq(Some(self.0))?;
        for row in (0..self.0).filter_map(&self.1) {
            rows.serialize_element(&row)?;
        }
        rows.end()
    }
}

impl Serialize for RankResult<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let (ranking, desk) = (self.ranking, self.desk);
        let a = &ranking.context.assumptions;
        let mut result = serializer.serialize_struct("rank", 6)?;
        result.serialize_field("basis", &a.name)?;
        result.serialize_field("currency", &a.currency)?;
        let rows = Rows(ranking.order.len(), |place| ranking.row(desk, place));
        result.serialize_field("units", &rows)?;
        let left_out = Rows(ranking.left_out.len(), |n| ranking.left_out_row(desk, n));
        result.serialize_field("left_out", &left_out)?;
        result.serialize_field("totals", &ranking.totals)?;
        result.serialize_field("voltage_model", a.voltage_model.word())?;
        result.end()
    }
}
