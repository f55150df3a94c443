//! The steps by which a file gets to the disk, each of which can fail.
//!
//! Tests let any of them fail by its number, as a full or broken disk would;
//! outside tests nothing of that is compiled.

use std::fs::{self, File};
use std::io::{self, ErrorKind, Seek, SeekFrom, Write};
use std::path::Path;

use super::interrupt::Pending;

/// A step that can fail.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Step {
    Create,
    Write,
    Permit,
    Sync,
    Rename,
    SyncFolder,
}

/// Fails where a test wants it.
#[cfg(not(test))]
#[inline]
fn at(_: Step) -> io::Result<()> {
    Ok(())
}

#[cfg(test)]
use broken::at;

/// A file with a name of its own, readable to whom the process's mask allows.
pub(super) fn create(folder: &Path) -> io::Result<Pending> {
    at(Step::Create)?;
    let mut builder = tempfile::Builder::new();
    builder.prefix(".chordwise-").suffix(".part");
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        builder.permissions(fs::Permissions::from_mode(0o666));
    }
    Pending::create(|| builder.tempfile_in(folder))
}

/// Whoever restricted the old file wants its successor restricted too.
pub(super) fn permit(pending: &Pending, old: &Path) -> io::Result<()> {
    at(Step::Permit)?;
    match fs::metadata(old) {
        Ok(old) => fs::set_permissions(pending.path(), old.permissions()),
        Err(_) => Ok(()),
    }
}

/// Writes over bytes of what is written already.
pub(super) fn patch(pending: &mut Pending, place: u64, bytes: &[u8]) -> io::Result<()> {
    at(Step::Write)?;
    let file = pending.file();
    file.seek(SeekFrom::Start(place))?;
    file.write_all(bytes)
}

/// Has the bytes on the disk before they get their name.
pub(super) fn sync(pending: &mut Pending) -> io::Result<()> {
    at(Step::Sync)?;
    pending.file().sync_all()
}

/// Gives the file its name.
pub(super) fn rename(pending: Pending, target: &Path) -> io::Result<()> {
    at(Step::Rename)?;
    pending.persist(target)
}

/// Makes the renaming last. Systems that cannot sync a folder say so, and are
/// believed.
pub(super) fn sync_folder(folder: &Path) -> io::Result<()> {
    if !cfg!(unix) {
        return Ok(());
    }
    let synced = at(Step::SyncFolder).and_then(|()| File::open(folder)?.sync_all());
    match synced {
        Err(error)
            if matches!(
                error.kind(),
                ErrorKind::InvalidInput | ErrorKind::Unsupported | ErrorKind::PermissionDenied
            ) =>
        {
            Ok(())
        }
        result => result,
    }
}

/// The file that is being written.
#[derive(Debug)]
pub(super) struct Written<'a>(pub(super) &'a mut File);

impl Write for Written<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        at(Step::Write)?;
        self.0.write(bytes)
    }

    fn flush(&mut self) -> io::Result<()> {
        self.0.flush()
    }
}

/// A disk that breaks at a chosen step of a thread.
#[cfg(test)]
pub(super) mod broken {
    use std::cell::Cell;

    use super::{Step, io};

    thread_local! {
        /// Which step fails, after how many of its kind, and how.
        static FAULT: Cell<Option<(Step, usize, i32)>> = const { Cell::new(None) };
    }

    /// Lets the step fail with an error of the system, after it went well some
    /// times, in what `job` does.
    pub(crate) fn with<T>(step: Step, after: usize, code: i32, job: impl FnOnce() -> T) -> T {
        FAULT.set(Some((step, after, code)));
        let result = job();
        FAULT.set(None);
        result
    }

    pub(super) fn at(step: Step) -> io::Result<()> {
        match FAULT.get() {
            Some((own, 0, code)) if own == step => Err(io::Error::from_raw_os_error(code)),
            Some((own, after, code)) if own == step => {
                FAULT.set(Some((own, after - 1, code)));
                Ok(())
            }
            _ => Ok(()),
        }
    }
}
