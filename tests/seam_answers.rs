//! Seams whose figures are known, and an independent sampler that tries to
//! refute what is proved of others: from the text of a set, by the public
//! interface.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::f64::consts::PI;
use std::fmt::Write;

use chordwise::bezier::Side;
use chordwise::continuity::{Finding, PatchEdge, Survey, SurveyedSeam, Verdict};
use chordwise::patch_set::PatchSet;
use chordwise::topology::Topology;

type V3 = [f64; 3];

fn plus(a: V3, b: V3, f: f64) -> V3 {
    std::array::from_fn(|k| a[k] + f * b[k])
}

fn dot(a: V3, b: V3) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

fn cross(a: V3, b: V3) -> V3 {
    [
        a[1] * b[2] - a[2] * b[1],
        a[2] * b[0] - a[0] * b[2],
        a[0] * b[1] - a[1] * b[0],
    ]
}

fn unit(a: V3) -> V3 {
    let norm = dot(a, a).sqrt();
    a.map(|x| x / norm)
}

fn real(k: usize) -> f64 {
    f64::from(u32::try_from(k).unwrap())
}

/// A rational patch as rows of (x, y, z, weight), row i at u = i / m. It is
/// evaluated by sums of Bernstein polynomials, not by the library.
#[derive(Clone)]
struct Net(Vec<Vec<[f64; 4]>>);

/// All B_{i,n} with their first and second derivatives at t, by the triangle of
/// Bernstein polynomials.
fn bernstein(n: usize, t: f64) -> [[f64; 3]; 16] {
    let mut rows = [[0.0; 16]; 16];
    rows[0][0] = 1.0;
    for k in 1..=n {
        for i in 0..=k {
            let left = if i > 0 { rows[k - 1][i - 1] } else { 0.0 };
            rows[k][i] = t * left + (1.0 - t) * rows[k - 1][i];
        }
    }
    let at = |less: usize, i: usize, back: usize| {
        if n < less || i < back {
            0.0
        } else {
            rows[n - less][i - back]
        }
    };
    let f = real(n);
    std::array::from_fn(|i| {
        [
            at(0, i, 0),
            f * (at(1, i, 1) - at(1, i, 0)),
            f * (f - 1.0) * (at(2, i, 2) - 2.0 * at(2, i, 1) + at(2, i, 0)),
        ]
    })
}

/// S, S_u, S_v, S_uu, S_uv, S_vv.
struct Jet([V3; 6]);

impl Net {
    fn of(degrees: [usize; 2], at: impl Fn(f64, f64) -> V3) -> Self {
        let row = |i| {
            (0..=degrees[1]).map(move |j| (real(i) / real(degrees[0]), real(j) / real(degrees[1])))
        };
        let point = |(u, v)| {
            let [x, y, z] = at(u, v);
            [x, y, z, 1.0]
        };
        Self(
            (0..=degrees[0])
                .map(|i| row(i).map(point).collect())
                .collect(),
        )
    }

    fn jet(&self, [u, v]: [f64; 2]) -> Jet {
        let (m, n) = (self.0.len() - 1, self.0[0].len() - 1);
        // Sums of w S and w, with their derivatives (the quotient rule).
        let mut sums = [[0.0; 4]; 6];
        let (us, vs) = (bernstein(m, u), bernstein(n, v));
        for (i, row) in self.0.iter().enumerate() {
            let a = us[i];
            for (j, &[x, y, z, w]) in row.iter().enumerate() {
                let b = vs[j];
                let products = [
                    a[0] * b[0],
                    a[1] * b[0],
                    a[0] * b[1],
                    a[2] * b[0],
                    a[1] * b[1],
                    a[0] * b[2],
                ];
                for (sum, product) in sums.iter_mut().zip(products) {
                    for (s, c) in sum.iter_mut().zip([x * w, y * w, z * w, w]) {
                        *s += product * c;
                    }
                }
            }
        }
        let p = |k: usize| [sums[k][0], sums[k][1], sums[k][2]];
        let w = |k: usize| sums[k][3];
        let over = |a: V3| a.map(|x| x / w(0));
        let s = over(p(0));
        let su = over(plus(p(1), s, -w(1)));
        let sv = over(plus(p(2), s, -w(2)));
        let suu = over(plus(plus(p(3), su, -2.0 * w(1)), s, -w(3)));
        let suv = over(plus(plus(plus(p(4), su, -w(2)), sv, -w(1)), s, -w(4)));
        let svv = over(plus(plus(p(5), sv, -2.0 * w(2)), s, -w(5)));
        Jet([s, su, sv, suu, suv, svv])
    }

