//! Explicit isotropic remeshing (Botsch and Kobbelt 2004) with points carried on
//! the patches.
//!
//! Edges much longer than the size are split, much shorter ones collapsed, edges
//! flipped to Delaunay's criterion (cot a + cot b >= 0 for the angles across), and
//! free vertices moved to the mean of their triangles' circumcentres, weighted by
//! area over size^4 (Chen 2004). A step that would turn a facet against the surface
//! is not taken.

use super::atlas::{Atlas, Place, Spot};
use super::field::Field;
use super::region::{NONE, Region, Vertex};
use crate::scalar::{Point, Vector};

/// Edges beyond these parts of the size are split and collapsed.
const LONG: f64 = 4.0 / 3.0;
const SHORT: f64 = 0.8;

/// An edge this short is collapsed even if that leaves long ones.
const TINY: f64 = 0.4;

/// A facet may lean from the mean normal at its corners by this cosine.
const UPRIGHT: f64 = 0.3;

/// A vertex closer to its balance than this part of the size stays.
const STILL: f64 = 0.01;

/// Rounds more at most, while the mean aspect ratio is above the aim.
const MORE: usize = 8;
const AIM: f64 = 1.11;

/// Passes of flips at most: on a curved surface flips may run in circles.
const FLIPS: usize = 10;

/// A region being remeshed.
pub(super) struct Remesher<'a> {
    pub(super) atlas: &'a Atlas<'a>,
    pub(super) field: &'a Field,
    pub(super) region: Region,
}

/// A vertex at a spot.
pub(super) fn vertex(atlas: &Atlas, field: &Field, spot: Spot) -> Vertex {
    let normal = atlas.normal(&spot);
    Vertex {
        spot,
        normal: normal.try_normalize(0.0).unwrap_or_else(Vector::zeros),
        size: field.at(spot.place),
        border: NONE,
        fixed: false,
    }
}

/// cot of the angle at `c` between `a` and `b`.
fn cotangent(c: &Point, a: &Point, b: &Point) -> f64 {
    let (p, q) = (a - c, b - c);
    p.dot(&q) / p.cross(&q).norm()
}

