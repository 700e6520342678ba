//! What a bid misses: each limit with what is offered and what is asked, in words.

use crate::engine::columns::{Bid, Lot};
use crate::engine::law::Verdict;
use crate::engine::transformer::losses::Losses;
use crate::study::figures::short;

/// A limit that a bid misses.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Miss {
    /// Key of the limit.
    pub key: &'static str,
    /// The same in a word or two.
    pub word: &'static str,
    /// What is offered, and what is asked.
    pub why: String,
}

impl Miss {
    /// The limit `key` that a bid misses, its losses on the lot's terms; `verdict` is that of the law.
    pub(super) fn of(
        key: &'static str,
        lot: &Lot,
        bid: &Bid,
        losses: &Losses,
        verdict: Option<&Verdict>,
    ) -> Self {
        let known = |value: Option<f64>| value.map_or_else(|| "unknown".to_owned(), short);
        let most = |offered: Option<f64>, limit: Option<f64>, unit: &str| {
            format!("{} {unit}, at most {} {unit}", known(offered), known(limit))
        };
        let word = |text: &Option<String>| text.clone().unwrap_or_default();
        let (word, why) = match key {
            "rated_kva" => {
                let why = format!(
                    "{} kVA, at least {} kVA",
                    short(losses.rated_kva),
                    short(lot.rated_kva)
                );
                ("rating", why)
            }
            "vector_group" => {
                let (offered, asked) = (word(&bid.vector_group), word(&lot.vector_group));
                ("vector group", format!("{offered} cannot stand for {asked}"))
            }
            "max_no_load_loss_w" => {
                ("iron", most(Some(losses.no_load_loss_w), lot.max_no_load_loss_w, "W"))
            }
            "max_load_loss_w" => {
                ("copper", most(Some(losses.load_loss_w), lot.max_load_loss_w, "W"))
            }
            "impedance_pct" => {
                let (offered, asked) = (known(bid.impedance_pct), known(lot.impedance_pct));
                let within = known(lot.impedance_tolerance_pct);
                ("impedance", format!("{offered} %, {asked} % ± {within} % of it"))
            }
            "max_sound_db" => ("sound", most(bid.sound_db, lot.max_sound_db, "dB")),
            "max_mass_kg" => ("mass", most(bid.mass_kg, lot.max_mass_kg, "kg")),
            "max_delivery_weeks" => {
                ("delivery", most(bid.delivery_weeks, lot.max_delivery_weeks, "weeks"))
            }
            "law" => {
                let missed = verdict.and_then(|of| of.limits.iter().find(|limit| !limit.meets()));
                let why = missed.map_or_else(
                    || word(&lot.law),
                    |limit| {
                        let (value, bound) = (short(limit.value), short(limit.limit));
                        format!("{} {value} against {bound}, {}", limit.quantity, limit.source)
                    },
                );
                ("law", why)
            }
            other => (other, String::new()),
        };
        Self { key, word, why }
    }

    /// The key with what is offered and what is asked.
    pub fn in_full(&self) -> String {
        if self.why.is_empty() {
            return self.key.to_owned();
        }
        format!("{} ({})", self.key, self.why)
    }

    /// The same as short as it can be said.
    pub fn in_short(&self) -> String {
        format!("{} {}", self.word, self.why)
    }
}
