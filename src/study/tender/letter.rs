//! What the evaluation of a tender says, as a letter: the text of `ironhum tender` and the body of its report.
//!
//! Each section is a function of its own; [`result`] joins those that a terminal shows. Figures come from the
//! results as they are; only shares and differences that a reader would work out in the head are formed here.

mod answer;
mod award;
mod bars;
mod factors;
mod lot;
mod report;
mod risk;

use super::award::{BidderPackage, Package};
use super::{Case, TenderResult};
use crate::engine::flags::Flags;
use crate::exchange::Letter;
use crate::exchange::letter::Column;
use crate::study::figures::{figure, group, short};
use crate::study::losses::flag_meaning;

pub use answer::answer;
pub use award::{awarded as award, changed_since, delivered, sentence};
pub(super) use bars::cost_bars;
pub use factors::lot_factors;
pub(super) use lot::{
    asks, changes, doubts, excluded, factor_scale, factors, loss_scale, map, near_tie, ranking,
    winner,
};
pub use report::report;
pub(super) use risk::risk;

/// The result of a tender for a terminal.
pub fn result(case: &Case, result: &TenderResult) -> Letter {
    let mut letter = Letter::default();
    letter.heading(
        1,
        format!("Tender {}: owning cost per unit in {}", result.tender, result.currency),
    );
    set_aside(&mut letter, case);
    for of in &result.lots {
        let about = lot::About::new(case, result, of);
        asks(&mut letter, &about);
        award::headline(&mut letter, &about);
        factor_scale(&mut letter, &about);
        loss_scale(&mut letter, &about);
        factors(&mut letter, &about);
        ranking(&mut letter, &about);
        cost_bars(&mut letter, &about);
        winner(&mut letter, &about);
        near_tie(&mut letter, &about);
        excluded(&mut letter, &about);
        map(&mut letter, &about);
        changes(&mut letter, &about);
        risk(&mut letter, &about);
        award::standing(&mut letter, &about);
        doubts(&mut letter, &about);
    }
    packages(&mut letter, result);
    letter
}

/// Says that the factors which lots state are set aside, where they are.
pub(super) fn set_aside(letter: &mut Letter, case: &Case) {
    if case.is_from_basis() {
        letter.warning(format!(
            "compared as if no lot stated its factors: each comes from basis {}; what is settled goes by the stated ones",
            case.basis_name().unwrap_or_default()
        ));
    }
}

/// The column of a figure, headed as everywhere.
fn column(key: &str, currency: &str) -> Column {
    let known = figure(key);
    let heading = known.map_or(key, |figure| figure.heading);
    let unit = known.map_or("", |figure| figure.unit).replace("money", currency);
    Column::figures(heading, unit)
}

/// Money for people: in whole units.
fn money(amount: f64) -> String {
    group(amount, 0)
}

/// A flag with its meaning.
pub(in crate::study) fn flag(key: &str) -> String {
    format!("{key}: {}", flag_meaning(key).unwrap_or_default())
}

/// A flag with its meaning, and the stray share where that is what is doubtful.
pub(in crate::study) fn flag_at(key: &str, stray_share_pu: f64) -> String {
    let said = flag(key);
    if Flags::SPLIT_UNKNOWN.keys().contains(&key) {
        return format!("{said} (here {} of the load loss)", short(stray_share_pu));
    }
    said
}

/// Lots each to its own winner, or all to one bidder; nothing for a tender of one lot.
pub(super) fn packages(letter: &mut Letter, result: &TenderResult) {
    if result.lots.len() < 2 {
        return;
    }
    let (awards, currency) = (&result.awards, &result.currency);
    letter.heading(2, "Award by lot or to one bidder");
    let bids = |package: &Package| {
        let named = package.bids.iter().map(|bid| format!("{}: {}", bid.lot, bid.bid));
        named.collect::<Vec<_>>().join(", ")
    };
    let missing = |package: &Package| package.lots_missing.join(", ");
    let by_lot = &awards.by_lot;
    let own = vec![
        "each lot on its own".to_owned(),
        bids(by_lot),
        missing(by_lot),
        money(by_lot.lot_cost),
        money(0.0),
    ];
    let to_one = |package: &BidderPackage| {
        vec![
            package.bidder.clone(),
            bids(&package.package),
            missing(&package.package),
            money(package.package.lot_cost),
            money(package.above_by_lot),
        ]
    };
    letter.table(
        vec![
            Column::words("award"),
            Column::words("bids"),
            Column::words("lots without"),
            Column::figures("owning cost", currency),
            Column::figures("above the winners of these lots", currency),
        ],
        std::iter::once(own).chain(awards.packages.iter().map(to_one)).collect(),
    );
}

/// The day of a moment in time (UTC, ISO 8601).
pub(in crate::study) fn day(moment: &str) -> &str {
    moment.split('T').next().unwrap_or(moment)
}

/// What stays on every screen and in every report.
const CAUTIONS: &str = "Screening economics, not switching or loading instructions. Work on energised or \
    oil-filled plant, PCB handling, loading beyond nameplate and protection settings follow local codes, \
    manufacturer instructions and licensed engineers. Legal tables are a screening aid: local law and licensed \
    practice decide. Whether a penalty is due is for the contract to say.";

/// The cautions, at the end of a letter.
pub(in crate::study) fn cautions(letter: &mut Letter) {
    letter.heading(2, "Cautions");
    letter.text(CAUTIONS);
}
