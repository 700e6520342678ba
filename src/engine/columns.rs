//! The table of column facts: every quantity that enters or leaves a book, stated once.
//!
//! A [`Column`] says a quantity's name, kind, range, whether it is required, what a blank means and what it
//! is. Header check, validation, SQL binding, JSON keys, help and documentation are read from it; the struct
//! of the same name ([`Unit`], [`Offer`], [`Basis`] …) is declared in the same breath by `record!`.
//! The unit of a quantity is the suffix of its name ([`Column::unit`]). Owns no file and no database.

mod asked_back;
mod facts;
mod records;

pub use asked_back::asked_back;
pub use facts::{Cell, Column, Kind, Money, Value, choices, nearest};
pub use records::*;

/// Declares one enumeration of trade words; the words are what files, SQL and JSON hold.
macro_rules! choice {
    ($(#[$doc:meta])* $name:ident { $($(#[$vdoc:meta])* $variant:ident = $word:literal),+ $(,)? }) => {
        $(#[$doc])*
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
        pub enum $name { $($(#[$vdoc])* #[doc = concat!("The word `", $word, "`.")] $variant),+ }
        impl $name {
            /// The words of this choice, in order.
            pub const WORDS: &'static [&'static str] = &[$($word),+];
            /// The word of this variant.
            pub const fn word(self) -> &'static str { match self { $(Self::$variant => $word),+ } }
            /// The variant of a word.
            pub fn from_word(word: &str) -> Option<Self> {
                match word { $($word => Some(Self::$variant),)+ _ => None }
            }
        }
        impl $crate::engine::columns::Cell for $name {
            fn from_value(value: &$crate::engine::columns::Value) -> Option<Self> {
                match value { $crate::engine::columns::Value::Text(t) => Self::from_word(t), _ => None }
            }
            fn to_value(&self) -> $crate::engine::columns::Value {
                $crate::engine::columns::Value::Text(self.word().to_owned())
            }
            fn blank() -> Self {
                [$(Self::$variant),+][0]
            }
        }
    };
}

/// Declares a record: a struct and the facts of its columns, in file order.
macro_rules! record {
    ($(#[$doc:meta])* $name:ident { $($field:ident : $ty:ty, $fact:expr, $meaning:literal;)+ }) => {
        $(#[$doc])*
        #[derive(Clone, Debug, PartialEq)]
        pub struct $name { $(#[doc = $meaning] pub $field: $ty),+ }
        impl $name {
            /// The facts of the columns, in file order.
            pub const COLUMNS: &'static [$crate::engine::columns::Column] = &[
                $($crate::engine::columns::Column { name: stringify!($field), meaning: $meaning, ..$fact }),+
            ];
            /// Builds the record from values in column order; none where a required one is blank or of
            /// another kind.
            pub fn from_values(values: &[$crate::engine::columns::Value]) -> Option<Self> {
                let mut values = values.iter();
                Some(Self { $($field: $crate::engine::columns::Cell::from_value(values.next()?)?),+ })
            }
            /// The values in column order.
            pub fn values(&self) -> Vec<$crate::engine::columns::Value> {
                vec![$($crate::engine::columns::Cell::to_value(&self.$field)),+]
            }
            /// The record with every column blank (required ones empty or zero): a start to fill in.
            pub fn blank() -> Self {
                Self { $($field: $crate::engine::columns::Cell::blank()),+ }
            }
        }
    };
}
pub(crate) use {choice, record};
