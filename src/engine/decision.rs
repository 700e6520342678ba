//! What to decide: keep or replace, and which bid; and how sure the answer is.

pub mod tender;
pub mod uncertainty;

/// Two present values within 1e-12 of the larger count as equal (methods, section 0).
pub fn same_value(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-12 * a.abs().max(b.abs())
}
