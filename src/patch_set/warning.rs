//! What does not stop the work but should be looked at.

use thiserror::Error;

use crate::bezier::{BezierPatch, Side};

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

/// The diagonal of the box of the net.
pub(super) fn size(surface: &BezierPatch) -> f64 {
    let mut points = surface.control_points();
    let Some(first) = points.next() else {
        return 0.0;
    };
    let (mut low, mut high) = (first.coords, first.coords);
    for point in points {
        low = low.inf(&point.coords);
        high = high.sup(&point.coords);
    }
    (high - low).norm()
}

/// Whether all control points of an edge keep within `gap` of its start.
pub(super) fn is_collapsed(surface: &BezierPatch, side: Side, gap: f64) -> bool {
    let edge = surface.edge(side);
    let start = edge.control_point(0);
    edge.control_points().all(|p| (p - start).norm() <= gap)
}

/// Whether S_u x S_v vanishes at all samples, against the size of the piece;
/// and if not, the first place on the unit square where it points against its
/// neighbour's.
pub(super) fn normals(surface: &BezierPatch, size: f64) -> (bool, Option<[f64; 2]>) {
    let mut flat = true;
    let mut fold = None;
    let mut rows: [Option<crate::scalar::Vector>; SAMPLES as usize] = Default::default();
    for i in 0..SAMPLES {
        let mut before = None;
        for (j, above) in (0..SAMPLES).zip(rows.iter_mut()) {
            let middle = |k: u8| (f64::from(k) + 0.5) / f64::from(SAMPLES);
            let (u, v) = (middle(i), middle(j));
            let jet = surface.jet(u, v);
            let cross = jet.cross();
            flat &= cross.norm() <= 1e-12 * size * size;
            let here = jet.normal();
            if let Some(normal) = here {
                let against = |other: &Option<crate::scalar::Vector>| {
                    other.is_some_and(|other| other.dot(&normal) < -0.5)
                };
                if fold.is_none() && (against(&before) || against(above)) {
                    fold = Some([u, v]);
                }
            }
            before = here;
            *above = here;
        }
    }
    (flat, fold)
}
