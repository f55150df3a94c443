//! How many triangles, beside the floor, and how many a second? One line a
//! surface and chord; then the smooth panel at three chords on one thread and on
//! two, beside what this machine's memory takes.
//!
//! `cargo bench --bench triangles` prints the family; names of the family or
//! paths of sets behind `--` choose, and leave out the speeds.

use std::hint::black_box;
use std::time::Instant;

use chordwise::demo::family;
use chordwise::mesh::Meshed;
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
    if arguments.is_empty()
        && let Err(message) = speeds()
    {
        println!("{message}");
    }
}

/// Bytes of a triangle in memory, shared vertices counted: three indices, and half
/// a vertex of a point and a normal in double precision.
const BYTES: f64 = 12.0 + 24.0;

/// Runs of everything that is timed; the quickest counts.
const RUNS: usize = 5;

fn quickest(mut run: impl FnMut()) -> f64 {
    let times = (0..RUNS).map(|_| {
        let start = Instant::now();
        run();
        start.elapsed().as_secs_f64()
    });
    times.fold(f64::INFINITY, f64::min)
}

/// The speed table: sampling and tessellation of the smooth panel, proved.
fn speeds() -> Result<(), Box<dyn std::error::Error>> {
    let mut memory = vec![0.0_f64; 32 << 20];
    let seconds = quickest(|| black_box(&mut memory[..]).fill(black_box(1.0)));
    let bandwidth = number(memory.len() * 8) / seconds;
    println!(
        "\nwriting memory: {:.1} GB/s on one thread",
        bandwidth / 1e9
    );
    println!(
        "\n| triangles a patch | one thread, M/s | two threads, M/s | two over one | one thread, part of writing memory |"
    );
    println!("|---|---|---|---|---|");
    let members = family();
    let smooth = &members[0].set;
    let topology = Topology::build(smooth)?;
    for chord in [0.006, 0.0006, 0.0002] {
        let limits = Limits::new(chord, None, None);
        let mut count = 0;
        let mut rates = Vec::new();
        for threads in [1, 2] {
            let pool = rayon::ThreadPoolBuilder::new()
                .num_threads(threads)
                .build()?;
            let seconds = pool.install(|| {
                quickest(|| {
                    let samples = Samples::new(smooth, &topology, &limits).expect("it samples");
                    let made = tessellate(smooth, &topology, &samples, &limits, |_| true);
                    let pieces = made.expect("it is proved").pieces;
                    count = pieces.iter().flatten().map(|p| p.triangles.len()).sum();
                    black_box(&pieces);
                })
            });
            rates.push(number(count) / seconds);
        }
        println!(
            "| {} | {:.2} | {:.2} | {:.2} | {:.1} % |",
            count / smooth.pieces().len(),
            rates[0] / 1e6,
            rates[1] / 1e6,
            rates[1] / rates[0],
            100.0 * rates[0] * BYTES / bandwidth,
        );
    }
    Ok(())
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
