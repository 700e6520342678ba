//! Winner map: which bid is the cheapest to own at each pair (A, B), as exact convex polygons.
//!
//! Each bid is a plane over (A, B); the lower envelope of the planes splits the quadrant A, B ≥ 0 into convex
//! cells. A cell is the box cut by the half-plane "not dearer than the other" of every other bid. Computed in
//! a unit box, so that it is the same for every scale of money. Also: borders between cells.

use super::Plane;
use crate::engine::decision::equal_pv;
use crate::engine::economics::loss_factors::LossFactors;
use crate::engine::working::{Formula, Recorder, Silent};

/// Distances below this part of the box are rounding: such vertices are one, such cells are none.
const ROUNDING: f64 = 1e-11;

/// A point of the map: factors A and B in money per kW.
pub type Point = [f64; 2];

/// The part of the map that a bid wins.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Cell {
    /// Part of the box.
    pub share: f64,
    /// Its corners, counter-clockwise from the least A, then least B; empty where it wins nowhere.
    pub polygon: Vec<Point>,
    /// The same corners in parts of the box.
    in_box: Vec<Point>,
}

const SIDE: Formula = Formula {
    name: "how far the box of the map reaches",
    symbol: "max",
    formula: "the greater of 2·factor and 1",
    unit: "money/kW",
    source: "methods, section 8",
};
const CORNER: Formula = Formula {
    name: "corner of what the bid wins: where it costs as much as another, or the edge of the box",
    symbol: "x",
    formula: "part·max",
    unit: "money/kW",
    source: "half-plane intersection in the box of 1 by 1; methods, section 8",
};
const SHARE: Formula = Formula {
    name: "part of the box that the bid wins",
    symbol: "share",
    formula: "½·Σ_k ((u_k − u_0)·(v_{k+1} − v_0) − (u_{k+1} − u_0)·(v_k − v_0))",
    unit: "",
    source: "area of a polygon, corners (u, v) in parts of the box; methods, section 8",
};

/// How far the box reaches along one axis, from today's factor.
pub fn side<R: Recorder>(w: &mut R, factor: f64) -> f64 {
    w.step(&SIDE, &[("factor", factor)], (2.0 * factor).max(1.0))
}

impl Cell {
    /// The part of the box, stated from its corners.
    pub fn share<R: Recorder>(&self, w: &mut R) -> f64 {
        let value = if self.in_box.is_empty() { 0.0 } else { area(&self.in_box) };
        w.step(&SHARE, &[], value)
    }

    /// A corner along one axis (0 = A, 1 = B) in a box that reaches to `max`; none beyond the last.
    pub fn corner<R: Recorder>(&self, w: &mut R, k: usize, axis: usize, max: f64) -> Option<f64> {
        let part = *self.in_box.get(k)?.get(axis)?;
        Some(w.step(&CORNER, &[("part", part), ("max", max)], part * max))
    }
}

/// Which bid wins where.
#[derive(Clone, Debug, PartialEq)]
pub struct WinnerMap {
    /// The box reaches from 0 to this A.
    pub a_max: f64,
    /// The box reaches from 0 to this B.
    pub b_max: f64,
    /// What each bid wins, in the order of the bids.
    pub cells: Vec<Cell>,
}

/// A line between two cells.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Border {
    /// The two bids, as indices; the one entered first leads.
    pub bids: [usize; 2],
    /// One end.
    pub from: Point,
    /// The other end.
    pub to: Point,
}

/// A plane over the unit box: c + p·u + q·v.
#[derive(Clone, Copy, Debug)]
struct Unit {
    c: f64,
    p: f64,
    q: f64,
}

impl Unit {
    fn at(&self, [u, v]: Point) -> f64 {
        self.c + self.p * u + self.q * v
    }

    /// Whether two planes are one over the whole box, to rounding.
    fn same(&self, other: &Self) -> bool {
        [[0.0, 0.0], [1.0, 0.0], [0.0, 1.0], [1.0, 1.0]]
            .iter()
            .all(|&corner| equal_pv(self.at(corner), other.at(corner)))
    }

    fn minus(&self, other: &Self) -> Self {
        Self { c: self.c - other.c, p: self.p - other.p, q: self.q - other.q }
    }
}

