//! The sections of one lot: what it asks, factors, ranking, who is out, the winner map, what would change the winner.

use super::{column, flag, flag_at, money};
use crate::engine::columns::{Bid, Column as Fact, Lot};
use crate::engine::flags::Flags;
use crate::exchange::Letter;
use crate::exchange::letter::Column;
use crate::study::figures::{group, short};
use crate::study::tender::{
    BidResult, Case, ChangeResult, LotResult, Miss, MoveResult, TenderResult, bids_of,
};

const STRAY_SHARE: &str = "stray_share_pu";

/// A lot with what is said of it.
#[derive(Clone, Copy)]
pub(in crate::study) struct About<'a> {
    pub(in crate::study) case: &'a Case,
    pub(in crate::study) currency: &'a str,
    pub(in crate::study) result: &'a LotResult,
    /// The lot as it was put out.
    pub(in crate::study) lot: Option<&'a Lot>,
}

impl<'a> About<'a> {
    pub(in crate::study) fn new(
        case: &'a Case,
        tender: &'a TenderResult,
        result: &'a LotResult,
    ) -> Self {
        let lot = case.sheet.lots.iter().find(|lot| lot.lot == result.lot);
        Self { case, currency: &tender.currency, result, lot }
    }

    pub(super) fn bid(&self, name: &str) -> Option<&'a Bid> {
        bids_of(&self.case.sheet, &self.result.lot).find(|bid| bid.bid == name)
    }

    /// A flag of a bid with its meaning; of an unknown split also whether it decides.
    pub(super) fn flag(&self, key: &str) -> String {
        let said = flag_at(key, self.result.stray_share_pu);
        if !Flags::SPLIT_UNKNOWN.keys().contains(&key) {
            return said;
        }
        let risk = self.result.risk.as_ref();
        let swing = risk.and_then(|risk| risk.swing.iter().find(|s| s.quantity == STRAY_SHARE));
        match (self.case.has_range(STRAY_SHARE), swing) {
            (false, _) => format!("{said}; give {STRAY_SHARE} a range to see whether it decides"),
            (true, None) => format!("{said}; whether its range decides: --risk"),
            (true, Some(swing)) if swing.winner_low == swing.winner_high => format!(
                "{said}; its range decides nothing alone: from {} to {} {} wins",
                short(swing.low),
                short(swing.high),
                swing.winner_low
            ),
            (true, Some(swing)) => format!(
                "{said}; its range decides: at {} {} wins, at {} {}",
                short(swing.low),
                swing.winner_low,
                short(swing.high),
                swing.winner_high
            ),
        }
    }

    pub(super) fn ranked(&self) -> impl Iterator<Item = &'a BidResult> + use<'a> {
        self.result.bids.iter().filter(|bid| bid.rank.is_some())
    }
}

/// What the lot asks.
pub(in crate::study) fn asks(letter: &mut Letter, about: &About) {
    let result = about.result;
    letter.heading(2, format!("Lot {}", result.lot));
    let Some(lot) = about.lot else { return };
    let units = if result.quantity == 1 { "unit" } else { "units" };
    let mut parts = vec![format!("{} {units} of {} kVA", result.quantity, short(lot.rated_kva))];
    match (lot.hv_kv, lot.lv_kv) {
        (Some(hv), Some(lv)) => parts.push(format!("{}/{} kV", short(hv), short(lv))),
        (Some(kv), None) | (None, Some(kv)) => parts.push(format!("{} kV", short(kv))),
        (None, None) => {}
    }
    parts.extend(lot.vector_group.clone());
    parts.push(match lot.reference_temp_c {
        Some(c) => format!("load losses compared at {} °C", short(c)),
        None => "load losses compared as quoted".to_owned(),
    });
    parts.extend(lot.law.as_ref().map(|law| format!("law {law}")));
    letter.text(format!("{}.", parts.join(", ")));
}

/// The warning that factors look like money per W; it stands before every figure that rests on them.
pub(in crate::study) fn factor_scale(letter: &mut Letter, about: &About) {
    for key in Flags::FACTOR_SCALE.keys() {
        if about.result.flags.contains(&key) {
            letter.warning(flag(key));
        }
    }
}

/// The warning that losses of bids look like kW; it too stands before the figures, as such a bid owns far too well.
pub(in crate::study) fn loss_scale(letter: &mut Letter, about: &About) {
    for key in Flags::LOSS_SCALE.keys() {
        let of = about.result.bids.iter().filter(|bid| bid.flags.contains(&key));
        let bids: Vec<&str> = of.map(|bid| bid.bid.as_str()).collect();
        if !bids.is_empty() {
            letter.warning(format!("{}: {}", bids.join(", "), flag(key)));
        }
    }
}

