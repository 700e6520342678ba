//! Tenders end to end: published comparisons, the winner map, uncertainty and settlement, as whole sheets.

mod published;
mod sheets;
mod terms;
