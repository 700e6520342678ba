//! The answer to one bidder: where its bid stands, what it lacked, and how its figures come about.

use super::award::by_its_terms;
use super::lot::{About, doubted, misses};
use super::{asks, cautions, day, factor_scale, factors, near_tie};
use crate::engine::working::Step;
use crate::exchange::Letter;
use crate::exchange::letter::Column;
use crate::study::StudyError;
use crate::study::explain::StepRow;
use crate::study::figures::{enough, group, short};
use crate::study::tender::shortfall::{Shortfall, shortfall};
use crate::study::tender::{Awarded, BidResult, Case, TenderResult, working};

/// Answers for a bid in each lot that has one of that name; where the lot is awarded, by the terms of the award.
///
/// # Errors
/// As [`crate::study::tender::evaluate`].
pub fn answer(case: &Case, result: &TenderResult, bid: &str) -> Result<Letter, StudyError> {
    let mut letter = Letter::default();
    letter.heading(1, format!("Tender {}: bid {bid}", result.tender));
    for of in result.lots.iter().filter(|lot| lot.bids.iter().any(|of| of.bid == bid)) {
        let kept = case.as_awarded(&of.lot)?;
        let about = About::new(case, result, kept.as_ref().unwrap_or(of));
        asks(&mut letter, &about);
        by_its_terms(&mut letter, &about, of, bid);
        factor_scale(&mut letter, &about);
        factors(&mut letter, &about);
        standing(&mut letter, &about, bid);
        let w = case.answering(&of.lot, bid)?;
        letter.heading(3, "How its owning cost comes about");
        let rows = |steps: &[Step]| StepRow::lines(&StepRow::tree(steps), 0, case.money());
        letter.lines([rows(&w.on_terms), rows(&w.owning_cost)].concat());
        letter.heading(3, "How the factors come about");
        match about.result.award.as_ref().filter(|_| about.result.as_awarded) {
            None => letter.lines(rows(&w.factors)),
            Some(award) => {
                let now = working(&case.sheet, case.basis().as_ref(), &of.lot, bid)?.factors;
                let same = award.has_factors_of(of);
                let basis = case.basis_name().filter(|_| of.computed.any());
                letter.text(where_from(award, basis, same));
                if same {
                    letter.lines(rows(&now));
                }
            }
        }
    }
    cautions(&mut letter);
    Ok(letter)
}

/// Where the factors of an award come from, and how to get their working where the basis has changed since.
fn where_from(award: &Awarded, basis: Option<&str>, same: bool) -> String {
    let kept = "They are kept with the award as they were then";
    if same {
        return match basis {
            Some(basis) => format!("{kept}; basis {basis} gives the same today:"),
            None => format!("{kept}; the lot states them itself, and still does."),
        };
    }
    let then = award.basis.as_deref().unwrap_or("(none)");
    format!(
        "{kept}: from basis {then} as it stood on {}. The basis that is used today gives others, so their working is not shown. To get it, import the basis file of that day under another name and ask again with --basis NAME: where it gives the same factors, the working stands here.",
        day(&award.awarded_at)
    )
}

/// Where the bid stands, and what it lacked.
fn standing(letter: &mut Letter, about: &About, name: &str) {
    let (result, currency) = (about.result, about.currency);
    let Some(bid) = result.bids.iter().find(|bid| bid.bid == name) else { return };
    let by = bid.bidder.as_ref().map_or(String::new(), |bidder| format!(" of {bidder}"));
    letter.heading(3, format!("Bid {name}{by}"));
    let awarded = result.award.as_ref().and_then(|award| bid_of(about, &award.bid));
    let least = about.ranked().next();
    beside(letter, currency, bid, least, awarded);
    if let Some(awarded) = awarded.filter(|awarded| awarded.bid != bid.bid) {
        letter.text(against_awarded(bid, awarded, currency));
    }
    match bid.rank {
        None => letter.text(format!(
            "It is not ranked: it misses {}. No lower price makes up for that.",
            misses(bid)
        )),
        Some(rank) => {
            letter.text(format!("It ranks {rank} of {} by owning cost.", about.ranked().count()));
        }
    }
    if result.recommended.as_deref() == Some(name) {
        letter.text("It is the recommended bid.");
    }
    near_tie(letter, about);
    match (bid.rank, shortfall(result, bid)) {
        (None, lacked) => {
            letter.text(had_it_kept_them(bid, lacked.as_ref(), least.is_some(), currency));
        }
        (Some(_), Some(lacked)) => letter.text(lacks(about, &lacked, bid)),
        (Some(_), None) => {}
    }
    for key in &bid.flags {
        letter.warning(format!("{}: {}", doubted(bid, key), about.flag(key)));
    }
}

