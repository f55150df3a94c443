//! What one seam asks of the control points, at places along it.
//!
//! ```text
//! gap      e . (S1 - S2) = 0              for directions e
//! angle    n . A2 / p = 0                 n = A1 x T / |A1 x T|
//! change   n . (dA2 - a dA1 - b dT) / p   A2 = a A1 + b T + (n . A2) n
//! ```
//!
//! A is the derivative across, of degree p, T the one along: n . A2 / p is the
//! height of the second row of control points over the first patch's tangent
//! plane, a length like the gap. Polynomials of degree n that meet at more than
//! n places are one; the determinant of two bicubic sides has degree 8, and
//! is looked at in nine places.

use super::basis::Share;
use super::net::{Net, Nets};
use super::smallest::Condition;
use crate::bezier::{BezierCurve, Side};
use crate::patch_set::{PatchSet, SeamLimits};
use crate::scalar::{Point, Vector};
use crate::topology::{Contact, EdgeId, nearest_from};

/// A place on the edge of one patch.
#[derive(Debug)]
struct Spot {
    patch: usize,
    side: Side,
    /// The shares of control points in S, S_u, S_v, the derivatives by the
    /// parameters of the piece; empty for a patch without a net.
    shares: Vec<Share>,
    /// What stands there where there is no net.
    fixed: [Vector; 3],
    degree: f64,
}

/// A pair of places.
#[derive(Debug)]
struct Sample {
    spots: [Spot; 2],
    axes: Vec<Vector>,
    /// Whether it is an end of the common stretch.
    is_end: bool,
}

/// One seam, as conditions.
#[derive(Debug)]
pub(super) struct Joint {
    /// Its position in the survey; `None` for a smooth line inside a patch.
    pub(super) seam: Option<usize>,
    pub(super) limits: SeamLimits,
    /// Whether the tangent planes have to agree, too.
    pub(super) is_tangent: bool,
    /// How far it was from closed, in units of what it is held to.
    pub(super) opening: f64,
    samples: Vec<Sample>,
    start: Vec<f64>,
}

/// The worst of a joint: in units of what it is held to, and where.
#[derive(Debug, Clone, Copy)]
pub(super) struct Miss {
    pub(super) units: f64,
    pub(super) at: Point,
    pub(super) is_end: bool,
}

impl Spot {
    fn new(set: &PatchSet, nets: &Nets, edge: EdgeId, t: f64) -> Self {
        let side = edge.side();
        let piece = &set.pieces()[edge.piece().index()];
        let patch = piece.patch.index();
        let [u, v] = side.at(t);
        let (m, n) = piece.surface.degree();
        let across = if matches!(side, Side::U0 | Side::U1) {
            m
        } else {
            n
        };
        let jet = piece.surface.jet(u, v);
        let within = piece.patch_parameters([0.5, 0.5]);
        let own = piece.patch_parameters([u, v]);
        let wide = [piece.u[1] - piece.u[0], piece.v[1] - piece.v[0]];
        let shares = nets.list[patch].as_ref().map_or_else(Vec::new, |net| {
            let mut shares = net.basis.at(within, own);
            for share in &mut shares {
                share.r[1] *= wide[0];
                share.r[2] *= wide[1];
            }
            shares.retain(|share| share.r.iter().any(|r| r.abs() > 1e-14));
            shares
        });
        #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
        Self {
            patch,
            side,
            shares,
            fixed: [jet.point.coords, jet.du, jet.dv],
            degree: across as f64,
        }
    }

    fn net<'a>(&self, nets: &'a Nets) -> Option<&'a Net> {
        nets.list[self.patch].as_ref()
    }

    /// Positions of across and along among S, S_u, S_v.
    fn order(&self) -> [usize; 2] {
        match self.side {
            Side::U0 | Side::U1 => [1, 2],
            Side::V0 | Side::V1 => [2, 1],
        }
    }

    /// S, A and T.
    fn state(&self, nets: &Nets) -> [Vector; 3] {
        let [across, along] = self.order();
        let found = match self.net(nets) {
            Some(net) => [0, 1, 2].map(|k| {
                let terms = self.shares.iter();
                terms.fold(Vector::zeros(), |sum, share| {
                    sum + net.points[share.index].coords * share.r[k]
                })
            }),
            None => self.fixed,
        };
        [found[0], found[across], found[along]]
    }

    /// Adds factor c . (the k-th of S, A, T) to a condition.
    fn add(
        &self,
        nets: &Nets,
        column: &impl Fn(usize) -> Option<usize>,
        (k, c): (usize, Vector),
        into: &mut Vec<(usize, Vector)>,
    ) {
        let Some(net) = self.net(nets) else { return };
        let back = net.back(&c);
        let order = self.order();
        let r = if k == 0 { 0 } else { order[k - 1] };
        for share in &self.shares {
            if let Some(at) = column(net.sources[share.index]) {
                into.push((at, back * share.r[r]));
            }
        }
    }
}

