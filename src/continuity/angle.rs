//! The angle of two tangent planes along a seam, bracketed.
//!
//! ```text
//! tan(angle) = |N1 x N2| / (N1 . N2) <= max |c_k| / d_k
//! ```
//!
//! N1 and N2 are polynomial normals along the seam ([`super::strip`]), c_k and
//! d_k the Bernstein coefficients of their cross and dot products; the quotient
//! is a rational Bezier curve with weights d_k, so its control points bound it
//! (convex hull property). Beyond 90 degrees the cotangent is bounded alike.
//! Along a seam of one parametrisation this *proves* the angle; it is the
//! determinant criterion of Liu and Hoschek (1989) and DeRose (1990) in
//! another dress: for two polynomial sides that share a tangent T,
//! N1 x N2 = +- det(A1, T, A2) T, so the c_k vanish together with the nine
//! coefficients (two bicubics) of the determinant. Where the parametrisations
//! differ, the second normal is taken at the nearest place, which is known as a
//! polynomial with a proved remainder ([`super::follow`]), and the square of the
//! tangent is bounded in the same form. The part with the largest bound is
//! halved until the bound meets what is attained.

use super::follow::Follow;
use super::matched::Matched;
use super::strip::Strip;
use super::taylor::{Taylor, cross, dot};
use crate::patch_set::PatchSet;
use crate::scalar::{Bracket, Vector};
use crate::topology::{Contact, EdgeId, normals_agree};

/// Parts after which a bracket stays as wide as it is.
const PARTS: usize = 256;

/// A bracket stops being narrowed at this ratio.
const RATIO: f64 = 1.015;

/// Angles below this, in radians, are not told from zero (1e-6 degrees).
const FLOOR: f64 = 1.745e-8;

/// A determinant below this fraction of what it could be is rounding.
const SAME: f64 = 1e-12;

/// The common stretch of two edges, run from end to end together.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Meeting {
    /// The two edges.
    pub edges: [EdgeId; 2],
    /// From and to on the first.
    pub first: [f64; 2],
    /// From and to on the second.
    pub second: [f64; 2],
}

/// A bracketed angle, and where its attained figure is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Angle {
    /// In degrees, 0 to 180. `proved` is 180 where nothing could be proved.
    pub bracket: Bracket,
    /// The parameters on both edges where `bracket.attained` is reached.
    pub at: [f64; 2],
    /// Whether the coefficients of det(A1, T, A2) vanish to rounding, and the
    /// normals point to one side: that proves the tangent planes equal all
    /// along. Only where two polynomial sides share their parametrisation.
    pub by_determinant: bool,
}

impl Meeting {
    /// The stretch of a contact.
    #[must_use]
    pub fn of(contact: &Contact) -> Self {
        Self {
            edges: contact.edges,
            first: contact.first,
            second: contact.second,
        }
    }

    /// Whether the stated normals of the two patches point to one side of the
    /// joined surface. Decided by the sides alone: neighbours run opposite
    /// ways round their common edge.
    #[must_use]
    pub fn normals_agree(&self, set: &PatchSet) -> bool {
        normals_agree(set, self.edges, self.first, self.second)
    }

    /// The bracketed angle along the stretch, the orientation settled as
    /// [`Meeting::normals_agree`] says: 0 goes on smoothly, 180 folds back.
    #[must_use]
    pub fn angle(&self, set: &PatchSet) -> Angle {
        self.angle_of(set, &Matched::new(self, set))
    }

    pub(super) fn angle_of(&self, set: &PatchSet, matched: &Matched) -> Angle {
        Sides::new(self, set, matched).bracket()
    }

    /// The largest angle at nine places, in degrees: sampled, for deciding
    /// where vertex normals are shared.
    #[must_use]
    pub fn sampled_angle_deg(&self, set: &PatchSet) -> f64 {
        let matched = Matched::new(self, set);
        let sides = Sides::new(self, set, &matched);
        (0..=8)
            .filter_map(|k| sides.angle_at(f64::from(k) / 8.0, None))
            .fold(0.0, |worst, (angle, _)| angle.max(worst))
            .to_degrees()
    }