fn bid_of<'a>(about: &About<'a>, name: &str) -> Option<&'a BidResult> {
    about.result.bids.iter().find(|bid| bid.bid == name)
}

/// A part of the owning cost with its amount.
type Part = (&'static str, fn(&BidResult) -> f64);

/// The parts of the owning cost, beside those of the bid of least owning cost and of the awarded one.
fn beside(
    letter: &mut Letter,
    currency: &str,
    bid: &BidResult,
    least: Option<&BidResult>,
    awarded: Option<&BidResult>,
) {
    let mut shown = vec![(bid, "amount".to_owned())];
    for (of, is) in [(least, "least"), (awarded, "awarded")] {
        let Some(of) = of.filter(|of| of.bid != bid.bid) else { continue };
        match shown.iter_mut().find(|(known, _)| known.bid == of.bid) {
            Some((_, heading)) => heading.push_str(&format!(", {is}")),
            None => shown.push((of, format!("{}, {is}", of.bid))),
        }
    }
    let parts: [Part; 6] = [
        ("price", |bid| bid.price),
        ("freight, installation, other adders", |bid| bid.added_cost),
        ("no-load loss", |bid| bid.no_load_cost),
        ("load loss", |bid| bid.load_cost),
        ("auxiliary loss", |bid| bid.auxiliary_cost),
        ("owning cost", |bid| bid.owning_cost),
    ];
    let mut columns = vec![Column::words("part of the owning cost of one unit")];
    columns.extend(shown.iter().map(|(_, heading)| Column::figures(heading.clone(), currency)));
    let row = |(part, amount): &Part| {
        let amounts = shown.iter().map(|(of, _)| group(amount(of), 2));
        std::iter::once((*part).to_owned()).chain(amounts).collect()
    };
    letter.table(columns, parts.iter().map(row).collect());
    letter.text("Sums are of unrounded amounts.");
}

/// How the bid stands against the awarded one.
fn against_awarded(bid: &BidResult, awarded: &BidResult, currency: &str) -> String {
    let more = awarded.owning_cost - bid.owning_cost;
    let side = if more > 0.0 { "more" } else { "less" };
    format!(
        "The awarded bid {} owns for {} {currency} a unit, {} {currency} {side} than {}.",
        awarded.bid,
        group(awarded.owning_cost, 2),
        group(more.abs(), 2),
        bid.bid
    )
}

/// Where a bid that is out would have stood.
fn had_it_kept_them(
    bid: &BidResult,
    lacked: Option<&Shortfall>,
    ranked: bool,
    currency: &str,
) -> String {
    let cost = group(bid.owning_cost, 2);
    match lacked {
        Some(lacked) => format!(
            "Had it kept every limit as it was offered, its owning cost of {cost} {currency} a unit would have stood {} {currency} above the {} of {}, the least.",
            group(lacked.gap, 2),
            group(lacked.least_owning_cost, 2),
            lacked.least
        ),
        None if ranked => format!(
            "Had it kept every limit as it was offered, its owning cost of {cost} {currency} a unit would have been the least."
        ),
        None => format!("Its owning cost is {cost} {currency} a unit; no bid is ranked."),
    }
}

/// What the bid lacked against that of least owning cost; each figure is rounded up, so that it is enough.
fn lacks(about: &About, lacked: &Shortfall, bid: &BidResult) -> String {
    let (name, currency) = (&bid.bid, about.currency);
    let mut ways = Vec::new();
    if let Some(less) = lacked.price {
        ways.push(format!("a price lower by {} {currency}", enough(less, 2)));
    }
    if let Some(less) = lacked.no_load_loss_w {
        ways.push(format!("a no-load loss lower by {} W", enough(less, 1)));
    }
    if let Some(less) = lacked.load_loss_w {
        let at = match about.lot.and_then(|lot| lot.reference_temp_c) {
            Some(c) => format!("as compared at {} °C", short(c)),
            None => "as quoted".to_owned(),
        };
        let kva = short(bid.losses.rated_kva);
        ways.push(format!("a load loss lower by {} W ({at} and {kva} kVA)", enough(less, 1)));
    }
    let percent = lacked.gap_pct.map_or(String::new(), |pct| format!(" ({} %)", group(pct, 2)));
    let first = format!(
        "{} has the least owning cost: {} {currency} a unit, {} {currency} less than {name}{percent}.",
        lacked.least,
        group(lacked.least_owning_cost, 2),
        group(lacked.gap, 2)
    );
    match ways.as_slice() {
        [] => format!("{first} No single figure of {name} could have made that up."),
        ways => format!("{first} Any one of these would have made that up: {}.", ways.join("; ")),
    }
}
