//! What does a point of a surface cost, and what its derivatives? Bicubic,
//! degree 5, and rational biquadratic.
#![allow(missing_docs, reason = "the macros make undocumented items")]

use std::hint::black_box;

use chordwise::bezier::BezierPatch;
use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};

#[path = "evaluation/nets.rs"]
mod nets;

fn evaluation(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("evaluation");
    for (name, patch) in nets::all() {
        let places: Vec<[f64; 2]> = (0..64)
            .flat_map(|i| (0..64).map(move |j| [f64::from(i) / 63.0, f64::from(j) / 63.0]))
            .collect();
        group.throughput(Throughput::Elements(places.len() as u64));
        group.bench_function(BenchmarkId::new("eval", name), |bencher| {
            bencher.iter(|| over(&patch, &places, |p, [u, v]| p.eval(u, v).x));
        });
        group.bench_function(BenchmarkId::new("jet", name), |bencher| {
            bencher.iter(|| over(&patch, &places, |p, [u, v]| p.jet(u, v).duv.x));
        });
    }
    group.finish();
}

fn over(
    patch: &BezierPatch,
    places: &[[f64; 2]],
    value: impl Fn(&BezierPatch, [f64; 2]) -> f64,
) -> f64 {
    let patch = black_box(patch);
    places.iter().map(|&place| value(patch, place)).sum()
}

criterion_group!(benches, evaluation);
criterion_main!(benches);
