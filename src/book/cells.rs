//! Values on their way into and out of SQL.

use rusqlite::ToSql;
use rusqlite::types::{ToSqlOutput, ValueRef};

use crate::engine::columns::{Column, Kind, Money, Value};

/// A value to be bound.
pub(super) struct Bound<'a>(pub(super) &'a Value);

impl ToSql for Bound<'_> {
    fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
        Ok(ToSqlOutput::Borrowed(match self.0 {
            Value::Blank => ValueRef::Null,
            Value::Text(text) => ValueRef::Text(text.as_bytes()),
            Value::Integer(number) => ValueRef::Integer(*number),
            Value::Real(number) => ValueRef::Real(*number),
            Value::Money(money) => ValueRef::Integer(money.0),
        }))
    }
}

/// The value of a stored cell; none where the store holds another type than the column's.
pub(super) fn value(column: &Column, stored: ValueRef<'_>) -> Option<Value> {
    match (stored, column.kind) {
        (ValueRef::Null, _) => Some(Value::Blank),
        (ValueRef::Integer(milli), Kind::Money(..)) => Some(Value::Money(Money(milli))),
        (ValueRef::Integer(number), _) => Some(Value::Integer(number)),
        (ValueRef::Real(number), _) => Some(Value::Real(number)),
        (ValueRef::Text(text), _) => {
            std::str::from_utf8(text).ok().map(|text| Value::Text(text.to_owned()))
        }
        (ValueRef::Blob(_), _) => None,
    }
}

/// The value in the journal.
pub(super) fn json(value: &Value) -> serde_json::Value {
    match value {
        Value::Blank => serde_json::Value::Null,
        Value::Text(text) => text.as_str().into(),
        Value::Integer(number) => (*number).into(),
        Value::Real(number) => (*number).into(),
        Value::Money(money) => money.amount().into(),
    }
}

/// The value as a part of a key.
pub(super) fn key(value: &Value) -> String {
    match value {
        Value::Blank => String::new(),
        Value::Text(text) => text.clone(),
        Value::Integer(number) => number.to_string(),
        Value::Real(number) => number.to_string(),
        Value::Money(money) => money.to_string(),
    }
}