impl WinnerMap {
    /// The map over 0..2A × 0..2B of today's factors, at least 1 per kW each. Of bids that are equal all over
    /// the box the one entered first wins.
    pub fn new(planes: &[Plane], today: &LossFactors) -> Self {
        let a_max = side(&mut Silent, today.factor_a_per_kw);
        let b_max = side(&mut Silent, today.factor_b_per_kw);
        let units: Vec<Unit> = planes
            .iter()
            .map(|plane| Unit {
                c: plane.fixed + today.factor_aux_per_kw * plane.auxiliary_kw,
                p: plane.no_load_kw * a_max,
                q: plane.load_kw * b_max,
            })
            .collect();
        let mut distinct: Vec<usize> = Vec::new();
        for (i, unit) in units.iter().enumerate() {
            if !distinct.iter().any(|&j| units[j].same(unit)) {
                distinct.push(i);
            }
        }
        let rivals = strong_first(&units, &distinct);
        let mut cells = vec![Cell::default(); planes.len()];
        let mut clip = Clip::default();
        for &i in &distinct {
            clip.start();
            for &j in rivals.iter().filter(|&&j| j != i) {
                clip.keep_not_above(&units[i].minus(&units[j]));
                if clip.polygon.is_empty() {
                    break;
                }
            }
            cells[i] = cell(&clip.polygon, a_max, b_max);
        }
        Self { a_max, b_max, cells }
    }

    /// The borders between cells, those of the bid entered first leading.
    pub fn borders(&self, planes: &[Plane], today: &LossFactors) -> Vec<Border> {
        let winners: Vec<usize> =
            (0..self.cells.len()).filter(|&i| !self.cells[i].polygon.is_empty()).collect();
        let corners: Vec<(Point, Point)> = winners
            .iter()
            .flat_map(|&i| &self.cells[i].polygon)
            .map(|&corner| (self.unit(corner), corner))
            .collect();
        let mut borders = Vec::new();
        for &i in &winners {
            let polygon = &self.cells[i].polygon;
            for (k, &from) in polygon.iter().enumerate() {
                let to = polygon[(k + 1) % polygon.len()];
                for [from, to] in self.split(from, to, &corners) {
                    let middle = [0.5 * (from[0] + to[0]), 0.5 * (from[1] + to[1])];
                    let factors = LossFactors {
                        factor_a_per_kw: middle[0],
                        factor_b_per_kw: middle[1],
                        ..*today
                    };
                    let others = winners.iter().copied().filter(|&j| j != i);
                    let other = least(others, |j| planes[j].at(&factors));
                    if let Some(j) = other.filter(|&j| i < j && !self.on_edge(from, to)) {
                        borders.push(Border { bids: [i, j], from, to });
                    }
                }
            }
        }
        borders
    }

    /// Whether a segment lies on the edge of the box.
    fn on_edge(&self, from: Point, to: Point) -> bool {
        [self.a_max, self.b_max]
            .iter()
            .enumerate()
            .any(|(axis, &max)| from[axis] == to[axis] && (from[axis] == 0.0 || from[axis] == max))
    }

    /// A point in parts of the box.
    fn unit(&self, [a, b]: Point) -> Point {
        [a / self.a_max, b / self.b_max]
    }

    /// A segment split at the corners (each in parts of the box, and as it is) that lie inside it.
    fn split(&self, from: Point, to: Point, corners: &[(Point, Point)]) -> Vec<[Point; 2]> {
        let (start, end) = (self.unit(from), self.unit(to));
        let (du, dv) = (end[0] - start[0], end[1] - start[1]);
        let length = du.hypot(dv);
        let (du, dv) = (du / length, dv / length);
        let mut inside: Vec<(f64, Point)> = corners
            .iter()
            .filter_map(|&(at, corner)| {
                let (u, v) = (at[0] - start[0], at[1] - start[1]);
                let (along, away) = (u * du + v * dv, u * dv - v * du);
                let between = along > 100.0 * ROUNDING && along < length - 100.0 * ROUNDING;
                (between && away.abs() < 100.0 * ROUNDING).then_some((along, corner))
            })
            .collect();
        inside.sort_by(|a, b| a.0.total_cmp(&b.0));
        inside.dedup_by(|next, last| next.0 - last.0 < 100.0 * ROUNDING);
        let stops = inside.into_iter().map(|(_, corner)| corner).chain([to]);
        let mut from = from;
        stops.map(|to| [std::mem::replace(&mut from, to), to]).collect()
    }
}