    /// A place on the stretch, 0 to 1, as parameters of both edges.
    #[must_use]
    pub fn at(&self, x: f64) -> [f64; 2] {
        [self.first, self.second].map(|r| r[0] * (1.0 - x) + r[1] * x)
    }
}

/// Both sides of a meeting, on one parameter 0 to 1.
pub(super) struct Sides<'a> {
    strips: [Strip; 2],
    matched: &'a Matched,
}

struct Part {
    s: [f64; 2],
    t: [f64; 2],
    strips: [Strip; 2],
    upper: f64,
}

impl<'a> Sides<'a> {
    pub(super) fn new(meeting: &Meeting, set: &PatchSet, matched: &'a Matched) -> Self {
        let ranges = [meeting.first, meeting.second];
        let mut strips = [0, 1].map(|k| {
            let surface = &set.pieces()[meeting.edges[k].piece().index()].surface;
            Strip::new(surface, meeting.edges[k].side(), &matched.origin)
                .restrict(ranges[k])
                .reparametrised(matched.lambda[k])
        });
        let flipped = meeting.edges.map(|e| set.patch_of(e.piece()).flipped);
        if (flipped[0] != flipped[1]) == meeting.normals_agree(set) {
            strips[1] = strips[1].clone().opposed();
        }
        Self { strips, matched }
    }

    /// Angle in radians at place `s` of the first edge and the nearest place
    /// of the second, whose parameter is returned.
    pub(super) fn angle_at(&self, s: f64, guess: Option<f64>) -> Option<(f64, f64)> {
        let t = self.matched.foot(s, guess);
        let a = self.strips[0].unit_normal(s)?;
        let b = self.strips[1].unit_normal(t)?;
        Some((a.cross(&b).norm().atan2(a.dot(&b)), t))
    }

    /// See [`Angle::by_determinant`].
    fn determinant_vanishes(&self) -> bool {
        if !self.matched.aligned() {
            return false;
        }
        let [Some(a), Some(b)] = self.strips.each_ref().map(|s| s.across.as_ref()) else {
            return false;
        };
        let along = self.strips[0].place.derivative();
        let turned = along.product(b, |t, b: Vector| t.cross(&b));
        let determinant = a.product(&turned, |a: Vector, b: Vector| a.dot(&b));
        let largest = |list: &[Vector]| list.iter().map(Vector::norm).fold(0.0, f64::max);
        let scale = largest(&a.0) * largest(&b.0) * largest(&along.0);
        let [n, m] = self.strips.each_ref().map(|s| &s.normal);
        let agree = n.product(m, |p: Vector, q: Vector| p.dot(&q));
        determinant.0.iter().all(|c| c.abs() <= SAME * scale) && agree.0.iter().all(|d| *d > 0.0)
    }

    /// Proved bound of the angle over a part whose edges run at speeds of their
    /// own, in radians; `None` where nothing can be proved.
    fn followed_bound(&self, follow: &Follow, s: [f64; 2], t: [f64; 2]) -> Option<f64> {
        let guess = t[0].midpoint(t[1]);
        let (area, y) = follow.over(&self.matched.curves, s, guess)?;
        let models = |strip: &Strip, range: [f64; 2], y: Option<&Taylor>| {
            let part = strip.normal.restrict(range);
            Taylor::of_vectors(&part.0, y)
        };
        let a = models(&self.strips[0], s, None)?;
        let b = models(&self.strips[1], area, Some(&y))?;
        let (sines, cosine) = (cross(&a, &b), dot(&a, &b));
        let square = dot(&sines, &sines);
        let root = |x: f64| x.max(0.0).sqrt();
        if let Some(inverse) = cosine.power(-1.0) {
            let tangent = square.times(&inverse).times(&inverse);
            return Some(root(tangent.most()).atan());
        }
        // Obtuse: by the cotangent, which is largest where the sine is least.
        let least = root(square.range()[0]);
        let [low, _] = cosine.range();
        let bent = match square.power(-1.0) {
            Some(inverse) => root(cosine.times(&cosine).times(&inverse).most()),
            None => f64::INFINITY,
        };
        let plain = if least > 0.0 {
            (-low).max(0.0) / least
        } else {
            f64::INFINITY
        };
        Some(std::f64::consts::FRAC_PI_2 + bent.min(plain).atan())
    }

