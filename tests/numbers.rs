//! The limits of the arithmetic, as README states them: each case is meshed
//! under proof, and samples cannot refute it, or the tool says precisely why it
//! is not. Which of the two is written beside each case.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![allow(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    reason = "counts far below 2^52"
)]

use chordwise::mesh::Meshed;
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;

mod refute;
use refute::chance::Chance;
use refute::verdict::{self, Effort};

const EFFORT: Effort = Effort {
    grid: 7,
    random: 40,
    edge: 13,
    climbs: 2,
    triangles: 100,
    lattice: 14,
};

/// What a case comes to.
#[derive(Debug, Clone, Copy)]
enum Outcome {
    /// At least so many triangles.
    Meshes(usize),
    /// An error or a fault that has these words.
    Says(&'static str),
}

use Outcome::{Meshes, Says};

/// A Bezier patch with n by n points over a square of the given size: height z
/// at (u, v), all shifted.
fn patch(n: u32, size: f64, shift: [f64; 3], z: impl Fn(f64, f64) -> f64) -> String {
    let at = |k: u32| f64::from(k) / f64::from(n - 1);
    let rows: Vec<String> = (0..n)
        .map(|i| {
            let row: Vec<String> = (0..n)
                .map(|j| {
                    let p = [size * at(i), size * at(j), z(at(i), at(j))];
                    format!(
                        "({:e}, {:e}, {:e})",
                        shift[0] + p[0],
                        shift[1] + p[1],
                        shift[2] + p[2]
                    )
                })
                .collect();
            format!("[{}]", row.join(", "))
        })
        .collect();
    format!("Bezier(net: [{}])", rows.join(", "))
}

fn dome(u: f64, v: f64) -> f64 {
    u * (1.0 - u) + v * (1.0 - v)
}

#[track_caller]
fn check(name: &str, surface: &str, chord: f64, outcome: Outcome) {
    let text = format!(
        "(tolerance: (gap: {:e}), patches: [(name: \"a\", surface: {surface})])",
        chord / 100.0
    );
    let said = match PatchSet::from_ron(&text, "numbers.ron") {
        Err(faults) => Err(faults.to_string()),
        Ok(reading) => {
            let set = reading.set;
            match Meshed::new(&set, &Limits::new(chord, None, None), |_| true, |_| ()) {
                Err(error) => Err(error.to_string()),
                Ok(made) => {
                    assert!(
                        made.deviation.proved() <= chord,
                        "{name}: {:?}",
                        made.deviation
                    );
                    let found = verdict::refute(&set, &made, EFFORT, &mut Chance::new(5));
                    if let Err(why) = found {
                        panic!("{name}: {why}");
                    }
                    Ok(made.mesh.triangles.len())
                }
            }
        }
    };
    println!("{name}: {said:?}");
    match (said, outcome) {
        (Ok(count), Meshes(least)) => assert!(count >= least, "{name}: {count} triangles"),
        (Err(said), Says(words)) => assert!(said.contains(words), "{name}: {said}"),
        (said, outcome) => panic!("{name}: {said:?}, where {outcome:?} was to be"),
    }
}

#[test]
fn a_thousandth_at_a_thousand_million() {
    for far in [1e6, 1e8, 9.99e8] {
        let shift = [far, -far, far];
        let bump = patch(4, 1.0, shift, |u, v| 4e-3 * dome(u, v));
        check(
            &format!("a bump of 1e-3 at {far:e}"),
            &bump,
            1e-5,
            Meshes(20),
        );
    }
    // Doubles stand 1.2e-7 apart there.
    let bump = patch(4, 1.0, [9.99e8; 3], |u, v| 4e-3 * dome(u, v));
    check(
        "a chord below the spacing of doubles",
        &bump,
        1e-8,
        Says("larger"),
    );
}

#[test]
fn chords_from_a_thousand_millionth_to_a_thousand_times_the_size() {
    let arched = |height: f64| patch(4, 1.0, [0.0; 3], |u, v| height * dome(u, v));
    check(
        "1e-9 of the size, nearly flat",
        &arched(1e-6),
        1e-9,
        Meshes(300),
    );
    check("1e-6 of the size", &arched(1e-3), 1e-6, Meshes(300));
    check("1e-3 of the size", &arched(0.5), 1e-3, Meshes(150));
    check("the size", &arched(0.5), 1.0, Meshes(2));
    check("a thousand times the size", &arched(0.5), 1e3, Meshes(2));
    // Curved as it is, so small a chord asks for thousands of millions.
    check(
        "1e-9 of the size",
        &arched(0.5),
        1e-9,
        Says("--max-triangles"),
    );
}

#[test]
fn extreme_doubles() {
    let flat = |x: &str| format!("Bezier(net: [[(0, 0, 0), (0, 1, 0)], [(1, 0, {x}), (1, 1, 0)]])");
    check("minus zero", &flat("-0.0"), 0.1, Meshes(2));
    check("the smallest subnormal", &flat("5e-324"), 0.1, Meshes(2));
    check("a subnormal", &flat("1e-310"), 0.1, Meshes(2));
    check(
        "1e308",
        &flat("1e308"),
        0.1,
        Says("z is 1e308; numbers must keep within 1e9"),
    );
    check(
        "beyond doubles",
        &flat("1e999"),
        0.1,
        Says("z is inf; numbers must be finite"),
    );
    check(
        "no number",
        &flat("NaN"),
        0.1,
        Says("z is NaN; numbers must be finite"),
    );
    let tiny = patch(4, 1e-310, [0.0; 3], |_, _| 0.0);
    check("a subnormal patch", &tiny, 0.1, Says("no triangles"));
    let small = patch(4, 1e-150, [0.0; 3], |u, v| 1e-150 * dome(u, v));
    check(
        "squares underflow",
        &small,
        1e-152,
        Says("below what the edge and its coordinates can resolve"),
    );
}

#[test]
fn degree_fifteen() {
    let wavy = patch(16, 100.0, [0.0; 3], |u, v| {
        20.0 * (6.0 * u).sin() * (5.0 * v).cos()
    });
    check("degree 15", &wavy, 0.1, Meshes(300));
    let more = patch(17, 100.0, [0.0; 3], |_, _| 0.0);
    check(
        "degree 16",
        &more,
        0.1,
        Says("degree 16; a degree must be 1 to 15"),
    );
}

/// Nets that are not those of a well-behaved sheet, by how they degenerate.
#[test]
fn degenerate_nets() {
    let grid = |at: &dyn Fn(f64, f64) -> [f64; 3]| {
        let k = [0.0, 1.0, 2.0, 3.0];
        let row = |u: f64| {
            k.map(|v| at(u, v))
                .map(|[x, y, z]| format!("({x}, {y}, {z})"))
                .join(", ")
        };
        format!(
            "Bezier(net: [{}])",
            k.map(|u| format!("[{}]", row(u))).join(", ")
        )
    };
    for (name, surface, outcome) in [
        (
            "all points coincide",
            grid(&|_, _| [3.0, 4.0, 5.0]),
            Says("no triangles"),
        ),
        (
            "all points on a line",
            grid(&|u, v| [u + 4.0 * v, 0.0, 0.0]),
            Says("no triangles"),
        ),
        (
            "a curve swept along itself",
            grid(&|u, _| [u, u * u, 0.0]),
            Says("no triangles"),
        ),
        (
            "coplanar",
            grid(&|u, v| [10.0 * u, 10.0 * v, 0.0]),
            Meshes(2),
        ),
        (
            "coplanar, uneven",
            grid(&|u, v| [u * u * u, v * v, 0.0]),
            Meshes(2),
        ),
        (
            "one side collapsed",
            grid(&|u, v| [10.0 * u, 3.0 * u * v, u * v]),
            Meshes(1),
        ),
        (
            "two sides collapsed",
            grid(&|u, v| [10.0 * u, 3.0 * u * (3.0 - u) * v, u * (3.0 - u)]),
            Meshes(2),
        ),
        (
            "inner points coincide",
            grid(&|u, v| {
                let inner = |t: f64| if t > 0.5 && t < 2.5 { 1.5 } else { t };
                [10.0 * inner(u), 10.0 * inner(v), inner(u) * inner(v)]
            }),
            Meshes(10),
        ),
        (
            "rows coincide",
            grid(&|u, v| [10.0 * u.min(2.0), 10.0 * v, v * v]),
            Meshes(4),
        ),
        (
            "folded flat",
            grid(&|u, v| [10.0 * (u - 1.5).abs(), 10.0 * v, 0.0]),
            Meshes(2),
        ),
        (
            "folded over",
            grid(&|u, v| [30.0 * (u * (3.0 - u)), 10.0 * v, u]),
            Meshes(4),
        ),
        (
            "overlapping itself",
            grid(&|u, v| [30.0 * (2.0 * u).cos(), 30.0 * (2.0 * u).sin(), v]),
            Meshes(10),
        ),
        (
            "crossing itself",
            grid(&|u, v| {
                [
                    20.0 * (u - 1.5).powi(3) - 30.0 * (u - 1.5),
                    20.0 * (u - 1.5).powi(2),
                    10.0 * v,
                ]
            }),
            Meshes(10),
        ),
        (
            "twisted at a corner",
            grid(&|u, v| {
                if u + v < 0.5 {
                    [30.0, 30.0, 5.0]
                } else {
                    [10.0 * u, 10.0 * v, 0.0]
                }
            }),
            Meshes(4),
        ),
    ] {
        check(name, &surface, 0.05, outcome);
    }
}
