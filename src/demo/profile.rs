//! Plane profiles: strokes drawn one after the other with a common tangent.
//!
//! Circular blends stand on the corner of their two tangents: with h half the
//! turn, the corner lies R tan h ahead on either side, and
//!
//! ```text
//! exact:  rational quadratic, weights 1, cos h, 1
//! cubic:  handles 4/3 R tan(h/2), radius true to 1e-6 for turns below 60 degrees
//! ```
//!
//! (both standard; Farin).

use super::guide::{bezier_blossom, elevated};
use crate::scalar::Vector;

/// A place or direction in the plane of the profile.
pub(super) type Plane = [f64; 2];

/// One Bezier piece of a profile, with weights if it is rational.
#[derive(Debug, Clone)]
pub(super) struct Stroke {
    pub(super) points: Vec<Plane>,
    pub(super) weights: Option<Vec<f64>>,
}

impl Stroke {
    /// The piece from parameter `from` to `to` of a polynomial stroke.
    pub(super) fn restricted(&self, from: f64, to: f64) -> Self {
        let points = lifted(&self.points);
        let degree = points.len() - 1;
        let cut = (0..=degree)
            .map(|i| {
                let arguments: Vec<f64> = (0..degree)
                    .map(|k| if k < degree - i { from } else { to })
                    .collect();
                bezier_blossom(&points, &arguments)
            })
            .collect::<Vec<_>>();
        Self {
            points: lowered(&cut),
            weights: None,
        }
    }

    /// The polynomial stroke in a degree not below its own.
    pub(super) fn elevated(&self, degree: usize) -> Self {
        Self {
            points: lowered(&elevated(&lifted(&self.points), degree)),
            weights: None,
        }
    }

    /// The parameter of a polynomial stroke at which its end is `distance`
    /// away, by bisection.
    pub(super) fn parameter_before_end(&self, distance: f64) -> f64 {
        let points = lifted(&self.points);
        let end = points[points.len() - 1];
        let (mut low, mut high) = (0.0, 1.0);
        for _ in 0..60 {
            let middle = f64::midpoint(low, high);
            let at = bezier_blossom(&points, &vec![middle; points.len() - 1]);
            if (at - end).norm() > distance {
                low = middle;
            } else {
                high = middle;
            }
        }
        low
    }

    /// Where the stroke ends.
    pub(super) fn end(&self) -> Plane {
        self.points[self.points.len() - 1]
    }
}

/// Draws strokes, each tangent to the one before.
#[derive(Debug, Clone)]
pub(super) struct Pen {
    at: Plane,
    direction: Plane,
    strokes: Vec<Stroke>,
}

impl Pen {
    /// Sets the pen down; the direction need not be of unit length.
    pub(super) fn start(at: Plane, direction: Plane) -> Self {
        Self {
            at,
            direction: unit(direction),
            strokes: Vec::new(),
        }
    }

    /// A gentle cubic to a place and a direction, nearly circular where the
    /// place allows it.
    pub(super) fn to(self, at: Plane, direction: Plane) -> Self {
        let direction = unit(direction);
        let [dp, dq] = [at[0] - self.at[0], at[1] - self.at[1]];
        let chord = (dp * dp + dq * dq).sqrt();
        let handle = chord * 2.0 / (3.0 * (1.0 + half_turn(self.direction, direction).cos));
        self.cubic(at, direction, handle)
    }

    /// A circular blend to a direction, as a cubic.
    pub(super) fn arc(self, radius: f64, direction: Plane) -> Self {
        let direction = unit(direction);
        let half = half_turn(self.direction, direction);
        let at = self.beyond(radius * half.tan, direction);
        self.cubic(
            at,
            direction,
            4.0 / 3.0 * radius * half.sin / (1.0 + half.cos),
        )
    }

    /// A circular blend to a direction, exact, as a rational quadratic.
    pub(super) fn conic(mut self, radius: f64, direction: Plane) -> Self {
        let direction = unit(direction);
        let half = half_turn(self.direction, direction);
        let reach = radius * half.tan;
        let at = self.beyond(reach, direction);
        self.strokes.push(Stroke {
            points: vec![self.at, ahead(self.at, self.direction, reach), at],
            weights: Some(vec![1.0, half.cos, 1.0]),
        });
        self.at = at;
        self.direction = direction;
        self
    }

    /// What has been drawn.
    pub(super) fn strokes(self) -> Vec<Stroke> {
        self.strokes
    }

    /// Where the pen stands, and its unit direction.
    pub(super) fn tip(&self) -> (Plane, Plane) {
        (self.at, self.direction)
    }

    fn beyond(&self, reach: f64, direction: Plane) -> Plane {
        ahead(ahead(self.at, self.direction, reach), direction, reach)
    }

    fn cubic(mut self, at: Plane, direction: Plane, handle: f64) -> Self {
        self.strokes.push(Stroke {
            points: vec![
                self.at,
                ahead(self.at, self.direction, handle),
                ahead(at, direction, -handle),
                at,
            ],
            weights: None,
        });
        self.at = at;
        self.direction = direction;
        self
    }
}

/// Functions of half the angle between two unit directions.
struct HalfTurn {
    cos: f64,
    sin: f64,
    tan: f64,
}

fn half_turn(from: Plane, to: Plane) -> HalfTurn {
    let cosine = from[0] * to[0] + from[1] * to[1];
    let sine = (from[0] * to[1] - from[1] * to[0]).abs();
    let cos = f64::midpoint(1.0, cosine).sqrt();
    let tan = sine / (1.0 + cosine);
    HalfTurn {
        cos,
        sin: cos * tan,
        tan,
    }
}

fn ahead(at: Plane, direction: Plane, distance: f64) -> Plane {
    [
        at[0] + direction[0] * distance,
        at[1] + direction[1] * distance,
    ]
}

/// The direction at unit length.
pub(super) fn unit(direction: Plane) -> Plane {
    let norm = (direction[0] * direction[0] + direction[1] * direction[1]).sqrt();
    [direction[0] / norm, direction[1] / norm]
}

fn lifted(points: &[Plane]) -> Vec<Vector> {
    points
        .iter()
        .map(|p| Vector::new(p[0], p[1], 0.0))
        .collect()
}

fn lowered(points: &[Vector]) -> Vec<Plane> {
    points.iter().map(|p| [p.x, p.y]).collect()
}
