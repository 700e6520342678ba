//! The transformer itself: nameplate from tests, circuit, losses at a load, regulation, bank, fault, heat.

pub mod ageing;
pub mod circuit;
mod complex;
pub mod core_loss;
pub mod efficiency;
pub mod efficiency_index;
pub mod estimate;
pub mod fault;
pub mod harmonics;
pub mod losses;
pub mod nameplate;
pub mod parallel;
pub mod plausibility;
pub mod regulation;
pub mod temperature;
pub mod test_report;
pub mod thermal;
pub mod vector_group;
pub mod voltage_drop;
