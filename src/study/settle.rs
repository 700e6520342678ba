//! Settling guarantees: measured against guaranteed losses of delivered units, penalties, what may be rejected.
//!
//! [`settle`] answers for a whole tender or one lot, [`working`] opens the penalty of one unit. Amounts are per
//! unit in the tender currency. The structs serialise with the names of the contract; what they add stands last.

pub mod letter;
mod workings;

pub use workings::Settled;

use serde::Serialize;

use super::StudyError;
use super::tender::{
    BasisForFactors, award_of, bids_of, bring, factor_scale, find_bid, find_lot, terms,
    terms_at_award,
};
use crate::engine::Refusal;
use crate::engine::columns::{Award, Bid, Lot, Measured, Settlement, TenderSheet, WindingMetal};
use crate::engine::decision::tender::Terms;
use crate::engine::decision::tender::bid::Comparable;
use crate::engine::decision::tender::rates::amount_in_currency;
use crate::engine::decision::tender::settlement::{
    Delivered, beyond, correction_alone, delivered, mean, mean_cost, penalty_of_mean,
    penalty_of_units,
};
use crate::engine::decision::tender::tolerance::Exceeded;
use crate::engine::economics::penalty::{Excess, penalty};
use crate::engine::flags::Flags;
use crate::engine::working::{Recorder, Silent, Step, Working};

/// The settlement of a tender.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct SettleResult {
    /// The tender.
    pub tender: String,
    /// Currency of all amounts.
    pub currency: String,
    /// Each bid of which units were measured, by lot and bid in order of entry.
    pub lots: Vec<LotSettlement>,
}

/// The settlement of a lot with one bid.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct LotSettlement {
    /// The lot.
    pub lot: String,
    /// The bid.
    pub bid: String,
    /// The measured units, in order of entry.
    pub units: Vec<UnitSettlement>,
    /// Penalty of all measured units.
    pub penalty: f64,
    /// `unit` or `lot-mean`.
    pub settlement: &'static str,
    /// Owning cost of one unit as promised.
    pub owning_cost_promised: f64,
    /// Mean owning cost of the measured units as delivered, before the penalty.
    pub owning_cost_delivered: f64,
    /// Who bid.
    pub bidder: Option<String>,
    /// Number of units of the lot.
    pub quantity: i64,
    /// Value of a kW of no-load loss.
    pub factor_a_per_kw: f64,
    /// Value of a kW of load loss at the bid's rating.
    pub factor_b_per_kw: f64,
    /// Value of a kW of auxiliary loss.
    pub factor_aux_per_kw: f64,
    /// What one unit promised, at the lot's reference temperature.
    pub guaranteed: Guaranteed,
    /// What one unit exceeds the guarantee by on the mean; none where each is settled on its own.
    pub mean_excess: Option<MeanExcess>,
    /// The bid that the lot is awarded to; none where it is not awarded. Factors and stray share are those of the
    /// award where it is this one, else today's.
    pub awarded_to: Option<String>,
    /// When it was awarded (UTC).
    pub awarded_at: Option<String>,
    /// What is doubtful about the factors or the lot.
    pub flags: Vec<&'static str>,
    /// Penalty of the units that remain if those that may be rejected are; none where no unit may.
    pub penalty_without_rejectable: Option<f64>,
    /// Currency of the bid, where it is another than the tender's.
    pub bid_currency: Option<String>,
    /// The rate stored with the tender: one unit of that currency in the tender's.
    pub bid_rate: Option<f64>,
    /// The penalty in the currency of the bid.
    pub penalty_in_bid_currency: Option<f64>,
}

/// Guaranteed losses of one unit.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Guaranteed {
    /// Rated power.
    pub rated_kva: f64,
    /// No-load loss.
    pub no_load_loss_w: f64,
    /// Load loss at the lot's reference temperature.
    pub load_loss_w: f64,
    /// Auxiliary loss.
    pub auxiliary_loss_w: f64,
    /// The lot's reference temperature.
    pub reference_temp_c: Option<f64>,
    /// The temperature at which the bid quoted its load loss.
    pub quoted_temp_c: Option<f64>,
    /// The lot's rule for losses above the guarantee.
    pub tolerance: &'static str,
    /// Winding metal, by which a test at another temperature is corrected.
    pub winding_metal: &'static str,
    /// Stray part of the load loss in that correction.
    pub stray_share_pu: f64,
}

