//! Transformer losses, owning cost, replacement ranking and tender evaluation.
//!
//! Five layers; an arrow may only point down (`tests/layers.rs` holds them to it):
//!
//! ```text
//! cli/   tui/            commands; screens: ask a study, print or draw what it answers
//!    study/              questions a planner asks; joins book and engine
//! book/    exchange/     the SQLite store and its journal; files in and out
//!    engine/             pure computation on plain data
//! ```

pub mod book;
pub mod cli;
pub mod engine;
pub mod exchange;
pub mod study;
pub mod tui;
