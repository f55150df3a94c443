//! A surface as written, of any kind.

use serde::{Deserialize, Serialize};

use super::context::Context;
use super::fault::{MAX_COORDINATE, PlacedFault, SurfaceFault};
use super::{
    BSplineNet, BezierNet, Cone, Coons, Cylinder, PieceGrid, Plane, Revolution, Ruled, Sphere,
    Torus,
};
use crate::bezier::{BezierPatch, NetError};
use crate::scalar::Point;

/// A surface as written.
///
/// The parameters u and v run 0 to 1 over the whole surface, except for a
/// B-spline, whose parameters are those of its knots.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub enum Surface {
    /// A control net.
    Bezier(BezierNet),
    /// A control net and knots.
    BSpline(BSplineNet),
    /// A parallelogram.
    Plane(Plane),
    /// A circular cylinder, or a part of it.
    Cylinder(Cylinder),
    /// A circular cone, whole or cut off, or a part of it.
    Cone(Cone),
    /// A sphere, or a part of it.
    Sphere(Sphere),
    /// A torus, or a part of it.
    Torus(Torus),
    /// A profile curve turned about an axis.
    Revolution(Box<Revolution>),
    /// Straight lines between two curves.
    Ruled(Box<Ruled>),
    /// The blend of four boundary curves.
    Coons(Box<Coons>),
}

impl Surface {
    /// The names of all kinds, as written.
    pub const KINDS: [&'static str; 10] = [
        "Bezier",
        "BSpline",
        "Plane",
        "Cylinder",
        "Cone",
        "Sphere",
        "Torus",
        "Revolution",
        "Ruled",
        "Coons",
    ];

    /// The kind's name, as written.
    #[must_use]
    pub fn kind(&self) -> &'static str {
        let index = match self {
            Self::Bezier(_) => 0,
            Self::BSpline(_) => 1,
            Self::Plane(_) => 2,
            Self::Cylinder(_) => 3,
            Self::Cone(_) => 4,
            Self::Sphere(_) => 5,
            Self::Torus(_) => 6,
            Self::Revolution(_) => 7,
            Self::Ruled(_) => 8,
            Self::Coons(_) => 9,
        };
        Self::KINDS[index]
    }

    /// The surface as exact rational Bezier pieces.
    ///
    /// `table` holds the set's shared points, `gap` is the distance within
    /// which the ends of Coons curves must meet. No piece has an edge that is
    /// closed without being collapsed.
    ///
    /// ```
    /// use chordwise::surface::{Sphere, Surface};
    /// let sphere = Surface::Sphere(Sphere { radius: 2.0, ..Sphere::default() });
    /// let grid = sphere.pieces(&[], 0.01).expect("a radius is all a sphere needs");
    /// assert_eq!(grid.pieces.len(), 8);
    /// assert!((grid.pieces[3].eval(0.2, 0.7).coords.norm() - 2.0).abs() < 1e-15);
    /// ```
    ///
    /// # Errors
    /// All faults of the surface, each with its place.
    pub fn pieces(&self, table: &[Point], gap: f64) -> Result<PieceGrid, Vec<PlacedFault>> {
        let mut context = Context::new(table, gap);
        let grid = match self {
            Self::Bezier(surface) => surface.grid(&mut context),
            Self::BSpline(surface) => surface.grid(&mut context),
            Self::Plane(surface) => surface.grid(&mut context),
            Self::Cylinder(surface) => surface.grid(&mut context),
            Self::Cone(surface) => surface.grid(&mut context),
            Self::Sphere(surface) => surface.grid(&mut context),
            Self::Torus(surface) => surface.grid(&mut context),
            Self::Revolution(surface) => surface.grid(&mut context),
            Self::Ruled(surface) => surface.grid(&mut context),
            Self::Coons(surface) => surface.grid(&mut context),
        };
        match grid {
            Some(grid) if context.faults.is_empty() => Ok(grid.split_closed(gap)),
            _ => Err(context.faults),
        }
    }
}

/// A piece of a constructed surface; what the construction's own checks let
/// through can only be too large.
pub(super) fn piece(
    context: &mut Context<'_>,
    degree: (usize, usize),
    points: Vec<Point>,
    weights: Option<Vec<f64>>,
) -> Option<BezierPatch> {
    let within = |p: &Point| p.iter().all(|c| c.abs() <= 4.0 * MAX_COORDINATE);
    if !points.iter().all(within) {
        context.fault(&[], SurfaceFault::Overflow);
        return None;
    }
    match BezierPatch::new(degree, points, weights) {
        Ok(patch) => Some(patch),
        Err(error) => {
            let fault = match error {
                NetError::Degree(degree) => SurfaceFault::Degree(degree),
                NetError::Weight { value, .. } => SurfaceFault::Weight(value),
                _ => SurfaceFault::Overflow,
            };
            context.fault(&[], fault);
            None
        }
    }
}

pub(super) fn origin() -> [f64; 3] {
    [0.0; 3]
}

pub(super) fn z_axis() -> [f64; 3] {
    [0.0, 0.0, 1.0]
}

pub(super) fn whole_turn() -> (f64, f64) {
    (0.0, 360.0)
}
