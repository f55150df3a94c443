//! Vertices on seams: kept curves sampled by arc length under the size field,
//! once a chain, and a start for those that may be crossed.
//!
//! ```text
//! Q = integral ds / h along a chain, n = round(Q), sample k where it is Q k / n
//! ```
//!
//! Nodes inside a chain are corners of patches and no more than that. The start of
//! the mesh needs them; they are listed to be taken out.

use rayon::prelude::*;

use super::atlas::{Place, carried};
use super::field::{Field, count, ratio};
use super::kept::{Chain, Seams};
use crate::patch_set::PatchSet;
use crate::sampling::Cumulative;
use crate::scalar::Point;
use crate::topology::{SeamId, Span, Topology, nearest_from};

/// Stations along a seam at which the size is asked for.
const FEWEST: usize = 16;
const MOST: usize = 1024;

/// Nodes this close to a sample, in edges, are that sample.
const SAME: f64 = 1e-6;

/// The vertices on seams; numbers below that of nodes are nodes.
#[derive(Debug)]
pub(super) struct Border {
    pub(super) points: Vec<Point>,
    /// By span: own parameter and vertex, ascending, ends left out.
    pub(super) runs: Vec<Vec<(f64, u32)>>,
    /// Vertices that are to go, each with the neighbour it goes to, in order.
    pub(super) transient: Vec<[u32; 2]>,
    /// Kept curves too short for the size: a place on each, and its length.
    pub(super) short: Vec<(Place, f64)>,
}

/// A seam's master run, in edges of the size field.
struct Measured {
    sums: Cumulative,
    t: [f64; 2],
    length: f64,
}

impl Measured {
    /// The master's parameter where so many edges are passed.
    fn reach(&self, edges: f64) -> f64 {
        let s = self.sums.reach(edges);
        self.t[0] * (1.0 - s) + self.t[1] * s
    }
}

fn narrow(index: usize) -> u32 {
    u32::try_from(index).expect("counts are limited before the run")
}

/// The place of parameter `t` of a span.
pub(super) fn on_span(span: &Span, t: f64) -> Place {
    Place {
        piece: narrow(span.edge.piece().index()),
        uv: span.edge.side().at(t),
    }
}

fn measured(set: &PatchSet, topology: &Topology, field: &Field, seam: usize) -> Measured {
    let spans = &topology.seams()[seam].spans;
    let span = |k: usize| &topology.spans()[spans[k].index()];
    let master = span(0);
    let curve = set.pieces()[master.edge.piece().index()]
        .surface
        .edge(master.edge.side());
    let at = |s: f64| master.t[0] * (1.0 - s) + master.t[1] * s;
    let size = |t: f64| {
        (0..spans.len())
            .map(|k| field.at(on_span(span(k), carried(master, span(k), t))))
            .fold(f64::INFINITY, f64::min)
    };
    let steps = (0..FEWEST).map(|k| {
        let (a, b) = (at(ratio(k, FEWEST)), at(ratio(k + 1, FEWEST)));
        (curve.eval(b) - curve.eval(a)).norm()
    });
    let length: f64 = steps.sum();
    let stations = count(2.0 * length / size(at(0.5))).clamp(FEWEST, MOST);
    let sums = Cumulative::new((0..=stations).map(|k| {
        let t = at(ratio(k, stations));
        curve.jet(t).dt.norm() * (master.t[1] - master.t[0]) / size(t)
    }));
    Measured {
        sums,
        t: master.t,
        length,
    }
}

impl Border {
    /// Samples all seams.
    pub(super) fn new(set: &PatchSet, topology: &Topology, seams: &Seams, field: &Field) -> Self {
        let all: Vec<Measured> = (0..topology.seams().len())
            .into_par_iter()
            .map(|seam| measured(set, topology, field, seam))
            .collect();
        let mut border = Self {
            points: topology.nodes().iter().map(|node| node.point).collect(),
            runs: Vec::new(),
            transient: Vec::new(),
            short: Vec::new(),
        };
        // By seam: master's parameter and vertex.
        let mut masters: Vec<Vec<(f64, u32)>> = vec![Vec::new(); all.len()];
        for chain in &seams.chains {
            border.chain(set, topology, chain, &all, &mut masters);
        }
        for (seam, of) in all.iter().enumerate() {
            if seams.is_kept(SeamId::new(seam)) {
                continue;
            }
            let edges = of.sums.total();
            let whole = count(edges.round()).max(1);
            for k in 1..whole {
                let t = of.reach(edges * ratio(k, whole));
                let vertex = border.push(set, topology, seam, t);
                masters[seam].push((t, vertex));
            }
        }
        for run in &mut masters {
            run.sort_by(|a, b| a.0.total_cmp(&b.0));
        }
        border.runs = topology
            .spans()
            .par_iter()
            .map(|span| {
                own(
                    set,
                    topology,
                    &border.points,
                    span,
                    &masters[span.seam.index()],
                )
            })
            .collect();
        border
    }

