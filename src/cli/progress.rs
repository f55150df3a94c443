//! What is shown while a command works: on a terminal, on standard error.

use std::time::Duration;

use indicatif::ProgressBar;

/// A line with the stage at work. Where standard error is no terminal nothing
/// is shown.
#[derive(Debug)]
pub(super) struct Progress {
    bar: ProgressBar,
}

impl Progress {
    /// Starts the line.
    pub(super) fn new() -> Self {
        let bar = ProgressBar::new_spinner();
        bar.enable_steady_tick(Duration::from_millis(120));
        Self { bar }
    }

    /// Says which stage has begun.
    pub(super) fn stage(&self, name: &'static str) {
        self.bar.set_message(name);
    }
}

impl Drop for Progress {
    fn drop(&mut self) {
        self.bar.finish_and_clear();
    }
}
