//! Why the engine will not compute: the quantity, its value, the reason, and what to do.

use std::fmt;

/// An input that the engine refuses, said so that a planner knows what to do next.
#[derive(Clone, Debug, PartialEq)]
pub struct Refusal {
    /// Name of the quantity, as in files and JSON.
    pub quantity: &'static str,
    /// Its value as text.
    pub value: String,
    /// Why, and what to do.
    pub why: String,
}

impl Refusal {
    /// Builds a refusal.
    pub fn new(quantity: &'static str, value: impl fmt::Display, why: impl Into<String>) -> Self {
        Self { quantity, value: value.to_string(), why: why.into() }
    }
}

impl fmt::Display for Refusal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.value.is_empty() {
            write!(f, "{}: {}", self.quantity, self.why)
        } else {
            write!(f, "{} {}: {}", self.quantity, self.value, self.why)
        }
    }
}

impl std::error::Error for Refusal {}
