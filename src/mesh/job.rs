//! The whole way from a patch set to a proved mesh, stage by stage.

use std::ops::Range;
use std::time::Instant;

use thiserror::Error;

use super::budget::as_float;
use super::least::{least, whole_floor};
use super::prediction::{Prediction, sizes};
use super::rough::Size;
use super::{Budget, Deviation, Mesh};
use crate::pace;
use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::{Limits, Samples, SamplingError};
use crate::tessellation::{Filled, Tessellation, TessellationError, tessellate_telling};
use crate::topology::{EdgeId, Topology, TopologyError};

/// A mesh has at most this many triangles for the size of its pieces, as far as
/// has been seen: a size below the limits by so much needs no closer look.
const BEYOND_DOUBT: f64 = 8.0;

/// Pieces are filled in batches of about this size together, and the triangles
/// counted in between: so a run that takes many more than was predicted ends
/// soon after its limit.
pub(super) const BATCH: f64 = 1e6;

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
    /// Proving, where that is a stage of its own: sized meshes.
    pub proof: f64,
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
    /// How few triangles would do (see [`crate::tessellation::floor`]).
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
        let held = |triangles: f64, _: &[Size]| triangles;
        let ready = Ready::new(set, limits, budget, &wanted, (evidence, held), &mut stage)?;
        let mut seconds = ready.seconds;
        stage("tessellating and proving");
        let mut clock = Instant::now();
        let mut filled = Tessellation {
            pieces: Vec::with_capacity(ready.sizes.len()),
        };
        ready.fill((set, limits, budget), &wanted, BATCH, |batch, made| {
            let made = made.pieces.into_iter().skip(batch.start).take(batch.len());
            filled.pieces.extend(made);
            Ok::<(), MeshError>(())
        })?;
        seconds.tessellation = lap(&mut clock);
        stage("assembling");
        let mesh = Mesh::assemble(set, &ready.samples, &filled, evidence);
        let deviation = Deviation::of(set, &filled, &mesh).filter(|_| !mesh.triangles.is_empty());
        let deviation = deviation.ok_or(MeshError::Empty)?;
        seconds.assembly = lap(&mut clock);
        Ok(Self {
            topology: ready.topology,
            mesh,
            deviation,
            floor: ready.floor,
            seconds,
        })
    }
}

/// Seconds since the clock was looked at last.
fn lap(clock: &mut Instant) -> f64 {
    let passed = clock.elapsed().as_secs_f64();
    *clock = Instant::now();
    passed
}

/// All that stands before the first triangle: edges paired, the budget looked at,
/// seams sampled.
pub(super) struct Ready {
    pub(super) topology: Topology,
    pub(super) samples: Samples,
    pub(super) floor: f64,
    pub(super) sizes: Vec<Size>,
    pub(super) seconds: Stages,
}

impl Ready {
    /// Gets ready. `held` says how many of so many triangles are in memory at a
    /// time, for pieces of these sizes.
    pub(super) fn new(
        set: &PatchSet,
        limits: &Limits,
        budget: &Budget,
        wanted: &(impl Fn(PieceId) -> bool + Sync),
        (evidence, held): (bool, impl Fn(f64, &[Size]) -> f64),
        stage: &mut impl FnMut(&'static str),
    ) -> Result<Self, MeshError> {
        let mut seconds = Stages::default();
        let mut clock = Instant::now();
        stage("pairing edges");
        let topology = Topology::build(set)?;
        bridgeable(set, &topology, limits)?;
        seconds.pairing = lap(&mut clock);
        let floor = whole_floor(set, &topology, limits, wanted);
        let least = floor.max(least(set, limits, wanted));
        if least.is_nan() || least > budget.triangles() {
            return Err(MeshError::TooMany {
                predicted: least,
                least: true,
                most: budget.triangles(),
            });
        }
        let sizes = sizes(set, &topology, limits, wanted);
        let total: f64 = BEYOND_DOUBT * sizes.iter().map(|size| size.whole()).sum::<f64>();
        let bytes = |triangles: f64| {
            Budget::predicted_bytes(held(triangles, &sizes), set.pieces().len(), evidence)
        };
        if total > budget.triangles() || bytes(total) > budget.bytes() {
            stage("predicting");
            let mut prediction = Prediction::of(set, &topology, limits, wanted, evidence)?;
            prediction.memory = bytes(prediction.triangles());
            prediction.affordable(budget)?;
        }
        stage("sampling seams");
        let samples = Samples::new(set, &topology, limits)?;
        seconds.sampling = lap(&mut clock);
        Ok(Self {
            topology,
            samples,
            floor,
            sizes,
            seconds,
        })
    }

    /// Fills all pieces for which `wanted` holds, in batches of about so much size,
    /// and counts; `take` is given each batch, in order.
    pub(super) fn fill<E: From<MeshError>>(
        &self,
        (set, limits, budget): (&PatchSet, &Limits, &Budget),
        wanted: &(impl Fn(PieceId) -> bool + Sync),
        batch: f64,
        mut take: impl FnMut(Range<usize>, Tessellation) -> Result<(), E>,
    ) -> Result<(), E> {
        // Time left goes by the sizes of pieces; what is counted is triangles.
        let share = |size: &Size| whole_number(size.whole());
        pace::expect(self.sizes.iter().map(share).sum(), "triangles");
        let done = |piece: PieceId, filled: &Filled| {
            let size = &self.sizes[piece.index()];
            pace::advance(share(size), filled.triangles.len() as u64);
        };
        let mut made = 0;
        for batch in batches(&self.sizes, batch) {
            let within = |piece: PieceId| batch.contains(&piece.index()) && wanted(piece);
            let (topology, samples) = (&self.topology, &self.samples);
            let filled = tessellate_telling(set, topology, samples, limits, within, done)
                .map_err(MeshError::from)?;
            let pieces = filled.pieces[batch.clone()].iter().flatten();
            made += pieces.map(|p| p.triangles.len() as u64).sum::<u64>();
            if made > budget.triangles {
                return Err(E::from(MeshError::TooMany {
                    predicted: as_float(made),
                    least: true,
                    most: budget.triangles(),
                }));
            }
            take(batch, filled)?;
        }
        Ok(())
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

/// Pieces in batches of about this size together, in order.
pub(super) fn batches(sizes: &[Size], most: f64) -> Vec<Range<usize>> {
    let mut found = Vec::new();
    let mut start = 0;
    while start < sizes.len() {
        let mut size = 0.0;
        let count = sizes[start..].iter().take_while(|own| {
            size += own.whole();
            size <= most
        });
        let end = start + count.count().max(1);
        found.push(start..end);
        start = end;
    }
    found
}

/// Joined edges must lie closer together than the chord: nothing could be
/// proved across a wider gap.
pub(crate) fn bridgeable(
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
