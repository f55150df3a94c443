//! Storage of control points: Cartesian where all weights are equal,
//! homogeneous (w x, w y, w z, w) otherwise.

use nalgebra::SVector;
use thiserror::Error;

use crate::scalar::{Point, Vector};

/// The largest degree in one direction. Above it the binomials of a triangle
/// net lose too many digits for a sound bound, and no trade data needs more.
pub const MAX_DEGREE: usize = 15;

/// A control net that describes no surface or curve.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum NetError {
    /// The degree is zero or above [`MAX_DEGREE`].
    #[error("degree {0}; a degree must be 1 to {MAX_DEGREE}")]
    Degree(usize),
    /// The number of points does not match the degrees.
    #[error("{found} control points; degree asks for {expected}")]
    PointCount {
        /// How many there are.
        found: usize,
        /// How many there should be.
        expected: usize,
    },
    /// The number of weights does not match the number of points.
    #[error("{found} weights; there must be one for each of the {expected} control points")]
    WeightCount {
        /// How many there are.
        found: usize,
        /// How many there should be.
        expected: usize,
    },
    /// A coordinate is NaN or infinite.
    #[error("control point {0} is not finite; coordinates must be finite")]
    NotFinite(usize),
    /// A weight is zero, negative, NaN or infinite.
    #[error("weight {index} is {value}; weights must be positive and finite")]
    Weight {
        /// Position of the weight in the net.
        index: usize,
        /// The offending value.
        value: f64,
    },
}

#[derive(Debug, Clone, PartialEq)]
pub(super) enum Net {
    Polynomial(Vec<SVector<f64, 3>>),
    Rational(Vec<SVector<f64, 4>>),
}

impl Net {
    pub(super) fn new(points: Vec<Point>, weights: Option<Vec<f64>>) -> Result<Self, NetError> {
        if let Some(bad) = points
            .iter()
            .position(|p| !p.coords.iter().all(|c| c.is_finite()))
        {
            return Err(NetError::NotFinite(bad));
        }
        let Some(weights) = weights else {
            return Ok(Self::polynomial(&points));
        };
        if weights.len() != points.len() {
            return Err(NetError::WeightCount {
                found: weights.len(),
                expected: points.len(),
            });
        }
        if let Some(index) = weights.iter().position(|w| !w.is_finite() || *w <= 0.0) {
            return Err(NetError::Weight {
                index,
                value: weights[index],
            });
        }
        if weights.iter().all(|w| w.to_bits() == weights[0].to_bits()) {
            return Ok(Self::polynomial(&points));
        }
        let lifted = points.iter().zip(&weights).map(|(p, &w)| {
            let q = p.coords * w;
            SVector::<f64, 4>::new(q.x, q.y, q.z, w)
        });
        Ok(Self::Rational(lifted.collect()))
    }

    fn polynomial(points: &[Point]) -> Self {
        Self::Polynomial(points.iter().map(|p| p.coords).collect())
    }

    pub(super) fn len(&self) -> usize {
        match self {
            Self::Polynomial(points) => points.len(),
            Self::Rational(points) => points.len(),
        }
    }

    pub(super) fn point(&self, index: usize) -> Point {
        match self {
            Self::Polynomial(points) => Point::from(points[index]),
            Self::Rational(points) => project(&points[index]),
        }
    }

    pub(super) fn weight(&self, index: usize) -> f64 {
        match self {
            Self::Polynomial(_) => 1.0,
            Self::Rational(points) => points[index].w,
        }
    }

    /// Applies a map that must be affine to every control point.
    pub(super) fn map(&self, affine: impl Fn(Point) -> Point) -> Self {
        match self {
            Self::Polynomial(points) => Self::Polynomial(
                points
                    .iter()
                    .map(|p| affine(Point::from(*p)).coords)
                    .collect(),
            ),
            Self::Rational(points) => Self::Rational(
                points
                    .iter()
                    .map(|p| {
                        let q = affine(project(p)).coords * p.w;
                        SVector::<f64, 4>::new(q.x, q.y, q.z, p.w)
                    })
                    .collect(),
            ),
        }
    }

    /// Picks control points by index, in the order given.
    pub(super) fn pick(&self, indices: impl Iterator<Item = usize>) -> Self {
        match self {
            Self::Polynomial(points) => Self::Polynomial(indices.map(|i| points[i]).collect()),
            Self::Rational(points) => Self::Rational(indices.map(|i| points[i]).collect()),
        }
    }
}

pub(super) fn project(homogeneous: &SVector<f64, 4>) -> Point {
    let w = homogeneous.w;
    Point::new(homogeneous.x / w, homogeneous.y / w, homogeneous.z / w)
}

/// Value and derivatives of N / w from those of the homogeneous (N, w), by the
/// quotient rule: the entries are value, d/ds, d2/ds2 along one parameter.
pub(super) fn quotient(h: &[SVector<f64, 4>; 3]) -> [Vector; 3] {
    let w = h[0].w;
    let value = h[0].xyz() / w;
    let first = (h[1].xyz() - value * h[1].w) / w;
    let second = (h[2].xyz() - first * (2.0 * h[1].w) - value * h[2].w) / w;
    [value, first, second]
}
