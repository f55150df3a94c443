//! The right-handed frame of a surface that has an axis.

use super::context::Context;
use super::fault::{Step, SurfaceFault};
use crate::scalar::{Point, Vector};

/// Origin and orthonormal directions: z along the axis, x towards angle 0.
#[derive(Debug, Clone, Copy)]
pub(super) struct Frame {
    pub(super) origin: Point,
    pub(super) x: Vector,
    pub(super) y: Vector,
    pub(super) z: Vector,
}

impl Frame {
    /// From a centre, an axis and the direction of angle 0, of which the part
    /// along the axis is dropped. Without one it is the first of X, Y that
    /// stands at least 30 degrees off the axis.
    pub(super) fn new(
        context: &mut Context<'_>,
        center: [f64; 3],
        axis: [f64; 3],
        start: Option<[f64; 3]>,
    ) -> Option<Self> {
        let origin = context.place(center, "center");
        let axis = context.direction(axis, "axis");
        let start = match start {
            Some(start) => Some(context.direction(start, "start")?),
            None => None,
        };
        let (origin, z) = (origin?, unit(axis?));
        let start = start.unwrap_or_else(|| {
            if z.x.abs() < 0.75_f64.sqrt() {
                Vector::x()
            } else {
                Vector::y()
            }
        });
        let start = unit(start);
        let across = start - z * start.dot(&z);
        // Below a sine of 1e-9 the direction of angle 0 is rounding noise.
        if across.norm() < 1e-9 {
            context.fault(&[Step::Field("start")], SurfaceFault::ParallelStart);
            return None;
        }
        let x = unit(across);
        Some(Self {
            origin,
            x,
            y: z.cross(&x),
            z,
        })
    }
}

/// The unit vector, exact for the coordinate directions at any length.
pub(super) fn unit(v: Vector) -> Vector {
    let largest = v.amax();
    let scaled = v / largest;
    scaled / scaled.norm()
}
