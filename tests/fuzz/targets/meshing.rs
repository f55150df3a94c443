//! Patch sets made of bytes: meshed and surveyed, and what is proved of them
//! refuted by samples if it can be.
#![no_main]

use chordwise::continuity::Survey;
use chordwise::mesh::{Budget, Meshed};
use chordwise::patch_set::{PatchEntry, PatchSet, SetFile};
use chordwise::sampling::Limits;
use chordwise::scalar::Point;
use chordwise::surface::{BezierNet, Surface};
use chordwise::topology::Topology;
use libfuzzer_sys::arbitrary::{Result, Unstructured};
use libfuzzer_sys::fuzz_target;

#[path = "../../refute/mod.rs"]
mod refute;
use refute::chance::Chance;
use refute::verdict::{self, Effort};

/// Little a set: measuring takes longer than meshing, and many sets find more.
const EFFORT: Effort = Effort {
    grid: 3,
    random: 5,
    edge: 4,
    climbs: 1,
    triangles: 16,
    lattice: 6,
};

/// A coordinate: mostly on a lattice, so that points coincide and edges meet,
/// else anything small.
fn coordinate(u: &mut Unstructured) -> Result<f64> {
    let byte = u.arbitrary::<i8>()?;
    Ok(if byte % 4 == 0 {
        f64::from(u.arbitrary::<i16>()?) / 256.0
    } else {
        f64::from(byte / 4)
    })
}

fn net(u: &mut Unstructured, edge: Option<&[[f64; 3]]>) -> Result<BezierNet> {
    let rows = u.int_in_range(2..=5)?;
    let columns = edge.map_or_else(|| u.int_in_range(2..=5), |edge| Ok(edge.len()))?;
    let mut net = Vec::with_capacity(rows);
    for i in 0..rows {
        let mut row = Vec::with_capacity(columns);
        for j in 0..columns {
            // A net that lies flat where the bytes are zero.
            let at = [10.0 * i as f64, 10.0 * j as f64, 0.0];
            row.push(match edge {
                Some(edge) if i == 0 => edge[j],
                _ => [
                    at[0] + coordinate(u)?,
                    at[1] + coordinate(u)?,
                    at[2] + coordinate(u)?,
                ],
            });
        }
        net.push(row);
    }
    let weights = if u.ratio(1, 4)? {
        let mut weights = vec![vec![1.0; columns]; rows];
        for weight in weights.iter_mut().flatten() {
            *weight = f64::from(u.arbitrary::<u8>()?).exp2().sqrt().sqrt().sqrt().sqrt().sqrt();
        }
        Some(weights)
    } else {
        None
    };
    Ok(BezierNet {
        net: Some(net),
        indexed: None,
        weights,
    })
}

fn set(u: &mut Unstructured) -> Result<SetFile> {
    let mut file = SetFile::new("fuzz");
    let count = u.int_in_range(1..=3)?;
    let mut edge: Option<Vec<[f64; 3]>> = None;
    for k in 0..count {
        let shared = edge.take().filter(|_| k > 0);
        let net = net(u, shared.as_deref())?;
        edge = net.net.as_ref().and_then(|net| net.last().cloned());
        let mut patch = PatchEntry::new(format!("panel/{k}"), Surface::Bezier(net));
        patch.flip = u.ratio(1, 8)?;
        file.patches.push(patch);
    }
    Ok(file)
}

fuzz_target!(|bytes: &[u8]| {
    let mut u = Unstructured::new(bytes);
    // Seams take longest with the counting of branches, and every eighth set has its
    // own examined. What is over when the bytes are counts as no.
    let made = set(&mut u).and_then(|file| Ok((file, u.int_in_range(0..=4)?, !u.ratio(7, 8)?)));
    let Ok((file, fine, surveyed)) = made else {
        return;
    };
    let Ok(reading) = PatchSet::build(file) else {
        return;
    };
    let set = reading.set;
    // By the size of the set, or most of the time would go into very many triangles.
    let chord = size(&set) * 0.04 * 0.5_f64.powi(fine);
    if let Ok(topology) = Topology::build(&set) {
        gaps(&set, &topology);
        if surveyed {
            let survey = Survey::of(&set, &topology);
            let text = chordwise::report::SeamReport::new(&set, &survey, None).text();
            assert!(text.contains("seams"));
        }
    }
    let limits = Limits::new(chord, None, None);
    // What is nearly refused is meshed in part to predict it; nothing is, here.
    let budget = Budget::default();
    match Meshed::within(&set, &limits, &budget, |_| true, true, |_| ()) {
        Ok(made) => {
            assert!(made.deviation.proved() <= chord, "{:?}", made.deviation);
            let chance = &mut Chance::new(bytes.len() as u64);
            if let Err(why) = verdict::refute(&set, &made, EFFORT, chance) {
                panic!("{why}");
            }
        }
        Err(error) => assert!(error.to_string().len() > 20),
    }
});

/// The diagonal of the box of all control points.
fn size(set: &PatchSet) -> f64 {
    let points = || set.pieces().iter().flat_map(|piece| piece.surface.control_points());
    (0..3)
        .map(|k| {
            let (low, high) = points().fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), p| {
                (f64::min(low, p[k]), f64::max(high, p[k]))
            });
            (high - low) * (high - low)
        })
        .sum::<f64>()
        .sqrt()
}

/// No sample of a joined edge is farther from the one it is joined to than was
/// proved.
fn gaps(set: &PatchSet, topology: &Topology) {
    let curve = |edge: chordwise::topology::EdgeId| {
        set.pieces()[edge.piece().index()].surface.edge(edge.side())
    };
    let slack = 1e-9 + verdict::rounding(set);
    for seam in topology.seams().iter().filter(|seam| seam.spans.len() > 1) {
        let master = &topology.spans()[seam.spans[0].index()];
        let along = curve(master.edge);
        let at = |s: f64| along.eval(master.t[0] + s * (master.t[1] - master.t[0]));
        for other in seam.spans[1..].iter().map(|s| &topology.spans()[s.index()]) {
            let own = curve(other.edge);
            for k in 0..=3 {
                let t = other.t[0] + (other.t[1] - other.t[0]) * f64::from(k) / 3.0;
                let distance = distance(&own.eval(t), at);
                assert!(
                    distance <= other.gap.proved + slack,
                    "{distance:e} apart, {:e} proved",
                    other.gap.proved
                );
            }
        }
    }
}

/// The distance of a point from a curve over 0 to 1: samples, then halving.
fn distance(p: &Point, at: impl Fn(f64) -> Point) -> f64 {
    let far = |s: f64| (at(s.clamp(0.0, 1.0)) - p).norm();
    let (mut best, mut step) = (0.0, 1.0 / 64.0);
    for k in 0..=64 {
        let s = f64::from(k) / 64.0;
        if far(s) < far(best) {
            best = s;
        }
    }
    while step > 1e-12 {
        let next = [best - step, best + step];
        match next.into_iter().find(|s| far(*s) < far(best)) {
            Some(s) => best = s.clamp(0.0, 1.0),
            None => step *= 0.5,
        }
    }
    far(best)
}
