//! What was awarded, and what came of it into the fleet.

use super::lot::About;
use super::{day, flag};
use crate::engine::decision::equal_pv;
use crate::engine::flags::Flags;
use crate::exchange::Letter;
use crate::exchange::letter::Column;
use crate::study::figures::{group, short};
use crate::study::tender::decide::AwardResult;
use crate::study::tender::deliver::{DeliverResult, DeliveredUnit};
use crate::study::tender::{Awarded, LotResult};

/// To whom, by whom, when and why.
pub fn sentence(award: &Awarded) -> String {
    let bidder = award.bidder.as_ref().map_or(String::new(), |bidder| format!(" ({bidder})"));
    let why = award.why.as_ref().map_or(String::new(), |why| format!(", because: {why}"));
    let (bid, who) = (&award.bid, &award.awarded_by);
    format!("{bid}{bidder} by {who} on {}{why}.", day(&award.awarded_at))
}

/// The terms that an award keeps.
fn terms(award: &Awarded, currency: &str) -> String {
    format!(
        "Kept for the settlement: A {}, B {}, A aux {} {currency}/kW, stray share {}; owning cost of one unit {}.",
        group(award.factor_a_per_kw, 2),
        group(award.factor_b_per_kw, 2),
        group(award.factor_aux_per_kw, 2),
        short(award.stray_share_pu),
        group(award.owning_cost, 2)
    )
}

/// The award of a lot with its terms; nothing where it is not awarded.
pub(in crate::study) fn standing(letter: &mut Letter, about: &About) {
    let Some(award) = &about.result.award else { return };
    letter.heading(3, "Award");
    letter.text(format!("Awarded to {}", sentence(award)));
    letter.text(terms(award, about.currency));
}

/// Beside the head of an awarded lot: that what follows is compared by today's basis, and what the award itself says.
pub(in crate::study) fn headline(letter: &mut Letter, about: &About) {
    let Some(award) = &about.result.award else { return };
    letter.text(format!(
        "Awarded to {} on {} at an owning cost of {} {} a unit; the settlement goes by the award. What follows is compared with today's basis.",
        award.bid,
        day(&award.awarded_at),
        group(award.owning_cost, 2),
        about.currency
    ));
    if let Some(changed) = changed_since(about.result, about.currency) {
        letter.warning(changed);
    }
}

/// How the comparison differs now from that of the award; none where it does not, or the lot is not awarded.
pub fn changed_since(lot: &LotResult, currency: &str) -> Option<String> {
    let (award, recommended) = (lot.award.as_ref()?, lot.recommended.as_ref());
    let mut otherwise = Vec::new();
    if award.differs_now() {
        otherwise.push(format!(
            "{} comes to {} instead of {} {currency}",
            award.bid,
            group(award.owning_cost_now, 2),
            group(award.owning_cost, 2),
        ));
    }
    if recommended != award.recommended.as_ref() {
        let named = |bid: Option<&String>| bid.map_or("no bid", String::as_str).to_owned();
        let (now, then) = (named(recommended), named(award.recommended.as_ref()));
        otherwise.push(format!("{now} is recommended instead of {then}"));
    }
    (!otherwise.is_empty()).then(|| {
        format!(
            "compared again now, {}: the basis has changed since, or the program (then {}); the award stands as it was made",
            otherwise.join(" and "),
            award.program
        )
    })
}

/// By whose terms an answer goes, and in one line what today's basis would say otherwise of a bid.
pub(super) fn by_its_terms(letter: &mut Letter, about: &About, today: &LotResult, bid: &str) {
    let kept = about.result;
    let Some(award) = kept.award.as_ref().filter(|_| kept.as_awarded) else { return };
    letter.text(format!("The lot is awarded to {}", sentence(award)));
    letter.text("This answer goes by the factors and corrections kept with the award.");
    let of = |lot: &LotResult| {
        let own = lot.bids.iter().find(|own| own.bid == bid);
        own.map(|own| (own.owning_cost, own.rank, own.excluded.clone()))
    };
    let mut otherwise = Vec::new();
    for (name, then, now) in [
        ("A", kept.factor_a_per_kw, today.factor_a_per_kw),
        ("B", kept.factor_b_per_kw, today.factor_b_per_kw),
        ("A aux", kept.factor_aux_per_kw, today.factor_aux_per_kw),
    ] {
        if !equal_pv(then, now) {
            otherwise.push(format!("{name} {} instead of {}", group(now, 2), group(then, 2)));
        }
    }
    if kept.stray_share_pu != today.stray_share_pu {
        let (now, then) = (short(today.stray_share_pu), short(kept.stray_share_pu));
        otherwise.push(format!("stray share {now} instead of {then}"));
    }
    if let (Some((then, rank, misses)), Some((now, rank_now, misses_now))) = (of(kept), of(today)) {
        if !equal_pv(then, now) {
            let (now, then) = (group(now, 2), group(then, 2));
            otherwise.push(format!("{bid} at {now} instead of {then} {}", about.currency));
        }
        let place =
            |rank: Option<usize>| rank.map_or("not ranked".to_owned(), |n| format!("rank {n}"));
        if rank != rank_now {
            otherwise.push(format!("{} instead of {}", place(rank_now), place(rank)));
        }
        if misses != misses_now {
            let said = |keys: &[&str]| {
                if keys.is_empty() { "nothing".to_owned() } else { keys.join(", ") }
            };
            otherwise.push(format!("it misses {} instead of {}", said(&misses_now), said(&misses)));
        }
    }
    if kept.recommended != today.recommended {
        let named = |bid: &Option<String>| bid.clone().unwrap_or_else(|| "no bid".to_owned());
        let (now, then) = (named(&today.recommended), named(&kept.recommended));
        otherwise.push(format!("{now} recommended instead of {then}"));
    }
    if !otherwise.is_empty() {
        letter.warning(format!("today's basis would say otherwise: {}", otherwise.join("; ")));
    }
}

