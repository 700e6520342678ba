//! What a loss above its guarantee may cost: the worst case that a tolerance rule allows, and what lies beyond it.
//!
//! `iec`: IEC 60076-1 Table 1, each component 15 %, the total 10 %. `ieee`: IEEE C57.12.00 clause 9, no-load
//! loss 10 % (memory), the total 6 %. Losses in W, factors in money per kW; B for the bid's rating.

use crate::engine::columns::Tolerance;
use crate::engine::economics::loss_factors::LossFactors;
use crate::engine::transformer::losses::Losses;
use crate::engine::working::{Formula, Recorder};

/// How far losses may exceed their guarantees, as fractions.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Room {
    no_load: f64,
    /// None where only the total limits the load loss.
    load: Option<f64>,
    total: f64,
}

const fn room(rule: Tolerance) -> Room {
    match rule {
        Tolerance::Iec => Room { no_load: 0.15, load: Some(0.15), total: 0.10 },
        Tolerance::Ieee => Room { no_load: 0.10, load: None, total: 0.06 },
        Tolerance::None => Room { no_load: 0.0, load: Some(0.0), total: 0.0 },
    }
}

const NO_LOAD_EXCESS: Formula = Formula {
    name: "no-load loss above the guarantee in the worst case",
    symbol: "x",
    formula: "min(r0·P0, rt·(P0+Pk) − y)",
    unit: "W",
    source: "vertex of the tolerance polygon; IEC 60076-1 Table 1, IEEE C57.12.00 clause 9; methods, section 8",
};
const LOAD_EXCESS: Formula = Formula {
    name: "load loss above the guarantee in the worst case",
    symbol: "y",
    formula: "min(rk·Pk, rt·(P0+Pk) − x)",
    unit: "W",
    source: "vertex of the tolerance polygon; IEC 60076-1 Table 1, IEEE C57.12.00 clause 9; methods, section 8",
};
const LOAD_EXCESS_OF_TOTAL: Formula = Formula { formula: "rt·(P0+Pk) − x", ..LOAD_EXCESS };
const WORST: Formula = Formula {
    name: "what the worst losses within the tolerance cost",
    symbol: "worst",
    formula: "A·x/1000 + B·y/1000",
    unit: "money",
    source: "greatest value over the tolerance polygon; methods, section 8",
};

