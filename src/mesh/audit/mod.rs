//! An independent proof of a mesh: from the mesh with its evidence, and the
//! set, alone.
//!
//! Nothing here comes from the rooms that made the mesh (`sampling`,
//! `tessellation`): only the kernel, the set, and the pairing of its edges are
//! shared. The bounds are other ones, too. What is checked:
//!
//! - every corner lies on its patch at its (u, v): within rounding, on borders
//!   within the gap over which edges are joined (`corner`);
//! - the triangles of each patch cover its parameters exactly once (`cover`);
//! - surface and mesh are within the chord tolerance of each other, both ways
//!   (`proof`, over the flat triangles of `facet`);
//! - the mesh is open only where the set is, no triangle is there twice or
//!   turned over (`closed`, `cell`).
//!
//! The proof holds for a mesh without findings; with findings, its figures are
//! those of the triangles that could be placed.

mod cell;
mod closed;
mod corner;
mod cover;
mod evidence;
mod facet;
mod finding;
mod part;
mod proof;
mod rounding;
mod sized;

use rayon::prelude::*;
use thiserror::Error;

pub use evidence::{Evidence, Face};
pub(super) use facet::{to_segment, to_triangle};
pub use finding::{Fault, Finding};
pub(super) use part::quarters;
pub(super) use rounding::slack;

use crate::bezier::Side;
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::{Bracket, LengthUnit, Point, Tolerance};
use crate::topology::{EdgeId, Topology, TopologyError};

/// How many of the worst points are measured against the whole mesh.
const CANDIDATES: usize = 8;

/// How many failing triangles are measured against the whole mesh; further ones
/// are told by what could be proved of them.
const MOST_MEASURED: usize = 200;

/// A mesh that cannot be held against a set at all.
#[derive(Debug, Error)]
pub enum AuditError {
    /// The units differ.
    #[error("mesh: lengths in {mesh}, the set's in {set}; both must have one unit")]
    Unit {
        /// The mesh's unit.
        mesh: LengthUnit,
        /// The set's unit.
        set: LengthUnit,
    },
    /// There is nothing to audit.
    #[error("mesh: no triangles; there is nothing to audit")]
    Empty,
    /// The set's edges do not make a topology.
    #[error(transparent)]
    Topology(#[from] TopologyError),
}

/// The outcome of an audit; lengths in the set's unit.
#[derive(Debug, Clone, PartialEq)]
pub struct Audit {
    /// Triangles in the mesh.
    pub triangles: usize,
    /// Patches of the set that have triangles.
    pub patches: usize,
    /// Patches of the set that have none: left out, or without area.
    pub absent: Vec<String>,
    /// Surface to mesh: proved for all triangles, attained at `worst`.
    pub to_mesh: Bracket,
    /// Mesh to surface: proved for all triangles.
    pub to_surface: f64,
    /// Where `to_mesh.attained` is found.
    pub worst: Option<Worst>,
    /// All that is wrong, in the order of the checks.
    pub findings: Vec<Finding>,
}

/// A place of the surface.
#[derive(Debug, Clone, PartialEq)]
pub struct Worst {
    /// The triangle over which it lies.
    pub triangle: usize,
    /// The patch.
    pub patch: String,
    /// The patch's own parameters.
    pub place: [f64; 2],
    /// The point.
    pub point: Point,
}

impl Audit {
    /// Proves a mesh against its set within a chord tolerance.
    ///
    /// ```
    /// use chordwise::{mesh::{Audit, Evidence, Meshed}, patch_set::PatchSet};
    /// use chordwise::{sampling::Limits, scalar::Tolerance};
    /// let text = r#"(patches: [(name: "ball", surface: Sphere(radius: 10))])"#;
    /// let set = PatchSet::from_ron(text, "ball.ron")?.set;
    /// let made = Meshed::with_evidence(&set, &Limits::new(0.1, None, None), |_| true, |_| ())?;
    /// let evidence = Evidence::of(&made.mesh).expect("asked for");
    /// let audit = Audit::of(&set, &evidence, Tolerance::new(0.1)?)?;
    /// assert!(audit.findings.is_empty() && audit.proved() <= 0.1);
    /// # Ok::<(), Box<dyn std::error::Error>>(())
    /// ```
    ///
    /// # Errors
    /// [`AuditError`] where mesh and set cannot be compared. What is wrong with
    /// the mesh is no error but a [`Finding`].
    pub fn of(set: &PatchSet, evidence: &Evidence, chord: Tolerance) -> Result<Self, AuditError> {
        if evidence.unit != set.unit() {
            return Err(AuditError::Unit {
                mesh: evidence.unit,
                set: set.unit(),
            });
        }
        if evidence.faces.is_empty() {
            return Err(AuditError::Empty);
        }
        let topology = Topology::build(set)?;
        if evidence.is_wide() {
            return Ok(sized::audit(set, &topology, evidence, chord.get()));
        }
        let mut findings = Vec::new();
        let mut cells = cell::cells(set, evidence, &mut findings);
        let mut present = vec![false; set.pieces().len()];
        for cell in &cells {
            present[cell.piece] = true;
        }
        corner::check(set, &topology, evidence, &cells, &mut findings);
        closed::check(set, &topology, evidence, &cells, &present, &mut findings);
        let fills = covered(set, &topology, &cells, &present, &mut findings);
        let faces = cells.len();
        cells.extend(fills);
        let mut audit = Self::found(set, evidence, &present, findings);
        audit.deviation(set, evidence, &cells, faces, chord.get());
        Ok(audit)
    }

