//! Random patches, meshed at random chords: each is proved, and samples do not
//! refute it, or it fails with an error that says why.
//!
//! 20,000 patches by default. For a soak give the count, and where to begin:
//! `CHORDWISE_REFUTE_PATCHES=1000000 CHORDWISE_REFUTE_FIRST=20000 cargo test
//! --test refute_random -- --nocapture`; the table of outcomes is printed.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![allow(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    reason = "random numbers and counts far below 2^52"
)]

use std::collections::BTreeMap;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::time::Instant;

use chordwise::bezier::BezierPatch;
use chordwise::mesh::{MeshError, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use rayon::prelude::*;

mod refute;
use refute::chance::Chance;
use refute::patches::{Manner, trial};
use refute::verdict::{self, Effort};

const EFFORT: Effort = Effort {
    grid: 5,
    random: 30,
    edge: 9,
    climbs: 2,
    triangles: 60,
    lattice: 10,
};

fn number(name: &str, default: u64) -> u64 {
    std::env::var(name).map_or(default, |text| text.parse().unwrap())
}

/// What became of the patches of one manner.
#[derive(Default)]
struct Row {
    trials: usize,
    /// Trials by the kind of their error.
    errors: BTreeMap<String, Vec<u64>>,
    triangles: usize,
    seconds: f64,
}

/// What became of a trial: meshed with so many triangles, or the kind of the
/// error.
fn outcome(seed: u64) -> Result<(Manner, Result<usize, String>), String> {
    let trial = trial(seed);
    let manner = trial.manner;
    let fail = |why: String| Err(format!("trial {seed} ({manner:?}): {why}"));
    let set = match PatchSet::build(trial.file) {
        Ok(reading) => reading.set,
        Err(faults) => return Ok((manner, Err(format!("refused: {}", faults.render(false))))),
    };
    let limits = Limits::new(trial.chord, None, None);
    let made = catch_unwind(AssertUnwindSafe(|| {
        Meshed::new(&set, &limits, |_| true, |_| ())
    }));
    let made = match made {
        Ok(Ok(made)) => made,
        Ok(Err(error)) => {
            if error.to_string().len() < 20 {
                return fail(format!("an error that says nothing: {error}"));
            }
            let kind = match error {
                MeshError::Topology(_) => "topology",
                MeshError::Gap { .. } => "gap",
                MeshError::Sampling(_) => "sampling",
                MeshError::Tessellation(_) => "unproved",
                MeshError::Empty => "empty",
                MeshError::TooMany { .. } | MeshError::Memory { .. } => "too many",
            };
            return Ok((manner, Err(kind.to_owned())));
        }
        Err(_) => return fail("panicked".to_owned()),
    };
    if made.deviation.proved() > trial.chord {
        return fail(format!("proved {:e} only", made.deviation.proved()));
    }
    let no_area = || set.pieces().iter().all(|piece| has_no_area(&piece.surface));
    if made.mesh.triangles.is_empty() && no_area() {
        // Only a point or a curve may be left out of a mesh.
        return Ok((manner, Ok(0)));
    }
    match verdict::refute(&set, &made, EFFORT, &mut Chance::new(seed)) {
        Ok(_) => Ok((manner, Ok(made.mesh.triangles.len()))),
        Err(why) => fail(why),
    }
}

/// Whether a surface is only a curve or a point: all small parts of a grid over
/// it are flat to rounding.
fn has_no_area(surface: &BezierPatch) -> bool {
    let at = |k: u32| f64::from(k) / 15.0;
    let origin = surface.eval(0.0, 0.0);
    let (mut area, mut size) = (0.0_f64, 0.0_f64);
    for i in 0..15 {
        for j in 0..15 {
            let p = surface.eval(at(i), at(j));
            let diagonal = surface.eval(at(i + 1), at(j + 1)) - p;
            let across = surface.eval(at(i + 1), at(j)) - surface.eval(at(i), at(j + 1));
            area += diagonal.cross(&across).norm() / 2.0;
            size = size.max((p - origin).norm());
        }
    }
    area <= 1e-12 * size * size
}

#[test]
fn no_sample_refutes_a_random_patch() {
    let first = number("CHORDWISE_REFUTE_FIRST", 0);
    let count = number("CHORDWISE_REFUTE_PATCHES", 20_000);
    let outcomes: Vec<_> = (first..first + count)
        .into_par_iter()
        .map(|seed| {
            let clock = Instant::now();
            let outcome = outcome(seed);
            (outcome, clock.elapsed().as_secs_f64(), seed)
        })
        .collect();
    let mut table: BTreeMap<Manner, Row> = BTreeMap::new();
    let mut faults = Vec::new();
    let mut slowest = (0.0, 0);
    for (outcome, seconds, seed) in outcomes {
        if seconds > slowest.0 {
            slowest = (seconds, seed);
        }
        match outcome {
            Ok((manner, result)) => {
                let row = table.entry(manner).or_default();
                row.trials += 1;
                row.seconds += seconds;
                match result {
                    Ok(triangles) => row.triangles += triangles,
                    Err(kind) => row.errors.entry(kind).or_default().push(seed),
                }
            }
            Err(fault) => faults.push(fault),
        }
    }
    println!("slowest: {:.2} s, trial {}", slowest.0, slowest.1);
    for (manner, row) in &table {
        let Row {
            trials: count,
            errors,
            triangles,
            seconds,
        } = row;
        let failed: usize = errors.values().map(Vec::len).sum();
        println!(
            "{manner:?}: {count} trials, {triangles} triangles, {seconds:.1} s, {:.2} % failed",
            100.0 * failed as f64 / *count as f64
        );
        for (kind, seeds) in errors {
            println!(
                "    {kind}: {} such as {:?}",
                seeds.len(),
                &seeds[..seeds.len().min(6)]
            );
        }
        let honest = matches!(manner, Manner::Honest | Manner::Weighted | Manner::Far);
        if honest && failed * 1000 > *count {
            faults.push(format!("{failed} of {count} {manner:?} patches failed"));
        }
    }
    assert!(
        faults.is_empty(),
        "{} faults:\n{}",
        faults.len(),
        faults.join("\n")
    );
}
