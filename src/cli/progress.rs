//! What is shown while a command works: on a terminal, on standard error.
//!
//! Nothing is shown for the first second, and nothing at all where standard error
//! is no terminal. A stage that can count what it does shows its rate and how
//! long the rest will take; the others show how long they have been at it.

use std::io::Write;
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Arc, Mutex};
use std::time::{Duration, Instant};

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

/// Work shorter than this shows nothing.
const PATIENCE: Duration = Duration::from_secs(1);

/// How often the line is written anew.
const TICK: Duration = Duration::from_millis(120);

/// What a stage has done so far.
#[derive(Debug, Default)]
struct Stage {
    name: &'static str,
    done: AtomicU64,
    /// What it has to do in all; 0 where that is not known.
    whole: u64,
    unit: &'static str,
}

/// The line with the stage at work.
#[derive(Debug)]
pub(super) struct Progress {
    bar: ProgressBar,
    stage: Mutex<Arc<Stage>>,
}

impl Progress {
    /// Starts the clock; the line appears after a second.
    pub(super) fn new() -> Self {
        let bar = ProgressBar::with_draw_target(None, ProgressDrawTarget::hidden());
        let shown = bar.clone();
        if console_is_there() {
            std::thread::spawn(move || {
                std::thread::sleep(PATIENCE);
                if !shown.is_finished() {
                    shown.set_draw_target(ProgressDrawTarget::stderr());
                    shown.enable_steady_tick(TICK);
                }
            });
        }
        Self {
            bar,
            stage: Mutex::default(),
        }
    }

    /// Says which stage has begun.
    pub(super) fn stage(&self, name: &'static str) {
        self.counted(name, 0, "");
    }

    /// As [`Progress::stage`], for the stages of meshing `pieces` pieces.
    pub(super) fn meshing(&self, name: &'static str, pieces: usize) {
        if name.starts_with("tessellating") {
            self.counted(name, pieces as u64, "pieces");
        } else {
            self.stage(name);
        }
    }

    /// One more thing is done by a stage that counts; from any thread.
    pub(super) fn step(&self) {
        self.add(1);
    }

    /// So much more is done by a stage that counts; from any thread.
    pub(super) fn add(&self, count: u64) {
        if let Ok(stage) = self.stage.lock()
            && !stage.unit.is_empty()
        {
            stage.done.fetch_add(count, Ordering::Relaxed);
        }
    }

    /// Says which stage has begun, and that it will do `whole` things of a kind.
    pub(super) fn counted(&self, name: &'static str, whole: u64, unit: &'static str) {
        let stage = Arc::new(Stage {
            name,
            done: AtomicU64::new(0),
            whole,
            unit,
        });
        let began = Instant::now();
        let told = Arc::clone(&stage);
        if let Ok(mut held) = self.stage.lock() {
            *held = stage;
        }
        let line = move |_: &indicatif::ProgressState, out: &mut dyn std::fmt::Write| {
            // A terminal that is gone is nobody's loss.
            let _ = out.write_str(&describe(&told, began.elapsed()));
        };
        let style = ProgressStyle::with_template("{spinner} {line}");
        if let Ok(style) = style {
            self.bar.set_style(style.with_key("line", line));
        }
    }
}

/// Passes bytes on and counts them for the stage at work.
pub(super) struct Counted<'a> {
    pub(super) out: &'a mut dyn Write,
    pub(super) progress: &'a Progress,
}

impl Write for Counted<'_> {
    fn write(&mut self, bytes: &[u8]) -> std::io::Result<usize> {
        let done = self.out.write(bytes)?;
        self.progress.add(done as u64);
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
fn describe(stage: &Stage, passed: Duration) -> String {
    let seconds = passed.as_secs_f64();
    let done = stage.done.load(Ordering::Relaxed);
    if done == 0 || seconds < 0.2 {
        return format!("{}, {seconds:.0} s", stage.name);
    }
    #[allow(clippy::cast_precision_loss, reason = "shown in three digits")]
    let rate = done as f64 / seconds;
    let rest = if stage.whole >= done && stage.whole > 0 {
        #[allow(clippy::cast_precision_loss, reason = "shown in whole seconds")]
        let left = (stage.whole - done) as f64 / rate;
        format!(" of {}, {left:.0} s left", short(stage.whole))
    } else {
        String::new()
    };
    #[allow(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a rate is positive, and far below 2^64"
    )]
    let rate = short(rate as u64);
    format!(
        "{}, {}{rest} ({rate} {} a second)",
        stage.name,
        short(done),
        stage.unit
    )
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
        let stage = Stage {
            name: "writing",
            done: AtomicU64::new(30_000_000),
            whole: 90_000_000,
            unit: "bytes",
        };
        assert_eq!(
            describe(&stage, Duration::from_secs(3)),
            "writing, 30 million of 90 million, 6 s left (10 million bytes a second)"
        );
        let silent = Stage {
            name: "reading",
            ..Stage::default()
        };
        assert_eq!(describe(&silent, Duration::from_secs(4)), "reading, 4 s");
    }
}