    /// What is there and what was found, before anything is measured.
    fn found(
        set: &PatchSet,
        evidence: &Evidence,
        present: &[bool],
        findings: Vec<Finding>,
    ) -> Self {
        let there = |pieces: &std::ops::Range<usize>| present[pieces.clone()].contains(&true);
        let absent = set.patches().iter().filter(|p| !there(&p.pieces));
        let absent: Vec<String> = absent.map(|p| p.name.clone()).collect();
        Self {
            triangles: evidence.faces.len(),
            patches: set.patches().len() - absent.len(),
            absent,
            to_mesh: Bracket::ZERO,
            to_surface: 0.0,
            worst: None,
            findings,
        }
    }

    /// The proved deviation of every triangle, the larger of both directions;
    /// what cannot be placed on its patch is infinite. Findings are not looked
    /// for: this is for a mesh that was proved as it was made.
    ///
    /// # Errors
    /// [`AuditError`] where mesh and set cannot be compared.
    pub fn by_triangle(
        set: &PatchSet,
        evidence: &Evidence,
        chord: Tolerance,
    ) -> Result<Vec<f64>, AuditError> {
        let topology = Topology::build(set)?;
        if evidence.is_wide() {
            return Ok(sized::by_triangle(set, &topology, evidence, chord.get()));
        }
        let mut cells = cell::cells(set, evidence, &mut Vec::new());
        let mut present = vec![false; set.pieces().len()];
        for cell in &cells {
            present[cell.piece] = true;
        }
        let placed = cells.len();
        let fills = covered(set, &topology, &cells, &present, &mut Vec::new());
        cells.extend(fills);
        let figures = proof::Prover::new(set, evidence, &cells, chord.get()).prove();
        let mut proved = vec![f64::INFINITY; evidence.faces.len()];
        for cell in &cells[..placed] {
            proved[cell.face] = 0.0;
        }
        for (cell, of) in cells.iter().zip(&figures) {
            let most = &mut proved[cell.face];
            *most = most.max(of.to_mesh.max(of.to_surface));
        }
        Ok(proved)
    }

    /// The larger proved bound of the two directions.
    #[must_use]
    pub fn proved(&self) -> f64 {
        self.to_mesh.proved.max(self.to_surface)
    }