    fn point(&self, at: [f64; 2]) -> V3 {
        self.jet(at).0[0]
    }

    /// As the file says it.
    fn text(&self) -> String {
        let list = |row: &Vec<[f64; 4]>, of: &dyn Fn(&[f64; 4]) -> String| -> String {
            format!("[{}]", row.iter().map(of).collect::<Vec<_>>().join(", "))
        };
        let rows = |of: &dyn Fn(&[f64; 4]) -> String| -> String {
            let rows: Vec<String> = self.0.iter().map(|row| list(row, of)).collect();
            format!("[{}]", rows.join(", "))
        };
        let net = rows(&|p| format!("({:?}, {:?}, {:?})", p[0], p[1], p[2]));
        let weights = rows(&|p| format!("{:?}", p[3]));
        format!("Bezier(net: {net}, weights: {weights})")
    }

    fn transposed(&self) -> Self {
        let columns = 0..self.0[0].len();
        Self(
            columns
                .map(|j| self.0.iter().map(|row| row[j]).collect())
                .collect(),
        )
    }

    fn reversed(&self) -> Self {
        let mut net = self.clone();
        net.0.iter_mut().for_each(|row| row.reverse());
        net
    }

    /// Every row raised by one degree.
    fn raised(&self) -> Self {
        let raise = |row: &Vec<[f64; 4]>| -> Vec<[f64; 4]> {
            let n = row.len();
            let homogeneous = |k: usize| {
                let [x, y, z, w] = row[k.min(n - 1)];
                [x * w, y * w, z * w, w]
            };
            let blend = |k: usize| {
                let a = real(k) / real(n);
                let (p, q) = (homogeneous(k.saturating_sub(1)), homogeneous(k));
                let [x, y, z, w]: [f64; 4] = std::array::from_fn(|c| a * p[c] + (1.0 - a) * q[c]);
                [x / w, y / w, z / w, w]
            };
            (0..=n).map(blend).collect()
        };
        Self(self.0.iter().map(raise).collect())
    }

    /// The same surface at another speed along v: weight j times c^j (Farin).
    fn hurried(&self, c: f64) -> Self {
        let mut net = self.clone();
        for row in &mut net.0 {
            let mut factor = 1.0;
            for point in row {
                point[3] *= factor;
                factor *= c;
            }
        }
        net
    }

    /// The part from v = 0 to t along every row, by de Casteljau's steps.
    fn shortened(&self, t: f64) -> Self {
        let cut = |row: &Vec<[f64; 4]>| {
            let mut work: Vec<[f64; 4]> = row
                .iter()
                .map(|&[x, y, z, w]| [x * w, y * w, z * w, w])
                .collect();
            let mut found = Vec::new();
            while !work.is_empty() {
                let [x, y, z, w] = work[0];
                found.push([x / w, y / w, z / w, w]);
                work = work
                    .windows(2)
                    .map(|p| std::array::from_fn(|c| (1.0 - t) * p[0][c] + t * p[1][c]))
                    .collect();
            }
            found
        };
        Self(self.0.iter().map(cut).collect())
    }
}

fn set_of(patches: &[(&str, &Net)], more: &str) -> PatchSet {
    let mut text = String::from("(units: mm, patches: [\n");
    for (name, net) in patches {
        writeln!(text, "(name: \"{name}\", surface: {}),", net.text()).unwrap();
    }
    writeln!(text, "], {more})").unwrap();
    PatchSet::from_ron(&text, "answers").expect("valid").set
}

