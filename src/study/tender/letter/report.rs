//! The report of a tender: everything that buyers, bidders and auditors ask, from factors to settlement.

use super::award::{changed_since, headline, standing};
use super::lot::About;
use super::{
    asks, cautions, changes, cost_bars, doubts, excluded, factor_scale, factors, loss_scale, map,
    money, near_tie, packages, ranking, risk, set_aside, winner,
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
        headline(&mut letter, &about);
        factor_scale(&mut letter, &about);
        loss_scale(&mut letter, &about);
        factors(&mut letter, &about);
        let working = case.factors(&of.lot)?.working;
        letter.heading(3, "How the factors come about");
        letter.lines(StepRow::lines(&working, 0, case.money()));
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
    let with_award = result.lots.iter().any(|lot| lot.award.is_some());
    let mut columns = vec![
        Column::words("lot"),
        Column::figures("units", ""),
        Column::words("is"),
        Column::words("bid"),
        Column::words("bidder"),
        Column::figures("owning cost", currency),
        Column::figures("whole lot", currency),
        Column::figures("above the least", "%"),
    ];
    if with_award {
        columns.push(Column::figures("owning cost as awarded", currency));
    }
    letter.table(columns, result.lots.iter().flat_map(|lot| outcome(lot, with_award)).collect());
    for lot in &result.lots {
        if let Some(changed) = changed_since(lot, currency) {
            letter.warning(format!("lot {}: {changed}", lot.lot));
        }
    }
}

/// The bids that count in a lot, a row for each: that of least owning cost, the next, the recommended, the awarded one.
fn outcome(lot: &LotResult, with_award: bool) -> Vec<Vec<String>> {
    let blank = || "–".to_owned();
    let least = lot.bids.iter().find(|bid| bid.rank == Some(1)).map(|bid| bid.owning_cost);
    let above = |bid: &BidResult| {
        let least = least.filter(|least| *least > 0.0)?;
        Some(group(100.0 * (bid.owning_cost / least - 1.0), 2))
    };
    let row = |bid: &BidResult| {
        let is = |name: Option<&String>| name == Some(&bid.bid);
        let parts = [
            (bid.rank == Some(1), "least owning cost"),
            (is(lot.recommended.as_ref()), "recommended"),
            (is(lot.award.as_ref().map(|award| &award.bid)), "awarded"),
            (bid.rank == Some(2), "second"),
        ];
        let mut words: Vec<&str> =
            parts.iter().filter(|(holds, _)| *holds).map(|(_, word)| *word).collect();
        if words.is_empty() {
            return None;
        }
        if bid.rank.is_none() {
            words.push("excluded");
        }
        let mut cells = vec![
            lot.lot.clone(),
            lot.quantity.to_string(),
            words.join(", "),
            bid.bid.clone(),
            bid.bidder.clone().unwrap_or_else(blank),
            money(bid.owning_cost),
            money(bid.lot_cost),
            above(bid).unwrap_or_else(blank),
        ];
        if with_award {
            let own = lot.award.as_ref().filter(|award| award.bid == bid.bid);
            cells.push(own.map_or_else(blank, |award| money(award.owning_cost)));
        }
        Some(cells)
    };
    let rows: Vec<Vec<String>> = lot.bids.iter().filter_map(row).collect();
    if rows.is_empty() {
        let (name, units) = (lot.lot.clone(), lot.quantity.to_string());
        let none = "no bid is ranked".to_owned();
        let mut cells = vec![name, units, none];
        cells.resize_with(if with_award { 9 } else { 8 }, blank);
        return vec![cells];
    }
    rows
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
