//! The dashboard without a terminal: screens as snapshots, keys and what they change, sizes and hostile text.

mod bench;
mod demo;
mod keys;
mod screens;
mod sizes;
