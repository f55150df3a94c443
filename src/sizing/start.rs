//! The start of the mesh, piece by piece.
//!
//! Rows of points stand as in the lattice of equilateral triangles, as far as the
//! size field and the speed of the parameters allow, every other row shifted by
//! half a step; with the border they are joined by Delaunay's triangulation of the
//! parameters, scaled to lengths (exact signs by `spade`). It is a start only:
//! remeshing mends what the scaling leaves.

use spade::{DelaunayTriangulation, HasPosition, Point2, Triangulation};

use super::atlas::Place;
use super::border::Border;
use super::field::{Field, count, ratio};
use crate::bezier::Side;
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::Point;
use crate::topology::{EdgeId, SeamId, Topology};

/// A point of a row is left out if it is nearer to the border than this many edges.
const CLEAR: f64 = 0.55;

/// Stations in each parameter at which speeds are taken.
const STATIONS: usize = 12;

/// A vertex of a piece's outline.
#[derive(Debug, Clone, Copy)]
pub(super) struct Entry {
    pub(super) uv: [f64; 2],
    /// Vertex of the [`Border`].
    pub(super) vertex: u32,
    /// The seam of the outline's edge that begins here.
    pub(super) seam: SeamId,
}

/// A piece cut into triangles.
#[derive(Debug)]
pub(super) struct Start {
    /// Counterclockwise in parameters; a collapsed side has one entry.
    pub(super) outline: Vec<Entry>,
    /// Points inside.
    pub(super) inner: Vec<[f64; 2]>,
    /// Corners count outline first; counterclockwise in parameters.
    pub(super) triangles: Vec<[u32; 3]>,
}

/// The order of sides round the unit square, and whether parameters ascend.
const ROUND: [(Side, bool); 4] = [
    (Side::V0, true),
    (Side::U1, true),
    (Side::V1, false),
    (Side::U0, false),
];

/// The outline of a piece; `None` where all sides are points.
pub(super) fn outline(topology: &Topology, border: &Border, piece: usize) -> Option<Vec<Entry>> {
    let edge = |side: Side| &topology.edges()[EdgeId::of(PieceId::new(piece), side).index()];
    let spans = |(side, ascending): (Side, bool)| {
        let mut spans: Vec<usize> = edge(side).spans.clone().collect();
        if !ascending {
            spans.reverse();
        }
        spans
    };
    if ROUND.iter().all(|(side, _)| edge(*side).collapsed) {
        return None;
    }
    let mut found: Vec<Entry> = Vec::new();
    for k in 0..4 {
        let (side, ascending) = ROUND[k];
        let before = edge(ROUND[(k + 3) % 4].0).collapsed;
        if edge(side).collapsed {
            // The next side that is a curve says what seam begins here.
            let next = (1..4)
                .map(|n| ROUND[(k + n) % 4])
                .find(|s| !edge(s.0).collapsed)?;
            if !before {
                found.push(Entry {
                    uv: side.at(0.5),
                    vertex: index(edge(side).nodes[0].index()),
                    seam: topology.spans()[*spans(next).first()?].seam,
                });
            }
            continue;
        }
        for (n, span) in spans((side, ascending)).into_iter().enumerate() {
            let of = &topology.spans()[span];
            let first = usize::from(!ascending);
            if n > 0 || !before {
                found.push(Entry {
                    uv: side.at(of.t[first]),
                    vertex: index(of.nodes[first].index()),
                    seam: of.seam,
                });
            }
            let mut add = |&(t, vertex): &(f64, u32)| {
                found.push(Entry {
                    uv: side.at(t),
                    vertex,
                    seam: of.seam,
                });
            };
            if ascending {
                border.runs[span].iter().for_each(&mut add);
            } else {
                border.runs[span].iter().rev().for_each(&mut add);
            }
        }
    }
    Some(found)
}

fn index(at: usize) -> u32 {
    u32::try_from(at).expect("counts are limited before the run")
}

/// A point of the plane with its number.
struct Dot {
    at: [f64; 2],
    index: u32,
}

impl HasPosition for Dot {
    type Scalar = f64;
    fn position(&self) -> Point2<f64> {
        Point2::new(self.at[0], self.at[1])
    }
}

