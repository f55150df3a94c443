//! The last pass: triangles with a small angle, one by one.
//!
//! For each the first of these that raises the smallest angle of all triangles it
//! touches is done: flip an edge, collapse an edge, move a corner, split the
//! longest edge. Angles are compared by their cosines.

use super::region::{NONE, Vertex, next};
use super::remesh::{Remesher, vertex};
use crate::scalar::{Point, Vector};

/// Triangles with a smaller angle than this are looked at, degrees.
const AIM_DEG: f64 = 34.0;

/// Rounds at most.
const ROUNDS: usize = 6;

/// What a change must win, in the cosine.
const WIN: f64 = 1e-3;

/// Edges made by a collapse are at most so many sizes.
const LONGEST: f64 = 1.5;

/// The largest cosine of a triangle's angles: that of the smallest angle; 1 for a
/// triangle without area.
pub(super) fn sharpest(p: &Point, q: &Point, r: &Point) -> f64 {
    let (a, b, c) = (r - q, p - r, q - p);
    let (aa, bb, cc) = (a.norm_squared(), b.norm_squared(), c.norm_squared());
    // The smallest angle lies across from the shortest side.
    let (across, s, t) = if aa <= bb && aa <= cc {
        (aa, bb, cc)
    } else if bb <= cc {
        (bb, aa, cc)
    } else {
        (cc, aa, bb)
    };
    let product = (s * t).sqrt();
    if product > 0.0 {
        (s + t - across) / (2.0 * product)
    } else {
        1.0
    }
}

