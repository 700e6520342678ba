//! Awarding several lots: each to its own winner, or all to one bidder, and what the second costs more.
//!
//! A bidder's package is its cheapest admitted bid in every lot. Amounts are owning costs of whole lots in the
//! tender currency.

use serde::Serialize;

use super::{BidResult, LotResult};
use crate::engine::decision::tender::packages::{above, together};
use crate::engine::working::{Recorder, Silent};

/// How the lots may be awarded.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct Awards {
    /// Each lot to the bid of least owning cost.
    pub by_lot: Package,
    /// All lots to one bidder: those who cover most lots first, then the cheapest.
    pub packages: Vec<BidderPackage>,
}

/// Bids for several lots.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct Package {
    /// The bids, in order of the lots.
    pub bids: Vec<PackageBid>,
    /// Lots without an admitted bid.
    pub lots_missing: Vec<String>,
    /// Owning cost of the lots that are covered.
    pub lot_cost: f64,
}

/// One bid of a package.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct PackageBid {
    /// The lot.
    pub lot: String,
    /// The bid.
    pub bid: String,
    /// Who bids.
    pub bidder: Option<String>,
    /// Owning cost of the lot.
    pub lot_cost: f64,
}

/// All lots to one bidder.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct BidderPackage {
    /// The bidder.
    pub bidder: String,
    /// Its bids.
    #[serde(flatten)]
    pub package: Package,
    /// What the package costs above the winners of the same lots.
    pub above_by_lot: f64,
}

impl Package {
    /// The cheapest admitted bid of each lot among those that `by` takes.
    fn of(lots: &[LotResult], by: impl Fn(&BidResult) -> bool) -> Self {
        let mut package = Self::default();
        for lot in lots {
            // Bids are in rank order, so the first one is the cheapest.
            let Some(bid) = lot.bids.iter().find(|bid| bid.rank.is_some() && by(bid)) else {
                package.lots_missing.push(lot.lot.clone());
                continue;
            };
            package.bids.push(PackageBid {
                lot: lot.lot.clone(),
                bid: bid.bid.clone(),
                bidder: bid.bidder.clone(),
                lot_cost: bid.lot_cost,
            });
        }
        package.lot_cost = package.cost(&mut Silent);
        package
    }

    /// What its bids cost together.
    pub(super) fn cost<R: Recorder>(&self, w: &mut R) -> f64 {
        together(w, self.bids.iter().map(|bid| bid.lot_cost))
    }

    /// What the winners of the same lots cost together.
    pub(super) fn winners<'a>(&self, by_lot: &'a Self) -> impl Iterator<Item = f64> + use<'a, '_> {
        let covered = |bid: &&PackageBid| self.bids.iter().any(|own| own.lot == bid.lot);
        by_lot.bids.iter().filter(covered).map(|bid| bid.lot_cost)
    }
}

/// Compares awarding each lot on its own with awarding all to one bidder.
pub fn awards(lots: &[LotResult]) -> Awards {
    let by_lot = Package::of(lots, |_| true);
    let mut bidders: Vec<&str> = lots
        .iter()
        .flat_map(|lot| &lot.bids)
        .filter(|bid| bid.rank.is_some())
        .filter_map(|bid| bid.bidder.as_deref())
        .collect();
    bidders.sort_unstable();
    bidders.dedup();
    let mut packages: Vec<BidderPackage> = bidders
        .into_iter()
        .map(|bidder| {
            let package = Package::of(lots, |bid| bid.bidder.as_deref() == Some(bidder));
            let winners = together(&mut Silent, package.winners(&by_lot));
            let above_by_lot = above(&mut Silent, package.lot_cost, winners);
            BidderPackage { bidder: bidder.to_owned(), package, above_by_lot }
        })
        .collect();
    packages.sort_by(|a, b| {
        let covered = b.package.bids.len().cmp(&a.package.bids.len());
        covered.then(a.package.lot_cost.total_cmp(&b.package.lot_cost))
    });
    Awards { by_lot, packages }
}
