//! A section as a drawing, with its curvature as a comb.

use super::camera::{Camera, View};
use super::canvas::Anchor;
use super::colour::{Colour, mix, panel_colour, round_up, srgb};
use super::drawing::{Drawing, Label, Line};
use super::legend::{Layout, plain, round_down};
use super::section::{Plane, SectionRun};
use crate::scalar::{Point, Vector};

const PAPER: [u8; 3] = [255, 255, 255];
const INK: [u8; 3] = [32, 36, 42];

/// Teeth are as long as this share of the picture's width at the comb's
/// curvature.
const TOOTH: f64 = 0.08;

/// Teeth are cut off at this many of those.
const LONGEST: f64 = 1.5;

/// What stands round a section.
#[derive(Debug, Clone)]
pub struct SectionHead {
    /// The set's name.
    pub name: String,
    /// The unit of lengths.
    pub unit: &'static str,
    /// The panels' names.
    pub panels: Vec<String>,
    /// The curvature whose tooth is as long as the one in the legend; found where
    /// `None`.
    pub comb: Option<f64>,
}

/// Draws a section as seen against its plane's normal. Teeth point away from the
/// side to which the cut bends.
#[must_use]
pub fn draw_section(
    runs: &[SectionRun],
    plane: &Plane,
    size: (usize, usize),
    head: &SectionHead,
) -> Drawing {
    let layout = Layout::of(size.0, size.1);
    let letter = layout.letter();
    let [left, top, right, bottom] = layout.window();
    // Room for the teeth.
    #[allow(clippy::cast_precision_loss, reason = "at most 2^15 pixels")]
    let tooth = TOOTH * size.0 as f64;
    let room = LONGEST * tooth;
    let window = [
        left + room,
        top + room / 2.0,
        right - room,
        bottom - room / 2.0,
    ];
    let points: Vec<Point> = runs
        .iter()
        .flat_map(|r| r.cuts.iter().map(|c| c.point))
        .collect();
    let camera = Camera::fit(View::From(plane.normal), points.iter(), window, 0.0);
    let camera = if camera.pixel > 0.0 {
        camera
    } else {
        Camera::near(plane.normal, camera.centre, 1.0, window)
    };
    let comb = head.comb.unwrap_or_else(|| usual(runs));
    let flat = |p: &Point| {
        let [x, y, _] = camera.project(p);
        [x, y]
    };
    let mut drawing = Drawing {
        size,
        paper: srgb(PAPER),
        lines: Vec::new(),
        labels: Vec::new(),
    };
    for run in runs {
        let colour = mix(panel_colour(run.panel), [0.0; 3], 0.25);
        let pale = mix(colour, srgb(PAPER), 0.45);
        let tips: Vec<Option<[f64; 2]>> = run
            .cuts
            .iter()
            .map(|cut| {
                let bend = cut.bend?;
                // A longer one says only that curvature is large.
                let long = (bend.norm() / comb).min(LONGEST) * tooth * camera.pixel;
                let tip = cut.point - bend.try_normalize(1e-300)? * long;
                Some(flat(&tip))
            })
            .collect();
        for (cut, tip) in run.cuts.iter().zip(&tips) {
            if let Some(tip) = tip {
                push(
                    &mut drawing,
                    vec![flat(&cut.point), *tip],
                    0.07 * letter,
                    pale,
                );
            }
        }
        for part in tips.split(Option::is_none).filter(|p| p.len() > 1) {
            let points = part.iter().flatten().copied().collect();
            push(&mut drawing, points, 0.10 * letter, colour);
        }
        let points = run.cuts.iter().map(|c| flat(&c.point)).collect();
        push(&mut drawing, points, 0.22 * letter, srgb(INK));
    }
    caption(
        &mut drawing,
        runs,
        plane,
        head,
        &layout,
        (&camera, tooth, comb),
    );
    drawing
}

fn push(drawing: &mut Drawing, points: Vec<[f64; 2]>, width: f64, colour: Colour) {
    drawing.lines.push(Line {
        points,
        width,
        colour,
    });
}

