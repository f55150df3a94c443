//! What a run will come to, found without running it.
//!
//! Some pieces are meshed, chosen by size (see `rough`), and the others taken
//! to have as many triangles for their size. Where even these would be many,
//! they are meshed at the coarser chords e 4^k and e 4^(k + 1), with edges and
//! angles to match: from these two follows how much triangles inside and at
//! borders count, whose number grows with 1 / e and with 1 / sqrt e. Small sets are meshed whole; then the figures are exact. Nothing
//! is set aside in proportion to what is predicted.

use std::time::Instant;

use rayon::prelude::*;

use super::budget::{Budget, as_float};
use super::job::bridgeable;
use super::rough::{Size, chosen, rough};
use super::{Mesh, MeshError};
use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::{Limits, Samples};
use crate::scalar::Vector;
use crate::tessellation::{Filled, Tessellation, tessellate};
use crate::topology::{Seam, Topology};

/// Pieces meshed for a prediction: enough that a spread of a half in triangles
/// over size leaves a fourteenth.
const PIECES: usize = 48;

/// The size of all of them together, by which the chord is chosen.
const SIZE: f64 = 40_000.0;

/// The size of the whole set up to which its seams are sampled.
const SEAMS: f64 = 2e7;

/// Levels tried: the chord is 10^12 times as coarse then, beyond any set.
const COARSEST: i32 = 20;

/// What a run is predicted to come to.
#[derive(Debug)]
pub struct Prediction {
    /// Triangles of every patch, in the set's order; zero where not wanted.
    pub patches: Vec<f64>,
    /// Geometric points.
    pub points: f64,
    /// Vertices: points with one normal.
    pub vertices: f64,
    /// Points with one normal in one panel.
    pub panel_vertices: f64,
    /// Peak memory, bytes.
    pub memory: f64,
    /// Wall-clock seconds of pairing, sampling, tessellating.
    pub seconds: f64,
    /// Whether all was meshed that was asked for: then `sample` is the mesh.
    pub exact: bool,
    /// The mesh of the pieces that were looked at, perhaps a coarser one.
    pub sample: Mesh,
}

/// A mesh of some pieces at a chord coarser than asked for.
struct Trial {
    samples: Samples,
    filled: Tessellation,
    /// Triangles over size by piece.
    ratios: Vec<Option<f64>>,
    /// Triangles, and the sizes, of all of them.
    triangles: f64,
    sizes: Size,
    seconds: f64,
}

