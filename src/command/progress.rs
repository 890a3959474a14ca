//! A progress bar on a terminal, for work that takes more than a second.

use std::io::{IsTerminal, stderr};
use std::sync::mpsc::{RecvTimeoutError, channel};
use std::thread;
use std::time::Duration;

use indicatif::{ProgressBar, ProgressStyle};

use crate::workspace::Progress;

/// Work that is done sooner needs no bar.
const PATIENCE: Duration = Duration::from_secs(1);

/// How often the bar moves.
const TICK: Duration = Duration::from_millis(100);

/// Does the work, with a bar on standard error where that is a terminal.
pub(super) fn watched<T>(progress: &Progress, work: impl FnOnce() -> T) -> T {
    if !stderr().is_terminal() {
        return work();
    }
    thread::scope(|scope| {
        let (done, wait) = channel::<()>();
        scope.spawn(move || {
            if wait.recv_timeout(PATIENCE) != Err(RecvTimeoutError::Timeout) {
                return;
            }
            let bar = ProgressBar::new(0);
            if let Ok(style) = ProgressStyle::with_template("{msg} {wide_bar} {pos} of {len}") {
                bar.set_style(style);
            }
            while wait.recv_timeout(TICK) == Err(RecvTimeoutError::Timeout) {
                bar.set_message(if progress.total() == 0 { "Reading recipes" } else { "Working out recipes" });
                bar.set_length(progress.total() as u64);
                bar.set_position(progress.done() as u64);
            }
            bar.finish_and_clear();
        });
        let result = work();
        drop(done);
        result
    })
}
