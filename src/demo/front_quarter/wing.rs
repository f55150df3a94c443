//! The wing: a band of patches round the wheel arch, the flange of the arch, and
//! the rows above: character line, upper flank, shoulder, ledge.
//!
//! The band lies on the flank, a paraboloid over (x, z'). A patch's place there
//! is ruled between a cubic close to the arch's circle and a straight outer
//! line, degree (3, 1); squares and all, the patch has degree (6, 2) and lies on
//! the paraboloid exactly, whatever the place of its edges. So the band is
//! smooth across its radial seams and into the rows above.

use super::side::{self, BOTTOM, RIDGE, Upper, WAIST};
use crate::demo::patch::{CurveText, PanelText, PatchText, SurfaceText};
use crate::demo::profile::Plane;
use crate::demo::sheet::{Net, product_2d};
use crate::scalar::Vector;

/// Front edge of the wing behind the bumper, and rear edge at the door.
pub(super) const FRONT: f64 = -470.0;
pub(super) const REAR: f64 = 530.0;
/// Front end of shoulder and ledge, above the lamp glass.
pub(super) const NOSE: f64 = -640.0;
/// Centre of the wheel arch, x and z.
const WHEEL: Plane = [0.0, 310.0];
/// Radius of the wheel arch.
const ARCH_RADIUS: f64 = 340.0;
/// Depth of the flange, 45 degrees inwards.
const FLANGE: f64 = 22.0;
/// Cosine and sine of the flange's 45 degrees.
const DIAGONAL: f64 = std::f64::consts::FRAC_1_SQRT_2;
/// Columns of the band along the character line; the ridge above has one patch
/// against the first two (a T-junction).
const TOP: [f64; 5] = [FRONT, -220.0, 30.0, 280.0, REAR];

/// The panel.
pub(super) fn panel(upper: &Upper) -> PanelText {
    let mut patches = Vec::new();
    let arch = arch();
    for (at, part) in arch.iter().enumerate() {
        patches.push(PatchText::new(
            format!("arch {}", at + 1),
            SurfaceText::Bezier(band(part)),
        ));
    }
    for (at, part) in arch.iter().enumerate() {
        patches.push(flange(at + 1, part));
    }
    let rows = [FRONT, 30.0, 280.0, REAR];
    let lower = side::lower_frame(&rows);
    for k in 0..lower.spans() {
        let mut patch = PatchText::new(
            format!("ridge {}", k + 1),
            SurfaceText::Bezier(lower.net(k, &upper.ridge)),
        );
        if k == 0 {
            patch.comment = Some("Its lower edge lies along two patches: a T-junction.");
        }
        patches.push(patch);
    }
    let above = side::upper_frame(upper.origin, &rows);
    for k in 0..above.spans() {
        patches.push(PatchText::new(
            format!("upper {}", k + 1),
            SurfaceText::Bezier(above.net(k, &upper.upper)),
        ));
    }
    let long = side::upper_frame(upper.origin, &[NOSE, FRONT, 30.0, 280.0, REAR]);
    for (row, stroke) in [("shoulder", &upper.shoulder), ("ledge", &upper.ledge)] {
        for k in 0..long.spans() {
            patches.push(PatchText::new(
                format!("{row} {}", k + 1),
                SurfaceText::Bezier(long.net(k, stroke)),
            ));
        }
    }
    PanelText {
        name: "wing",
        comment: &[
            "Patches of degree (6, 2) round the wheel arch (radius 340), the flange of the arch",
            "(ruled, 45 degrees inwards: a crease that is meant), the character line (radius 15,",
            "rational quadratic across), and bicubic rows over the shoulder to the bonnet.",
        ],
        patches,
    }
}

/// Patches of the band and of the flange that meet in the arch's edge.
pub(super) fn flange_seams() -> impl Iterator<Item = (String, String)> {
    (1..=8).map(|k| (format!("wing/arch {k}"), format!("wing/flange {k}")))
}

/// x of the arch's end on the line z' = BOTTOM behind the wheel.
pub(super) fn arch_end() -> f64 {
    bottom_corner(1.0)
}

/// A part of the band in the (x, z') plane.
struct Part {
    inner: [Plane; 4],
    outer: [Plane; 2],
}

fn arch() -> Vec<Part> {
    let outer: Vec<Plane> = [[FRONT, BOTTOM], [FRONT, WAIST]]
        .into_iter()
        .chain(TOP.map(|x| [x, RIDGE]))
        .chain([[REAR, WAIST], [REAR, BOTTOM]])
        .collect();
    let last = outer.len() - 1;
    // Directions from the wheel's centre, in x and z.
    let directions: Vec<Plane> = outer
        .iter()
        .enumerate()
        .map(|(at, &[x, height])| {
            if at == 0 || at == last {
                let end = bottom_corner(if at == 0 { -1.0 } else { 1.0 });
                from_wheel([end, BOTTOM + side::rise(end)])
            } else {
                from_wheel([x, height + side::rise(x)])
            }
        })
        .collect();
    (0..last)
        .map(|k| Part {
            inner: arc(directions[k], directions[k + 1], [k == 0, k + 1 == last]),
            outer: [outer[k], outer[k + 1]],
        })
        .collect()
}

