//! The figures of a settlement opened: what was guaranteed, what was measured, and what the difference costs.

use super::{Guarantee, LotSettlement, settle};
use crate::engine::columns::{Measured, Settlement};
use crate::engine::decision::place::stated::{LOAD_LOSS, said};
use crate::engine::decision::tender::rates::amount_in_currency;
use crate::engine::decision::tender::settlement::{
    beyond, correction_alone, delivered, mean, mean_cost, penalty_of_mean, penalty_of_units,
};
use crate::engine::economics::loss_factors::LossFactors;
use crate::engine::economics::penalty::penalty;
use crate::engine::working::{Formula, Recorder as _, Silent, Step, Working};
use crate::study::StudyError;
use crate::study::explain::{Explained, nth, numbers};
use crate::study::tender::{Case, bring, factors, find_bid, find_lot};

/// Numbers that were stated as they are: by the bid, the lot, the rule or the test.
const LABELS: &[&str] = &[
    "quantity",
    "rated_kva",
    "no_load_loss_w",
    "auxiliary_loss_w",
    "reference_temp_c",
    "quoted_temp_c",
    "stray_share_pu",
    "test_load_loss_w",
    "test_temp_c",
    "allowed_pct",
    "bid_rate",
];

/// The settlement of a tender as a result that can be opened.
#[derive(Clone, Copy, Debug)]
pub struct Settled<'a>(pub &'a Case);

impl Explained for Settled<'_> {
    fn called(&self) -> String {
        format!("the settlement of tender {}", self.0.sheet.tender.tender)
    }

    fn figures(&self) -> Result<Vec<(String, f64)>, StudyError> {
        let result = settle(&self.0.sheet, self.0.basis().as_ref(), None)?;
        Ok(numbers(&result, &[], LABELS))
    }

    fn state(&self, w: &mut Working, place: &[&str]) -> Result<(), StudyError> {
        let (sheet, basis) = (&self.0.sheet, self.0.basis());
        let basis = basis.as_ref();
        let result = settle(sheet, basis, None)?;
        let ["lots", n, place @ ..] = place else { return Ok(()) };
        let (settled, _) = nth(&result.lots, n)?;
        let lot = find_lot(sheet, &settled.lot)?;
        let bid = find_bid(sheet, &settled.lot, &settled.bid)?;
        let guarantee = Guarantee::new(sheet, basis, lot, bid)?;
        match place {
            ["units", m, place @ ..] => {
                let (_, m) = nth(&settled.units, m)?;
                return guarantee.state_unit(w, guarantee.units[m], place);
            }
            ["penalty"] => guarantee.state_lot_penalty(w, settled)?,
            ["penalty_in_bid_currency"] => {
                guarantee.state_lot_penalty(w, settled)?;
                guarantee.in_bid_currency(w, settled.penalty);
            }
            ["penalty_without_rejectable"] => {
                for (unit, own) in settled.units.iter().zip(&guarantee.units) {
                    if guarantee.rule() == Settlement::Unit && !unit.rejectable {
                        guarantee.state_unit_penalty(w, own)?;
                    }
                }
                guarantee.penalty_of_accepted(w, &settled.units);
            }
            ["owning_cost_promised"] => {
                bring(w, &guarantee.terms, bid)?.owning_cost(w);
            }
            ["owning_cost_delivered"] => {
                for unit in &guarantee.units {
                    guarantee.as_delivered(&mut Silent, unit).owning_cost(w);
                    w.about(&|| unit.serial.clone());
                }
                let costs = settled.units.iter().map(|unit| unit.owning_cost_delivered);
                mean_cost(w, costs, settled.units.len());
            }
            ["guaranteed", _] => {
                let mut all = Working::default();
                let promised = bring(&mut all, &guarantee.terms, bid)?;
                load_loss(w, all, promised.losses.load_loss_w, "as guaranteed");
            }
            ["mean_excess", quantity] => {
                let mut all = Working::default();
                mean(&mut all, &guarantee.excesses());
                w.append(about(all, loss_of(quantity)));
            }
            _ => {
                let mut all = Working::default();
                match guarantee.award.filter(|award| award.bid == bid.bid) {
                    Some(_) => kept(&mut all, &guarantee.terms.factors),
                    None => all.append(factors(sheet, basis, &lot.lot)?.1),
                }
                bring(&mut all, &guarantee.terms, bid)?;
                w.append(all.only(match place {
                    ["factor_a_per_kw"] => &["A"],
                    ["factor_b_per_kw"] => &["B", "B_bid"],
                    _ => &["A_aux"],
                }));
            }
        }
        Ok(())
    }
}