impl Prediction {
    /// Predicts what [`Meshed::within`](super::Meshed::within) would make, from
    /// the set on. `stage` is told the name of each stage as it begins.
    ///
    /// # Errors
    /// [`MeshError`] where it is known to fail, whatever the budget.
    pub fn new(
        set: &PatchSet,
        limits: &Limits,
        wanted: impl Fn(PieceId) -> bool + Sync,
        evidence: bool,
        mut stage: impl FnMut(&'static str),
    ) -> Result<Self, MeshError> {
        stage("pairing edges");
        let clock = Instant::now();
        let topology = Topology::build(set)?;
        bridgeable(set, &topology, limits)?;
        let pairing = clock.elapsed().as_secs_f64();
        stage("predicting");
        let mut prediction = Self::of(set, &topology, limits, wanted, evidence)?;
        prediction.seconds += pairing;
        if prediction.triangles() > 0.0 {
            Ok(prediction)
        } else {
            Err(MeshError::Empty)
        }
    }

    /// Whether the budget allows it.
    ///
    /// # Errors
    /// [`MeshError::TooMany`] or [`MeshError::Memory`].
    pub fn affordable(&self, budget: &Budget) -> Result<(), MeshError> {
        let triangles = self.triangles();
        if triangles.is_nan() || triangles > budget.triangles() {
            return Err(MeshError::TooMany {
                predicted: triangles,
                least: false,
                most: budget.triangles(),
            });
        }
        if self.memory > budget.bytes() {
            return Err(MeshError::Memory {
                triangles,
                bytes: self.memory,
                most: budget.bytes(),
            });
        }
        Ok(())
    }

    /// Predicts the mesh of the pieces for which `wanted` holds.
    ///
    /// # Errors
    /// [`MeshError`] where the pieces that are looked at cannot be meshed.
    pub(super) fn of(
        set: &PatchSet,
        topology: &Topology,
        limits: &Limits,
        wanted: impl Fn(PieceId) -> bool + Sync,
        evidence: bool,
    ) -> Result<Self, MeshError> {
        let clock = Instant::now();
        let sized = sizes(set, topology, limits, &wanted);
        let sizes: Vec<f64> = sized.iter().map(|size| size.whole()).collect();
        let looked_at = chosen(&sizes, PIECES);
        let count = sizes.iter().filter(|size| **size > 0.0).count();
        let total: f64 = sizes.iter().sum();
        let of_these: f64 = (sizes.iter().zip(&looked_at))
            .map(|(size, chosen)| if *chosen { *size } else { 0.0 })
            .sum();
        // Sizes fall at least by half a level, and mostly to a quarter.
        let mut level = 0;
        while level < COARSEST
            && (of_these / 4.0_f64.powi(level) > SIZE || total / 4.0_f64.powi(level) > SEAMS)
        {
            level += 1;
        }
        let at = |level| trial(set, topology, limits, &looked_at, level);
        let near = at(level)?;
        let carried_on = match level {
            0 => 1.0,
            _ => carried_on(&near, &at(level + 1)?, &sized, &looked_at),
        };
        // Pieces so large that they had to be chosen speak for themselves only.
        let step = total / as_float(PIECES as u64);
        let common: Vec<f64> = (0..sizes.len())
            .filter(|&piece| sizes[piece] < step || count <= PIECES)
            .filter_map(|piece| near.ratios[piece])
            .collect();
        let mean = common.iter().sum::<f64>() / as_float(common.len().max(1) as u64);
        let of_piece =
            |piece: usize| sizes[piece] * carried_on * near.ratios[piece].unwrap_or(mean);
        let patches: Vec<f64> = set
            .patches()
            .iter()
            .map(|patch| patch.pieces.clone().map(of_piece).sum())
            .collect();
        let triangles: f64 = patches.iter().sum();
        let borders = Borders::of(set, topology, &near.samples, &wanted, level);
        let inner = (0.5 * (triangles - borders.sides)).max(0.0);
        let sample = Mesh::assemble(set, &near.samples, &near.filled, evidence);
        let exact = level == 0 && count <= PIECES;
        let made = as_float(sample.triangles.len() as u64);
        let outside = clock.elapsed().as_secs_f64() - near.seconds;
        let vertices = |border: f64, own: usize| {
            if exact {
                as_float(own as u64)
            } else {
                border + inner
            }
        };
        Ok(Self {
            points: vertices(borders.points, sample.points.len()),
            vertices: vertices(borders.vertices, sample.vertices.len()),
            panel_vertices: borders.panel_vertices + inner,
            memory: Budget::predicted_bytes(triangles, set.pieces().len(), evidence),
            seconds: outside + near.seconds * triangles / made.max(1.0),
            exact,
            patches,
            sample,
        })
    }

    /// Triangles in all.
    #[must_use]
    pub fn triangles(&self) -> f64 {
        self.patches.iter().sum()
    }
}

/// The size of every piece, zero where it is not wanted.
pub(super) fn sizes(
    set: &PatchSet,
    topology: &Topology,
    limits: &Limits,
    wanted: &(impl Fn(PieceId) -> bool + Sync),
) -> Vec<Size> {
    (0..set.pieces().len())
        .into_par_iter()
        .map(|index| {
            if !wanted(PieceId::new(index)) {
                return Size::default();
            }
            let collapsed = [0, 1, 2, 3].map(|side| topology.edges()[index * 4 + side].collapsed);
            rough(&set.pieces()[index].surface, collapsed, limits)
        })
        .collect()
}

/// Four times the chord lets triangles be twice as large.
fn coarser(limits: &Limits, level: i32) -> Limits {
    let twice = 2.0_f64.powi(level);
    let coarse = Limits::new(
        limits.chord * twice * twice,
        limits
            .normal_rad
            .map(|angle| (angle * twice).min(std::f64::consts::PI)),
        limits.max_edge.map(|edge| edge * twice),
    );
    Limits {
        thin: limits.thin,
        ..coarse
    }
}

fn trial(
    set: &PatchSet,
    topology: &Topology,
    limits: &Limits,
    looked_at: &[bool],
    level: i32,
) -> Result<Trial, MeshError> {
    let limits = coarser(limits, level);
    let limits = &limits;
    let looked_at = |piece: PieceId| looked_at[piece.index()];
    let samples = Samples::new(set, topology, limits)?;
    let clock = Instant::now();
    let filled = tessellate(set, topology, &samples, limits, looked_at)?;
    let seconds = clock.elapsed().as_secs_f64();
    let sizes = sizes(set, topology, limits, &looked_at);
    let count = |filled: &Filled| as_float(filled.triangles.len() as u64);
    let ratios = (filled.pieces.iter().zip(&sizes))
        .map(|(filled, size)| Some(count(filled.as_ref()?) / size.whole()))
        .collect();
    let triangles = filled.pieces.iter().flatten().map(count).sum();
    Ok(Trial {
        samples,
        filled,
        ratios,
        triangles,
        sizes: sum(sizes.iter()),
        seconds,
    })
}

fn sum<'a>(sizes: impl Iterator<Item = &'a Size>) -> Size {
    sizes.fold(Size::default(), |sum, size| Size {
        inner: sum.inner + size.inner,
        border: sum.border + size.border,
    })
}

