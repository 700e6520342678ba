//! Tenders end to end: published comparisons, the winner map, uncertainty and settlement, as whole sheets.

mod changes;
mod map;
mod map_reference;
mod published;
mod settlement;
mod sheets;
mod terms;