    fn push(&mut self, set: &PatchSet, topology: &Topology, seam: usize, t: f64) -> u32 {
        let master = &topology.spans()[topology.seams()[seam].spans[0].index()];
        let [u, v] = master.edge.side().at(t);
        let surface = &set.pieces()[master.edge.piece().index()].surface;
        self.points.push(surface.eval(u, v));
        narrow(self.points.len() - 1)
    }

    /// Samples one chain.
    fn chain(
        &mut self,
        set: &PatchSet,
        topology: &Topology,
        chain: &Chain,
        all: &[Measured],
        masters: &mut [Vec<(f64, u32)>],
    ) {
        // Where each link begins, in edges.
        let mut starts = vec![0.0];
        for link in &chain.links {
            starts.push(starts[starts.len() - 1] + all[link.seam].sums.total());
        }
        let total = starts[chain.links.len()];
        let least = if chain.closed { 3 } else { 1 };
        let whole = count(total.round()).max(least);
        let length: f64 = chain.links.iter().map(|link| all[link.seam].length).sum();
        if total < 0.75 * ratio(least, 1) {
            let first = chain.links[0].seam;
            let master = &topology.spans()[topology.seams()[first].spans[0].index()];
            let middle = (master.t[0] + master.t[1]) / 2.0;
            self.short
                .push((on_span(master, middle), length / ratio(least, 1)));
        }
        // All vertices along the chain: place in edges, vertex, whether it stays.
        let mut along: Vec<(f64, u32, bool)> = Vec::new();
        let sample = |q: f64| {
            let nearest = (q / total * ratio(whole, 1)).round();
            (q - total * nearest / ratio(whole, 1)).abs() <= SAME
        };
        for (k, link) in chain.links.iter().enumerate() {
            let master = &topology.spans()[topology.seams()[link.seam].spans[0].index()];
            let node = |end: usize| narrow(master.nodes[end].index());
            let [from, to] = if link.forward { [0, 1] } else { [1, 0] };
            along.push((starts[k], node(from), k == 0 || sample(starts[k])));
            if k + 1 == chain.links.len() {
                along.push((total, node(to), true));
            }
        }
        for k in 1..whole {
            let q = total * ratio(k, whole);
            let link = starts[1..]
                .partition_point(|&s| s <= q)
                .min(chain.links.len() - 1);
            if (q - starts[link]).abs() <= SAME || (q - starts[link + 1]).abs() <= SAME {
                continue;
            }
            let of = chain.links[link];
            let inside = q - starts[link];
            let edges = if of.forward {
                inside
            } else {
                all[of.seam].sums.total() - inside
            };
            let t = all[of.seam].reach(edges);
            let vertex = self.push(set, topology, of.seam, t);
            masters[of.seam].push((t, vertex));
            along.push((q, vertex, true));
        }
        along.sort_by(|a, b| a.0.total_cmp(&b.0));
        let staying: Vec<usize> = (0..along.len()).filter(|&k| along[k].2).collect();
        for pair in staying.windows(2) {
            let (low, high) = (along[pair[0]], along[pair[1]]);
            let between = &along[pair[0] + 1..pair[1]];
            let middle = between.partition_point(|v| v.0 - low.0 <= high.0 - v.0);
            let down = between[..middle].iter().map(|v| [v.1, low.1]);
            let up = between[middle..].iter().rev().map(|v| [v.1, high.1]);
            self.transient.extend(down.chain(up));
        }
    }
}

/// The vertices of a seam on one of its uses.
fn own(
    set: &PatchSet,
    topology: &Topology,
    points: &[Point],
    span: &Span,
    run: &[(f64, u32)],
) -> Vec<(f64, u32)> {
    let master = &topology.spans()[topology.seams()[span.seam.index()].spans[0].index()];
    if std::ptr::eq(master, span) {
        return run.to_vec();
    }
    let curve = set.pieces()[span.edge.piece().index()]
        .surface
        .edge(span.edge.side());
    let mut found: Vec<(f64, u32)> = run
        .iter()
        .map(|&(t, vertex)| {
            let guess = carried(master, span, t);
            let foot = nearest_from(&curve, &points[vertex as usize], guess, span.t);
            (foot.t, vertex)
        })
        .collect();
    if span.reversed != master.reversed {
        found.reverse();
    }
    // Folded on itself within the gap: keep the order.
    let mut before = span.t[0];
    for k in 0..found.len() {
        if found[k].0 <= before || found[k].0 >= span.t[1] {
            let left = ratio(found.len() - k + 1, 1);
            found[k].0 = before + (span.t[1] - before) / left;
        }
        before = found[k].0;
    }
    found
}
