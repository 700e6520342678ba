//! What a bid misses: the keys of the lot's limits that it does not keep.
//! Equality passes; a blank passes and is flagged. Limits hold at the bid's rating, after correction.

use super::bid::{Comparable, adders_lower_price};
use crate::engine::columns::{Bid, Lot};
use crate::engine::flags::Flags;
use crate::engine::transformer::plausibility::is_odd;
use crate::engine::transformer::vector_group;

/// What a bid misses, by the key of the limit, and what is doubtful about the answer.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Findings {
    /// Keys of the limits that it misses; empty = admitted.
    pub misses: Vec<&'static str>,
    /// Whether it meets the law that the lot names; none where none is named or it is not known.
    pub law: Option<bool>,
    /// Limits that could not be held against the bid, because its value is blank.
    pub unknown: Vec<&'static str>,
    /// Doubts.
    pub flags: Flags,
}

/// Above a limit by more than rounding.
fn above(value: f64, limit: f64) -> bool {
    value > limit + 1e-12 * limit.abs()
}

/// Holds a bid against the lot. `law` says whether it meets the law that the lot names (none: not known).
pub fn against(lot: &Lot, bid: &Bid, on_terms: &Comparable, law: Option<bool>) -> Findings {
    let mut found = Findings::default();
    let losses = &on_terms.losses;
    found.miss("rated_kva", above(lot.rated_kva, losses.rated_kva));

    let (asked, offered) = (lot.vector_group.as_deref(), bid.vector_group.as_deref());
    found.miss("vector_group", !vector_group::agree(asked, offered));
    let unread = |group: Option<&str>| group.is_some_and(|g| vector_group::clock(g).is_none());
    found.blank("vector_group", asked.is_some() && offered.is_none());
    found.doubt(unread(asked) || (asked.is_some() && unread(offered)), Flags::VECTOR_GROUP_UNREAD);

    found.at_most("max_no_load_loss_w", Some(losses.no_load_loss_w), lot.max_no_load_loss_w);
    found.at_most("max_load_loss_w", Some(losses.load_loss_w), lot.max_load_loss_w);
    if let (Some(asked), Some(tolerance)) = (lot.impedance_pct, lot.impedance_tolerance_pct) {
        let away = bid.impedance_pct.map(|offered| 100.0 * (offered - asked).abs() / asked);
        // The difference of two percents carries the rounding of the percents themselves.
        found.at_most("impedance_pct", away, Some(tolerance + 1e-10));
    }
    found.at_most("max_sound_db", bid.sound_db, lot.max_sound_db);
    found.at_most("max_mass_kg", bid.mass_kg, lot.max_mass_kg);
    found.at_most("max_delivery_weeks", bid.delivery_weeks, lot.max_delivery_weeks);
    found.law = law.filter(|_| lot.law.is_some());
    found.miss("law", found.law == Some(false));
    found.doubt(lot.law.is_some() && law.is_none(), Flags::LAW_NOT_CHECKED);
    let short = matches!((bid.quantity, lot.quantity), (Some(n), asked) if n < asked.unwrap_or(1));
    found.doubt(short, Flags::QUANTITY_SHORT);
    found.doubt(adders_lower_price(bid), Flags::ADDERS_LOWER_PRICE);
    let (p0, pk) = (losses.no_load_loss_w, on_terms.quoted_load_loss_w);
    found.doubt(is_odd(losses.rated_kva, bid.impedance_pct, p0, pk), Flags::NAMEPLATE_ODD);
    found
}

impl Findings {
    fn miss(&mut self, key: &'static str, missed: bool) {
        if missed {
            self.misses.push(key);
        }
    }

    /// A value that a limit needs and that is blank passes, flagged.
    fn blank(&mut self, key: &'static str, is_blank: bool) {
        if is_blank {
            self.unknown.push(key);
        }
        self.doubt(is_blank, Flags::LIMIT_UNKNOWN);
    }

    fn doubt(&mut self, condition: bool, flag: Flags) {
        self.flags = self.flags.with_if(condition, flag);
    }

    fn at_most(&mut self, key: &'static str, value: Option<f64>, limit: Option<f64>) {
        match (value, limit) {
            (Some(value), Some(limit)) => self.miss(key, above(value, limit)),
            (None, Some(_)) => self.blank(key, true),
            (_, None) => {}
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::economics::loss_factors::LossFactors;
    use crate::engine::transformer::losses::Losses;

    #[test]
    fn the_law_counts_where_the_lot_names_one() {
        let losses = Losses {
            rated_kva: 100.0,
            no_load_loss_w: 1.0,
            load_loss_w: 1.0,
            auxiliary_loss_w: 0.0,
            reactance_pu: None,
        };
        let on_terms = Comparable {
            losses,
            quoted_load_loss_w: 1.0,
            price: 1.0,
            added_cost: 0.0,
            factors: LossFactors {
                factor_a_per_kw: 1.0,
                factor_b_per_kw: 1.0,
                factor_aux_per_kw: 1.0,
            },
            load_weight: 1.0,
            load_loss_per_stray_w: 0.0,
            flags: Flags::NONE,
        };
        let lot = |law: Option<&str>| Lot {
            rated_kva: 100.0,
            law: law.map(str::to_owned),
            ..Lot::blank()
        };
        let bid = Bid::blank();
        let of = |name, law| against(&lot(name), &bid, &on_terms, law);
        let poor = of(Some("eu"), Some(false));
        assert_eq!((poor.misses, poor.law), (vec!["law"], Some(false)));
        assert_eq!(of(Some("eu"), Some(true)).misses.len(), 0);
        assert_eq!(of(Some("eu"), None).flags, Flags::LAW_NOT_CHECKED);
        assert_eq!(of(None, Some(false)), Findings::default());
    }
}
