//! The winner map of 2,000 random lots against direct evaluation: shares, convexity, order of corners,
//! and the winner at random points of the box.

use ironhum::engine::decision::tender::Plane;
use ironhum::engine::decision::tender::map::{Point, WinnerMap};
use ironhum::engine::economics::loss_factors::LossFactors;
use rand::{RngExt as _, SeedableRng as _};
use rand_chacha::ChaCha8Rng;

/// A lot of up to 60 bids: plain ones, and ones that copy, mix or dominate others.
fn random_lot(rng: &mut ChaCha8Rng) -> (Vec<Plane>, LossFactors) {
    let factor = |rng: &mut ChaCha8Rng, most: f64| match rng.random_range(0..10) {
        0 => 0.0,
        _ => rng.random_range(0.0..most),
    };
    let factors = LossFactors {
        factor_a_per_kw: factor(rng, 12_000.0),
        factor_b_per_kw: factor(rng, 4000.0),
        factor_aux_per_kw: factor(rng, 4000.0),
    };
    let mut planes: Vec<Plane> = Vec::new();
    for _ in 0..rng.random_range(0..=60) {
        let any = rng.random_range(0..planes.len().max(1));
        let other = rng.random_range(0..planes.len().max(1));
        let kind = if planes.is_empty() { 9 } else { rng.random_range(0..10) };
        planes.push(match kind {
            0 => planes[any],
            1 => Plane { fixed: planes[any].fixed + rng.random_range(0.0..500.0), ..planes[any] },
            2 => Plane { load_kw: planes[other].load_kw, ..planes[any] },
            3 => mix(&planes[any], &planes[other], rng.random_range(0.0..1.0)),
            _ => random_bid(rng),
        });
    }
    (planes, factors)
}

/// Price falls as losses rise along a curve that bends, so that many bids win somewhere.
fn random_bid(rng: &mut ChaCha8Rng) -> Plane {
    let (p0, pk) = (rng.random_range(0.3..1.5_f64), rng.random_range(2.0..9.0_f64));
    Plane {
        fixed: 5000.0 + 1500.0 / p0 + 9000.0 / pk + rng.random_range(0.0..200.0),
        no_load_kw: p0,
        load_kw: pk,
        auxiliary_kw: if rng.random_range(0..4) == 0 { rng.random_range(0.0..0.1) } else { 0.0 },
        ..Plane::default()
    }
}

/// A plane through the line in which two others meet.
fn mix(a: &Plane, b: &Plane, part: f64) -> Plane {
    let mix = |a: f64, b: f64| a + part * (b - a);
    Plane {
        fixed: mix(a.fixed, b.fixed),
        no_load_kw: mix(a.no_load_kw, b.no_load_kw),
        load_kw: mix(a.load_kw, b.load_kw),
        auxiliary_kw: mix(a.auxiliary_kw, b.auxiliary_kw),
        ..Plane::default()
    }
}

/// Twice the area of a triangle, positive when its corners run counter-clockwise.
fn turn(a: Point, b: Point, c: Point) -> f64 {
    (b[0] - a[0]) * (c[1] - a[1]) - (c[0] - a[0]) * (b[1] - a[1])
}

/// Whether a convex polygon holds a point, edges included.
fn holds(polygon: &[Point], point: Point) -> bool {
    let last = polygon.len().wrapping_sub(1);
    !polygon.is_empty()
        && (0..polygon.len())
            .all(|k| turn(polygon[if k == 0 { last } else { k - 1 }], polygon[k], point) >= 0.0)
}

