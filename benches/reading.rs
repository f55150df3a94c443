//! How fast is a large file of bicubic patches read, and where does the time go?
//!
//! 5,000 patches of about 600 bytes each; a set of 100,000 takes twenty times as
//! long. `syntax only` is the parser alone, `whole` the checked model.

use std::fmt::Write;
use std::hint::black_box;

use chordwise::patch_set::{PatchSet, SetFile};
use criterion::{Criterion, Throughput, criterion_group, criterion_main};

/// A wavy sheet of bicubic patches, coordinates written with micrometre digits.
fn text(patches: u32) -> String {
    let mut text = String::from("(\n    name: \"sheet\", units: mm,\n    patches: [\n");
    for k in 0..patches {
        let (a, b) = (f64::from(k % 300), f64::from(k / 300));
        let _ = write!(text, "        (name: \"sheet/{k}\", surface: Bezier(net: [");
        for i in 0..4 {
            text.push('[');
            for j in 0..4 {
                let x = (a + f64::from(i) / 3.0) * 20.0;
                let y = (b + f64::from(j) / 3.0) * 20.0;
                let z = 30.0 * (x * 0.01).sin() * (y * 0.013).cos();
                let _ = write!(text, "({x:.6}, {y:.6}, {z:.9}), ");
            }
            text.push_str("], ");
        }
        text.push_str("])),\n");
    }
    text.push_str("    ],\n)\n");
    text
}

fn reading(criterion: &mut Criterion) {
    let text = text(5_000);
    let mut group = criterion.benchmark_group("reading");
    group.sample_size(10);
    group.throughput(Throughput::Bytes(text.len() as u64));
    group.bench_function("syntax only", |bencher| {
        bencher.iter(|| SetFile::from_ron(black_box(&text), "bench").is_ok());
    });
    group.bench_function("whole", |bencher| {
        bencher.iter(|| PatchSet::from_ron(black_box(&text), "bench").is_ok());
    });
    group.finish();
}

criterion_group!(benches, reading);
criterion_main!(benches);
