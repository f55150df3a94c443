//! What is shown while a command works: on a terminal, on standard error.
//!
//! Nothing is shown for the first second, and nothing at all where standard error
//! is no terminal. The line has the stage at work, how much of it is done, how fast
//! that goes, and how long the rest takes at that rate, as far as the stage counts
//! (see [`pace`]); else how long it has been at it.

use std::io::Write;
use std::sync::{Arc, Mutex, PoisonError};
use std::time::{Duration, Instant};

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

use crate::pace::{self, Pace};

/// Work shorter than this shows nothing.
const PATIENCE: Duration = Duration::from_secs(1);

/// How often the line is written anew.
const TICK: Duration = Duration::from_millis(120);

/// The stage at work, and when it and its count began.
#[derive(Debug)]
struct Stage {
    name: &'static str,
    began: Instant,
    count: (u64, Instant),
}

/// The line with the stage at work.
#[derive(Debug)]
pub(super) struct Progress {
    bar: ProgressBar,
    stage: Arc<Mutex<Stage>>,
}

impl Progress {
    /// Starts the clock; the line appears after a second.
    pub(super) fn new() -> Self {
        let bar = ProgressBar::with_draw_target(None, ProgressDrawTarget::hidden());
        let now = Instant::now();
        let stage = Arc::new(Mutex::new(Stage {
            name: "",
            began: now,
            count: (0, now),
        }));
        let told = Arc::clone(&stage);
        let line = move |_: &indicatif::ProgressState, out: &mut dyn std::fmt::Write| {
            let mut stage = told.lock().unwrap_or_else(PoisonError::into_inner);
            let (pace, now) = (pace::look(), Instant::now());
            if stage.count.0 != pace.number {
                stage.count = (pace.number, now);
            }
            let passed = [stage.began, stage.count.1].map(|from| now - from);
            // A terminal that is gone is nobody's loss.
            let _ = out.write_str(&describe(stage.name, &pace, passed));
        };
        if let Ok(style) = ProgressStyle::with_template("{spinner} {line}") {
            bar.set_style(style.with_key("line", line));
        }
        if console_is_there() {
            let shown = bar.clone();
            std::thread::spawn(move || {
                std::thread::sleep(PATIENCE);
                if !shown.is_finished() {
                    shown.set_draw_target(ProgressDrawTarget::stderr());
                    shown.enable_steady_tick(TICK);
                }
            });
        }
        Self { bar, stage }
    }

    /// Says which stage has begun; it may count what it does.
    pub(super) fn stage(&self, name: &'static str) {
        pace::expect(0, "");
        let now = Instant::now();
        let mut stage = self.stage.lock().unwrap_or_else(PoisonError::into_inner);
        *stage = Stage {
            name,
            began: now,
            count: (pace::look().number, now),
        };
    }

    /// Clears the line for something else to be written on the terminal.
    pub(super) fn aside(&self, say: impl FnOnce()) {
        self.bar.suspend(say);
    }
}

/// Passes bytes on and counts them for the stage at work.
pub(super) struct Counted<'a> {
    pub(super) out: &'a mut dyn Write,
}

impl Write for Counted<'_> {
    fn write(&mut self, bytes: &[u8]) -> std::io::Result<usize> {
        let done = self.out.write(bytes)?;
        pace::step(done as u64);
        Ok(done)
    }

    fn flush(&mut self) -> std::io::Result<()> {
        self.out.flush()
    }
}

fn console_is_there() -> bool {
    use std::io::IsTerminal;
    std::io::stderr().is_terminal()
}

/// The line: what is done, how fast, and how long the rest takes at that rate.
/// `passed` are the times since the stage began, and since its count did.
#[allow(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "shown in whole seconds and few digits"
)]
fn describe(name: &str, pace: &Pace, [stage, count]: [Duration; 2]) -> String {
    let seconds = count.as_secs_f64();
    if pace.share == 0 || pace.unit.is_empty() || seconds < 0.2 {
        return format!("{name}, {:.0} s", stage.as_secs_f64());
    }
    let whole = pace.whole.max(pace.share);
    let left = (whole - pace.share) as f64 * seconds / pace.share as f64;
    let done = match (pace.whole, pace.share == pace.done) {
        (0, _) => short(pace.done),
        (_, true) => format!("{} of {}, {left:.0} s left", short(pace.done), short(whole)),
        (_, false) => {
            let percent = (100.0 * pace.share as f64 / whole as f64).floor();
            format!("{percent} %, {left:.0} s left")
        }
    };
    let rate = short((pace.done as f64 / seconds) as u64);
    format!("{name}, {done} ({rate} {} a second)", pace.unit)
}

/// A count in few digits.
fn short(count: u64) -> String {
    match count {
        0..=9_999 => count.to_string(),
        10_000..=9_999_999 => format!("{} thousand", count / 1000),
        _ => format!("{} million", count / 1_000_000),
    }
}

impl Drop for Progress {
    fn drop(&mut self) {
        self.bar.finish_and_clear();
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_line_has_rate_and_time_left() {
        let pace = Pace {
            whole: 90_000_000,
            share: 30_000_000,
            done: 30_000_000,
            unit: "bytes",
            number: 7,
        };
        let passed = [4, 3].map(Duration::from_secs);
        assert_eq!(
            describe("writing", &pace, passed),
            "writing, 30 million of 90 million, 6 s left (10 million bytes a second)"
        );
        let pace = Pace {
            whole: 400,
            share: 100,
            done: 60_000,
            unit: "triangles",
            ..pace
        };
        assert_eq!(
            describe("tessellating", &pace, passed),
            "tessellating, 25 %, 9 s left (20 thousand triangles a second)"
        );
        let pace = Pace { whole: 0, ..pace };
        assert_eq!(
            describe("reading", &pace, passed),
            "reading, 60 thousand (20 thousand triangles a second)"
        );
        let silent = Pace {
            share: 0,
            unit: "",
            ..pace
        };
        assert_eq!(describe("reading", &silent, passed), "reading, 4 s");
    }
}
