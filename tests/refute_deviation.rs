//! Dense samples of every shipped set, at three tolerances, against what was
//! proved of its mesh, both ways. The samples are measured by code of their own.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![allow(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    reason = "random numbers and counts far below 2^52"
)]

use chordwise::mesh::Meshed;
use chordwise::sampling::Limits;
use rayon::prelude::*;

mod refute;
use refute::chance::Chance;
use refute::verdict::{self, Effort};

/// Meshes a share of the sets at one multiple of their own chord.
fn over(factor: f64) {
    let faults: Vec<String> = refute::shipped()
        .par_iter()
        .flat_map(|(name, set)| {
            let chord = set.tolerances().chord.get() * factor;
            let limits = Limits::new(chord, None, None);
            let made = match Meshed::new(set, &limits, |_| true, |_| ()) {
                Ok(made) => made,
                Err(error) => return Some(format!("{name} at {chord}: {error}")),
            };
            let d = &made.deviation;
            if d.proved() > chord {
                return Some(format!("{name} at {chord}: proved {:e}", d.proved()));
            }
            let many = set.pieces().len() > 40;
            let effort = Effort {
                grid: if many { 16 } else { 40 },
                random: if many { 60 } else { 400 },
                edge: if many { 41 } else { 101 },
                climbs: 3,
                triangles: 12_000,
                lattice: if many { 8 } else { 24 },
            };
            match verdict::refute(set, &made, effort, &mut Chance::new(1)) {
                Ok(found) => {
                    println!(
                        "{name:18} {:7} triangles, chord {chord:.1e}: to mesh proved {:.3} found {:.3} attained {:.3}, to surface proved {:.3} found {:.3} (parts of the chord)",
                        made.mesh.triangles.len(),
                        d.to_mesh.proved / chord,
                        found.to_mesh / chord,
                        d.to_mesh.attained / chord,
                        d.to_surface / chord,
                        found.to_surface / chord,
                    );
                    None
                }
                Err(fault) => Some(format!("{name} at {chord}: {fault}")),
            }
        })
        .collect();
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn at_the_own_tolerance() {
    over(1.0);
}

#[test]
fn at_a_third_of_it() {
    over(1.0 / 3.0);
}

#[test]
fn at_three_times_it() {
    over(3.0);
}
