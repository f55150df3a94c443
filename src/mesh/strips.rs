//! Triangle strips.
//!
//! A strip v0 v1 v2 ... stands for the triangles (v0 v1 v2), (v2 v1 v3),
//! (v2 v3 v4), ...: every index after the second adds a triangle, and every
//! second triangle is turned over so that all face the same way. A strip of N
//! triangles takes N + 2 indices.
//!
//! To choose the fewest strips is NP-complete (Evans, Skiena, Varshney 1996),
//! so the dual graph is walked greedily: from the first triangle not yet used,
//! each of its three edges is tried as the first edge of a strip, which is
//! followed both ways until it meets a border or a used triangle; the longest
//! of the three is kept. Each try costs at most as much as the strip that is
//! kept, so the time is linear in the triangles. A strip never leaves its
//! patch. The result is a function of the triangles alone.

use std::ops::Range;

use super::Mesh;
use super::edges::{EdgeTable, NO_SIDE, next_side, origin, previous_side};

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
    /// as it did.
    #[must_use]
    pub fn of(mesh: &Mesh) -> Self {
        let mut found = Self {
            indices: Vec::with_capacity(mesh.triangles.len() + mesh.triangles.len() / 4),
            parts: Vec::with_capacity(mesh.parts.len()),
            strips: 0,
            triangles: mesh.triangles.len(),
        };
        let mut numbering = Numbering {
            local: vec![u32::MAX; mesh.vertices.len()],
            global: Vec::new(),
        };
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
                walk.strip(seed, |v| found.indices.push(numbering.global[v as usize]));
                found.strips += 1;
            }
            found.parts.push(start..found.indices.len());
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
            strip.windows(3).enumerate().map(|(i, corners)| {
                if i % 2 == 0 {
                    [corners[0], corners[1], corners[2]]
                } else {
                    [corners[1], corners[0], corners[2]]
                }
            })
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
    /// Sides by which the kept strip was entered, before and after its seed.
    before: Vec<u32>,
    after: Vec<u32>,
}

impl<'a> Walk<'a> {
    fn over(triangles: &'a [[u32; 3]], vertices: usize) -> Self {
        Self {
            triangles,
            twins: EdgeTable::new(triangles, vertices).twins(triangles),
            used: vec![false; triangles.len()],
            tried: vec![0; triangles.len()],
            tries: 0,
            before: Vec::new(),
            after: Vec::new(),
        }
    }

    /// Gives the vertices of the longest strip through an unused triangle.
    fn strip(&mut self, seed: usize, mut emit: impl FnMut(u32)) {
        let seed = u32::try_from(3 * seed).expect("the edge table holds 32-bit sides only");
        let mut best = (seed, self.attempt(seed));
        for first in [seed + 1, seed + 2] {
            let length = self.attempt(first);
            if length > best.1 {
                best = (first, length);
            }
        }
        let first = best.0;
        if first != seed + 2 {
            self.attempt(first);
        }
        self.used[(first / 3) as usize] = true;
        for &side in self.before.iter().chain(&self.after) {
            self.used[(side / 3) as usize] = true;
        }
        let opposite = |side| origin(self.triangles, previous_side(side));
        self.before.iter().rev().for_each(|&s| emit(opposite(s)));
        emit(origin(self.triangles, first));
        emit(origin(self.triangles, next_side(first)));
        emit(opposite(first));
        self.after.iter().for_each(|&s| emit(opposite(s)));
    }

    /// Follows the strip whose seed triangle is read from side `first` on, and
    /// returns its length without the seed.
    fn attempt(&mut self, first: u32) -> usize {
        self.tries += 1;
        self.tried[(first / 3) as usize] = self.tries;
        let (mut before, mut after) = (
            std::mem::take(&mut self.before),
            std::mem::take(&mut self.after),
        );
        // The seed is an even triangle: it is left by the side after the one it
        // was entered by, an odd one by the side before it; the other way round
        // when going backwards.
        self.follow(next_side(first), true, &mut after);
        self.follow(first, false, &mut before);
        // The strip begins with an even triangle, or all would be turned over.
        if before.len() % 2 == 1 {
            before.pop();
        }
        (self.before, self.after) = (before, after);
        self.before.len() + self.after.len()
    }

    fn follow(&mut self, mut leave: u32, forward: bool, entered: &mut Vec<u32>) {
        entered.clear();
        let mut turn = !forward;
        loop {
            let side = self.twins[leave as usize];
            if side == NO_SIDE {
                return;
            }
            let triangle = (side / 3) as usize;
            if self.used[triangle] || self.tried[triangle] == self.tries {
                return;
            }
            self.tried[triangle] = self.tries;
            entered.push(side);
            leave = if turn {
                next_side(side)
            } else {
                previous_side(side)
            };
            turn = !turn;
        }
    }
}