impl Start {
    /// Cuts a piece into triangles; `None` where it is a point.
    pub(super) fn new(
        set: &PatchSet,
        topology: &Topology,
        border: &Border,
        field: &Field,
        piece: usize,
    ) -> Option<Self> {
        let outline = outline(topology, border, piece)?;
        let speeds = Speeds::of(set, field, piece);
        let ends: Vec<Point> = outline
            .iter()
            .map(|e| border.points[e.vertex as usize])
            .collect();
        let inner = speeds.rows(&ends);
        let scale = speeds.scale();
        let dots = outline.iter().map(|e| e.uv).chain(inner.iter().copied());
        let dots: Vec<Dot> = dots
            .zip(0..)
            .map(|(uv, index)| Dot {
                at: [uv[0] * scale[0], uv[1] * scale[1]],
                index,
            })
            .collect();
        let wanted = 2 * inner.len() + outline.len();
        let triangles: Vec<[u32; 3]> = DelaunayTriangulation::<Dot>::bulk_load(dots)
            .map(|delaunay| {
                let faces = delaunay.inner_faces();
                faces
                    .map(|face| face.vertices().map(|v| v.data().index))
                    .collect()
            })
            .unwrap_or_default();
        if triangles.len() + 2 == wanted && outline.len() > 2 {
            return Some(Self {
                outline,
                inner,
                triangles,
            });
        }
        // Too narrow for doubles: a fan.
        let count = index(outline.len());
        Some(Self {
            triangles: (0..count).map(|k| [k, (k + 1) % count, count]).collect(),
            inner: vec![[0.5, 0.5]],
            outline,
        })
    }
}

/// Edges a unit of parameter, on a grid of stations.
struct Speeds<'a> {
    set: &'a PatchSet,
    field: &'a Field,
    piece: usize,
    /// Along u, by station of v and u; and across those rows.
    along: Vec<f64>,
    across: Vec<f64>,
    other: Vec<f64>,
}

impl<'a> Speeds<'a> {
    fn of(set: &'a PatchSet, field: &'a Field, piece: usize) -> Self {
        let surface = &set.pieces()[piece].surface;
        let (mut along, mut across, mut other) = (Vec::new(), Vec::new(), Vec::new());
        for j in 0..=STATIONS {
            for i in 0..=STATIONS {
                let uv = [ratio(i, STATIONS), ratio(j, STATIONS)];
                let (_, du, dv) = surface.frame(uv[0], uv[1]);
                let h = field.at(Place {
                    piece: index(piece),
                    uv,
                });
                let speed = du.norm();
                along.push(speed / h);
                other.push(dv.norm() / h);
                across.push(if speed > 0.0 {
                    du.cross(&dv).norm() / (speed * h)
                } else {
                    dv.norm() / h
                });
            }
        }
        Self {
            set,
            field,
            piece,
            along,
            across,
            other,
        }
    }

    /// Mean edges along u and v: they make the plane nearly isometric.
    fn scale(&self) -> [f64; 2] {
        let mean = |of: &[f64]| {
            let mean = of.iter().sum::<f64>() / ratio(of.len(), 1);
            if mean.is_finite() && mean > 0.0 {
                mean
            } else {
                1.0
            }
        };
        [mean(&self.along), mean(&self.other)]
    }

    /// The points inside.
    fn rows(&self, outline: &[Point]) -> Vec<[f64; 2]> {
        let width = STATIONS + 1;
        // Edges across the rows, as the mean of all columns.
        let mean = |j: usize| self.across[j * width..(j + 1) * width].iter().sum::<f64>();
        let sums = crate::sampling::Cumulative::new((0..width).map(|j| mean(j) / ratio(width, 1)));
        let height = 0.75_f64.sqrt();
        let rows = count((sums.total() / height).round()).max(1);
        let surface = &self.set.pieces()[self.piece].surface;
        let mut found = Vec::new();
        for row in 1..rows {
            let v = sums.reach(sums.total() * ratio(row, rows));
            let scaled = v * ratio(STATIONS, 1);
            let j = count(scaled).min(STATIONS - 1);
            let part = scaled - ratio(j, 1);
            let speed = |i: usize| {
                self.along[j * width + i] * (1.0 - part) + self.along[(j + 1) * width + i] * part
            };
            let along = crate::sampling::Cumulative::new((0..width).map(speed));
            let total = along.total();
            let steps = count(total.round());
            let shift = if row % 2 == 1 { 0.5 } else { 1.0 };
            for k in 0..steps {
                let at = (ratio(k, 1) + shift) / ratio(steps.max(1), 1);
                if at >= 1.0 - 1e-9 {
                    continue;
                }
                let u = along.reach(total * at);
                let uv = [u, v];
                if u <= 0.0 || u >= 1.0 || v <= 0.0 || v >= 1.0 {
                    continue;
                }
                let inner_row = at > 1.2 / total && at < 1.0 - 1.2 / total;
                if inner_row && row > 1 && row + 1 < rows {
                    found.push(uv);
                    continue;
                }
                // Close to the border: clear of its vertices.
                let point = surface.eval(u, v);
                let h = CLEAR
                    * self.field.at(Place {
                        piece: index(self.piece),
                        uv,
                    });
                if outline.iter().all(|e| (e - point).norm_squared() > h * h) {
                    found.push(uv);
                }
            }
        }
        found
    }
}