impl Remesher<'_> {
    /// The whole of it.
    pub(super) fn run(&mut self) {
        self.collapse_short();
        self.split_long();
        self.flip_all();
        self.smooth();
        self.smooth();
        self.flip_all();
        self.collapse_short();
        self.split_long();
        for _ in 0..2 {
            self.flip_all();
            self.smooth();
        }
        self.flip_all();
        // Where parameters are sheared the start was a poor one.
        for _ in 0..MORE {
            if self.mean_aspect() <= AIM {
                break;
            }
            self.collapse_short();
            self.split_long();
            self.flip_all();
            self.smooth();
            self.smooth();
            self.flip_all();
        }
    }

    /// The mean aspect ratio: longest edge times perimeter over 4 sqrt 3 areas.
    fn mean_aspect(&self) -> f64 {
        let (mut sum, mut count) = (0.0, 0.0);
        for t in self.region.triangles.iter().filter(|t| t[0] != NONE) {
            let [p, q, r] = t.map(|v| self.region.point(v));
            let lengths = [(q - p).norm(), (r - q).norm(), (p - r).norm()];
            let longest = lengths.iter().copied().fold(0.0, f64::max);
            let perimeter: f64 = lengths.iter().sum();
            let area = 0.5 * (q - p).cross(&(r - p)).norm();
            if area > 0.0 {
                sum += longest * perimeter / (4.0 * 3.0_f64.sqrt() * area);
                count += 1.0;
            }
        }
        sum / f64::max(count, 1.0)
    }

    pub(super) fn size_of(&self, a: u32, b: u32) -> f64 {
        let v = &self.region.vertices;
        0.5 * (v[a as usize].size + v[b as usize].size)
    }

    /// Whether a facet with these corners and normals faces outward.
    pub(super) fn upright(points: [&Point; 3], normals: [&Vector; 3]) -> bool {
        let cross = (points[1] - points[0]).cross(&(points[2] - points[0]));
        let mean = normals[0] + normals[1] + normals[2];
        let along = cross.dot(&mean);
        let (square, size) = (cross.norm_squared(), mean.norm_squared());
        if size <= 0.0 {
            return square > 0.0;
        }
        along > 0.0 && along * along > UPRIGHT * UPRIGHT * square * size
    }

    fn faces_out(&self, corners: [u32; 3]) -> bool {
        let v = corners.map(|c| &self.region.vertices[c as usize]);
        Self::upright(v.map(|v| &v.spot.point), v.map(|v| &v.normal))
    }

    /// Whether all triangles round `goes` that stay would face outward with `keep`
    /// in its place, and none of their edges be longer than `most` sizes.
    pub(super) fn may_collapse(&self, goes: u32, keep: u32, most: f64) -> bool {
        let region = &self.region;
        region.around(goes).all(|h| {
            let t = region.triangles[h as usize / 3];
            if t.contains(&keep) {
                return true;
            }
            let corners = t.map(|c| if c == goes { keep } else { c });
            let short = corners.iter().filter(|c| **c != keep).all(|&c| {
                let away = region.point(c) - region.point(keep);
                away.norm() <= most * self.size_of(c, keep)
            });
            short && self.faces_out(corners)
        })
    }

    /// Collapses edges that are too short.
    pub(super) fn collapse_short(&mut self) {
        for h in 0..self.region.half_edges() {
            if self.region.is_gone(h) || self.region.twin(h) == NONE || self.region.twin(h) < h {
                continue;
            }
            let (a, b) = (self.region.origin(h), self.region.end(h));
            let length = (self.region.point(a) - self.region.point(b)).norm();
            let part = length / self.size_of(a, b);
            if part < SHORT {
                let most = if part < TINY { 2.0 } else { LONG };
                self.collapse(h, most);
            }
        }
    }

    /// Collapses one edge if an end of it may go.
    pub(super) fn collapse(&mut self, h: u32, most: f64) -> bool {
        let (a, b) = (self.region.origin(h), self.region.end(h));
        let free = |v: u32| !self.region.vertices[v as usize].fixed;
        let choice = [(b, a), (a, b)]
            .into_iter()
            .find(|&(goes, keep)| free(goes) && self.may_collapse(goes, keep, most));
        let Some((_, keep)) = choice.filter(|_| self.region.can_collapse(h)) else {
            return false;
        };
        self.region.collapse(h, keep);
        true
    }

    /// Splits edges that are too long.
    fn split_long(&mut self) {
        let mut h = 0;
        // New edges are looked at too.
        while h < self.region.half_edges() {
            if !self.region.is_gone(h) && self.region.twin(h) != NONE {
                let (a, b) = (self.region.origin(h), self.region.end(h));
                let length = (self.region.point(a) - self.region.point(b)).norm();
                if length > LONG * self.size_of(a, b) {
                    self.split(h);
                }
            }
            h += 1;
        }
    }

    /// The surface in the middle of an edge.
    pub(super) fn middle(&self, a: u32, b: u32) -> Spot {
        let (p, q) = (
            &self.region.vertices[a as usize].spot,
            &self.region.vertices[b as usize].spot,
        );
        let target = halfway(&p.point, &q.point);
        if p.place.piece == q.place.piece {
            let uv = [0, 1].map(|k| 0.5 * (p.place.uv[k] + q.place.uv[k]));
            let half = self.atlas.spot(Place {
                piece: p.place.piece,
                uv,
            });
            return self.atlas.toward(&half, &target, 1);
        }
        // From the end whose frame is the sounder one.
        let from = if p.du.cross(&p.dv).norm() >= q.du.cross(&q.dv).norm() {
            p
        } else {
            q
        };
        self.atlas.toward(from, &target, 3)
    }

    /// Splits one edge in the middle, unless that would fold the mesh.
    pub(super) fn split(&mut self, h: u32) -> bool {
        let g = self.region.twin(h);
        let (a, b, c) = (
            self.region.origin(h),
            self.region.end(h),
            self.region.apex(h),
        );
        let d = self.region.apex(g);
        let new = vertex(self.atlas, self.field, self.middle(a, b));
        let at = |v: u32| &self.region.vertices[v as usize];
        let sound = [(a, c), (c, b), (b, d), (d, a)].iter().all(|&(p, q)| {
            let (p, q) = (at(p), at(q));
            Self::upright(
                [&q.spot.point, &p.spot.point, &new.spot.point],
                [&q.normal, &p.normal, &new.normal],
            )
        });
        if sound {
            self.region.split(h, new);
        }
        sound
    }

    /// Flips edges until Delaunay's criterion holds, or for some passes.
    pub(super) fn flip_all(&mut self) {
        for _ in 0..FLIPS {
            let mut flipped = 0;
            for h in 0..self.region.half_edges() {
                if self.region.is_gone(h) {
                    continue;
                }
                let g = self.region.twin(h);
                if g != NONE && g > h && self.wants_flip(h) {
                    self.region.flip(h);
                    flipped += 1;
                }
            }
            if flipped == 0 {
                break;
            }
        }
    }

    fn wants_flip(&self, h: u32) -> bool {
        let region = &self.region;
        let (a, b) = (region.origin(h), region.end(h));
        let (c, d) = (region.apex(h), region.apex(region.twin(h)));
        let [p, q, r, s] = [a, b, c, d].map(|v| region.point(v));
        let before = cotangent(&r, &p, &q) + cotangent(&s, &p, &q);
        // What is no number is a triangle without area.
        if before >= -1e-9 || !self.may_flip(h) {
            return false;
        }
        cotangent(&p, &r, &s) + cotangent(&q, &r, &s) > before
    }

    /// Whether an edge can be flipped without folding the mesh or doubling an edge.
    pub(super) fn may_flip(&self, h: u32) -> bool {
        let region = &self.region;
        let (a, b) = (region.origin(h), region.end(h));
        let (c, d) = (region.apex(h), region.apex(region.twin(h)));
        c != d
            && self.faces_out([a, d, c])
            && self.faces_out([b, c, d])
            && region.neighbours(c).all(|x| x != d)
    }

    /// Moves every free vertex once.
    pub(super) fn smooth(&mut self) {
        for v in 0..self.region.vertices.len() {
            let v = u32::try_from(v).expect("counts are limited before the run");
            if self.region.leaving[v as usize] == NONE || self.region.vertices[v as usize].fixed {
                continue;
            }
            if let Some(target) = self.balanced(v) {
                let of = &self.region.vertices[v as usize];
                if (target - of.spot.point).norm() > STILL * of.size {
                    self.move_to(v, &target, 1);
                }
            }
        }
    }

    /// The weighted mean of the circumcentres round a vertex.
    fn balanced(&self, v: u32) -> Option<Point> {
        let region = &self.region;
        let centre = region.point(v);
        let own = region.vertices[v as usize].size;
        let (mut sum, mut weights) = (Vector::zeros(), 0.0);
        for h in region.around(v) {
            let (b, c) = (region.end(h), region.apex(h));
            let (p, q) = (region.point(b) - centre, region.point(c) - centre);
            let cross = p.cross(&q);
            let square = cross.norm_squared();
            if square <= 0.0 {
                return None;
            }
            let (pp, qq) = (p.norm_squared(), q.norm_squared());
            let away = (cross.cross(&p) * qq + q.cross(&cross) * pp) / (2.0 * square);
            let size = region.vertices[b as usize].size + region.vertices[c as usize].size + own;
            let weight = square.sqrt() / size.powi(4);
            // A circumcentre far outside says little.
            let reach = away.norm();
            let most = 0.5 * size;
            let away = if reach > most {
                away * (most / reach)
            } else {
                away
            };
            sum += away * weight;
            weights += weight;
        }
        Some(centre + sum / weights)
    }

    /// Moves a vertex towards a target, as far as the mesh stays upright.
    pub(super) fn move_to(&mut self, v: u32, target: &Point, steps: usize) -> bool {
        let spot = self.region.vertices[v as usize].spot;
        let mut goal = *target;
        for _ in 0..3 {
            let moved = vertex(
                self.atlas,
                self.field,
                self.atlas.toward(&spot, &goal, steps),
            );
            if self.fits(v, &moved) {
                self.region.vertices[v as usize] = moved;
                return true;
            }
            goal = halfway(&spot.point, &goal);
        }
        false
    }

    /// Whether all triangles round a vertex face outward with it moved.
    pub(super) fn fits(&self, v: u32, moved: &Vertex) -> bool {
        self.region.around(v).all(|h| {
            let at = |v: u32| &self.region.vertices[v as usize];
            let (b, c) = (at(self.region.end(h)), at(self.region.apex(h)));
            Self::upright(
                [&moved.spot.point, &b.spot.point, &c.spot.point],
                [&moved.normal, &b.normal, &c.normal],
            )
        })
    }
}

/// Half way between two points.
pub(super) fn halfway(a: &Point, b: &Point) -> Point {
    Point::from((a.coords + b.coords) * 0.5)
}