/// By what factor triangles over size change from a coarse chord to the one
/// asked for: triangles = x inner + y border, x and y from two coarse chords.
fn carried_on(near: &Trial, far: &Trial, sized: &[Size], looked_at: &[bool]) -> f64 {
    let (a, b) = (near.sizes, far.sizes);
    let determinant = a.inner * b.border - b.inner * a.border;
    if determinant.abs() <= 1e-2 * a.inner * b.border {
        return 1.0;
    }
    let x = (near.triangles * b.border - far.triangles * a.border) / determinant;
    let y = (a.inner * far.triangles - b.inner * near.triangles) / determinant;
    let these = (sized.iter().zip(looked_at)).filter_map(|(size, chosen)| chosen.then_some(size));
    let asked = sum(these);
    let simple = asked.whole() * near.triangles / a.whole();
    // Outside these bounds the fit is of rounding.
    ((x * asked.inner + y * asked.border) / simple).clamp(0.6, 1.4)
}

/// How many vertices seams have, by what counts as one.
#[derive(Debug, Default)]
struct Borders {
    points: f64,
    vertices: f64,
    panel_vertices: f64,
    /// Border vertices less two, piece by piece.
    sides: f64,
}

impl Borders {
    fn of(
        set: &PatchSet,
        topology: &Topology,
        samples: &Samples,
        wanted: &impl Fn(PieceId) -> bool,
        level: i32,
    ) -> Self {
        let mut borders = Self::default();
        let finer = 2.0_f64.powi(level);
        for (seam, run) in topology.seams().iter().zip(samples.runs()) {
            // The node at one end counts with the run: as many nodes as seams,
            // nearly, and half as many in a net of quadrilaterals.
            let inner = as_float(run.points.len() as u64 + 1) * finer - 1.0;
            let (uses, normals, panels) = sides_of(set, topology, seam, wanted);
            let with_nodes = inner + 0.5;
            if uses > 0 {
                borders.points += with_nodes;
                borders.vertices += with_nodes * as_float(normals);
                borders.panel_vertices += with_nodes * as_float(panels);
                borders.sides += (inner + 1.0) * as_float(uses);
            }
        }
        let pieces = (0..set.pieces().len())
            .filter(|&p| wanted(PieceId::new(p)))
            .count();
        borders.sides -= 2.0 * as_float(pieces as u64);
        borders
    }
}

/// How many wanted pieces use a seam, how many different normals they have in
/// its middle, and how many different panels and normals.
fn sides_of(
    set: &PatchSet,
    topology: &Topology,
    seam: &Seam,
    wanted: &impl Fn(PieceId) -> bool,
) -> (u64, u64, u64) {
    let smooth = set.tolerances().tangent_deg.get().to_radians().cos();
    let mut seen: Vec<(usize, Vector)> = Vec::new();
    let (mut uses, mut normals, mut panels) = (0, 0, 0);
    for span in seam.spans.iter().map(|s| &topology.spans()[s.index()]) {
        let piece = span.edge.piece();
        if !wanted(piece) {
            continue;
        }
        let patch = set.patch_of(piece);
        let [u, v] = span.edge.side().at(0.5 * (span.t[0] + span.t[1]));
        let normal = set.pieces()[piece.index()].surface.normal(u, v);
        let outward = if patch.flipped { -1.0 } else { 1.0 };
        let normal = normal.map_or_else(Vector::zeros, |n| n * outward);
        let agrees = |other: &Vector| other.dot(&normal) >= smooth;
        uses += 1;
        normals += u64::from(!seen.iter().any(|(_, n)| agrees(n)));
        panels += u64::from(
            !seen
                .iter()
                .any(|(p, n)| *p == patch.panel.index() && agrees(n)),
        );
        seen.push((patch.panel.index(), normal));
    }
    (uses, normals, panels)
}
