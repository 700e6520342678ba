//! Which bid is the cheapest to own: bids on one lot's terms, limits, ranking, settlement.
//!
//! The way of a bid: [`rates`] (its money in the tender currency) and [`bid`] (its losses at its rating and
//! at the lot's temperature) bring it to the lot's terms; [`factors`] values a kW of loss; [`limits`] says
//! what it misses, [`legal`] what the law says of it; [`tolerance`] what losses above the guarantee may cost;
//! [`ranking`] sets the order. [`map`] shows who wins at other factors, [`changes`] how far an input must move
//! before another bid wins, [`risk`] how sure the winner is; [`settlement`] holds measured losses to the guarantee.
//! Owns no file and no basis; money is per unit in the tender currency, losses are in W, factors per kW.

pub mod bid;
pub mod changes;
pub mod factors;
pub mod legal;
pub mod limits;
pub mod map;
pub mod packages;
pub mod ranking;
pub mod rates;
pub mod risk;
pub mod settlement;
pub mod tolerance;

use chrono::NaiveDate;

use crate::engine::columns::{Lot, Tolerance};
use crate::engine::economics::loss_factors::LossFactors;

pub use bid::{Plane, Valuation};
pub use factors::BasisForFactors;
pub use rates::Rates;

/// What a lot asks and how it judges, with every blank filled in.
#[derive(Clone, Copy, Debug)]
pub struct Terms<'a> {
    /// The lot as it was put out.
    pub lot: &'a Lot,
    /// Rates into the tender currency.
    pub rates: Rates<'a>,
    /// Value of a kW of loss in the tender currency, B at the lot's rating.
    pub factors: LossFactors,
    /// Stray part of a load loss whose split is not known.
    pub stray_share_pu: f64,
    /// Bids within this of the least owning cost count as near-tied.
    pub near_tie_pct: f64,
    /// The day of purchase, whose law counts.
    pub purchase: Option<NaiveDate>,
}

impl Terms<'_> {
    /// The rule for losses above the guarantee.
    pub fn tolerance(&self) -> Tolerance {
        self.lot.tolerance.unwrap_or(Tolerance::Iec)
    }

    /// Number of units.
    pub fn quantity(&self) -> i64 {
        self.lot.quantity.unwrap_or(1)
    }
}
