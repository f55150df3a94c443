//! What an interrupt cleans up.

use std::fs::{self, File};
use std::io;
use std::path::{Path, PathBuf};
#[cfg(unix)]
use std::sync::Arc;
#[cfg(unix)]
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Mutex, MutexGuard, Once, PoisonError};
#[cfg(unix)]
use std::time::Duration;

use tempfile::NamedTempFile;

/// The exit code after an interrupt, 128 + 2 by custom.
const INTERRUPTED: i32 = 130;

/// Files that are half written. Whoever creates, renames or removes one holds
/// the lock meanwhile, so the interrupt finds each file either listed or gone.
static HALF_WRITTEN: Mutex<Vec<PathBuf>> = Mutex::new(Vec::new());

static WATCH: Once = Once::new();

fn half_written() -> MutexGuard<'static, Vec<PathBuf>> {
    HALF_WRITTEN.lock().unwrap_or_else(PoisonError::into_inner)
}

/// From here on an interrupt cleans up and ends the program with 130.
pub(super) fn watch() {
    WATCH.call_once(|| {
        #[cfg(unix)]
        outlive_size_limit();
        // It fails where one of the signals is ignored already, by the wish of
        // whoever started the program: a script's background, or `nohup`.
        if ctrlc::try_set_handler(clean_up).is_err() {
            #[cfg(unix)]
            attend();
        }
    });
}

/// Removes what is half written, and ends the program.
fn clean_up() {
    let files = half_written();
    for file in files.iter() {
        let _ = fs::remove_file(file);
    }
    std::process::exit(INTERRUPTED);
}

/// Cleans up at those of the signals that are not ignored; those that are stay so.
#[cfg(unix)]
fn attend() {
    use signal_hook::consts::{SIGHUP, SIGINT, SIGTERM};
    // How long a signal may wait: less than a person does.
    const LOOK: Duration = Duration::from_millis(50);
    let told = Arc::new(AtomicBool::new(false));
    let ignored = ignored();
    for signal in [SIGTERM, SIGINT, SIGHUP] {
        if ignored & (1 << (signal - 1)) == 0 {
            let _ = signal_hook::flag::register(signal, Arc::clone(&told));
        }
    }
    std::thread::spawn(move || {
        loop {
            std::thread::sleep(LOOK);
            if told.load(Ordering::Relaxed) {
                clean_up();
            }
        }
    });
}

/// The signals that are ignored, as bits from the first on. Where the system does
/// not say, all but the request to terminate are taken to be.
#[cfg(unix)]
fn ignored() -> u64 {
    let status = fs::read_to_string("/proc/self/status").unwrap_or_default();
    let line = status.lines().find_map(|line| line.strip_prefix("SigIgn:"));
    line.and_then(|bits| u64::from_str_radix(bits.trim(), 16).ok())
        .unwrap_or(!(1 << (signal_hook::consts::SIGTERM - 1)))
}

/// Lets writing beyond a file-size limit fail, as writing to a full disk does,
/// where it would end the program and leave a half-written file.
#[cfg(unix)]
fn outlive_size_limit() {
    // A handler that sets a flag nobody looks at. Where it cannot be set the
    // limit still ends the program.
    let _ = signal_hook::flag::register(signal_hook::consts::SIGXFSZ, Arc::default());
}

/// A half-written file, removed when dropped, at an interrupt, a hang-up or a
/// request to terminate.
#[derive(Debug)]
pub(super) struct Pending {
    file: Option<NamedTempFile>,
    path: PathBuf,
}

impl Pending {
    /// Lists the file that `create` makes.
    pub(super) fn create(create: impl FnOnce() -> io::Result<NamedTempFile>) -> io::Result<Self> {
        watch();
        let mut files = half_written();
        let file = create()?;
        let path = file.path().to_owned();
        files.push(path.clone());
        Ok(Self {
            file: Some(file),
            path,
        })
    }

    pub(super) fn path(&self) -> &Path {
        &self.path
    }

    pub(super) fn file(&mut self) -> &mut File {
        self.file
            .as_mut()
            .expect("only persisting takes the file, and that takes the owner too")
            .as_file_mut()
    }

    /// Gives the file its name.
    pub(super) fn persist(mut self, target: &Path) -> io::Result<()> {
        let _files = half_written();
        match self.file.take() {
            Some(file) => file.persist(target).map(drop).map_err(|e| e.error),
            None => Ok(()),
        }
        // Dropping `self` takes the file off the list, once the lock is free:
        // until then the name is listed, but no file has it any more.
    }
}

impl Drop for Pending {
    fn drop(&mut self) {
        let mut files = half_written();
        drop(self.file.take());
        files.retain(|file| *file != self.path);
    }
}
