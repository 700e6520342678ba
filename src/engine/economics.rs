//! Money over time: discounting, the resolved assumptions, running cost, loss factors, owning cost.

pub mod assumptions;
pub mod capital;
pub mod discounting;
pub mod failure;
pub mod loss_factors;
pub mod owning_cost;
pub mod running_cost;

pub use assumptions::Assumptions;
