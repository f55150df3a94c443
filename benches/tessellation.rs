//! How many proved triangles a second, and is a patch as cheap in a large set?
//! 100 smooth patches at three chords, then 1,000 and 10,000 at one: the time
//! a patch must not grow with the set. Run with one thread
//! (`RAYON_NUM_THREADS=1`) for figures per core.
#![allow(missing_docs, reason = "the macros make undocumented items")]

use std::hint::black_box;

use chordwise::demo::write_panels;
use chordwise::mesh::Meshed;
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};

fn panels(count: u32) -> PatchSet {
    let mut text = Vec::new();
    write_panels(count, &mut text).expect("memory takes all that is written");
    let text = String::from_utf8(text).expect("sets are text");
    let reading = PatchSet::from_ron(&text, "panels").expect("the demo writes valid sets");
    reading.set
}

fn mesh(set: &PatchSet, chord: f64) -> Meshed {
    let limits = Limits::new(chord, None, None);
    Meshed::new(black_box(set), &limits, |_| true, |_| ()).expect("smooth panels are proved")
}

fn triangles(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("triangles");
    group.sample_size(10);
    let set = panels(100);
    for chord in [0.1, 0.05, 0.01] {
        let count = mesh(&set, chord).mesh.triangles.len();
        group.throughput(Throughput::Elements(count as u64));
        group.bench_function(BenchmarkId::new("chord", chord), |bencher| {
            bencher.iter(|| mesh(&set, chord));
        });
    }
    group.finish();
}

fn patches(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("patches");
    group.sample_size(10);
    for count in [1_000, 10_000] {
        let set = panels(count);
        group.throughput(Throughput::Elements(u64::from(count)));
        group.bench_function(BenchmarkId::new("set", count), |bencher| {
            bencher.iter(|| mesh(&set, 0.1));
        });
    }
    group.finish();
}

criterion_group!(benches, triangles, patches);
criterion_main!(benches);
