//! What to decide: keep or replace (one unit, or a fleet in columns), which bid, and how sure the answer is.

pub mod common_load;
pub mod estimate;
pub mod fit;
pub mod fleet;
pub mod keep_or_replace;
pub mod parts;
pub mod place;
pub mod side_by_side;
pub mod stated_load;
pub mod tender;
pub mod uncertainty;

pub use fit::Candidate;
pub use place::{Context, LeftOut, Place, UnitFacts};

/// Whether two present values count as equal: within 1e-12 of the larger (methods, section 0).
pub fn equal_pv(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-12 * a.abs().max(b.abs())
}
