//! Files that something has been at: every truncation and every flipped bit of
//! ten small sets, 100,000 splices of them, and the same of a mesh that is
//! audited. Each is read or refused, soon, and without a panic.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::{Duration, Instant};

use chordwise::continuity::Survey;
use chordwise::format::{Format, WriteOptions, read_evidence, write};
use chordwise::mesh::{Audit, Budget, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use chordwise::scalar::Tolerance;
use chordwise::topology::Topology;
use rayon::prelude::*;

const SEEDS: [&str; 10] = [
    include_str!("../patches/box.ron"),
    include_str!("../patches/bspline.ron"),
    include_str!("../patches/cone.ron"),
    include_str!("../patches/coons.ron"),
    include_str!("../patches/cylinder.ron"),
    include_str!("../patches/mirrored_pair.ron"),
    include_str!("../patches/octant.ron"),
    include_str!("../patches/revolution.ron"),
    include_str!("../patches/three_sided_cap.ron"),
    include_str!("../patches/units_inch.ron"),
];

/// The longest that reading a damaged file may take: thousands of times what a
/// sound one takes, for a machine that is busy.
const SOON: Duration = Duration::from_secs(20);

/// What can be left of a file, by number, so that nothing has to be held.
struct Damages {
    seeds: Vec<Vec<u8>>,
}

impl Damages {
    fn new(seeds: impl IntoIterator<Item = Vec<u8>>) -> Self {
        let seeds: Vec<Vec<u8>> = seeds.into_iter().collect();
        assert!(
            seeds.iter().all(|seed| seed.len() <= 2048),
            "seeds are small"
        );
        Self { seeds }
    }

    fn truncations(&self) -> impl ParallelIterator<Item = Vec<u8>> {
        let seeds = self.seeds.par_iter();
        seeds.flat_map(|seed| {
            (0..seed.len())
                .into_par_iter()
                .map(|end| seed[..end].to_vec())
        })
    }

    fn flips(&self) -> impl ParallelIterator<Item = Vec<u8>> {
        let seeds = self.seeds.par_iter();
        seeds.flat_map(|seed| {
            (0..8 * seed.len()).into_par_iter().map(|bit| {
                let mut bytes = seed.clone();
                bytes[bit / 8] ^= 1 << (bit % 8);
                bytes
            })
        })
    }

    /// A part of one seed in the place of a part of another, all by chance.
    fn splices(&self, count: u64) -> impl ParallelIterator<Item = Vec<u8>> {
        (0..count).into_par_iter().map(|number| {
            let mut state = number.wrapping_mul(0x9E37_79B9_7F4A_7C15) ^ 0xD1B5_4A32_D192_ED03;
            let mut below = |most: usize| {
                // Steele, Lea and Flood 2014, from memory.
                state = state.wrapping_add(0x9E37_79B9_7F4A_7C15);
                let z = (state ^ (state >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
                let z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
                usize::try_from((z ^ (z >> 31)) % most.max(1) as u64).unwrap()
            };
            let (into, from) = (below(self.seeds.len()), below(self.seeds.len()));
            let (mut bytes, from) = (self.seeds[into].clone(), &self.seeds[from]);
            let start = below(bytes.len());
            let end = start + below((bytes.len() - start).min(80));
            let first = below(from.len());
            let last = first + below((from.len() - first).min(80));
            bytes.splice(start..end, from[first..last].iter().copied());
            bytes
        })
    }
}

/// Runs a check over damaged files; how many there were, and of how many the
/// check says that they are sound still.
fn over(
    damaged: impl ParallelIterator<Item = Vec<u8>>,
    check: impl Fn(&[u8]) -> bool + Sync,
) -> (usize, usize) {
    let sound = AtomicUsize::new(0);
    let count = damaged
        .map(|bytes| {
            let start = Instant::now();
            let text = || String::from_utf8_lossy(&bytes).into_owned();
            match catch_unwind(AssertUnwindSafe(|| check(&bytes))) {
                Ok(true) => drop(sound.fetch_add(1, Ordering::Relaxed)),
                Ok(false) => {}
                Err(_) => panic!("a panic over\n{}", text()),
            }
            assert!(
                start.elapsed() < SOON,
                "{:?} over\n{}",
                start.elapsed(),
                text()
            );
        })
        .count();
    (count, sound.into_inner())
}

/// Reads; whether it is a set still.
fn reads(bytes: &[u8]) -> bool {
    match PatchSet::from_bytes(bytes.to_vec(), "damaged.ron") {
        Ok(reading) => {
            for warning in &reading.warnings {
                assert!(!warning.render("damaged.ron", false).is_empty());
            }
            true
        }
        Err(faults) => {
            assert!(!faults.list.is_empty());
            assert!(!faults.render(true).is_empty() && !faults.to_string().is_empty());
            false
        }
    }
}

#[test]
fn every_truncation_and_every_flipped_bit_reads_or_is_refused() {
    let damages = Damages::new(SEEDS.map(|text| text.as_bytes().to_vec()));
    let bytes: usize = SEEDS.iter().map(|seed| seed.len()).sum();
    let (count, sound) = over(damages.truncations(), reads);
    assert_eq!(count, bytes);
    println!("{count} truncations, {sound} of them sets still");
    let (count, sound) = over(damages.flips(), reads);
    assert_eq!(count, 8 * bytes);
    println!("{count} flipped bits, {sound} of them sets still");
    assert!(
        sound > count / 20,
        "numbers can change and make another set"
    );
}

#[test]
fn a_hundred_thousand_splices_read_or_are_refused() {
    let damages = Damages::new(SEEDS.map(|text| text.as_bytes().to_vec()));
    let (count, sound) = over(damages.splices(100_000), reads);
    println!("{count} splices, {sound} of them sets still");
    assert!(count == 100_000 && sound > 100);
}

/// Damaged sets that are sets still go the whole way, as every one of them
/// might: meshed at a coarse chord, or refused with a reason.
#[test]
fn what_is_still_a_set_is_meshed_or_refused() {
    let damages = Damages::new(SEEDS.map(|text| text.as_bytes().to_vec()));
    let budget = Budget {
        triangles: 20_000,
        ..Budget::default()
    };
    let goes = |bytes: &[u8]| {
        let Ok(reading) = PatchSet::from_bytes(bytes.to_vec(), "damaged.ron") else {
            return false;
        };
        let set = reading.set;
        let (mut low, mut high) = ([f64::INFINITY; 3], [f64::NEG_INFINITY; 3]);
        for p in set
            .pieces()
            .iter()
            .flat_map(|piece| piece.surface.control_points())
        {
            for k in 0..3 {
                low[k] = low[k].min(p[k]);
                high[k] = high[k].max(p[k]);
            }
        }
        let size = (0..3).map(|k| high[k] - low[k]).fold(0.0, f64::max);
        let chord = (size / 50.0).max(2.0 * set.tolerances().gap.get());
        if let Ok(topology) = Topology::build(&set) {
            let _ = Survey::of(&set, &topology);
        }
        let limits = Limits::new(chord, None, None);
        match Meshed::within(&set, &limits, &budget, |_| true, false, |_| ()) {
            Ok(made) => {
                assert!(made.deviation.proved() <= chord);
                true
            }
            Err(error) => {
                assert!(error.to_string().len() > 20);
                false
            }
        }
    };
    let (count, meshed) = over(damages.splices(6_000), goes);
    println!("{count} splices, {meshed} of them meshed");
    assert!(meshed > 50);
}

/// A mesh with evidence of less than 2 KB, damaged: audited, or refused.
#[test]
fn damaged_meshes_are_audited_or_refused() {
    let set = PatchSet::from_ron(SEEDS[0], "box.ron").unwrap().set;
    let limits = Limits::new(0.1, None, None);
    let made = Meshed::within(&set, &limits, &Budget::default(), |_| true, true, |_| ()).unwrap();
    let chord = Tolerance::new(0.1).unwrap();
    let mut bytes = Vec::new();
    write(
        &made.mesh,
        Format::Ply,
        &WriteOptions::new(chord),
        &mut bytes,
    )
    .unwrap();
    let audits = |bytes: &[u8]| match read_evidence(bytes) {
        Ok(evidence) => match Audit::of(&set, &evidence, chord) {
            Ok(audit) => audit.findings.is_empty(),
            Err(error) => error.to_string().is_empty(),
        },
        Err(error) => error.to_string().is_empty(),
    };
    assert!(audits(&bytes), "it is sound as it is");
    let damages = Damages::new([bytes.clone()]);
    let (count, sound) = over(damages.truncations(), audits);
    assert_eq!((count, sound), (bytes.len(), 0), "a part is no mesh");
    let (count, sound) = over(damages.flips(), audits);
    assert_eq!(count, 8 * bytes.len());
    println!(
        "{count} flipped bits, {sound} of them pass, within rounding or in names nobody needs"
    );
    assert!(sound < count / 3);
    let (count, sound) = over(damages.splices(20_000), audits);
    println!("{count} splices, {sound} of them pass");
}
