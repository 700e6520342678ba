//! Awarding a lot: the bid goes into the book with who, when and why, and with the terms it was chosen under, by
//! which it is settled whatever becomes of the basis.

use serde::Serialize;

use super::{Awarded, BidResult, Case, LotResult, TenderResult, find_lot, terms};
use crate::book::{Actor, Book, BookError};
use crate::engine::Refusal;
use crate::engine::columns::{Award, BasisSheet, Column, TenderSheet, Value};
use crate::engine::flags::Flags;
use crate::engine::working::Silent;
use crate::study::StudyError;

/// What awarding a lot came to.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct AwardResult {
    /// The tender.
    pub tender: String,
    /// The lot.
    pub lot: String,
    /// Currency of all amounts.
    pub currency: String,
    /// Number of units.
    pub quantity: i64,
    /// The award.
    pub award: Awarded,
    /// `new`, `same` where it stood in the book already, `withdrawn`.
    pub outcome: &'static str,
    /// Keys of the limits that the bid misses.
    pub excluded: Vec<&'static str>,
    /// Other bids of the lot of which measured units are in the book.
    pub measured_of_others: Vec<String>,
    /// What is doubtful about the lot, and whether losses of the bid look like kW.
    pub flags: Vec<&'static str>,
}

/// Which bid a lot goes to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Choice<'a> {
    /// The lot.
    pub lot: &'a str,
    /// The bid.
    pub bid: &'a str,
    /// Also where it misses a limit of the lot.
    pub despite: bool,
}

/// Awards a lot to a bid. Another bid than the one that is recommended needs a reason; one that misses a limit must be
/// meant despite that.
///
/// # Errors
/// As [`super::evaluate`]; an unknown bid, no reason where one is needed, an excluded bid that is not meant despite
/// what it misses, a lot that is awarded to another bid; a book that others changed since the case was read.
pub fn award(
    book: &mut Book,
    case: &Case,
    choice: Choice,
    actor: &Actor,
) -> Result<AwardResult, StudyError> {
    let Choice { lot, bid, despite } = choice;
    let sheet = &case.sheet;
    let reasoned = has_reason(actor)?;
    let evaluated = case.evaluate(Some(lot))?;
    let (of_lot, chosen) = find(&evaluated, lot, bid)?;
    if let Some(standing) = &of_lot.award {
        if standing.bid != bid {
            let (tender, lot) = (sheet.tender.tender.clone(), lot.to_owned());
            return Err(BookError::Awarded { tender, lot }.into());
        }
        return Ok(told(case, of_lot, chosen, standing.clone(), "same"));
    }
    if !chosen.excluded.is_empty() && !despite {
        let misses = chosen.excluded.join(", ");
        let why = format!(
            "misses {misses} and is not ranked; to award it all the same: --despite --why TEXT"
        );
        return Err(StudyError::refused(format!("lot {lot}"))(Refusal::new("bid", bid, why)));
    }
    if of_lot.recommended.as_deref() != Some(bid) && !reasoned {
        let why = needs_reason(chosen, of_lot.recommended.as_deref());
        return Err(StudyError::refused(format!("lot {lot}"))(Refusal::new("bid", bid, why)));
    }
    let (terms, _) = terms(&mut Silent, sheet, case.basis().as_ref(), find_lot(sheet, lot)?)?;
    let record = Award {
        lot: lot.to_owned(),
        bid: bid.to_owned(),
        factor_a_per_kw: terms.factors.factor_a_per_kw,
        factor_b_per_kw: terms.factors.factor_b_per_kw,
        factor_aux_per_kw: terms.factors.factor_aux_per_kw,
        stray_share_pu: terms.stray_share_pu,
        owning_cost: chosen.owning_cost,
        recommended: of_lot.recommended.clone(),
        basis: case.basis_name().map(ToOwned::to_owned),
        program: env!("CARGO_PKG_VERSION").to_owned(),
        awarded_at: actor.at.clone(),
        awarded_by: actor.who.clone(),
        why: actor.why.clone().filter(|_| reasoned),
    };
    let change = book.change(actor, None)?;
    case.still_stands(&change)?;
    change.award(&sheet.tender.tender, &record)?;
    change.commit()?;
    Ok(told(case, of_lot, chosen, Awarded::of(&record, chosen), "new"))
}

