//! Triangle strips.
//!
//! A strip v0 v1 v2 ... stands for the triangles (v0 v1 v2), (v2 v1 v3),
//! (v2 v3 v4), ...: every index after the second adds a triangle, and every
//! second triangle is turned over so that all face the same way. A strip of N
//! triangles takes N + 2 indices, and one more for each index that is repeated
//! to go on round a corner; the triangle with a repeated index that comes of it
//! has no area and is skipped by whoever reads the strip.
//!
//! To choose the fewest strips is NP-complete (Evans, Skiena, Varshney 1996),
//! so the dual graph is walked greedily: from the first triangle not yet used,
//! each of its three edges is tried as the first edge of a strip, which is
//! followed both ways until it meets borders and used triangles only; the one
//! of the fewest indices a triangle is kept. A strip never leaves its patch.
//! The result is a function of the triangles alone, and the time close to
//! linear in them.

use std::ops::Range;

use super::Mesh;
use super::edges::{EdgeTable, NO_SIDE, is_degenerate, next_side, origin, previous_side};
use crate::pace;

/// Ends a strip among the indices. No vertex has this index.
pub const RESTART: u32 = u32::MAX;

/// The triangles of a mesh as strips.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Strips {
    indices: Vec<u32>,
    parts: Vec<Range<usize>>,
    strips: usize,
    triangles: usize,
}

impl Strips {
    /// Strips that decode to exactly the triangles of the mesh, each facing
    /// as it did. Triangles with a repeated vertex are left out.
    #[must_use]
    pub fn of(mesh: &Mesh) -> Self {
        let mut found = Self {
            indices: Vec::with_capacity(mesh.triangles.len() + mesh.triangles.len() / 4),
            parts: Vec::with_capacity(mesh.parts.len()),
            strips: 0,
            triangles: 0,
        };
        let mut numbering = Numbering {
            local: vec![u32::MAX; mesh.vertices.len()],
            global: Vec::new(),
        };
        pace::expect(mesh.triangles.len() as u64, "triangles");
        for part in &mesh.parts {
            let triangles = numbering.localise(&mesh.triangles[part.triangles.clone()]);
            if !found.indices.is_empty() && !triangles.is_empty() {
                found.indices.push(RESTART);
            }
            let start = found.indices.len();
            let mut walk = Walk::over(&triangles, numbering.global.len());
            for seed in 0..triangles.len() {
                if walk.used[seed] {
                    continue;
                }
                if found.indices.len() > start {
                    found.indices.push(RESTART);
                }
                found.triangles += walk.strip(seed, &mut found.indices);
                found.strips += 1;
            }
            for index in &mut found.indices[start..] {
                if *index != RESTART {
                    *index = numbering.global[*index as usize];
                }
            }
            found.parts.push(start..found.indices.len());
            pace::step(triangles.len() as u64);
        }
        found
    }

    /// Indices into [`Mesh::vertices`], one [`RESTART`] between two strips.
    #[must_use]
    pub fn indices(&self) -> &[u32] {
        &self.indices
    }

    /// For every part of the mesh its indices; the restarts between two parts
    /// belong to neither.
    #[must_use]
    pub fn parts(&self) -> &[Range<usize>] {
        &self.parts
    }

    /// The strips of one part of the mesh.
    pub fn part(&self, part: usize) -> impl Iterator<Item = &[u32]> {
        split(&self.indices[self.parts[part].clone()])
    }

    /// All strips.
    pub fn iter(&self) -> impl Iterator<Item = &[u32]> {
        split(&self.indices)
    }

    /// How many strips there are.
    #[must_use]
    pub fn len(&self) -> usize {
        self.strips
    }

    /// Whether there is none.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.strips == 0
    }

    /// Indices a triangle, each restart counted as one; 1 is the limit, 3 the
    /// figure of separate triangles. Zero without triangles.
    #[must_use]
    pub fn indices_per_triangle(&self) -> f64 {
        ratio(self.indices.len(), self.triangles)
    }

    /// Triangles a strip. Zero without triangles.
    #[must_use]
    pub fn mean_length(&self) -> f64 {
        ratio(self.triangles, self.strips)
    }

    /// The triangles the strips stand for, strip by strip.
    pub fn triangles(&self) -> impl Iterator<Item = [u32; 3]> {
        self.iter().flat_map(|strip| {
            strip
                .windows(3)
                .enumerate()
                .map(|(i, corners)| {
                    if i % 2 == 0 {
                        [corners[0], corners[1], corners[2]]
                    } else {
                        [corners[1], corners[0], corners[2]]
                    }
                })
                .filter(|corners| !is_degenerate(*corners))
        })
    }
}

fn split(indices: &[u32]) -> impl Iterator<Item = &[u32]> {
    indices
        .split(|&index| index == RESTART)
        .filter(|strip| !strip.is_empty())
}

/// A quotient of counts, both far below 2^53.
fn ratio(count: usize, of: usize) -> f64 {
    if of == 0 {
        0.0
    } else {
        count as f64 / of as f64
    }
}

/// Numbers the vertices of one part from zero, so that its tables are as small
/// as the part.
struct Numbering {
    /// Vertex of the mesh to vertex of the part, or `u32::MAX`.
    local: Vec<u32>,
    /// The way back.
    global: Vec<u32>,
}

