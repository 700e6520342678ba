//! What a minimum-efficiency law says of a unit or an offer, as results carry it. A screening aid.

use chrono::NaiveDate;
use serde::Serialize;

use crate::engine::law::{Bound, Limit, Verdict};
use crate::engine::working::{Step, Working};

/// The verdict of a law.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; the fields of the engine's verdict")]
pub struct VerdictRow {
    pub law: &'static str,
    /// The day of purchase whose law counts.
    pub on: NaiveDate,
    pub meets: Option<bool>,
    pub why: String,
    pub limits: Vec<LimitRow>,
    pub notes: Vec<String>,
    pub confidence: &'static str,
    pub verify: bool,
}

/// One limit of a law and the value held against it.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[expect(missing_docs, reason = "the keys of the result; the fields of the engine's limit")]
pub struct LimitRow {
    pub quantity: &'static str,
    /// `at most` or `at least`.
    pub bound: &'static str,
    pub limit: f64,
    pub value: f64,
    pub meets: bool,
    pub source: String,
    pub confidence: &'static str,
}

impl VerdictRow {
    pub(super) fn of(verdict: &Verdict, on: NaiveDate) -> Self {
        let row = |limit: &Limit| LimitRow {
            quantity: limit.quantity,
            bound: bound(limit.bound),
            limit: limit.limit,
            value: limit.value,
            meets: limit.meets(),
            source: limit.source.clone(),
            confidence: limit.confidence.word(),
        };
        Self {
            law: verdict.law,
            on,
            meets: verdict.meets,
            why: verdict.why.clone(),
            limits: verdict.limits.iter().map(row).collect(),
            notes: verdict.notes.clone(),
            confidence: verdict.confidence.word(),
            verify: verdict.verify,
        }
    }
}

/// The side of a bound in words.
pub(super) const fn bound(bound: Bound) -> &'static str {
    match bound {
        Bound::Max => "at most",
        Bound::Min => "at least",
    }
}

/// States how one side of limit number `n` comes about: `limit` or `value`.
pub(super) fn state(w: &mut Working, verdict: Verdict, n: &str, side: &str) {
    let limit = n.parse().ok().and_then(|n: usize| verdict.limits.get(n));
    let quantity = limit.map_or("", |limit| limit.quantity);
    // The rows of the table and the temperature of the loss come before both sides.
    let last = |step: &Step| matches!(step.formula.symbol, "limit" | "value");
    let (sides, before): (Vec<Step>, Vec<Step>) = verdict.working.into_iter().partition(last);
    w.append(before);
    w.append(sides.into_iter().filter(|s| s.formula.symbol == side && s.of == quantity));
}
