//! What the settlement of a tender says, as a letter that can go to the bidder.

use super::{LotSettlement, SettleResult, UnitSettlement};
use crate::exchange::letter::Column;
use crate::exchange::{Letter, counted};
use crate::study::figures::{group, short};
use crate::study::tender::letter::{cautions, day, flag, flag_at};

/// The settlement of a tender as a letter.
pub fn settlement(result: &SettleResult) -> Letter {
    let mut letter = Letter::default();
    let currency = &result.currency;
    letter.heading(
        1,
        format!("Tender {}: measured losses against guarantees, in {currency}", result.tender),
    );
    if result.lots.is_empty() {
        letter.text("No measured units; import them with: ironhum import measured FILE");
        return letter;
    }
    for lot in &result.lots {
        section(&mut letter, lot, currency, 2);
    }
    cautions(&mut letter);
    letter
}

/// The settlement of one lot with one bid.
pub(in crate::study) fn section(
    letter: &mut Letter,
    lot: &LotSettlement,
    currency: &str,
    level: usize,
) {
    let by = lot.bidder.as_ref().map_or(String::new(), |bidder| format!(" of {bidder}"));
    letter.heading(level, format!("Settlement of lot {}, bid {}{by}", lot.lot, lot.bid));
    for key in lot.flags.iter().filter(|key| **key == "factor_scale") {
        letter.warning(flag(key));
    }
    award(letter, lot);
    promise(letter, lot, currency);
    correction(letter, lot);
    units(letter, lot, currency);
    outcome(letter, lot, currency);
    let mut said: Vec<(&str, Vec<&str>)> = Vec::new();
    for unit in &lot.units {
        for key in &unit.flags {
            match said.iter_mut().find(|(known, _)| known == key) {
                Some((_, serials)) => serials.push(&unit.serial),
                None => said.push((key, vec![&unit.serial])),
            }
        }
    }
    for (key, serials) in said {
        let all = serials.len() == lot.units.len();
        let of = if all { "all units".to_owned() } else { serials.join(", ") };
        letter.warning(format!("{of}: {}", flag_at(key, lot.guaranteed.stray_share_pu)));
    }
    for key in lot.flags.iter().filter(|key| **key != "factor_scale") {
        letter.warning(flag(key));
    }
}

/// Whether the bid is the awarded one, and so by which terms it is settled.
fn award(letter: &mut Letter, lot: &LotSettlement) {
    match (&lot.awarded_to, &lot.awarded_at) {
        (Some(bid), Some(at)) if *bid == lot.bid => letter.text(format!(
            "Awarded on {}: settled by the factors and the stray share of the award.",
            day(at)
        )),
        (Some(bid), _) => letter.warning(format!(
            "the lot is awarded to {bid}, not to this bid; the factors are today's"
        )),
        (None, _) => letter.text("The lot is not awarded in this book; the factors are today's."),
    }
}

/// How tests at another temperature were brought to the lot's: a penalty may hang on it.
fn correction(letter: &mut Letter, lot: &LotSettlement) {
    let g = &lot.guaranteed;
    let Some(reference) = g.reference_temp_c else { return };
    if lot.units.iter().any(|unit| unit.test_temp_c.is_some_and(|c| c != reference)) {
        letter.text(format!(
            "Load losses read at another temperature are brought to {} °C with windings of {} and a stray share of {} of the load loss; a maker's report that splits the loss goes before: import its load loss at {} °C, the test temperature left blank.",
            short(reference),
            g.winding_metal,
            short(g.stray_share_pu),
            short(reference)
        ));
        if let Some(quoted) = g.quoted_temp_c.filter(|quoted| *quoted != reference) {
            apart(letter, lot, quoted, reference);
        }
    }
}

/// How far the two ways of correcting lie apart for the tests as they were made.
fn apart(letter: &mut Letter, lot: &LotSettlement, quoted: f64, reference: f64) {
    let side = if quoted > reference { "above" } else { "below" };
    letter.text(format!(
        "The guarantee came from {quoted} °C with that share of the loss there, the tests with that share of the loss at {reference} °C. A unit exactly at its guarantee and tested at a temperature {side} {reference} °C, {quoted} °C among them, is not charged by the correction alone; tested on the other side it may be. The column \"correction alone\" says by how many W such a unit comes out above the guarantee (below: −) at the temperature of each test.",
        quoted = short(quoted),
        reference = short(reference)
    ));
    let above = |unit: &&UnitSettlement| unit.correction_alone_w.is_some_and(|w| w >= 0.05);
    let above: Vec<&UnitSettlement> = lot.units.iter().filter(above).collect();
    let most = above.iter().filter_map(|unit| unit.correction_alone_w).reduce(f64::max);
    if let Some(most) = most {
        let serials: Vec<&str> = above.iter().map(|unit| unit.serial.as_str()).collect();
        letter.warning(format!(
            "{}: the correction alone puts a unit exactly at its guarantee up to {} W above it, and it is charged for that; ask the maker for the split of the load loss",
            serials.join(", "),
            group(most, 1)
        ));
    }
}

