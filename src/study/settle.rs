//! Settling guarantees: measured against guaranteed losses of delivered units, penalties, what may be rejected.
//!
//! [`settle`] answers for a whole tender or one lot, [`working`] opens the penalty of one unit. Amounts are per
//! unit in the tender currency. The structs serialise with the names of the contract; what they add stands last.

use serde::Serialize;

use super::StudyError;
use super::tender::{BasisForFactors, Case, bids_of, bring, find_bid, find_lot, terms};
use crate::engine::columns::{Bid, Lot, Measured, Settlement, TenderSheet};
use crate::engine::decision::tender::Terms;
use crate::engine::decision::tender::bid::Comparable;
use crate::engine::decision::tender::settlement::{
    Delivered, Excess, beyond, delivered, mean, mean_cost, penalty, penalty_of_mean,
    penalty_of_units,
};
use crate::engine::working::{Recorder, Silent, Step, Working};
use crate::study::explain::{Explained, nth, numbers};

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

/// The settlement of a tender as a result that can be opened.
#[derive(Clone, Copy, Debug)]
pub struct Settled<'a>(pub &'a Case);

impl Explained for Settled<'_> {
    fn called(&self) -> String {
        format!("the settlement of tender {}", self.0.sheet.tender.tender)
    }

    fn figures(&self) -> Result<Vec<(String, f64)>, StudyError> {
        let result = settle(&self.0.sheet, self.0.basis().as_ref(), None)?;
        Ok(numbers(&result, &[], &[]))
    }

    fn state(&self, w: &mut Working, place: &[&str]) -> Result<(), StudyError> {
        let (sheet, basis) = (&self.0.sheet, self.0.basis());
        let result = settle(sheet, basis.as_ref(), None)?;
        let ["lots", n, place @ ..] = place else { return Ok(()) };
        let (settled, _) = nth(&result.lots, n)?;
        let (lot, bid) =
            (find_lot(sheet, &settled.lot)?, find_bid(sheet, &settled.lot, &settled.bid)?);
        let guarantee = Guarantee::new(sheet, basis.as_ref(), lot, bid)?;
        match place {
            ["units", m, quantity] => {
                let (_, m) = nth(&settled.units, m)?;
                guarantee.state_unit(w, guarantee.units[m], quantity)
            }
            ["penalty"] => guarantee.state_lot_penalty(w, settled),
            ["owning_cost_promised"] => {
                let promise = bring(w, &guarantee.terms, bid)?;
                promise.owning_cost(w);
                Ok(())
            }
            _ => {
                for unit in &guarantee.units {
                    guarantee.as_delivered(&mut Silent, unit).owning_cost(w);
                    w.about(&|| unit.serial.clone());
                }
                let costs = settled.units.iter().map(|unit| unit.owning_cost_delivered);
                mean_cost(w, costs, settled.units.len());
                Ok(())
            }
        }
    }
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
}

impl<'a> Guarantee<'a> {
    fn new(
        sheet: &'a TenderSheet,
        basis: Option<&BasisForFactors>,
        lot: &'a Lot,
        bid: &'a Bid,
    ) -> Result<Self, StudyError> {
        let (terms, _) = terms(&mut Silent, sheet, basis, lot)?;
        let promise = bring(&mut Silent, &terms, bid)?;
        Ok(Self { terms, bid, promise, units: measured_of(sheet, bid).collect() })
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
        let factors = &self.promise.factors;
        let of_mean = match self.rule() {
            Settlement::Unit => None,
            Settlement::LotMean => {
                Some(penalty(&mut Silent, factors, &mean(&mut Silent, &self.excesses())))
            }
        };
        let units: Vec<UnitSettlement> =
            self.units.iter().map(|unit| self.settle_unit(unit, of_mean)).collect();
        let tested = units.len();
        LotSettlement {
            lot: self.bid.lot.clone(),
            bid: self.bid.bid.clone(),
            penalty: of_mean.map_or_else(
                || penalty_of_units(&mut Silent, units.iter().map(|unit| unit.penalty)),
                |of_mean| penalty_of_mean(&mut Silent, of_mean, tested),
            ),
            settlement: self.rule().word(),
            owning_cost_promised: self.promise.owning_cost(&mut Silent).total(),
            owning_cost_delivered: mean_cost(
                &mut Silent,
                units.iter().map(|unit| unit.owning_cost_delivered),
                tested,
            ),
            units,
        }
    }

