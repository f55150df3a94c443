//! The deviation of the mesh from the surface, as it is stated.

use rayon::prelude::*;

use super::Mesh;
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::{Bracket, Point, Vector};
use crate::tessellation::{Attained, Tessellation};

/// How many of the worst pieces are measured against the whole mesh.
const CANDIDATES: usize = 8;

/// Proved and attained deviation with its place.
#[derive(Debug, Clone, PartialEq)]
pub struct Deviation {
    /// Surface to mesh: proved for every triangle, attained at `point`.
    pub to_mesh: Bracket,
    /// Mesh to surface: proved.
    pub to_surface: f64,
    /// The patch where `to_mesh.attained` is found.
    pub patch: String,
    /// The patch's own parameters there.
    pub u: f64,
    /// The patch's own parameters there.
    pub v: f64,
    /// The point of the surface.
    pub point: Point,
}

impl Deviation {
    /// The larger proved bound of the two directions.
    #[must_use]
    pub fn proved(&self) -> f64 {
        self.to_mesh.proved.max(self.to_surface)
    }

    /// Gathers what was proved piece by piece, and measures the worst points
    /// of the surface against the whole mesh, so that the attained figure is a
    /// true distance. `None` if nothing was tessellated.
    #[must_use]
    pub fn of(set: &PatchSet, tessellation: &Tessellation, mesh: &Mesh) -> Option<Self> {
        let (mut to_mesh, mut to_surface) = (0.0_f64, 0.0_f64);
        let mut worst: Vec<(PieceId, Attained)> = Vec::new();
        for (index, filled) in tessellation.pieces.iter().enumerate() {
            let Some(filled) = filled else { continue };
            to_mesh = to_mesh.max(filled.proved.to_mesh);
            to_surface = to_surface.max(filled.proved.to_surface);
            worst.push((PieceId::new(index), filled.attained));
        }
        worst.sort_by(|a, b| b.1.distance.total_cmp(&a.1.distance).then(a.0.cmp(&b.0)));
        worst.truncate(CANDIDATES);
        let mut best: Option<(f64, PieceId, Attained)> = None;
        for (piece, attained) in worst {
            if best
                .as_ref()
                .is_some_and(|(d, _, _)| *d >= attained.distance)
            {
                break;
            }
            let distance = mesh.distance(&attained.point);
            if best.as_ref().is_none_or(|(d, _, _)| distance > *d) {
                best = Some((distance, piece, attained));
            }
        }
        let (distance, piece, attained) = best?;
        let [u, v] = set.pieces()[piece.index()].patch_parameters(attained.place);
        Some(Self {
            to_mesh: Bracket {
                proved: to_mesh,
                attained: distance,
            },
            to_surface,
            patch: set.patch_of(piece).name.clone(),
            u,
            v,
            point: attained.point,
        })
    }
}

impl Mesh {
    /// Distance of a point from the nearest triangle; looks at all of them.
    #[must_use]
    pub fn distance(&self, point: &Point) -> f64 {
        (0..self.triangles.len())
            .into_par_iter()
            .map(|t| squared_distance(point, &self.triangle_corners(t)))
            .reduce(|| f64::INFINITY, f64::min)
            .sqrt()
    }
}

/// Squared distance of a point from a triangle: from its plane where the foot
/// is inside, else from the nearest edge.
fn squared_distance(p: &Point, corners: &[Point; 3]) -> f64 {
    let [a, b, c] = corners;
    let normal = (b - a).cross(&(c - a));
    let inside = |from: &Point, to: &Point| (to - from).cross(&(p - from)).dot(&normal) >= 0.0;
    let square = normal.norm_squared();
    if square > 0.0 && inside(a, b) && inside(b, c) && inside(c, a) {
        return (p - a).dot(&normal).powi(2) / square;
    }
    let to_edge = |a: &Point, b: &Point| {
        let chord: Vector = b - a;
        let length = chord.norm_squared();
        let t = if length > 0.0 {
            ((p - a).dot(&chord) / length).clamp(0.0, 1.0)
        } else {
            0.0
        };
        (p - a - chord * t).norm_squared()
    };
    to_edge(a, b).min(to_edge(b, c)).min(to_edge(c, a))
}