fn seams_of(set: &PatchSet) -> Vec<SurveyedSeam> {
    let topology = Topology::build(set).expect("pairs");
    topology.check().expect("sound");
    Survey::of(set, &topology).seams
}

fn only(set: &PatchSet) -> SurveyedSeam {
    let mut seams = seams_of(set);
    assert_eq!(seams.len(), 1);
    seams.remove(0)
}

/// A plate from x = 0 to 100 and y = 0 to 212.
fn plate() -> Net {
    Net::of([1, 1], |u, v| [100.0 * u, 212.0 * v, 0.0])
}

/// A gap that grows from nothing to 0.08 mm: the largest stands at the end,
/// and what is beyond the tolerance begins at an eighth.
#[test]
fn a_gap_that_grows_evenly_is_largest_at_its_end() {
    let wedge = Net::of([1, 1], |u, v| {
        [100.0 + 0.08 * v * (1.0 - u) + 90.0 * u, 212.0 * v, 0.0]
    });
    for other in [
        wedge.clone(),
        wedge.reversed(),
        wedge.transposed(),
        wedge.hurried(2.3),
    ] {
        let set = set_of(&[("a", &plate()), ("b", &other)], "");
        let seam = only(&set);
        let gap = seam.gap.bracket;
        // The straight edge's end is 0.08 cos from the slanted one.
        assert!(gap.attained <= 0.08 && gap.attained > 0.0799, "{gap:?}");
        assert!((0.08..0.08 * 1.02).contains(&gap.proved), "{gap:?}");
        assert!((seam.gap.at.between[1] - 1.0).abs() < 1e-9, "{seam:?}");
        assert_eq!((seam.finding, seam.verdict), (Finding::Gap, Verdict::Fault));
        assert!((seam.severity - 8.0).abs() < 0.01);
        let [stretch] = seam.failing.as_slice() else {
            panic!("{:?}", seam.failing)
        };
        assert!(
            (stretch.from.point.y - 212.0 / 8.0).abs() < 1e-3,
            "{stretch:?}"
        );
        assert!((stretch.to.point.y - 212.0).abs() < 1e-9);
        assert!((stretch.length - 212.0 * 7.0 / 8.0).abs() < 1e-3);
    }
}

/// A gap like a sine of two and a half waves under an envelope, whose largest
/// value stands at no place of any even division, nor a dyadic one. Foot points
/// lie straight across, so the distance is the height itself.
#[test]
fn a_gap_like_a_sine_is_found_at_its_peak() {
    for (phase, waves) in [(0.3, 2.5), (1.1, 1.7), (2.2, 3.3)] {
        let coefficient =
            |v: f64| 0.09 * (2.0 * PI * waves * v + phase).sin() * (PI * v).sin().powi(2);
        let other = Net::of([1, 12], |u, v| {
            [100.0 + 80.0 * u, 212.0 * v, coefficient(v) * (1.0 - u)]
        });
        let height = |v: f64| other.point([0.0, v])[2].abs();
        // Ten thousand places, then thirds of what is left.
        let best = (0..=10_000)
            .map(|k| f64::from(k) / 1e4)
            .max_by(|a, b| height(*a).total_cmp(&height(*b)))
            .unwrap();
        let (mut low, mut high) = (best - 1e-4, best + 1e-4);
        for _ in 0..60 {
            let (a, b) = (low + (high - low) / 3.0, high - (high - low) / 3.0);
            if height(a) < height(b) {
                low = a;
            } else {
                high = b;
            }
        }
        let peak = height(low);
        assert!((0.05..0.95).contains(&low) && peak > 0.003, "{low} {peak}");
        let even = (1..=1024)
            .map(|n| low * f64::from(n))
            .all(|x| (x - x.round()).abs() > 2e-5);
        assert!(even, "the peak must lie off every even division");
        let set = set_of(&[("a", &plate()), ("b", &other)], "");
        let seam = only(&set);
        let gap = seam.gap.bracket;
        assert!(
            gap.proved >= peak - 1e-12 && gap.attained <= peak + 1e-12,
            "{gap:?} {peak}"
        );
        assert!(gap.proved <= gap.attained * 1.02, "{gap:?}");
        // Within 1.5 % of the top of a bump this wide: near the peak itself.
        assert!(
            (seam.gap.at.between[1] - best).abs() < 0.02,
            "{:?} {best}",
            seam.gap.at
        );
    }
}