/// The item of least value, the first of equal ones.
pub(super) fn least(
    items: impl IntoIterator<Item = usize>,
    value: impl Fn(usize) -> f64,
) -> Option<usize> {
    items
        .into_iter()
        .map(|i| (i, value(i)))
        .reduce(|best, next| if next.1 < best.1 { next } else { best })
        .map(|(i, _)| i)
}

/// The bids, with those that win at the corners and the middle of the box in front: they cut most away.
fn strong_first(units: &[Unit], distinct: &[usize]) -> Vec<usize> {
    let mut rivals = Vec::with_capacity(distinct.len());
    for point in [[0.5, 0.5], [0.0, 0.0], [1.0, 0.0], [0.0, 1.0], [1.0, 1.0]] {
        if let Some(i) = least(distinct.iter().copied(), |i| units[i].at(point))
            && !rivals.contains(&i)
        {
            rivals.push(i);
        }
    }
    let strong = rivals.len();
    for &i in distinct {
        if !rivals[..strong].contains(&i) {
            rivals.push(i);
        }
    }
    rivals
}

/// A convex polygon in the unit box while it is cut, and room to work in.
#[derive(Debug, Default)]
struct Clip {
    polygon: Vec<Point>,
    heights: Vec<f64>,
    kept: Vec<Point>,
}

impl Clip {
    /// The whole box, counter-clockwise.
    fn start(&mut self) {
        self.polygon.clear();
        self.polygon.extend([[0.0, 0.0], [1.0, 0.0], [1.0, 1.0], [0.0, 1.0]]);
    }

    /// Keeps the part in which `d` is not above zero.
    fn keep_not_above(&mut self, d: &Unit) {
        self.heights.clear();
        self.heights.extend(self.polygon.iter().map(|&corner| d.at(corner)));
        if self.heights.iter().all(|height| *height <= 0.0) {
            return;
        }
        self.kept.clear();
        let mut last = self.polygon.len() - 1;
        for k in 0..self.polygon.len() {
            let (below, above) = (self.heights[k] <= 0.0, self.heights[k] > 0.0);
            if (self.heights[last] > 0.0) != above && self.heights[last] != self.heights[k] {
                self.kept.push(self.crossing(d, last, k));
            }
            if below {
                self.kept.push(self.polygon[k]);
            }
            last = k;
        }
        std::mem::swap(&mut self.polygon, &mut self.kept);
        if self.polygon.len() < 3 {
            self.polygon.clear();
        }
    }

    /// Where `d` = 0 crosses the edge between two corners on different sides of it. A border along an axis
    /// gets the very same coordinate at both its ends.
    fn crossing(&self, d: &Unit, from: usize, to: usize) -> Point {
        let ([u0, v0], [u1, v1]) = (self.polygon[from], self.polygon[to]);
        let t = self.heights[from] / (self.heights[from] - self.heights[to]);
        let u = if d.q == 0.0 { -d.c / d.p } else { u0 + t * (u1 - u0) };
        let v = if d.p == 0.0 { -d.c / d.q } else { v0 + t * (v1 - v0) };
        [u, v]
    }
}

/// Distance of a corner from the line through its neighbours.
fn away(before: Point, corner: Point, after: Point) -> f64 {
    let (du, dv) = (after[0] - before[0], after[1] - before[1]);
    let (u, v) = (corner[0] - before[0], corner[1] - before[1]);
    let length = du.hypot(dv);
    if length == 0.0 { 0.0 } else { (u * dv - v * du).abs() / length }
}

/// A cell of the unit box in money: no corner twice, none inside an edge, from the least A, then least B.
fn cell(unit: &[Point], a_max: f64, b_max: f64) -> Cell {
    let mut corners = unit.to_vec();
    let idle = |corners: &[Point]| {
        (0..corners.len()).find(|&k| {
            let n = corners.len();
            let (before, corner, after) =
                (corners[(k + n - 1) % n], corners[k], corners[(k + 1) % n]);
            let step = (corner[0] - before[0]).hypot(corner[1] - before[1]);
            step < ROUNDING || away(before, corner, after) < ROUNDING
        })
    };
    while let Some(k) = idle(&corners) {
        corners.remove(k);
    }
    if corners.len() < 3 {
        return Cell::default();
    }
    // A border along the B axis has one A at both its ends, also after rounding.
    let left = corners.iter().fold(f64::INFINITY, |left, corner| left.min(corner[0]));
    for corner in corners.iter_mut().filter(|corner| corner[0] - left < ROUNDING) {
        corner[0] = left;
    }
    let on_left = (0..corners.len()).filter(|&k| corners[k][0] == left);
    let first = least(on_left, |k| corners[k][1]).unwrap_or(0);
    corners.rotate_left(first);
    Cell {
        share: area(&corners),
        polygon: corners.iter().map(|&[u, v]| [u * a_max, v * b_max]).collect(),
        in_box: corners,
    }
}

