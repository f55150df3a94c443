//! The deviation of each cell, proved from its net and the flat triangles.
//!
//! **Surface to mesh.** The surface over a part of a cell lies in the hull of
//! that part's net, so it is no farther from the mesh than the largest of a
//! convex distance at the control points (`facet`): to one triangle, or to the
//! roof of two. The triangle is chosen for each part by walking to the one
//! nearest its middle; parts that are not good enough are quartered.
//!
//! **Mesh to surface.** Take cells R, T's own among them, whose flat triangles
//! all face T's way. Projected along T's normal, their flat triangles go round
//! every point m of T once at least. The outline of S(R) is moved to theirs by
//! straight lines between points of each edge curve and its chord, no longer
//! than the edge's figure (`bezier::close_chord_bound`, or the distance of the corners
//! if that is more). So either an edge whose figure reaches T sweeps m, which is
//! then as near to the curve, or the projection of S(R) goes round m too, hence
//! covers it, and m is as near as S(R) is high over T's plane there:
//!
//! ```text
//! mesh to surface <= max(figures of R's outer edges that reach T,
//!                        heights of the parts of S(R) whose nets project on T)
//! ```
//!
//! R is T's cell alone, or grown from it over edges whose figure is too large,
//! whichever is better. Degree of a map: any text on topology; the hull lemma:
//! Farin, *Curves and Surfaces for CAGD*.
//!
//! Rounding is added to every bound (`rounding`).

use std::collections::BTreeSet;

use rayon::prelude::*;

use super::cell::{Cell, NONE, across, facet_index};
use super::evidence::Evidence;
use super::facet::{Facet, Facets, to_triangle};
use super::part::{apart, centre, height_over, is_tiny, middle, quarters};
use super::rounding::slack;
use crate::bezier::{BezierPatch, TriangleNet, TriangleRestriction, close_chord_bound};
use crate::pace;
use crate::patch_set::PatchSet;
use crate::scalar::{Point, Vector};

/// Proved figures are brought within this factor of the attained one.
const TIGHT: f64 = 1.02;

/// What is below this part of the chord is not looked at more closely.
const SMALL: f64 = 1e-3;

/// Parts looked at for one cell: while the chord is not proved, and to come
/// closer to the attained figure.
const MOST_PARTS: usize = 20_000;
const MORE_PARTS: usize = 500;

/// Cells taken together at most for one triangle.
const MOST_CELLS: usize = 400;

/// A point of the surface and its distance from the mesh nearby.
#[derive(Debug, Clone, Copy)]
pub(super) struct Peak {
    pub(super) distance: f64,
    pub(super) place: [f64; 2],
    pub(super) point: Point,
}

/// What is proved of one cell.
#[derive(Debug, Clone, Copy)]
pub(super) struct Figures {
    pub(super) to_mesh: f64,
    pub(super) to_surface: f64,
    pub(super) peak: Peak,
}

/// A first look at a cell.
#[derive(Debug, Clone, Copy)]
struct First {
    edges: [f64; 3],
    peak: Peak,
}

#[derive(Debug, Default)]
struct Scratch {
    restriction: TriangleRestriction,
    net: TriangleNet,
    parts: Vec<([[f64; 2]; 3], u32)>,
}

/// A table of everything a proof looks at.
pub(super) struct Prover<'a> {
    set: &'a PatchSet,
    evidence: &'a Evidence,
    cells: &'a [Cell],
    facets: Facets,
    chord: f64,
    /// By piece: what rounding may have taken from a bound.
    slack: Vec<f64>,
    /// Beyond edge k of each cell in its piece, or `NONE`.
    across: Vec<[u32; 3]>,
}

impl<'a> Prover<'a> {
    pub(super) fn new(
        set: &'a PatchSet,
        evidence: &'a Evidence,
        cells: &'a [Cell],
        chord: f64,
    ) -> Self {
        let slack = set.pieces().par_iter().map(|p| slack(&p.surface)).collect();
        Self {
            set,
            evidence,
            cells,
            facets: Facets::of(evidence, cells),
            chord,
            slack,
            across: across(cells),
        }
    }

