//! Capital of a purchase at time t: whole, or charged per year of service.

use super::Assumptions;
use super::discounting::annuity;
use crate::engine::Refusal;
use crate::engine::columns::CapitalRecovery;
use crate::engine::working::{Formula, Recorder};

const FULL: Formula = Formula {
    name: "purchase (P: price and installation) at time t, charged whole",
    symbol: "K",
    formula: "P·(1+e_q)^t",
    unit: "money",
    source: "methods, section 7 (full)",
};
const ANNUITY: Formula = Formula {
    name: "purchase (P: price and installation) at time t, charged per year of service inside the horizon",
    symbol: "K",
    formula: "P·(1+e_q)^t·a_rest/a_life",
    unit: "money",
    source: "methods, section 7 (annuity)",
};

/// Capital charged for a purchase of `price` (installation included) at time `t`, valued at time `t`.
/// Removal and scrap are apart.
///
/// # Errors
/// The annuity rule without a life in the offer or the basis.
pub fn charged<R: Recorder>(
    w: &mut R,
    price: f64,
    life_years: Option<f64>,
    t: usize,
    a: &Assumptions,
) -> Result<f64, Refusal> {
    #[expect(clippy::cast_precision_loss, reason = "at most 200 years")]
    let (time, rest) = (t as f64, (a.years - t) as f64);
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_possible_wrap,
        reason = "at most 200 years"
    )]
    let escalated = price * (1.0 + a.equipment_escalation).powi(t as i32);
    let inputs = [("P", price), ("e_q", a.equipment_escalation), ("t", time)];
    if a.capital_recovery == CapitalRecovery::Full {
        return Ok(w.step(&FULL, &inputs, escalated));
    }
    let Some(life) = life_years.or(a.life_years) else {
        let why = "is needed by capital_recovery \"annuity\": give it in the basis or in the offer, or choose \"full\"";
        return Err(Refusal::new("life_years", "", why));
    };
    w.open();
    let (a_rest, a_life) = (annuity(w, a.rate, rest), annuity(w, a.rate, life));
    let value = escalated * (a_rest / a_life);
    let inputs = [
        ("P", price),
        ("e_q", a.equipment_escalation),
        ("t", time),
        ("a_rest", a_rest),
        ("a_life", a_life),
    ];
    Ok(w.close(&ANNUITY, &inputs, value))
}
