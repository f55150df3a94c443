//! Random patches of every degree, from honest to hopeless.

use chordwise::patch_set::{PatchEntry, SetFile, ToleranceEntry};
use chordwise::surface::{BezierNet, Surface};

use super::chance::Chance;

/// What kind of patch it is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) enum Manner {
    /// A gently bent sheet.
    Honest,
    /// The same with weights of 1 to 10.
    Weighted,
    /// Weights of 1 to 300.
    Lopsided,
    /// Up to 10,000 times as long as wide.
    Long,
    /// Rows of the net turned against each other, up to once round.
    Twisted,
    /// One edge is a point.
    Pole,
    /// Two opposite edges are points.
    TwoPoles,
    /// Two neighbouring rows or columns coincide.
    DoubleRow,
    /// A row of the net on a line, unevenly.
    StraightRow,
    /// All control points on one line: no area to cover.
    Line,
    /// A sheet folded back over itself.
    Folded,
    /// Control points anywhere in a cube.
    Wild,
    /// 1e-6 mm across, or 1e6.
    Scaled,
    /// Up to 1e5 times its size away from the origin.
    Far,
    /// Closed: the first row is also the last.
    Closed,
}

pub(crate) const MANNERS: [Manner; 15] = [
    Manner::Honest,
    Manner::Weighted,
    Manner::Lopsided,
    Manner::Long,
    Manner::Twisted,
    Manner::Pole,
    Manner::TwoPoles,
    Manner::DoubleRow,
    Manner::StraightRow,
    Manner::Line,
    Manner::Folded,
    Manner::Wild,
    Manner::Scaled,
    Manner::Far,
    Manner::Closed,
];

/// A patch as a set of its own, and the chord to mesh it with.
#[derive(Debug)]
pub(crate) struct Trial {
    pub(crate) manner: Manner,
    pub(crate) file: SetFile,
    pub(crate) chord: f64,
}

