//! The deviation of a mesh whose triangles may cross seams, proved both ways.
//!
//! A triangle that crosses a seam has no single parameter triangle, so the two
//! directions are proved apart:
//!
//! - **Surface to mesh** (`cells`, `ground`): every piece is cut into rectangles,
//!   and the hull of each one's net is held against the facets nearest to it. Cells
//!   that are not good enough are quartered.
//! - **Mesh to surface** (`facets`): every flat triangle is held against a triangle
//!   of parameters on one piece. Its net b_i is projected on the flat triangle, the
//!   corners on the corners and the edges on the edges: the map with these points
//!   l_i and the net's weights leaves no hole in the flat triangle (its boundary goes
//!   round once), so no point of it is farther from the surface than the largest
//!   |b_i - l_i|. Where pieces meet, the flat triangle is cut where the seam passes.
//!
//! Any place will do for a corner: what it is off counts in the bound. So nothing
//! of how the mesh was made is believed. Rounding is added to every bound.

mod cells;
mod facets;
mod feet;
mod ground;

use rayon::prelude::*;

use super::audit::slack;
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::Point;
use crate::topology::Topology;
use ground::Ground;

/// Proved figures are brought within this factor of what is attained.
const TIGHT: f64 = 1.08;

/// Where a corner of a triangle lies: a piece and its (u, v).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Spot {
    /// The piece.
    pub piece: PieceId,
    /// Parameters on its unit square.
    pub uv: [f64; 2],
}

/// A point of the surface and its distance from the mesh nearby.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Peak {
    pub(crate) distance: f64,
    pub(crate) spot: Spot,
    pub(crate) point: Point,
    /// The facet beside it.
    pub(crate) facet: u32,
}

/// What is proved of a mesh.
#[derive(Debug)]
pub(crate) struct Wide {
    /// Surface to mesh.
    pub(crate) to_mesh: f64,
    /// Mesh to surface.
    pub(crate) to_surface: f64,
    /// The farthest points of the surface that were seen, by piece: true distances
    /// from what lies nearby, not yet from the whole mesh.
    pub(crate) peaks: Vec<Peak>,
    /// Proved for each triangle, both ways.
    pub(crate) by_triangle: Vec<f64>,
    /// Places where more than the chord had to be stated.
    pub(crate) over: Vec<(Spot, f64)>,
}

/// What a proof looks at.
struct Task<'a> {
    set: &'a PatchSet,
    topology: &'a Topology,
    points: &'a [Point],
    triangles: &'a [[u32; 3]],
    spots: &'a [[Spot; 3]],
    ground: Ground<'a>,
    /// By piece, what rounding may take from a bound.
    slack: Vec<f64>,
    /// The chord, or infinity.
    chord: f64,
    /// What is below this is not looked at more closely: rounding, and a thousandth
    /// of a chord.
    least: f64,
}

impl Task<'_> {
    /// What a cell must be proved within: close to what is attained, and within
    /// the chord unless a real point is farther.
    fn goal(&self, attained: f64) -> f64 {
        let tight = (TIGHT * attained).max(self.least);
        if attained <= self.chord {
            tight.min(self.chord)
        } else {
            tight
        }
    }
}

impl Wide {
    /// Proves a mesh against the pieces for which `present` holds. `spots` are the
    /// corners' places; `chord` is what is to be held, infinite where nothing is.
    pub(crate) fn of(
        set: &PatchSet,
        topology: &Topology,
        (points, triangles, spots): (&[Point], &[[u32; 3]], &[[Spot; 3]]),
        present: &[bool],
        chord: f64,
    ) -> Self {
        let slack: Vec<f64> = set.pieces().par_iter().map(|p| slack(&p.surface)).collect();
        let rounding = 8.0 * slack.iter().copied().fold(0.0, f64::max);
        let part = if chord.is_finite() { 1e-3 * chord } else { 0.0 };
        let task = Task {
            set,
            topology,
            points,
            triangles,
            spots,
            ground: Ground::new(points, triangles),
            slack,
            chord,
            least: rounding.max(part),
        };
        let first = task.first_look(present);
        let attained = first
            .iter()
            .flatten()
            .map(|look| look.peak.distance)
            .fold(0.0, f64::max);
        let mut wide = Self {
            to_mesh: 0.0,
            to_surface: 0.0,
            peaks: Vec::new(),
            by_triangle: vec![0.0; triangles.len()],
            over: Vec::new(),
        };
        for proved in task.cells(&first, attained) {
            wide.to_mesh = wide.to_mesh.max(proved.bound);
            wide.peaks.push(proved.peak);
            for (facet, bound) in proved.facets {
                let of = &mut wide.by_triangle[facet as usize];
                *of = of.max(bound);
            }
            wide.over.extend(proved.over);
        }
        for (t, (bound, spot)) in task.facets(attained).into_iter().enumerate() {
            wide.to_surface = wide.to_surface.max(bound);
            let of = &mut wide.by_triangle[t];
            *of = of.max(bound);
            if bound > chord {
                wide.over.push((spot, bound));
            }
        }
        wide
    }
}