/// Where a place of a side lies, with its jet and the derivative inwards.
fn on(side: Side, t: f64) -> [f64; 2] {
    match side {
        Side::U0 => [0.0, t],
        Side::U1 => [1.0, t],
        Side::V0 => [t, 0.0],
        Side::V1 => [t, 1.0],
    }
}

struct Here {
    point: V3,
    along: V3,
    inwards: V3,
    jet: Jet,
}

fn here(net: &Net, side: Side, t: f64) -> Here {
    let jet = net.jet(on(side, t));
    let [_, su, sv, ..] = jet.0;
    let (along, across, sign) = match side {
        Side::U0 => (sv, su, 1.0),
        Side::U1 => (sv, su, -1.0),
        Side::V0 => (su, sv, 1.0),
        Side::V1 => (su, sv, -1.0),
    };
    let off = dot(across, along) / dot(along, along);
    Here {
        point: jet.0[0],
        along: unit(along),
        inwards: unit(plus(across, along, -off).map(|x| x * sign)),
        jet,
    }
}

/// Normal curvature towards `normal` along `direction` in the tangent plane.
fn bend(jet: &Jet, direction: V3, normal: V3) -> f64 {
    let [_, su, sv, suu, suv, svv] = jet.0;
    let (e, f, g) = (dot(su, su), dot(su, sv), dot(sv, sv));
    let (p, q) = (dot(direction, su), dot(direction, sv));
    let det = e * g - f * f;
    let (a, b) = ((p * g - q * f) / det, (q * e - p * f) / det);
    let second =
        a * a * dot(suu, normal) + 2.0 * a * b * dot(suv, normal) + b * b * dot(svv, normal);
    second / dot(direction, direction)
}

/// The place of a side nearest to a point: the best of many, then Newton's steps.
fn foot(net: &Net, side: Side, point: V3, guess: Option<f64>) -> f64 {
    let square = |t: f64| {
        let d = plus(net.point(on(side, t)), point, -1.0);
        dot(d, d)
    };
    let mut best = guess.unwrap_or_else(|| {
        let places = (0..=64).map(|k| f64::from(k) / 64.0);
        places
            .min_by(|a, b| square(*a).total_cmp(&square(*b)))
            .unwrap()
    });
    for _ in 0..12 {
        let h = here(net, side, best);
        let [_, su, sv, suu, _, svv] = h.jet.0;
        let (d, dd) = match side {
            Side::U0 | Side::U1 => (sv, svv),
            Side::V0 | Side::V1 => (su, suu),
        };
        let away = plus(h.point, point, -1.0);
        let step = dot(away, d) / (dot(d, d) + dot(away, dd));
        let next = (best - step).clamp(0.0, 1.0);
        let still = (next - best).abs() < 1e-13;
        best = next;
        if still {
            break;
        }
    }
    best
}

