//! Units in words: that of a column, with the currency put in.

use crate::engine::columns::Column;

/// The unit of a column; calendar years and counts have none.
pub(super) fn unit_of(column: &Column) -> &'static str {
    match column.unit() {
        "year" | "per year" => "",
        unit => unit,
    }
}

/// The unit with the currency put in.
pub(super) fn currency_in(unit: &str, currency: &str) -> String {
    if unit.starts_with('/') {
        format!("{currency}{unit}")
    } else {
        unit.replace("money", currency)
    }
}

/// A value with its unit behind it.
pub(super) fn with_unit(value: &str, unit: &str, currency: &str) -> String {
    let unit = currency_in(unit, currency);
    if unit.is_empty() { value.to_owned() } else { format!("{value} {unit}") }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::columns::{Basis, Unit};

    #[test]
    fn units_in_words() {
        let unit = |columns: &'static [Column], name| {
            let column = columns.iter().find(|c| c.name == name).unwrap();
            currency_in(unit_of(column), "EUR")
        };
        assert_eq!(unit(Unit::COLUMNS, "no_load_loss_w"), "W");
        assert_eq!(unit(Unit::COLUMNS, "year_made"), "");
        assert_eq!(unit(Basis::COLUMNS, "energy_price_per_kwh"), "EUR/kWh");
        assert_eq!(unit(Basis::COLUMNS, "carbon_kg_per_kwh"), "kg/kWh");
        assert_eq!(unit(Basis::COLUMNS, "failure_cost"), "EUR");
        assert_eq!(unit(Basis::COLUMNS, "upkeep_per_year"), "EUR/year");
        assert_eq!(unit(Basis::COLUMNS, "first_year"), "");
        assert_eq!(with_unit("6", "%", "EUR"), "6 %");
        assert_eq!(with_unit("Dyn5", "", "EUR"), "Dyn5");
    }
}
