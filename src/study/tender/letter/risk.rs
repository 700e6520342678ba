//! How sure the winner is: probabilities, regret, quantiles and the swing of each input.

use super::bars::swing;
use super::lot::{About, unit_of};
use super::{column, money};
use crate::exchange::Letter;
use crate::exchange::letter::Column;
use crate::study::figures::{group, short};
use crate::study::tender::risk::{BidRisk, RiskResult, Swing};

/// The section; nothing where no simulation was asked.
pub(in crate::study) fn risk(letter: &mut Letter, about: &About) {
    let Some(risk) = &about.result.risk else { return };
    letter.heading(3, "How sure the winner is");
    letter.text(format!(
        "{} draws from the ranges of basis {}, seed {}: the same seed gives the same figures.",
        group(as_float(risk.draws), 0),
        about.case.basis_name().unwrap_or_default(),
        risk.seed
    ));
    bids(letter, about, risk);
    if risk.moved_draws > 0 {
        letter.warning(format!(
            "in {} draws an input left its physical range and was moved to the edge; narrow its range",
            group(as_float(risk.moved_draws), 0)
        ));
    }
    swings(letter, about, risk);
}

#[expect(clippy::cast_precision_loss, reason = "at most ten million draws")]
fn as_float(count: usize) -> f64 {
    count as f64
}

fn bids(letter: &mut Letter, about: &About, risk: &RiskResult) {
    let columns = vec![
        Column::words("bid"),
        Column::figures("cheapest to own", "% of draws"),
        column("mean_regret", about.currency),
        column("owning_cost_p5", about.currency),
        column("owning_cost_p50", about.currency),
        column("owning_cost_p95", about.currency),
    ];
    let row = |bid: &BidRisk| {
        vec![
            bid.bid.clone(),
            group(100.0 * bid.probability_pu, 1),
            money(bid.mean_regret),
            money(bid.owning_cost_p5),
            money(bid.owning_cost_p50),
            money(bid.owning_cost_p95),
        ]
    };
    letter.table(columns, risk.bids.iter().map(row).collect());
}

fn swings(letter: &mut Letter, about: &About, risk: &RiskResult) {
    let Some(winner) = &about.result.least_owning_cost else { return };
    if risk.swing.is_empty() {
        letter.text("The basis names no range: nothing is uncertain. Add [range.discount_rate_pct] with low and high, for instance.");
        return;
    }
    // Where only rivals move, the winner's lead does.
    let moves = |swing: &Swing| {
        swing.owning_cost_low != swing.owning_cost_high || swing.lead_low != swing.lead_high
    };
    if !risk.swing.iter().any(moves) {
        letter.text("No range of the basis moves these factors: the lot states them itself. How sure the winner is if they had come from the basis: --from-basis.");
        return;
    }
    letter
        .text(format!("Owning cost of {winner} when one input alone goes to an end of its range:"));
    let base = about.ranked().next().map_or(0.0, |bid| bid.owning_cost);
    let ends = risk.swing.iter().flat_map(|s| [s.owning_cost_low, s.owning_cost_high]);
    let scale = ends.fold([base, base], |[least, most], end| [least.min(end), most.max(end)]);
    let columns = vec![
        Column::words("input"),
        Column::words("unit"),
        Column::figures("low", ""),
        Column::figures("high", ""),
        Column::figures("cost at low", about.currency),
        Column::figures("cost at high", about.currency),
        Column::words(format!("from {} to {}, │ today", money(scale[0]), money(scale[1]))),
        Column::words("wins at low"),
        Column::words("wins at high"),
    ];
    let row = |s: &Swing| {
        vec![
            s.quantity.to_owned(),
            unit_of(s.quantity).replace("money", about.currency),
            short(s.low),
            short(s.high),
            money(s.owning_cost_low),
            money(s.owning_cost_high),
            swing(s.owning_cost_low, s.owning_cost_high, base, scale),
            s.winner_low.clone(),
            s.winner_high.clone(),
        ]
    };
    letter.table(columns, risk.swing.iter().filter(|s| moves(s)).map(row).collect());
    let still: Vec<&str> =
        risk.swing.iter().filter(|s| !moves(s)).map(|swing| swing.quantity).collect();
    if !still.is_empty() {
        letter.text(format!(
            "Without effect here, because the lot states its own figure, or neither its factors nor its bids use it: {}.",
            still.join(", ")
        ));
    }
}
