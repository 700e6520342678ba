//! Taking files in: what goes in comes out, what is wrong is told by line, and then nothing is changed.

mod check;
mod faults;
mod formats;
mod records;
mod series;
mod sheets;
mod support;
