//! Pure computation on plain data: no file, clock, thread count or chance that a caller did not pass in.
//!
//! Arranged as the trade is: [`transformer`] (nameplate, losses, circuit, thermal), [`loading`] (profiles and
//! moments), [`economics`] (discounting, factors, owning cost), [`decision`] (keep or replace, tender),
//! [`law`] (legal tables), [`working`] (the explained form of a figure). [`columns`] holds the names.

pub mod columns;
pub mod decision;
pub mod economics;
pub mod exact_sum;
pub mod flags;
pub mod law;
pub mod loading;
pub mod refusal;
pub mod transformer;
pub mod work;
pub mod working;

pub use refusal::Refusal;
