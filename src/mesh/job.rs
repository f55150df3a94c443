//! The whole way from a patch set to a proved mesh, stage by stage.

use std::time::Instant;

use thiserror::Error;

use super::{Deviation, Mesh};
use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::{Limits, Samples, SamplingError};
use crate::tessellation::{TessellationError, floor, tessellate};
use crate::topology::{EdgeId, Topology, TopologyError};

/// Why no mesh was made.
#[derive(Debug, Error)]
pub enum MeshError {
    /// The edges do not make a topology.
    #[error(transparent)]
    Topology(#[from] TopologyError),
    /// A seam bridges a gap as large as the chord.
    #[error(
        "seam of patch `{first}`, edge {first_side}, and patch `{second}`, edge {second_side}: a gap of up to {gap:.3e} is to be bridged; joined edges must lie closer than the chord tolerance {chord:.3e} - use a smaller gap tolerance, a larger chord, or mend the seam"
    )]
    Gap {
        /// The patch of the master edge.
        first: String,
        /// Its side.
        first_side: crate::bezier::Side,
        /// The other patch.
        second: String,
        /// Its side.
        second_side: crate::bezier::Side,
        /// The proved gap.
        gap: f64,
        /// The chord tolerance.
        chord: f64,
    },
    /// An edge cannot be sampled.
    #[error(transparent)]
    Sampling(#[from] SamplingError),
    /// A triangle cannot be proved.
    #[error(transparent)]
    Tessellation(#[from] TessellationError),
    /// No patch was asked for.
    #[error(
        "no triangles: every patch that was asked for is a point or a line; nothing can be meshed"
    )]
    Empty,
}

/// Wall-clock seconds by stage.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Stages {
    /// Pairing edges into seams.
    pub pairing: f64,
    /// Sampling the seams.
    pub sampling: f64,
    /// Laying out, proving and refining.
    pub tessellation: f64,
    /// Joining pieces, normals, measuring the deviation.
    pub assembly: f64,
}

/// A proved mesh and what is known of it.
#[derive(Debug)]
pub struct Meshed {
    /// Who meets whom.
    pub topology: Topology,
    /// The mesh.
    pub mesh: Mesh,
    /// What was proved and attained.
    pub deviation: Deviation,
    /// How few triangles would do (see [`floor`]).
    pub floor: f64,
    /// Seconds by stage.
    pub seconds: Stages,
}

impl Meshed {
    /// Meshes the pieces for which `wanted` holds; runs along seams are those
    /// of the whole set, so that parts made apart fit together. `stage` is told
    /// the name of each stage as it begins.
    ///
    /// ```
    /// use chordwise::{mesh::Meshed, patch_set::PatchSet, sampling::Limits};
    /// let text = r#"(patches: [(name: "ball", surface: Sphere(radius: 10))])"#;
    /// let set = PatchSet::from_ron(text, "ball.ron")?.set;
    /// let made = Meshed::new(&set, &Limits::new(0.1, None, None), |_| true, |_| ())?;
    /// assert!(made.deviation.proved() <= 0.1);
    /// # Ok::<(), Box<dyn std::error::Error>>(())
    /// ```
    ///
    /// # Errors
    /// [`MeshError`] says which stage failed, where and why.
    pub fn new(
        set: &PatchSet,
        limits: &Limits,
        wanted: impl Fn(PieceId) -> bool + Sync,
        mut stage: impl FnMut(&'static str),
    ) -> Result<Self, MeshError> {
        let mut seconds = Stages::default();
        let mut clock = Instant::now();
        let mut lap = || {
            let passed = clock.elapsed().as_secs_f64();
            clock = Instant::now();
            passed
        };
        stage("pairing edges");
        let topology = Topology::build(set)?;
        bridgeable(set, &topology, limits)?;
        seconds.pairing = lap();
        stage("sampling seams");
        let samples = Samples::new(set, &topology, limits)?;
        seconds.sampling = lap();
        stage("tessellating and proving");
        let filled = tessellate(set, &topology, &samples, limits, &wanted)?;
        seconds.tessellation = lap();
        stage("assembling");
        let mesh = Mesh::assemble(set, &samples, &filled);
        let deviation = Deviation::of(set, &filled, &mesh).filter(|_| !mesh.triangles.is_empty());
        let deviation = deviation.ok_or(MeshError::Empty)?;
        let pieces = set.pieces().iter().enumerate();
        let floor = pieces
            .filter(|(index, _)| wanted(PieceId::new(*index)))
            .map(|(index, piece)| {
                let collapsed =
                    [0, 1, 2, 3].map(|side| topology.edges()[index * 4 + side].collapsed);
                floor(&piece.surface, collapsed, limits.chord)
            })
            .sum();
        seconds.assembly = lap();
        Ok(Self {
            topology,
            mesh,
            deviation,
            floor,
            seconds,
        })
    }
}

/// Joined edges must lie closer together than the chord: nothing could be
/// proved across a wider gap.
fn bridgeable(set: &PatchSet, topology: &Topology, limits: &Limits) -> Result<(), MeshError> {
    for seam in topology.seams() {
        let master = &topology.spans()[seam.spans[0].index()];
        for other in seam.spans.iter().map(|s| &topology.spans()[s.index()]) {
            if other.gap.proved >= limits.chord {
                let name = |edge: EdgeId| set.patch_of(edge.piece()).name.clone();
                return Err(MeshError::Gap {
                    first: name(master.edge),
                    first_side: master.edge.side(),
                    second: name(other.edge),
                    second_side: other.edge.side(),
                    gap: other.gap.proved,
                    chord: limits.chord,
                });
            }
        }
    }
    Ok(())
}
