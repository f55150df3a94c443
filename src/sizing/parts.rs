//! From starts of pieces to regions: pieces joined over seams that may be crossed.

use super::atlas::{Atlas, Place};
use super::border::Border;
use super::field::Field;
use super::region::{NONE, Region};
use super::remesh::vertex;
use super::start::Start;
use crate::topology::SeamId;

/// What hangs together.
#[derive(Debug)]
pub(super) struct Part {
    pub(super) region: Region,
}

/// Disjoint sets by path halving; the least member stands for all.
struct Sets(Vec<u32>);

impl Sets {
    fn new(count: usize) -> Self {
        Self((0_u32..).take(count).collect())
    }

    fn root(&mut self, mut of: u32) -> u32 {
        while self.0[of as usize] != of {
            self.0[of as usize] = self.0[self.0[of as usize] as usize];
            of = self.0[of as usize];
        }
        of
    }

    fn join(&mut self, a: u32, b: u32) {
        let (a, b) = (self.root(a), self.root(b));
        self.0[a.max(b) as usize] = a.min(b);
    }
}

fn narrow(index: usize) -> u32 {
    u32::try_from(index).expect("counts are limited before the run")
}

/// Joins starts; where one piece could not be joined its number is the error.
pub(super) fn parts(
    atlas: &Atlas,
    field: &Field,
    border: &Border,
    starts: &[Option<Start>],
) -> Result<Vec<Part>, usize> {
    // Slots: the outline entries of all pieces.
    let mut firsts = Vec::with_capacity(starts.len());
    let mut slots = 0;
    for start in starts {
        firsts.push(slots);
        slots += start.as_ref().map_or(0, |s| s.outline.len());
    }
    let mut joined = Sets::new(slots);
    let mut pieces = Sets::new(starts.len());
    // Edges of outlines over seams that may be crossed: by seam and vertices. Ends
    // of each that are one vertex are joined.
    let mut edges: Vec<(SeamId, [u32; 2], [u32; 2], usize)> = Vec::new();
    for (piece, start) in starts.iter().enumerate() {
        let Some(start) = start else { continue };
        let count = start.outline.len();
        for (k, entry) in start.outline.iter().enumerate() {
            if atlas.seams.is_kept(entry.seam) {
                continue;
            }
            let after = (k + 1) % count;
            let (a, b) = (entry.vertex, start.outline[after].vertex);
            let (s, t) = (narrow(firsts[piece] + k), narrow(firsts[piece] + after));
            if a <= b {
                edges.push((entry.seam, [a, b], [s, t], piece));
            } else {
                edges.push((entry.seam, [b, a], [t, s], piece));
            }
        }
    }
    edges.sort_unstable();
    for group in edges.chunk_by(|a, b| (a.0, a.1) == (b.0, b.1)) {
        for pair in group.windows(2) {
            joined.join(pair[0].2[0], pair[1].2[0]);
            joined.join(pair[0].2[1], pair[1].2[1]);
            pieces.join(narrow(pair[0].3), narrow(pair[1].3));
        }
    }
    let mut members: Vec<Vec<usize>> = vec![Vec::new(); starts.len()];
    for piece in 0..starts.len() {
        if starts[piece].is_some() {
            members[pieces.root(narrow(piece)) as usize].push(piece);
        }
    }
    let mut local = vec![NONE; slots];
    let mut found = Vec::new();
    for group in members.iter().filter(|m| !m.is_empty()) {
        let mut region = Region::default();
        let mut kept = Vec::new();
        for &piece in group {
            let start = starts[piece].as_ref().ok_or(piece)?;
            let count = start.outline.len();
            let mut of: Vec<u32> = Vec::with_capacity(count + start.inner.len());
            for (k, entry) in start.outline.iter().enumerate() {
                let root = joined.root(narrow(firsts[piece] + k)) as usize;
                if local[root] == NONE {
                    local[root] = narrow(region.vertices.len());
                    let spot = atlas.spot(Place {
                        piece: narrow(piece),
                        uv: entry.uv,
                    });
                    let mut new = vertex(atlas, field, spot);
                    new.border = entry.vertex;
                    region.vertices.push(new);
                }
                of.push(local[root]);
            }
            for &uv in &start.inner {
                of.push(narrow(region.vertices.len()));
                let spot = atlas.spot(Place {
                    piece: narrow(piece),
                    uv,
                });
                region.vertices.push(vertex(atlas, field, spot));
            }
            let flipped = atlas.outward(narrow(piece)) < 0.0;
            // Which half-edges lie on the outline, and on what seam.
            for triangle in &start.triangles {
                let [a, b, c] = *triangle;
                let turned = if flipped { [a, c, b] } else { [a, b, c] };
                for k in 0..3 {
                    let (p, q) = (turned[k] as usize, turned[(k + 1) % 3] as usize);
                    let (p, q) = if flipped { (q, p) } else { (p, q) };
                    let outline = p < count && q < count && (p + 1) % count == q;
                    kept.push(outline && atlas.seams.is_kept(start.outline[p].seam));
                }
                region.triangles.push(turned.map(|v| of[v as usize]));
            }
        }
        if !region.link(&kept) {
            return Err(group[0]);
        }
        settle(&mut region, border);
        found.push(Part { region });
    }
    Ok(found)
}

/// Vertices on kept edges stand where the kept curve has them, and stay; so do
/// poles. All others forget what seam they began on.
fn settle(region: &mut Region, border: &Border) {
    for v in 0..region.vertices.len() {
        let on_border = region.on_border(narrow(v));
        let of = &mut region.vertices[v];
        let spot = &of.spot;
        let pole = of.border != NONE && {
            let (a, b) = (spot.du.norm(), spot.dv.norm());
            a.min(b) <= 1e-9 * a.max(b)
        };
        of.fixed = on_border || pole;
        if on_border {
            of.spot.point = border.points[of.border as usize];
        } else {
            of.border = NONE;
        }
    }
}