impl Numbering {
    fn localise(&mut self, triangles: &[[u32; 3]]) -> Vec<[u32; 3]> {
        for &v in &self.global {
            self.local[v as usize] = u32::MAX;
        }
        self.global.clear();
        let mut fresh = 0;
        let mut number = |v: u32| {
            let local = &mut self.local[v as usize];
            if *local == u32::MAX {
                *local = fresh;
                fresh += 1;
                self.global.push(v);
            }
            *local
        };
        triangles
            .iter()
            .map(|corners| corners.map(&mut number))
            .collect()
    }
}

/// The walk over one part.
struct Walk<'a> {
    triangles: &'a [[u32; 3]],
    twins: Vec<u32>,
    /// Triangles that are in a strip already.
    used: Vec<bool>,
    /// The last try that went through each triangle.
    tried: Vec<u32>,
    tries: u32,
    best: Trial,
    current: Trial,
}

/// A strip that was tried.
#[derive(Default)]
struct Trial {
    triangles: Vec<u32>,
    /// Its indices from the seed's first edge backwards.
    before: Vec<u32>,
    /// Its indices from the seed's first edge forwards.
    after: Vec<u32>,
}

impl Trial {
    /// Whether the strip, read with its seed as an even triangle, begins at an
    /// odd one and has to be turned over.
    fn is_odd(&self) -> bool {
        self.before.len() % 2 == 1
    }

    /// Whether reading it backwards turns it over.
    fn can_reverse(&self) -> bool {
        (self.before.len() + self.after.len()) % 2 == 1
    }

    /// Its indices and the restart that ends it.
    fn cost(&self) -> usize {
        let repeated = usize::from(self.is_odd() && !self.can_reverse());
        self.before.len() + self.after.len() + repeated + 1
    }

    /// Whether it takes fewer indices a triangle.
    fn is_better(&self, than: &Self) -> bool {
        self.cost() * than.triangles.len() < than.cost() * self.triangles.len()
    }
}

impl<'a> Walk<'a> {
    fn over(triangles: &'a [[u32; 3]], vertices: usize) -> Self {
        Self {
            triangles,
            twins: EdgeTable::new(triangles, vertices).twins(triangles),
            used: triangles.iter().map(|t| is_degenerate(*t)).collect(),
            tried: vec![0; triangles.len()],
            tries: 0,
            best: Trial::default(),
            current: Trial::default(),
        }
    }

    /// Appends the indices of the best strip through an unused triangle, and
    /// returns the number of its triangles.
    fn strip(&mut self, seed: usize, indices: &mut Vec<u32>) -> usize {
        let seed = u32::try_from(3 * seed).expect("the edge table holds 32-bit sides only");
        for first in seed..seed + 3 {
            self.attempt(first);
            if first == seed || self.current.is_better(&self.best) {
                std::mem::swap(&mut self.current, &mut self.best);
            }
        }
        let best = &self.best;
        for &triangle in &best.triangles {
            self.used[triangle as usize] = true;
        }
        if best.is_odd() && best.can_reverse() {
            indices.extend(best.after.iter().rev().chain(&best.before));
        } else {
            indices.extend(best.before.last().filter(|_| best.is_odd()));
            indices.extend(best.before.iter().rev().chain(&best.after));
        }
        best.triangles.len()
    }

    /// Follows the strip whose seed triangle is read from side `first` on.
    fn attempt(&mut self, first: u32) {
        self.tries += 1;
        self.tried[(first / 3) as usize] = self.tries;
        let [a, b, c] = [first, next_side(first), previous_side(first)]
            .map(|side| origin(self.triangles, side));
        let mut trial = std::mem::take(&mut self.current);
        trial.triangles.clear();
        trial.triangles.push(first / 3);
        trial.before.clear();
        trial.after.clear();
        trial.after.extend([a, b, c]);
        self.follow(
            next_side(first),
            [b, c],
            &mut trial.after,
            &mut trial.triangles,
        );
        self.follow(first, [b, a], &mut trial.before, &mut trial.triangles);
        self.current = trial;
    }

    /// Goes on over the side `leave`, whose ends are the last two indices.
    fn follow(
        &mut self,
        mut leave: u32,
        [mut p, mut q]: [u32; 2],
        indices: &mut Vec<u32>,
        triangles: &mut Vec<u32>,
    ) {
        while let Some(side) = self.free(leave) {
            self.tried[(side / 3) as usize] = self.tries;
            triangles.push(side / 3);
            let r = origin(self.triangles, previous_side(side));
            // A strip goes on over the edge q r; to go on over p r, p has to be
            // repeated. That costs an index, a new strip costs three.
            let (mut over_q, mut over_p) = (next_side(side), previous_side(side));
            if origin(self.triangles, over_q) != q {
                std::mem::swap(&mut over_q, &mut over_p);
            }
            if self.free(over_q).is_none() && self.free(over_p).is_some() {
                indices.extend([p, r]);
                leave = over_p;
            } else {
                indices.push(r);
                leave = over_q;
                p = q;
            }
            q = r;
        }
    }

    /// The side across an edge, if its triangle can still be used.
    fn free(&self, leave: u32) -> Option<u32> {
        let side = self.twins[leave as usize];
        let is_free = side != NO_SIDE && {
            let triangle = (side / 3) as usize;
            !self.used[triangle] && self.tried[triangle] != self.tries
        };
        is_free.then_some(side)
    }
}
