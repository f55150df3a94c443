//! What does a seam cost? Pairing, and the survey with its brackets, at 1,000,
//! 10,000 and 100,000 bicubic patches: the time per seam must not grow with the
//! set. Run with one thread (`RAYON_NUM_THREADS=1`) for figures per core.

use std::hint::black_box;

use chordwise::continuity::Survey;
use chordwise::demo::write_panels;
use chordwise::patch_set::PatchSet;
use chordwise::topology::Topology;
use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};

fn panels(count: u32) -> PatchSet {
    let mut text = Vec::new();
    write_panels(count, &mut text).expect("memory takes all that is written");
    let text = String::from_utf8(text).expect("sets are text");
    let reading = PatchSet::from_ron(&text, "panels").expect("the demo writes valid sets");
    reading.set
}

fn seams(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("seams");
    group.sample_size(10);
    for count in [1_000, 10_000, 100_000] {
        let set = panels(count);
        let topology = Topology::build(&set).expect("the demo's edges meet");
        group.throughput(Throughput::Elements(topology.contacts().len() as u64));
        group.bench_function(BenchmarkId::new("topology", count), |bencher| {
            bencher.iter(|| Topology::build(black_box(&set)));
        });
        group.bench_function(BenchmarkId::new("survey", count), |bencher| {
            bencher.iter(|| Survey::of(black_box(&set), &topology));
        });
    }
    group.finish();
}

criterion_group!(benches, seams);
criterion_main!(benches);
