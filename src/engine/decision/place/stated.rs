//! What a place is told by its unit, a profile, the basis or a default: each quantity with where it comes from.

use crate::engine::working::{Formula, Recorder};

const fn stated(name: &'static str, symbol: &'static str, unit: &'static str) -> Formula {
    Formula { name, symbol, formula: "as stated", unit, source: "methods, sections 0 and 3" }
}

pub(super) const RATING: Formula = stated("rated power", "S_r", "kVA");
pub(super) const POWER_FACTOR: Formula = stated("power factor of the load", "cosφ", "pu");
pub(super) const PEAK: Formula = stated("peak load of year 1", "S_1", "kVA");
pub(super) const LOAD_FACTOR: Formula = stated("load factor", "LF", "pu");
pub(super) const LOSS_FACTOR: Formula = stated("loss factor", "LsF", "pu");
pub(super) const GROWTH: Formula = stated("growth of the load a year", "g", "pu");
pub(super) const HOURS: Formula = stated("hours under voltage in a year", "h", "h");
pub(super) const AUXILIARY_HOURS: Formula =
    stated("hours of fans and pumps in a year", "h_aux", "h");
pub(super) const RESPONSIBILITY: Formula =
    stated("load at the system peak over own peak", "PRF", "pu");
pub(super) const PRICE: Formula = stated("price of a kWh of constant loss", "c0", "money/kWh");
pub(super) const LOAD_PRICE: Formula = stated("price of a kWh of load loss", "ck", "money/kWh");
pub(super) const CO2: Formula = stated("CO2 of a kWh of constant loss", "κ0", "kg/kWh");
pub(super) const LOAD_CO2: Formula = stated("CO2 of a kWh of load loss", "κk", "kg/kWh");
pub(super) const FAILURE_COST: Formula =
    stated("cost of a failure besides the replacement", "F_own", "money");
pub(super) const CUSTOMERS: Formula = Formula {
    name: "cost of a failure besides the replacement, customers counted",
    symbol: "F",
    formula: "F_own + per_customer·customers",
    unit: "money",
    source: "methods, section 7",
};
pub(super) const REMOVAL_LESS_SCRAP: Formula = Formula {
    name: "removal less scrap",
    symbol: "removal_less_scrap",
    formula: "removal − scrap",
    unit: "money",
    source: "methods, section 7",
};
pub(super) const REMOVAL_COST: Formula = stated("cost of removal", "removal", "money");
pub(super) const SCRAP_VALUE: Formula = stated("scrap value", "scrap", "money");

/// The first value that is known, stated with where it comes from; none where none is.
#[inline]
pub(super) fn first_known<R: Recorder, const N: usize>(
    w: &mut R,
    formula: &'static Formula,
    from: [(Option<f64>, &str); N],
) -> Option<f64> {
    let (value, origin) = from.into_iter().find_map(|(value, origin)| Some((value?, origin)))?;
    Some(said(w, formula, value, origin))
}

/// The first value that is known, else the `last` one, stated with where it comes from.
#[inline]
pub(super) fn known_or<R: Recorder, const N: usize>(
    w: &mut R,
    formula: &'static Formula,
    from: [(Option<f64>, &str); N],
    (last, origin): (f64, &str),
) -> f64 {
    first_known(w, formula, from).unwrap_or_else(|| said(w, formula, last, origin))
}

/// A value stated with where it comes from.
#[inline]
pub(super) fn said<R: Recorder>(
    w: &mut R,
    formula: &'static Formula,
    value: f64,
    origin: &str,
) -> f64 {
    w.step(formula, &[], value);
    w.about(&|| origin.to_owned());
    value
}
