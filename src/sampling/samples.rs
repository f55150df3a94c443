//! All runs of a set, and the border of each piece made from them.

use std::ops::Range;

use super::projection::nearest;
use super::run::{self, Run, SamplingError, edge_curve};
use super::{BorderVertex, Limits, Outline};
use crate::bezier::Side;
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::Point;
use crate::topology::{EdgeId, Span, Topology};

/// The border vertices of a set: nodes first, then run after run.
#[derive(Debug, Clone)]
pub struct Samples {
    runs: Vec<Run>,
    /// The first vertex of every run.
    firsts: Vec<u32>,
    /// All places: nodes, then runs.
    points: Vec<Point>,
}

impl Samples {
    /// Samples every seam of the set.
    ///
    /// # Errors
    /// [`SamplingError`] when an edge cannot be brought within the chord.
    pub fn new(
        set: &PatchSet,
        topology: &Topology,
        limits: &Limits,
    ) -> Result<Self, SamplingError> {
        let runs = run::runs(set, topology, limits)?;
        let mut points: Vec<Point> = topology.nodes().iter().map(|n| n.point).collect();
        let mut firsts = Vec::with_capacity(runs.len());
        for run in &runs {
            firsts.push(u32::try_from(points.len()).expect("predicted and limited before the run"));
            points.extend_from_slice(&run.points);
        }
        Ok(Self {
            runs,
            firsts,
            points,
        })
    }

    /// The places of all border vertices; a vertex is its index.
    #[must_use]
    pub fn points(&self) -> &[Point] {
        &self.points
    }

    /// The run of every seam, by seam.
    #[must_use]
    pub fn runs(&self) -> &[Run] {
        &self.runs
    }

    /// The border of a piece.
    #[must_use]
    pub fn outline(&self, set: &PatchSet, topology: &Topology, piece: PieceId) -> Outline {
        let edges = Side::ALL.map(|side| EdgeId::of(piece, side));
        Outline {
            sides: edges.map(|edge| self.side(set, topology, edge)),
            collapsed: edges.map(|edge| topology.edges()[edge.index()].collapsed),
        }
    }

    fn side(&self, set: &PatchSet, topology: &Topology, id: EdgeId) -> Vec<BorderVertex> {
        let edge = &topology.edges()[id.index()];
        let node = |end: usize, t: f64| {
            let node = edge.nodes[end].index();
            self.border(t, u32::try_from(node).expect("node ids are u32"))
        };
        if edge.collapsed {
            return vec![node(0, 0.0), node(0, 1.0)];
        }
        let spans = &topology.spans()[Range::clone(&edge.spans)];
        let mut side = vec![node(0, 0.0)];
        for span in spans {
            self.inner(set, topology, span, &mut side);
            let end = span.nodes[1].index();
            side.push(self.border(span.t[1], u32::try_from(end).expect("node ids are u32")));
        }
        side
    }

    fn border(&self, t: f64, vertex: u32) -> BorderVertex {
        BorderVertex {
            t,
            vertex,
            point: self.points[vertex as usize],
        }
    }

    /// Appends the run's vertices along a span, by ascending own parameter.
    fn inner(
        &self,
        set: &PatchSet,
        topology: &Topology,
        span: &Span,
        side: &mut Vec<BorderVertex>,
    ) {
        let seam = &topology.seams()[span.seam.index()];
        let master = &topology.spans()[seam.spans[0].index()];
        let run = &self.runs[span.seam.index()];
        let first = self.firsts[span.seam.index()];
        let vertices = first
            ..first + u32::try_from(run.t.len()).expect("predicted and limited before the run");
        if master.edge == span.edge && master.t[0].to_bits() == span.t[0].to_bits() {
            side.extend(
                vertices
                    .zip(&run.t)
                    .map(|(vertex, &t)| self.border(t, vertex)),
            );
            return;
        }
        let curve = edge_curve(set, span.edge);
        let along = |t: f64| (t - master.t[0]) / (master.t[1] - master.t[0]);
        let mut before = span.t[0];
        let mut place = |vertex: u32, t: f64| {
            let s = if span.reversed {
                1.0 - along(t)
            } else {
                along(t)
            };
            let guess = span.t[0] * (1.0 - s) + span.t[1] * s;
            let point = self.points[vertex as usize];
            let mut own = nearest(&curve, &point, guess, span.t);
            if own <= before || own >= span.t[1] {
                // Folded back on itself within the gap: keep the order, the
                // certificate counts what that costs.
                own = if guess > before && guess < span.t[1] {
                    guess
                } else {
                    (before + span.t[1]) / 2.0
                };
            }
            before = own;
            side.push(BorderVertex {
                t: own,
                vertex,
                point,
            });
        };
        if span.reversed {
            vertices
                .zip(&run.t)
                .rev()
                .for_each(|(vertex, &t)| place(vertex, t));
        } else {
            vertices
                .zip(&run.t)
                .for_each(|(vertex, &t)| place(vertex, t));
        }
    }
}
