//! The regions of a winner map in cells: which bid wins in each, how neighbours are told apart, where signs stand.

use std::collections::BTreeSet;

use super::map::LATTICE;
use crate::study::tender::LotResult;
use crate::tui::theme::REGION_LOOKS;

/// The regions of a map, laid out in cells. Bids are numbers in rank order.
pub(super) struct Regions {
    width: u16,
    /// Who wins in each cell, line by line from the top; none where nobody does or something else stands there.
    winner: Vec<Option<usize>>,
    /// The look of each bid's region: neighbours differ.
    pub(super) looks: Vec<usize>,
}

impl Regions {
    /// As if every region had a cell.
    pub(super) fn all(winners: &[usize]) -> Self {
        let looks = (0..=winners.iter().copied().max().unwrap_or(0)).map(|n| n % REGION_LOOKS);
        Self {
            width: 1,
            winner: winners.iter().copied().map(Some).collect(),
            looks: looks.collect(),
        }
    }

    /// The regions of a lot in a plot of so many cells.
    pub(super) fn new(lot: &LotResult, winners: &[usize], [width, height]: [u16; 2]) -> Self {
        let map = &lot.map;
        let middle =
            |cell: u16, cells: u16, most: f64| most * (f64::from(cell) + 0.5) / f64::from(cells);
        let wins = |x: u16, y: u16| {
            let (a, b) = (middle(x, width, map.a_max), middle(height - 1 - y, height, map.b_max));
            winners.iter().copied().find(|n| holds(&map.bids[*n].polygon, [a, b]))
        };
        let winner: Vec<_> = (0..height).flat_map(|y| (0..width).map(move |x| (x, y))).collect();
        let winner: Vec<_> = winner.into_iter().map(|(x, y)| wins(x, y)).collect();
        // Regions that touch at a corner differ too, where there are looks enough.
        let by = |corners| neighbours(&winner, width, map.bids.len(), corners);
        let looks = looks(&by(true)).or_else(|| looks(&by(false)));
        let looks =
            looks.unwrap_or_else(|| (0..map.bids.len()).map(|n| n % REGION_LOOKS).collect());
        Self { width, winner, looks }
    }

    /// Something else stands in a cell.
    pub(super) fn take(&mut self, [x, y]: [u16; 2]) {
        let at = usize::from(y) * usize::from(self.width) + usize::from(x);
        if let Some(cell) = self.winner.get_mut(at) {
            *cell = None;
        }
    }

    /// Whether a bid has a cell.
    pub(super) fn has_cell(&self, n: usize) -> bool {
        self.winner.contains(&Some(n))
    }

    /// The cells with their winners.
    pub(super) fn cells(&self) -> impl Iterator<Item = ([u16; 2], usize)> {
        let place = |at: usize| {
            let place = |at: usize| u16::try_from(at).unwrap_or(u16::MAX);
            [place(at % usize::from(self.width)), place(at / usize::from(self.width))]
        };
        self.winner.iter().enumerate().filter_map(move |(at, n)| Some((place(at), (*n)?)))
    }

    /// Where signs stand: on a lattice; a region that has none there gets one in its middle.
    pub(super) fn signs(&self) -> Vec<([u16; 2], usize)> {
        let on_lattice = |at: &[u16; 2]| {
            at[0] % LATTICE[0] == LATTICE[0] / 2 && at[1] % LATTICE[1] == LATTICE[1] / 2
        };
        let mut signs: Vec<_> = self.cells().filter(|(at, _)| on_lattice(at)).collect();
        let signed: BTreeSet<usize> = signs.iter().map(|(_, n)| *n).collect();
        let bids: BTreeSet<usize> = self.winner.iter().flatten().copied().collect();
        for n in bids.difference(&signed) {
            let own: Vec<_> = self.cells().filter(|(_, of)| of == n).collect();
            signs.extend(own.get(own.len() / 2));
        }
        signs
    }
}

/// Which regions touch, side by side or one above the other, or also at corners.
fn neighbours(
    winner: &[Option<usize>],
    width: u16,
    bids: usize,
    corners: bool,
) -> Vec<BTreeSet<usize>> {
    let width = usize::from(width);
    let mut touching = vec![BTreeSet::new(); bids];
    for (at, n) in winner.iter().enumerate() {
        let right = (at % width + 1 < width).then_some(at + 1);
        let left = (at % width > 0).then(|| at + width - 1).filter(|_| corners);
        let below = right.map(|right| right + width).filter(|_| corners);
        for other in [right, Some(at + width), left, below].into_iter().flatten() {
            if let (Some(n), Some(Some(m))) = (n, winner.get(other))
                && n != m
            {
                touching[*n].insert(*m);
                touching[*m].insert(*n);
            }
        }
    }
    touching
}

/// A look for each region, unlike those of its neighbours, its own number's where that is free; none where there are
/// too few. Regions of fewest neighbours come last, so that six looks are enough for regions that share sides.
fn looks(touching: &[BTreeSet<usize>]) -> Option<Vec<usize>> {
    let mut left: BTreeSet<usize> = (0..touching.len()).collect();
    let mut order = Vec::new();
    let degree = |left: &BTreeSet<usize>, n: usize| touching[n].intersection(left).count();
    while let Some(least) = left.iter().copied().min_by_key(|n| degree(&left, *n)) {
        left.remove(&least);
        order.push(least);
    }
    let mut looks: Vec<Option<usize>> = vec![None; touching.len()];
    for n in order.into_iter().rev() {
        let taken: BTreeSet<usize> = touching[n].iter().filter_map(|m| looks[*m]).collect();
        looks[n] =
            Some((0..REGION_LOOKS).map(|by| (n + by) % REGION_LOOKS).find(|l| !taken.contains(l))?);
    }
    looks.into_iter().collect()
}

/// Whether a convex polygon with its corners counter-clockwise holds a point.
fn holds(polygon: &[[f64; 2]], [a, b]: [f64; 2]) -> bool {
    polygon.iter().zip(polygon.iter().cycle().skip(1)).all(|(from, to)| {
        (to[0] - from[0]) * (b - from[1]) - (to[1] - from[1]) * (a - from[0]) >= 0.0
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn neighbours_look_different() {
        // A wheel: the hub touches all, each of the rim its two neighbours.
        let rim = 9;
        let mut touching = vec![BTreeSet::new(); rim + 1];
        for n in 0..rim {
            for m in [(n + 1) % rim, rim] {
                touching[n].insert(m);
                touching[m].insert(n);
            }
        }
        let looks = looks(&touching).unwrap();
        for (n, near) in touching.iter().enumerate() {
            assert!(near.iter().all(|m| looks[*m] != looks[n]), "{looks:?}");
        }
    }

    #[test]
    fn polygon_holds_what_lies_in_it() {
        let triangle = [[0.0, 0.0], [2.0, 0.0], [0.0, 2.0]];
        assert!(holds(&triangle, [0.5, 0.5]));
        assert!(holds(&triangle, [1.0, 1.0]), "its edge belongs to it");
        assert!(!holds(&triangle, [1.5, 1.0]));
    }
}
