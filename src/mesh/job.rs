//! The whole way from a patch set to a proved mesh, stage by stage.

use std::ops::Range;
use std::time::Instant;

use rayon::prelude::*;
use thiserror::Error;

use super::budget::as_float;
use super::prediction::{Prediction, sizes};
use super::rough::Size;
use super::{Budget, Deviation, Mesh};
use crate::pace;
use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::{Limits, Samples, SamplingError};
use crate::tessellation::{Filled, Tessellation, TessellationError, floor, tessellate_telling};
use crate::topology::{EdgeId, Topology, TopologyError};

/// A mesh has at most this many triangles for the size of its pieces, as far as
/// has been seen: a size below the limits by so much needs no closer look.
const BEYOND_DOUBT: f64 = 8.0;

/// Pieces are filled in batches of about this size together, and the triangles
/// counted in between: so a run that takes many more than was predicted ends
/// soon after its limit.
const BATCH: f64 = 1e6;

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
    /// More triangles than are allowed.
    #[error(
        "mesh: {} {predicted:.1e} triangles are needed; at most {most:.1e} are to be made - a larger chord, normal angle or edge, fewer panels, or a higher --max-triangles lets the run through",
        if *.least { "more than" } else { "about" }
    )]
    TooMany {
        /// How many are needed: sampled.
        predicted: f64,
        /// Whether that is how few would do at best, and not a prediction.
        least: bool,
        /// How many are allowed.
        most: f64,
    },
    /// More memory than is allowed.
    #[error(
        "mesh: {triangles:.1e} triangles are predicted, which take about {} of memory; at most {} are to be taken - a larger chord, normal angle or edge, fewer panels, or a higher --max-memory lets the run through",
        size(*bytes),
        size(*most)
    )]
    Memory {
        /// How many triangles are predicted.
        triangles: f64,
        /// What they take, bytes.
        bytes: f64,
        /// What is allowed, bytes.
        most: f64,
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

/// Bytes in the unit that suits them.
fn size(bytes: f64) -> String {
    if bytes < 1e9 {
        format!("{:.0} MB", bytes / 1e6)
    } else {
        format!("{:.1} GB", bytes / 1e9)
    }
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
        stage: impl FnMut(&'static str),
    ) -> Result<Self, MeshError> {
        Self::within(set, limits, &Budget::default(), wanted, false, stage)
    }

    /// As [`Meshed::new`], and the mesh keeps the parameters of every corner
    /// (see [`Mesh::evidence`]).
    ///
    /// # Errors
    /// [`MeshError`] says which stage failed, where and why.
    pub fn with_evidence(
        set: &PatchSet,
        limits: &Limits,
        wanted: impl Fn(PieceId) -> bool + Sync,
        stage: impl FnMut(&'static str),
    ) -> Result<Self, MeshError> {
        Self::within(set, limits, &Budget::default(), wanted, true, stage)
    }

    /// As [`Meshed::new`], within a budget of one's own, with or without the
    /// parameters of every corner.
    ///
    /// # Errors
    /// [`MeshError`] says which stage failed, where and why, or that more would
    /// be taken than the budget allows.
    pub fn within(
        set: &PatchSet,
        limits: &Limits,
        budget: &Budget,
        wanted: impl Fn(PieceId) -> bool + Sync,
        evidence: bool,
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
        let floor = whole_floor(set, &topology, limits, &wanted);
        let least = floor.max(least(set, limits, &wanted));
        if least.is_nan() || least > budget.triangles() {
            return Err(MeshError::TooMany {
                predicted: least,
                least: true,
                most: budget.triangles(),
            });
        }
        let sizes = sizes(set, &topology, limits, &wanted);
        let total: f64 = BEYOND_DOUBT * sizes.iter().map(|size| size.whole()).sum::<f64>();
        let taken = Budget::predicted_bytes(total, set.pieces().len(), evidence);
        if total > budget.triangles() || taken > budget.bytes() {
            stage("predicting");
            Prediction::of(set, &topology, limits, &wanted, evidence)?.affordable(budget)?;
        }
        stage("sampling seams");
        let samples = Samples::new(set, &topology, limits)?;
        seconds.sampling = lap();
        stage("tessellating and proving");
        // Time left goes by the sizes of pieces; what is counted is triangles.
        let share = |size: &Size| whole_number(size.whole());
        pace::expect(sizes.iter().map(share).sum(), "triangles");
        let done = |piece: PieceId, filled: &Filled| {
            pace::advance(share(&sizes[piece.index()]), filled.triangles.len() as u64);
        };
        let filled = batches(
            &sizes,
            |batch| {
                let within = |piece: PieceId| batch.contains(&piece.index()) && wanted(piece);
                tessellate_telling(set, &topology, &samples, limits, within, done)
            },
            budget,
        )?;
        seconds.tessellation = lap();
        stage("assembling");
        let mesh = Mesh::assemble(set, &samples, &filled, evidence);
        let deviation = Deviation::of(set, &filled, &mesh).filter(|_| !mesh.triangles.is_empty());
        let deviation = deviation.ok_or(MeshError::Empty)?;
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

/// A size in whole triangles, for telling how far the work has come.
#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "sizes are positive, and the cast saturates"
)]
fn whole_number(size: f64) -> u64 {
    size as u64
}

/// Fills all pieces, batch by batch, and counts.
fn batches(
    sizes: &[Size],
    fill: impl Fn(Range<usize>) -> Result<Tessellation, TessellationError>,
    budget: &Budget,
) -> Result<Tessellation, MeshError> {
    let mut pieces = Vec::with_capacity(sizes.len());
    let mut made = 0;
    while pieces.len() < sizes.len() {
        let start = pieces.len();
        let mut size = 0.0;
        let count = sizes[start..].iter().take_while(|own| {
            size += own.whole();
            size <= BATCH
        });
        let batch = start..start + count.count().max(1);
        let filled = fill(batch.clone())?;
        let filled = filled.pieces.into_iter().skip(start).take(batch.len());
        pieces.extend(filled.inspect(|piece| {
            made += piece
                .as_ref()
                .map_or(0, |piece| piece.triangles.len() as u64);
        }));
        if made > budget.triangles {
            return Err(MeshError::TooMany {
                predicted: as_float(made),
                least: true,
                most: budget.triangles(),
            });
        }
    }
    Ok(Tessellation { pieces })
}

/// The floor of all pieces for which `wanted` holds.
fn whole_floor(
    set: &PatchSet,
    topology: &Topology,
    limits: &Limits,
    wanted: &(impl Fn(PieceId) -> bool + Sync),
) -> f64 {
    let pieces = set.pieces().par_iter().enumerate();
    let floors: Vec<f64> = pieces
        .filter(|(index, _)| wanted(PieceId::new(*index)))
        .map(|(index, piece)| {
            let collapsed = [0, 1, 2, 3].map(|side| topology.edges()[index * 4 + side].collapsed);
            floor(&piece.surface, collapsed, limits.chord)
        })
        .collect();
    // Added in order, whatever the threads did.
    floors.iter().sum()
}

/// How few triangles would do for the largest edge and the normal angle, where
/// these are asked for: areas on the surfaces and on the sphere of normals, over
/// that of the equilateral triangle with such edges. Sampled.
fn least(set: &PatchSet, limits: &Limits, wanted: &impl Fn(PieceId) -> bool) -> f64 {
    const PLACES: [f64; 4] = [0.125, 0.375, 0.625, 0.875];
    let largest = |edge: Option<f64>| edge.map(|e| 3.0_f64.sqrt() / 4.0 * e * e);
    let (flat, turned) = (largest(limits.max_edge), largest(limits.normal_rad));
    if flat.is_none() && turned.is_none() {
        return 0.0;
    }
    let (mut area, mut image) = (0.0, 0.0);
    for (index, piece) in set.pieces().iter().enumerate() {
        if !wanted(PieceId::new(index)) {
            continue;
        }
        for (u, v) in PLACES.iter().flat_map(|u| PLACES.map(|v| (*u, v))) {
            let jet = piece.surface.jet(u, v);
            let part = jet.cross().norm() / 16.0;
            area += part;
            image += part * jet.gaussian_and_mean().map_or(0.0, |(k, _)| k.abs());
        }
    }
    flat.map_or(0.0, |most| area / most)
        .max(turned.map_or(0.0, |most| image / most))
}

/// Joined edges must lie closer together than the chord: nothing could be
/// proved across a wider gap.
pub(super) fn bridgeable(
    set: &PatchSet,
    topology: &Topology,
    limits: &Limits,
) -> Result<(), MeshError> {
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