/// What was promised, what an excess costs, and by what rule.
fn promise(letter: &mut Letter, lot: &LotSettlement, currency: &str) {
    let g = &lot.guaranteed;
    let at = g.reference_temp_c.map_or(String::new(), |c| format!(" at {} °C", short(c)));
    let aux = match g.auxiliary_loss_w {
        0.0 => String::new(),
        w => format!(", auxiliary loss {} W", short(w)),
    };
    letter.text(format!(
        "Measured: {} of {}. Guaranteed for one unit of {} kVA: no-load loss {} W, load loss {} W{at}{aux}.",
        lot.units.len(),
        counted(usize::try_from(lot.quantity).unwrap_or(0), "unit"),
        short(g.rated_kva),
        short(g.no_load_loss_w),
        short(g.load_loss_w)
    ));
    letter.text(format!(
        "A kW above the guarantee costs, once: A {} (no-load loss), B {} (load loss at {} kVA), A aux {} (auxiliaries) {currency}.",
        group(lot.factor_a_per_kw, 2),
        group(lot.factor_b_per_kw, 2),
        short(g.rated_kva),
        group(lot.factor_aux_per_kw, 2)
    ));
    let per = if lot.settlement == "unit" {
        "Each unit is settled on its own"
    } else {
        "The mean of the measured units is settled, times their number"
    };
    let rule = match g.tolerance {
        "iec" => "IEC 60076-1: each loss 15 %, the total 10 % above its guarantee",
        "ieee" => {
            "IEEE C57.12.00: no-load loss 10 %, the total 6 % above its guarantee (beyond it the parties consult)"
        }
        _ => "none",
    };
    let of = match g.tolerance {
        "none" => "",
        _ => "; it covers the no-load and the load loss only, not auxiliary losses",
    };
    letter.text(format!(
        "{per}; each loss counts from its guarantee and on its own; a loss below its guarantee earns no credit. Tolerance, beyond which a unit may be rejected: {rule}{of}."
    ));
}

fn units(letter: &mut Letter, lot: &LotSettlement, currency: &str) {
    let at =
        lot.guaranteed.reference_temp_c.map_or(String::new(), |c| format!(" at {} °C", short(c)));
    let with_aux = lot.guaranteed.auxiliary_loss_w > 0.0
        || lot.units.iter().any(|unit| unit.auxiliary_loss_w.is_some());
    let mut columns = vec![
        Column::words("serial"),
        Column::words("tested on"),
        Column::figures("no-load loss", "W"),
        Column::figures("load loss read", "W"),
        Column::figures("at", "°C"),
        Column::figures(format!("load loss{at}"), "W"),
        Column::figures("no-load excess", "W"),
        Column::figures("load excess", "W"),
    ];
    if with_aux {
        columns.push(Column::figures("aux excess", "W"));
    }
    let with_correction = lot.units.iter().any(|unit| unit.correction_alone_w.is_some());
    if with_correction {
        columns.push(Column::figures("correction alone", "W"));
    }
    columns.push(Column::figures("penalty", currency));
    columns.extend(lot.bid_currency.as_ref().map(|code| Column::figures("penalty", code)));
    columns.push(Column::words("remark"));
    let blank = || "–".to_owned();
    let row = |unit: &UnitSettlement| {
        let mut cells = vec![
            unit.serial.clone(),
            unit.tested_on.clone().unwrap_or_else(blank),
            short(unit.no_load_loss_w),
            short(unit.test_load_loss_w),
            unit.test_temp_c.map_or_else(blank, short),
            group(unit.load_loss_w, 1),
            group(unit.no_load_excess_w, 1),
            group(unit.load_excess_w, 1),
        ];
        if with_aux {
            let not = || "not measured".to_owned();
            cells.push(unit.auxiliary_excess_w.map_or_else(not, |w| group(w, 1)));
        }
        if with_correction {
            cells.push(unit.correction_alone_w.map_or_else(blank, |w| group(w, 1)));
        }
        cells.push(group(unit.penalty, 2));
        cells.extend(unit.penalty_in_bid_currency.map(|amount| group(amount, 2)));
        cells.push(if unit.beyond_tolerance { "beyond tolerance" } else { "" }.to_owned());
        cells
    };
    letter.table(columns, lot.units.iter().map(row).collect());
}

