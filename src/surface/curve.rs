//! The curves from which surfaces are made.

use serde::{Deserialize, Serialize};

use super::angle::{self, even_breaks};
use super::context::Context;
use super::fault::{Step, SurfaceFault};
use super::frame::Frame;
use super::homogeneous::{Lifted, elevated, lift, project, split};
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

/// A curve as homogeneous Bezier pieces of one degree, piece k over
/// `breaks[k]..breaks[k + 1]`.
#[derive(Debug, Clone)]
pub(super) struct CurvePieces {
    pub(super) breaks: Vec<f64>,
    pub(super) pieces: Vec<Vec<Lifted>>,
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

impl CurvePieces {
    pub(super) fn degree(&self) -> usize {
        self.pieces[0].len() - 1
    }

    /// Homogeneous start and end.
    pub(super) fn ends(&self) -> [Lifted; 2] {
        let last = &self.pieces[self.pieces.len() - 1];
        [self.pieces[0][0], last[last.len() - 1]]
    }

    pub(super) fn end_points(&self) -> [Point; 2] {
        self.ends().map(|end| project(&end))
    }

    /// The parameter moved affinely to 0..1.
    pub(super) fn normalised(mut self) -> Self {
        let (first, last) = (self.breaks[0], self.breaks[self.breaks.len() - 1]);
        for at in &mut self.breaks {
            *at = (*at - first) / (last - first);
        }
        if let Some(end) = self.breaks.last_mut() {
            *end = 1.0;
        }
        self
    }

    /// The same curve with both end weights 1: weights scaled, and the
    /// parameter changed by the linear fraction t = d1 s / D(s),
    /// D(s) = d0 (1 - s) + d1 s, which multiplies the homogeneous curve by
    /// D(s)^degree. The shape does not change; where the end weights agree,
    /// neither does the parameter. For curves on 0..1.
    pub(super) fn with_unit_end_weights(mut self) -> Self {
        let degree = self.degree();
        let power = -1.0 / super::homogeneous::real(degree);
        let [first, last] = self.ends().map(|end| end.w);
        if (first - last).abs() <= 1e-14 * first.max(last) {
            for piece in &mut self.pieces {
                for point in piece.iter_mut() {
                    *point /= first;
                }
            }
            return self;
        }
        let (d0, d1) = (first.powf(power), last.powf(power));
        let inner = self.breaks.len() - 1;
        for at in &mut self.breaks[1..inner] {
            let t = *at;
            *at = d0 * t / (d0 * t + d1 * (1.0 - t));
        }
        let factors: Vec<f64> = self
            .breaks
            .iter()
            .map(|s| d0 * (1.0 - s) + d1 * s)
            .collect();
        for (piece, ends) in self.pieces.iter_mut().zip(factors.windows(2)) {
            for (i, point) in piece.iter_mut().enumerate() {
                *point *= power_of(ends[0], degree - i) * power_of(ends[1], i);
            }
        }
        self
    }

    /// The same curve cut at `breaks` as well and raised to `degree`.
    pub(super) fn refined(self, breaks: &[f64], degree: usize) -> Self {
        let mut pieces = Vec::with_capacity(breaks.len() - 1);
        let mut old = self.breaks[1..].iter().zip(self.pieces);
        let mut start = breaks[0];
        let mut rest: Option<(f64, Vec<Lifted>)> = None;
        for &end in &breaks[1..] {
            let Some((stop, piece)) = rest.take().or_else(|| old.next().map(|(s, p)| (*s, p)))
            else {
                break;
            };
            if same(end, stop) {
                pieces.push(elevated(piece, degree));
            } else {
                let [left, right] = split(&piece, (end - start) / (stop - start));
                pieces.push(elevated(left, degree));
                rest = Some((stop, right));
            }
            start = end;
        }
        Self {
            breaks: breaks.to_vec(),
            pieces,
        }
    }
}

fn power_of(base: f64, exponent: usize) -> f64 {
    (0..exponent).fold(1.0, |value, _| value * base)
}

/// Breaks on 0..1 closer than this are one break.
fn same(a: f64, b: f64) -> bool {
    (a - b).abs() < 1e-10
}

/// All breaks of both curves, ascending; those of the first stand where two
/// agree.
pub(super) fn common_breaks(a: &CurvePieces, b: &CurvePieces) -> Vec<f64> {
    let extra = b
        .breaks
        .iter()
        .copied()
        .filter(|&t| !a.breaks.iter().any(|&s| same(s, t)));
    let mut breaks: Vec<f64> = a.breaks.iter().copied().chain(extra).collect();
    breaks.sort_by(f64::total_cmp);
    breaks
}
