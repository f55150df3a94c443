//! What do strips cost and save against plain triangles?
//!
//! Finding strips stands beside the least that anybody has to do with the
//! triangles, a copy of their indices; the sizes are printed once.
#![allow(clippy::unwrap_used, reason = "a panic is how a bench fails")]
#![allow(missing_docs, reason = "the macros make undocumented items")]

use std::hint::black_box;

use chordwise::mesh::{Mesh, Storage, Strips};
use chordwise::scalar::Vector;
use criterion::{BenchmarkId, Criterion, Throughput, criterion_group, criterion_main};

#[path = "../tests/formats/shapes.rs"]
mod shapes;

fn meshes() -> [(&'static str, Mesh); 2] {
    [
        ("grid", shapes::grid(300, 300)),
        ("sphere", shapes::sphere(500, 199, 500.0, Vector::zeros())),
    ]
}

fn strips(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("strips");
    group.sample_size(20);
    for (name, mesh) in meshes() {
        let found = Strips::of(&mesh);
        let sizes = Storage::of(&mesh, &found);
        println!(
            "{name}: {} triangles, {} strips, {:.4} indices a triangle, {sizes:?}",
            mesh.triangles.len(),
            found.len(),
            found.indices_per_triangle(),
        );
        group.throughput(Throughput::Elements(mesh.triangles.len() as u64));
        group.bench_with_input(BenchmarkId::new("found", name), &mesh, |b, mesh| {
            b.iter(|| Strips::of(black_box(mesh)));
        });
        group.bench_with_input(BenchmarkId::new("plain", name), &mesh, |b, mesh| {
            b.iter(|| black_box(&mesh.triangles).as_flattened().to_vec());
        });
    }
    group.finish();
}

criterion_group!(benches, strips);
criterion_main!(benches);
