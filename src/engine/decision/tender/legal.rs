//! A bid before the law that its lot names: the guaranteed losses as quoted, without any tolerance.

use chrono::NaiveDate;

use super::Terms;
use super::bid::Comparable;
use crate::engine::Refusal;
use crate::engine::columns::{Bid, Insulation, Tender};
use crate::engine::law::{self, Subject, Verdict};
use crate::engine::transformer::vector_group::phases;

/// The day whose law counts: that of the tender, else the first of the basis's first year; none where neither
/// is known.
pub fn purchase(tender: &Tender, first_year: Option<i64>) -> Option<NaiveDate> {
    let dated = tender.dated.as_deref().and_then(|day| day.parse().ok());
    dated.or_else(|| first_year.and_then(law::at_start_of))
}

/// What the law that the lot names says of a bid; none where the lot names none or the day is not known.
///
/// # Errors
/// A law that is not known.
pub fn verdict(
    terms: &Terms,
    bid: &Bid,
    on_terms: &Comparable,
) -> Result<Option<Verdict>, Refusal> {
    let lot = terms.lot;
    let Some(key) = &lot.law else { return Ok(None) };
    law::named(key)?;
    let Some(purchase) = terms.purchase else { return Ok(None) };
    let subject = Subject {
        phases: bid.vector_group.as_deref().or(lot.vector_group.as_deref()).and_then(phases),
        hv_kv: lot.hv_kv,
        lv_kv: lot.lv_kv,
        insulation: bid.insulation,
        winding_metal: bid.winding_metal,
        // A bid that names no temperature is compared as if it had quoted at the lot's.
        reference_temp_c: bid.reference_temp_c.or(lot.reference_temp_c),
        stray_share_pu: terms.stray_share_pu,
        ..Subject::new(
            on_terms.losses.rated_kva,
            on_terms.losses.no_load_loss_w,
            on_terms.quoted_load_loss_w,
        )
    };
    law::check(key, &subject, purchase).map(Some)
}

/// What the law that the lot names asks of a transformer of the lot's rating with this insulation: the limits of the
/// verdict count, not whether they are met. None where the lot names no law or the day is not known.
///
/// # Errors
/// A law that is not known.
pub fn floor(terms: &Terms, insulation: Insulation) -> Result<Option<Verdict>, Refusal> {
    let lot = terms.lot;
    let Some(key) = &lot.law else { return Ok(None) };
    law::named(key)?;
    let Some(purchase) = terms.purchase else { return Ok(None) };
    let subject = Subject {
        phases: lot.vector_group.as_deref().and_then(phases),
        hv_kv: lot.hv_kv,
        lv_kv: lot.lv_kv,
        insulation: Some(insulation),
        reference_temp_c: lot.reference_temp_c,
        // Losses that keep every limit: where levels depend on something blank, the strictest one is told.
        ..Subject::new(lot.rated_kva, 1.0, 1.0)
    };
    law::check(key, &subject, purchase).map(Some)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn day_of_purchase() {
        let dated = Tender { dated: Some("2026-03-31".into()), ..Tender::blank() };
        assert_eq!(purchase(&dated, Some(2030)), NaiveDate::from_ymd_opt(2026, 3, 31));
        assert_eq!(purchase(&Tender::blank(), Some(2030)), NaiveDate::from_ymd_opt(2030, 1, 1));
        assert_eq!(purchase(&Tender::blank(), None), None);
    }
}
