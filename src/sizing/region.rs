//! A region in triangles: pieces joined by seams that may be crossed, with every
//! kept edge on its border. Half-edges by triangle; links are by number and never
//! by place.
//!
//! Half-edge `3 t + k` runs from corner k of triangle t to the next one. A vertex
//! knows one half-edge that leaves it; on the border it is the one on the border,
//! so that turning counterclockwise from it meets all.

use super::atlas::Spot;
use crate::scalar::{Point, Vector};

/// Stands for nothing.
pub(super) const NONE: u32 = u32::MAX;

/// A vertex of a region.
#[derive(Debug, Clone, Copy)]
pub(super) struct Vertex {
    pub(super) spot: Spot,
    /// Outward normal of unit length; zero where there is none.
    pub(super) normal: Vector,
    /// The size asked for here.
    pub(super) size: f64,
    /// The vertex of the border it is, or `NONE`.
    pub(super) border: u32,
    /// Whether it may not be moved or taken out.
    pub(super) fixed: bool,
}

/// Triangles that hang together.
#[derive(Debug, Clone, Default)]
pub(super) struct Region {
    pub(super) vertices: Vec<Vertex>,
    /// Corners; `NONE` thrice where a triangle is gone.
    pub(super) triangles: Vec<[u32; 3]>,
    /// By half-edge.
    pub(super) twins: Vec<u32>,
    /// By vertex, a half-edge that leaves it, or `NONE`.
    pub(super) leaving: Vec<u32>,
}

pub(super) fn next(h: u32) -> u32 {
    if h % 3 == 2 { h - 2 } else { h + 1 }
}

pub(super) fn previous(h: u32) -> u32 {
    if h.is_multiple_of(3) { h + 2 } else { h - 1 }
}

impl Region {
    /// Where a half-edge begins.
    pub(super) fn origin(&self, h: u32) -> u32 {
        self.triangles[h as usize / 3][h as usize % 3]
    }

    /// Where it ends.
    pub(super) fn end(&self, h: u32) -> u32 {
        self.origin(next(h))
    }

    /// The corner across from it.
    pub(super) fn apex(&self, h: u32) -> u32 {
        self.origin(previous(h))
    }

    pub(super) fn twin(&self, h: u32) -> u32 {
        self.twins[h as usize]
    }

    pub(super) fn is_gone(&self, h: u32) -> bool {
        self.triangles[h as usize / 3][0] == NONE
    }

    /// Whether a vertex lies on a kept edge.
    pub(super) fn on_border(&self, v: u32) -> bool {
        let h = self.leaving[v as usize];
        h != NONE && self.twin(h) == NONE
    }

    pub(super) fn point(&self, v: u32) -> Point {
        self.vertices[v as usize].spot.point
    }