    /// The figures of every cell.
    pub(super) fn prove(&self) -> Vec<Figures> {
        // Each is looked at twice.
        pace::expect(2 * self.cells.len() as u64, "triangles");
        let first: Vec<First> = self
            .cells
            .par_iter()
            .map_init(Scratch::default, |scratch, cell| {
                pace::advance(1, 0);
                self.first(cell, scratch)
            })
            .collect();
        let attained = first
            .iter()
            .map(|f| f.peak.distance)
            .fold(0.0, f64::max)
            .min(self.chord);
        (0..self.cells.len())
            .into_par_iter()
            .map_init(Scratch::default, |scratch, index| {
                pace::step(1);
                self.figures(index, &first, attained, scratch)
            })
            .collect()
    }

    /// Distance of a point from the nearest triangle of the whole mesh.
    pub(super) fn distance(&self, point: &Point) -> f64 {
        self.facets
            .facets
            .par_iter()
            .map(|facet| to_triangle(&Vector::zeros(), &facet.from(point)))
            .reduce(|| f64::INFINITY, f64::min)
    }

    fn surface(&self, cell: &Cell) -> &BezierPatch {
        &self.set.pieces()[cell.piece].surface
    }

    fn corners(&self, cell: &Cell) -> [Point; 3] {
        cell.points.map(|p| self.evidence.points[p as usize])
    }

    /// A part's middle, and its distance from the mesh nearby.
    fn sample(&self, cell: &Cell, place: [f64; 2], hint: u32) -> (u32, Peak) {
        let point = self.surface(cell).eval(place[0], place[1]);
        let (facet, distance) = self.facets.walk(hint, &point);
        let peak = Peak {
            distance,
            place,
            point,
        };
        (facet, peak)
    }

    fn first(&self, cell: &Cell, scratch: &mut Scratch) -> First {
        let [a, b, c] = cell.places;
        let corners = self.corners(cell);
        let origin = corners[0];
        self.surface(cell).restrict_triangle(
            cell.places,
            &origin,
            &mut scratch.restriction,
            &mut scratch.net,
        );
        let net = &scratch.net;
        let ends = corners.map(|p| p - origin);
        let off = [0, 1, 2].map(|k| (net.points[net.corner(k)] - ends[k]).norm());
        let edges = [0, 1, 2].map(|k| {
            let d = net.degree;
            let of = (0..=d).map(|s| match k {
                0 => net.index(d - s, s),
                1 => net.index(0, d - s),
                _ => net.index(s, 0),
            });
            let points: Vec<Vector> = of.clone().map(|i| net.points[i]).collect();
            let weights: Vec<f64> = if net.weights.is_empty() {
                Vec::new()
            } else {
                of.map(|i| net.weights[i]).collect()
            };
            let next = (k + 1) % 3;
            close_chord_bound(&points, &weights, &ends[k], &ends[next])
                .max(off[k])
                .max(off[next])
                + self.slack[cell.piece]
        });
        let hint = facet_index(cell.face);
        let mut peak = self.sample(cell, centre(cell.places), hint).1;
        for (p, q) in [(a, b), (b, c), (c, a)] {
            let other = self.sample(cell, middle(p, q), hint).1;
            if other.distance > peak.distance {
                peak = other;
            }
        }
        First { edges, peak }
    }

    fn figures(
        &self,
        index: usize,
        first: &[First],
        attained: f64,
        scratch: &mut Scratch,
    ) -> Figures {
        let cell = &self.cells[index];
        let own = Facet::new(self.corners(cell));
        let mut peak = first[index].peak;
        let mut to_mesh = 0.0_f64;
        let mut height = 0.0_f64;
        let origin = own.corners[0];
        let mut looked = 0;
        scratch.parts.clear();
        scratch.parts.push((cell.places, facet_index(cell.face)));
        while let Some((part, mut hint)) = scratch.parts.pop() {
            looked += 1;
            let goal = self.goal(attained, peak.distance);
            self.surface(cell).restrict_triangle(
                part,
                &origin,
                &mut scratch.restriction,
                &mut scratch.net,
            );
            let points = &scratch.net.points;
            let slack = self.slack[cell.piece];
            let mut bound = self.to_facet(hint, points, &origin) + slack;
            if bound > goal {
                let (nearest, found) = self.sample(cell, centre(part), hint);
                if found.distance > peak.distance {
                    peak = found;
                }
                if nearest != hint {
                    hint = nearest;
                    bound = bound.min(self.to_facet(hint, points, &origin) + slack);
                }
                for k in 0..3 {
                    if bound > goal
                        && let Some(roof) = self.facets.roof(hint, k, points, &origin)
                    {
                        bound = bound.min(roof + slack);
                    }
                }
            }
            let high = height_over(&own, points, &origin).map_or(0.0, |h| h + slack);
            let worst = bound.max(high);
            let most = if worst > self.chord {
                MOST_PARTS
            } else {
                MORE_PARTS
            };
            if worst <= self.goal(attained, peak.distance) || looked >= most || is_tiny(part) {
                to_mesh = to_mesh.max(bound);
                height = height.max(high);
            } else {
                scratch.parts.extend(quarters(part).map(|p| (p, hint)));
            }
        }
        let to_surface = if cell.fill {
            0.0
        } else {
            let edges = first[index].edges.iter().copied().fold(0.0, f64::max);
            let alone = height.max(edges);
            let goal = self.goal(attained, peak.distance);
            if alone <= goal {
                alone
            } else {
                self.ring(index, &own, first, goal, scratch)
                    .map_or(alone, |ring| ring.min(alone))
            }
        };
        Figures {
            to_mesh,
            to_surface,
            peak,
        }
    }

