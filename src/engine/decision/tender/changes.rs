//! How far an input must move, all others held, before another bid becomes the cheapest to own.
//!
//! Closed form where the owning cost is linear in the input or in its square; the discount rate by a search
//! from today's rate outward (see [`DISCOUNT_RATES`]). Moves are in the unit of the input.

use super::factors::{BasisForFactors, Computed, of_lot};
use super::map::{Point, least};
use super::{Plane, Rates, Valuation};
use crate::engine::Refusal;
use crate::engine::columns::Lot;
use crate::engine::economics::loss_factors::LossFactors;
use crate::engine::working::{Formula, Recorder, Silent};

const BY: Formula = Formula {
    name: "move at which another bid costs as much as the winner",
    symbol: "by",
    formula: "lead/slope",
    unit: "",
    source: "a rival's lead over the winner is linear in this input; methods, section 8",
};
const BY_LOAD: Formula = Formula {
    name: "move of the peak load at which another bid costs as much as the winner",
    symbol: "by",
    formula: "|√(B_there/B_rated) − peak|",
    unit: "pu",
    source: "B is proportional to the square of the load; methods, section 8",
};
const BY_RATE: Formula = Formula {
    name: "move of the discount rate at which another bid costs as much as the winner",
    symbol: "by",
    formula: "100·|i_there − i|",
    unit: "%",
    source: "searched outward from today's rate and bisected to 1e-9 points; methods, section 8",
};
const BY_LIMIT: Formula = Formula {
    name: "move of a loss of the winner to the lot's limit, beyond which it is out",
    symbol: "by",
    formula: "limit − today",
    unit: "W",
    source: "limits of the lot; methods, section 8",
};
const NEAREST_A: Formula = Formula {
    name: "A of the nearest pair at which another bid costs as much as the winner",
    symbol: "A_there",
    formula: "foot on the line of equal cost, or where it meets an axis",
    unit: "money/kW",
    source: "methods, section 8",
};
const NEAREST_B: Formula =
    Formula { name: "B of the nearest pair", symbol: "B_there", ..NEAREST_A };
const DISTANCE: Formula = Formula {
    name: "distance of the nearest pair from today's",
    symbol: "distance",
    formula: "√((A_there − A)² + (B_there − B)²)",
    unit: "money/kW",
    source: "definition; methods, section 8",
};

/// States the move of an input on one side.
fn state_move<R: Recorder>(
    w: &mut R,
    formula: &'static Formula,
    inputs: &[(&str, f64)],
    by: f64,
    (quantity, up): (&str, bool),
) {
    w.step(formula, inputs, by);
    w.about(&|| format!("{quantity} {}", side(up)));
}

/// How the working of a change names its sides.
pub fn side(up: bool) -> &'static str {
    if up { "up" } else { "down" }
}

/// Where the winner changes on one side of today's value.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Move {
    /// How far the input moves, not negative.
    pub by: f64,
    /// Its value there.
    pub to: f64,
    /// The bid that wins from there on.
    pub bid: usize,
}

/// How far one input must move.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Change {
    /// Name of the input.
    pub quantity: &'static str,
    /// Today's value.
    pub base: f64,
    /// Downwards; none where the winner never changes.
    pub down: Option<Move>,
    /// Upwards; none where the winner never changes.
    pub up: Option<Move>,
}

/// The bids that compete, the winner among them, and today's factors.
#[derive(Clone, Copy, Debug)]
pub struct Field<'a> {
    /// The bids.
    pub planes: &'a [Plane],
    /// Index of the winner.
    pub winner: usize,
    /// The factors.
    pub factors: LossFactors,
}

/// Where today's winner stands at other factors.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FieldStanding {
    /// Its owning cost.
    pub owning_cost: f64,
    /// How far the best rival lies above it (below: negative); none without rivals.
    pub lead: Option<f64>,
    /// The cheapest to own; today's winner where the best rival is only as cheap.
    pub cheapest: usize,
}

