//! Which losses of a unit are estimated, how far the estimate may be off, and what it rests on.

use serde::Serialize;

use crate::engine::decision::Context;
use crate::engine::decision::place::UnitFacts;
use crate::engine::transformer::estimate::Estimated;
use crate::engine::working::Silent;

/// The losses of a unit that its nameplate leaves blank; null where the nameplate or its total states them.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct EstimatedRow {
    pub no_load_loss_w: Option<EstimatedLoss>,
    pub load_loss_w: Option<EstimatedLoss>,
}

/// An estimated loss at the rating, with the ends of its 95 % prediction interval.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct EstimatedLoss {
    pub estimate_w: f64,
    pub low_w: f64,
    pub high_w: f64,
    pub known_units: usize,
    pub units_set_aside: usize,
    pub terms: Vec<&'static str>,
}

impl EstimatedRow {
    /// What is estimated of a unit; none where nothing is.
    pub fn of(context: &Context, facts: &UnitFacts) -> Option<Self> {
        let missing = context.estimate.as_ref()?.missing(&mut Silent, facts).ok()?;
        let row = Self {
            no_load_loss_w: missing.no_load.map(|estimated| EstimatedLoss::of(&estimated)),
            load_loss_w: missing.load.map(|estimated| EstimatedLoss::of(&estimated)),
        };
        (missing.no_load.is_some() || missing.load.is_some()).then_some(row)
    }

    /// What is estimated, by the names of the losses.
    pub fn losses(&self) -> impl Iterator<Item = (&'static str, &EstimatedLoss)> {
        let all = [("no_load_loss_w", &self.no_load_loss_w), ("load_loss_w", &self.load_loss_w)];
        all.into_iter().filter_map(|(name, loss)| Some((name, loss.as_ref()?)))
    }
}

impl EstimatedLoss {
    fn of(estimated: &Estimated<'_>) -> Self {
        Self {
            estimate_w: estimated.loss_w,
            low_w: estimated.low_w,
            high_w: estimated.high_w,
            known_units: estimated.regression.units,
            units_set_aside: estimated.regression.set_aside,
            terms: estimated.regression.terms(),
        }
    }
}