impl Joint {
    /// The conditions of the contacts of one seam.
    pub(super) fn new(
        set: &PatchSet,
        nets: &Nets,
        (seam, is_tangent): (Option<usize>, bool),
        limits: SeamLimits,
        contacts: &[&Contact],
    ) -> Self {
        let mut samples = Vec::new();
        for contact in contacts {
            let curves = contact
                .edges
                .map(|e| set.pieces()[e.piece().index()].surface.edge(e.side()));
            let degree = curves[0].degree().max(curves[1].degree());
            let steps = 2 * degree + 2;
            let [first, second] = to_corners(&curves, contact, 2.0 * set.tolerances().search.get());
            #[allow(clippy::cast_precision_loss, reason = "at most 32 places")]
            let x = |k: usize| 0.5 - 0.5 * (std::f64::consts::PI * k as f64 / steps as f64).cos();
            let on = |range: [f64; 2], x: f64| range[0] * (1.0 - x) + range[1] * x;
            // Edges run through alike are matched by parameter.
            let off = (0..=steps)
                .map(|k| {
                    let [s, t] = [on(first, x(k)), on(second, x(k))];
                    (curves[0].eval(s) - curves[1].eval(t)).norm()
                })
                .fold(0.0, f64::max);
            let alike = off <= 4.0 * contact.gap.attained + 1e-9 * curves[0].length();
            let (low, high) = (second[0].min(second[1]), second[0].max(second[1]));
            for k in 0..=steps {
                let (s, plain) = (on(first, x(k)), on(second, x(k)));
                let is_end = k == 0 || k == steps;
                let t = if alike || is_end {
                    plain
                } else {
                    nearest_from(&curves[1], &curves[0].eval(s), plain, [low, high]).t
                };
                let spots = [
                    Spot::new(set, nets, contact.edges[0], s),
                    Spot::new(set, nets, contact.edges[1], t),
                ];
                let axes = if alike || is_end {
                    vec![Vector::x(), Vector::y(), Vector::z()]
                } else {
                    square_to(&spots[0].state(nets)[2])
                };
                samples.push(Sample {
                    spots,
                    axes,
                    is_end,
                });
            }
        }
        let mut joint = Self {
            seam,
            limits,
            is_tangent,
            samples,
            start: Vec::new(),
            opening: 0.0,
        };
        joint.start = joint.residuals(nets);
        joint.opening = joint.miss(nets, true).units;
        joint
    }

    /// The points of the file that take part.
    pub(super) fn sources(&self, nets: &Nets) -> Vec<usize> {
        let mut found: Vec<usize> = Vec::new();
        for spot in self.samples.iter().flat_map(|s| &s.spots) {
            let Some(net) = spot.net(nets) else { continue };
            let [across, along] = spot.order();
            for share in &spot.shares {
                let in_place = share.r[0].abs().max(share.r[along].abs()) > 1e-12;
                if in_place || (self.is_tangent && share.r[across].abs() > 1e-12) {
                    found.push(net.sources[share.index]);
                }
            }
        }
        found.sort_unstable();
        found.dedup();
        found
    }

    /// The patches that take part and have a net.
    pub(super) fn has_net(&self, nets: &Nets) -> bool {
        let mut spots = self.samples.iter().flat_map(|s| &s.spots);
        spots.any(|spot| spot.net(nets).is_some())
    }

    /// The patch names at the ends that lie near a place.
    pub(super) fn patches_at(&self, nets: &Nets, at: &Point, near: f64) -> Vec<usize> {
        let ends = self.samples.iter().filter(|sample| sample.is_end);
        ends.flat_map(|sample| &sample.spots)
            .filter(|spot| (spot.state(nets)[0] - at.coords).norm() <= near)
            .map(|spot| spot.patch)
            .collect()
    }

    fn residuals(&self, nets: &Nets) -> Vec<f64> {
        let mut found = Vec::new();
        for sample in &self.samples {
            let [first, second] = [0, 1].map(|k| sample.spots[k].state(nets));
            found.extend(sample.axes.iter().map(|e| e.dot(&(first[0] - second[0]))));
            if self.is_tangent {
                let normal = unit(&first[1].cross(&first[2]));
                found.push(normal.dot(&second[1]) / sample.spots[1].degree);
            }
        }
        found
    }