impl Field<'_> {
    /// Where today's winner stands at other factors.
    pub fn standing(&self, factors: &LossFactors) -> FieldStanding {
        self.standing_under(&Valuation { factors: *factors, stray_more_pu: 0.0 })
    }

    /// Where today's winner stands at other factors and another stray share.
    pub fn standing_under(&self, valued: &Valuation) -> FieldStanding {
        let best = self.leads(valued).reduce(|a, b| if b.1 < a.1 { b } else { a });
        FieldStanding {
            owning_cost: self.planes[self.winner].under(valued),
            lead: best.map(|(_, lead)| lead),
            cheapest: best.filter(|(_, lead)| *lead < 0.0).map_or(self.winner, |(j, _)| j),
        }
    }

    /// How far each rival lies above the winner.
    fn leads(&self, valued: &Valuation) -> impl Iterator<Item = (usize, f64)> {
        let winner = self.planes[self.winner].under(valued);
        let others = self.planes.iter().enumerate().filter(|&(j, _)| j != self.winner);
        others.map(move |(j, plane)| (j, plane.under(valued) - winner))
    }

    /// How far each rival lies above the winner today.
    fn leads_today(&self) -> Vec<(usize, f64)> {
        self.leads(&Valuation { factors: self.factors, stray_more_pu: 0.0 }).collect()
    }

    /// The change of an input in which each rival's lead is linear; `slope` is that of a rival's lead.
    fn linear<R: Recorder>(
        &self,
        w: &mut R,
        quantity: &'static str,
        base: f64,
        slope: impl Fn(&Plane, &Plane) -> f64,
    ) -> Change {
        self.linear_to(w, quantity, (base, f64::INFINITY), slope)
    }

    /// The same of an input that goes no higher than `most`.
    fn linear_to<R: Recorder>(
        &self,
        w: &mut R,
        quantity: &'static str,
        (base, most): (f64, f64),
        slope: impl Fn(&Plane, &Plane) -> f64,
    ) -> Change {
        // Down, up: the nearest move with the lead and the slope that give it.
        let mut nearest: [Option<(Move, f64, f64)>; 2] = [None; 2];
        for (bid, lead) in self.leads_today() {
            let slope = slope(&self.planes[bid], &self.planes[self.winner]);
            // A tie that the order has broken can leave a lead below zero by rounding.
            let lead = lead.max(0.0);
            let by = lead / slope.abs();
            let up = slope < 0.0;
            let to = if up { base + by } else { base - by };
            if !by.is_finite() || to < 0.0 || to > most {
                continue;
            }
            let side = &mut nearest[usize::from(up)];
            if side.is_none_or(|(other, ..)| by < other.by) {
                *side = Some((Move { by, to, bid }, lead, slope.abs()));
            }
        }
        let mut told = |up: bool| {
            let (change, lead, slope) = nearest[usize::from(up)]?;
            state_move(w, &BY, &[("lead", lead), ("slope", slope)], change.by, (quantity, up));
            Some(change)
        };
        Change { quantity, base, down: told(false), up: told(true) }
    }

    /// A, B and A_aux.
    pub fn of_factors<R: Recorder>(&self, w: &mut R) -> [Change; 3] {
        let f = &self.factors;
        [
            self.linear(w, "factor_a_per_kw", f.factor_a_per_kw, |rival, winner| {
                rival.no_load_kw - winner.no_load_kw
            }),
            self.linear(w, "factor_b_per_kw", f.factor_b_per_kw, |rival, winner| {
                rival.load_kw - winner.load_kw
            }),
            self.linear(w, "factor_aux_per_kw", f.factor_aux_per_kw, |rival, winner| {
                rival.auxiliary_kw - winner.auxiliary_kw
            }),
        ]
    }

    /// What the winner itself quotes: price, no-load and load loss (W, at its rating). `own` are its factors, `limits`
    /// the lot's highest no-load and load loss.
    pub fn of_winner<R: Recorder>(
        &self,
        w: &mut R,
        price: f64,
        no_load_loss_w: f64,
        load_loss_w: f64,
        own: &LossFactors,
        limits: [Option<f64>; 2],
    ) -> [Change; 3] {
        let (a, b) = (own.factor_a_per_kw, own.factor_b_per_kw);
        let price = self.linear(w, "price", price, |_, _| -1.0);
        let iron = self.linear(w, "no_load_loss_w", no_load_loss_w, |_, _| -a / 1000.0);
        let iron = self.up_to(w, limits[0], iron);
        let copper = self.linear(w, "load_loss_w", load_loss_w, |_, _| -b / 1000.0);
        [price, iron, self.up_to(w, limits[1], copper)]
    }

    /// The change of a loss of the winner that may not pass a limit: beyond it the next bid wins.
    fn up_to<R: Recorder>(&self, w: &mut R, limit: Option<f64>, change: Change) -> Change {
        let Some(limit) = limit.filter(|limit| change.up.is_none_or(|up| up.to > *limit)) else {
            return change;
        };
        let next = self.leads_today().into_iter().min_by(|(_, a), (_, b)| a.total_cmp(b));
        let Some((bid, _)) = next else { return change };
        let by = (limit - change.base).max(0.0);
        let inputs = [("limit", limit), ("today", change.base)];
        state_move(w, &BY_LIMIT, &inputs, by, (change.quantity, true));
        Change { up: Some(Move { by, to: limit, bid }), ..change }
    }

    /// The stray share by which load losses of unknown split were brought to the lot's temperature; none where no
    /// bid was.
    pub fn of_stray_share<R: Recorder>(&self, w: &mut R, stray_share_pu: f64) -> Option<Change> {
        let b = self.factors.factor_b_per_kw;
        self.planes.iter().any(|plane| plane.load_per_stray_kw != 0.0).then(|| {
            self.linear_to(w, "stray_share_pu", (stray_share_pu, 1.0), |rival, winner| {
                b * (rival.load_per_stray_kw - winner.load_per_stray_kw)
            })
        })
    }

    /// What the factors are computed from: discount rate, mean energy price, and the load where B is computed.
    ///
    /// # Errors
    /// The factors cannot be computed.
    pub fn of_basis<R: Recorder>(
        &self,
        w: &mut R,
        lot: &Lot,
        rates: &Rates,
        basis: &BasisForFactors,
    ) -> Result<Vec<Change>, Refusal> {
        let mut changes = vec![
            discount_rate(w, self, lot, rates, basis)?,
            energy_price(w, self, lot, rates, basis)?,
        ];
        if let (true, Some(peak)) = (Computed::by(lot).b, lot.peak_pu) {
            changes.push(load(w, self, peak, lot, rates, basis)?);
        }
        Ok(changes)
    }
}