    /// All half-edges that leave a vertex, counterclockwise.
    pub(super) fn around(&self, v: u32) -> Around<'_> {
        let first = self.leaving[v as usize];
        Around {
            region: self,
            first,
            next: first,
        }
    }

    /// Joins half-edges over the same two vertices that run against each other;
    /// `kept` half-edges are left on the border. Returns whether all could be
    /// joined one to one.
    pub(super) fn link(&mut self, kept: &[bool]) -> bool {
        let mut edges: Vec<(u32, u32, u32)> = (0_u32..)
            .zip(kept)
            .filter(|(_, kept)| !**kept)
            .map(|(h, _)| {
                let (a, b) = (self.origin(h), self.end(h));
                (a.min(b), a.max(b), h)
            })
            .collect();
        edges.sort_unstable();
        self.twins = vec![NONE; 3 * self.triangles.len()];
        let mut sound = true;
        for group in edges.chunk_by(|a, b| (a.0, a.1) == (b.0, b.1)) {
            match group {
                [a, b] if self.origin(a.2) != self.origin(b.2) => {
                    self.twins[a.2 as usize] = b.2;
                    self.twins[b.2 as usize] = a.2;
                }
                _ => sound = false,
            }
        }
        self.leaving = vec![NONE; self.vertices.len()];
        for h in 0..self.half_edges() {
            let v = self.origin(h) as usize;
            if self.leaving[v] == NONE || self.twin(h) == NONE {
                self.leaving[v] = h;
            }
        }
        sound
    }

    pub(super) fn half_edges(&self) -> u32 {
        u32::try_from(3 * self.triangles.len()).expect("counts are limited before the run")
    }

    fn pair(&mut self, a: u32, b: u32) {
        if a != NONE {
            self.twins[a as usize] = b;
        }
        if b != NONE {
            self.twins[b as usize] = a;
        }
    }

    /// Renews what the corners of a triangle know, after its half-edges changed.
    fn renew(&mut self, t: u32) {
        for h in 3 * t..3 * t + 3 {
            let v = self.origin(h) as usize;
            let known = self.leaving[v];
            if self.twin(h) == NONE
                || known == NONE
                || self.is_gone(known)
                || self.origin(known) as usize != v
            {
                self.leaving[v] = h;
            }
        }
    }

    /// Turns the edge of two triangles to their other two corners.
    pub(super) fn flip(&mut self, h: u32) {
        let g = self.twin(h);
        let (a, b, c) = (self.origin(h), self.end(h), self.apex(h));
        let d = self.apex(g);
        let outer = [next(h), previous(h), next(g), previous(g)].map(|x| self.twin(x));
        let (t, w) = (h / 3, g / 3);
        self.triangles[t as usize] = [a, d, c];
        self.triangles[w as usize] = [b, c, d];
        self.pair(3 * t, outer[2]);
        self.pair(3 * t + 1, 3 * w + 1);
        self.pair(3 * t + 2, outer[1]);
        self.pair(3 * w, outer[0]);
        self.pair(3 * w + 2, outer[3]);
        self.renew(t);
        self.renew(w);
    }

    /// Puts a new vertex on an edge; returns it.
    pub(super) fn split(&mut self, h: u32, vertex: Vertex) -> u32 {
        let g = self.twin(h);
        let (a, b, c) = (self.origin(h), self.end(h), self.apex(h));
        let m = u32::try_from(self.vertices.len()).expect("counts are limited before the run");
        self.vertices.push(vertex);
        self.leaving.push(NONE);
        let outer = [next(h), previous(h)].map(|x| self.twin(x));
        let t = h / 3;
        let t2 = self.half_edges() / 3;
        self.triangles[t as usize] = [a, m, c];
        self.triangles.push([m, b, c]);
        self.twins.extend([NONE; 3]);
        self.pair(3 * t + 1, 3 * t2 + 2);
        self.pair(3 * t + 2, outer[1]);
        self.pair(3 * t2 + 1, outer[0]);
        self.twins[3 * t as usize] = NONE;
        if g == NONE {
            self.renew(t);
            self.renew(t2);
            return m;
        }
        let d = self.apex(g);
        let beyond = [next(g), previous(g)].map(|x| self.twin(x));
        let w = g / 3;
        let w2 = self.half_edges() / 3;
        self.triangles[w as usize] = [b, m, d];
        self.triangles.push([m, a, d]);
        self.twins.extend([NONE; 3]);
        self.pair(3 * w, 3 * t2);
        self.pair(3 * w + 1, 3 * w2 + 2);
        self.pair(3 * w + 2, beyond[1]);
        self.pair(3 * w2, 3 * t);
        self.pair(3 * w2 + 1, beyond[0]);
        for of in [t, t2, w, w2] {
            self.renew(of);
        }
        m
    }

    /// Whether an edge can be drawn together without tying a knot: its ends have
    /// no common neighbours but the corners across from it, and it does not run
    /// from border to border through the inside.
    pub(super) fn can_collapse(&self, h: u32) -> bool {
        let g = self.twin(h);
        let (a, b) = (self.origin(h), self.end(h));
        if g != NONE && self.on_border(a) && self.on_border(b) {
            return false;
        }
        let across = [self.apex(h), if g == NONE { NONE } else { self.apex(g) }];
        // A triangle with two border edges would leave a loose edge behind.
        let loose = |h: u32| self.twin(next(h)) == NONE && self.twin(previous(h)) == NONE;
        if loose(h) || (g != NONE && loose(g)) {
            return false;
        }
        for x in self.neighbours(a) {
            if x != b && !across.contains(&x) && self.neighbours(b).any(|y| y == x) {
                return false;
            }
        }
        // An inner vertex of three triangles across would become one of two.
        across
            .iter()
            .filter(|x| **x != NONE && !self.on_border(**x))
            .all(|&x| self.around(x).count() > 3)
    }

    /// All neighbours of a vertex.
    pub(super) fn neighbours(&self, v: u32) -> impl Iterator<Item = u32> + '_ {
        let first = self.leaving[v as usize];
        let last = self.around(v).last().map(previous);
        let ends = self.around(v).map(|h| self.end(h));
        let more = last.filter(|&p| first != NONE && self.twin(p) == NONE);
        ends.chain(more.map(|p| self.origin(p)))
    }

    /// Draws an edge together: one of its ends goes, `keep` stays as it is.
    pub(super) fn collapse(&mut self, h: u32, keep: u32) {
        let g = self.twin(h);
        let (a, b) = (self.origin(h), self.end(h));
        let goes = if keep == a { b } else { a };
        let fan: Vec<u32> = self.around(goes).collect();
        for of in fan {
            self.triangles[of as usize / 3][of as usize % 3] = keep;
        }
        let mut touched = [NONE; 4];
        for (k, side) in [h, g].into_iter().enumerate().filter(|(_, s)| *s != NONE) {
            let (x, y) = (self.twin(next(side)), self.twin(previous(side)));
            let apex = self.apex(side);
            self.pair(x, y);
            self.triangles[side as usize / 3] = [NONE; 3];
            for (n, outer) in [x, y].into_iter().enumerate() {
                touched[2 * k + n] = if outer == NONE { NONE } else { outer / 3 };
            }
            let known = self.leaving[apex as usize];
            if known / 3 == side / 3 {
                self.leaving[apex as usize] = NONE;
            }
        }
        self.leaving[goes as usize] = NONE;
        let known = self.leaving[keep as usize];
        if known == NONE || self.is_gone(known) {
            self.leaving[keep as usize] = NONE;
        }
        for t in touched.into_iter().filter(|t| *t != NONE) {
            self.renew(t);
        }
        // The border's own half-edge of the vertex that stays may lie anywhere in
        // what it took over.
        self.seek_border(keep);
    }

    fn seek_border(&mut self, v: u32) {
        let start = self.leaving[v as usize];
        if start == NONE || self.twin(start) == NONE {
            return;
        }
        // Clockwise, until the border or all round.
        let mut h = start;
        loop {
            h = next(self.twin(h));
            if h == start {
                return;
            }
            if self.twin(h) == NONE {
                self.leaving[v as usize] = h;
                return;
            }
        }
    }
}

/// Half-edges round a vertex.
#[derive(Clone)]
pub(super) struct Around<'a> {
    region: &'a Region,
    first: u32,
    next: u32,
}

impl Iterator for Around<'_> {
    type Item = u32;

    fn next(&mut self) -> Option<u32> {
        if self.next == NONE {
            return None;
        }
        let here = self.next;
        let beyond = self.region.twin(previous(here));
        self.next = if beyond == self.first { NONE } else { beyond };
        Some(here)
    }
}
