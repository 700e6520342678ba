//! What a place is told by its unit, a profile, the basis or a default: each quantity with where it comes from.
//! No formula gives these; they are the ground on which the others stand.

use crate::engine::working::{Formula, Recorder};

const fn stated(name: &'static str, symbol: &'static str, unit: &'static str) -> Formula {
    Formula { name, symbol, formula: "as stated", unit, source: "methods, sections 0 and 3" }
}

/// Rated power.
pub const RATING: Formula = stated("rated power", "S_r", "kVA");
/// Power factor of the load.
pub const POWER_FACTOR: Formula = stated("power factor of the load", "cosφ", "pu");
/// Load loss at the rating.
pub const LOAD_LOSS: Formula = stated("load loss at the rating", "Pk", "W");
/// Peak load of year 1.
pub const PEAK: Formula = stated("peak load of year 1", "S_1", "kVA");
/// Peak load of year 1 over the rating.
pub const PEAK_PU: Formula = stated("peak load of year 1 over the rating", "β", "pu");
/// Load factor.
pub const LOAD_FACTOR: Formula = stated("load factor", "LF", "pu");
/// Loss factor.
pub const LOSS_FACTOR: Formula = stated("loss factor", "LsF", "pu");
/// Growth of the load a year.
pub const GROWTH: Formula = stated("growth of the load a year", "g", "pu");
/// Hours under voltage.
pub const HOURS: Formula = stated("hours under voltage in a year", "h", "h");
/// Hours of fans and pumps.
pub const AUXILIARY_HOURS: Formula = stated("hours of fans and pumps in a year", "h_aux", "h");
/// Load at the system peak over own peak.
pub const RESPONSIBILITY: Formula = stated("load at the system peak over own peak", "PRF", "pu");
/// Price of a kWh of constant loss.
pub const PRICE: Formula = stated("price of a kWh of constant loss", "c0", "money/kWh");
/// Price of a kWh of load loss.
pub const LOAD_PRICE: Formula = stated("price of a kWh of load loss", "ck", "money/kWh");
/// CO2 of a kWh of constant loss.
pub const CO2: Formula = stated("CO2 of a kWh of constant loss", "κ0", "kg/kWh");
/// CO2 of a kWh of load loss.
pub const LOAD_CO2: Formula = stated("CO2 of a kWh of load loss", "κk", "kg/kWh");
/// Cost of a failure, customers aside.
pub const FAILURE_COST: Formula =
    stated("cost of a failure besides the replacement", "F_own", "money");
/// Cost of a failure, customers counted.
pub const CUSTOMERS: Formula = Formula {
    name: "cost of a failure besides the replacement, customers counted",
    symbol: "F",
    formula: "F_own + per_customer·customers",
    unit: "money",
    source: "methods, section 7",
};
/// Removal less scrap.
pub const REMOVAL_LESS_SCRAP: Formula = Formula {
    name: "removal less scrap",
    symbol: "removal_less_scrap",
    formula: "removal − scrap",
    unit: "money",
    source: "methods, section 7",
};
/// Cost of removal.
pub const REMOVAL_COST: Formula = stated("cost of removal", "removal", "money");
/// Scrap value.
pub const SCRAP_VALUE: Formula = stated("scrap value", "scrap", "money");

/// The first value that is known, stated with where it comes from; none where none is.
#[inline]
pub fn first_known<R: Recorder, const N: usize>(
    w: &mut R,
    formula: &'static Formula,
    from: [(Option<f64>, &str); N],
) -> Option<f64> {
    let (value, origin) = from.into_iter().find_map(|(value, origin)| Some((value?, origin)))?;
    Some(said(w, formula, value, origin))
}

/// The first value that is known, else the `last` one, stated with where it comes from.
#[inline]
pub fn known_or<R: Recorder, const N: usize>(
    w: &mut R,
    formula: &'static Formula,
    from: [(Option<f64>, &str); N],
    (last, origin): (f64, &str),
) -> f64 {
    first_known(w, formula, from).unwrap_or_else(|| said(w, formula, last, origin))
}

/// A value stated with where it comes from.
#[inline]
pub fn said<R: Recorder>(w: &mut R, formula: &'static Formula, value: f64, origin: &str) -> f64 {
    w.step(formula, &[], value);
    w.about(&|| origin.to_owned());
    value
}