const KEPT_A: Formula = Formula {
    name: "value of a kW of no-load loss, kept with the award",
    symbol: "A",
    formula: "as stated",
    unit: "money/kW",
    source: "the award; methods, section 8",
};
const KEPT_B: Formula = Formula {
    name: "value of a kW of load loss at the lot's rating, kept with the award",
    symbol: "B",
    ..KEPT_A
};
const KEPT_AUX: Formula = Formula {
    name: "value of a kW of auxiliary loss, kept with the award",
    symbol: "A_aux",
    ..KEPT_A
};

/// The factors of an award.
fn kept(w: &mut Working, factors: &LossFactors) {
    w.step(&KEPT_A, &[], factors.factor_a_per_kw);
    w.step(&KEPT_B, &[], factors.factor_b_per_kw);
    w.step(&KEPT_AUX, &[], factors.factor_aux_per_kw);
}

/// The loss that a quantity is of, as the steps name it.
fn loss_of(quantity: &str) -> &'static str {
    match quantity {
        "no_load_excess_w" => "no-load loss",
        "load_excess_w" => "load loss",
        _ => "auxiliary loss",
    }
}

fn about(all: Working, of: &str) -> impl Iterator<Item = Step> + '_ {
    all.into_steps().into_iter().filter(move |step| step.of == of)
}

/// A load loss: how it came to the rating and the reference temperature, else that it is as stated.
fn load_loss(w: &mut Working, all: Working, value: f64, origin: &str) {
    let steps = all.only(&["Pk_base", "Pk"]);
    if steps.is_empty() {
        said(w, &LOAD_LOSS, value, origin);
    }
    w.append(steps);
}

impl Guarantee<'_> {
    /// States the penalty of a unit; under `lot-mean` its equal part of the lot's.
    pub(super) fn state_penalty(&self, w: &mut Working, unit: &Measured) -> Result<(), StudyError> {
        let promise = bring(w, &self.terms, self.bid)?;
        let own = delivered(w, &self.terms, self.bid, &promise, unit).excess;
        let counted = match self.rule() {
            Settlement::Unit => own,
            Settlement::LotMean => mean(w, &self.excesses()),
        };
        penalty(w, &promise.factors, &counted);
        Ok(())
    }

    /// States the penalty of a unit in one step.
    fn state_unit_penalty(&self, w: &mut Working, unit: &Measured) -> Result<(), StudyError> {
        let mut all = Working::default();
        self.state_penalty(&mut all, unit)?;
        w.append(all.into_steps().pop());
        w.about(&|| unit.serial.clone());
        Ok(())
    }

    /// States an amount in the currency of the bid, where that is another.
    fn in_bid_currency(&self, w: &mut Working, amount: f64) {
        if let Some((_, rate)) = self.foreign {
            amount_in_currency(w, amount, rate);
        }
    }

    fn state_lot_penalty(
        &self,
        w: &mut Working,
        settled: &LotSettlement,
    ) -> Result<(), StudyError> {
        if let (Settlement::LotMean, Some(unit)) = (self.rule(), self.units.first()) {
            self.state_penalty(w, unit)?;
            let of_mean = settled.units.first().map_or(0.0, |unit| unit.penalty);
            penalty_of_mean(w, of_mean, settled.units.len());
            return Ok(());
        }
        for unit in &self.units {
            self.state_unit_penalty(w, unit)?;
        }
        penalty_of_units(w, settled.units.iter().map(|unit| unit.penalty));
        Ok(())
    }

    fn state_unit(
        &self,
        w: &mut Working,
        unit: &Measured,
        place: &[&str],
    ) -> Result<(), StudyError> {
        let mut all = Working::default();
        let measured = delivered(&mut all, &self.terms, self.bid, &self.promise, unit);
        match place {
            ["penalty"] => self.state_penalty(w, unit)?,
            ["penalty_in_bid_currency"] => {
                self.state_penalty(w, unit)?;
                let owed = w.steps().last().map_or(0.0, |step| step.value);
                self.in_bid_currency(w, owed);
            }
            ["owning_cost_delivered"] => {
                self.as_delivered(w, unit).owning_cost(w);
            }
            ["correction_alone_w"] => {
                correction_alone(w, &self.terms, self.bid, &self.promise, unit);
            }
            ["load_loss_w"] => load_loss(w, all, measured.losses.load_loss_w, "as measured"),
            ["exceeds", n, _] => {
                let mut parts = Working::default();
                let excess = &measured.excess;
                let (found, _) = beyond(&mut parts, &self.terms, &self.promise, excess);
                let (found, _) = nth(&found, n)?;
                w.append(about(parts, found.loss));
            }
            [quantity] => {
                let of = loss_of(quantity);
                // A measured load loss comes to the reference temperature first.
                let wanted =
                    |step: &Step| step.of == of || (of == "load loss" && step.of.is_empty());
                w.append(all.into_steps().into_iter().filter(wanted));
            }
            _ => {}
        }
        Ok(())
    }
}