    /// A unit as a bid with the losses that were measured.
    fn as_delivered<R: Recorder>(&self, w: &mut R, unit: &Measured) -> Comparable {
        let delivered = delivered(w, &self.terms, self.bid, &self.promise, unit);
        Comparable { losses: delivered.losses, ..self.promise }
    }

    /// States the penalty of a unit; under `lot-mean` its equal part of the lot's.
    fn state_penalty(&self, w: &mut Working, unit: &Measured) -> Result<(), StudyError> {
        let promise = bring(w, &self.terms, self.bid)?;
        let own = delivered(w, &self.terms, self.bid, &promise, unit).excess;
        let counted = match self.rule() {
            Settlement::Unit => own,
            Settlement::LotMean => mean(w, &self.excesses()),
        };
        penalty(w, &promise.factors, &counted);
        Ok(())
    }

    fn state_lot_penalty(
        &self,
        w: &mut Working,
        settled: &LotSettlement,
    ) -> Result<(), StudyError> {
        match (self.rule(), self.units.first()) {
            (Settlement::LotMean, Some(unit)) => {
                self.state_penalty(w, unit)?;
                let of_mean = settled.units.first().map_or(0.0, |unit| unit.penalty);
                penalty_of_mean(w, of_mean, settled.units.len());
            }
            _ => {
                for unit in &self.units {
                    let mut all = Working::default();
                    self.state_penalty(&mut all, unit)?;
                    w.append(all.into_steps().pop());
                    w.about(&|| unit.serial.clone());
                }
                penalty_of_units(w, settled.units.iter().map(|unit| unit.penalty));
            }
        }
        Ok(())
    }

    fn state_unit(
        &self,
        w: &mut Working,
        unit: &Measured,
        quantity: &str,
    ) -> Result<(), StudyError> {
        let of = match quantity {
            "no_load_excess_w" => "no-load loss",
            "load_excess_w" => "load loss",
            "auxiliary_excess_w" => "auxiliary loss",
            "penalty" => return self.state_penalty(w, unit),
            _ => {
                self.as_delivered(w, unit).owning_cost(w);
                return Ok(());
            }
        };
        let mut all = Working::default();
        self.as_delivered(&mut all, unit);
        // A measured load loss comes to the reference temperature first.
        let wanted = |step: &Step| step.of == of || (of == "load loss" && step.of.is_empty());
        w.append(all.into_steps().into_iter().filter(wanted));
        Ok(())
    }

    fn settle_unit(&self, unit: &Measured, of_mean: Option<f64>) -> UnitSettlement {
        let delivered = self.delivered(unit);
        let (excess, factors) = (delivered.excess, &self.promise.factors);
        let (beyond_tolerance, rejectable) = beyond(&self.terms, &self.promise, &excess);
        let as_delivered = self.as_delivered(&mut Silent, unit);
        UnitSettlement {
            serial: unit.serial.clone(),
            no_load_excess_w: excess.no_load_w,
            load_excess_w: excess.load_w,
            auxiliary_excess_w: excess.auxiliary_w,
            penalty: of_mean.unwrap_or_else(|| penalty(&mut Silent, factors, &excess)),
            beyond_tolerance,
            rejectable,
            owning_cost_delivered: as_delivered.owning_cost(&mut Silent).total(),
            flags: self.promise.flags.with(delivered.flags).keys(),
        }
    }
}