/// Mean losses above the guarantee (below: negative).
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct MeanExcess {
    /// Of the no-load loss.
    pub no_load_excess_w: f64,
    /// Of the load loss.
    pub load_excess_w: f64,
    /// Of the auxiliary loss.
    pub auxiliary_excess_w: f64,
}

/// The settlement of a unit.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct UnitSettlement {
    /// Serial number.
    pub serial: String,
    /// No-load loss above the guarantee (below: negative).
    pub no_load_excess_w: f64,
    /// Load loss above the guarantee at the lot's reference temperature (below: negative).
    pub load_excess_w: f64,
    /// Auxiliary loss above the guarantee; none where it was not measured.
    pub auxiliary_excess_w: Option<f64>,
    /// Penalty; under `lot-mean` the unit's equal part of the lot's.
    pub penalty: f64,
    /// Whether it is beyond the lot's tolerance.
    pub beyond_tolerance: bool,
    /// Whether it may be rejected for that.
    pub rejectable: bool,
    /// Owning cost as delivered, before the penalty.
    pub owning_cost_delivered: f64,
    /// What is doubtful.
    pub flags: Vec<&'static str>,
    /// Measured no-load loss.
    pub no_load_loss_w: f64,
    /// Measured load loss, brought to the lot's reference temperature.
    pub load_loss_w: f64,
    /// Measured auxiliary loss.
    pub auxiliary_loss_w: Option<f64>,
    /// Load loss as the test read it.
    pub test_load_loss_w: f64,
    /// Winding temperature of the test.
    pub test_temp_c: Option<f64>,
    /// Date of the test.
    pub tested_on: Option<String>,
    /// Parts of the tolerance that it exceeds.
    pub exceeds: Vec<ExceedsRow>,
    /// The penalty in the currency of the bid, where it is another than the tender's.
    pub penalty_in_bid_currency: Option<f64>,
    /// How far above its guarantee a unit exactly at it comes out at this test's temperature by the corrections alone
    /// (below: negative); none where the bid was quoted or the unit tested at the lot's reference temperature.
    pub correction_alone_w: Option<f64>,
}

/// A part of the tolerance that a unit exceeds; percent of the guarantee.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct ExceedsRow {
    /// `no-load loss`, `load loss` or `total loss`.
    pub loss: &'static str,
    /// How far it lies above the guarantee; none where nothing was guaranteed.
    pub excess_pct: Option<f64>,
    /// How far it may.
    pub allowed_pct: f64,
}

/// Settles the measured units of a tender: of one lot, or of all.
///
/// # Errors
/// An unknown lot or bid, and whatever keeps the bid from being evaluated.
pub fn settle(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: Option<&str>,
) -> Result<SettleResult, StudyError> {
    if let Some(lot) = lot {
        find_lot(sheet, lot)?;
    }
    for unit in &sheet.measured {
        find_lot(sheet, &unit.lot)?;
        find_bid(sheet, &unit.lot, &unit.bid)?;
    }
    let mut lots = Vec::new();
    for lot in sheet.lots.iter().filter(|l| lot.is_none_or(|name| l.lot == name)) {
        for bid in bids_of(sheet, &lot.lot).filter(|bid| measured_of(sheet, bid).next().is_some()) {
            lots.push(Guarantee::new(sheet, basis, lot, bid)?.settle());
        }
    }
    Ok(SettleResult {
        tender: sheet.tender.tender.clone(),
        currency: sheet.tender.currency.clone(),
        lots,
    })
}

/// Opens the penalty of one unit: how it was measured against the guarantee; the last step is the penalty.
///
/// # Errors
/// As [`settle`], and an unknown serial number.
pub fn working(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
    bid: &str,
    serial: &str,
) -> Result<Vec<Step>, StudyError> {
    let (lot, bid) = (find_lot(sheet, lot)?, find_bid(sheet, lot, bid)?);
    let guarantee = Guarantee::new(sheet, basis, lot, bid)?;
    let unit = guarantee.units.iter().find(|unit| unit.serial == serial).ok_or_else(|| {
        let place = format!("lot {}, bid {}", lot.lot, bid.bid);
        let known = guarantee.units.iter().map(|unit| unit.serial.as_str());
        StudyError::unknown("serial", serial, place, known)
    })?;
    let mut working = Working::default();
    guarantee.state_penalty(&mut working, unit)?;
    Ok(working.into_steps())
}

