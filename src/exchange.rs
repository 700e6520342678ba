//! Files in: delimited text, workbooks, TOML sheets. What is wrong in them is said by line, column and value.
//! And letters out: [`letter`] writes what a study has to say as plain text or Markdown.
//!
//! [`Source`] is where bytes come from, bounded; [`Rows`] are the rows of a text file or a workbook alike;
//! [`Layout`] fits their header to the column facts and turns cells into values; [`series`] reads years of
//! equal steps, [`sheets`] reads basis and tender files. Nothing here writes to a book or looks into one.

mod delimited;
mod layout;
pub mod letter;
mod number;
pub mod problem;
mod recognise;
pub mod rejects;
mod rows;
pub mod rules;
pub mod series;
pub mod sheets;
mod source;
pub mod target;
mod workbook;

pub use layout::{Fault, Layout, counted, holds_numbers};
pub use letter::{Letter, visible};
pub use number::Decimals;
pub use problem::{Problem, Problems};
pub use recognise::{Decimal, Delimiter, Encoding, Hints, Recognised};
pub use rows::{ReadError, Row, Rows};
pub use source::{Source, SourceError};