impl Remesher<'_> {
    /// Looks at bad triangles until none is left or nothing helps.
    pub(super) fn mend(&mut self) {
        let aim = AIM_DEG.to_radians().cos();
        let count = u32::try_from(self.region.triangles.len()).expect("limited before the run");
        let bad = |of: &Self, t: u32| {
            let corners = of.region.triangles[t as usize];
            corners[0] != NONE && of.sharpness(corners) > aim
        };
        let mut looked: Vec<u32> = (0..count).filter(|&t| bad(self, t)).collect();
        for _ in 0..ROUNDS {
            let mut touched = Vec::new();
            for &t in &looked {
                if !bad(self, t) {
                    continue;
                }
                let corners = self.region.triangles[t as usize];
                if self.better(t) {
                    touched.extend(corners);
                }
            }
            if touched.is_empty() {
                break;
            }
            // What a change left bad lies round what it touched.
            let region = &self.region;
            let round = |v: u32| region.around(v).chain(region.around(v).map(next));
            let mut again: Vec<u32> = touched
                .into_iter()
                .filter(|&v| region.leaving[v as usize] != NONE)
                .flat_map(|v| {
                    let beyond = round(v).map(|h| region.twin(h)).filter(|h| *h != NONE);
                    round(v).chain(beyond).map(|h| h / 3).collect::<Vec<u32>>()
                })
                .chain(looked.iter().copied())
                .collect();
            again.sort_unstable();
            again.dedup();
            looked = again;
        }
    }

    pub(super) fn sharpness(&self, [a, b, c]: [u32; 3]) -> f64 {
        sharpest(
            &self.region.point(a),
            &self.region.point(b),
            &self.region.point(c),
        )
    }

    /// The worst of the triangles round a vertex.
    fn worst_around(&self, v: u32) -> f64 {
        let region = &self.region;
        region
            .around(v)
            .map(|h| self.sharpness(region.triangles[h as usize / 3]))
            .fold(-1.0, f64::max)
    }

    fn better(&mut self, t: u32) -> bool {
        self.flip_better(t)
            || self.collapse_better(t)
            || self.move_better(t)
            || self.split_better(t)
    }

    fn flip_better(&mut self, t: u32) -> bool {
        let mut best: Option<(f64, u32)> = None;
        for h in 3 * t..3 * t + 3 {
            let g = self.region.twin(h);
            if g == NONE {
                continue;
            }
            let region = &self.region;
            let (a, b) = (region.origin(h), region.end(h));
            let (c, d) = (region.apex(h), region.apex(g));
            let before = self.sharpness([a, b, c]).max(self.sharpness([b, a, d]));
            let after = self.sharpness([a, d, c]).max(self.sharpness([b, c, d]));
            let win = before - after;
            if win > WIN && best.is_none_or(|(w, _)| win > w) && self.may_flip(h) {
                best = Some((win, h));
            }
        }
        if let Some((_, h)) = best {
            self.region.flip(h);
        }
        best.is_some()
    }

    fn collapse_better(&mut self, t: u32) -> bool {
        for h in 3 * t..3 * t + 3 {
            if self.region.twin(h) == NONE {
                continue;
            }
            let (a, b) = (self.region.origin(h), self.region.end(h));
            for (goes, keep) in [(a, b), (b, a)] {
                if self.region.vertices[goes as usize].fixed
                    || !self.may_collapse(goes, keep, LONGEST)
                {
                    continue;
                }
                let before = self.worst_around(goes);
                let region = &self.region;
                let after = region
                    .around(goes)
                    .map(|h| region.triangles[h as usize / 3])
                    .filter(|t| !t.contains(&keep))
                    .map(|t| self.sharpness(t.map(|c| if c == goes { keep } else { c })))
                    .fold(-1.0, f64::max);
                if after < before - WIN && self.region.can_collapse(h) {
                    self.region.collapse(h, keep);
                    return true;
                }
            }
        }
        false
    }

    /// Tries places round each free corner.
    fn move_better(&mut self, t: u32) -> bool {
        const DIRECTIONS: u8 = 8;
        let corners = self.region.triangles[t as usize];
        let mut any = false;
        for v in corners {
            if self.region.vertices[v as usize].fixed {
                continue;
            }
            let mut reach = 0.2 * self.region.vertices[v as usize].size;
            for _ in 0..4 {
                let from = self.region.vertices[v as usize];
                let Some((x, y)) = frame(&from) else { break };
                let mut best = self.worst_around(v) - WIN;
                let mut found = None;
                for k in 0..DIRECTIONS {
                    let turn = f64::from(k) * std::f64::consts::TAU / f64::from(DIRECTIONS);
                    let target = from.spot.point + (x * turn.cos() + y * turn.sin()) * reach;
                    let spot = self.atlas.toward(&from.spot, &target, 1);
                    let moved = vertex(self.atlas, self.field, spot);
                    if !self.fits(v, &moved) {
                        continue;
                    }
                    self.region.vertices[v as usize] = moved;
                    let worst = self.worst_around(v);
                    self.region.vertices[v as usize] = from;
                    if worst < best {
                        best = worst;
                        found = Some(moved);
                    }
                }
                match found {
                    Some(moved) => {
                        self.region.vertices[v as usize] = moved;
                        any = true;
                    }
                    None => reach *= 0.5,
                }
            }
        }
        any
    }

    fn split_better(&mut self, t: u32) -> bool {
        let length = |h: u32| {
            (self.region.point(self.region.origin(h)) - self.region.point(self.region.end(h)))
                .norm()
        };
        let longest = (3 * t..3 * t + 3)
            .max_by(|&a, &b| length(a).total_cmp(&length(b)))
            .filter(|&h| self.region.twin(h) != NONE);
        let Some(h) = longest else { return false };
        let region = &self.region;
        let (a, b) = (region.origin(h), region.end(h));
        let (c, d) = (region.apex(h), region.apex(region.twin(h)));
        let middle = self.middle(a, b).point;
        let at = |v: u32| region.point(v);
        let before = self.sharpness([a, b, c]).max(self.sharpness([b, a, d]));
        let after = [(a, c), (c, b), (b, d), (d, a)]
            .iter()
            .map(|&(p, q)| sharpest(&at(p), &at(q), &middle))
            .fold(-1.0, f64::max);
        after < before - WIN && length(h) > self.size_of(a, b) && self.split(h)
    }
}

/// Two unit vectors in the tangent plane.
fn frame(of: &Vertex) -> Option<(Vector, Vector)> {
    let x = of.spot.du.try_normalize(0.0)?;
    let y = of.normal.cross(&x).try_normalize(1e-9)?;
    Some((x, y))
}
