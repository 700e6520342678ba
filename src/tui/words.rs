//! Words for columns and units: the label of a column, its unit with the currency put in.

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

const SUFFIXES: &[&str] = &[
    "_per_kw_year",
    "_per_kwh",
    "_per_t",
    "_kva",
    "_kwh",
    "_ohm",
    "_pct",
    "_pu",
    "_ppm",
    "_kv",
    "_hz",
    "_w",
    "_c",
    "_years",
    "_hours",
];

/// The name of a column in words, without its unit.
pub(super) fn label(column: &Column) -> String {
    let name = SUFFIXES.iter().find_map(|s| column.name.strip_suffix(s)).unwrap_or(column.name);
    name.replace('_', " ")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::columns::{Basis, Unit};

    fn column(columns: &'static [Column], name: &str) -> &'static Column {
        columns.iter().find(|c| c.name == name).unwrap()
    }

    #[test]
    fn columns_in_words() {
        let said = |columns, name| {
            let column = column(columns, name);
            (label(column), currency_in(unit_of(column), "EUR"))
        };
        let pair = |a: &str, b: &str| (a.to_owned(), b.to_owned());
        assert_eq!(said(Unit::COLUMNS, "no_load_loss_w"), pair("no load loss", "W"));
        assert_eq!(said(Unit::COLUMNS, "year_made"), pair("year made", ""));
        assert_eq!(said(Basis::COLUMNS, "energy_price_per_kwh"), pair("energy price", "EUR/kWh"));
        assert_eq!(said(Basis::COLUMNS, "carbon_kg_per_kwh"), pair("carbon kg", "kg/kWh"));
        assert_eq!(said(Basis::COLUMNS, "failure_cost"), pair("failure cost", "EUR"));
        assert_eq!(said(Basis::COLUMNS, "upkeep_per_year"), pair("upkeep per year", "EUR/year"));
        assert_eq!(said(Basis::COLUMNS, "first_year"), pair("first year", ""));
    }
}
