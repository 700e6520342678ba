//! One unit's dossier: nameplate, loading, losses, and why it ranks where it does.

use serde::Serialize;

use crate::engine::columns::Unit;
use crate::engine::decision::fit::{Terminals, fitting};
use crate::engine::decision::keep_or_replace::{Decision, YearChoice, decide};
use crate::engine::decision::place::{Place, resolve};
use crate::engine::decision::{Context, LeftOut};
use crate::engine::transformer::vector_group;
use crate::engine::working::Silent;
use crate::study::{Desk, StudyError};

/// Keep or replace, one unit, as it is written in JSON.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; `figures` says what they are")]
pub struct KeepOrReplace<'a> {
    pub keep_pv: f64,
    pub never_pv: f64,
    pub best_pv: f64,
    pub saving_pv: f64,
    pub waiting_pv: f64,
    pub best_offer: Option<&'a str>,
    pub best_year_offset: Option<usize>,
    pub best_year: Option<i64>,
    pub years: Vec<YearRow<'a>>,
    pub flags: Vec<&'static str>,
}

/// The best offer at one delay.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result")]
pub struct YearRow<'a> {
    pub offset: usize,
    pub year: i64,
    pub offer: &'a str,
    pub pv: f64,
}

/// The terminals of a unit.
pub fn terminals(unit: &Unit) -> Terminals {
    Terminals {
        phases: unit.phases,
        hv_kv: unit.hv_kv,
        lv_kv: unit.lv_kv,
        clock: unit.vector_group.as_deref().and_then(vector_group::clock),
        rated_kva: unit.rated_kva,
    }
}

/// Decides for one unit; the inner result says why it is left out.
///
/// # Errors
/// What the engine refuses of the basis.
pub fn decision(
    desk: &Desk,
    context: &Context,
    i: usize,
) -> Result<Result<(Place, Decision), LeftOut>, StudyError> {
    let place = match resolve(&mut Silent, &desk.fleet.facts(i), context) {
        Ok(place) => place,
        Err(why) => return Ok(Err(why)),
    };
    let terminals = &desk.fleet.terminals[desk.fleet.kind[i] as usize];
    let a = &context.assumptions;
    let fit = fitting(terminals, &desk.candidates, a.offer_sizes);
    Ok(decide(&place, &desk.candidates, &fit, a)?
        .map(|decision| (place, decision))
        .ok_or(LeftOut::NoOffer))
}

/// The decision as it is written in JSON.
pub fn keep_or_replace<'a>(
    desk: &'a Desk,
    context: &Context,
    decision: &Decision,
) -> KeepOrReplace<'a> {
    let first_year = context.assumptions.first_year;
    #[expect(clippy::cast_possible_wrap, reason = "at most 200 years")]
    let year = |offset: usize| first_year + offset as i64;
    let row = |choice: &YearChoice| YearRow {
        offset: choice.offset,
        year: year(choice.offset),
        offer: desk.offer_name(choice.offer),
        pv: choice.pv,
    };
    KeepOrReplace {
        keep_pv: decision.keep_pv,
        never_pv: decision.keep_pv,
        best_pv: decision.best_pv,
        saving_pv: decision.saving_pv(),
        waiting_pv: decision.waiting_pv,
        best_offer: decision.best.map(|choice| desk.offer_name(choice.offer)),
        best_year_offset: decision.best.map(|choice| choice.offset),
        best_year: decision.best.map(|choice| year(choice.offset)),
        years: decision.years.iter().map(row).collect(),
        flags: decision.flags.keys(),
    }
}
