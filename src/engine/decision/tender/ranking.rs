//! The order of admitted bids: least owning cost first, ties by price with adders, then by entry;
//! and the near-tie band, inside which the lower price leads.

use crate::engine::decision::equal_pv;
use crate::engine::working::{Formula, Recorder, Silent};

/// What the order of a bid depends on.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Standing {
    /// Owning cost of one unit.
    pub owning_cost: f64,
    /// Price with adders.
    pub price_with_adders: f64,
    /// Whether it keeps the lot's limits.
    pub admitted: bool,
}

/// The order of a lot's bids, as indices into them.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Ranking {
    /// Admitted bids, least owning cost first.
    pub order: Vec<usize>,
    /// The bids in the near-tie band, lowest price with adders first: the first of them leads.
    pub band: Vec<usize>,
    /// How far the second lies above the first in percent; none with one bid, or where the first is not
    /// above zero.
    pub margin_pct: Option<f64>,
}

/// Ranks the bids of a lot. `near_tie_pct` is the width of the band above the least owning cost.
pub fn rank(bids: &[Standing], near_tie_pct: f64) -> Ranking {
    let mut order: Vec<usize> = (0..bids.len()).filter(|&i| bids[i].admitted).collect();
    sort_with_ties(&mut order, &|i| bids[i].owning_cost, &|tied| {
        sort_with_ties(tied, &|i| bids[i].price_with_adders, &|tied| tied.sort_unstable());
    });
    let Some(&first) = order.first() else { return Ranking::default() };
    let least = bids[first].owning_cost;
    let edge = least + least.abs() * near_tie_pct / 100.0;
    let in_band = |i: &&usize| {
        let cost = bids[**i].owning_cost;
        cost <= edge || equal_pv(cost, edge) || equal_pv(cost, least)
    };
    let mut band: Vec<usize> = order.iter().take_while(in_band).copied().collect();
    let place = |i: &usize| order.iter().position(|j| j == i);
    sort_with_ties(&mut band, &|i| bids[i].price_with_adders, &|tied| tied.sort_by_key(place));
    let second = order.get(1).map(|&i| bids[i].owning_cost);
    let margin_pct = second.and_then(|second| margin(&mut Silent, least, second));
    Ranking { order, band, margin_pct }
}

const MARGIN: Formula = Formula {
    name: "how far the second bid lies above the first",
    symbol: "margin",
    formula: "100·(second/first − 1)",
    unit: "%",
    source: "methods, section 8",
};

/// How far the second owning cost lies above the first in percent; none where the first is not above zero.
pub fn margin<R: Recorder>(w: &mut R, first: f64, second: f64) -> Option<f64> {
    (first > 0.0).then(|| {
        // Bids that tie to rounding are in another order than their costs.
        let value = 100.0 * (second / first - 1.0).max(0.0);
        w.step(&MARGIN, &[("second", second), ("first", first)], value)
    })
}

/// Sorts by a value; runs that equal their first are handed on to be ordered by something else.
fn sort_with_ties(
    items: &mut [usize],
    value: &dyn Fn(usize) -> f64,
    order_tied: &dyn Fn(&mut [usize]),
) {
    items.sort_by(|&a, &b| value(a).total_cmp(&value(b)).then(a.cmp(&b)));
    let mut start = 0;
    while start < items.len() {
        let first = value(items[start]);
        let run = items[start..].iter().take_while(|&&i| equal_pv(first, value(i))).count();
        order_tied(&mut items[start..start + run.max(1)]);
        start += run.max(1);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn standing(owning_cost: f64, price_with_adders: f64) -> Standing {
        Standing { owning_cost, price_with_adders, admitted: true }
    }

    #[test]
    fn ties_go_to_price_then_entry() {
        let cost = 0.1 + 0.2;
        let bids =
            [standing(0.3, 3.0), standing(cost, 2.0), standing(0.3, 2.0), standing(0.2, 9.0)];
        let ranking = rank(&bids, 0.0);
        assert_eq!(ranking.order, [3, 1, 2, 0]);
        assert_eq!(ranking.band, [3]);
        assert!((ranking.margin_pct.expect("two bids") - 50.0).abs() < 1e-9);
    }

    #[test]
    fn lower_price_leads_inside_the_band() {
        let bids = [standing(100.0, 90.0), standing(102.0, 80.0), standing(103.0, 10.0)];
        let ranking = rank(&bids, 2.0);
        assert_eq!(ranking.band, [1, 0]);
        assert_eq!(ranking.order, [0, 1, 2]);
    }

    #[test]
    fn excluded_bids_have_no_place() {
        let out = Standing { admitted: false, ..standing(1.0, 1.0) };
        assert_eq!(rank(&[out], 5.0), Ranking::default());
        let ranking = rank(&[out, standing(5.0, 4.0)], 5.0);
        assert_eq!((ranking.order, ranking.margin_pct), (vec![1], None));
        assert_eq!(rank(&[standing(0.0, 0.0), standing(1.0, 0.0)], 0.0).margin_pct, None);
    }
}
