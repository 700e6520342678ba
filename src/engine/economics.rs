//! Money over time: discounting, the resolved assumptions, running cost, loss factors, owning cost.

pub mod assumptions;
pub mod capital;
pub mod discounting;
pub mod economic_life;
pub mod equivalent_peak;
pub mod failure;
pub mod interest;
pub mod irr;
pub mod loss_factors;
pub mod owning_cost;
pub mod payback;
pub mod penalty;
pub mod running_cost;
pub mod traps;

pub use assumptions::Assumptions;
