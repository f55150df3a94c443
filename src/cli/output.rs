//! Where results go: a file that is replaced as a whole, or standard output.
//!
//! A file is written under another name in the folder of its target, synced,
//! and renamed, so that a reader finds the old file or the new one and never a
//! mix. A link is followed: what it points to is replaced, the link stays. What
//! is no plain file (a device, a named pipe) is written in place. An interrupt
//! removes what is half written and ends the program with 130. The steps on
//! the disk are in `disk`.

use std::fs::{self, OpenOptions};
use std::io::{self, ErrorKind, Write};
use std::path::{Path, PathBuf};

use thiserror::Error;

use super::{disk, interrupt};
use crate::format::FormatError;

/// Why a result did not get to where it should go.
#[derive(Debug, Error)]
pub(crate) enum OutputError {
    /// The target is a folder.
    #[error("{}: is a folder; name a file in it", .0.display())]
    Folder(PathBuf),
    /// The folder of the target is missing.
    #[error("{}: there is no folder {}; make it first", path.display(), folder.display())]
    NoFolder { path: PathBuf, folder: PathBuf },
    /// The target is a file that is read.
    #[error("{}: is the input itself; an output must be another file", .0.display())]
    Input(PathBuf),
    /// Links that lead nowhere.
    #[error("{}: too many links; a link must lead to a file", .0.display())]
    Links(PathBuf),
    /// The system refused something.
    #[error("{place}: cannot {action}; {source}")]
    System {
        place: String,
        action: &'static str,
        source: io::Error,
    },
    /// The mesh cannot be written as asked.
    #[error(transparent)]
    Format(FormatError),
}

/// A place for a result, found fit before the work starts.
#[derive(Debug)]
pub(crate) enum Output {
    /// Standard output.
    Standard,
    /// A plain file, there already or not: the name given, and the file it
    /// means once links are followed.
    File { name: PathBuf, target: PathBuf },
    /// A device or a named pipe.
    Special(PathBuf),
}

impl Output {
    /// Looks at what `name` means; `-` is standard output.
    ///
    /// # Errors
    /// [`OutputError`] where it is a folder or one of the inputs, or where its
    /// folder is missing.
    pub(crate) fn open(name: &Path, inputs: &[&Path]) -> Result<Self, OutputError> {
        interrupt::watch();
        if name.as_os_str() == "-" {
            return Ok(Self::Standard);
        }
        let target = follow(name)?;
        let trailing = name
            .as_os_str()
            .as_encoded_bytes()
            .last()
            .is_some_and(|&byte| std::path::is_separator(byte.into()));
        let found = match fs::metadata(&target) {
            Ok(found) => Some(found),
            Err(error) if error.kind() == ErrorKind::NotFound => None,
            Err(error) => return Err(system(name, "look at it", error)),
        };
        if trailing || found.as_ref().is_some_and(fs::Metadata::is_dir) {
            return Err(OutputError::Folder(name.to_owned()));
        }
        if found.is_some() && inputs.iter().any(|input| is_same(input, &target)) {
            return Err(OutputError::Input(name.to_owned()));
        }
        if found.is_some_and(|found| !found.is_file()) {
            return Ok(Self::Special(target));
        }
        let folder = folder_of(&target);
        if !folder.is_dir() {
            return Err(OutputError::NoFolder {
                path: name.to_owned(),
                folder: folder.to_owned(),
            });
        }
        // Tried out now, and not after an hour of work.
        disk::create(folder).map_err(|error| system(name, "make a file beside it", error))?;
        Ok(Self::File {
            name: name.to_owned(),
            target,
        })
    }

    /// Whether this is standard output.
    pub(crate) fn is_standard(&self) -> bool {
        matches!(self, Self::Standard)
    }

    /// Whether it is a plain file, in which one can go back.
    pub(crate) fn is_file(&self) -> bool {
        matches!(self, Self::File { .. })
    }

    /// As [`Output::write`] to a plain file; at the end some bytes are written over
    /// at a place, which is known only then. `None` where it is no plain file.
    ///
    /// # Errors
    /// As [`Output::write`].
    pub(crate) fn write_patched<T>(
        self,
        job: impl FnOnce(&mut dyn Write) -> Result<(T, (u64, [u8; 4])), FormatError>,
    ) -> Result<Option<T>, OutputError> {
        let Self::File { name, target } = self else {
            return Ok(None);
        };
        let done = |(_, patch): &(T, _)| Some(*patch);
        replace(name, target, job, done).map(|(done, _)| Some(done))
    }

