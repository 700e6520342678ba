//! The loss factors of a lot as a planner publishes them: with their working, what a bidder is paid for a kW less,
//! and what the law asks of the rating.

use serde::Serialize;

use super::{BasisForFactors, Case, factor_scale, factors, find_lot, terms};
use crate::engine::columns::{FactorMethod, Insulation, TenderSheet};
use crate::engine::decision::tender::factors::{Computed, of_lot};
use crate::engine::decision::tender::rates::in_currency;
use crate::engine::decision::tender::{Terms, legal};
use crate::engine::economics::loss_factors::{LossFactors, difference_pct};
use crate::engine::flags::Flags;
use crate::engine::law::Verdict;
use crate::engine::working::{Recorder, Silent, Step, Working};
use crate::study::StudyError;
use crate::study::explain::{Explained, StepRow, nth, numbers};
use crate::study::factors::{OtherMethod, differs, symbol};
use crate::study::law::{self, bound};

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
    /// The factors that the lot states, where they are set aside here to show how they came about.
    #[serde(skip)]
    pub published: Option<LossFactors>,
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
            .and_then(|basis| by_other_method(&mut Silent, &terms, basis))
            .map(|(other, method)| differs(&own, &other, method)),
        law: floor(&terms)?,
        flags: flags.keys(),
        published: None,
    })
}

/// The currencies of a tender with their rates, its own first.
fn currencies(sheet: &TenderSheet) -> impl Iterator<Item = (&str, f64)> {
    let own = sheet.tender.currency.as_str();
    let others = sheet.rates.iter().map(|rate| (rate.currency.as_str(), rate.rate));
    std::iter::once((own, 1.0)).chain(others.filter(move |(code, _)| *code != own))
}

fn in_currencies(sheet: &TenderSheet, own: &LossFactors) -> Vec<InCurrency> {
    let w = &mut Silent;
    currencies(sheet)
        .map(|(currency, rate)| InCurrency {
            currency: currency.to_owned(),
            factor_a_per_kw: in_currency(w, own.factor_a_per_kw, rate),
            factor_b_per_kw: in_currency(w, own.factor_b_per_kw, rate),
            factor_aux_per_kw: in_currency(w, own.factor_aux_per_kw, rate),
        })
        .collect()
}

/// The factors by the method that the basis does not use, with its word.
fn by_other_method<R: Recorder>(
    w: &mut R,
    terms: &Terms,
    basis: &BasisForFactors,
) -> Option<(LossFactors, &'static str)> {
    let mut assumptions = basis.assumptions.clone();
    assumptions.factor_method = match assumptions.factor_method {
        FactorMethod::PresentValue => FactorMethod::Levelized,
        FactorMethod::Levelized => FactorMethod::PresentValue,
    };
    let other = BasisForFactors { assumptions: &assumptions, ..*basis };
    let (factors, _) = of_lot(w, terms.lot, &terms.rates, Some(&other)).ok()?;
    Some((factors, assumptions.factor_method.word()))
}

/// What the law says of the lot's rating, for each insulation, as a lot names none.
fn verdicts(terms: &Terms) -> Result<Vec<(Insulation, Verdict)>, StudyError> {
    let mut verdicts = Vec::new();
    for insulation in [Insulation::Liquid, Insulation::Dry] {
        let asked = legal::floor(terms, insulation);
        let asked = asked.map_err(StudyError::refused(format!("lot {}", terms.lot.lot)))?;
        verdicts.extend(asked.map(|verdict| (insulation, verdict)));
    }
    Ok(verdicts)
}

/// What the law asks of the lot's rating: a row for each limit, or one that says why there is none.
fn floor(terms: &Terms) -> Result<Vec<LegalLimit>, StudyError> {
    let mut limits = Vec::new();
    for (insulation, verdict) in verdicts(terms)? {
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

/// The factors of a lot as a result that can be opened.
#[derive(Clone, Copy, Debug)]
pub struct LotQuestion<'a> {
    /// The tender.
    pub case: &'a Case,
    /// The lot.
    pub lot: &'a str,
}

impl Explained for LotQuestion<'_> {
    fn called(&self) -> String {
        format!("the factors of tender {}, lot {}", self.case.sheet.tender.tender, self.lot)
    }

    fn figures(&self) -> Result<Vec<(String, f64)>, StudyError> {
        Ok(numbers(&self.case.factors(self.lot)?, &["working"], &["rated_kva"]))
    }

    fn state(&self, w: &mut Working, place: &[&str]) -> Result<(), StudyError> {
        let (sheet, basis) = (&self.case.sheet, self.case.basis());
        let lot = find_lot(sheet, self.lot)?;
        let quantity = place.last().copied().unwrap_or_default();
        let symbol = symbol(quantity);
        let (_, own) = factors(sheet, basis.as_ref(), &lot.lot)?;
        let own: Vec<Step> = own.into_iter().filter(|s| s.formula.symbol == symbol).collect();
        let value = |steps: &[Step]| steps.last().map_or(0.0, |step| step.value);
        match place {
            ["law", n, _] => {
                let (terms, _) = terms(&mut Silent, sheet, basis.as_ref(), lot)?;
                let rows = verdicts(&terms)?.into_iter().flat_map(|(_, verdict)| {
                    (0..verdict.limits.len().max(1)).map(move |limit| (verdict.clone(), limit))
                });
                let rows: Vec<(Verdict, usize)> = rows.collect();
                let ((verdict, limit), _) = nth(&rows, n)?;
                law::state(w, verdict.clone(), &limit.to_string(), "limit");
            }
            ["in_currencies", n, _] => {
                let rates: Vec<(&str, f64)> = currencies(sheet).collect();
                let ((_, rate), _) = nth(&rates, n)?;
                let factor = value(&own);
                w.append(own);
                in_currency(w, factor, *rate);
            }
            ["other_method", _] => {
                let (terms, _) = terms(&mut Silent, sheet, basis.as_ref(), lot)?;
                let mut all = Working::default();
                if let Some(basis) = &basis {
                    by_other_method(&mut all, &terms, basis);
                }
                let other = all.only(&[symbol]);
                if quantity.ends_with("_difference_pct") {
                    let (mine, theirs) = (value(&own), value(&other));
                    w.append(own);
                    w.append(other);
                    difference_pct(w, mine, theirs);
                } else {
                    w.append(other);
                }
            }
            _ => w.append(own),
        }
        Ok(())
    }
}