/// Area of a polygon, as a fan from its first corner.
fn area(corners: &[Point]) -> f64 {
    let [u0, v0] = corners[0];
    let cross = |pair: &[Point]| {
        let ([u1, v1], [u2, v2]) = (pair[0], pair[1]);
        (u1 - u0) * (v2 - v0) - (u2 - u0) * (v1 - v0)
    };
    0.5 * corners[1..].windows(2).map(cross).sum::<f64>()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn plane(fixed: f64, no_load_kw: f64, load_kw: f64) -> Plane {
        Plane { fixed, no_load_kw, load_kw, ..Plane::default() }
    }
    fn today(a: f64, b: f64) -> LossFactors {
        LossFactors { factor_a_per_kw: a, factor_b_per_kw: b, factor_aux_per_kw: 0.0 }
    }

    /// By hand: two bids that differ by 1 kW of iron against 1000 of price part at A = 1000.
    #[test]
    fn border_at_the_price_of_a_kilowatt() {
        let planes = [plane(5000.0, 3.0, 4.0), plane(6000.0, 2.0, 4.0)];
        let map = WinnerMap::new(&planes, &today(2000.0, 500.0));
        assert_eq!((map.a_max, map.b_max), (4000.0, 1000.0));
        assert_eq!(map.cells[0].share, 0.25);
        let corners = [[0.0, 0.0], [1000.0, 0.0], [1000.0, 1000.0], [0.0, 1000.0]];
        assert_eq!(map.cells[0].polygon, corners);
        assert_eq!(map.cells[1].polygon[0], [1000.0, 0.0]);
        let borders = map.borders(&planes, &today(2000.0, 500.0));
        let border = Border { bids: [0, 1], from: [1000.0, 0.0], to: [1000.0, 1000.0] };
        assert_eq!(borders, [border]);
    }

    #[test]
    fn first_of_equal_bids_wins_all() {
        let planes = [plane(5000.0, 3.0, 4.0); 3];
        let map = WinnerMap::new(&planes, &today(0.0, 0.0));
        assert_eq!((map.a_max, map.b_max), (1.0, 1.0));
        assert_eq!(map.cells[0].share, 1.0);
        assert_eq!((&map.cells[1], &map.cells[2]), (&Cell::default(), &Cell::default()));
        assert!(map.borders(&planes, &today(0.0, 0.0)).is_empty());
    }

    /// The middle of three planes through one line wins on that line only: no area.
    #[test]
    fn bid_that_wins_on_a_line_only_has_no_cell() {
        let planes = [plane(100.0, 3.0, 1.0), plane(200.0, 2.0, 1.5), plane(300.0, 1.0, 2.0)];
        let map = WinnerMap::new(&planes, &today(200.0, 100.0));
        assert_eq!(map.cells[1], Cell::default());
        assert!((map.cells[0].share + map.cells[2].share - 1.0).abs() < 1e-12);
        assert_eq!(map.borders(&planes, &today(200.0, 100.0)).len(), 1);
    }

    /// Three cells around one corner: a border of a long edge is split where the third cell begins.
    #[test]
    fn borders_are_split_at_corners() {
        // 0 wins near the origin, 1 saves iron, 2 saves copper.
        let planes = [plane(0.0, 2.0, 2.0), plane(1.0, 1.0, 2.0), plane(1.0, 2.0, 1.0)];
        let map = WinnerMap::new(&planes, &today(1.0, 1.0));
        let borders = map.borders(&planes, &today(1.0, 1.0));
        let pairs: Vec<_> = borders.iter().map(|border| border.bids).collect();
        assert_eq!(pairs, [[0, 1], [0, 2], [1, 2]]);
        assert_eq!((borders[2].from, borders[2].to), ([2.0, 2.0], [1.0, 1.0]));
    }

    #[test]
    fn no_bid_no_cell() {
        let map = WinnerMap::new(&[], &today(3.0, 4.0));
        assert!(map.cells.is_empty() && map.borders(&[], &today(3.0, 4.0)).is_empty());
    }
}
