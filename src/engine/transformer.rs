//! The transformer itself: losses at a load, vector group; nameplate from tests, circuit and thermal.

pub mod losses;
pub mod temperature;
pub mod vector_group;
pub mod windings;
