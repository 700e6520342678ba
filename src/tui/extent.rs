//! How wide the columns of the ranked fleet are: over all of it, so that nothing jumps while it is scrolled.

use rayon::prelude::*;

use super::text;
use crate::study::Desk;
use crate::study::rank::Ranking;

/// Widths in cells, of the contents alone.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Extent {
    place: usize,
    could_be: usize,
    unit: usize,
    site: usize,
    rating: usize,
    peak: usize,
    keep: usize,
    saving: usize,
    waiting: usize,
    offer: usize,
}

/// The greatest values of the fleet; those of a column are never below 0.
#[derive(Clone, Copy, Default)]
struct Most {
    unit: usize,
    site: usize,
    rating: f64,
    broken: bool,
    peak: f64,
    keep: [f64; 2],
    saving: f64,
    waiting: f64,
}

impl Most {
    fn with(self, other: Self) -> Self {
        Self {
            unit: self.unit.max(other.unit),
            site: self.site.max(other.site),
            rating: self.rating.max(other.rating),
            broken: self.broken || other.broken,
            peak: self.peak.max(other.peak),
            keep: [self.keep[0].min(other.keep[0]), self.keep[1].max(other.keep[1])],
            saving: self.saving.max(other.saving),
            waiting: self.waiting.max(other.waiting),
        }
    }

    fn of(desk: &Desk, ranking: &Ranking, i: usize) -> Self {
        let (fleet, outcome) = (&desk.fleet, &ranking.outcomes[i]);
        let facts = fleet.facts(i);
        Self {
            unit: text::width(fleet.unit.get(i)),
            site: text::width(fleet.site(i).unwrap_or("")),
            rating: facts.rated_kva,
            broken: facts.rated_kva.fract() != 0.0,
            peak: facts.peak_kva / facts.rated_kva,
            keep: [outcome.keep_pv; 2],
            saving: outcome.saving_pv(),
            waiting: outcome.waiting_pv,
        }
    }
}

/// Width of two places with a stroke between them: those that the units of estimated losses could take.
fn could_be(ranking: &Ranking) -> usize {
    let ends = ranking.could_stand.values().map(|could| [could.low, could.high]);
    let wide = |place: Option<usize>| place.map_or(0, |place| text::width(&text::count(place)));
    ends.map(|ends| ends.map(wide).into_iter().max().unwrap_or(0))
        .max()
        .map_or(0, |wide| 2 * wide + 1)
}

impl Extent {
    /// Measures a ranked fleet.
    pub fn of(desk: &Desk, ranking: &Ranking) -> Self {
        let most = ranking
            .order
            .par_iter()
            .map(|i| Most::of(desk, ranking, *i as usize))
            .reduce(Most::default, Most::with);
        let wide = |value: f64, places: usize| text::width(&text::number(value, places));
        let money = |value: f64| wide(value, 0);
        let offers = desk.offers.iter().map(|offer| text::width(&offer.offer));
        Self {
            place: text::width(&text::count(ranking.order.len())),
            could_be: could_be(ranking),
            unit: most.unit,
            site: most.site,
            rating: wide(most.rating, usize::from(most.broken)),
            peak: wide(most.peak, 2),
            keep: most.keep.map(money).into_iter().max().unwrap_or(0),
            saving: money(most.saving),
            waiting: money(most.waiting),
            offer: offers.max().unwrap_or(0),
        }
    }

    /// Width of the column of a figure.
    pub fn width(&self, key: &str) -> usize {
        match key {
            "rank" => self.place,
            "rank_low" => self.could_be,
            "unit" => self.unit,
            "site" => self.site,
            "rated_kva" => self.rating,
            "peak_pu" => self.peak,
            "keep_pv" => self.keep,
            "saving_pv" => self.saving,
            "waiting_pv" => self.waiting,
            "best_offer" => self.offer,
            // A year, "never", "!3".
            _ => 5,
        }
    }
}