    /// Writes a result to a plain file that gets its name later. `None` where it is
    /// no plain file.
    ///
    /// # Errors
    /// As [`Output::write`].
    pub(crate) fn prepare<T>(
        self,
        job: impl FnOnce(&mut dyn Write) -> Result<T, FormatError>,
    ) -> Result<Option<(T, Ready)>, OutputError> {
        match self {
            Self::File { name, target } => prepare(name, target, job, |_| None).map(Some),
            _ => Ok(None),
        }
    }

    /// Writes a result. `None` means that the reader of standard output has
    /// gone, which is no fault.
    ///
    /// # Errors
    /// [`OutputError`] where the result or the system fails; the target is then
    /// as it was, and nothing else is left behind.
    pub(crate) fn write<T>(
        self,
        job: impl FnOnce(&mut dyn Write) -> Result<T, FormatError>,
    ) -> Result<Option<T>, OutputError> {
        match self {
            Self::Standard => {
                let mut out = io::stdout().lock();
                let result = job(&mut out).and_then(|done| {
                    out.flush()?;
                    Ok(done)
                });
                match result {
                    Ok(done) => Ok(Some(done)),
                    Err(FormatError::Io(error)) if error.kind() == ErrorKind::BrokenPipe => {
                        Ok(None)
                    }
                    Err(error) => Err(failed(Path::new("standard output"), error)),
                }
            }
            Self::Special(path) => {
                let mut out = OpenOptions::new()
                    .write(true)
                    .open(&path)
                    .map_err(|error| system(&path, "open it", error))?;
                job(&mut out)
                    .map(Some)
                    .map_err(|error| failed(&path, error))
            }
            Self::File { name, target } => replace(name, target, job, |_| None).map(Some),
        }
    }
}

/// A result that is on the disk as a whole, and has not got its name yet. Dropped,
/// it is gone.
#[derive(Debug)]
pub(crate) struct Ready {
    name: PathBuf,
    target: PathBuf,
    pending: interrupt::Pending,
}

impl Ready {
    /// Gives it its name.
    ///
    /// # Errors
    /// [`OutputError`] where the system fails.
    pub(crate) fn place(self) -> Result<(), OutputError> {
        let Self {
            name,
            target,
            pending,
        } = self;
        disk::rename(pending, &target).map_err(|error| system(&name, "put it in place", error))?;
        disk::sync_folder(folder_of(&target)).map_err(|error| {
            system(
                &name,
                "be sure that it lasts: its folder was not synced",
                error,
            )
        })
    }
}

fn replace<T>(
    name: PathBuf,
    target: PathBuf,
    job: impl FnOnce(&mut dyn Write) -> Result<T, FormatError>,
    patch: impl FnOnce(&T) -> Option<(u64, [u8; 4])>,
) -> Result<T, OutputError> {
    let (done, ready) = prepare(name, target, job, patch)?;
    ready.place()?;
    Ok(done)
}

fn prepare<T>(
    name: PathBuf,
    target: PathBuf,
    job: impl FnOnce(&mut dyn Write) -> Result<T, FormatError>,
    patch: impl FnOnce(&T) -> Option<(u64, [u8; 4])>,
) -> Result<(T, Ready), OutputError> {
    let mut pending = disk::create(folder_of(&target))
        .map_err(|error| system(&name, "make a file beside it", error))?;
    let done = job(&mut disk::Written(pending.file())).map_err(|error| failed(&name, error))?;
    if let Some((place, bytes)) = patch(&done) {
        disk::patch(&mut pending, place, &bytes)
            .map_err(|error| system(&name, "write it", error))?;
    }
    disk::permit(&pending, &target)
        .map_err(|error| system(&name, "keep its permissions", error))?;
    disk::sync(&mut pending).map_err(|error| system(&name, "sync it", error))?;
    let ready = Ready {
        name,
        target,
        pending,
    };
    Ok((done, ready))
}

/// What a path means once links are followed, whether it exists or not.
fn follow(name: &Path) -> Result<PathBuf, OutputError> {
    // As many as common systems allow.
    const LINKS: usize = 40;
    let mut path = name.to_owned();
    for _ in 0..LINKS {
        match fs::symlink_metadata(&path) {
            Ok(found) if found.is_symlink() => {
                let next =
                    fs::read_link(&path).map_err(|error| system(name, "follow it", error))?;
                path = folder_of(&path).join(next);
            }
            _ => return Ok(path),
        }
    }
    Err(OutputError::Links(name.to_owned()))
}

