//! What a place asks of a transformer over a year: profiles, price series, load and loss factors, the duty.

pub mod duty;
pub mod factors;
pub mod prices;
pub mod profile;
pub mod stepped;

pub use duty::{Duty, VoltageDrop};
pub use prices::{Market, PriceSeries, Weights};
pub use profile::Profile;
pub use stepped::Ratios;