/// Largest gap, angle and step of curvature at 10,000 places of the stretch.
fn sampled(nets: [&Net; 2], sides: [Side; 2], stretch: [f64; 2]) -> [f64; 3] {
    let mut worst = [0.0_f64; 3];
    let (mut guess, mut back_guess) = (None, None);
    for k in 0..=10_000 {
        let s = stretch[0] + (stretch[1] - stretch[0]) * f64::from(k) / 1e4;
        let p = here(nets[0], sides[0], s);
        if k % 200 == 0 {
            (guess, back_guess) = (None, None);
        }
        let t = foot(nets[1], sides[1], p.point, guess);
        guess = Some(t);
        let q = here(nets[1], sides[1], t);
        let away = plus(q.point, p.point, -1.0);
        worst[0] = worst[0].max(dot(away, away).sqrt());
        // Two sides go on smoothly where one's inwards is the other's outwards.
        let n = cross(p.along, p.inwards);
        let along = if dot(p.along, q.along) < 0.0 {
            q.along.map(|x| -x)
        } else {
            q.along
        };
        let m = cross(along, q.inwards.map(|x| -x));
        let turn = cross(n, m);
        worst[1] = worst[1].max(dot(turn, turn).sqrt().atan2(dot(n, m)).to_degrees());
        let step = bend(&p.jet, p.inwards, n) - bend(&q.jet, q.inwards, m);
        worst[2] = worst[2].max(step.abs());
        let back = here(nets[1], sides[1], f64::from(k) / 1e4);
        let near = foot(nets[0], sides[0], back.point, back_guess);
        back_guess = Some(near);
        let away = plus(nets[0].point(on(sides[0], near)), back.point, -1.0);
        worst[0] = worst[0].max(dot(away, away).sqrt());
    }
    worst
}

/// Ten thousand places never exceed what is proved of gap, angle and curvature,
/// and reach what is said to be attained: the same seam plain, of a higher
/// degree, reversed, transposed, at another speed, and cut short.
#[test]
fn ten_thousand_places_refute_no_bound() {
    let edge = |v: f64| 7.0 * (2.4 * v).sin();
    let left = Net::of([3, 4], |u, v| {
        let away = 1.0 - u;
        [
            -70.0 * away + 2.0 * (3.0 * v).sin() * away,
            90.0 * v,
            edge(v) + 9.0 * away * away * (v - 0.3),
        ]
    });
    let right = |tilt: f64, lift: f64| {
        Net::of([3, 4], move |u, v| {
            [
                60.0 * u,
                90.0 * v + 3.0 * u * v,
                edge(v) + lift * (6.3 * v + 0.4).sin() * (1.0 - u) + u * (tilt * v + 4.0 * u * v),
            ]
        })
    };
    for (case, (tilt, lift)) in [(0.0, 0.004), (2.5, 0.0), (6.0, 0.02), (12.0, 0.06)]
        .into_iter()
        .enumerate()
    {
        let right = right(tilt, lift);
        let dressed: [(&str, Net, Side, bool); 6] = [
            ("plain", right.clone(), Side::U0, true),
            ("raised", right.raised().raised(), Side::U0, true),
            ("reversed", right.reversed(), Side::U0, true),
            ("transposed", right.raised().transposed(), Side::V0, true),
            ("hurried", right.hurried(1.6), Side::U0, true),
            ("cut short", right.shortened(0.61), Side::U0, false),
        ];
        for (k, (how, other, side, whole)) in dressed.iter().enumerate() {
            // Every writing meets every second seam, the plain one all of them.
            if k > 0 && (k + case) % 2 == 0 {
                continue;
            }
            // Joined or not, figures are those of the common stretch.
            let set = set_of(
                &[("a", &left), ("b", other)],
                "tolerance: (gap: 0.01, search: 0.5)",
            );
            let seams = seams_of(&set);
            let seam = seams
                .iter()
                .find(|s| s.between.1 == PatchEdge::Side(Side::U1))
                .unwrap_or_else(|| panic!("{case} {how}: {seams:?}"));
            let end = if *whole {
                1.0
            } else {
                foot(&left, Side::U1, other.point([0.0, 1.0]), None)
            };
            let found = sampled([&left, other], [Side::U1, *side], [0.0, end]);
            let figures = [Some(seam.gap), seam.angle_deg, seam.curvature_per_mm];
            for ((sample, figure), slack) in found.into_iter().zip(figures).zip([1e-9, 1e-6, 1e-9])
            {
                let bracket = figure.unwrap().bracket;
                let told = format!("{case} {how}: {sample} {bracket:?}");
                assert!(sample <= bracket.proved + slack * 1e-2, "{told}");
                assert!(sample >= bracket.attained * (1.0 - 1e-4) - slack, "{told}");
                assert!(
                    bracket.proved <= (bracket.attained * 1.02).max(slack),
                    "{told}"
                );
            }
        }
    }
}