/// The trial of a number, the same on every machine.
pub(crate) fn trial(number: u64) -> Trial {
    let mut chance = Chance::new(number);
    // A third honest, the others each their share.
    let manner = if chance.below(3) == 0 {
        Manner::Honest
    } else {
        MANNERS[1 + chance.below(MANNERS.len() - 1)]
    };
    // Degrees 1 to 9, the low ones more often.
    let (mut m, mut n) = (degree(&mut chance), degree(&mut chance));
    if matches!(
        manner,
        Manner::TwoPoles | Manner::DoubleRow | Manner::Closed
    ) {
        // With a degree of 1 they would be curves, and lines are tried anyway.
        (m, n) = (m.max(2), n.max(2));
    }
    let bend = chance.power(-2.0, -0.3);
    let jitter = 0.25;
    let mut net: Vec<Vec<[f64; 3]>> = (0..=m)
        .map(|i| {
            (0..=n)
                .map(|j| {
                    let x = (i as f64 + jitter * chance.between(-1.0, 1.0)) / m as f64;
                    let y = (j as f64 + jitter * chance.between(-1.0, 1.0)) / n as f64;
                    [x, y, bend * chance.between(-1.0, 1.0)]
                })
                .collect()
        })
        .collect();
    let mut weights = None;
    // 0.3 down to 1e-3 of the size, mostly coarse: fine ones take their time,
    // most of all where the net is rough.
    let rough = matches!(
        manner,
        Manner::Wild | Manner::Lopsided | Manner::Long | Manner::StraightRow | Manner::Line
    );
    let decades = if rough { 1.2 } else { 2.477 };
    let mut chord = 10.0_f64.powf(-0.523 - decades * chance.unit().powi(6));
    let weighted = |chance: &mut Chance, span: f64| {
        (0..=m)
            .map(|_| {
                (0..=n)
                    .map(|_| chance.power(-span / 2.0, span / 2.0))
                    .collect()
            })
            .collect::<Vec<Vec<f64>>>()
    };
    // Half of what is not about weights has some.
    if chance.below(2) == 0 && manner != Manner::Honest {
        weights = Some(weighted(&mut chance, 0.5));
    }
    match manner {
        Manner::Honest => {}
        Manner::Weighted => weights = Some(weighted(&mut chance, 1.0)),
        Manner::Lopsided => weights = Some(weighted(&mut chance, 2.5)),
        Manner::Long => {
            let stretch = chance.power(1.0, 4.0);
            each(&mut net, |p| p[0] *= stretch);
        }
        Manner::Twisted => {
            let turn = chance.between(0.0, std::f64::consts::TAU);
            each(&mut net, |p| {
                let (sin, cos) = (turn * p[0]).sin_cos();
                let (y, z) = (p[1] - 0.5, p[2]);
                [p[1], p[2]] = [y * cos - z * sin, y * sin + z * cos];
            });
        }
        Manner::Pole => pole(&mut net, chance.below(4)),
        Manner::TwoPoles => {
            let side = chance.below(4);
            pole(&mut net, side);
            pole(&mut net, side ^ 1);
        }
        Manner::DoubleRow => {
            let (i, j) = (chance.below(m), chance.below(n));
            if chance.below(2) == 0 {
                net[i] = net[i + 1].clone();
            } else {
                net.iter_mut().for_each(|row| row[j] = row[j + 1]);
            }
        }
        Manner::StraightRow => {
            let i = [0, m, chance.below(m + 1)][chance.below(3)];
            let [a, b] = [net[i][0], net[i][n]];
            let mut ts: Vec<f64> = (0..=n).map(|_| chance.unit()).collect();
            ts.sort_by(f64::total_cmp);
            for (p, t) in net[i].iter_mut().zip(ts) {
                *p = [0, 1, 2].map(|k| a[k] + (b[k] - a[k]) * t);
            }
        }
        Manner::Line => each(&mut net, |p| [p[1], p[2]] = [0.3 * p[0], -0.7 * p[0]]),
        Manner::Folded => each(&mut net, |p| p[0] = 4.0 * p[0] * (1.0 - p[0])),
        Manner::Wild => each(&mut net, |p| *p = [0; 3].map(|_| chance.unit())),
        Manner::Scaled => {
            let scale = [1e-6, 1e6][chance.below(2)];
            each(&mut net, |p| p.iter_mut().for_each(|x| *x *= scale));
            chord *= scale;
        }
        Manner::Far => {
            let away = chance.power(1.0, 5.0);
            each(&mut net, |p| p.iter_mut().for_each(|x| *x += away));
        }
        Manner::Closed => net[m] = net[0].clone(),
    }
    let surface = Surface::Bezier(BezierNet {
        net: Some(net),
        weights,
        ..BezierNet::default()
    });
    let file = SetFile {
        patches: vec![PatchEntry::new("patch", surface)],
        tolerance: ToleranceEntry {
            chord: Some(chord),
            gap: Some(chord * 1e-3),
            ..ToleranceEntry::default()
        },
        ..SetFile::new("trial")
    };
    Trial {
        manner,
        file,
        chord,
    }
}

fn degree(chance: &mut Chance) -> usize {
    1 + (9.0 * chance.unit().powi(2)) as usize
}

fn each(net: &mut [Vec<[f64; 3]>], change: impl FnMut(&mut [f64; 3])) {
    net.iter_mut().flatten().for_each(change);
}

/// Makes one side (u = 0, u = 1, v = 0, v = 1) a point.
fn pole(net: &mut [Vec<[f64; 3]>], side: usize) {
    let (m, n) = (net.len() - 1, net[0].len() - 1);
    let at = net[if side == 1 { m } else { 0 }][if side == 3 { n } else { 0 }];
    match side {
        0 | 1 => net[side * m].fill(at),
        _ => net.iter_mut().for_each(|row| row[(side - 2) * n] = at),
    }
}
