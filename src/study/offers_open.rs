//! Why no offer is open for a unit in the first year, and from when one is.

use crate::engine::decision::Context;
use crate::engine::decision::Place;
use crate::engine::decision::fit::fitting;
use crate::engine::decision::keep_or_replace::Decision;
use crate::study::Desk;

/// What keeps the fitting offers of a unit from being bought in the first year.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct NotYet {
    /// The first calendar year in which an offer is open.
    pub open_in: i64,
    /// What stands against at least one of them now, in words.
    pub because: Vec<&'static str>,
}

/// Says why a unit has no choice in the first year; none where it has one.
pub fn not_yet(
    desk: &Desk,
    context: &Context,
    i: usize,
    place: &Place,
    decision: &Decision,
) -> Option<NotYet> {
    let first = decision.years.first().filter(|_| decision.now.is_none())?;
    let a = &context.assumptions;
    let terminals = &desk.fleet.terminals[desk.fleet.kind[i] as usize];
    let fit = fitting(terminals, &context.candidates, a.offer_sizes);
    let offers = || fit.iter().map(|c| &context.candidates[*c]);
    let because = [
        ("lead time", offers().any(|offer| !offer.delivered_by(0))),
        ("law", offers().any(|offer| !offer.lawful_at(0))),
        ("loading limit", offers().any(|offer| !offer.carries(&place.duty, 0, a))),
    ];
    Some(NotYet {
        open_in: a.first_year + i64::try_from(first.offset).unwrap_or(0),
        because: because.into_iter().filter_map(|(word, so)| so.then_some(word)).collect(),
    })
}
