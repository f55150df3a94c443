//! How fast is each writer beside plain buffered writing of the same bytes?
#![allow(clippy::unwrap_used, reason = "a panic is how a bench fails")]
#![allow(missing_docs, reason = "the macros make undocumented items")]

use std::fs::File;
use std::hint::black_box;
use std::io::{BufWriter, Write};

use chordwise::format::{Format, Layout, WriteOptions, write};
use chordwise::mesh::Strips;
use chordwise::scalar::{Tolerance, Vector};
use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};

#[path = "../tests/formats/shapes.rs"]
mod shapes;

fn writing(criterion: &mut Criterion) {
    let mesh = shapes::sphere(500, 199, 500.0, Vector::new(0.1, 0.2, 0.3));
    let strips = Strips::of(&mesh);
    let folder = tempfile::tempdir().unwrap();
    let target = folder.path().join("mesh");
    let mut group = criterion.benchmark_group("writing");
    group.sample_size(20);
    let cases = [
        (Format::Stl, Layout::Triangles),
        (Format::Obj, Layout::Indexed),
        (Format::Ply, Layout::Indexed),
        (Format::Glb, Layout::Indexed),
        (Format::Glb, Layout::Strips),
        (Format::Vtu, Layout::Indexed),
    ];
    for (format, layout) in cases {
        let options = WriteOptions {
            layout: Some(layout),
            strips: Some(&strips),
            ..WriteOptions::new(Tolerance::new(0.1).unwrap())
        };
        let mut bytes = Vec::new();
        write(&mesh, format, &options, &mut bytes).unwrap();
        let name = format!("{format} {layout}");
        group.throughput(Throughput::Bytes(bytes.len() as u64));
        group.bench_function(BenchmarkId::new("mesh", &name), |b| {
            b.iter(|| {
                let mut file = File::create(&target).unwrap();
                write(black_box(&mesh), format, &options, &mut file).unwrap()
            });
        });
        group.bench_with_input(BenchmarkId::new("plain", &name), &bytes, |b, bytes| {
            b.iter(|| {
                let mut file = BufWriter::new(File::create(&target).unwrap());
                for piece in black_box(bytes).chunks(64) {
                    file.write_all(piece).unwrap();
                }
                file.flush().unwrap();
            });
        });
    }
    group.finish();
}

criterion_group!(benches, writing);
criterion_main!(benches);