    fn bracket(&self) -> Angle {
        let mut best = (0.0, 0.0, 0.0);
        let mut raise = |found: Option<(f64, f64)>, s: f64| {
            if let Some((angle, t)) = found {
                best = if angle > best.0 { (angle, s, t) } else { best };
            }
            best.0
        };
        let follow = (!self.matched.aligned())
            .then(|| Follow::new(&self.matched.curves, &self.matched.origin));
        let bound = |strips: &[Strip; 2], s: [f64; 2], t: [f64; 2]| match &follow {
            None => angle_bound(strips),
            Some(follow) => self
                .followed_bound(follow, s, t)
                .unwrap_or(std::f64::consts::PI),
        };
        let mut attained = 0.0;
        for s in [0.0, 1.0, 0.5] {
            attained = raise(self.angle_at(s, None), s);
        }
        let whole = Part {
            s: [0.0, 1.0],
            t: [0.0, 1.0],
            strips: self.strips.clone(),
            upper: bound(&self.strips, [0.0, 1.0], [0.0, 1.0]),
        };
        let mut parts = vec![whole];
        let mut proved = std::f64::consts::PI;
        while let Some(worst) =
            (0..parts.len()).max_by(|&i, &j| parts[i].upper.total_cmp(&parts[j].upper))
        {
            proved = parts[worst].upper;
            if proved <= (attained * RATIO).max(FLOOR) || parts.len() >= PARTS {
                break;
            }
            let part = parts.swap_remove(worst);
            let s = part.s[0].midpoint(part.s[1]);
            let middle = part.t[0].midpoint(part.t[1]);
            let found = self.angle_at(s, Some(middle));
            attained = raise(found, s);
            let width = part.t[1] - part.t[0];
            let x = match found {
                Some((_, t)) if !self.matched.aligned() && width > 0.0 => {
                    ((t - part.t[0]) / width).clamp(1.0 / 16.0, 15.0 / 16.0)
                }
                _ => 0.5,
            };
            let t = part.t[0] + x * width;
            let [a, b] = part.strips;
            let ([a0, a1], [b0, b1]) = (a.split(0.5), b.split(x));
            for (s, t, strips) in [
                ([part.s[0], s], [part.t[0], t], [a0, b0]),
                ([s, part.s[1]], [t, part.t[1]], [a1, b1]),
            ] {
                let upper = bound(&strips, s, t).min(part.upper);
                parts.push(Part {
                    s,
                    t,
                    strips,
                    upper,
                });
            }
        }
        Angle {
            bracket: Bracket {
                proved: proved.to_degrees().max(best.0.to_degrees()),
                attained: best.0.to_degrees(),
            },
            at: self.matched.on_edges([best.1, best.2]),
            by_determinant: best.0 <= FLOOR && self.determinant_vanishes(),
        }
    }
}

/// Proved bound of the angle over a part, in radians, see the module.
fn angle_bound(strips: &[Strip; 2]) -> f64 {
    let [a, b] = [&strips[0].normal, &strips[1].normal];
    let cross = a.product(b, |p, q| p.cross(&q));
    let dot = a.product(b, |p: Vector, q: Vector| p.dot(&q));
    let mut bound = std::f64::consts::PI;
    if dot.0.iter().all(|d| *d > 0.0) {
        let tangent = cross
            .0
            .iter()
            .zip(&dot.0)
            .map(|(c, d)| c.norm() / d)
            .fold(0.0, f64::max);
        bound = tangent.atan();
    } else {
        let axis: Vector = cross.eval(0.5);
        let length = axis.norm();
        if length > 0.0 {
            let sines: Vec<f64> = cross.0.iter().map(|c| c.dot(&axis) / length).collect();
            if sines.iter().all(|s| *s > 0.0) {
                let cotangent = sines
                    .iter()
                    .zip(&dot.0)
                    .map(|(s, d)| -d / s)
                    .fold(0.0, f64::max);
                bound = std::f64::consts::FRAC_PI_2 + cotangent.atan();
            }
        }
    }
    bound
}
