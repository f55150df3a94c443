//! The audit: clean meshes are proved anew, tampered ones are found out.

use std::path::PathBuf;
use std::time::Instant;

use chordwise::mesh::{Audit, Evidence, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use chordwise::scalar::Tolerance;

fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("patches")
}

fn set(name: &str) -> PatchSet {
    PatchSet::read(&folder().join(name)).unwrap().set
}

#[test]
fn try_all() {
    for file in std::fs::read_dir(folder()).unwrap() {
        let name = file.unwrap().file_name().into_string().unwrap();
        if !name.ends_with(".ron") {
            continue;
        }
        let set = set(&name);
        let chord = set.tolerances().chord.get();
        let clock = Instant::now();
        let made =
            match Meshed::with_evidence(&set, &Limits::new(chord, None, None), |_| true, |_| ()) {
                Ok(m) => m,
                Err(e) => {
                    println!("{name}: {e}");
                    continue;
                }
            };
        let t0 = clock.elapsed().as_secs_f64();
        let evidence = Evidence::of(&made.mesh).unwrap();
        let clock = Instant::now();
        let audit = Audit::of(&set, &evidence, Tolerance::new(chord).unwrap()).unwrap();
        let t1 = clock.elapsed().as_secs_f64();
        let n = audit.triangles as f64;
        println!(
            "{name}: {n} tri, chord {chord}, made {:.5} {:.5} att {:.5} | audit {:.5} {:.5} att {:.5} | us/tri {:.1} {:.1} | {} findings",
            made.deviation.to_mesh.proved,
            made.deviation.to_surface,
            made.deviation.to_mesh.attained,
            audit.to_mesh.proved,
            audit.to_surface,
            audit.to_mesh.attained,
            t0 / n * 1e6,
            t1 / n * 1e6,
            audit.findings.len()
        );
        for f in audit.findings.iter().take(4) {
            println!("    {f:?}");
        }
    }
}
