//! Tenders end to end: published comparisons, the winner map, uncertainty and settlement, as whole sheets.

mod award;
mod changes;
mod map;
mod map_reference;
mod properties;
mod published;
mod risk;
mod settlement;
mod sheets;
mod terms;
