//! The kernel: rational Bezier curves and tensor-product patches.
//!
//! ```text
//! S(u, v) = sum w_ij b_ij B_i(u) B_j(v) / sum w_ij B_i(u) B_j(v),   0 <= u, v <= 1
//! ```
//!
//! Everything the project knows of a surface it asks here. Evaluation is
//! de Casteljau's, restriction to a rectangle or a triangle is blossoming
//! (Farin, *Curves and Surfaces for CAGD*; Ramshaw 1989). With positive
//! weights every restricted net holds its piece of surface in its convex hull;
//! all proofs of the project rest on that.

pub(crate) mod bernstein;
mod binomial;
mod casteljau;
mod chord;
mod curve;
mod jet;
mod net;
mod patch;
mod side;
mod triangle;

pub(crate) use binomial::{binomial, binomials};
pub(crate) use chord::{chord_bound, close_chord_bound, from_segment};
pub(crate) use curve::GAUSS_8;
pub use curve::{BezierCurve, CurveJet};
pub use jet::SurfaceJet;
pub use net::{MAX_DEGREE, NetError};
pub use patch::BezierPatch;
pub use side::Side;
pub use triangle::{TriangleNet, TriangleRestriction};
