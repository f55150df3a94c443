//! The first triangulation of a piece: border, rows of the lattice, stitching.

use super::courses::{self, courses};
use super::lattice::{Along, Ground, SAMPLES};
use super::plan::{self, Plan};
use super::stitch::{self, Strips};
use super::triangulation::{Pole, Triangulation, is_proper};
use super::work::index;
use crate::bezier::{BezierPatch, Side};
use crate::sampling::{BorderVertex, Outline, ratio};
use crate::scalar::Point;

/// No mesh vertex yet: a point inside the piece.
pub(super) const INNER: u32 = u32::MAX;

/// A triangulated piece before proof. The vertices of the triangulation have
/// their place in space and, on the border, the mesh vertex they stand for.
#[derive(Debug)]
pub(super) struct Layout {
    pub(super) triangulation: Triangulation,
    pub(super) points: Vec<Point>,
    pub(super) vertices: Vec<u32>,
}

impl Layout {
    /// Whether no corner of a triangle is on the border.
    pub(super) fn is_inner(&self, t: u32) -> bool {
        let corners = self.triangulation.triangles[t as usize];
        corners.iter().all(|&v| self.vertices[v as usize] == INNER)
    }

    /// The share of failing triangles among those that do not touch the
    /// border; what touches it depends on the seams' samples as much.
    pub(super) fn inner_share(&self, failed: &[u32]) -> f64 {
        let all = 0..index(self.triangulation.triangles.len());
        let all = all.filter(|&t| self.is_inner(t)).count();
        let bad = failed.iter().filter(|&&t| self.is_inner(t)).count();
        ratio(bad, all.max(1))
    }

    /// How far the vertices are off the surface: those on the border may be,
    /// where a seam is joined over a gap.
    pub(super) fn off(&self, surface: &BezierPatch) -> Vec<f64> {
        let off = |(v, point): (usize, &Point)| {
            if self.vertices[v] == INNER {
                return 0.0;
            }
            let [u, w] = self.triangulation.places[v];
            (surface.eval(u, w) - point).norm()
        };
        self.points.iter().enumerate().map(off).collect()
    }
}

/// The sides at q = 0, q = 1, p = 0, p = 1.
fn sides(along: Along) -> [Side; 4] {
    match along {
        Along::U => [Side::V0, Side::V1, Side::U0, Side::U1],
        Along::V => [Side::U0, Side::U1, Side::V0, Side::V1],
    }
}

/// Rows along collapsed sides if there are any, else the way that needs fewer
/// points.
fn plan<'a>(ground: &'a Ground, outline: &Outline) -> Plan<'a> {
    let collapsed = |side: Side| outline.collapsed[side.index()];
    if collapsed(Side::V0) || collapsed(Side::V1) {
        Plan::new(ground, Along::U)
    } else if collapsed(Side::U0) || collapsed(Side::U1) {
        Plan::new(ground, Along::V)
    } else {
        let [along_u, along_v] = [Along::U, Along::V].map(|along| Plan::new(ground, along));
        if along_v.cost() < along_u.cost() * 0.999 {
            along_v
        } else {
            along_u
        }
    }
}

struct Builder<'a> {
    surface: &'a BezierPatch,
    along: Along,
    places: Vec<[f64; 2]>,
    points: Vec<Point>,
    vertices: Vec<u32>,
}

impl Builder<'_> {
    fn push(&mut self, place: [f64; 2], point: Point, vertex: u32) -> u32 {
        let index =
            u32::try_from(self.places.len()).expect("a piece has far fewer than 2^32 vertices");
        self.places.push(place);
        self.points.push(point);
        self.vertices.push(vertex);
        index
    }

    fn border(&mut self, side: Side, vertices: &[BorderVertex]) -> Vec<u32> {
        vertices
            .iter()
            .map(|b| self.push(side.at(b.t), b.point, b.vertex))
            .collect()
    }

    /// A side between chains that have its ends.
    fn upright(&mut self, outline: &Outline, side: Side, [start, end]: [u32; 2]) -> Vec<u32> {
        let samples = outline.side(side);
        let mut chain = vec![start];
        chain.extend(self.border(side, &samples[1..samples.len() - 1]));
        chain.push(end);
        chain
    }

    fn row(&mut self, q: f64, ps: &[f64]) -> Vec<u32> {
        let mut row = Vec::with_capacity(ps.len());
        for &p in ps {
            let [u, v] = self.along.place(p, q);
            let point = self.surface.eval(u, v);
            row.push(self.push([u, v], point, INNER));
        }
        row
    }
}