/// What a kW of loss is worth.
pub(in crate::study) fn factors(letter: &mut Letter, about: &About) {
    let (result, currency) = (about.result, about.currency);
    let from = match about.case.basis_name() {
        Some(name) => format!("from basis {name}"),
        None => "computed".to_owned(),
    };
    let rows = [
        ("A", result.factor_a_per_kw, "no-load (iron) loss", result.computed.a),
        ("B", result.factor_b_per_kw, "load (copper) loss at the lot's rating", result.computed.b),
        ("A aux", result.factor_aux_per_kw, "auxiliary loss", result.computed.aux),
    ];
    letter.table(
        vec![
            Column::words("factor"),
            Column::figures("worth", format!("{currency}/kW, once")),
            Column::words("of a kW of"),
            Column::words("where from"),
        ],
        rows.into_iter()
            .map(|(symbol, value, of, computed)| {
                let from = match (result.as_awarded, computed) {
                    (true, _) => "kept with the award".to_owned(),
                    (false, true) => from.clone(),
                    (false, false) => "stated in the lot".to_owned(),
                };
                vec![symbol.to_owned(), group(value, 2), of.to_owned(), from]
            })
            .collect(),
    );
}

/// The bids by owning cost.
pub(in crate::study) fn ranking(letter: &mut Letter, about: &About) {
    let least = about.ranked().next().map_or(0.0, |bid| bid.owning_cost);
    let figures = [
        "price",
        "added_cost",
        "no_load_cost",
        "load_cost",
        "auxiliary_cost",
        "owning_cost",
        "owning_cost_at_tolerance",
        "lot_cost",
    ];
    let mut columns =
        vec![Column::figures("rank", ""), Column::words("bid"), Column::words("bidder")];
    columns.extend(figures.map(|key| column(key, about.currency)));
    columns.insert(9, Column::figures("above first", about.currency));
    let row = |bid: &BidResult| {
        let amounts = [
            bid.price,
            bid.added_cost,
            bid.no_load_cost,
            bid.load_cost,
            bid.auxiliary_cost,
            bid.owning_cost,
            bid.owning_cost - least,
            bid.owning_cost_at_tolerance,
            bid.lot_cost,
        ];
        let words = [
            bid.rank.map(|rank| rank.to_string()).unwrap_or_default(),
            bid.bid.clone(),
            bid.bidder.clone().unwrap_or_else(|| "–".to_owned()),
        ];
        words.into_iter().chain(amounts.map(money)).collect()
    };
    letter.table(columns, about.ranked().map(row).collect());
}

/// Who wins, and by how much.
pub(in crate::study) fn winner(letter: &mut Letter, about: &About) {
    let result = about.result;
    let mut text = match (&result.least_owning_cost, &result.recommended) {
        (Some(least), Some(leads)) if least == leads => {
            format!("{least} has the least owning cost and is recommended.")
        }
        (Some(least), Some(leads)) => format!(
            "{least} has the least owning cost; {leads} is recommended: inside the near-tie band its price with adders is lowest."
        ),
        _ if result.bids.is_empty() => {
            format!("No bid for lot {} yet; import them: ironhum import bids FILE.", result.lot)
        }
        _ => "No bid can be ranked: each one misses something.".to_owned(),
    };
    if let Some(margin) = result.margin_pct {
        text.push_str(&format!(
            " The second lies {} % above the least owning cost.",
            group(margin, 2)
        ));
    }
    letter.text(text);
}

/// Both orders of the near-tie band; nothing where only one bid lies in it.
pub(in crate::study) fn near_tie(letter: &mut Letter, about: &About) {
    let result = about.result;
    if result.near_tie_order.len() < 2 {
        return;
    }
    let tied = about.ranked().filter(|bid| bid.near_tie).map(|bid| bid.bid.as_str());
    letter.text(format!(
        "Near tie, within {} % of the least owning cost. By owning cost: {}. By price with adders, of which the first is recommended: {}.",
        short(result.near_tie_pct),
        tied.collect::<Vec<_>>().join(", "),
        result.near_tie_order.join(", ")
    ));
}

/// Who is out, and why.
pub(in crate::study) fn excluded(letter: &mut Letter, about: &About) {
    let out = about.result.bids.iter().filter(|bid| bid.rank.is_none());
    let point = |bid: &BidResult| format!("Out: {} misses {}.", bid.bid, misses(bid));
    letter.points(out.map(point).collect());
}

/// What a bid misses, each with what it offers and what is asked.
pub(super) fn misses(bid: &BidResult) -> String {
    bid.misses.iter().map(Miss::in_full).collect::<Vec<_>>().join("; ")
}

