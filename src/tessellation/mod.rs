//! Triangles for every piece, each proved within the chord tolerance.
//!
//! A piece is laid out (`layout`): its border as the seams have sampled it, its
//! inside as rows of the optimal lattice (`lattice`, `plan`, steps from a coarse
//! `field` of second derivatives) that end in the border's samples (`courses`),
//! stitched into triangles (`stitch`). None of that is trusted: every triangle is
//! then proved. Most are in one pass (`sweep`) with quick bounds from second
//! derivatives (`quick`, `border`). Others are proved (`proving`) by closer ones
//! (`interpolation`) or from their nets (`certificate`), with their neighbours where
//! parameters wander (`verdict`), or at once where the piece is flat (`planar`). A
//! layout that fails in many places is made again with what the proof taught
//! (`correction`); what still fails is refined until it is proved (`refine`), or
//! the run fails and says where. On request vertices are taken out again (`thin`).

mod border;
mod certificate;
mod correction;
mod courses;
mod field;
mod fill;
mod finish;
mod floor;
mod grid;
mod hole;
mod interpolation;
mod lattice;
mod layout;
mod nets;
mod plan;
mod planar;
mod proving;
mod quadratic;
mod quick;
#[cfg(test)]
mod random;
mod refine;
mod remainder;
mod stitch;
mod sweep;
mod thin;
mod triangulation;
mod verdict;
mod work;

use rayon::prelude::*;
use thiserror::Error;

use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::{Limits, Samples};
use crate::scalar::Point;
use crate::topology::Topology;

pub use fill::{Attained, Filled, Proved};
pub use floor::floor;

/// A piece that could not be held within its limits.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum TessellationError {
    /// Refinement ended without proof.
    #[error(
        "patch `{patch}` at (u, v) = ({u:.6}, {v:.6}), place ({x:.6}, {y:.6}, {z:.6}): a triangle could only be proved within {proved:.3e}; the chord tolerance is {chord:.3e} - a larger chord, or a smaller gap where an edge is joined to its neighbour there, lets the run through"
    )]
    Unproved {
        /// The patch.
        patch: String,
        /// The patch's own parameters.
        u: f64,
        /// The patch's own parameters.
        v: f64,
        /// The place.
        x: f64,
        /// The place.
        y: f64,
        /// The place.
        z: f64,
        /// What could be proved.
        proved: f64,
        /// What was asked.
        chord: f64,
    },
    /// Refinement ended within the chord, but not within the other limits.
    #[error(
        "patch `{patch}` at (u, v) = ({u:.6}, {v:.6}): a triangle could not be brought within the normal angle and the largest edge asked for; the normal may jump there - larger limits let the run through"
    )]
    Shape {
        /// The patch.
        patch: String,
        /// The patch's own parameters.
        u: f64,
        /// The patch's own parameters.
        v: f64,
    },
}

/// The filled pieces of a set.
#[derive(Debug)]
pub struct Tessellation {
    /// One entry a piece, in the set's order; `None` where the piece was not
    /// asked for.
    pub pieces: Vec<Option<Filled>>,
}

/// Fills every piece for which `wanted` holds with triangles proved to be
/// within the limits.
///
/// # Errors
/// [`TessellationError`] names the first piece, in the set's order, that could
/// not be proved.
pub fn tessellate(
    set: &PatchSet,
    topology: &Topology,
    samples: &Samples,
    limits: &Limits,
    wanted: impl Fn(PieceId) -> bool + Sync,
) -> Result<Tessellation, TessellationError> {
    tessellate_telling(set, topology, samples, limits, wanted, |_, _| ())
}

/// As [`tessellate`]; `done` is told each piece as it is filled, in any order.
///
/// # Errors
/// As [`tessellate`].
pub(crate) fn tessellate_telling(
    set: &PatchSet,
    topology: &Topology,
    samples: &Samples,
    limits: &Limits,
    wanted: impl Fn(PieceId) -> bool + Sync,
    done: impl Fn(PieceId, &Filled) + Sync,
) -> Result<Tessellation, TessellationError> {
    let filled: Vec<Result<Option<Filled>, TessellationError>> = (0..set.pieces().len())
        .into_par_iter()
        .map(|index| {
            let id = PieceId::new(index);
            if !wanted(id) {
                return Ok(None);
            }
            let outline = samples.outline(set, topology, id);
            let piece = &set.pieces()[index];
            fill::fill(&piece.surface, &outline, limits)
                .inspect(|filled| done(id, filled))
                .map(Some)
                .map_err(|stuck| {
                    let [u, v] = piece.patch_parameters(stuck.place);
                    let Point { coords } = stuck.point;
                    if stuck.proved <= limits.chord {
                        let patch = set.patch_of(id).name.clone();
                        return TessellationError::Shape { patch, u, v };
                    }
                    TessellationError::Unproved {
                        patch: set.patch_of(id).name.clone(),
                        u,
                        v,
                        x: coords.x,
                        y: coords.y,
                        z: coords.z,
                        proved: stuck.proved,
                        chord: limits.chord,
                    }
                })
        })
        .collect();
    // The first failure in the set's order, whichever thread met its own first.
    let pieces = filled.into_iter().collect::<Result<Vec<_>, _>>()?;
    Ok(Tessellation { pieces })
}
