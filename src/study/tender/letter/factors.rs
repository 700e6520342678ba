//! The factors of a lot as they go into the tender documents.

use super::{day, flag};
use crate::engine::columns::Award;
use crate::engine::economics::loss_factors::LossFactors;
use crate::exchange::Letter;
use crate::exchange::letter::Column;
use crate::study::explain::StepRow;
use crate::study::figures::{group, short};
use crate::study::tender::{Case, InCurrency, LegalLimit, LotFactors, award_of};

/// The published factors of a lot, with their working where it is wanted.
pub fn lot_factors(case: &Case, factors: &LotFactors, working: bool) -> Letter {
    let mut letter = Letter::default();
    letter.heading(1, format!("Loss factors of tender {}, lot {}", factors.tender, factors.lot));
    let again = format!(
        "ironhum factors --tender {} --lot {} --from-basis --working",
        factors.tender, factors.lot
    );
    letter.text(match &factors.basis {
        None => format!(
            "The lot states every factor itself. How they come about, which is the working to publish: {again}."
        ),
        Some(basis) => {
            let stated = match factors.stated.as_slice() {
                [] => String::new(),
                keys => format!("; {} stated in the lot", keys.join(" and ")),
            };
            format!("Computed from basis {basis} by the {} method{stated}.", factors.method)
        }
    });
    if let Some(award) = award_of(&case.sheet, &factors.lot) {
        letter.warning(awarded(award, factors));
    }
    letter.text(format!(
        "Money per kW of loss, once, not per year. B holds for the load loss at {} kVA; for a bid of another rating it is B·(S_lot/S_bid)².",
        short(factors.rated_kva)
    ));
    let row = |of: &InCurrency| {
        let values = [of.factor_a_per_kw, of.factor_b_per_kw, of.factor_aux_per_kw];
        std::iter::once(of.currency.clone()).chain(values.map(|value| group(value, 2))).collect()
    };
    letter.table(
        vec![
            Column::words("currency"),
            Column::figures("A, no-load loss", "/kW"),
            Column::figures("B, load loss", "/kW"),
            Column::figures("A aux, auxiliaries", "/kW"),
        ],
        factors.in_currencies.iter().map(row).collect(),
    );
    letter.text("A bidder who guarantees one kW less of a loss may ask that much more and owns for the same.");
    if let Some(other) = &factors.other_method {
        letter.text(format!(
            "By the {} method A would be {} ({} %) and B {} ({} %) {}/kW.",
            other.method,
            group(other.factor_a_per_kw, 2),
            group(other.factor_a_difference_pct, 2),
            group(other.factor_b_per_kw, 2),
            group(other.factor_b_difference_pct, 2),
            factors.currency
        ));
    }
    letter.points(factors.law.iter().map(legal).collect());
    if let Some(published) = &factors.published {
        letter.text(stands(factors, published));
    } else if factors.basis.is_some() && award_of(&case.sheet, &factors.lot).is_none() {
        letter.text(format!(
            "Once they are published they must not move with the basis: write them below [[lot]] of the tender file and import it again. Their working is to be had afterwards with: {again}."
        ));
        letter.lines(vec![
            format!("factor_a_per_kw = {:.2}", factors.factor_a_per_kw),
            format!("factor_b_per_kw = {:.2}", factors.factor_b_per_kw),
            format!("factor_aux_per_kw = {:.2}", factors.factor_aux_per_kw),
        ]);
    }
    for key in &factors.flags {
        letter.warning(flag(key));
    }
    if working {
        letter.heading(2, "Working");
        letter.lines(StepRow::lines(&factors.working, 0, case.money()));
    }
    letter
}

/// At which factors the lot is awarded.
fn awarded(award: &Award, own: &LotFactors) -> String {
    let kept = [award.factor_a_per_kw, award.factor_b_per_kw, award.factor_aux_per_kw];
    let same = kept == [own.factor_a_per_kw, own.factor_b_per_kw, own.factor_aux_per_kw];
    let [a, b, aux] = kept.map(|value| group(value, 2));
    let basis = award.basis.as_ref().map_or(String::new(), |name| format!(" from basis {name}"));
    let than =
        if same { "the same as here" } else { "others than here; what is settled goes by those" };
    format!(
        "the lot is awarded to {} on {} at A {a}, B {b}, A aux {aux} {}/kW{basis}: {than}",
        award.bid,
        day(&award.awarded_at),
        own.currency
    )
}

/// Whether the factors that the lot states are those of the basis, as far as they are written.
fn stands(own: &LotFactors, published: &LossFactors) -> String {
    let pairs = [
        (published.factor_a_per_kw, own.factor_a_per_kw),
        (published.factor_b_per_kw, own.factor_b_per_kw),
        (published.factor_aux_per_kw, own.factor_aux_per_kw),
    ];
    let [a, b, aux] = pairs.map(|(stated, _)| group(stated, 2));
    let said = format!("The lot states A {a}, B {b}, A aux {aux} {}/kW", own.currency);
    // Half of the last place that is published.
    if pairs.iter().all(|(stated, own)| (stated - own).abs() <= 0.005 + 1e-9) {
        return format!("{said}: to the cent what this basis gives.");
    }
    format!(
        "{said}, which is not what this basis gives now: it has changed since they were published, or they came of another (--basis NAME)."
    )
}

/// A legal limit in a line.
fn legal(limit: &LegalLimit) -> String {
    let verify =
        if limit.verify { " Verify in the official text: a remembered row was used." } else { "" };
    let of = format!("Law {}, {} insulation", limit.law, limit.insulation);
    match (limit.quantity, limit.bound, limit.limit) {
        (Some(quantity), Some(bound), Some(value)) => {
            format!("{of}: {quantity} {bound} {} ({}).{verify}", short(value), limit.source)
        }
        _ => format!("{of}: {}.{verify}", limit.source),
    }
}
