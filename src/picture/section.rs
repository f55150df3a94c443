//! The cut of a set by a plane, as curves with their curvature.
//!
//! Where the plane crosses an edge of the mesh its place on the patch is found
//! between the corners' parameters, by halving on the surface itself; between two
//! crossings of a triangle further places are put on the plane by Newton's step.
//! So the points lie on the surfaces, not on the mesh; that every branch of the
//! cut is found is *sampled*, by the mesh.
//!
//! With t the curve's tangent and n the surface's normal, the curvature vector is
//! k m, m = p x t for the plane's normal p, and (Meusnier) k = k_n(t) / (m . n).

use std::collections::BTreeMap;

use super::scene::Scene;
use crate::bezier::BezierPatch;
use crate::scalar::{Point, Vector};

/// Places between two crossings of a triangle.
const BETWEEN: u32 = 4;

/// A plane: all p with normal . p = offset.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Plane {
    /// Its unit normal.
    pub normal: Vector,
    /// Its distance from the origin along the normal.
    pub offset: f64,
}

impl Plane {
    /// How far a point lies on the side of the normal.
    #[must_use]
    pub fn height(&self, point: &Point) -> f64 {
        self.normal.dot(&point.coords) - self.offset
    }
}

/// A place of the cut.
#[derive(Debug, Clone, Copy)]
pub struct Cut {
    /// Where.
    pub point: Point,
    /// The curvature vector of the cut, 1/length; `None` where the plane touches
    /// the surface, or the surface has no normal.
    pub bend: Option<Vector>,
}

/// A stretch of the cut on one piece.
#[derive(Debug, Clone)]
pub struct SectionRun {
    /// The panel.
    pub panel: usize,
    /// The places, in order.
    pub cuts: Vec<Cut>,
}

/// A crossing of an edge, by the numbers of its corners.
type Crossing = (u32, u32);

/// Cuts a scene.
#[must_use]
pub fn section(scene: &Scene<'_>, plane: &Plane) -> Vec<SectionRun> {
    // By piece: crossings that a triangle joins.
    let mut links: BTreeMap<usize, BTreeMap<Crossing, Vec<Crossing>>> = BTreeMap::new();
    let mut places: BTreeMap<(usize, Crossing), [f64; 2]> = BTreeMap::new();
    for triangle in 0..scene.mesh.triangles.len() {
        let corners = scene.mesh.triangle_corners(triangle);
        let above = corners.map(|c| plane.height(&c) >= 0.0);
        if above[0] == above[1] && above[1] == above[2] {
            continue;
        }
        let piece = scene.piece(triangle);
        let points = scene.mesh.triangle_points(triangle);
        let surface = &scene.set.pieces()[piece].surface;
        let mut crossed: Vec<Crossing> = Vec::with_capacity(2);
        for k in 0..3 {
            let next = (k + 1) % 3;
            if above[k] == above[next] {
                continue;
            }
            // From the corner of lesser number, so that neighbours agree.
            let (a, b) = if points[k] < points[next] {
                (k, next)
            } else {
                (next, k)
            };
            let key = (points[a], points[b]);
            places.entry((piece, key)).or_insert_with(|| {
                let ends = [a, b].map(|c| scene.local_corner(triangle, c));
                crossing(surface, plane, ends)
            });
            crossed.push(key);
        }
        if let [p, q] = crossed[..] {
            let of = links.entry(piece).or_default();
            of.entry(p).or_default().push(q);
            of.entry(q).or_default().push(p);
        }
    }
    let mut runs = Vec::new();
    for (piece, mut of) in links {
        for chain in chains(&mut of) {
            let at: Vec<[f64; 2]> = chain.iter().map(|c| places[&(piece, *c)]).collect();
            runs.push(run(scene, piece, plane, &at));
        }
    }
    runs
}

/// Where a straight line between two places of a patch crosses the plane.
fn crossing(surface: &BezierPatch, plane: &Plane, ends: [[f64; 2]; 2]) -> [f64; 2] {
    let at = |t: f64| [0, 1].map(|i| ends[0][i] * (1.0 - t) + ends[1][i] * t);
    let height = |t: f64| {
        let [u, v] = at(t);
        plane.height(&surface.eval(u, v))
    };
    let (mut low, mut high) = (0.0_f64, 1.0_f64);
    let (first, last) = (height(low), height(high));
    if (first < 0.0) == (last < 0.0) {
        // Within rounding or the gap of a border: the nearer end.
        return at(if first.abs() < last.abs() { low } else { high });
    }
    for _ in 0..52 {
        let middle = low.midpoint(high);
        if (height(middle) < 0.0) == (first < 0.0) {
            low = middle;
        } else {
            high = middle;
        }
    }
    at(low.midpoint(high))
}

/// Takes crossings apart into chains, open ones first.
fn chains(links: &mut BTreeMap<Crossing, Vec<Crossing>>) -> Vec<Vec<Crossing>> {
    let mut found = Vec::new();
    loop {
        let open = links.iter().find(|(_, next)| next.len() == 1);
        let any = links.iter().find(|(_, next)| !next.is_empty());
        let Some(start) = open.or(any).map(|(key, _)| *key) else {
            return found;
        };
        let mut chain = vec![start];
        let mut at = start;
        while let Some(next) = links.get_mut(&at).and_then(Vec::pop) {
            if let Some(back) = links.get_mut(&next)
                && let Some(index) = back.iter().position(|c| *c == at)
            {
                back.swap_remove(index);
            }
            chain.push(next);
            at = next;
        }
        found.push(chain);
    }
}

fn run(scene: &Scene<'_>, piece: usize, plane: &Plane, chain: &[[f64; 2]]) -> SectionRun {
    let of = &scene.set.pieces()[piece];
    let patch = &scene.set.patches()[of.patch.index()];
    let mut cuts: Vec<Cut> = Vec::new();
    for (k, pair) in chain.windows(2).enumerate() {
        let first = u32::from(k > 0);
        for step in first..=BETWEEN {
            let t = f64::from(step) / f64::from(BETWEEN);
            let place = [0, 1].map(|i| pair[0][i] * (1.0 - t) + pair[1][i] * t);
            let next = cut(&of.surface, plane, place);
            let again = |last: &Cut| last.point == next.point;
            if !cuts.last().is_some_and(again) {
                cuts.push(next);
            }
        }
    }
    SectionRun {
        panel: patch.panel.index(),
        cuts,
    }
}

/// The place of the cut nearest to a place, by Newton's step on the height.
fn cut(surface: &BezierPatch, plane: &Plane, mut place: [f64; 2]) -> Cut {
    let mut jet = surface.jet(place[0], place[1]);
    for _ in 0..8 {
        let height = plane.height(&jet.point);
        let slope = [plane.normal.dot(&jet.du), plane.normal.dot(&jet.dv)];
        let square = slope[0] * slope[0] + slope[1] * slope[1];
        let step = height / square;
        if !step.is_finite() || (step * square.sqrt()).abs() < 1e-15 {
            break;
        }
        place = [0, 1].map(|i| (place[i] - step * slope[i]).clamp(0.0, 1.0));
        jet = surface.jet(place[0], place[1]);
    }
    let bend = jet.normal().and_then(|normal| {
        let tangent = plane.normal.cross(&normal).try_normalize(1e-9)?;
        let across = plane.normal.cross(&tangent);
        let along = jet.normal_curvature(&normal, &tangent)?;
        Some(across * (along / across.dot(&normal)))
    });
    Cut {
        point: jet.point,
        bend,
    }
}