pub(super) fn layout(surface: &BezierPatch, ground: &Ground, outline: &Outline) -> Layout {
    let plan = plan(ground, outline);
    let along = plan.along;
    let [bottom, top, left, right] = sides(along);
    let ps = |side: Side| -> Vec<f64> { outline.side(side).iter().map(|b| b.t).collect() };
    let collapsed = |side: Side| outline.collapsed[side.index()];
    if ground.coursed
        && let Some(layout) = coursed(surface, &plan, outline)
    {
        return layout;
    }
    let mut rows = plan::rows(&plan, &ps(bottom));
    if rows.is_empty() && (collapsed(bottom) || collapsed(top)) && !is_plain(outline, left, right) {
        // The polygon of a piece with a pole is not monotone without a row.
        rows.push((0.5, vec![0.5]));
    }

    let mut build = Builder {
        surface,
        along,
        places: Vec::new(),
        points: Vec::new(),
        vertices: Vec::new(),
    };
    let mut pole = None;
    let mut chain = |build: &mut Builder, side: Side| {
        if collapsed(side) {
            let chain = build.border(side, &outline.side(side)[..1]);
            pole = Some(Pole {
                vertex: chain[0],
                side,
            });
            chain
        } else {
            build.border(side, outline.side(side))
        }
    };
    let bottom_chain = chain(&mut build, bottom);
    let top_chain = chain(&mut build, top);
    let left_chain = build.upright(outline, left, [bottom_chain[0], top_chain[0]]);
    let ends = [&bottom_chain, &top_chain].map(|chain| chain[chain.len() - 1]);
    let right_chain = build.upright(outline, right, ends);
    let row_chains: Vec<Vec<u32>> = rows.iter().map(|(q, ps)| build.row(*q, ps)).collect();

    let mut triangles = Vec::new();
    let place = |v: u32| -> [f64; 2] {
        let (p, q) = along.split(build.places[v as usize]);
        [p, q]
    };
    // Chains are stitched in (p, q); with rows along v that is a mirror image.
    let orient = |[a, b, c]: [u32; 3]| {
        if along == Along::U {
            [a, b, c]
        } else {
            [a, c, b]
        }
    };
    let unlinked = Triangulation {
        places: build.places.clone(),
        pole,
        ..Triangulation::default()
    };
    let proper = |corners: [u32; 3]| is_proper(unlinked.places_of(orient(corners)));
    let error = |corners: [u32; 3]| {
        let points = corners.map(|v| build.points[v as usize]);
        ground
            .field
            .estimate(unlinked.places_of(corners), points, ground.limits)
    };
    if row_chains.is_empty() {
        if is_plain(outline, left, right) {
            stitch::zip(&bottom_chain, &top_chain, error, &mut triangles);
        } else {
            let lower: Vec<u32> = bottom_chain
                .iter()
                .chain(&right_chain[1..])
                .copied()
                .collect();
            let upper: Vec<u32> = left_chain.iter().chain(&top_chain[1..]).copied().collect();
            let before = |a: u32, b: u32| place(a) < place(b);
            stitch::monotone(&lower, &upper, before, proper, &mut triangles);
        }
    } else {
        let mut lower = &bottom_chain;
        for upper in row_chains.iter().chain(std::iter::once(&top_chain)) {
            stitch::zip(lower, upper, error, &mut triangles);
            lower = upper;
        }
        let column = |side: &[u32], pick: fn(&Vec<u32>) -> u32| -> Vec<u32> {
            let mut column = vec![side[0]];
            column.extend(row_chains.iter().map(pick));
            column.push(side[side.len() - 1]);
            column
        };
        let before = |a: u32, b: u32| place(a)[1] <= place(b)[1];
        let first = column(&left_chain, |row| row[0]);
        stitch::monotone(&first, &left_chain, before, proper, &mut triangles);
        let last = column(&right_chain, |row| row[row.len() - 1]);
        stitch::monotone(&right_chain, &last, before, proper, &mut triangles);
    }
    let triangles = triangles.into_iter().map(orient).collect();
    Layout {
        triangulation: Triangulation::new(build.places, pole, triangles),
        points: build.points,
        vertices: build.vertices,
    }
}

