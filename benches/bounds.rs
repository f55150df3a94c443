//! What does a proof cost? The restriction of a patch to a triangle, which is
//! most of the proof of one triangle, and the bound of an edge on its chord.
#![allow(missing_docs, reason = "the macros make undocumented items")]

use std::hint::black_box;

use chordwise::bezier::{Side, TriangleNet, TriangleRestriction};
use chordwise::scalar::Point;
use criterion::{BenchmarkId, Criterion, criterion_group, criterion_main};

#[path = "evaluation/nets.rs"]
mod nets;

fn bounds(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("bounds");
    let corners = [[0.2, 0.3], [0.25, 0.31], [0.22, 0.36]];
    for (name, patch) in nets::all() {
        group.bench_function(BenchmarkId::new("triangle", name), |bencher| {
            let mut restriction = TriangleRestriction::default();
            let mut net = TriangleNet::default();
            let origin = Point::origin();
            bencher.iter(|| {
                let corners = black_box(corners);
                patch.restrict_triangle(corners, &origin, &mut restriction, &mut net);
                net.points.last().map(|p| p.x)
            });
        });
        let edge = patch.edge(Side::U0).restrict(0.2, 0.3);
        group.bench_function(BenchmarkId::new("chord", name), |bencher| {
            bencher.iter(|| black_box(&edge).chord_bound());
        });
    }
    group.finish();
}

criterion_group!(benches, bounds);
criterion_main!(benches);