fn check_polygon(polygon: &[Point], share: f64, map: &WinnerMap) {
    let unit: Vec<Point> = polygon.iter().map(|p| [p[0] / map.a_max, p[1] / map.b_max]).collect();
    assert_eq!(unit.is_empty(), share == 0.0);
    let n = unit.len();
    let mut area = 0.0;
    for k in 0..n {
        let (before, here, after) = (unit[k], unit[(k + 1) % n], unit[(k + 2) % n]);
        assert!(turn(before, here, after) > 0.0, "convex, no corner inside an edge: {unit:?}");
        area += 0.5 * (before[0] * here[1] - here[0] * before[1]);
        assert!(here.iter().all(|x| (0.0..=1.0).contains(x)), "inside the box");
        let earlier = unit[0][0] < here[0] || (unit[0][0] == here[0] && unit[0][1] <= here[1]);
        assert!(earlier, "starts at the least A, then least B: {unit:?}");
    }
    assert!((area - share).abs() < 1e-12);
}

#[test]
fn map_agrees_with_direct_evaluation() {
    const POINTS: usize = 10_000;
    let mut rng = ChaCha8Rng::seed_from_u64(20_270_101);
    let (mut cells, mut drawn) = (0, 0);
    for _ in 0..2000 {
        let (planes, factors) = random_lot(&mut rng);
        let map = WinnerMap::new(&planes, &factors);
        assert_eq!(map.cells.len(), planes.len());
        let sum: f64 = map.cells.iter().map(|cell| cell.share).sum();
        let whole = if planes.is_empty() { 0.0 } else { 1.0 };
        assert!((sum - whole).abs() < 1e-9, "shares sum to {sum}");
        for cell in &map.cells {
            check_polygon(&cell.polygon, cell.share, &map);
            cells += usize::from(cell.share > 0.0);
        }
        let winners: Vec<usize> = (0..planes.len()).filter(|&i| map.cells[i].share > 0.0).collect();
        let constants: Vec<f64> = planes
            .iter()
            .map(|plane| plane.fixed + factors.factor_aux_per_kw * plane.auxiliary_kw)
            .collect();
        for _ in 0..if planes.is_empty() { 0 } else { POINTS } {
            let point = [rng.random_range(0.0..map.a_max), rng.random_range(0.0..map.b_max)];
            let at = |i: usize| {
                constants[i] + point[0] * planes[i].no_load_kw + point[1] * planes[i].load_kw
            };
            let least = (0..planes.len()).map(at).fold(f64::INFINITY, f64::min);
            // A point within rounding of a border may lie in none of the polygons.
            let Some(&winner) = winners.iter().find(|&&i| holds(&map.cells[i].polygon, point))
            else {
                continue;
            };
            drawn += 1;
            assert!(at(winner) - least <= 1e-9 * least, "bid {winner} wins at {point:?}");
            let first = (0..winner).find(|&i| at(i) == at(winner) && planes[i] == planes[winner]);
            assert_eq!(first, None, "of equal bids the one entered first wins");
        }
    }
    assert!(cells > 8000, "{cells} cells are too few to mean anything");
    assert!(drawn > 1900 * POINTS, "{drawn} points fell into a polygon");
}

/// Each border lies on the line on which its two bids are as dear, and no third is cheaper there.
#[test]
fn borders_are_where_two_bids_are_equal() {
    let mut rng = ChaCha8Rng::seed_from_u64(7);
    let mut seen = 0;
    for _ in 0..300 {
        let (planes, factors) = random_lot(&mut rng);
        let map = WinnerMap::new(&planes, &factors);
        for border in map.borders(&planes, &factors) {
            seen += 1;
            let middle = [0, 1].map(|axis| 0.5 * (border.from[axis] + border.to[axis]));
            let at = |plane: &Plane| {
                plane.at(&LossFactors {
                    factor_a_per_kw: middle[0],
                    factor_b_per_kw: middle[1],
                    ..factors
                })
            };
            let [one, other] = border.bids.map(|i| at(&planes[i]));
            let least = planes.iter().map(at).fold(f64::INFINITY, f64::min);
            assert!(border.bids[0] < border.bids[1]);
            assert!((one - other).abs() <= 1e-8 * least, "{one} {other}");
            assert!(one - least <= 1e-8 * least);
        }
    }
    assert!(seen > 1500, "{seen} borders are too few to mean anything");
}
