//! What the evaluation of a tender answers: plain data that serialises with the names of the contract.
//!
//! Amounts are per unit in the tender currency, factors per kW. Fields beyond the contract are for screens and
//! reports and are not serialised.

use serde::ser::SerializeMap as _;
use serde::{Serialize, Serializer};

use super::award::Awards;
use super::misses::Miss;
use super::risk::RiskResult;
use crate::engine::columns::Award;
use crate::engine::decision::equal_pv;
use crate::engine::decision::tender::factors::Computed;
use crate::engine::decision::tender::map::Point;
use crate::engine::transformer::losses::Losses;

/// The evaluation of a tender.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TenderResult {
    /// The tender.
    pub tender: String,
    /// Currency of all amounts.
    pub currency: String,
    /// Its lots, in order of entry.
    pub lots: Vec<LotResult>,
    /// The lots each to its own winner, or all to one bidder.
    pub awards: Awards,
}

/// The evaluation of a lot.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct LotResult {
    /// The lot.
    pub lot: String,
    /// Number of units.
    pub quantity: i64,
    /// Value of a kW of no-load loss.
    pub factor_a_per_kw: f64,
    /// Value of a kW of load loss at the lot's rating.
    pub factor_b_per_kw: f64,
    /// Value of a kW of auxiliary loss.
    pub factor_aux_per_kw: f64,
    /// Bids in rank order; excluded ones follow in order of entry.
    pub bids: Vec<BidResult>,
    /// The bid of least owning cost.
    pub least_owning_cost: Option<String>,
    /// The recommended bid: of the near-tied ones that of lowest price with adders.
    pub recommended: Option<String>,
    /// How far the second lies above the first in percent.
    pub margin_pct: Option<f64>,
    /// Who wins at other factors.
    pub map: MapResult,
    /// How far inputs must move before another bid is the cheapest to own.
    pub changes: Changes,
    /// What is doubtful about the lot.
    pub flags: Vec<&'static str>,
    /// The near-tied bids, lowest price with adders first: the order beside the rank order.
    pub near_tie_order: Vec<String>,
    /// Lines between the cells of the map.
    #[serde(skip)]
    pub borders: Vec<BorderResult>,
    /// The nearest pair (A, B) at which another bid is as cheap.
    pub nearest_border: Option<NearestBorderResult>,
    /// Width of the near-tie band above the least owning cost.
    #[serde(skip)]
    pub near_tie_pct: f64,
    /// Which factors come from the basis.
    #[serde(skip)]
    pub computed: Computed,
    /// Stray share by which load losses of unknown split are brought to the lot's temperature.
    #[serde(skip)]
    pub stray_share_pu: f64,
    /// The award of the lot, where the book has one.
    pub award: Option<Awarded>,
    /// Whether it is compared under the terms of the award.
    #[serde(skip)]
    pub as_awarded: bool,
    /// How sure the winner is, where that was asked.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub risk: Option<RiskResult>,
}

/// The evaluation of a bid; amounts per unit in the tender currency.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct BidResult {
    /// Place by owning cost; none for an excluded bid.
    pub rank: Option<usize>,
    /// The bid.
    pub bid: String,
    /// Who bids.
    pub bidder: Option<String>,
    /// Price.
    pub price: f64,
    /// Capitalised no-load loss.
    pub no_load_cost: f64,
    /// Capitalised load loss.
    pub load_cost: f64,
    /// Capitalised auxiliary loss.
    pub auxiliary_cost: f64,
    /// Freight, installation and other adders.
    pub added_cost: f64,
    /// The sum of the parts.
    pub owning_cost: f64,
    /// The worst that the tolerance allows.
    pub owning_cost_at_tolerance: f64,
    /// The owning cost of all units of the lot.
    pub lot_cost: f64,
    /// Whether it meets the law that the lot names; none where none is named or it is not known.
    pub law: Option<bool>,
    /// Whether it lies in the near-tie band; true for the first too.
    pub near_tie: bool,
    /// Keys of the limits that it misses.
    pub excluded: Vec<&'static str>,
    /// What is doubtful about it.
    pub flags: Vec<&'static str>,
    /// Limits that were not held against it, because its value is blank.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub limits_unknown: Vec<&'static str>,
    /// Its losses at its rating and the lot's reference temperature: what the figures are computed from.
    #[serde(skip)]
    pub losses: Losses,
    /// The limits that it misses, with what is offered and what is asked.
    #[serde(skip)]
    pub misses: Vec<Miss>,
}

