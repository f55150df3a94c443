//! Places of the surface near a point: from a place nearby, over borders on the way.

use super::{Spot, Task};
use crate::bezier::{BezierPatch, Side};
use crate::patch_set::PieceId;
use crate::scalar::{Point, Vector};
use crate::topology::EdgeId;

/// Steps of a projection.
const STEPS: usize = 4;

impl Task<'_> {
    pub(super) fn surface(&self, piece: PieceId) -> &BezierPatch {
        &self.set.pieces()[piece.index()].surface
    }

    /// Where to begin to look for a spot's like on another piece: across its
    /// border if it lies on one.
    pub(super) fn guess(&self, spot: Spot, piece: PieceId, other: [f64; 2]) -> [f64; 2] {
        let like = self.beyond(spot).into_iter().find(|s| s.piece == piece);
        if let Some(like) = like {
            return like.uv;
        }
        other
    }

    /// The nearest place of a piece, by steps that keep to its square.
    pub(super) fn foot(&self, piece: PieceId, from: [f64; 2], point: &Point) -> [f64; 2] {
        let surface = self.surface(piece);
        let mut uv = from;
        let mut best = (f64::INFINITY, uv);
        for _ in 0..=STEPS {
            let (place, du, dv) = surface.frame(uv[0], uv[1]);
            let away = point - place;
            if away.norm_squared() < best.0 {
                best = (away.norm_squared(), uv);
            }
            let Some(step) = step(&du, &dv, &away) else {
                break;
            };
            let next = inside(uv, step);
            // On a side it slides along it.
            let same = |p: [f64; 2]| p.map(f64::to_bits) == uv.map(f64::to_bits);
            let next = if same(next) {
                slid(uv, &du, &dv, &away)
            } else {
                next
            };
            if same(next) {
                break;
            }
            uv = next;
        }
        best.1
    }

    /// The nearest place to a point, from a place near it and over the borders it
    /// meets on the way, and the distance.
    pub(super) fn settled(&self, from: Spot, point: &Point) -> (Spot, f64) {
        let away = |spot: Spot| {
            let [u, v] = spot.uv;
            (self.surface(spot.piece).eval(u, v) - point).norm()
        };
        let foot = |spot: Spot| {
            let uv = self.foot(spot.piece, spot.uv, point);
            let spot = Spot { uv, ..spot };
            (spot, away(spot))
        };
        let mut best = foot(from);
        for _ in 0..4 {
            let mut next = best;
            for over in self.beyond(best.0) {
                let other = foot(over);
                if other.1 < next.1 {
                    next = other;
                }
            }
            if next.1 >= best.1 {
                break;
            }
            best = next;
        }
        best
    }

    /// The places of other pieces that a place on a border is joined to.
    fn beyond(&self, spot: Spot) -> Vec<Spot> {
        let [u, v] = spot.uv;
        let mut found = Vec::new();
        for (side, on, t) in [
            (Side::U0, u <= 0.0, v),
            (Side::U1, u >= 1.0, v),
            (Side::V0, v <= 0.0, u),
            (Side::V1, v >= 1.0, u),
        ] {
            if !on {
                continue;
            }
            let edge = &self.topology.edges()[EdgeId::of(spot.piece, side).index()];
            let spans = &self.topology.spans()[edge.spans.clone()];
            for span in spans.iter().filter(|s| s.t[0] <= t && t <= s.t[1]) {
                let seam = &self.topology.seams()[span.seam.index()];
                for id in &seam.spans {
                    let to = &self.topology.spans()[id.index()];
                    if to.edge == span.edge {
                        continue;
                    }
                    let along = (t - span.t[0]) / (span.t[1] - span.t[0]);
                    let along = if to.reversed == span.reversed {
                        along
                    } else {
                        1.0 - along
                    };
                    let at = to.t[0] * (1.0 - along) + to.t[1] * along;
                    found.push(Spot {
                        piece: to.edge.piece(),
                        uv: to.edge.side().at(at),
                    });
                }
            }
        }
        found
    }
}

/// (a, b) of the step a S_u + b S_v nearest to a vector.
fn step(du: &Vector, dv: &Vector, away: &Vector) -> Option<[f64; 2]> {
    let (e, f, g) = (du.norm_squared(), du.dot(dv), dv.norm_squared());
    let determinant = e * g - f * f;
    if determinant <= 1e-12 * e * g || determinant <= 0.0 {
        return None;
    }
    let (p, q) = (away.dot(du), away.dot(dv));
    Some([(p * g - q * f) / determinant, (q * e - p * f) / determinant])
}

/// A step that ends where it leaves the unit square.
fn inside(uv: [f64; 2], step: [f64; 2]) -> [f64; 2] {
    let mut fraction = 1.0_f64;
    for k in 0..2 {
        let to = uv[k] + step[k];
        if to < 0.0 {
            fraction = fraction.min(-uv[k] / step[k]);
        } else if to > 1.0 {
            fraction = fraction.min((1.0 - uv[k]) / step[k]);
        }
    }
    let fraction = fraction.max(0.0);
    // Ends are ends exactly.
    [0, 1].map(|k| {
        let to = uv[k] + fraction * step[k];
        if to < 1e-14 {
            0.0
        } else if to > 1.0 - 1e-14 {
            1.0
        } else {
            to
        }
    })
}

/// A step along the side or sides a place lies on.
fn slid([u, v]: [f64; 2], du: &Vector, dv: &Vector, away: &Vector) -> [f64; 2] {
    let along = |t: f64, d: &Vector| {
        let speed = d.norm_squared();
        if speed > 0.0 {
            (t + away.dot(d) / speed).clamp(0.0, 1.0)
        } else {
            t
        }
    };
    let on_u = u <= 0.0 || u >= 1.0;
    let on_v = v <= 0.0 || v >= 1.0;
    if on_u && !on_v {
        [u, along(v, dv)]
    } else if on_v && !on_u {
        [along(u, du), v]
    } else {
        // In a corner: along the side that leads on.
        let (x, y) = (along(u, du), along(v, dv));
        if (x - u).abs() * du.norm() > (y - v).abs() * dv.norm() {
            [x, v]
        } else {
            [u, y]
        }
    }
}
