//! A profile turned about an axis.
//!
//! ```text
//! S(u, v) = Q(v) + X(v) cos a(u) + Y(v) sin a(u)
//! ```
//!
//! Q is the profile's foot on the axis, X its distance vector and Y = axis x X.
//! The net is the product of the profile's and the arc's: control points
//! Q_j + X_j c_i + Y_j s_i, weights w_j w_i (standard; Farin).

use serde::{Deserialize, Serialize};

use super::angle::{self, UnitArc, even_breaks};
use super::context::Context;
use super::curve::Curve;
use super::fault::{Step, SurfaceFault};
use super::frame::{Frame, unit};
use super::grid::PieceGrid;
use super::homogeneous::project;
use super::kind::{origin, piece, whole_turn, z_axis};
use crate::scalar::{Point, Vector};

/// A profile curve turned about an axis. u runs with the angle, v with the
/// profile; angle 0 is the profile itself. With the profile to the right of an
/// upright axis and running upwards the normal points away from the axis.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Revolution {
    /// The curve that is turned.
    pub profile: Curve,
    /// A point on the axis. Default the origin.
    #[serde(default = "origin")]
    pub center: [f64; 3],
    /// The direction of the axis. Default (0, 0, 1).
    #[serde(default = "z_axis")]
    pub axis: [f64; 3],
    /// First and last angle. Default (0, 360).
    #[serde(default = "whole_turn")]
    pub angle_deg: (f64, f64),
}

/// One control point of a profile, ready to be turned.
#[derive(Debug, Clone, Copy)]
pub(super) struct ProfilePoint {
    foot: Point,
    x: Vector,
    y: Vector,
    weight: f64,
}

impl ProfilePoint {
    /// At the given distance from a frame's axis and height along it.
    pub(super) fn new(frame: &Frame, radius: f64, height: f64, weight: f64) -> Self {
        Self {
            foot: frame.origin + frame.z * height,
            x: frame.x * radius,
            y: frame.y * radius,
            weight,
        }
    }

    fn turned(&self, [c, s]: [f64; 2]) -> Point {
        let point = self.foot + self.x * c + self.y * s;
        // Turns -0 into 0, so that coincident points are bitwise equal.
        point + Vector::zeros()
    }
}

/// The pieces of a turned profile: u with the arcs, v with the profile.
pub(super) fn revolve(
    context: &mut Context<'_>,
    arcs: &[UnitArc],
    breaks_v: Vec<f64>,
    profile: &[Vec<ProfilePoint>],
) -> Option<PieceGrid> {
    let mut pieces = Vec::with_capacity(arcs.len() * profile.len());
    for arc in arcs {
        for part in profile {
            let turns = || arc.points.iter().zip(arc.weights());
            let points = turns()
                .flat_map(|(&turn, _)| part.iter().map(move |p| p.turned(turn)))
                .collect();
            let weights = turns()
                .flat_map(|(_, w)| part.iter().map(move |p| p.weight * w))
                .collect();
            pieces.push(piece(context, (2, part.len() - 1), points, Some(weights))?);
        }
    }
    Some(PieceGrid {
        breaks_u: even_breaks(arcs.len()),
        breaks_v,
        pieces,
    })
}

impl Revolution {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let profile = context.inside("profile", |context| self.profile.pieces(context));
        let center = context.place(self.center, "center");
        let axis = context.direction(self.axis, "axis");
        let range = angle::range(context, self.angle_deg, "angle_deg");
        let (profile, center, axis) = (profile?, center?, unit(axis?));
        let turnable: Vec<Vec<ProfilePoint>> = profile
            .pieces
            .iter()
            .map(|part| {
                let turn = |h| on_axis_or_off(&center, &axis, project(h), h.w);
                part.iter().map(turn).collect()
            })
            .collect();
        if turnable.iter().flatten().all(|p| p.x.norm() <= 0.0) {
            context.fault(&[Step::Field("profile")], SurfaceFault::ProfileOnAxis);
            return None;
        }
        revolve(context, &angle::arcs(range?), profile.breaks, &turnable)
    }
}

fn on_axis_or_off(center: &Point, axis: &Vector, point: Point, weight: f64) -> ProfilePoint {
    let arm = point - center;
    let foot = center + axis * arm.dot(axis);
    let x = point - foot;
    // A point on the axis but for rounding is a pole, and all its turned
    // copies must be the same point.
    let scale = arm.norm() + center.coords.norm();
    if x.norm() <= 1e-13 * scale {
        return ProfilePoint {
            foot: point,
            x: Vector::zeros(),
            y: Vector::zeros(),
            weight,
        };
    }
    ProfilePoint {
        foot,
        x,
        y: axis.cross(&x),
        weight,
    }
}
