//! Settlement: what losses above the guarantee cost the bidder. No credit for losses below it.
//!
//! Guaranteed losses are those of the bid on the lot's terms; measured load losses come to the lot's reference
//! temperature first. Excess in W (below the guarantee: negative), penalties in the tender currency.

use super::Terms;
use super::bid::Comparable;
use super::tolerance::{self, Exceeded};
use crate::engine::columns::{Bid, Measured, Tolerance, WindingMetal};
use crate::engine::economics::penalty::Excess;
use crate::engine::flags::Flags;
use crate::engine::transformer::losses::Losses;
use crate::engine::transformer::plausibility::looks_in_kw;
use crate::engine::transformer::temperature::{
    load_loss_at, load_loss_at_reference, vanishing_temp_c,
};
use crate::engine::working::{Formula, Recorder};

/// A delivered unit against its guarantee.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Delivered {
    /// Measured losses at the lot's reference temperature; the guarantee where none was measured.
    pub losses: Losses,
    /// What they exceed the guarantee by.
    pub excess: Excess,
    /// What is doubtful.
    pub flags: Flags,
}

const EXCESS: Formula = Formula {
    name: "loss above the guarantee",
    symbol: "ΔP",
    formula: "measured − guaranteed",
    unit: "W",
    source: "methods, section 8",
};

/// Holds the measured losses of a unit against the guarantee of its bid.
pub fn delivered<R: Recorder>(
    w: &mut R,
    terms: &Terms,
    bid: &Bid,
    guaranteed: &Comparable,
    measured: &Measured,
) -> Delivered {
    let mut flags = Flags::NONE;
    let load_loss_w = match (measured.test_temp_c, terms.lot.reference_temp_c) {
        (Some(test_c), Some(reference_c)) => {
            flags = flags.with_if(test_c != reference_c, Flags::SPLIT_UNKNOWN);
            let t0 = vanishing_temp_c(bid.winding_metal.unwrap_or(WindingMetal::Copper));
            let (test_w, stray) = (measured.load_loss_w, terms.stray_share_pu);
            load_loss_at_reference(w, test_w, stray, t0, test_c, reference_c)
        }
        (Some(_), None) => {
            flags = flags.with(Flags::NO_REFERENCE_TEMP);
            measured.load_loss_w
        }
        (None, reference) => {
            let other = |quoted: f64| reference.is_some_and(|reference| quoted != reference);
            let blank = bid.reference_temp_c.is_some_and(other);
            flags = flags.with_if(blank, Flags::TEST_TEMP_BLANK);
            measured.load_loss_w
        }
    };
    let promise = &guaranteed.losses;
    let in_kw = looks_in_kw(promise.rated_kva, measured.no_load_loss_w, load_loss_w);
    flags = flags.with_if(in_kw, Flags::LOSS_SCALE);
    let mut above = |measured: f64, guaranteed: f64, of: &'static str| {
        let inputs = [("measured", measured), ("guaranteed", guaranteed)];
        let value = w.step(&EXCESS, &inputs, measured - guaranteed);
        w.about(&|| of.to_owned());
        value
    };
    let excess = Excess {
        no_load_w: above(measured.no_load_loss_w, promise.no_load_loss_w, "no-load loss"),
        load_w: above(load_loss_w, promise.load_loss_w, "load loss"),
        auxiliary_w: measured
            .auxiliary_loss_w
            .map(|aux| above(aux, promise.auxiliary_loss_w, "auxiliary loss")),
    };
    let losses = Losses {
        rated_kva: promise.rated_kva,
        no_load_loss_w: measured.no_load_loss_w,
        load_loss_w,
        auxiliary_loss_w: measured.auxiliary_loss_w.unwrap_or(promise.auxiliary_loss_w),
        reactance_pu: None,
    };
    Delivered { losses, excess, flags }
}

const CORRECTION_ALONE: Formula = Formula {
    name: "what the two corrections alone put a unit exactly at its guarantee above it",
    symbol: "ΔP_corr",
    formula: "corrected − guaranteed",
    unit: "W",
    source: "methods, section 8",
};

