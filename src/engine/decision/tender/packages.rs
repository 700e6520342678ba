//! What bids for several lots cost together, and how far one bidder's package lies above the winners.

use crate::engine::working::{Formula, Recorder};

const TOGETHER: Formula = Formula {
    name: "owning cost of the lots together",
    symbol: "cost",
    formula: "Σ owning cost of each lot",
    unit: "money",
    source: "definition",
};
const ABOVE: Formula = Formula {
    name: "what one bidder's package costs above the winners of the same lots",
    symbol: "above",
    formula: "package − winners",
    unit: "money",
    source: "definition",
};

/// Owning cost of lots together.
pub fn together<R: Recorder>(w: &mut R, costs: impl IntoIterator<Item = f64>) -> f64 {
    let sum = costs.into_iter().fold(0.0, |sum, cost| sum + cost);
    w.step(&TOGETHER, &[], sum)
}

/// What a package costs above the winners of the same lots.
pub fn above<R: Recorder>(w: &mut R, package: f64, winners: f64) -> f64 {
    w.step(&ABOVE, &[("package", package), ("winners", winners)], package - winners)
}
