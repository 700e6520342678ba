//! How sure the winner of a lot is when the inputs of the basis are not: probability of least owning cost, regret,
//! quantiles, and what each input does on its own.
//!
//! The bids are those that [`super::evaluate`] admits under the basis as it stands; what is drawn are the loss factors
//! and the stray share by which load losses of unknown split came to the lot's temperature.
//! Amounts are per unit in the tender currency.

use serde::Serialize;

use super::{BasisForFactors, Judged, find_lot};
use crate::engine::Refusal;
use crate::engine::columns::{BasisSheet, TenderSheet};
use crate::engine::decision::tender::changes::Field;
use crate::engine::decision::tender::map::Point;
use crate::engine::decision::tender::risk::{UncertainFactors, prospects};
use crate::engine::decision::uncertainty::RankCorrelation;
use crate::engine::loading::PriceSeries;
use crate::study::StudyError;

/// Most draws of a simulation.
pub const MOST_DRAWS: usize = 10_000_000;

/// What is asked of a simulation.
#[derive(Clone, Copy, Debug)]
pub struct Question<'a> {
    /// The basis with its ranges.
    pub basis: &'a BasisSheet,
    /// The price series that it names, where it names one.
    pub series: Option<&'a PriceSeries>,
    /// Inputs that move together.
    pub correlations: &'a [RankCorrelation],
    /// The same seed gives the same result, at any thread count.
    pub seed: u64,
    /// Number of draws.
    pub draws: usize,
}

/// How sure the winner of a lot is.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct RiskResult {
    /// The seed of the draws.
    pub seed: u64,
    /// Number of draws.
    pub draws: usize,
    /// Draws in which an input left its physical range and was moved to its edge.
    pub moved_draws: usize,
    /// The admitted bids, in today's rank order.
    pub bids: Vec<BidRisk>,
    /// What each uncertain input does on its own, the greatest swing first.
    pub swing: Vec<Swing>,
    /// The factors [A, B] drawn.
    #[serde(skip)]
    pub cloud: Vec<Point>,
}

/// How one bid fares.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct BidRisk {
    /// The bid.
    pub bid: String,
    /// Part of the draws in which it is the cheapest to own.
    pub probability_pu: f64,
    /// Mean of what it costs above the cheapest of the draw.
    pub mean_regret: f64,
    /// Owning cost that 5 % of the draws stay below.
    pub owning_cost_p5: f64,
    /// Median owning cost.
    pub owning_cost_p50: f64,
    /// Owning cost that 95 % of the draws stay below.
    pub owning_cost_p95: f64,
}

/// What one input does on its own, all others as in the basis.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Swing {
    /// The input.
    pub quantity: &'static str,
    /// Its low end: the bound, or P5 where there is none.
    pub low: f64,
    /// Its high end: the bound, or P95 where there is none.
    pub high: f64,
    /// Owning cost of today's winner at the low end.
    pub owning_cost_low: f64,
    /// Owning cost of today's winner at the high end.
    pub owning_cost_high: f64,
    /// How far the best rival lies above today's winner at the low end (below: negative); none without rivals.
    pub lead_low: Option<f64>,
    /// The same at the high end.
    pub lead_high: Option<f64>,
    /// Who wins at the low end.
    pub winner_low: String,
    /// Who wins at the high end.
    pub winner_high: String,
}

/// Simulates one lot under an uncertain basis.
///
/// # Errors
/// As [`super::evaluate`]; no admitted bid; a range that is incomplete or of no numeric input; a draw from which
/// no factors can be computed.
pub fn risk(
    sheet: &TenderSheet,
    today: &BasisForFactors,
    lot: &str,
    question: &Question,
) -> Result<RiskResult, StudyError> {
    let lot = find_lot(sheet, lot)?;
    let refused = || StudyError::refused(format!("lot {}", lot.lot));
    if !(1..=MOST_DRAWS).contains(&question.draws) {
        let why = format!("must lie between 1 and {MOST_DRAWS}");
        return Err(refused()(Refusal::new("draws", question.draws, why)));
    }
    let judged = Judged::new(sheet, Some(today), lot)?;
    let Some(field) = judged.contest.field() else {
        let why = "has no bid that keeps its limits; nothing can be compared";
        return Err(refused()(Refusal::new("lot", &lot.lot, why)));
    };
    let Question { basis, series, correlations, seed, draws } = *question;
    let uncertain = UncertainFactors::new(basis, series, lot, judged.terms.rates, correlations)
        .map_err(refused())?;
    let cloud = uncertain.cloud(seed, draws).map_err(refused())?;
    let prospects = prospects(field.planes, &cloud.valuations);
    let of_bid = |i: &usize| {
        let j = judged.contest.bids.iter().position(|bid| bid == i)?;
        let prospect = prospects.get(j)?;
        Some(BidRisk {
            bid: judged.contestant(j),
            probability_pu: prospect.probability_pu,
            mean_regret: prospect.mean_regret,
            owning_cost_p5: prospect.p5,
            owning_cost_p50: prospect.p50,
            owning_cost_p95: prospect.p95,
        })
    };
    Ok(RiskResult {
        seed,
        draws,
        moved_draws: cloud.moved,
        bids: judged.ranking.order.iter().filter_map(of_bid).collect(),
        swing: swings(&uncertain, &field, &judged).map_err(refused())?,
        cloud: cloud
            .valuations
            .iter()
            .map(|v| [v.factors.factor_a_per_kw, v.factors.factor_b_per_kw])
            .collect(),
    })
}

fn swings(
    uncertain: &UncertainFactors,
    field: &Field,
    judged: &Judged,
) -> Result<Vec<Swing>, Refusal> {
    let mut swings = Vec::new();
    for input in uncertain.inputs().inputs() {
        let [low, high] = input.ends();
        let at = |value: f64| -> Result<(f64, Option<f64>, String), Refusal> {
            let drawn = uncertain.inputs().with_one(input, value)?;
            let standing = field.standing_under(&uncertain.valuation(&drawn)?);
            Ok((standing.owning_cost, standing.lead, judged.contestant(standing.cheapest)))
        };
        let (owning_cost_low, lead_low, winner_low) = at(low)?;
        let (owning_cost_high, lead_high, winner_high) = at(high)?;
        swings.push(Swing {
            quantity: input.column.name,
            low,
            high,
            owning_cost_low,
            owning_cost_high,
            lead_low,
            lead_high,
            winner_low,
            winner_high,
        });
    }
    let width = |swing: &Swing| (swing.owning_cost_high - swing.owning_cost_low).abs();
    swings.sort_by(|a, b| width(b).total_cmp(&width(a)).then(a.quantity.cmp(b.quantity)));
    Ok(swings)
}