/// What awarding a lot came to.
pub fn awarded(result: &AwardResult) -> Letter {
    let mut letter = Letter::default();
    let (award, currency) = (&result.award, &result.currency);
    let said = match result.outcome {
        "withdrawn" => "The award is withdrawn; it was made to",
        "same" => "Nothing changed: it was awarded already, to",
        _ => "Awarded to",
    };
    let units = if result.quantity == 1 { "unit" } else { "units" };
    letter.text(format!(
        "Tender {}, lot {}, {} {units}. {said} {}",
        result.tender,
        result.lot,
        result.quantity,
        sentence(award)
    ));
    if result.outcome != "withdrawn" {
        letter.text(terms(award, currency));
    }
    for key in &result.flags {
        letter.warning(flag(key));
    }
    if !result.excluded.is_empty() {
        letter.warning(format!("{} misses {}", award.bid, result.excluded.join(", ")));
    }
    if !result.measured_of_others.is_empty() {
        letter.warning(format!(
            "the book holds measured units of {}, which is not the awarded bid",
            result.measured_of_others.join(", ")
        ));
    }
    letter
}

/// What taking delivered units into the fleet came to.
pub fn delivered(result: &DeliverResult) -> Letter {
    let mut letter = Letter::default();
    let count = |outcome| result.units.iter().filter(|unit| unit.outcome == outcome).count();
    letter.text(format!(
        "Tender {}: units in the fleet {} new, {} changed, {} the same.",
        result.tender,
        count("new"),
        count("changed"),
        count("same")
    ));
    let row = |unit: &DeliveredUnit| {
        vec![
            unit.unit.clone(),
            unit.lot.clone(),
            unit.bid.clone(),
            short(unit.rated_kva),
            group(unit.no_load_loss_w, 1),
            group(unit.load_loss_w, 1),
            unit.reference_temp_c.map_or_else(|| "–".to_owned(), short),
            unit.outcome.to_owned(),
        ]
    };
    letter.table(
        vec![
            Column::words("unit"),
            Column::words("lot"),
            Column::words("bid"),
            Column::figures("rating", "kVA"),
            Column::figures("no-load loss", "W"),
            Column::figures("load loss", "W"),
            Column::figures("at", "°C"),
            Column::words(""),
        ],
        result.units.iter().map(row).collect(),
    );
    for out in &result.left_out {
        letter.text(match &out.serial {
            Some(serial) => format!("Left out: {serial} of lot {} {}.", out.lot, out.why),
            None => format!("Left out: lot {} {}.", out.lot, out.why),
        });
    }
    if !result.lots_measured_beyond.is_empty() {
        let lots = result.lots_measured_beyond.join(", ");
        for key in Flags::MEASURED_BEYOND.keys() {
            letter.warning(format!("lot {lots}: {}", flag(key)));
        }
    }
    let rejectable: Vec<&str> = result
        .units
        .iter()
        .filter(|unit| unit.rejectable)
        .map(|unit| unit.serial.as_str())
        .collect();
    if !rejectable.is_empty() {
        letter.warning(format!(
            "{} may be rejected as beyond tolerance and is in the fleet",
            rejectable.join(", ")
        ));
    }
    if count("new") > 0 {
        letter.text(
            "To rank them, import what the place asks of them (columns unit, rated_kva, site, peak_kva, profile): ironhum import units FILE.",
        );
    }
    letter.text(
        "A unit that goes back to its maker leaves the computations with in_service = no (columns unit, rated_kva, in_service): ironhum import units FILE; it stays in the book with its history.",
    );
    letter
}