/// Where the arch's circle meets z' = BOTTOM, by fixed-point iteration.
fn bottom_corner(sign: f64) -> f64 {
    let mut x = sign * ARCH_RADIUS;
    for _ in 0..60 {
        let z = BOTTOM + side::rise(x) - WHEEL[1];
        x = sign * (ARCH_RADIUS * ARCH_RADIUS - z * z).sqrt();
    }
    x
}

fn from_wheel(place: Plane) -> Plane {
    let [x, z] = [place[0] - WHEEL[0], place[1] - WHEEL[1]];
    let r = (x * x + z * z).sqrt();
    [x / r, z / r]
}

/// The arch from one direction to the next (clockwise seen from the left), as a
/// cubic in (x, z'). `snap` puts an end onto z' = BOTTOM exactly.
fn arc(from: Plane, to: Plane, snap: [bool; 2]) -> [Plane; 4] {
    let cosine = from[0] * to[0] + from[1] * to[1];
    let cos_half = f64::midpoint(1.0, cosine).sqrt();
    let sin_half = ((1.0 - cosine) / 2.0).sqrt();
    let handle = 4.0 / 3.0 * ARCH_RADIUS * sin_half / (1.0 + cos_half);
    let end = |d: Plane, snap: bool| {
        let x = WHEEL[0] + ARCH_RADIUS * d[0];
        let height = WHEEL[1] + ARCH_RADIUS * d[1] - side::rise(x);
        [x, if snap { BOTTOM } else { height }]
    };
    // Tangent rearwards over the top: (z, -x) of the direction, seen in (x, z').
    let along = |d: Plane, at: Plane, reach: f64| {
        let (dx, dz) = (d[1] * reach, -d[0] * reach);
        [at[0] + dx, at[1] + (dz - side::rise_slope(at[0]) * dx)]
    };
    let (start, stop) = (end(from, snap[0]), end(to, snap[1]));
    [
        start,
        along(from, start, handle),
        along(to, stop, -handle),
        stop,
    ]
}

/// The part's place on the flank as a net of degree (6, 2).
fn band(part: &Part) -> Net {
    let [a, b] = part.outer;
    let net = |axis: usize| -> Vec<Vec<f64>> {
        (0..4u8)
            .map(|i| {
                let t = f64::from(i) / 3.0;
                // The very corner at the ends, so that neighbours agree.
                let outer = match i {
                    0 => a[axis],
                    3 => b[axis],
                    _ => a[axis] * (1.0 - t) + b[axis] * t,
                };
                vec![part.inner[usize::from(i)][axis], outer]
            })
            .collect()
    };
    let (x, height) = (net(0), net(1));
    let one = vec![vec![1.0; 2]; 4];
    let constant = product_2d(&one, &one);
    let (x1, h1) = (product_2d(&x, &one), product_2d(&height, &one));
    let (x2, h2) = (product_2d(&x, &x), product_2d(&height, &height));
    let (plan, flank) = (side::plan_coefficients(), side::flank_coefficients());
    let rise = side::rise_coefficients();
    let rows = (0..7)
        .map(|i| {
            (0..3)
                .map(|j| {
                    let half_width = (plan[0] + flank[0]) * constant[i][j]
                        + plan[1] * x1[i][j]
                        + plan[2] * x2[i][j]
                        + flank[1] * h1[i][j]
                        + flank[2] * h2[i][j];
                    let z = h1[i][j] + rise[1] * x1[i][j] + rise[2] * x2[i][j];
                    Vector::new(x1[i][j], -half_width, z)
                })
                .collect()
        })
        .collect();
    Net {
        rows,
        weights: None,
    }
}

/// The flange inside the band's arch edge: v = 1 is the edge, v = 0 lies
/// towards the wheel's axis and inwards.
fn flange(number: usize, part: &Part) -> PatchText {
    let edge: Vec<Vector> = band(part).rows.iter().map(|row| row[0]).collect();
    let scale = FLANGE * DIAGONAL / ARCH_RADIUS;
    let inner = edge
        .iter()
        .map(|p| {
            p + Vector::new(
                (WHEEL[0] - p.x) * scale,
                FLANGE * DIAGONAL,
                (WHEEL[1] - p.z) * scale,
            )
        })
        .collect();
    PatchText::new(
        format!("flange {number}"),
        SurfaceText::Ruled {
            from: CurveText::polynomial(inner),
            to: CurveText::polynomial(edge),
        },
    )
}