/// Who wins at other factors, and how far the nearest border is.
pub(in crate::study) fn map(letter: &mut Letter, about: &About) {
    let (result, currency) = (about.result, about.currency);
    if result.map.bids.is_empty() {
        return;
    }
    letter.heading(3, "Who wins at other factors");
    letter.text(format!(
        "Of all A from 0 to {} and B from 0 to {} {currency}/kW (twice today's):",
        money(result.map.a_max),
        money(result.map.b_max)
    ));
    letter.table(
        vec![Column::words("bid"), Column::figures("wins", "% of the map")],
        result.map.bids.iter().map(|c| vec![c.bid.clone(), group(100.0 * c.share, 1)]).collect(),
    );
    if let Some(border) = &result.nearest_border {
        let [a, b] = border.at;
        letter.text(format!(
            "The nearest pair of factors at which another bid is as cheap: A {}, B {} ({} {currency}/kW away from today's A {}, B {}); beyond it {} wins.",
            group(a, 2),
            group(b, 2),
            group(border.distance_per_kw, 2),
            group(result.factor_a_per_kw, 2),
            group(result.factor_b_per_kw, 2),
            border.bid
        ));
    }
}

/// How far each input must move, all others held, before another bid wins.
pub(in crate::study) fn changes(letter: &mut Letter, about: &About) {
    let Some(winner) = &about.result.least_owning_cost else { return };
    if about.result.map.bids.len() < 2 {
        return;
    }
    letter.heading(3, "What must move before another bid wins");
    let side = |side: &Option<MoveResult>, places: usize| match side {
        Some(side) => [group(side.to, places), side.bid.clone()],
        None => ["never".to_owned(), "–".to_owned()],
    };
    let row = |change: &ChangeResult| {
        let (name, unit, places) = input(change.quantity, winner, about.currency);
        let [down, then] = side(&change.down, places);
        let [up, or] = side(&change.up, places);
        let today = group(change.base, places);
        vec![name, unit, today, down, then, up, or]
    };
    letter.table(
        vec![
            Column::words("input, all others held"),
            Column::words("unit"),
            Column::figures("today", ""),
            Column::figures("falls to", ""),
            Column::words("then wins"),
            Column::figures("rises to", ""),
            Column::words("then wins"),
        ],
        about.result.changes.0.iter().map(row).collect(),
    );
}

/// Name, unit and places of an input that may move.
fn input(quantity: &str, winner: &str, currency: &str) -> (String, String, usize) {
    let of = |what: &str| format!("{what} of {winner}");
    let (name, unit, places) = match quantity {
        "factor_a_per_kw" => ("A".to_owned(), format!("{currency}/kW"), 2),
        "factor_b_per_kw" => ("B".to_owned(), format!("{currency}/kW"), 2),
        "factor_aux_per_kw" => ("A aux".to_owned(), format!("{currency}/kW"), 2),
        "price" => (of("price"), currency.to_owned(), 0),
        "no_load_loss_w" => (of("no-load loss"), "W".to_owned(), 1),
        "load_loss_w" => (of("load loss"), "W".to_owned(), 1),
        "discount_rate_pct" => ("discount rate".to_owned(), "%".to_owned(), 3),
        "energy_price_per_kwh" => {
            ("mean energy price of year 1".to_owned(), "per kWh".to_owned(), 5)
        }
        "peak_pu" => ("peak load of year 1".to_owned(), "pu".to_owned(), 3),
        "stray_share_pu" => (
            "stray share of the load losses brought to another temperature".to_owned(),
            "pu".to_owned(),
            3,
        ),
        other => (other.to_owned(), String::new(), 3),
    };
    (name, unit, places)
}

/// What is doubtful about the lot and its bids.
pub(in crate::study) fn doubts(letter: &mut Letter, about: &About) {
    let scale = Flags::FACTOR_SCALE.keys();
    for key in about.result.flags.iter().filter(|key| !scale.contains(key)) {
        letter.warning(flag(key));
    }
    let mut said: Vec<(&str, Vec<String>)> = Vec::new();
    for bid in &about.result.bids {
        for key in bid.flags.iter().filter(|key| !Flags::LOSS_SCALE.keys().contains(key)) {
            match said.iter_mut().find(|(known, _)| known == key) {
                Some((_, bids)) => bids.push(doubted(bid, key)),
                None => said.push((key, vec![doubted(bid, key)])),
            }
        }
    }
    for (key, bids) in said {
        let said = about.flag(key);
        letter.warning(format!("{}: {said}", bids.join(", ")));
    }
}

/// The name of a bid of which something is doubtful, with the limits where those could not be held against it.
pub(super) fn doubted(bid: &BidResult, key: &str) -> String {
    if Flags::LIMIT_UNKNOWN.keys().contains(&key) {
        return format!("{} ({})", bid.bid, bid.limits_unknown.join(", "));
    }
    bid.bid.clone()
}

/// The unit of an input of a basis or a lot, by the facts of its column.
pub(super) fn unit_of(quantity: &str) -> &'static str {
    let columns = crate::engine::columns::Basis::COLUMNS.iter().chain(Lot::COLUMNS);
    columns.clone().find(|column| column.name == quantity).map_or("", Fact::unit)
}
