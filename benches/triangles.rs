//! How many triangles, beside the floor? One line a surface and chord.
//!
//! `cargo bench --bench triangles` prints the family; names of the family or
//! paths of sets behind `--` choose.

use chordwise::demo::family;
use chordwise::mesh::Meshed;
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use chordwise::tessellation::floor;

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
    let made = Meshed::new(set, &Limits::new(chord, None, None), |_| true, |_| ())?;
    let count = made.mesh.triangles.len();
    let ratio = number(count) / made.floor;
    let goal = match goal {
        Some(goal) if ratio > goal => format!("{goal} MISSED"),
        Some(goal) => format!("{goal}"),
        None => String::new(),
    };
    let deviation = &made.deviation;
    let seconds = made.seconds.sampling + made.seconds.tessellation;
    println!(
        "| {name} | {chord} | {count} | {ratio:.3} | {goal} | {:.3} | {:.3} | {:.3} | {:.2} |",
        deviation.to_mesh.proved / chord,
        deviation.to_mesh.proved.max(1e-12) / deviation.to_mesh.attained.max(1e-12),
        deviation.to_surface / chord,
        seconds * 1e6 / number(count),
    );
    if goal.is_empty() {
        excess(set, &made, chord);
    }
    Ok(())
}

/// The patches that take the most triangles beyond their floor.
fn excess(set: &PatchSet, made: &Meshed, chord: f64) {
    let mut patches = Vec::new();
    for part in &made.mesh.parts {
        let Some(patch) = set.patches().iter().find(|p| p.name == part.name) else {
            continue;
        };
        let collapsed = |k: usize| [0, 1, 2, 3].map(|s| made.topology.edges()[k * 4 + s].collapsed);
        let pieces = patch.pieces.clone();
        let least: f64 = pieces
            .map(|k| floor(&set.pieces()[k].surface, collapsed(k), chord))
            .sum();
        let count = number(part.triangles.len());
        patches.push((count - least, count / least, part.name.as_str()));
    }
    patches.sort_by(|a, b| b.0.total_cmp(&a.0));
    for (excess, ratio, name) in patches.iter().take(5) {
        println!("|   {name} | | {excess:.0} over its floor | {ratio:.2} |");
    }
}

#[allow(clippy::cast_precision_loss, reason = "counts stay far below 2^52")]
fn number(count: usize) -> f64 {
    count as f64
}