/// What the worst losses that the rule allows cost above the guaranteed ones.
///
/// A·x + B·y is linear and x + y shares one room, so its greatest value fills the dearer loss first.
pub fn worst<R: Recorder>(
    w: &mut R,
    rule: Tolerance,
    factors: &LossFactors,
    losses: &Losses,
) -> f64 {
    let (a, b) = (factors.factor_a_per_kw, factors.factor_b_per_kw);
    let (p0, pk) = (losses.no_load_loss_w, losses.load_loss_w);
    let room = room(rule);
    let all = room.total * (p0 + pk);
    let own = (room.no_load * p0, room.load.map_or(all, |share| share * pk));
    let (x, y) = if a >= b {
        let x = own.0.min(all);
        (x, own.1.min(all - x))
    } else {
        let y = own.1.min(all);
        (own.0.min(all - y), y)
    };
    w.open();
    let shared = [("P0", p0), ("Pk", pk), ("rt", room.total)];
    let with = |more: &[(&'static str, f64)]| [&shared[..], more].concat();
    let (x_first, y_first) = if a >= b { (x, 0.0) } else { (0.0, y) };
    w.step(&NO_LOAD_EXCESS, &with(&[("r0", room.no_load), ("y", y_first)]), x);
    match room.load {
        Some(share) => w.step(&LOAD_EXCESS, &with(&[("rk", share), ("x", x_first)]), y),
        None => w.step(&LOAD_EXCESS_OF_TOTAL, &with(&[("x", x_first)]), y),
    };
    let value = a * x / 1000.0 + b * y / 1000.0;
    w.close(&WORST, &[("A", a), ("x", x), ("B", b), ("y", y)], value)
}

/// One part of a tolerance rule that measured losses exceed; percent of the guarantee.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Exceeded {
    /// `no-load loss`, `load loss` or `total loss`.
    pub loss: &'static str,
    /// How far it lies above the guarantee; none where nothing was guaranteed.
    pub excess_pct: Option<f64>,
    /// How far it may.
    pub allowed_pct: f64,
}

const EXCESS_PCT: Formula = Formula {
    name: "loss above the guarantee in percent of it",
    symbol: "ΔP_pct",
    formula: "100·ΔP/P",
    unit: "%",
    source: "IEC 60076-1 Table 1, IEEE C57.12.00 clause 9; methods, section 8",
};

/// The parts of the rule that losses `no_load_excess_w` and `load_excess_w` above (below: negative) the guarantees
/// exceed. The total counts the shortfall of one loss against the excess of the other.
pub fn exceeded<R: Recorder>(
    w: &mut R,
    rule: Tolerance,
    guaranteed: &Losses,
    no_load_excess_w: f64,
    load_excess_w: f64,
) -> Vec<Exceeded> {
    let (p0, pk) = (guaranteed.no_load_loss_w, guaranteed.load_loss_w);
    let room = room(rule);
    // Without a tolerance each guarantee stands alone; there is none for the total.
    let total = (rule != Tolerance::None).then_some(room.total);
    let parts = [
        ("no-load loss", Some(room.no_load), no_load_excess_w, p0),
        ("load loss", room.load, load_excess_w, pk),
        ("total loss", total, no_load_excess_w + load_excess_w, p0 + pk),
    ];
    // Equality passes, also after the rounding of a temperature correction.
    let mut above = |(loss, room, excess, base): (&'static str, Option<f64>, f64, f64)| {
        let room = room.filter(|room| excess > room * base + 1e-12 * base)?;
        let excess_pct = (base > 0.0).then(|| {
            let value = 100.0 * excess / base;
            w.step(&EXCESS_PCT, &[("ΔP", excess), ("P", base)], value);
            w.about(&|| loss.to_owned());
            value
        });
        Some(Exceeded { loss, excess_pct, allowed_pct: 100.0 * room })
    };
    parts.into_iter().filter_map(&mut above).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::working::{Silent, Working};

    fn losses(no_load_loss_w: f64, load_loss_w: f64) -> Losses {
        Losses { rated_kva: 100.0, no_load_loss_w, load_loss_w, auxiliary_loss_w: 0.0 }
    }
    fn factors(a: f64, b: f64) -> LossFactors {
        LossFactors { factor_a_per_kw: a, factor_b_per_kw: b, factor_aux_per_kw: 0.0 }
    }

    /// Hand-drawn polygons: P0 1000, Pk 4000 W; iec x ≤ 150, y ≤ 600, x + y ≤ 500; ieee x ≤ 100, x + y ≤ 300.
    #[test]
    fn worst_case_is_a_vertex() {
        let cost = |rule, a, b| worst(&mut Silent, rule, &factors(a, b), &losses(1e3, 4e3));
        let near = |got: f64, want: f64| assert!((got - want).abs() < 1e-9, "{got} {want}");
        near(cost(Tolerance::Iec, 3000.0, 1000.0), 150.0 * 3.0 + 350.0);
        near(cost(Tolerance::Iec, 1000.0, 3000.0), 500.0 * 3.0);
        near(cost(Tolerance::Ieee, 3000.0, 1000.0), 100.0 * 3.0 + 200.0);
        near(cost(Tolerance::Ieee, 1000.0, 3000.0), 300.0 * 3.0);
        assert_eq!(cost(Tolerance::None, 3000.0, 1000.0), 0.0);
        assert_eq!(worst(&mut Silent, Tolerance::Iec, &factors(0.0, 0.0), &losses(1.0, 0.0)), 0.0);
    }

    /// A grid over the polygon never finds a dearer point.
    #[test]
    fn no_point_of_the_polygon_is_dearer() {
        for (p0, pk) in [(1000.0, 4000.0), (3000.0, 500.0), (10.0, 0.0), (0.0, 7.0)] {
            for (a, b) in [(3.0, 1.0), (1.0, 3.0), (2.0, 2.0), (0.0, 1.0)] {
                let got = worst(&mut Silent, Tolerance::Iec, &factors(a, b), &losses(p0, pk));
                for i in 0..=50 {
                    for j in 0..=50 {
                        let (x, y) = (0.003 * f64::from(i) * p0, 0.003 * f64::from(j) * pk);
                        if x + y <= 0.1 * (p0 + pk) {
                            assert!((a * x + b * y) / 1000.0 <= got + 1e-9);
                        }
                    }
                }
            }
        }
    }

    #[test]
    fn equality_is_within() {
        let guaranteed = losses(1000.0, 4000.0);
        let beyond = |rule, x, y| !exceeded(&mut Silent, rule, &guaranteed, x, y).is_empty();
        assert!(!beyond(Tolerance::Iec, 150.0, 350.0) && beyond(Tolerance::Iec, 150.1, 0.0));
        assert!(beyond(Tolerance::Iec, 100.0, 401.0) && !beyond(Tolerance::Iec, -200.0, 600.0));
        assert!(!beyond(Tolerance::Ieee, 100.0, 200.0) && beyond(Tolerance::Ieee, 0.0, 301.0));
        assert!(!beyond(Tolerance::None, 0.0, -5.0) && beyond(Tolerance::None, -5.0, 1.0));
    }

    #[test]
    fn what_is_exceeded_is_named() {
        let found = exceeded(&mut Silent, Tolerance::Iec, &losses(1000.0, 4000.0), 170.0, 400.0);
        let part = |loss, excess_pct, allowed_pct| Exceeded {
            loss,
            excess_pct: Some(excess_pct),
            allowed_pct,
        };
        assert_eq!(found, [part("no-load loss", 17.0, 15.0), part("total loss", 11.4, 10.0)]);
        let nothing = exceeded(&mut Silent, Tolerance::None, &losses(0.0, 4000.0), 1.0, 0.0);
        assert_eq!((nothing.len(), nothing[0].excess_pct), (1, None));
    }

    #[test]
    fn last_step_is_the_figure() {
        let mut working = Working::default();
        let value = worst(&mut working, Tolerance::Iec, &factors(3e3, 1e3), &losses(1e3, 4e3));
        assert_eq!(working.steps().last().map(|step| step.value), Some(value));
    }
}
