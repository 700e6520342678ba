//! Names that say a quantity of the trade in a doubtful sense, and what a file has to say instead.

const RESPONSIBILITY: &str = "may be meant on load or on losses: write responsibility_pu, the load at the system peak over own peak, which is squared for losses; of one that is already on losses take the square root";
const INVESTMENT: &str = "may be an investment in capacity, paid once; what is needed is its cost per year: multiply it by the yearly charge rate and write demand_charge_per_kw_year, or investment_per_kw_year for factor_method levelized";
const FACTOR: &str = "needs its unit: write factor_a_per_kw, factor_b_per_kw, factor_aux_per_kw, money per kW of loss paid once; one per W times 1000, one per kW and year times the present value of 1 a year";

/// Doubtful names with the question that they raise.
const NAMES: &[(&[&str], &str)] = &[
    (
        &["responsibility", "responsibility_factor", "peak_responsibility", "prf", "rf"],
        RESPONSIBILITY,
    ),
    (&["responsibility_on_losses_pu", "loss_responsibility"], RESPONSIBILITY),
    (
        &["investment_per_kw", "capacity_cost_per_kw", "capacity_cost", "demand_charge_per_kw"],
        INVESTMENT,
    ),
    (&["demand_charge", "system_investment", "lic"], INVESTMENT),
    (&["factor_a", "factor_b", "factor_aux", "loss_factor_a", "loss_factor_b"], FACTOR),
    (&["factor_a_per_w", "factor_b_per_w", "factor_aux_per_w"], FACTOR),
    (&["factor_a_per_kw_year", "factor_b_per_kw_year", "factor_aux_per_kw_year"], FACTOR),
];

/// What a doubtful name asks back; none for a name that is only unknown.
pub fn asked_back(name: &str) -> Option<&'static str> {
    let name = name.trim().to_lowercase().replace([' ', '-', '.'], "_");
    NAMES.iter().find(|(names, _)| names.contains(&name.as_str())).map(|(_, question)| *question)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::columns::{Basis, Bid, Lot, Offer, Unit};

    #[test]
    fn no_column_is_asked_back() {
        let tables = [Basis::COLUMNS, Bid::COLUMNS, Lot::COLUMNS, Offer::COLUMNS, Unit::COLUMNS];
        for column in tables.into_iter().flatten() {
            assert_eq!(asked_back(column.name), None, "{}", column.name);
        }
        assert_eq!(asked_back("Responsibility Factor"), Some(RESPONSIBILITY));
        assert_eq!(asked_back("energy_price"), None);
    }
}
