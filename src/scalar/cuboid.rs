//! The box round some points.

use super::{Point, Vector};

/// An axis-parallel box.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Cuboid {
    pub(crate) low: Point,
    pub(crate) high: Point,
}

impl Cuboid {
    /// The smallest that holds the points; of none, one that holds nothing.
    pub(crate) fn around(points: impl IntoIterator<Item = Point>) -> Self {
        let start = Self {
            low: Point::from(Vector::repeat(f64::INFINITY)),
            high: Point::from(Vector::repeat(f64::NEG_INFINITY)),
        };
        points.into_iter().fold(start, |cuboid, p| Self {
            low: cuboid.low.inf(&p),
            high: cuboid.high.sup(&p),
        })
    }

    pub(crate) fn union(&self, other: &Self) -> Self {
        Self {
            low: self.low.inf(&other.low),
            high: self.high.sup(&other.high),
        }
    }

    pub(crate) fn grown(&self, by: f64) -> Self {
        Self {
            low: self.low - Vector::repeat(by),
            high: self.high + Vector::repeat(by),
        }
    }

    pub(crate) fn meets(&self, other: &Self) -> bool {
        (0..3).all(|k| self.low[k] <= other.high[k] && other.low[k] <= self.high[k])
    }

    pub(crate) fn holds(&self, point: &Point) -> bool {
        (0..3).all(|k| self.low[k] <= point[k] && point[k] <= self.high[k])
    }

    /// Distance of a point from the box, zero inside.
    pub(crate) fn distance(&self, point: &Point) -> f64 {
        let nearest = point.sup(&self.low).inf(&self.high);
        (point - nearest).norm()
    }

    /// Its middle.
    pub(crate) fn middle(&self) -> Point {
        nalgebra::center(&self.low, &self.high)
    }

    /// Length of the space diagonal.
    pub(crate) fn diagonal(&self) -> f64 {
        let diagonal = (self.high - self.low).norm();
        if diagonal.is_finite() { diagonal } else { 0.0 }
    }
}
