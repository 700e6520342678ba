//! A value of an assumption as it is typed, held against the facts of its column.

use crate::engine::columns::{Column, Kind, Value};

/// The word that leaves an assumption blank.
pub(super) const BLANK: &str = "blank";

/// The value that was typed; none where nothing was. `series` are the price series of the book.
///
/// # Errors
/// Why the assumption cannot be that.
pub(super) fn read(column: &Column, typed: &str, series: &[&str]) -> Result<Option<Value>, String> {
    let typed = typed.trim();
    if typed.is_empty() {
        return Ok(None);
    }
    let blank = typed.eq_ignore_ascii_case(BLANK);
    let value = column.read(if blank { "" } else { typed }).map_err(|why| {
        let point = match column.kind {
            Kind::Text | Kind::Id | Kind::Choice(_) | Kind::Flag | Kind::Date => "",
            _ if typed.contains(',') => "; the decimal sign is a point",
            _ => "",
        };
        let typed = if blank { "" } else { typed };
        format!("{} {typed} {why}{point}.", column.name).replace("  ", " ")
    })?;
    if let (Kind::Id, Value::Text(name)) = (column.kind, &value)
        && !series.contains(&name.as_str())
    {
        return Err(format!(
            "{} {name} is not in the book; it holds {}.",
            column.name,
            series.join(", ")
        ));
    }
    Ok(Some(value))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::columns::Basis;

    #[test]
    fn typed_values_are_held_against_the_facts() {
        let read = |name: &str, typed: &str| {
            let column = Basis::COLUMNS.iter().find(|column| column.name == name).unwrap();
            read(column, typed, &["here"])
        };
        assert_eq!(read("discount_rate_pct", " 6.25 "), Ok(Some(Value::Real(6.25))));
        assert_eq!(read("discount_rate_pct", ""), Ok(None));
        assert_eq!(read("loading_limit_pu", "Blank"), Ok(Some(Value::Blank)));
        let refused = |name: &str, typed: &str| read(name, typed).unwrap_err();
        assert!(refused("discount_rate_pct", "6,5").contains("decimal sign is a point"));
        assert!(refused("horizon_years", "1000").contains("is outside"));
        assert!(refused("horizon_years", "blank").contains("is required"));
        assert!(refused("capital_recovery", "monthly").contains("is not one of"));
        assert_eq!(read("price_series", "here"), Ok(Some(Value::Text("here".to_owned()))));
        assert!(refused("price_series", "elsewhere").contains("is not in the book"));
    }
}
