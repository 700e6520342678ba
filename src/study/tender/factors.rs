//! The loss factors of a lot as a planner publishes them: with their working, what a bidder is paid for a kW less,
//! and what the law asks of the rating.

use serde::Serialize;

use super::{BasisForFactors, factor_scale, factors, find_lot, terms};
use crate::engine::columns::{FactorMethod, Insulation, Lot, TenderSheet};
use crate::engine::decision::tender::factors::{Computed, of_lot};
use crate::engine::decision::tender::{Terms, legal};
use crate::engine::economics::loss_factors::LossFactors;
use crate::engine::flags::Flags;
use crate::engine::working::Silent;
use crate::study::StudyError;
use crate::study::explain::StepRow;
use crate::study::factors::{OtherMethod, differs};
use crate::study::law::bound;

/// The factors of a lot in the tender currency.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct LotFactors {
    /// The basis; none where the lot states every factor.
    pub basis: Option<String>,
    /// Method of the basis; `stated` where the lot states every factor.
    pub method: &'static str,
    /// Value of a kW of no-load loss.
    pub factor_a_per_kw: f64,
    /// Value of a kW of load loss at the lot's rating.
    pub factor_b_per_kw: f64,
    /// Value of a kW of auxiliary loss.
    pub factor_aux_per_kw: f64,
    /// How they come about.
    pub working: Vec<StepRow>,
    /// The tender.
    pub tender: String,
    /// The lot.
    pub lot: String,
    /// Currency of the factors.
    pub currency: String,
    /// The lot's rating, to which B refers.
    pub rated_kva: f64,
    /// Keys of the factors that the lot states itself.
    pub stated: Vec<&'static str>,
    /// The same factors in each currency of the tender: what a bidder may ask more for a kW less.
    pub in_currencies: Vec<InCurrency>,
    /// The factors by the other method, where the basis allows it and the lot leaves a factor to it.
    pub other_method: Option<OtherMethod>,
    /// What the law that the lot names asks of its rating.
    pub law: Vec<LegalLimit>,
    /// What is doubtful.
    pub flags: Vec<&'static str>,
}

/// The factors in one currency.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct InCurrency {
    pub currency: String,
    pub factor_a_per_kw: f64,
    pub factor_b_per_kw: f64,
    pub factor_aux_per_kw: f64,
}

/// One limit of the law for the rating of a lot.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct LegalLimit {
    /// Key of the law.
    pub law: &'static str,
    /// `liquid` or `dry`.
    pub insulation: &'static str,
    /// What is limited; none where there is no limit or it cannot be told.
    pub quantity: Option<&'static str>,
    /// `at most` or `at least`.
    pub bound: Option<&'static str>,
    /// The limit.
    pub limit: Option<f64>,
    /// Law, table and tier; or why there is no limit.
    pub source: String,
    /// Whether a remembered row was used: look it up in the official text.
    pub verify: bool,
}

/// The factors of a lot as they are published.
///
/// # Errors
/// As [`super::evaluate`]; a law that is not known.
pub fn lot_factors(
    sheet: &TenderSheet,
    basis: Option<&BasisForFactors>,
    lot: &str,
) -> Result<LotFactors, StudyError> {
    let lot = find_lot(sheet, lot)?;
    let (own, steps) = factors(sheet, basis, &lot.lot)?;
    let (terms, flags) = terms(&mut Silent, sheet, basis, lot)?;
    let flags = flags.with_if(factor_scale(sheet, &terms)?, Flags::FACTOR_SCALE);
    let computed = Computed::by(lot);
    let used = basis.filter(|_| computed.any()).map(|basis| basis.assumptions);
    let keys = [
        ("factor_a_per_kw", computed.a),
        ("factor_b_per_kw", computed.b),
        ("factor_aux_per_kw", computed.aux),
    ];
    Ok(LotFactors {
        basis: used.map(|a| a.name.clone()),
        method: used.map_or("stated", |a| a.factor_method.word()),
        factor_a_per_kw: own.factor_a_per_kw,
        factor_b_per_kw: own.factor_b_per_kw,
        factor_aux_per_kw: own.factor_aux_per_kw,
        working: StepRow::tree(&steps),
        tender: sheet.tender.tender.clone(),
        lot: lot.lot.clone(),
        currency: sheet.tender.currency.clone(),
        rated_kva: lot.rated_kva,
        stated: keys.iter().filter(|(_, computed)| !computed).map(|(key, _)| *key).collect(),
        in_currencies: in_currencies(sheet, &own),
        other_method: basis
            .filter(|_| computed.any())
            .and_then(|basis| other_method(&terms, lot, basis, &own)),
        law: floor(&terms)?,
        flags: flags.keys(),
    })
}

fn in_currencies(sheet: &TenderSheet, own: &LossFactors) -> Vec<InCurrency> {
    let home = std::iter::once((sheet.tender.currency.as_str(), 1.0));
    let others = sheet.rates.iter().map(|rate| (rate.currency.as_str(), rate.rate));
    let all = home.chain(others.filter(|(code, _)| *code != sheet.tender.currency));
    all.map(|(currency, rate)| InCurrency {
        currency: currency.to_owned(),
        factor_a_per_kw: own.factor_a_per_kw / rate,
        factor_b_per_kw: own.factor_b_per_kw / rate,
        factor_aux_per_kw: own.factor_aux_per_kw / rate,
    })
    .collect()
}

fn other_method(
    terms: &Terms,
    lot: &Lot,
    basis: &BasisForFactors,
    own: &LossFactors,
) -> Option<OtherMethod> {
    let mut assumptions = basis.assumptions.clone();
    assumptions.factor_method = match assumptions.factor_method {
        FactorMethod::PresentValue => FactorMethod::Levelized,
        FactorMethod::Levelized => FactorMethod::PresentValue,
    };
    let other = BasisForFactors { assumptions: &assumptions, ..*basis };
    let (factors, _) = of_lot(&mut Silent, lot, &terms.rates, Some(&other)).ok()?;
    Some(differs(own, &factors, assumptions.factor_method.word()))
}

/// What the law asks of the lot's rating, for each insulation, as a lot names none.
fn floor(terms: &Terms) -> Result<Vec<LegalLimit>, StudyError> {
    let mut limits = Vec::new();
    for insulation in [Insulation::Liquid, Insulation::Dry] {
        let asked = legal::floor(terms, insulation);
        let asked = asked.map_err(StudyError::refused(format!("lot {}", terms.lot.lot)))?;
        let Some(verdict) = asked else { return Ok(limits) };
        let row = LegalLimit {
            law: verdict.law,
            insulation: insulation.word(),
            quantity: None,
            bound: None,
            limit: None,
            source: verdict.why.clone(),
            verify: verdict.verify,
        };
        if verdict.limits.is_empty() {
            limits.push(row.clone());
        }
        limits.extend(verdict.limits.iter().map(|limit| LegalLimit {
            quantity: Some(limit.quantity),
            bound: Some(bound(limit.bound)),
            limit: Some(limit.limit),
            source: limit.source.clone(),
            ..row.clone()
        }));
    }
    Ok(limits)
}
