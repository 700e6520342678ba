//! The report of a tender: everything that buyers, bidders and auditors ask, from factors to settlement.

use super::award::standing;
use super::lot::About;
use super::{
    asks, cautions, changes, cost_bars, doubts, excluded, factor_scale, factors, map, money,
    near_tie, packages, ranking, risk, set_aside, winner,
};
use crate::exchange::Letter;
use crate::exchange::letter::Column;
use crate::study::StudyError;
use crate::study::explain::StepRow;
use crate::study::figures::{group, short};
use crate::study::settle::SettleResult;
use crate::study::settle::letter::section as settlement;
use crate::study::tender::{BidResult, Case, LotResult, TenderResult};

/// The report of a tender with what its measured units came to.
///
/// # Errors
/// As [`super::super::evaluate`].
pub fn report(
    case: &Case,
    result: &TenderResult,
    settled: &SettleResult,
) -> Result<Letter, StudyError> {
    let mut letter = Letter::default();
    letter.heading(1, format!("Tender {}: bids compared by owning cost", result.tender));
    set_aside(&mut letter, case);
    opening(&mut letter, case, result);
    for of in &result.lots {
        let about = About::new(case, result, of);
        asks(&mut letter, &about);
        factor_scale(&mut letter, &about);
        factors(&mut letter, &about);
        let working = case.factors(&of.lot)?.working;
        letter.heading(3, "How the factors come about");
        letter.lines(StepRow::lines(&working, 0));
        if !of.bids.is_empty() {
            letter.heading(3, "What is compared");
        }
        offered(&mut letter, &about);
        if of.least_owning_cost.is_some() {
            letter.heading(3, "Ranking by owning cost");
        }
        ranking(&mut letter, &about);
        cost_bars(&mut letter, &about);
        winner(&mut letter, &about);
        near_tie(&mut letter, &about);
        excluded(&mut letter, &about);
        map(&mut letter, &about);
        changes(&mut letter, &about);
        risk(&mut letter, &about);
        standing(&mut letter, &about);
        doubts(&mut letter, &about);
    }
    packages(&mut letter, result);
    for lot in &settled.lots {
        settlement(&mut letter, lot, &settled.currency, 2);
    }
    cautions(&mut letter);
    letter.text(format!("Computed by ironhum {}.", env!("CARGO_PKG_VERSION")));
    Ok(letter)
}

/// What the report is about, and what it comes to.
fn opening(letter: &mut Letter, case: &Case, result: &TenderResult) {
    let (sheet, currency) = (&case.sheet, &result.currency);
    let dated = sheet.tender.dated.as_ref().map_or(String::new(), |day| format!(", dated {day}"));
    let basis = case.basis_name().map_or(String::new(), |name| format!(" Basis {name}."));
    letter.text(format!("Tender {}{dated}. Amounts in {currency}.{basis}", result.tender));
    let rates: Vec<String> = sheet
        .rates
        .iter()
        .map(|rate| format!("1 {} = {} {currency}", rate.currency, rate.rate))
        .collect();
    if !rates.is_empty() {
        letter.text(format!("Rates stored with the tender: {}.", rates.join("; ")));
    }
    letter.text(
        "Owning cost of a unit = price + A·no-load loss + B·load loss + A aux·auxiliary loss + freight, installation and other adders; losses in kW.",
    );
    let row = |lot: &LotResult| {
        let leads = lot.recommended.as_ref();
        let bid = leads.and_then(|name| lot.bids.iter().find(|bid| bid.bid == *name));
        let blank = || "–".to_owned();
        vec![
            lot.lot.clone(),
            lot.quantity.to_string(),
            leads.cloned().unwrap_or_else(blank),
            bid.and_then(|bid| bid.bidder.clone()).unwrap_or_else(blank),
            bid.map_or_else(blank, |bid| money(bid.owning_cost)),
            bid.map_or_else(blank, |bid| money(bid.lot_cost)),
            lot.margin_pct.map_or_else(blank, |margin| group(margin, 2)),
        ]
    };
    letter.table(
        vec![
            Column::words("lot"),
            Column::figures("units", ""),
            Column::words("recommended"),
            Column::words("bidder"),
            Column::figures("owning cost", currency),
            Column::figures("whole lot", currency),
            Column::figures("second above first", "%"),
        ],
        result.lots.iter().map(row).collect(),
    );
}

/// What was offered, and the losses that are compared: at the bid's rating and the lot's reference temperature.
fn offered(letter: &mut Letter, about: &About) {
    let blank = || "–".to_owned();
    let row = |result: &BidResult| {
        let losses = &result.losses;
        let quoted = about.bid(&result.bid);
        let load = quoted.and_then(|bid| match (bid.load_loss_w, bid.total_loss_w) {
            (Some(load), _) => Some(short(load)),
            (None, total) => total.map(|total| format!("{} in total", short(total))),
        });
        let price = quoted.map(|bid| {
            let currency = bid.currency.as_deref().unwrap_or(about.currency);
            format!("{} {currency}", short(bid.price.amount()))
        });
        vec![
            result.bid.clone(),
            result.bidder.clone().unwrap_or_else(blank),
            price.unwrap_or_else(blank),
            load.unwrap_or_else(blank),
            quoted.and_then(|bid| bid.reference_temp_c).map_or_else(blank, short),
            short(losses.rated_kva),
            group(losses.no_load_loss_w, 1),
            group(losses.load_loss_w, 1),
            group(losses.auxiliary_loss_w, 1),
            result.law.map_or("–", |meets| if meets { "met" } else { "missed" }).to_owned(),
        ]
    };
    letter.table(
        vec![
            Column::words("bid"),
            Column::words("bidder"),
            Column::figures("price quoted", ""),
            Column::figures("load loss quoted", "W"),
            Column::figures("at", "°C"),
            Column::figures("rating", "kVA"),
            Column::figures("no-load loss", "W"),
            Column::figures("load loss compared", "W"),
            Column::figures("auxiliary loss", "W"),
            Column::words("law"),
        ],
        about.result.bids.iter().map(row).collect(),
    );
}
