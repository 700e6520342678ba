//! The dashboard without a terminal: screens as snapshots, keys and what they change, sizes and hostile text.
#![expect(clippy::unwrap_used, reason = "a test fails where it unwraps nothing")]

mod awards;
mod bench;
mod demo;
mod figures;
mod keys;
mod maps;
mod screens;
mod sizes;