fn measured_of<'a>(sheet: &'a TenderSheet, bid: &Bid) -> impl Iterator<Item = &'a Measured> {
    sheet.measured.iter().filter(move |unit| unit.lot == bid.lot && unit.bid == bid.bid)
}

/// A bid with what it promised and the units that were measured.
struct Guarantee<'a> {
    terms: Terms<'a>,
    bid: &'a Bid,
    promise: Comparable,
    units: Vec<&'a Measured>,
    flags: Flags,
    award: Option<&'a Award>,
    /// Currency of the bid and its rate, where it is another than the tender's.
    foreign: Option<(&'a str, f64)>,
}

impl<'a> Guarantee<'a> {
    fn new(
        sheet: &'a TenderSheet,
        basis: Option<&BasisForFactors>,
        lot: &'a Lot,
        bid: &'a Bid,
    ) -> Result<Self, StudyError> {
        let award = award_of(sheet, &lot.lot);
        let (terms, flags) = match award.filter(|award| award.bid == bid.bid) {
            Some(award) => terms_at_award(sheet, basis, lot, award)?,
            None => terms(&mut Silent, sheet, basis, lot)?,
        };
        let promise = bring(&mut Silent, &terms, bid)?;
        // As it is shown wherever the tender is.
        let flags = flags.with_if(factor_scale(sheet, &terms)?, Flags::FACTOR_SCALE);
        let units: Vec<&Measured> = measured_of(sheet, bid).collect();
        let beyond = i64::try_from(units.len()).is_ok_and(|n| n > terms.quantity());
        let flags = flags.with_if(beyond, Flags::MEASURED_BEYOND);
        let foreign = bid.currency.as_deref().filter(|code| *code != sheet.tender.currency);
        let rated = |code| Ok::<_, Refusal>((code, terms.rates.of(Some(code))?));
        let foreign = foreign.map(rated).transpose()?;
        Ok(Self { terms, bid, promise, units, flags, award, foreign })
    }

    fn rule(&self) -> Settlement {
        self.terms.lot.settlement.unwrap_or(Settlement::Unit)
    }

    fn delivered(&self, unit: &Measured) -> Delivered {
        delivered(&mut Silent, &self.terms, self.bid, &self.promise, unit)
    }

    fn excesses(&self) -> Vec<Excess> {
        self.units.iter().map(|unit| self.delivered(unit).excess).collect()
    }

    fn settle(&self) -> LotSettlement {
        let (factors, losses) = (&self.promise.factors, &self.promise.losses);
        let mean = match self.rule() {
            Settlement::Unit => None,
            Settlement::LotMean => Some(mean(&mut Silent, &self.excesses())),
        };
        let of_mean = mean.map(|mean| penalty(&mut Silent, factors, &mean));
        let units: Vec<UnitSettlement> =
            self.units.iter().map(|unit| self.settle_unit(unit, of_mean)).collect();
        let tested = units.len();
        let owed = of_mean.map_or_else(
            || penalty_of_units(&mut Silent, units.iter().map(|unit| unit.penalty)),
            |of_mean| penalty_of_mean(&mut Silent, of_mean, tested),
        );
        LotSettlement {
            lot: self.bid.lot.clone(),
            bid: self.bid.bid.clone(),
            penalty: owed,
            settlement: self.rule().word(),
            owning_cost_promised: self.promise.owning_cost(&mut Silent).total(),
            owning_cost_delivered: mean_cost(
                &mut Silent,
                units.iter().map(|unit| unit.owning_cost_delivered),
                tested,
            ),
            bidder: self.bid.bidder.clone(),
            quantity: self.terms.quantity(),
            factor_a_per_kw: factors.factor_a_per_kw,
            factor_b_per_kw: factors.factor_b_per_kw,
            factor_aux_per_kw: factors.factor_aux_per_kw,
            guaranteed: Guaranteed {
                rated_kva: losses.rated_kva,
                no_load_loss_w: losses.no_load_loss_w,
                load_loss_w: losses.load_loss_w,
                auxiliary_loss_w: losses.auxiliary_loss_w,
                reference_temp_c: self.terms.lot.reference_temp_c,
                quoted_temp_c: self.bid.reference_temp_c,
                tolerance: self.terms.tolerance().word(),
                winding_metal: self.bid.winding_metal.unwrap_or(WindingMetal::Copper).word(),
                stray_share_pu: self.terms.stray_share_pu,
            },
            mean_excess: mean.map(|mean| MeanExcess {
                no_load_excess_w: mean.no_load_w,
                load_excess_w: mean.load_w,
                auxiliary_excess_w: mean.auxiliary_w.unwrap_or(0.0),
            }),
            awarded_to: self.award.map(|award| award.bid.clone()),
            awarded_at: self.award.map(|award| award.awarded_at.clone()),
            flags: self.flags.keys(),
            penalty_without_rejectable: self.penalty_of_accepted(&mut Silent, &units),
            bid_currency: self.foreign.map(|(code, _)| code.to_owned()),
            bid_rate: self.foreign.map(|(_, rate)| rate),
            penalty_in_bid_currency: self
                .foreign
                .map(|(_, rate)| amount_in_currency(&mut Silent, owed, rate)),
            units,
        }
    }