/// The award of a lot as the book has it: the terms under which the bid was chosen.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Awarded {
    /// The bid.
    pub bid: String,
    /// Who bids.
    pub bidder: Option<String>,
    /// Who awarded.
    pub awarded_by: String,
    /// When (UTC).
    pub awarded_at: String,
    /// Why, in their own words.
    pub why: Option<String>,
    /// The bid that was recommended at the award.
    pub recommended: Option<String>,
    /// The basis of the comparison.
    pub basis: Option<String>,
    /// Version of the program that compared.
    pub program: String,
    /// Value of a kW of no-load loss at the award.
    pub factor_a_per_kw: f64,
    /// Value of a kW of load loss at the lot's rating at the award.
    pub factor_b_per_kw: f64,
    /// Value of a kW of auxiliary loss at the award.
    pub factor_aux_per_kw: f64,
    /// Stray part of a load loss whose split is not known, at the award.
    pub stray_share_pu: f64,
    /// Owning cost of one unit at the award.
    pub owning_cost: f64,
    /// Owning cost of one unit compared again now.
    pub owning_cost_now: f64,
}

impl Awarded {
    /// Whether a comparison of the lot goes by the very factors of the award.
    pub fn has_factors_of(&self, lot: &LotResult) -> bool {
        self.factor_a_per_kw == lot.factor_a_per_kw
            && self.factor_b_per_kw == lot.factor_b_per_kw
            && self.factor_aux_per_kw == lot.factor_aux_per_kw
    }

    /// The award of a record, its bid as it compares now.
    pub fn of(record: &Award, now: &BidResult) -> Self {
        Self {
            bid: record.bid.clone(),
            bidder: now.bidder.clone(),
            awarded_by: record.awarded_by.clone(),
            awarded_at: record.awarded_at.clone(),
            why: record.why.clone(),
            recommended: record.recommended.clone(),
            basis: record.basis.clone(),
            program: record.program.clone(),
            factor_a_per_kw: record.factor_a_per_kw,
            factor_b_per_kw: record.factor_b_per_kw,
            factor_aux_per_kw: record.factor_aux_per_kw,
            stray_share_pu: record.stray_share_pu,
            owning_cost: record.owning_cost,
            owning_cost_now: now.owning_cost,
        }
    }

    /// Whether the comparison gives another figure now than at the award.
    pub fn differs_now(&self) -> bool {
        !equal_pv(self.owning_cost, self.owning_cost_now)
    }
}

/// The winner map of a lot.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct MapResult {
    /// The box reaches from 0 to this A.
    pub a_max: f64,
    /// The box reaches from 0 to this B.
    pub b_max: f64,
    /// The admitted bids in rank order.
    pub bids: Vec<CellResult>,
}

/// The part of the map that a bid wins.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct CellResult {
    /// The bid.
    pub bid: String,
    /// Part of the box.
    pub share: f64,
    /// Corners [A, B], counter-clockwise from the least A, then least B; empty where it wins nowhere.
    pub polygon: Vec<Point>,
}

/// A line between the cells of two bids.
#[derive(Clone, Debug, PartialEq)]
pub struct BorderResult {
    /// The bids on its sides.
    pub bids: [String; 2],
    /// One end [A, B].
    pub from: Point,
    /// The other end [A, B].
    pub to: Point,
}

/// The pair (A, B) nearest to today's at which another bid is as cheap to own.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct NearestBorderResult {
    /// The pair [A, B].
    pub at: Point,
    /// How far away, √(ΔA² + ΔB²).
    pub distance_per_kw: f64,
    /// The bid beyond it.
    pub bid: String,
}

/// How far inputs must move before the winner changes. As JSON: name → [down, up], each a distance in the unit
/// of the input or null where the winner never changes.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Changes(pub Vec<ChangeResult>);

/// How far one input must move.
#[derive(Clone, Debug, PartialEq)]
pub struct ChangeResult {
    /// Name of the input.
    pub quantity: &'static str,
    /// Today's value.
    pub base: f64,
    /// Downwards.
    pub down: Option<MoveResult>,
    /// Upwards.
    pub up: Option<MoveResult>,
}

/// Where the winner changes.
#[derive(Clone, Debug, PartialEq)]
pub struct MoveResult {
    /// How far the input moves.
    pub by: f64,
    /// Its value there.
    pub to: f64,
    /// The bid that wins from there on.
    pub bid: String,
}

impl Serialize for Changes {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(Some(self.0.len()))?;
        for change in &self.0 {
            let by = |side: &Option<MoveResult>| side.as_ref().map(|side| side.by);
            map.serialize_entry(change.quantity, &[by(&change.down), by(&change.up)])?;
        }
        map.end()
    }
}
