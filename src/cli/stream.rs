//! `tessellate --stream`: triangles on the disk as they are proved.

use super::output::{Output, OutputError};
use super::progress::Progress;
use crate::format::{FormatError, StlStream, Written};
use crate::mesh::{Budget, MeshError, Streamed};
use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::Limits;
use crate::scalar::Tolerance;

/// Why a stream ended early.
#[derive(Debug, thiserror::Error)]
pub(super) enum StreamError {
    /// The target is no plain file.
    #[error(
        "--stream: the number of triangles stands at the head of an STL file and is known at the end; name a plain file"
    )]
    NoFile,
    /// The mesh.
    #[error(transparent)]
    Mesh(#[from] MeshError),
    /// A part of the file.
    #[error(transparent)]
    Format(#[from] FormatError),
    /// The file.
    #[error(transparent)]
    Output(#[from] OutputError),
}

/// Meshes to `held` and writes an STL file for `chord`.
pub(super) fn stream(
    output: Output,
    set: &PatchSet,
    (held, chord): (&Limits, Tolerance),
    budget: &Budget,
    wanted: impl Fn(PieceId) -> bool + Sync,
    progress: &Progress,
) -> Result<(Streamed, Written), StreamError> {
    if !output.is_file() {
        return Err(StreamError::NoFile);
    }
    // What failed, if it was not the writing.
    let mut failed = None;
    let done = output.write_patched(|out| {
        let mut stl = StlStream::new(out, set.unit(), chord, 0)?;
        let stage = |name| progress.stage(name);
        let made = Streamed::new(set, held, budget, wanted, stage, |mesh| {
            stl.add(mesh).map_err(StreamError::from)
        });
        let made = match made {
            Ok(made) => made,
            Err(StreamError::Format(error)) => return Err(error),
            Err(error) => {
                failed = Some(error);
                return Err(FormatError::Empty);
            }
        };
        let (written, count) = stl.finish()?;
        progress.stage("syncing");
        Ok(((made, written), count))
    });
    match (failed, done) {
        (Some(error), _) => Err(error),
        (None, done) => done?.ok_or(StreamError::NoFile),
    }
}
