//! The dashboard: screens over what the studies answer.
//!
//! One way round: an event becomes an [`Action`] by the table of [`action`], the action changes the state of
//! [`App`], the state is drawn. [`app`] neither draws nor waits; [`run`](mod@run) owns the loop, [`work`] the
//! questions to the worker, `terminal` what is written. Each screen has a file of its name.
//!
//! The screens do no arithmetic of the trade: every figure comes from a study.

pub mod action;
pub mod app;
pub mod bar;
mod basis;
pub mod caps;
mod chart;
pub mod clipboard;
mod entry;
pub mod extent;
mod fleet;
mod frame;
mod help;
mod journal;
pub mod keys;
pub mod list;
pub mod run;
pub mod session;
mod tender;
mod terminal;
pub mod text;
pub mod theme;
mod unit;
mod words;
pub mod work;
mod working;

pub use action::{ACTIONS, Action, Screen};
pub use app::{App, ExitReason};
pub use caps::{Caps, ColourWish, Colours, Marks};
pub use run::{TuiError, run};
pub use session::{AwardWriter, Awarding, BasisWriter, JournalLine, RecordReader, Session};
pub use unit::More;