    /// The penalty of the units that may not be rejected; none where none may.
    fn penalty_of_accepted<R: Recorder>(&self, w: &mut R, units: &[UnitSettlement]) -> Option<f64> {
        if !units.iter().any(|unit| unit.rejectable) {
            return None;
        }
        let kept = || units.iter().zip(&self.units).filter(|(unit, _)| !unit.rejectable);
        Some(match self.rule() {
            Settlement::Unit => penalty_of_units(w, kept().map(|(unit, _)| unit.penalty)),
            Settlement::LotMean => {
                let excesses: Vec<Excess> =
                    kept().map(|(_, unit)| self.delivered(unit).excess).collect();
                let mean = mean(w, &excesses);
                let of_mean = penalty(w, &self.promise.factors, &mean);
                penalty_of_mean(w, of_mean, excesses.len())
            }
        })
    }

    /// A unit as a bid with the losses that were measured.
    fn as_delivered<R: Recorder>(&self, w: &mut R, unit: &Measured) -> Comparable {
        let delivered = delivered(w, &self.terms, self.bid, &self.promise, unit);
        Comparable { losses: delivered.losses, ..self.promise }
    }

    fn settle_unit(&self, unit: &Measured, of_mean: Option<f64>) -> UnitSettlement {
        let delivered = self.delivered(unit);
        let (excess, factors) = (delivered.excess, &self.promise.factors);
        let (exceeded, rejectable) = beyond(&mut Silent, &self.terms, &self.promise, &excess);
        let as_delivered = self.as_delivered(&mut Silent, unit);
        let owed = of_mean.unwrap_or_else(|| penalty(&mut Silent, factors, &excess));
        UnitSettlement {
            serial: unit.serial.clone(),
            no_load_excess_w: excess.no_load_w,
            load_excess_w: excess.load_w,
            auxiliary_excess_w: excess.auxiliary_w,
            penalty: owed,
            beyond_tolerance: !exceeded.is_empty(),
            rejectable,
            owning_cost_delivered: as_delivered.owning_cost(&mut Silent).total(),
            flags: self.promise.flags.with(delivered.flags).keys(),
            no_load_loss_w: unit.no_load_loss_w,
            load_loss_w: delivered.losses.load_loss_w,
            auxiliary_loss_w: unit.auxiliary_loss_w,
            test_load_loss_w: unit.load_loss_w,
            test_temp_c: unit.test_temp_c,
            tested_on: unit.tested_on.clone(),
            exceeds: exceeded
                .into_iter()
                .map(|Exceeded { loss, excess_pct, allowed_pct }| ExceedsRow {
                    loss,
                    excess_pct,
                    allowed_pct,
                })
                .collect(),
            penalty_in_bid_currency: self
                .foreign
                .map(|(_, rate)| amount_in_currency(&mut Silent, owed, rate)),
            correction_alone_w: correction_alone(
                &mut Silent,
                &self.terms,
                self.bid,
                &self.promise,
                unit,
            ),
        }
    }
}
