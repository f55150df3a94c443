//! Seams on a picture: lines by finding, and numbers at the worst places.

use super::canvas::Anchor;
use super::colour::{Colour, srgb};
use super::composition::Picture;
use super::curves::{SeamCurve, finding_colour};
use super::legend::Swatch;
use crate::continuity::{Finding, Verdict};

/// Numbers shown at most; further ones would hide what they mark.
const MOST: usize = 40;

const HALO: Colour = [1.0; 3];
const HIDDEN: [u8; 3] = [150, 154, 160];

impl Picture {
    /// Draws all seams where they can be seen, the worst on top, and numbers those
    /// that are not as demanded. A number whose place is hidden has a grey disc.
    pub fn seams(&mut self, curves: &[SeamCurve]) {
        let letter = self.layout.letter();
        for curve in curves.iter().rev() {
            let colour = finding_colour(curve.finding);
            let bad = curve.verdict != Verdict::Met;
            let width = letter * if bad { 0.34 } else { 0.14 };
            for points in &curve.stretches {
                if bad {
                    self.curve(points, width + 0.3 * letter, HALO, 0.85);
                }
                self.curve(points, width.max(1.2), colour, 1.0);
            }
        }
        let mut taken: Vec<[f64; 2]> = Vec::new();
        let bad = curves.iter().filter(|c| c.verdict != Verdict::Met);
        for curve in bad.take(MOST) {
            self.number(curve, &mut taken);
        }
    }

    /// One number beside the worst place of its seam.
    fn number(&mut self, curve: &SeamCurve, taken: &mut Vec<[f64; 2]>) {
        let letter = self.layout.letter();
        let [x, y, along] = self.camera.project(&curve.worst);
        #[allow(clippy::cast_precision_loss, reason = "at most 2^15 pixels")]
        let (width, height) = (self.canvas.width as f64, self.canvas.height as f64);
        if !(0.0..width).contains(&x) || !(0.0..height).contains(&y) {
            return;
        }
        #[allow(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "inside the picture"
        )]
        let pixel = y as usize * self.canvas.width + x as usize;
        let seen = along + 2.0 * self.slack >= f64::from(self.depth[pixel]);
        let colour = if seen {
            finding_colour(curve.finding)
        } else {
            srgb(HIDDEN)
        };
        let radius = 1.25 * letter;
        let free = |at: &[f64; 2], taken: &[[f64; 2]]| {
            let inside = at[0] > radius
                && at[1] > radius
                && at[0] < width - radius
                && at[1] < height - radius;
            inside
                && taken
                    .iter()
                    .all(|t| (t[0] - at[0]).hypot(t[1] - at[1]) > 2.2 * radius)
        };
        // The first free place on rings round it, upper right first.
        let rings = [2.6, 4.2, 6.0, 8.0].iter().flat_map(|ring| {
            [-45.0, -135.0, 45.0, 135.0, 0.0, 180.0, -90.0, 90.0_f64].map(|angle| {
                let (sin, cos) = angle.to_radians().sin_cos();
                [x + ring * letter * cos, y + ring * letter * sin]
            })
        });
        let at = rings
            .into_iter()
            .find(|at| free(at, taken))
            .unwrap_or([x, y]);
        taken.push(at);
        let canvas = &mut self.canvas;
        canvas.line(&[[x, y], at], 0.34 * letter, HALO, 0.9);
        canvas.line(&[[x, y], at], 0.14 * letter, colour, 1.0);
        canvas.disc([x, y], 0.42 * letter, HALO);
        canvas.disc([x, y], 0.28 * letter, colour);
        canvas.disc(at, radius, HALO);
        canvas.disc(at, radius - 0.16 * letter, colour);
        let text = curve.number.to_string();
        let size = if text.len() > 2 { 0.7 } else { 0.95 } * letter;
        let base = [at[0], at[1] + size / 2.0];
        canvas.text(&text, base, size, Anchor::Middle, HALO);
    }

    /// The findings that occur, with their colours, for the legend.
    pub(super) fn findings(curves: &[SeamCurve]) -> Vec<Swatch> {
        let mut kinds: Vec<(Finding, usize)> = Vec::new();
        for curve in curves {
            match kinds.iter_mut().find(|k| k.0 == curve.finding) {
                Some(kind) => kind.1 += 1,
                None => kinds.push((curve.finding, 1)),
            }
        }
        kinds.sort_unstable_by_key(|k| k.0);
        let mut entries: Vec<Swatch> = kinds
            .into_iter()
            .map(|(finding, count)| Swatch {
                colour: finding_colour(finding),
                label: format!("{finding} {count}"),
            })
            .collect();
        let bad = curves.iter().filter(|c| c.verdict != Verdict::Met).count();
        if let Some(last) = entries.last_mut()
            && bad > 0
        {
            last.label += &format!("   ({bad} numbered, worst first)");
        }
        entries
    }
}
