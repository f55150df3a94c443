//! A parallelogram.

use serde::{Deserialize, Serialize};

use super::context::Context;
use super::fault::{Step, SurfaceFault};
use super::frame::unit;
use super::grid::PieceGrid;
use super::kind::piece;

/// A parallelogram: S(u, v) = origin + u U + v V. Its normal is U x V.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Plane {
    /// The corner u = v = 0.
    pub origin: [f64; 3],
    /// The side from u = 0 to u = 1, with its length.
    pub u: [f64; 3],
    /// The side from v = 0 to v = 1, with its length.
    pub v: [f64; 3],
}

impl Plane {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let origin = context.place(self.origin, "origin");
        let u = context.direction(self.u, "u");
        let v = context.direction(self.v, "v");
        let (origin, u, v) = (origin?, u?, v?);
        if unit(u).cross(&unit(v)).norm() < 1e-9 {
            context.fault(&[Step::Field("v")], SurfaceFault::FlatPlane);
            return None;
        }
        let points = vec![origin, origin + v, origin + u, origin + (u + v)];
        Some(PieceGrid {
            breaks_u: vec![0.0, 1.0],
            breaks_v: vec![0.0, 1.0],
            pieces: vec![piece(context, (1, 1), points, None)?],
        })
    }
}
