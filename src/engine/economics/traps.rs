//! The traps of loss evaluation, seen in the figures of a basis: an investment taken for its yearly cost, a charge that
//! the method does not use, prices or losses in another unit. What names alone reveal is in [`asked_back`].
//!
//! [`asked_back`]: crate::engine::columns::asked_back

use super::Assumptions;
use crate::engine::columns::FactorMethod;
use crate::engine::flags::Flags;

/// What is doubtful about a basis at the price of a kWh of constant loss.
pub fn of_basis(a: &Assumptions, price_per_kwh: f64) -> Flags {
    let (demand, investment) = (a.demand_charge_per_kw_year, a.investment_per_kw_year);
    let energy = a.energised_hours * price_per_kwh;
    let levelized = a.factor_method == FactorMethod::Levelized;
    Flags::NONE
        .with_if(energy > 0.0 && demand.max(investment) > energy, Flags::CAPACITY_SCALE)
        .with_if(levelized && demand > 0.0 && investment == 0.0, Flags::DEMAND_UNUSED)
        .with_if(!levelized && investment > 0.0 && demand == 0.0, Flags::INVESTMENT_UNUSED)
}

/// Capitalised losses as a part of the price that are believed without a question.
pub const BELIEVED: std::ops::RangeInclusive<f64> = 0.01..=50.0;

/// Whether capitalised losses beside a price look like another unit of one of them.
pub fn of_value(losses: f64, price: f64) -> Flags {
    let asked = losses > 0.0 && price > 0.0 && !BELIEVED.contains(&(losses / price));
    Flags::NONE.with_if(asked, Flags::LOSS_VALUE_SCALE)
}
