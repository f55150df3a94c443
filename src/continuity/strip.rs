//! The strip of a piece along one of its edges: place and normal as
//! polynomials of the edge's parameter.
//!
//! ```text
//! M = w X_u x X_v - w_v X_u x X - w_u X x X_v = w^3 S_u x S_v,   X = w S
//! ```
//!
//! M is a polynomial whether the piece is rational or not, and a positive
//! multiple of the normal. At a pole it vanishes; the factors t and 1 - t are
//! divided out, which leaves the limit normal.

use super::rows::Rows;
use crate::bezier::bernstein::Bernstein;
use crate::bezier::{BezierPatch, Side};
use crate::scalar::{Point, Vector};

/// Place and normal along an edge.
#[derive(Debug, Clone)]
pub(super) struct Strip {
    /// w S relative to the origin given.
    pub(super) place: Bernstein<Vector>,
    /// w.
    pub(super) weight: Bernstein<f64>,
    /// A positive multiple of S_u x S_v inside the edge.
    pub(super) normal: Bernstein<Vector>,
    /// The derivative across; for polynomial pieces.
    pub(super) across: Option<Bernstein<Vector>>,
}

impl Strip {
    /// The strip of `surface` along `side`, coordinates relative to `origin`.
    pub(super) fn new(surface: &BezierPatch, side: Side, origin: &Point) -> Self {
        let rows = Rows::new(surface, side, *origin);
        // The derivative across, in the sense of the growing parameter.
        #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
        let degree = rows.degrees()[1] as f64;
        let outward = rows.inwards();
        let (x, w) = (rows.places(0), rows.weights(0));
        let x_across = rows.places(1).plus(&x, -1.0).scaled(degree * outward);
        let w_across = rows.weights(1).plus(&w, -1.0).scaled(degree * outward);
        let (x_along, w_along) = (x.derivative(), w.derivative());
        let cross = |a: &Bernstein<Vector>, b: &Bernstein<Vector>| a.product(b, |p, q| p.cross(&q));
        let by = |a: &Bernstein<Vector>, b: &Bernstein<f64>| a.product(b, |p, q| p * q);
        let normal = if surface.is_rational() {
            by(&cross(&x_across, &x_along), &w)
                .plus(&by(&cross(&x_across, &x), &w_along), -1.0)
                .plus(&by(&cross(&x, &x_along), &w_across), -1.0)
        } else {
            cross(&x_across, &x_along)
        };
        Self {
            across: (!surface.is_rational()).then_some(x_across),
            place: x,
            weight: w,
            normal: normal.scaled(rows.turned()).deflated(),
        }
    }

    /// The part from `range[0]` to `range[1]`; a descending range reverses it.
    pub(super) fn restrict(&self, range: [f64; 2]) -> Self {
        Self {
            place: self.place.restrict(range),
            weight: self.weight.restrict(range),
            normal: self.normal.restrict(range),
            across: self.across.as_ref().map(|a| a.restrict(range)),
        }
    }

    /// The parts before and after `t`.
    pub(super) fn split(&self, t: f64) -> [Self; 2] {
        let (place, weight, normal) = (
            self.place.split(t),
            self.weight.split(t),
            self.normal.split(t),
        );
        [
            Self {
                place: place.0,
                weight: weight.0,
                normal: normal.0,
                across: None,
            },
            Self {
                place: place.1,
                weight: weight.1,
                normal: normal.1,
                across: None,
            },
        ]
    }

    /// Whether all weights are equal.
    pub(super) fn is_polynomial(&self) -> bool {
        self.weight
            .0
            .iter()
            .all(|w| w.to_bits() == self.weight.0[0].to_bits())
    }

    /// The same strip after t = lambda tau / (1 - tau + lambda tau): in
    /// homogeneous coordinates coefficient i is multiplied by lambda^i.
    pub(super) fn reparametrised(mut self, lambda: f64) -> Self {
        fn scale<T: crate::bezier::bernstein::Coefficient>(a: &mut Bernstein<T>, lambda: f64) {
            let mut factor = 1.0;
            for value in &mut a.0 {
                *value = *value * factor;
                factor *= lambda;
            }
        }
        if !self.is_polynomial() {
            scale(&mut self.place, lambda);
            scale(&mut self.weight, lambda);
            scale(&mut self.normal, lambda);
        }
        self
    }

    /// The same with the normal turned over.
    pub(super) fn opposed(mut self) -> Self {
        self.normal = self.normal.scaled(-1.0);
        self
    }

    /// The unit normal at `t`, `None` where it vanishes.
    pub(super) fn unit_normal(&self, t: f64) -> Option<Vector> {
        let normal = self.normal.eval(t);
        let length = normal.norm();
        (length > f64::MIN_POSITIVE).then(|| normal / length)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::topology::test_sets::{net, revolved};
    use approx::assert_relative_eq;

    #[test]
    fn strip_normals_are_the_surface_normals() {
        let s = 0.5_f64.sqrt();
        let octant = revolved(&[(0.0, -2.0, 1.0), (2.0, -2.0, s), (2.0, 0.0, 1.0)]).remove(0);
        let wavy = net((3, 4), |u, v| {
            (u, v + 0.2 * u * u, (3.0 * u + 2.0 * v).sin())
        });
        for surface in [octant, wavy] {
            for side in Side::ALL {
                let origin = Point::new(0.3, 0.1, -0.2);
                let strip = Strip::new(&surface, side, &origin);
                for k in 0..=10 {
                    let t = f64::from(k) / 10.0;
                    let [u, v] = side.at(t);
                    // A pole is one point: it has no strip.
                    let Some(normal) = surface
                        .jet(u + (0.5 - u) * 1e-7, v + (0.5 - v) * 1e-7)
                        .normal()
                    else {
                        continue;
                    };
                    if strip.normal.0.iter().all(|x| x.norm() < 1e-12) {
                        continue;
                    }
                    let found = strip.unit_normal(t).unwrap();
                    assert_relative_eq!(found, normal, epsilon = 1e-5);
                }
            }
        }
    }
}
