//! How far the work on a snapshot has come, for whoever waits for it on another thread.

use std::sync::atomic::{AtomicUsize, Ordering};

/// Blocks worked out, of so many.
#[derive(Debug, Default)]
pub struct Progress {
    total: AtomicUsize,
    done: AtomicUsize,
}

impl Progress {
    /// How many blocks there are to work out; 0 while files are still being read.
    pub fn total(&self) -> usize {
        self.total.load(Ordering::Relaxed)
    }

    /// How many are done.
    pub fn done(&self) -> usize {
        self.done.load(Ordering::Relaxed)
    }

    pub(super) fn expect(&self, total: usize) {
        self.total.store(total, Ordering::Relaxed);
        self.done.store(0, Ordering::Relaxed);
    }

    pub(super) fn one_done(&self) {
        self.done.fetch_add(1, Ordering::Relaxed);
    }
}