fn folder_of(path: &Path) -> &Path {
    match path.parent() {
        Some(folder) if folder.as_os_str().is_empty() => Path::new("."),
        Some(folder) => folder,
        None => path,
    }
}

#[cfg(unix)]
fn is_same(a: &Path, b: &Path) -> bool {
    use std::os::unix::fs::MetadataExt;
    match (fs::metadata(a), fs::metadata(b)) {
        (Ok(a), Ok(b)) => (a.dev(), a.ino()) == (b.dev(), b.ino()),
        _ => false,
    }
}

#[cfg(not(unix))]
fn is_same(a: &Path, b: &Path) -> bool {
    match (fs::canonicalize(a), fs::canonicalize(b)) {
        (Ok(a), Ok(b)) => a == b,
        _ => false,
    }
}

fn failed(path: &Path, error: FormatError) -> OutputError {
    match error {
        FormatError::Io(error) => system(path, "write it", error),
        error => OutputError::Format(error),
    }
}

fn system(path: &Path, action: &'static str, source: io::Error) -> OutputError {
    OutputError::System {
        place: path.display().to_string(),
        action,
        source,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn put(name: &Path, text: &str) -> Result<(), OutputError> {
        let output = Output::open(name, &[])?;
        assert!(!output.is_standard());
        output
            .write(|out| Ok(out.write_all(text.as_bytes())?))
            .map(|done| done.unwrap())
    }

    fn names(folder: &Path) -> Vec<String> {
        let mut names: Vec<String> = fs::read_dir(folder)
            .unwrap()
            .map(|entry| entry.unwrap().file_name().into_string().unwrap())
            .collect();
        names.sort();
        names
    }

    #[test]
    fn a_file_is_made_and_replaced() {
        let folder = tempfile::tempdir().unwrap();
        let name = folder.path().join("mesh.obj");
        for text in ["one", "two"] {
            put(&name, text).unwrap();
            assert_eq!(fs::read_to_string(&name).unwrap(), text);
        }
        assert_eq!(names(folder.path()), ["mesh.obj"]);
    }

    #[test]
    fn what_fails_leaves_the_old_file_and_no_litter() {
        let folder = tempfile::tempdir().unwrap();
        let name = folder.path().join("mesh.obj");
        put(&name, "old").unwrap();
        let error = Output::open(&name, &[])
            .unwrap()
            .write::<()>(|out| {
                out.write_all(b"half")?;
                Err(io::Error::from(ErrorKind::StorageFull).into())
            })
            .unwrap_err();
        assert!(error.to_string().contains("mesh.obj: cannot write it; "));
        assert_eq!(fs::read_to_string(&name).unwrap(), "old");
        assert_eq!(names(folder.path()), ["mesh.obj"]);
    }

    /// Whichever step fails, and however, the file is the old one or, where only
    /// the folder was not synced, the new one, whole; and nothing lies beside it.
    #[test]
    fn every_step_can_fail_and_nothing_is_lost() {
        use super::disk::Step;
        const EIO: i32 = 5;
        const ENOSPC: i32 = 28;
        let folder = tempfile::tempdir().unwrap();
        let name = folder.path().join("mesh.obj");
        let blocks = 7;
        let save = || {
            Output::open(&name, &[])?.write(|out| {
                for block in 0..blocks {
                    out.write_all(&[block; 1000])?;
                }
                Ok(())
            })
        };
        let mut tried = 0;
        for (step, times) in [
            (Step::Create, 1),
            (Step::Write, usize::from(blocks)),
            (Step::Permit, 1),
            (Step::Sync, 1),
            (Step::Rename, 1),
            (Step::SyncFolder, 1),
        ] {
            for (after, code) in (0..times).flat_map(|n| [(n, EIO), (n, ENOSPC)]) {
                for old in [None, Some("old")] {
                    match old {
                        None => drop(fs::remove_file(&name)),
                        Some(text) => fs::write(&name, text).unwrap(),
                    }
                    let error = disk::broken::with(step, after, code, save).unwrap_err();
                    let said = error.to_string();
                    assert!(said.contains("mesh.obj: cannot "), "{said}");
                    assert!(said.contains(&io::Error::from_raw_os_error(code).to_string()));
                    let left = fs::read(&name).ok();
                    if step == Step::SyncFolder {
                        assert_eq!(left.unwrap().len(), 7000);
                    } else {
                        assert_eq!(left.as_deref(), old.map(str::as_bytes), "{step:?}");
                    }
                    assert!(names(folder.path()).len() <= 1, "{step:?}: litter");
                    tried += 1;
                }
            }
        }
        assert_eq!(tried, 4 * 12);
        save().unwrap();
        assert_eq!(fs::metadata(&name).unwrap().len(), 7000);
    }

    /// Bytes put in at the end are there, or the old file is.
    #[test]
    fn what_is_put_in_at_the_end_can_fail_too() {
        use super::disk::Step;
        let folder = tempfile::tempdir().unwrap();
        let name = folder.path().join("mesh.stl");
        let save = || {
            Output::open(&name, &[])?.write_patched(|out| {
                out.write_all(b"count: ???? end")?;
                Ok(((), (7, *b"1234")))
            })
        };
        fs::write(&name, "old").unwrap();
        for after in [0, 1] {
            let error = disk::broken::with(Step::Write, after, 28, save).unwrap_err();
            assert!(error.to_string().contains("mesh.stl: cannot write it; "));
            assert_eq!(fs::read(&name).unwrap(), b"old");
        }
        save().unwrap().unwrap();
        assert_eq!(fs::read(&name).unwrap(), b"count: 1234 end");
        assert_eq!(names(folder.path()), ["mesh.stl"]);
        let standard = Output::open(Path::new("-"), &[]).unwrap();
        let none = standard.write_patched(|_| Ok(((), (0, [0; 4])))).unwrap();
        assert!(none.is_none());
    }

    #[test]
    fn folders_and_inputs_are_refused() {
        let folder = tempfile::tempdir().unwrap();
        let at = |name: &str| folder.path().join(name);
        let refused =
            |name: &Path, inputs: &[&Path]| Output::open(name, inputs).map(|_| ()).unwrap_err();
        assert!(matches!(
            refused(folder.path(), &[]),
            OutputError::Folder(_)
        ));
        assert!(matches!(refused(&at("new/"), &[]), OutputError::Folder(_)));
        assert!(matches!(
            refused(&at("new/mesh.obj"), &[]),
            OutputError::NoFolder { .. }
        ));
        fs::write(at("set.ron"), "").unwrap();
        fs::hard_link(at("set.ron"), at("same.obj")).unwrap();
        let input = at("set.ron");
        assert!(matches!(
            refused(&at("./set.ron"), &[&input]),
            OutputError::Input(_)
        ));
        assert!(matches!(
            refused(&at("same.obj"), &[&input]),
            OutputError::Input(_)
        ));
    }

    #[cfg(unix)]
    #[test]
    fn links_stay_and_their_targets_are_replaced() {
        use std::os::unix::fs::symlink;
        let folder = tempfile::tempdir().unwrap();
        let at = |name: &str| folder.path().join(name);
        fs::create_dir(at("deep")).unwrap();
        symlink("deep/mesh.obj", at("link")).unwrap();
        symlink("link", at("chain")).unwrap();
        for text in ["dangling at first", "not any more"] {
            put(&at("chain"), text).unwrap();
            assert_eq!(fs::read_to_string(at("deep/mesh.obj")).unwrap(), text);
        }
        assert_eq!(names(folder.path()), ["chain", "deep", "link"]);
        symlink("round", at("round")).unwrap();
        assert!(matches!(
            put(&at("round"), ""),
            Err(OutputError::Links(_) | OutputError::System { .. })
        ));
        symlink(".", at("here")).unwrap();
        assert!(matches!(put(&at("here"), ""), Err(OutputError::Folder(_))));
    }

    #[cfg(unix)]
    #[test]
    fn permissions_are_those_of_the_mask_or_of_the_old_file() {
        use std::os::unix::fs::PermissionsExt;
        let folder = tempfile::tempdir().unwrap();
        let at = |name: &str| folder.path().join(name);
        let mode = |name: &str| fs::metadata(at(name)).unwrap().permissions().mode() & 0o777;
        fs::write(at("ordinary"), "").unwrap();
        put(&at("ours"), "").unwrap();
        assert_eq!(mode("ours"), mode("ordinary"));
        fs::set_permissions(at("ours"), fs::Permissions::from_mode(0o640)).unwrap();
        put(&at("ours"), "again").unwrap();
        assert_eq!(mode("ours"), 0o640);
    }

    #[cfg(target_os = "linux")]
    #[test]
    fn devices_are_written_in_place() {
        put(Path::new("/dev/null"), "gone").unwrap();
        let error = put(Path::new("/dev/full"), "too much").unwrap_err();
        assert!(
            error
                .to_string()
                .starts_with("/dev/full: cannot write it; ")
        );
        assert!(!fs::metadata("/dev/null").unwrap().is_file());
    }
}
