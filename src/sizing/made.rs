//! A sized mesh, made and proved.

use std::time::Instant;

use super::Sizing;
use super::assemble::assemble;
use super::atlas::{Atlas, Place};
use super::field::Source;
use super::figures::Figures;
use super::job::make;
use super::kept::Seams;
use super::request::SizingError;
use crate::mesh::{
    Budget, Deviation, MeshError, Meshed, Spot, Stages, Wide, bridgeable, whole_floor,
};
use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::Limits;
use crate::scalar::Bracket;
use crate::topology::Topology;

/// How often sizes are lowered where the chord was not proved.
const ROUNDS: usize = 6;

/// Sizes are lowered to what the proved figure asks for, less this.
const AGAIN: f64 = 0.93;

/// A mesh by size and shape, and what is known of it.
#[derive(Debug)]
pub struct SizedMesh {
    /// The mesh, its deviation and topology, as for other meshes.
    pub meshed: Meshed,
    /// The place of every corner of every triangle.
    pub spots: Vec<[Spot; 3]>,
    /// Proved deviation of every triangle, both ways.
    pub by_triangle: Vec<f64>,
    /// The size asked for at every point.
    pub sizes: Vec<f64>,
    /// Shape and size.
    pub figures: Figures,
    /// How often it was meshed until the chord was proved.
    pub rounds: usize,
}

