//! The first triangulation of a piece: border, rows of the lattice, stitching.

use super::lattice::{self, Along, Ground};
use super::stitch;
use super::triangulation::Triangulation;
use crate::bezier::{BezierPatch, Side};
use crate::sampling::{BorderVertex, Outline};
use crate::scalar::Point;

/// No mesh vertex yet: a point inside the piece.
pub(super) const INNER: u32 = u32::MAX;

/// A triangulated piece before proof. The vertices of the triangulation have
/// their place in space and, on the border, the mesh vertex they stand for. On
/// a collapsed side many parameter places stand for one vertex.
#[derive(Debug)]
pub(super) struct Layout {
    pub(super) triangulation: Triangulation,
    pub(super) points: Vec<Point>,
    pub(super) vertices: Vec<u32>,
}

/// The sides at q = 0, q = 1, p = 0, p = 1.
fn sides(along: Along) -> [Side; 4] {
    match along {
        Along::U => [Side::V0, Side::V1, Side::U0, Side::U1],
        Along::V => [Side::U0, Side::U1, Side::V0, Side::V1],
    }
}

/// Which way the rows run: along collapsed sides if there are any, else the
/// way that needs fewer points.
fn direction(ground: &Ground, outline: &Outline) -> Along {
    let collapsed = |side: Side| outline.collapsed[side.index()];
    if collapsed(Side::V0) || collapsed(Side::V1) {
        Along::U
    } else if collapsed(Side::U0) || collapsed(Side::U1) {
        Along::V
    } else {
        let cost = |along| lattice::cost(ground, along);
        if cost(Along::V) < cost(Along::U) * 0.999 {
            Along::V
        } else {
            Along::U
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

    /// A chain on a collapsed side: its one vertex at every p of the
    /// neighbouring row.
    fn pole(&mut self, side: Side, corner: &BorderVertex, row: &[f64]) -> Vec<u32> {
        let ps = std::iter::once(0.0)
            .chain(row.iter().copied())
            .chain(std::iter::once(1.0));
        ps.map(|p| self.push(side.at(p), corner.point, corner.vertex))
            .collect()
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
    let along = direction(ground, outline);
    let [bottom, top, left, right] = sides(along);
    let inner = |side: Side| -> Vec<f64> {
        let samples = outline.side(side);
        samples[1..samples.len() - 1].iter().map(|b| b.t).collect()
    };
    let ps = |side: Side| -> Vec<f64> { outline.side(side).iter().map(|b| b.t).collect() };
    let rows = lattice::rows(ground, along, &ps(bottom));

    let mut build = Builder {
        surface,
        along,
        places: Vec::new(),
        points: Vec::new(),
        vertices: Vec::new(),
    };
    // The row beside a collapsed side decides where that side has vertices.
    let beside = |row: Option<&(f64, Vec<f64>)>, other: Side| match row {
        Some((_, ps)) => ps.clone(),
        None if outline.collapsed[other.index()] => Vec::new(),
        None => inner(other),
    };
    let chain = |build: &mut Builder, side: Side, row: Option<&(f64, Vec<f64>)>, other: Side| {
        if outline.collapsed[side.index()] {
            build.pole(side, &outline.side(side)[0], &beside(row, other))
        } else {
            build.border(side, outline.side(side))
        }
    };
    let bottom_chain = chain(&mut build, bottom, rows.first(), top);
    let top_chain = chain(&mut build, top, rows.last(), bottom);
    let upright = |build: &mut Builder, side: Side, start: u32, end: u32| {
        let samples = outline.side(side);
        let mut chain = vec![start];
        chain.extend(build.border(side, &samples[1..samples.len() - 1]));
        chain.push(end);
        chain
    };
    let left_chain = upright(&mut build, left, bottom_chain[0], top_chain[0]);
    let right_chain = upright(
        &mut build,
        right,
        bottom_chain[bottom_chain.len() - 1],
        top_chain[top_chain.len() - 1],
    );
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
    let error = |corners: [u32; 3]| {
        let at = |v: u32| build.places[v as usize];
        ground
            .field
            .estimate(corners.map(at), corners.map(|v| build.points[v as usize]))
    };
    if row_chains.is_empty() {
        if left_chain.len() == 2 && right_chain.len() == 2 {
            stitch::zip(&bottom_chain, &top_chain, error, &mut triangles);
        } else {
            let lower: Vec<u32> = bottom_chain
                .iter()
                .chain(&right_chain[1..])
                .copied()
                .collect();
            let upper: Vec<u32> = left_chain.iter().chain(&top_chain[1..]).copied().collect();
            let before = |a: [f64; 2], b: [f64; 2]| (a[0], a[1]) < (b[0], b[1]);
            stitch::monotone(&lower, &upper, place, before, &mut triangles);
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
        let before = |a: [f64; 2], b: [f64; 2]| a[1] <= b[1];
        let first = column(&left_chain, |row| row[0]);
        stitch::monotone(&first, &left_chain, place, before, &mut triangles);
        let last = column(&right_chain, |row| row[row.len() - 1]);
        stitch::monotone(&right_chain, &last, place, before, &mut triangles);
    }
    let triangles = triangles.into_iter().map(orient).collect();
    Layout {
        triangulation: Triangulation::new(build.places, triangles),
        points: build.points,
        vertices: build.vertices,
    }
}
