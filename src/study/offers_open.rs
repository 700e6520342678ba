//! Why no offer is open for a unit in the first year, and from when one is; which rule leaves none at all.

use crate::engine::decision::fit::{Candidate, fitting};
use crate::engine::decision::keep_or_replace::Decision;
use crate::engine::decision::place::resolve;
use crate::engine::decision::{Context, LeftOut, Place};
use crate::engine::working::Silent;
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

/// Why a unit is left out, in a sentence that says what to do; where no offer is open, which rule leaves none.
pub fn left_out_because(desk: &Desk, context: &Context, i: usize, why: LeftOut) -> &'static str {
    if why == LeftOut::NoOffer { none_because(desk, context, i) } else { why.why() }
}

/// The first rule that no offer is left by, in the order in which they are held.
fn none_because(desk: &Desk, context: &Context, i: usize) -> &'static str {
    let (a, all) = (&context.assumptions, &context.candidates);
    let terminals = &desk.fleet.terminals[desk.fleet.kind[i] as usize];
    if all.is_empty() {
        return "no offer fits: the book holds none; import offers";
    }
    if !all.iter().any(|offer| terminals.phases_agree(offer)) {
        return "no offer fits: none has its number of phases; import one, or correct phases";
    }
    if !all.iter().any(|offer| terminals.connects(offer)) {
        return "no offer fits: none of its phases has its voltages; import one, or correct hv_kv and lv_kv";
    }
    let fit = fitting(terminals, all, a.offer_sizes);
    let offers = || fit.iter().map(|c| &all[*c]);
    if fit.is_empty() {
        return "no offer fits: none within its window of ratings has a vector group that can stand for its own";
    }
    if !offers().any(|offer| offer.delivered_by(a.latest)) {
        return "no offer fits: none that connects is delivered by the latest year looked at; see latest_replacement_years";
    }
    let ever = |open: &dyn Fn(&Candidate, usize) -> bool| {
        offers().any(|offer| (0..=a.latest).any(|t| open(offer, t)))
    };
    if !ever(&|offer, t| offer.delivered_by(t) && offer.lawful_at(t)) {
        return "no offer fits: none that connects meets the law of the basis when it is delivered";
    }
    let Ok(place) = resolve(&mut Silent, &desk.fleet.facts(i), context) else {
        return LeftOut::NoOffer.why();
    };
    let holds = |offer: &Candidate, t| {
        offer.delivered_by(t) && offer.lawful_at(t) && offer.holds_voltage(&place.duty, t, a)
    };
    if ever(&holds) && !ever(&|offer, t| holds(offer, t) && offer.carries(&place.duty, t, a)) {
        return match a.offer_sizes {
            Some(_) => {
                "no offer fits: its peak is above loading_limit_pu of each that connects; raise offer_sizes_up, or check peak_kva"
            }
            None => {
                "no offer fits: its peak is above loading_limit_pu of each that connects; import a larger one, or check peak_kva"
            }
        };
    }
    "no offer fits: the voltage drop at its peak is too large with each that connects; check peak_kva and load growth"
}
