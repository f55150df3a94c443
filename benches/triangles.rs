//! How many triangles, beside the floor? One line a surface and chord.
//!
//! `cargo bench --bench triangles` prints the family; names of the family or
//! paths of sets behind `--` choose.

use std::time::Instant;

use chordwise::demo::family;
use chordwise::mesh::{Deviation, Mesh};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::{Limits, Samples};
use chordwise::tessellation::{floor, tessellate};
use chordwise::topology::Topology;

fn main() {
    println!(
        "| surface | chord | triangles | ratio | goal | proved / chord | proved / attained | reverse / chord | us a triangle |"
    );
    println!("|---|---|---|---|---|---|---|---|---|");
    let arguments: Vec<String> = std::env::args()
        .skip(1)
        .filter(|a| !a.starts_with("--"))
        .collect();
    for member in family() {
        let chosen = |a: &String| member.name.contains(a.as_str());
        for &(chord, goal) in member.goals {
            if arguments.is_empty() || arguments.iter().any(chosen) {
                line(member.name, &member.set, chord, Some(goal));
            }
        }
    }
    for path in arguments.iter().filter(|a| a.ends_with(".ron")) {
        match PatchSet::read(path) {
            Ok(reading) => {
                for chord in [0.1, 0.05, 0.01] {
                    let unit = reading.set.unit().in_mm();
                    line(path, &reading.set, chord / unit, None);
                }
            }
            Err(faults) => println!("{}", faults.render(false)),
        }
    }
}

fn line(name: &str, set: &PatchSet, chord: f64, goal: Option<f64>) {
    if let Err(message) = measure(name, set, chord, goal) {
        println!("| {name} | {chord} | {message} |");
    }
}

fn measure(
    name: &str,
    set: &PatchSet,
    chord: f64,
    goal: Option<f64>,
) -> Result<(), Box<dyn std::error::Error>> {
    let limits = Limits::new(chord, None, None);
    let topology = Topology::build(set)?;
    let start = Instant::now();
    let samples = Samples::new(set, &topology, &limits)?;
    let done = tessellate(set, &topology, &samples, &limits, |_| true)?;
    let seconds = start.elapsed().as_secs_f64();
    let mesh = Mesh::assemble(set, &samples, &done);
    let deviation = Deviation::of(set, &done, &mesh).ok_or("nothing was tessellated")?;
    let collapsed = |k: usize| [0, 1, 2, 3].map(|s| topology.edges()[k * 4 + s].collapsed);
    let pieces = set.pieces().iter().enumerate();
    let least: f64 = pieces
        .map(|(k, piece)| floor(&piece.surface, collapsed(k), chord))
        .sum();
    if std::env::var("PARTS").is_ok() {
        let mut rows: Vec<(f64, String)> = Vec::new();
        for part in &mesh.parts {
            let patch = set.patches().iter().find(|p| p.name == part.name).unwrap();
            let least: f64 = patch
                .pieces
                .clone()
                .map(|k| floor(&set.pieces()[k].surface, collapsed(k), chord))
                .sum();
            let n = part.triangles.len() as f64;
            rows.push((
                n - least,
                format!(
                    "{} {} n {} floor {:.0} ratio {:.2}",
                    part.name,
                    patch.kind,
                    n,
                    least,
                    n / least
                ),
            ));
        }
        rows.sort_by(|a, b| b.0.total_cmp(&a.0));
        for (e, r) in rows.iter().take(25) {
            println!("   {e:.0} {r}");
        }
    }
    let count = mesh.triangles.len();
    #[allow(clippy::cast_precision_loss, reason = "counts stay far below 2^52")]
    let count_f = count as f64;
    let ratio = count_f / least;
    let goal = goal.map_or(String::new(), |g| {
        format!("{g}{}", if ratio > g { " MISSED" } else { "" })
    });
    println!(
        "| {name} | {chord} | {count} | {ratio:.3} | {goal} | {:.3} | {:.3} | {:.3} | {:.2} |",
        deviation.to_mesh.proved / chord,
        deviation.to_mesh.proved / deviation.to_mesh.attained,
        deviation.to_surface / chord,
        seconds * 1e6 / count_f,
    );
    Ok(())
}