    fn deviation(
        &mut self,
        set: &PatchSet,
        evidence: &Evidence,
        cells: &[cell::Cell],
        faces: usize,
        chord: f64,
    ) {
        let prover = proof::Prover::new(set, evidence, cells, chord);
        let figures = prover.prove();
        let mut order: Vec<usize> = (0..cells.len()).collect();
        order.sort_by(|&a, &b| {
            let distance = |i: usize| figures[i].peak.distance;
            distance(b).total_cmp(&distance(a)).then(a.cmp(&b))
        });
        let spot = |index: usize| {
            let piece = &set.pieces()[cells[index].piece];
            Worst {
                triangle: cells[index].face,
                patch: set.patches()[piece.patch.index()].name.clone(),
                place: piece.patch_parameters(figures[index].peak.place),
                point: figures[index].peak.point,
            }
        };
        for &index in order.iter().take(CANDIDATES) {
            let near = figures[index].peak;
            if self.worst.is_some() && self.to_mesh.attained >= near.distance {
                break;
            }
            let distance = prover.distance(&near.point);
            if self.worst.is_none() || distance > self.to_mesh.attained {
                self.to_mesh.attained = distance;
                self.worst = Some(spot(index));
            }
        }
        let mut measured = 0;
        for (index, of) in figures.iter().enumerate() {
            self.to_mesh.proved = self.to_mesh.proved.max(of.to_mesh);
            if index < faces {
                self.to_surface = self.to_surface.max(of.to_surface);
            }
            let proved = of.to_mesh.max(of.to_surface);
            if proved > chord {
                // Another part of the mesh may be nearer than what lies about,
                // so what is found is measured again.
                let mut attained = of.peak.distance;
                if attained > chord {
                    attained = if measured < MOST_MEASURED {
                        prover.distance(&of.peak.point)
                    } else {
                        0.0
                    };
                    measured += 1;
                }
                let at = spot(index);
                self.findings.push(Finding {
                    fault: if attained > chord {
                        Fault::Deviates { attained }
                    } else {
                        Fault::Unproved { proved }
                    },
                    triangle: Some(at.triangle),
                    patch: at.patch,
                    place: Some(at.place),
                    point: Some(at.point),
                });
            }
        }
    }
}

/// Checks the cover of every piece of the patches that are present; returns
/// the cells that fill in at poles.
fn covered(
    set: &PatchSet,
    topology: &Topology,
    cells: &[cell::Cell],
    present: &[bool],
    findings: &mut Vec<Finding>,
) -> Vec<cell::Cell> {
    let mut of_piece: Vec<Vec<(usize, &cell::Cell)>> = vec![Vec::new(); set.pieces().len()];
    for (index, cell) in cells.iter().enumerate() {
        of_piece[cell.piece].push((index, cell));
    }
    let covers: Vec<Option<cover::Cover>> = (0..set.pieces().len())
        .into_par_iter()
        .map(|index| {
            let patch = set.patch_of(PieceId::new(index));
            let any = present[patch.pieces.clone()].contains(&true);
            let collapsed = Side::ALL.map(|side| {
                topology.edges()[EdgeId::of(PieceId::new(index), side).index()].collapsed
            });
            any.then(|| cover::cover(&of_piece[index], collapsed))
        })
        .collect();
    let mut fills = Vec::new();
    for (index, cover) in covers.into_iter().enumerate() {
        let Some(cover) = cover else { continue };
        let piece = &set.pieces()[index];
        let patch = &set.patches()[piece.patch.index()];
        for flaw in cover.flaws {
            let [u, v] = flaw.place;
            let whole = |breaks: &[f64]| breaks[breaks.len() - 1] - breaks[0];
            let share = flaw.share.abs() * (piece.u[1] - piece.u[0]) * (piece.v[1] - piece.v[0])
                / (whole(&patch.breaks_u) * whole(&patch.breaks_v));
            findings.push(Finding {
                fault: if flaw.share <= 0.0 {
                    Fault::Hole { share }
                } else {
                    Fault::Overlap { share }
                },
                triangle: flaw.cell.map(|c| cells[c].face),
                patch: patch.name.clone(),
                place: Some(piece.patch_parameters(flaw.place)),
                point: Some(piece.surface.eval(u, v)),
            });
        }
        fills.extend(cover.fills);
    }
    fills
}
