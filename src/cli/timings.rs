//! Phase times of a command, printed as one JSON line where asked for.

use std::time::Instant;

/// A clock that notes the end of each phase.
pub(super) struct Timings {
    wanted: bool,
    started: Instant,
    last: Instant,
    phases: serde_json::Map<String, serde_json::Value>,
}

impl Timings {
    pub(super) fn start(wanted: bool) -> Self {
        let now = Instant::now();
        Self { wanted, started: now, last: now, phases: serde_json::Map::new() }
    }

    /// The phase that ends here was `name`.
    pub(super) fn phase(&mut self, name: &str) {
        let now = Instant::now();
        self.phases.insert(format!("{name}_s"), (now - self.last).as_secs_f64().into());
        self.last = now;
    }

    /// The JSON line, where it is wanted.
    pub(super) fn finish(mut self) -> Option<String> {
        self.phases.insert("total_s".to_owned(), self.started.elapsed().as_secs_f64().into());
        self.wanted.then(|| serde_json::Value::Object(self.phases).to_string())
    }
}
