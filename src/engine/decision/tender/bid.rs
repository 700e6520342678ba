//! A bid on the lot's terms: money in the tender currency, losses at its rating and the lot's temperature,
//! and from these its owning cost, alone and for the lot.

use super::{Rates, Terms, tolerance};
use crate::engine::Refusal;
use crate::engine::columns::{Bid, Money, WindingMetal};
use crate::engine::economics::loss_factors::LossFactors;
use crate::engine::economics::owning_cost::{OwningCost, Priced, owning_cost};
use crate::engine::flags::Flags;
use crate::engine::transformer::losses::{Losses, contradict, quoted};
use crate::engine::transformer::plausibility::{looks_in_kw, loss_base_is_far};
use crate::engine::transformer::temperature::{load_loss_at, vanishing_temp_c};
use crate::engine::working::{Formula, Recorder, Silent};

/// A bid on the lot's terms.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Comparable {
    /// Losses at the bid's rating and the lot's reference temperature.
    pub losses: Losses,
    /// Load loss at the bid's rating and the temperature at which it was quoted.
    pub quoted_load_loss_w: f64,
    /// Price of one unit in the tender currency.
    pub price: f64,
    /// Freight, installation and other adders of one unit in the tender currency.
    pub added_cost: f64,
    /// The lot's factors, B for the bid's rating.
    pub factors: LossFactors,
    /// (S_lot/S_bid)²: what a W of this bid's load loss counts at the lot's rating.
    pub load_weight: f64,
    /// What a stray share higher by 1 adds to the load loss; 0 where it was not brought to another temperature.
    pub load_loss_per_stray_w: f64,
    /// What is doubtful.
    pub flags: Flags,
}

/// The owning cost of a bid as a plane over the factors: fixed + A·P0 + B·Pk + A_aux·P_aux (kW).
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Plane {
    /// Price and adders.
    pub fixed: f64,
    /// No-load loss.
    pub no_load_kw: f64,
    /// Load loss, as it counts at the lot's rating.
    pub load_kw: f64,
    /// Auxiliary loss.
    pub auxiliary_kw: f64,
    /// What a stray share higher by 1 adds to the load loss, as it counts at the lot's rating: the conversion to
    /// another temperature is linear in the share.
    pub load_per_stray_kw: f64,
}

/// What bids are valued under: the factors, and how far the stray share lies above that of the planes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Valuation {
    /// The factors.
    pub factors: LossFactors,
    /// Stray share less that of the planes.
    pub stray_more_pu: f64,
}

impl Plane {
    /// The owning cost at some factors.
    pub fn at(&self, factors: &LossFactors) -> f64 {
        self.under(&Valuation { factors: *factors, stray_more_pu: 0.0 })
    }

    /// The owning cost at some factors and another stray share.
    pub fn under(&self, valued: &Valuation) -> f64 {
        let factors = &valued.factors;
        let load_kw = self.load_kw + valued.stray_more_pu * self.load_per_stray_kw;
        self.fixed
            + factors.factor_a_per_kw * self.no_load_kw
            + factors.factor_b_per_kw * load_kw
            + factors.factor_aux_per_kw * self.auxiliary_kw
    }
}

const B_AT_RATING: Formula = Formula {
    name: "value of a kW of load loss of a bid of another rating",
    symbol: "B_bid",
    formula: "B·(S_lot/S_bid)²",
    unit: "money/kW",
    source: "the load is the lot's, copper follows current squared; methods, section 8",
};

/// Brings a bid to the lot's terms.
///
/// # Errors
/// The currency has no rate; a loss is missing or contradicts the total.
pub fn comparable<R: Recorder>(w: &mut R, terms: &Terms, bid: &Bid) -> Result<Comparable, Refusal> {
    let lot = terms.lot;
    let rate = terms.rates.of(bid.currency.as_deref())?;
    let rated_kva = bid.rated_kva.unwrap_or(lot.rated_kva);
    let p0 = Some(bid.no_load_loss_w);
    let (pk, total, aux) = (bid.load_loss_w, bid.total_loss_w, bid.auxiliary_loss_w);
    let mut losses = quoted(w, rated_kva, bid.loss_base_kva, p0, pk, total, aux)?;
    let quoted_load_loss_w = losses.load_loss_w;
    let mut flags = quotation_flags(bid, rated_kva);
    let mut load_loss_per_stray_w = 0.0;

    match (bid.reference_temp_c, lot.reference_temp_c) {
        (Some(quoted_c), Some(lot_c)) if quoted_c != lot_c => {
            let pk = quoted_load_loss_w;
            let stray = terms.stray_share_pu * pk;
            let t0 = vanishing_temp_c(bid.winding_metal.unwrap_or(WindingMetal::Copper));
            losses.load_loss_w = load_loss_at(w, pk - stray, stray, t0, quoted_c, lot_c);
            let all =
                |resistive, stray| load_loss_at(&mut Silent, resistive, stray, t0, quoted_c, lot_c);
            load_loss_per_stray_w = all(0.0, pk) - all(pk, 0.0);
            flags = flags.with(Flags::SPLIT_UNKNOWN);
        }
        (Some(_), Some(_)) => {}
        _ => flags = flags.with(Flags::NO_REFERENCE_TEMP),
    }
    let (p0, pk) = (losses.no_load_loss_w, losses.load_loss_w);
    flags = flags
        .with_if(pk < p0, Flags::LOSSES_SWAPPED)
        .with_if(looks_in_kw(rated_kva, p0, pk), Flags::LOSS_SCALE);

    let adders = adders(bid);
    let ratio = lot.rated_kva / rated_kva;
    Ok(Comparable {
        losses,
        quoted_load_loss_w,
        price: Rates::convert(w, bid.price.amount(), rate, "price"),
        added_cost: Rates::convert(w, adders.amount(), rate, "freight, installation, adders"),
        factors: factors_at(w, terms, rated_kva),
        load_weight: ratio * ratio,
        load_loss_per_stray_w,
        flags,
    })
}