    /// The conditions; `to_nothing` to close gap and angle, else to keep them
    /// what they were at the start.
    pub(super) fn conditions(
        &self,
        nets: &Nets,
        column: &impl Fn(usize) -> Option<usize>,
        to_nothing: bool,
        into: &mut Vec<Condition>,
    ) {
        let residuals = self.residuals(nets);
        let mut wanted = (0..).map(|k: usize| {
            let aim = if to_nothing { 0.0 } else { self.start[k] };
            aim - residuals[k]
        });
        let mut push = |terms: Vec<(usize, Vector)>, value: f64| {
            if !terms.is_empty() {
                into.push(Condition { terms, value });
            }
        };
        for sample in &self.samples {
            let [p, q] = &sample.spots;
            for e in &sample.axes {
                let mut terms = Vec::new();
                p.add(nets, column, (0, *e), &mut terms);
                q.add(nets, column, (0, -e), &mut terms);
                push(terms, wanted.next().unwrap_or(0.0));
            }
            if self.is_tangent {
                let (first, second) = (p.state(nets), q.state(nets));
                let n = unit(&first[1].cross(&first[2])) / q.degree;
                let (a, b) = shares_of(&second[1], &first[1], &first[2]);
                let mut terms = Vec::new();
                q.add(nets, column, (1, n), &mut terms);
                p.add(nets, column, (1, -n * a), &mut terms);
                p.add(nets, column, (2, -n * b), &mut terms);
                push(terms, wanted.next().unwrap_or(0.0));
            }
        }
    }

    /// The worst place: of what is to close, or of what became worse.
    pub(super) fn miss(&self, nets: &Nets, to_close: bool) -> Miss {
        let residuals = self.residuals(nets);
        let off = |k: usize| {
            let allowed = if to_close { 0.0 } else { self.start[k].abs() };
            (residuals[k].abs() - allowed).max(0.0)
        };
        let mut worst = Miss {
            units: 0.0,
            at: Point::origin(),
            is_end: false,
        };
        let mut k = 0;
        for sample in &self.samples {
            let state = sample.spots[1].state(nets);
            let mut units = 0.0_f64;
            for _ in &sample.axes {
                units = units.max(off(k) / self.limits.gap.value);
                k += 1;
            }
            if self.is_tangent {
                let height = state[1].norm() / sample.spots[1].degree;
                let angle = self.limits.tangent_deg.value.to_radians() * height;
                if angle > 0.0 {
                    units = units.max(off(k) / angle);
                }
                k += 1;
            }
            if units > worst.units {
                worst = Miss {
                    units,
                    at: Point::from(state[0]),
                    is_end: sample.is_end,
                };
            }
        }
        worst
    }
}

/// The common stretch, with its ends at the corners where both edges have one
/// nearby: what gapes is to close corner to corner.
fn to_corners(curves: &[BezierCurve; 2], contact: &Contact, near: f64) -> [[f64; 2]; 2] {
    let corner = |curve: &BezierCurve, t: f64| {
        let end = if t < 0.5 { 0.0 } else { 1.0 };
        ((curve.eval(end) - curve.eval(t)).norm() <= near).then_some(end)
    };
    let (mut first, mut second) = (contact.first, contact.second);
    for k in 0..2 {
        let ends = (corner(&curves[0], first[k]), corner(&curves[1], second[k]));
        if let (Some(s), Some(t)) = ends {
            (first[k], second[k]) = (s, t);
        }
    }
    [first, second]
}

fn unit(v: &Vector) -> Vector {
    v.try_normalize(0.0).unwrap_or_else(Vector::zeros)
}

/// (a, b) of a A + b T nearest to a vector.
fn shares_of(of: &Vector, a: &Vector, t: &Vector) -> (f64, f64) {
    let (e, f, g) = (a.dot(a), a.dot(t), t.dot(t));
    let det = e * g - f * f;
    if det <= 1e-18 * e * g {
        return (0.0, 0.0);
    }
    let (p, q) = (of.dot(a), of.dot(t));
    ((p * g - q * f) / det, (q * e - p * f) / det)
}

/// Two directions square to a tangent.
fn square_to(tangent: &Vector) -> Vec<Vector> {
    let t = unit(tangent);
    let axis = [Vector::x(), Vector::y(), Vector::z()]
        .into_iter()
        .min_by(|a, b| a.dot(&t).abs().total_cmp(&b.dot(&t).abs()))
        .unwrap_or_else(Vector::x);
    let first = unit(&t.cross(&axis));
    vec![first, t.cross(&first)]
}
