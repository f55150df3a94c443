//! The kinds of surface a user writes, each turned exactly into rational
//! Bezier pieces.
//!
//! Angles are cut into equal arcs of at most 90 degrees, each an exact rational
//! quadratic; B-splines are cut at their knots; ruled and Coons surfaces at the
//! breaks of their curves. Points that are meant to coincide, at poles, in
//! corners and where a turn closes, are the same point.

mod angle;
mod context;
mod coons;
mod curve;
mod curve_pieces;
mod fault;
mod frame;
mod grid;
mod homogeneous;
mod kind;
mod net;
mod plane;
mod revolution;
mod round;
mod ruled;
mod spline;

pub use angle::cos_sin_deg;
pub use coons::Coons;
pub use curve::{Arc, BSplinePoints, BezierPoints, Curve, Line};
pub use fault::{MAX_COORDINATE, MAX_WEIGHT, Place, PlacedFault, Step, SurfaceFault};
pub use grid::PieceGrid;
pub use kind::Surface;
pub use net::{BSplineNet, BezierNet};
pub use plane::Plane;
pub use revolution::Revolution;
pub use round::{Cone, Cylinder, Sphere, Torus};
pub use ruled::Ruled;