/// Freight, installation and other adders of one unit, in the bid's currency.
fn adders(bid: &Bid) -> Money {
    let adders = [bid.freight_cost, bid.install_cost, bid.adder_cost];
    Money(adders.iter().flatten().map(|adder| adder.0).sum())
}

/// Whether the adders of a bid take off more than half of its price, which a rebate hardly does.
pub fn adders_lower_price(bid: &Bid) -> bool {
    adders(bid).amount() < -0.5 * bid.price.amount()
}

fn quotation_flags(bid: &Bid, rated_kva: f64) -> Flags {
    let contradicts = contradict(Some(bid.no_load_loss_w), bid.load_loss_w, bid.total_loss_w);
    Flags::NONE
        .with_if(bid.load_loss_w.is_none(), Flags::LOAD_LOSS_FROM_TOTAL)
        .with_if(contradicts, Flags::LOSSES_CONTRADICT)
        .with_if(bid.loss_base_kva.is_some_and(|base| base != rated_kva), Flags::LOSS_BASE_DIFFERS)
        .with_if(loss_base_is_far(rated_kva, bid.loss_base_kva), Flags::LOSS_BASE_FAR)
}

/// The lot's factors for a bid of `rated_kva`: B·(S_lot/S_bid)².
pub fn factors_at<R: Recorder>(w: &mut R, terms: &Terms, rated_kva: f64) -> LossFactors {
    let s_lot = terms.lot.rated_kva;
    if rated_kva == s_lot {
        return terms.factors;
    }
    let b = terms.factors.factor_b_per_kw;
    let ratio = s_lot / rated_kva;
    let inputs = [("B", b), ("S_lot", s_lot), ("S_bid", rated_kva)];
    let factor_b_per_kw = w.step(&B_AT_RATING, &inputs, b * (ratio * ratio));
    LossFactors { factor_b_per_kw, ..terms.factors }
}

const AT_TOLERANCE: Formula = Formula {
    name: "worst owning cost that the tolerance allows",
    symbol: "TOC_worst",
    formula: "TOC + worst",
    unit: "money",
    source: "methods, section 8",
};
const FOR_LOT: Formula = Formula {
    name: "owning cost of the lot",
    symbol: "TOC_lot",
    formula: "TOC·n",
    unit: "money",
    source: "methods, section 8",
};

impl Comparable {
    /// Price with adders.
    pub fn price_with_adders(&self) -> f64 {
        self.price + self.added_cost
    }

    /// Owning cost of one unit, in its parts. The last step stated is the total.
    pub fn owning_cost<R: Recorder>(&self, w: &mut R) -> OwningCost {
        let priced = Priced {
            price: self.price,
            added_cost: self.added_cost,
            no_load_loss_w: self.losses.no_load_loss_w,
            load_loss_w: self.losses.load_loss_w,
            auxiliary_loss_w: self.losses.auxiliary_loss_w,
        };
        owning_cost(w, &priced, &self.factors)
    }

    /// Worst owning cost of one unit whose losses keep within the tolerance.
    pub fn at_tolerance<R: Recorder>(&self, w: &mut R, terms: &Terms) -> f64 {
        w.open();
        let cost = self.owning_cost(w).total();
        let worst = tolerance::worst(w, terms.tolerance(), &self.factors, &self.losses);
        w.close(&AT_TOLERANCE, &[("TOC", cost), ("worst", worst)], cost + worst)
    }

    /// Owning cost of all units of the lot.
    pub fn lot_cost<R: Recorder>(&self, w: &mut R, terms: &Terms) -> f64 {
        w.open();
        let cost = self.owning_cost(w).total();
        #[expect(clippy::cast_precision_loss, reason = "at most ten million units")]
        let units = terms.quantity() as f64;
        w.close(&FOR_LOT, &[("TOC", cost), ("n", units)], cost * units)
    }

    /// The owning cost as a plane over the factors.
    pub fn plane(&self) -> Plane {
        Plane {
            fixed: self.price_with_adders(),
            no_load_kw: self.losses.no_load_loss_w / 1000.0,
            load_kw: self.losses.load_loss_w * self.load_weight / 1000.0,
            auxiliary_kw: self.losses.auxiliary_loss_w / 1000.0,
            load_per_stray_kw: self.load_loss_per_stray_w * self.load_weight / 1000.0,
        }
    }
}