/// How each penalty comes about, in a line.
fn comes_about(lot: &LotSettlement, currency: &str) -> Vec<String> {
    let line = |of: &str, excesses: [f64; 3], owed: f64| {
        let factors = [
            ("A", lot.factor_a_per_kw),
            ("B", lot.factor_b_per_kw),
            ("A aux", lot.factor_aux_per_kw),
        ];
        let parts: Vec<String> = factors
            .iter()
            .zip(excesses)
            .filter(|(_, excess)| *excess > 0.0)
            .map(|((name, factor), w)| format!("{name} {} × {} W", group(*factor, 2), group(w, 1)))
            .collect();
        format!("{of}: ({})/1000 = {} {currency}", parts.join(" + "), group(owed, 2))
    };
    if let Some(mean) = &lot.mean_excess {
        let excesses = [mean.no_load_excess_w, mean.load_excess_w, mean.auxiliary_excess_w];
        let owed = lot.units.first().map_or(0.0, |unit| unit.penalty);
        let of = format!("each of {} units, by the mean", lot.units.len());
        return if owed > 0.0 { vec![line(&of, excesses, owed)] } else { Vec::new() };
    }
    let of_unit = |unit: &UnitSettlement| {
        let aux = unit.auxiliary_excess_w.unwrap_or(0.0);
        let excesses = [unit.no_load_excess_w, unit.load_excess_w, aux];
        line(&unit.serial, excesses, unit.penalty)
    };
    lot.units.iter().filter(|unit| unit.penalty > 0.0).map(of_unit).collect()
}

fn outcome(letter: &mut Letter, lot: &LotSettlement, currency: &str) {
    if let Some(mean) = &lot.mean_excess {
        letter.text(format!(
            "Mean above the guarantee: no-load loss {} W, load loss {} W, auxiliary loss {} W.",
            group(mean.no_load_excess_w, 1),
            group(mean.load_excess_w, 1),
            group(mean.auxiliary_excess_w, 1)
        ));
    }
    letter.points(comes_about(lot, currency));
    let foreign = match (&lot.bid_currency, lot.bid_rate, lot.penalty_in_bid_currency) {
        (Some(code), Some(rate), Some(amount)) => format!(
            " ({} {code} at the rate stored with the tender, 1 {code} = {rate} {currency})",
            group(amount, 2)
        ),
        _ => String::new(),
    };
    letter.text(format!("Penalty: {} {currency}{foreign}.", group(lot.penalty, 2)));
    if lot.penalty > 0.0 {
        letter.text("Products and sums are of unrounded amounts.");
    }
    if let Some(rest) = lot.penalty_without_rejectable {
        letter.text(format!(
            "If the units that may be rejected are rejected, the penalty of the others: {} {currency}.",
            group(rest, 2)
        ));
    }
    if lot.guaranteed.auxiliary_loss_w > 0.0
        && lot.units.iter().any(|unit| unit.auxiliary_loss_w.is_none())
    {
        letter.text(
            "Auxiliary losses of some units were not measured: no excess is counted for them.",
        );
    }
    letter.text(format!(
        "Owning cost of one unit: promised {}, delivered {} {currency} (mean of the measured units, before the penalty).",
        group(lot.owning_cost_promised, 0),
        group(lot.owning_cost_delivered, 0)
    ));
    let point = |unit: &UnitSettlement| {
        let parts = unit.exceeds.iter().map(|part| {
            let above = part.excess_pct.map_or_else(
                || "above a guarantee of 0".to_owned(),
                |pct| format!("{} % above", group(pct, 2)),
            );
            format!("{} {above}, {} % allowed", part.loss, short(part.allowed_pct))
        });
        let verdict =
            if unit.rejectable { "may be rejected" } else { "is beyond tolerance: consult" };
        format!("{} {verdict}: {}.", unit.serial, parts.collect::<Vec<_>>().join("; "))
    };
    let beyond = lot.units.iter().filter(|unit| unit.beyond_tolerance);
    letter.points(beyond.map(point).collect());
}