impl SizedMesh {
    /// Meshes the pieces for which `wanted` holds.
    ///
    /// ```
    /// use chordwise::{patch_set::PatchSet, sizing::{SizedMesh, Sizing}};
    /// let text = r#"(patches: [(name: "ball", surface: Sphere(radius: 10))])"#;
    /// let set = PatchSet::from_ron(text, "ball.ron")?.set;
    /// let made = SizedMesh::new(&set, &Sizing::new(1.0), |_| true, |_| ())?;
    /// assert!(made.figures.smallest_deg > 20.0);
    /// # Ok::<(), Box<dyn std::error::Error>>(())
    /// ```
    ///
    /// # Errors
    /// [`SizingError`] says what was asked for in vain, where and why.
    pub fn new(
        set: &PatchSet,
        sizing: &Sizing,
        wanted: impl Fn(PieceId) -> bool + Sync,
        stage: impl FnMut(&'static str),
    ) -> Result<Self, SizingError> {
        Self::within(set, sizing, &Budget::default(), (wanted, false), stage)
    }

    /// As [`SizedMesh::new`], within a budget of one's own, with or without the
    /// places of corners kept in the mesh.
    ///
    /// # Errors
    /// [`SizingError`] says what was asked for in vain, where and why.
    pub fn within(
        set: &PatchSet,
        sizing: &Sizing,
        budget: &Budget,
        (wanted, evidence): (impl Fn(PieceId) -> bool + Sync, bool),
        mut stage: impl FnMut(&'static str),
    ) -> Result<Self, SizingError> {
        let sizing = sizing.checked()?;
        let mut seconds = Stages::default();
        let mut clock = Instant::now();
        stage("pairing edges");
        let topology = Topology::build(set)?;
        let chord = sizing.chord.unwrap_or(f64::INFINITY);
        bridgeable(set, &topology, &Limits::new(chord, None, None))?;
        seconds.pairing = lap(&mut clock);
        stage("finding kept edges");
        let seams = Seams::of(set, &topology);
        seconds.sampling = lap(&mut clock);
        let present: Vec<bool> = (0..set.pieces().len())
            .map(|piece| wanted(PieceId::new(piece)) && !is_point(&topology, piece))
            .collect();
        let mut sources: Vec<Source> = Vec::new();
        let atlas = Atlas {
            set,
            topology: &topology,
            seams: &seams,
        };
        let mut rounds = 0;
        loop {
            rounds += 1;
            stage("meshing by size");
            let made = make(&atlas, &sizing, budget, &mut sources, &wanted)?;
            seconds.tessellation += lap(&mut clock);
            let assembled = assemble(&atlas, &made, evidence);
            if assembled.mesh.triangles.is_empty() {
                return Err(MeshError::Empty.into());
            }
            seconds.assembly += lap(&mut clock);
            stage("proving");
            let mesh = &assembled.mesh;
            let triangles: Vec<[u32; 3]> = (0..mesh.triangles.len())
                .map(|t| mesh.triangle_points(t))
                .collect();
            let wide = Wide::of(
                set,
                &topology,
                (&mesh.points, &triangles, &assembled.spots),
                &present,
                chord,
            );
            seconds.proof += lap(&mut clock);
            if let Some((spot, proved)) = worst(&wide.over) {
                // Where the smallest edge rules nothing can be lowered.
                let stuck = wide
                    .over
                    .iter()
                    .any(|(spot, _)| made.field.is_least(place(*spot)));
                if rounds >= ROUNDS || stuck {
                    let piece = &set.pieces()[spot.piece.index()];
                    let [u, v] = piece.patch_parameters(spot.uv);
                    return Err(SizingError::Unproved {
                        patch: set.patch_of(spot.piece).name.clone(),
                        u,
                        v,
                        proved,
                        rounds,
                        chord,
                    });
                }
                lower(&made.field, &wide.over, chord, &mut sources);
                continue;
            }
            let figures = Figures::of(&made, &assembled, &sizing);
            let deviation = deviation(set, &wide, &assembled.mesh)?;
            let limits = Limits::new(deviation.proved(), None, None);
            let floor = whole_floor(set, &topology, &limits, &wanted);
            seconds.assembly += lap(&mut clock);
            let mut sizes = vec![f64::INFINITY; assembled.mesh.points.len()];
            for (points, spots) in triangles.iter().zip(&assembled.spots) {
                for (point, spot) in points.iter().zip(spots) {
                    let size = &mut sizes[*point as usize];
                    *size = size.min(made.field.at(place(*spot)));
                }
            }
            let (mesh, spots) = (assembled.mesh, assembled.spots);
            return Ok(Self {
                meshed: Meshed {
                    topology: topology.clone(),
                    mesh,
                    deviation,
                    floor,
                    seconds,
                },
                spots,
                sizes,
                by_triangle: wide.by_triangle,
                figures,
                rounds,
            });
        }
    }
}

fn place(spot: Spot) -> Place {
    Place {
        piece: u32::try_from(spot.piece.index()).expect("pieces are counted in u32"),
        uv: spot.uv,
    }
}

fn lap(clock: &mut Instant) -> f64 {
    let passed = clock.elapsed().as_secs_f64();
    *clock = Instant::now();
    passed
}

/// Whether all sides of a piece are one point.
fn is_point(topology: &Topology, piece: usize) -> bool {
    topology.edges()[4 * piece..4 * piece + 4]
        .iter()
        .all(|edge| edge.collapsed)
}

fn worst(over: &[(Spot, f64)]) -> Option<(Spot, f64)> {
    over.iter()
        .copied()
        .fold(None, |best: Option<(Spot, f64)>, of| match best {
            Some(best) if best.1 >= of.1 => Some(best),
            _ => Some(of),
        })
}

/// Asks for smaller edges where the chord was not proved: deviations go with the
/// square of the size.
fn lower(field: &super::field::Field, over: &[(Spot, f64)], chord: f64, sources: &mut Vec<Source>) {
    for (spot, proved) in over {
        let place = place(*spot);
        let part = (AGAIN * (chord / proved).sqrt()).max(0.4);
        sources.push(Source {
            place,
            h: field.at(place) * part,
        });
    }
}

/// How many of the worst points are measured against the whole mesh.
const CANDIDATES: usize = 8;

fn deviation(
    set: &PatchSet,
    wide: &Wide,
    mesh: &crate::mesh::Mesh,
) -> Result<Deviation, SizingError> {
    let mut peaks = wide.peaks.clone();
    peaks.sort_by(|a, b| {
        b.distance
            .total_cmp(&a.distance)
            .then(a.spot.piece.cmp(&b.spot.piece))
    });
    let mut best: Option<(f64, crate::mesh::Peak)> = None;
    for peak in peaks.into_iter().take(CANDIDATES) {
        if best.as_ref().is_some_and(|b| b.0 >= peak.distance) {
            break;
        }
        let distance = mesh.distance(&peak.point);
        if best.as_ref().is_none_or(|b| distance > b.0) {
            best = Some((distance, peak));
        }
    }
    let (attained, peak) = best.ok_or(MeshError::Empty)?;
    let [u, v] = set.pieces()[peak.spot.piece.index()].patch_parameters(peak.spot.uv);
    Ok(Deviation {
        to_mesh: Bracket {
            proved: wide.to_mesh,
            attained,
        },
        to_surface: wide.to_surface,
        patch: set.patch_of(peak.spot.piece).name.clone(),
        u,
        v,
        point: peak.point,
    })
}
