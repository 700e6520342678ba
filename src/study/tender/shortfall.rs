//! What a bid lacked against the one of least owning cost: how much lower its price, or one of its losses, would
//! have had to be. Amounts per unit in the tender currency.

use super::{BidResult, LotResult};

/// What a bid lacked; a figure that could not have made it up alone is none.
#[derive(Clone, Debug, PartialEq)]
pub struct Shortfall {
    /// The bid of least owning cost.
    pub least: String,
    /// Its owning cost.
    pub least_owning_cost: f64,
    /// How far the bid lies above it.
    pub gap: f64,
    /// The same in percent of the least; none where that is not above zero.
    pub gap_pct: Option<f64>,
    /// How much lower the price would have had to be.
    pub price: Option<f64>,
    /// How much lower the no-load loss.
    pub no_load_loss_w: Option<f64>,
    /// How much lower the load loss, as it is compared.
    pub load_loss_w: Option<f64>,
}

/// What a bid of a lot lacked; none for the cheapest itself, or where no bid is ranked.
pub fn shortfall(lot: &LotResult, bid: &BidResult) -> Option<Shortfall> {
    let least = lot.bids.iter().find(|of| of.rank == Some(1))?;
    let gap = bid.owning_cost - least.owning_cost;
    if least.bid == bid.bid || gap <= 0.0 {
        return None;
    }
    // Each cost is proportional to its loss, so the loss falls by the same part as the cost.
    let less = |cost: f64, of: f64| (cost >= gap && cost > 0.0).then(|| of * gap / cost);
    Some(Shortfall {
        least: least.bid.clone(),
        least_owning_cost: least.owning_cost,
        gap,
        gap_pct: (least.owning_cost > 0.0).then(|| 100.0 * gap / least.owning_cost),
        price: less(bid.price, bid.price),
        no_load_loss_w: less(bid.no_load_cost, bid.losses.no_load_loss_w),
        load_loss_w: less(bid.load_cost, bid.losses.load_loss_w),
    })
}
