//! The answer to one bidder: where its bid stands, what it lacked, and how its figures come about.

use super::award::by_its_terms;
use super::lot::{About, doubted, misses};
use super::{asks, cautions, factor_scale, factors, flag_at, near_tie};
use crate::engine::working::Step;
use crate::exchange::Letter;
use crate::exchange::letter::Column;
use crate::study::StudyError;
use crate::study::explain::StepRow;
use crate::study::figures::group;
use crate::study::tender::shortfall::{Shortfall, shortfall};
use crate::study::tender::{Case, TenderResult};

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
        if about.result.as_awarded {
            letter.text("They are kept with the award as they were then.");
        } else {
            letter.lines(rows(&w.factors));
        }
    }
    cautions(&mut letter);
    Ok(letter)
}

/// Where the bid stands, and what it lacked.
fn standing(letter: &mut Letter, about: &About, name: &str) {
    let (result, currency) = (about.result, about.currency);
    let Some(bid) = result.bids.iter().find(|bid| bid.bid == name) else { return };
    let by = bid.bidder.as_ref().map_or(String::new(), |bidder| format!(" of {bidder}"));
    let parts = [
        ("price", bid.price),
        ("freight, installation, other adders", bid.added_cost),
        ("no-load loss", bid.no_load_cost),
        ("load loss", bid.load_cost),
        ("auxiliary loss", bid.auxiliary_cost),
        ("owning cost", bid.owning_cost),
    ];
    letter.heading(3, format!("Bid {name}{by}"));
    letter.table(
        vec![
            Column::words("part of the owning cost of one unit"),
            Column::figures("amount", currency),
        ],
        parts.map(|(part, amount)| vec![part.to_owned(), group(amount, 2)]).to_vec(),
    );
    match bid.rank {
        None => letter.text(format!("It is not ranked: it misses {}.", misses(bid))),
        Some(rank) => {
            letter.text(format!("It ranks {rank} of {} by owning cost.", about.ranked().count()));
        }
    }
    if result.recommended.as_deref() == Some(name) {
        letter.text("It is the recommended bid.");
    }
    near_tie(letter, about);
    if let Some(lacked) = shortfall(result, bid) {
        letter.text(lacks(&lacked, name, currency));
    }
    for key in &bid.flags {
        letter.warning(format!("{}: {}", doubted(bid, key), flag_at(key, result.stray_share_pu)));
    }
}

/// What the bid lacked against that of least owning cost.
fn lacks(lacked: &Shortfall, name: &str, currency: &str) -> String {
    let mut ways = Vec::new();
    if let Some(less) = lacked.price {
        ways.push(format!("a price lower by {} {currency}", group(less, 2)));
    }
    if let Some(less) = lacked.no_load_loss_w {
        ways.push(format!("a no-load loss lower by {} W", group(less, 1)));
    }
    if let Some(less) = lacked.load_loss_w {
        ways.push(format!("a load loss lower by {} W", group(less, 1)));
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