    /// What a part must be proved within: close to what is attained, and within
    /// the chord unless a real point is farther.
    fn goal(&self, attained: f64, here: f64) -> f64 {
        let tight = (TIGHT * attained.max(here)).max(SMALL * self.chord);
        if here <= self.chord {
            tight.min(self.chord)
        } else {
            tight
        }
    }

    fn to_facet(&self, facet: u32, points: &[Vector], origin: &Point) -> f64 {
        let corners = self.facets.facets[facet as usize].from(origin);
        points
            .iter()
            .map(|p| to_triangle(p, &corners))
            .fold(0.0, f64::max)
    }

    /// Mesh to surface for a facet, by the cells round it: wherever an edge
    /// reaches the facet with a figure above the goal, the cell beyond it is
    /// taken in, if it faces the facet's way.
    fn ring(
        &self,
        index: usize,
        own: &Facet,
        first: &[First],
        goal: f64,
        scratch: &mut Scratch,
    ) -> Option<f64> {
        let normal = own.normal?;
        let reach = |member: usize, k: usize| {
            let corners = self.corners(&self.cells[member]);
            let figure = first[member].edges[k];
            let away = apart(own, &normal, &corners[k], &corners[(k + 1) % 3]);
            if away <= figure { figure } else { 0.0 }
        };
        let faces = |member: usize| {
            let of = &self.cells[member];
            of.fill
                || Facet::new(self.corners(of))
                    .normal
                    .is_none_or(|n| n.dot(&normal) > 0.0)
        };
        let mut ring: BTreeSet<usize> = BTreeSet::from([index]);
        let mut edges: Vec<(usize, usize)> = (0..3).map(|k| (index, k)).collect();
        let mut next = 0;
        while let Some(&(member, k)) = edges.get(next) {
            next += 1;
            let other = self.across[member][k];
            if other == NONE || ring.len() >= MOST_CELLS || reach(member, k) <= goal {
                continue;
            }
            let other = other as usize;
            if !ring.contains(&other) && faces(other) {
                ring.insert(other);
                edges.extend((0..3).map(|k| (other, k)));
            }
        }
        let outer = edges.iter().filter(|&&(member, k)| {
            let other = self.across[member][k];
            other == NONE || !ring.contains(&(other as usize))
        });
        let mut most = outer
            .map(|&(member, k)| reach(member, k))
            .fold(0.0, f64::max);
        let origin = own.corners[0];
        for member in ring {
            let of = &self.cells[member];
            let mut looked = 0;
            scratch.parts.clear();
            scratch.parts.push((of.places, 0));
            while let Some((part, _)) = scratch.parts.pop() {
                looked += 1;
                self.surface(of).restrict_triangle(
                    part,
                    &origin,
                    &mut scratch.restriction,
                    &mut scratch.net,
                );
                let high = height_over(own, &scratch.net.points, &origin)
                    .map_or(0.0, |h| h + self.slack[of.piece]);
                let limit = if high > self.chord {
                    MOST_PARTS
                } else {
                    MORE_PARTS
                };
                if high <= goal.max(most) || looked >= limit || is_tiny(part) {
                    most = most.max(high);
                } else {
                    scratch.parts.extend(quarters(part).map(|p| (p, 0)));
                }
            }
        }
        Some(most)
    }
}