/// The factors are linear in the energy price, in both methods.
fn energy_price<R: Recorder>(
    w: &mut R,
    field: &Field,
    lot: &Lot,
    rates: &Rates,
    basis: &BasisForFactors,
) -> Result<Change, Refusal> {
    let mut market = basis.market.clone();
    let mut at = |price: f64| {
        market.constant.price_per_kwh = price;
        let basis = BasisForFactors { market: &market, ..*basis };
        of_lot(&mut Silent, lot, rates, Some(&basis)).map(|(factors, _)| factors)
    };
    let (free, one) = (at(0.0)?, at(1.0)?);
    let a = one.factor_a_per_kw - free.factor_a_per_kw;
    let b = one.factor_b_per_kw - free.factor_b_per_kw;
    let aux = one.factor_aux_per_kw - free.factor_aux_per_kw;
    let base = basis.market.constant.price_per_kwh;
    Ok(field.linear(w, "energy_price_per_kwh", base, |rival, winner| {
        a * (rival.no_load_kw - winner.no_load_kw)
            + b * (rival.load_kw - winner.load_kw)
            + aux * (rival.auxiliary_kw - winner.auxiliary_kw)
    }))
}

/// B is proportional to the square of the load, in both methods; A and A_aux do not depend on it.
fn load<R: Recorder>(
    w: &mut R,
    field: &Field,
    peak_pu: f64,
    lot: &Lot,
    rates: &Rates,
    basis: &BasisForFactors,
) -> Result<Change, Refusal> {
    let full = Lot { peak_pu: Some(1.0), ..lot.clone() };
    let b_at_rated = of_lot(&mut Silent, &full, rates, Some(basis))?.0.factor_b_per_kw;
    let [_, factor_b, _] = field.of_factors(&mut Silent);
    let mut moved = |b: Option<Move>, up| {
        let b = b?;
        let to = (b.to / b_at_rated).sqrt();
        let by = (to - peak_pu).abs();
        let inputs = [("B_there", b.to), ("B_rated", b_at_rated), ("peak", peak_pu)];
        to.is_finite().then(|| {
            state_move(w, &BY_LOAD, &inputs, by, ("peak_pu", up));
            Move { by, to, bid: b.bid }
        })
    };
    Ok(Change {
        quantity: "peak_pu",
        base: peak_pu,
        down: moved(factor_b.down, false),
        up: moved(factor_b.up, true),
    })
}

