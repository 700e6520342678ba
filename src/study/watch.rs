//! The eye kept on long work: how far it is, and whether it is still wanted.

use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

/// Progress and cancelling of long work, shared between the one who works and the one who waits.
#[derive(Debug, Default)]
pub struct Watch {
    done: AtomicUsize,
    total: AtomicUsize,
    stopped: AtomicBool,
}

impl Watch {
    /// Says how much there is to do.
    pub fn expect(&self, total: usize) {
        self.done.store(0, Ordering::Relaxed);
        self.total.store(total, Ordering::Relaxed);
    }
    /// Says that `more` was done.
    pub fn advance(&self, more: usize) {
        self.done.fetch_add(more, Ordering::Relaxed);
    }
    /// Done and total.
    pub fn progress(&self) -> (usize, usize) {
        (self.done.load(Ordering::Relaxed), self.total.load(Ordering::Relaxed))
    }
    /// Asks the work to stop.
    pub fn stop(&self) {
        self.stopped.store(true, Ordering::Relaxed);
    }
    /// Whether it was asked to stop.
    pub fn is_stopped(&self) -> bool {
        self.stopped.load(Ordering::Relaxed)
    }
}
