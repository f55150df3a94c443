//! What does not stop the work but should be looked at.

use thiserror::Error;

use crate::bezier::{BezierPatch, Side};
use crate::scalar::{Cuboid, Vector};
use crate::surface::PieceGrid;

/// A warning. All are judged on the control points and on samples: not proved.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum Warning {
    /// All control points of an edge keep within the gap tolerance of its start.
    #[error("edge {0} is collapsed to a point; it has no seam")]
    CollapsedEdge(Side),
    /// The patch has no area to speak of.
    #[error("the patch has no area; it gives no triangles")]
    ZeroArea,
    /// The normal turns over inside a patch.
    #[error("the normal reverses near u = {u:.4}, v = {v:.4} (sampled); the surface folds over")]
    NormalReverses {
        /// Where.
        u: f64,
        /// Where.
        v: f64,
    },
    /// The patch is smaller than the gap tolerance.
    #[error(
        "the patch measures {size:.3e}, less than the gap tolerance of {gap}; its edges cannot be told apart"
    )]
    Tiny {
        /// The diagonal of the box of its net.
        size: f64,
        /// The gap tolerance.
        gap: f64,
    },
}

/// Samples in each direction of a piece.
const SAMPLES: u8 = 5;

/// The warnings of one patch, from its pieces.
pub(super) fn judge(grid: &PieceGrid, gap: f64) -> Vec<Warning> {
    let mut found = Vec::new();
    let columns = grid.breaks_v.len() - 1;
    let rows = grid.breaks_u.len() - 1;
    let diagonal = |piece: &BezierPatch| Cuboid::around(piece.control_points()).diagonal();
    let size = grid.pieces.iter().map(diagonal).fold(0.0, f64::max);
    if size < gap {
        return vec![Warning::Tiny { size, gap }];
    }
    let judged: Vec<_> = grid
        .pieces
        .iter()
        .map(|piece| normals(piece, diagonal(piece)))
        .collect();
    if judged.iter().all(|(flat, _)| *flat) {
        return vec![Warning::ZeroArea];
    }
    for side in Side::ALL {
        let on_side = |at: usize| match side {
            Side::U0 => at / columns == 0,
            Side::U1 => at / columns == rows - 1,
            Side::V0 => at.is_multiple_of(columns),
            Side::V1 => at % columns == columns - 1,
        };
        let mut pieces = grid
            .pieces
            .iter()
            .enumerate()
            .filter(|(at, _)| on_side(*at));
        if pieces.all(|(_, piece)| is_collapsed(piece, side, gap)) {
            found.push(Warning::CollapsedEdge(side));
        }
    }
    let fold = judged.iter().enumerate().find_map(|(at, (_, fold))| {
        let [u, v] = (*fold)?;
        let (i, j) = (at / columns, at % columns);
        let along = |breaks: &[f64], k: usize, t: f64| breaks[k] * (1.0 - t) + breaks[k + 1] * t;
        Some(Warning::NormalReverses {
            u: along(&grid.breaks_u, i, u),
            v: along(&grid.breaks_v, j, v),
        })
    });
    found.extend(fold);
    found
}

/// Whether all control points of an edge keep within `gap` of its start.
fn is_collapsed(surface: &BezierPatch, side: Side, gap: f64) -> bool {
    let edge = surface.edge(side);
    let start = edge.control_point(0);
    edge.control_points().all(|p| (p - start).norm() <= gap)
}

/// Whether S_u x S_v vanishes at all samples, against the size of the piece;
/// and if not, the first place on the unit square where the normal jumps to the
/// other side: where a turn of more than 120 degrees between two neighbouring
/// samples stays one, however closely it is looked at.
fn normals(surface: &BezierPatch, size: f64) -> (bool, Option<[f64; 2]>) {
    let mut flat = true;
    let mut fold = None;
    let mut row: [Option<Vector>; SAMPLES as usize] = Default::default();
    for i in 0..SAMPLES {
        let mut before = None;
        for (j, above) in (0..SAMPLES).zip(row.iter_mut()) {
            let (u, v) = (middle(i), middle(j));
            let jet = surface.jet(u, v);
            flat &= jet.cross().norm() <= 1e-12 * size * size;
            let here = jet.normal();
            if let Some(normal) = here.filter(|_| fold.is_none()) {
                let step = 1.0 / f64::from(SAMPLES);
                let neighbours = [(before, [u, v - step]), (*above, [u - step, v])];
                fold = neighbours.into_iter().find_map(|(other, place)| {
                    let other = other.filter(|other| turns_over(other, &normal))?;
                    narrowed(surface, (place, other), ([u, v], normal))
                });
            }
            before = here;
            *above = here;
        }
    }
    (flat, fold)
}

/// Parameter of sample `k`.
fn middle(k: u8) -> f64 {
    (f64::from(k) + 0.5) / f64::from(SAMPLES)
}

fn turns_over(a: &Vector, b: &Vector) -> bool {
    a.dot(b) < -0.5
}

/// Halves the way between two places until the turn is spread out (`None`: a
/// tight bend) or is still there on a millionth of the way (a fold).
fn narrowed(
    surface: &BezierPatch,
    mut a: ([f64; 2], Vector),
    mut b: ([f64; 2], Vector),
) -> Option<[f64; 2]> {
    for _ in 0..20 {
        let place = [(a.0[0] + b.0[0]) / 2.0, (a.0[1] + b.0[1]) / 2.0];
        let Some(normal) = surface.jet(place[0], place[1]).normal() else {
            return Some(place); // The fold itself: S_u and S_v are parallel.
        };
        if turns_over(&a.1, &normal) {
            b = (place, normal);
        } else if turns_over(&normal, &b.1) {
            a = (place, normal);
        } else {
            return None;
        }
    }
    Some(b.0)
}