/// How far above its guarantee a unit that is exactly at it comes out when it is tested at another temperature than the
/// lot's (W; below: negative): the bid splits its loss at the temperature of the quotation, the correction of the test at
/// the lot's. None where not both are corrected. With x and r the ratios of resistances of the test and of the lot's
/// temperature, from the lot's and from the quoted one, its sign is that of (r − 1/r)·(x − 1/x).
pub fn correction_alone<R: Recorder>(
    w: &mut R,
    terms: &Terms,
    bid: &Bid,
    guaranteed: &Comparable,
    measured: &Measured,
) -> Option<f64> {
    let (quoted_c, test_c) = (bid.reference_temp_c?, measured.test_temp_c?);
    let reference_c = terms.lot.reference_temp_c?;
    if quoted_c == reference_c || test_c == reference_c {
        return None;
    }
    let t0 = vanishing_temp_c(bid.winding_metal.unwrap_or(WindingMetal::Copper));
    let (share, promised) = (terms.stray_share_pu, guaranteed.losses.load_loss_w);
    let stray = share * guaranteed.quoted_load_loss_w;
    let resistive = guaranteed.quoted_load_loss_w - stray;
    w.open();
    let read = load_loss_at(w, resistive, stray, t0, quoted_c, test_c);
    let corrected = load_loss_at_reference(w, read, share, t0, test_c, reference_c);
    let inputs = [("corrected", corrected), ("guaranteed", promised)];
    Some(w.close(&CORRECTION_ALONE, &inputs, corrected - promised))
}

const MEAN: Formula = Formula {
    name: "mean loss above the guarantee of the tested units",
    symbol: "ΔP",
    formula: "sum/n",
    unit: "W",
    source: "City of Colton purchase specification, June 1988: average of the lot; methods, section 8",
};

/// Mean excess of the tested units; an auxiliary loss that was not measured is no excess.
pub fn mean<R: Recorder>(w: &mut R, units: &[Excess]) -> Excess {
    let n = count(units.len().max(1));
    let mut mean = |of: &'static str, part: &dyn Fn(&Excess) -> f64| {
        let sum: f64 = units.iter().map(part).sum();
        let value = w.step(&MEAN, &[("sum", sum), ("n", n)], sum / n);
        w.about(&|| of.to_owned());
        value
    };
    Excess {
        no_load_w: mean("no-load loss", &|unit| unit.no_load_w),
        load_w: mean("load loss", &|unit| unit.load_w),
        auxiliary_w: Some(mean("auxiliary loss", &|unit| unit.auxiliary_w.unwrap_or(0.0))),
    }
}

const OF_UNITS: Formula = Formula {
    name: "penalty of all measured units",
    symbol: "penalty_lot",
    formula: "Σ penalty of each unit",
    unit: "money",
    source: "methods, section 8",
};
const OF_MEAN: Formula = Formula {
    name: "penalty of all measured units, from that of the mean unit",
    symbol: "penalty_lot",
    formula: "penalty·n",
    unit: "money",
    source: "methods, section 8",
};
const MEAN_COST: Formula = Formula {
    name: "mean owning cost of the measured units as delivered",
    symbol: "TOC_mean",
    formula: "Σ TOC of each unit/n",
    unit: "money",
    source: "definition",
};

/// Penalty of all units, each settled on its own.
pub fn penalty_of_units<R: Recorder>(w: &mut R, penalties: impl Iterator<Item = f64>) -> f64 {
    let sum = penalties.fold(0.0, |sum, penalty| sum + penalty);
    w.step(&OF_UNITS, &[], sum)
}

/// Penalty of `n` units settled on their mean.
pub fn penalty_of_mean<R: Recorder>(w: &mut R, penalty: f64, n: usize) -> f64 {
    let n = count(n);
    w.step(&OF_MEAN, &[("penalty", penalty), ("n", n)], penalty * n)
}

/// Mean of the owning costs of `n` units.
pub fn mean_cost<R: Recorder>(w: &mut R, costs: impl Iterator<Item = f64>, n: usize) -> f64 {
    let (sum, n) = (costs.fold(0.0, |sum, cost| sum + cost), count(n));
    w.step(&MEAN_COST, &[("n", n)], sum / n)
}

#[expect(clippy::cast_precision_loss, reason = "a lot has at most ten million units")]
fn count(n: usize) -> f64 {
    n as f64
}

/// What of the lot's tolerance a unit exceeds, and whether it may be rejected for that: beyond the total of
/// IEEE C57.12.00 the parties consult.
pub fn beyond<R: Recorder>(
    w: &mut R,
    terms: &Terms,
    guaranteed: &Comparable,
    excess: &Excess,
) -> (Vec<Exceeded>, bool) {
    let rule = terms.tolerance();
    let found = tolerance::exceeded(w, rule, &guaranteed.losses, excess.no_load_w, excess.load_w);
    let rejectable = !found.is_empty() && rule != Tolerance::Ieee;
    (found, rejectable)
}
