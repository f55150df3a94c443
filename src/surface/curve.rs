//! The curves from which surfaces are made.

use serde::{Deserialize, Serialize};

use super::angle::{self, even_breaks};
use super::context::Context;
use super::curve_pieces::CurvePieces;
use super::fault::{Step, SurfaceFault};
use super::frame::Frame;
use super::homogeneous::{Lifted, lift};
use super::kind::{origin, whole_turn, z_axis};
use super::spline::Knots;
use crate::bezier::MAX_DEGREE;
use crate::scalar::Point;

/// A curve as written: a profile, or the boundary of a ruled or Coons surface.
/// Its parameter runs 0 to 1 (for a B-spline, the domain of its knots).
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub enum Curve {
    /// A straight line.
    Line(Line),
    /// A circular arc.
    Arc(Arc),
    /// A Bezier curve.
    Bezier(BezierPoints),
    /// A B-spline curve.
    BSpline(BSplinePoints),
}

/// A straight line.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Line {
    /// Its start.
    pub from: [f64; 3],
    /// Its end.
    pub to: [f64; 3],
}

/// A circular arc, anticlockwise about its axis.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Arc {
    /// The centre of the circle. Default the origin.
    #[serde(default = "origin")]
    pub center: [f64; 3],
    /// The axis the arc turns about. Default (0, 0, 1).
    #[serde(default = "z_axis")]
    pub axis: [f64; 3],
    /// The direction of angle 0. Default X, or Y where X is along the axis.
    #[serde(default)]
    pub start: Option<[f64; 3]>,
    /// The radius.
    pub radius: f64,
    /// First and last angle. Default (0, 360).
    #[serde(default = "whole_turn")]
    pub angle_deg: (f64, f64),
}

/// A Bezier curve: degree + 1 points.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct BezierPoints {
    /// The control points.
    #[serde(default)]
    pub points: Option<Vec<[f64; 3]>>,
    /// The control points as indices into the set's `points`.
    #[serde(default)]
    pub indexed: Option<Vec<u64>>,
    /// One weight a point; without them the curve is polynomial.
    #[serde(default)]
    pub weights: Option<Vec<f64>>,
}

/// A B-spline curve.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct BSplinePoints {
    /// The degree, 1 to 15.
    pub degree: usize,
    /// points + degree + 1 knots; the domain is [t_degree, t_points].
    pub knots: Vec<f64>,
    /// The control points.
    #[serde(default)]
    pub points: Option<Vec<[f64; 3]>>,
    /// The control points as indices into the set's `points`.
    #[serde(default)]
    pub indexed: Option<Vec<u64>>,
    /// One weight a point; without them the curve is polynomial.
    #[serde(default)]
    pub weights: Option<Vec<f64>>,
}

impl Curve {
    pub(super) fn pieces(&self, context: &mut Context<'_>) -> Option<CurvePieces> {
        match self {
            Self::Line(line) => line.pieces(context),
            Self::Arc(arc) => arc.pieces(context),
            Self::Bezier(curve) => curve.pieces(context),
            Self::BSpline(curve) => curve.pieces(context),
        }
    }
}

impl Line {
    fn pieces(&self, context: &mut Context<'_>) -> Option<CurvePieces> {
        let from = context.place(self.from, "from");
        let to = context.place(self.to, "to");
        Some(CurvePieces {
            breaks: vec![0.0, 1.0],
            pieces: vec![vec![lift(from?, 1.0), lift(to?, 1.0)]],
        })
    }
}

impl Arc {
    fn pieces(&self, context: &mut Context<'_>) -> Option<CurvePieces> {
        let frame = Frame::new(context, self.center, self.axis, self.start);
        let radius = context.positive(self.radius, "radius");
        let range = angle::range(context, self.angle_deg, "angle_deg");
        let (frame, radius) = (frame?, radius?);
        let pieces: Vec<Vec<Lifted>> = angle::arcs(range?)
            .iter()
            .map(|arc| {
                let points = arc.points.iter().zip(arc.weights());
                points
                    .map(|(&[c, s], weight)| {
                        let point = frame.origin + frame.x * (radius * c) + frame.y * (radius * s);
                        lift(point, weight)
                    })
                    .collect()
            })
            .collect();
        Some(CurvePieces {
            breaks: even_breaks(pieces.len()),
            pieces,
        })
    }
}

impl BezierPoints {
    fn pieces(&self, context: &mut Context<'_>) -> Option<CurvePieces> {
        let points = control_points(context, &self.points, &self.indexed, &self.weights)?;
        let degree = points.len().wrapping_sub(1);
        if degree == 0 || degree > MAX_DEGREE {
            let field = if self.points.is_some() {
                "points"
            } else {
                "indexed"
            };
            let fault = if points.len() < 2 {
                SurfaceFault::TooFewPoints {
                    found: points.len(),
                    degree: 1,
                }
            } else {
                SurfaceFault::Degree(degree)
            };
            context.fault(&[Step::Field(field)], fault);
            return None;
        }
        Some(CurvePieces {
            breaks: vec![0.0, 1.0],
            pieces: vec![points],
        })
    }
}

impl BSplinePoints {
    fn pieces(&self, context: &mut Context<'_>) -> Option<CurvePieces> {
        if self.degree == 0 || self.degree > MAX_DEGREE {
            context.fault(&[Step::Field("degree")], SurfaceFault::Degree(self.degree));
        }
        let points = control_points(context, &self.points, &self.indexed, &self.weights);
        let count = self
            .points
            .as_ref()
            .map(Vec::len)
            .or(self.indexed.as_ref().map(Vec::len))?;
        let knots = Knots::new(
            context,
            self.degree,
            &self.knots,
            count,
            &[Step::Field("knots")],
        )?;
        Some(CurvePieces {
            breaks: knots.breaks(),
            pieces: knots.pieces(&points?),
        })
    }
}

fn control_points(
    context: &mut Context<'_>,
    points: &Option<Vec<[f64; 3]>>,
    indexed: &Option<Vec<u64>>,
    weights: &Option<Vec<f64>>,
) -> Option<Vec<Lifted>> {
    let at = |field, k| move || vec![Step::Field(field), Step::Item(k)];
    let before = context.faults.len();
    let resolved: Vec<Point> = match (points, indexed) {
        (Some(points), None) => points
            .iter()
            .enumerate()
            .filter_map(|(k, &p)| context.point(p, at("points", k)))
            .collect(),
        (None, Some(indices)) => indices
            .iter()
            .enumerate()
            .filter_map(|(k, &index)| context.indexed(index, at("indexed", k)))
            .collect(),
        (first, _) => {
            context.fault(
                &[],
                SurfaceFault::Choice {
                    both: first.is_some(),
                    first: "points",
                    second: "indexed",
                },
            );
            return None;
        }
    };
    let count = points.as_ref().map_or(0, Vec::len) + indexed.as_ref().map_or(0, Vec::len);
    let mut lifted: Vec<Lifted> = resolved.iter().map(|&p| lift(p, 1.0)).collect();
    if let Some(weights) = weights {
        if weights.len() != count {
            context.fault(
                &[Step::Field("weights")],
                SurfaceFault::WeightCount {
                    what: "entries",
                    found: weights.len(),
                    expected: count,
                },
            );
        }
        for (k, &weight) in weights.iter().enumerate() {
            let good = context.weight(weight, at("weights", k));
            if let (Some(weight), Some(target)) = (good, lifted.get_mut(k)) {
                *target = lift(resolved[k], weight);
            }
        }
    }
    (context.faults.len() == before).then_some(lifted)
}
