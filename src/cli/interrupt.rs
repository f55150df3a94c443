//! What an interrupt cleans up.

use std::fs::{self, File};
use std::io;
use std::path::{Path, PathBuf};
#[cfg(unix)]
use std::sync::Arc;
use std::sync::{Mutex, MutexGuard, Once, PoisonError};

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
        // It fails where a signal is ignored already, by the wish of whoever
        // started the program. Then it stays so.
        let _ = ctrlc::try_set_handler(|| {
            let files = half_written();
            for file in files.iter() {
                let _ = fs::remove_file(file);
            }
            std::process::exit(INTERRUPTED);
        });
    });
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