/// Discount rates between which a change of the winner is looked for, as fractions: 0 and 100 %.
pub const DISCOUNT_RATES: [f64; 2] = [0.0, 1.0];
/// How closely the discount rate at which the winner changes is found, in percentage points.
pub const DISCOUNT_RATE_TOLERANCE_PCT: f64 = 1e-9;
/// Steps of the search on each side; they widen with the distance from today's rate.
const STEPS: u32 = 64;

/// The discount rate at which the winner changes, looked for between 0 and 100 % in 64 steps on each side and
/// bisected to 1e-9 percentage points.
fn discount_rate<R: Recorder>(
    w: &mut R,
    field: &Field,
    lot: &Lot,
    rates: &Rates,
    basis: &BasisForFactors,
) -> Result<Change, Refusal> {
    let today = basis.assumptions.rate;
    let mut assumptions = basis.assumptions.clone();
    let mut ahead = |rate: f64| -> Result<Option<usize>, Refusal> {
        assumptions.rate = rate;
        let basis = BasisForFactors { assumptions: &assumptions, ..*basis };
        let factors = of_lot(&mut Silent, lot, rates, Some(&basis))?.0;
        let standing = field.standing(&factors);
        let equal = 1e-12 * standing.owning_cost.abs();
        Ok(standing.lead.filter(|lead| *lead < -equal).map(|_| standing.cheapest))
    };
    let mut search = |end: f64, up: bool| -> Result<Option<Move>, Refusal> {
        let mut kept = today;
        for step in 1..=STEPS {
            let part = f64::from(step) / f64::from(STEPS);
            let rate = today + (end - today) * part * part;
            if let Some(mut bid) = ahead(rate)? {
                let mut lost = rate;
                while (lost - kept).abs() > 0.5 * DISCOUNT_RATE_TOLERANCE_PCT / 100.0 {
                    let middle = 0.5 * (kept + lost);
                    if let Some(winner) = ahead(middle)? {
                        (lost, bid) = (middle, winner);
                    } else {
                        kept = middle;
                    }
                }
                let by = 100.0 * (lost - today).abs();
                let inputs = [("i_there", lost), ("i", today)];
                state_move(w, &BY_RATE, &inputs, by, ("discount_rate_pct", up));
                return Ok(Some(Move { by, to: 100.0 * lost, bid }));
            }
            kept = rate;
        }
        Ok(None)
    };
    let [lowest, highest] = DISCOUNT_RATES;
    Ok(Change {
        quantity: "discount_rate_pct",
        base: 100.0 * today,
        down: if today > lowest { search(lowest, false)? } else { None },
        up: if today < highest { search(highest, true)? } else { None },
    })
}

/// The nearest pair (A, B) at which another bid is as cheap to own.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NearestBorder {
    /// Where it lies.
    pub at: Point,
    /// How far from today's pair, √(ΔA² + ΔB²), in money per kW.
    pub distance_per_kw: f64,
    /// The bid beyond it.
    pub bid: usize,
}