fn caption(
    drawing: &mut Drawing,
    runs: &[SectionRun],
    plane: &Plane,
    head: &SectionHead,
    layout: &Layout,
    (camera, tooth, comb): (&Camera, f64, f64),
) {
    let letter = layout.letter();
    let [left, top, right, bottom] = layout.window();
    let (head_row, foot) = (top - 5.4 * letter, bottom + 7.2 * letter);
    let mut text = |text: String, at: [f64; 2], height: f64, anchor: Anchor, colour: Colour| {
        drawing.labels.push(Label {
            text,
            at,
            height,
            anchor,
            colour,
        });
    };
    let ink = srgb(INK);
    let name = if head.name.is_empty() {
        "patch set without a name"
    } else {
        &head.name
    };
    text(
        name.to_owned(),
        [left, head_row],
        1.4 * letter,
        Anchor::Left,
        ink,
    );
    let n = plane.normal;
    let place = if runs.is_empty() {
        "; the plane cuts nothing".to_owned()
    } else {
        String::new()
    };
    let cut = match axis(&n) {
        Some((name, sign)) => format!("{name} = {}", plain(sign * plane.offset)),
        None => format!(
            "({:.4}, {:.4}, {:.4}) . p = {}",
            n.x,
            n.y,
            n.z,
            plain(plane.offset)
        ),
    };
    let ways = [(camera.right, "to the right"), (camera.up, "up")].map(|(way, word)| {
        axis(&way).map_or_else(String::new, |(name, sign)| {
            let minus = if sign < 0.0 { "-" } else { "" };
            format!("; {minus}{name} {word}")
        })
    });
    let line = format!("section {cut} {}{}{}{place}", head.unit, ways[0], ways[1]);
    text(
        line,
        [left, head_row + 2.1 * letter],
        letter,
        Anchor::Left,
        mix(ink, srgb(PAPER), 0.1),
    );
    let mut panels: Vec<usize> = runs.iter().map(|r| r.panel).collect();
    panels.sort_unstable();
    panels.dedup();
    let mut x = left;
    let mut swatches = Vec::new();
    for panel in panels.into_iter().take(10) {
        let label = head.panels[panel].clone();
        let colour = mix(panel_colour(panel), [0.0; 3], 0.25);
        let swatch = 1.6 * letter;
        let wide = swatch + super::canvas::Canvas::text_width(&label, letter) + 2.0 * letter;
        if x + wide > right {
            break;
        }
        let row = foot - 2.4 * letter;
        swatches.push(([x, row - 0.5 * letter], colour));
        text(label, [x + swatch, row], letter, Anchor::Left, ink);
        x += wide;
    }
    let label = format!(
        "curvature of the cut: a tooth this long is {} 1/{}",
        plain(comb),
        head.unit
    );
    text(
        label,
        [left + tooth + letter, foot],
        letter,
        Anchor::Left,
        ink,
    );
    let bar = round_down(0.2 * (right - left) * camera.pixel);
    let wide = bar / camera.pixel;
    let middle = [right - wide / 2.0, foot - 1.1 * letter];
    text(
        format!("{} {}", plain(bar), head.unit),
        middle,
        letter,
        Anchor::Middle,
        ink,
    );
    for ([x, y], colour) in swatches {
        let points = vec![[x + 0.55 * letter, y], [x + 0.65 * letter, y]];
        push(drawing, points, 1.1 * letter, colour);
    }
    let y = foot - letter / 2.0;
    push(
        drawing,
        vec![[left, y], [left + tooth, y]],
        0.22 * letter,
        ink,
    );
    push(
        drawing,
        vec![[right - wide, foot], [right, foot]],
        0.12 * letter,
        ink,
    );
    for x in [right - wide, right - wide / 2.0, right] {
        push(
            drawing,
            vec![[x, foot - 0.4 * letter], [x, foot]],
            0.12 * letter,
            ink,
        );
    }
}

/// The axis a direction runs along, and whether the same way; `None` where it is
/// no axis.
fn axis(way: &Vector) -> Option<(char, f64)> {
    let names = ['x', 'y', 'z'];
    (0..3)
        .find(|&k| way[k].abs() > 1.0 - 1e-12)
        .map(|k| (names[k], way[k].signum()))
}

/// A round curvature that nine tenths of the places keep to.
fn usual(runs: &[SectionRun]) -> f64 {
    let mut sizes: Vec<f64> = runs
        .iter()
        .flat_map(|r| r.cuts.iter().filter_map(|c| c.bend.map(|b| b.norm())))
        .filter(|k| k.is_finite())
        .collect();
    sizes.sort_by(f64::total_cmp);
    let at = sizes.len() * 9 / 10;
    let found = sizes.get(at).or(sizes.last()).copied().unwrap_or(0.0);
    round_up(found)
}