/// Awards as [`award`] does, if the book still holds the tender and the basis that were shown when it was asked.
///
/// # Errors
/// As [`award`]; something was changed in the book since.
pub fn award_as_shown(
    book: &mut Book,
    (tender, basis): (&TenderSheet, &BasisSheet),
    choice: Choice,
    actor: &Actor,
) -> Result<AwardResult, StudyError> {
    let (name, of) = (&tender.tender.tender, Some(basis.basis.name.as_str()));
    let case = Case::read(book, name, of)?;
    if case.sheet != *tender || book.basis(of)? != *basis {
        let why = "or its basis was changed in the book since it was opened; leave, open it again and look";
        return Err(Refusal::new("tender", name, why).into());
    }
    award(book, &case, choice, actor)
}

/// Takes the award of a lot back; the journal keeps it.
///
/// # Errors
/// As [`super::evaluate`]; no reason, a lot that is not awarded or of which units are in the fleet; a book
/// that others changed since the case was read.
pub fn withdraw(
    book: &mut Book,
    case: &Case,
    lot: &str,
    actor: &Actor,
) -> Result<AwardResult, StudyError> {
    find_lot(&case.sheet, lot)?;
    if !has_reason(actor)? {
        let why = "is awarded; taking that back needs a reason: --why TEXT";
        return Err(Refusal::new("lot", lot, why).into());
    }
    let evaluated = case.evaluate(Some(lot))?;
    let change = book.change(actor, None)?;
    case.still_stands(&change)?;
    let record = change.withdraw(&case.sheet.tender.tender, lot)?;
    let (of_lot, bid) = find(&evaluated, lot, &record.bid)?;
    change.commit()?;
    Ok(told(case, of_lot, bid, Awarded::of(&record, bid), "withdrawn"))
}

/// Whether a reason is given, and that it is one line of text.
fn has_reason(actor: &Actor) -> Result<bool, Refusal> {
    let Some(why) = &actor.why else { return Ok(false) };
    match Column::text().read(why) {
        Ok(read) => Ok(read != Value::Blank),
        Err(fault) => Err(Refusal::new("why", why, fault)),
    }
}

/// A bid of an evaluated lot.
fn find<'a>(
    evaluated: &'a TenderResult,
    lot: &str,
    bid: &str,
) -> Result<(&'a LotResult, &'a BidResult), StudyError> {
    let of = |of_lot: &'a LotResult| Some((of_lot, of_lot.bids.iter().find(|of| of.bid == bid)?));
    evaluated.lots.iter().find_map(of).ok_or_else(|| {
        let known = evaluated.lots.iter().flat_map(|lot| &lot.bids).map(|of| of.bid.as_str());
        StudyError::unknown("bid", bid, format!("tender {}, lot {lot}", evaluated.tender), known)
    })
}

fn needs_reason(chosen: &BidResult, recommended: Option<&str>) -> String {
    let misses = match chosen.excluded.as_slice() {
        [] => String::new(),
        keys => format!(" and misses {}", keys.join(", ")),
    };
    match recommended {
        Some(other) => {
            format!("is not recommended ({other} is){misses}; to award it say why: --why TEXT")
        }
        None => format!("is not ranked{misses}; to award it say why: --why TEXT"),
    }
}

/// The doubt that losses of the bid are kW, where it stands: an award is the last place to see it.
fn scale_of(bid: &BidResult) -> impl Iterator<Item = &'static str> {
    let doubts = bid.flags.clone();
    Flags::LOSS_SCALE.keys().into_iter().filter(move |key| doubts.contains(key))
}

fn told(
    case: &Case,
    lot: &LotResult,
    bid: &BidResult,
    award: Awarded,
    outcome: &'static str,
) -> AwardResult {
    let sheet = &case.sheet;
    let mut others: Vec<String> = Vec::new();
    for unit in sheet.measured.iter().filter(|unit| unit.lot == lot.lot && unit.bid != bid.bid) {
        if !others.contains(&unit.bid) {
            others.push(unit.bid.clone());
        }
    }
    AwardResult {
        tender: sheet.tender.tender.clone(),
        lot: lot.lot.clone(),
        currency: sheet.tender.currency.clone(),
        quantity: lot.quantity,
        award,
        outcome,
        excluded: bid.excluded.clone(),
        measured_of_others: others,
        flags: lot.flags.iter().copied().chain(scale_of(bid)).collect(),
    }
}
