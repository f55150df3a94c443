//! How fast is a picture of 1920 x 1080 drawn of a million triangles?
#![allow(
    clippy::unwrap_used,
    missing_docs,
    reason = "a bench ends with a panic, and its macros write items"
)]

use criterion::{Criterion, criterion_group, criterion_main};

use chordwise::mesh::Meshed;
use chordwise::patch_set::PatchSet;
use chordwise::picture::{Curvature, Focus, Picture, PictureOptions, Scene, Shading, View};
use chordwise::sampling::Limits;

fn pictures(criterion: &mut Criterion) {
    let text = r#"(patches: [(name: "ball", surface: Sphere(radius: 500))])"#;
    let set = PatchSet::from_ron(text, "ball.ron").unwrap().set;
    let limits = Limits::new(0.0028, None, None);
    let made = Meshed::with_evidence(&set, &limits, |_| true, |_| ()).unwrap();
    let scene = Scene::new(&set, &made.mesh).unwrap();
    let mut group = criterion.benchmark_group("pictures");
    group.sample_size(10);
    for shading in [
        Shading::Plain,
        Shading::Reflection,
        Shading::Curvature(Curvature::Mean),
    ] {
        let options = PictureOptions {
            size: (1920, 1080),
            view: View::FrontQuarter,
            focus: Focus::All,
            shading,
            mesh_edges: false,
            range: None,
            lights: 48.0,
            upright: false,
            chord: 0.0028,
            proved: 0.0028,
        };
        let name = format!("{} {}", shading.name(), made.mesh.triangles.len());
        group.bench_function(name, |bench| {
            bench.iter(|| Picture::draw(&scene, &options, &[]));
        });
    }
    let options = PictureOptions {
        size: (1920, 1080),
        view: View::FrontQuarter,
        focus: Focus::All,
        shading: Shading::Plain,
        mesh_edges: false,
        range: None,
        lights: 48.0,
        upright: false,
        chord: 0.0028,
        proved: 0.0028,
    };
    let picture = Picture::draw(&scene, &options, &[]);
    group.bench_function("PNG", |bench| {
        bench.iter(|| {
            let mut bytes = Vec::new();
            picture.canvas.write_png(&mut bytes).unwrap();
            bytes
        });
    });
    group.finish();
}

criterion_group!(benches, pictures);
criterion_main!(benches);