/// The point of the quadrant A, B ≥ 0 nearest to today's at which another bid is as cheap as the winner.
pub fn nearest_border<R: Recorder>(w: &mut R, field: &Field) -> Option<NearestBorder> {
    let today = [field.factors.factor_a_per_kw, field.factors.factor_b_per_kw];
    let winner = field.planes[field.winner];
    let mut found: Vec<NearestBorder> = Vec::new();
    for (bid, lead) in field.leads_today() {
        let rival = field.planes[bid];
        let (p, q) = (rival.no_load_kw - winner.no_load_kw, rival.load_kw - winner.load_kw);
        let lead = lead.max(0.0);
        // The foot of the line lead = 0, and where the line meets the axes.
        let step = lead / (p * p + q * q);
        let foot = [today[0] - step * p, today[1] - step * q];
        let constant = lead - p * today[0] - q * today[1];
        for at in [foot, [0.0, -constant / q], [-constant / p, 0.0]] {
            if at.iter().all(|x| x.is_finite() && *x >= 0.0) {
                let distance_per_kw = (at[0] - today[0]).hypot(at[1] - today[1]);
                found.push(NearestBorder { at, distance_per_kw, bid });
            }
        }
    }
    let nearest = least(0..found.len(), |i| found[i].distance_per_kw).map(|i| found[i])?;
    w.step(&NEAREST_A, &[], nearest.at[0]);
    w.step(&NEAREST_B, &[], nearest.at[1]);
    let inputs =
        [("A_there", nearest.at[0]), ("A", today[0]), ("B_there", nearest.at[1]), ("B", today[1])];
    w.step(&DISTANCE, &inputs, nearest.distance_per_kw);
    Some(nearest)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn plane(fixed: f64, no_load_kw: f64, load_kw: f64) -> Plane {
        Plane { fixed, no_load_kw, load_kw, ..Plane::default() }
    }
    fn field(planes: &[Plane], winner: usize, a: f64, b: f64) -> Field<'_> {
        let factors =
            LossFactors { factor_a_per_kw: a, factor_b_per_kw: b, factor_aux_per_kw: 0.0 };
        Field { planes, winner, factors }
    }

    /// By hand: 1 wins from A = 1000 on; 2 needs B above 3000 − A/2.
    #[test]
    fn moves_end_at_the_borders() {
        let planes = [plane(5000.0, 3.0, 4.0), plane(6000.0, 2.0, 4.0), plane(9000.0, 2.5, 3.0)];
        let field = field(&planes, 1, 2000.0, 500.0);
        let [a, b, aux] = field.of_factors(&mut Silent);
        assert_eq!(a.down, Some(Move { by: 1000.0, to: 1000.0, bid: 0 }));
        assert_eq!(a.up, None, "bid 2 has more iron than the winner");
        assert_eq!(b.up, Some(Move { by: 3500.0, to: 4000.0, bid: 2 }));
        assert_eq!((b.down, aux.down, aux.up), (None, None, None));
        let [price, iron, copper] =
            field.of_winner(&mut Silent, 6000.0, 2000.0, 4000.0, &field.factors, [None; 2]);
        assert_eq!(price.up, Some(Move { by: 1000.0, to: 7000.0, bid: 0 }));
        assert_eq!(iron.up.map(|up| up.by), Some(500.0));
        assert_eq!(copper.up.map(|up| up.by), Some(2000.0));
        assert_eq!((price.down, iron.down, copper.down), (None, None, None));
        // A limit that comes first puts the winner out; one beyond the border changes nothing.
        let limits = [Some(2100.0), Some(6500.0)];
        let [_, iron, copper] =
            field.of_winner(&mut Silent, 6000.0, 2000.0, 4000.0, &field.factors, limits);
        assert_eq!(iron.up, Some(Move { by: 100.0, to: 2100.0, bid: 0 }));
        assert_eq!(copper.up.map(|up| up.by), Some(2000.0));
        let border = nearest_border(&mut Silent, &field).expect("has rivals");
        assert_eq!((border.at, border.distance_per_kw, border.bid), ([1000.0, 500.0], 1000.0, 0));
    }

    /// The foot of the border line lies outside the quadrant: the border is met on the axis.
    #[test]
    fn nearest_border_stays_in_the_quadrant() {
        let planes = [plane(0.0, 1.0, 1.0), plane(100.0, 1.0 - 0.5, 1.0 + 0.5)];
        // lead = 100 − 0.5 A + 0.5 B; today (10, 5): the foot would have B below zero.
        let border = nearest_border(&mut Silent, &field(&planes, 0, 10.0, 5.0)).expect("one rival");
        assert_eq!(border.at, [200.0, 0.0]);
        assert_eq!(nearest_border(&mut Silent, &field(&planes[..1], 0, 1.0, 1.0)), None);
    }

    #[test]
    fn a_tie_is_a_border() {
        let planes = [plane(10.0, 1.0, 1.0), plane(5.0, 2.0, 1.0)];
        let [a, ..] = field(&planes, 0, 5.0, 1.0).of_factors(&mut Silent);
        assert_eq!(a.down.map(|down| down.by), Some(0.0));
        assert_eq!(a.up, None);
    }
}
