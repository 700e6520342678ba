//! The dashboard on the demo fleet, without a book: `cargo run --example dashboard [UNITS] [--ascii]
//! [--color WHEN]`. For looking at screens while working on them.

#[path = "../tests/tui/demo.rs"]
#[expect(clippy::unwrap_used, reason = "a support file of the tests")]
mod demo;

use std::process::ExitCode;

use ironhum::tui::{Caps, ColourWish, run};

fn main() -> ExitCode {
    let args: Vec<String> = std::env::args().collect();
    let has = |word: &str| args.iter().any(|arg| arg == word);
    let wish = match (has("always"), has("never")) {
        (true, _) => ColourWish::Always,
        (_, true) => ColourWish::Never,
        _ => ColourWish::Auto,
    };
    let units = args.iter().find_map(|arg| arg.parse().ok()).unwrap_or(0);
    let caps = Caps::of(|name| std::env::var(name).ok(), wish, has("--ascii"));
    match run(move |_| Ok(demo::session(units)), caps) {
        Ok(reason) => ExitCode::from(reason.code()),
        Err(_) => ExitCode::FAILURE,
    }
}
