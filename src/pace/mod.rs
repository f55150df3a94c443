//! How far the work at hand has come, for whoever shows it.
//!
//! Rooms say how much there is to do and count what they have done; a program may
//! look at that from another thread. One count stands for the process: it is told
//! to people, and no result depends on it. Works that run side by side in one
//! process move the same count.

use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Mutex, MutexGuard, PoisonError};

/// What is to be done.
#[derive(Debug, Clone, Copy)]
struct Task {
    whole: u64,
    unit: &'static str,
    /// Rises with every task, so that a viewer sees that another has begun.
    number: u64,
}

static TASK: Mutex<Task> = Mutex::new(Task {
    whole: 0,
    unit: "",
    number: 0,
});
static SHARE: AtomicU64 = AtomicU64::new(0);
static DONE: AtomicU64 = AtomicU64::new(0);

fn task() -> MutexGuard<'static, Task> {
    TASK.lock().unwrap_or_else(PoisonError::into_inner)
}

/// How far the work has come.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Pace {
    /// What there is to do, as [`advance`] measures it; 0 where that is not known.
    pub whole: u64,
    /// How much of that is done.
    pub share: u64,
    /// Things done.
    pub done: u64,
    /// What the things are called, in the plural; empty where none are counted.
    pub unit: &'static str,
    /// The number of the task.
    pub number: u64,
}

/// So many things of a kind are to be done from now on; 0 where the number is not
/// known.
pub fn expect(whole: u64, unit: &'static str) {
    let mut task = task();
    SHARE.store(0, Ordering::Relaxed);
    DONE.store(0, Ordering::Relaxed);
    *task = Task {
        whole,
        unit,
        number: task.number + 1,
    };
}

/// So many more things are done; from any thread.
pub fn step(count: u64) {
    advance(count, count);
}

/// As [`step`], where the whole is measured otherwise than things are counted: so
/// much more of the whole is done, and that was so many things.
pub fn advance(share: u64, count: u64) {
    SHARE.fetch_add(share, Ordering::Relaxed);
    DONE.fetch_add(count, Ordering::Relaxed);
}

/// How far the work has come.
#[must_use]
pub fn look() -> Pace {
    let task = task();
    Pace {
        whole: task.whole,
        share: SHARE.load(Ordering::Relaxed),
        done: DONE.load(Ordering::Relaxed),
        unit: task.unit,
        number: task.number,
    }
}