/// A piece without collapsed sides, in rows that end in the sides' samples;
/// `None` where these would run into each other.
fn coursed(surface: &BezierPatch, plan: &Plan, outline: &Outline) -> Option<Layout> {
    let along = plan.along;
    let sides = sides(along);
    let parameters = sides.map(|side| outline.side(side).iter().map(|b| b.t).collect::<Vec<f64>>());
    let rows = courses(plan, &parameters);
    let inside: usize = rows.iter().map(|row| row.points.len()).sum();
    let count = inside + parameters.iter().map(Vec::len).sum::<usize>();
    let mut build = Builder {
        surface,
        along,
        places: Vec::with_capacity(count),
        points: Vec::with_capacity(count),
        vertices: Vec::with_capacity(count),
    };
    let [bottom, top] = [0, 1].map(|k| build.border(sides[k], outline.side(sides[k])));
    let left = build.upright(outline, sides[2], [bottom[0], top[0]]);
    let ends = [&bottom, &top].map(|chain| chain[chain.len() - 1]);
    let right = build.upright(outline, sides[3], ends);
    let chains: Vec<Vec<u32>> = rows
        .iter()
        .map(|row| {
            let inner = row.points.iter().map(|&[p, q]| {
                let place = along.place(p, q);
                let point = surface.eval(place[0], place[1]);
                build.push(place, point, INNER)
            });
            let mut chain = Vec::with_capacity(row.points.len() + 2);
            chain.push(left[row.ends[0]]);
            chain.extend(inner);
            chain.push(right[row.ends[1]]);
            chain
        })
        .collect();
    let at = |v: u32| {
        let (p, q) = along.split(build.places[v as usize]);
        [p, q]
    };
    let mut strips = Strips::new(build.places.len());
    let last = [left.len() - 1, right.len() - 1];
    for row in 0..=rows.len() {
        let (below, start) = row
            .checked_sub(1)
            .map_or((&bottom, [0, 0]), |k| (&chains[k], rows[k].ends));
        let (above, stop) = rows
            .get(row)
            .map_or((&top, last), |course| (&chains[row], course.ends));
        let mut lower = below.clone();
        lower.extend(right.get(start[1] + 1..stop[1]).unwrap_or_default());
        let mut upper = left.get(start[0] + 1..stop[0]).unwrap_or_default().to_vec();
        upper.extend(above);
        let steps = rows
            .get(row)
            .map_or_else(|| plan.row_steps(SAMPLES), |course| &course.steps);
        strips.fill(&lower, &upper, at, |corners| courses::error(steps, corners));
    }
    if !strips.good {
        return None;
    }
    if along == Along::V {
        strips = strips.mirrored();
    }
    Some(Layout {
        triangulation: Triangulation {
            places: build.places,
            pole: None,
            triangles: strips.triangles,
            neighbours: strips.neighbours,
        },
        points: build.points,
        vertices: build.vertices,
    })
}

/// Whether both upright sides are one segment each.
fn is_plain(outline: &Outline, left: Side, right: Side) -> bool {
    outline.side(left).len() == 2 && outline.side(right).len() == 2
}
