//! What stands round a picture: its head, its legend, the scale bar.

use super::camera::Camera;
use super::canvas::{Anchor, Canvas};
use super::colour::{Colour, Scale, srgb};

/// Text and thin lines.
const INK: [u8; 3] = [32, 36, 42];
const FAINT: [u8; 3] = [96, 102, 110];

/// An entry of a legend of names.
#[derive(Debug, Clone)]
pub(super) struct Swatch {
    pub(super) colour: Colour,
    pub(super) label: String,
}

/// Sizes that follow from those of the picture.
#[derive(Debug, Clone, Copy)]
pub(super) struct Layout {
    width: f64,
    height: f64,
    /// Height of a capital.
    letter: f64,
    margin: f64,
}

impl Layout {
    pub(super) fn of(width: usize, height: usize) -> Self {
        #[allow(clippy::cast_precision_loss, reason = "at most 2^15 pixels")]
        let (width, height) = (width as f64, height as f64);
        // Wide and low pictures have letters that fit their width.
        let letter = (height / 72.0).min(width / 90.0).max(7.0);
        Self {
            width,
            height,
            letter,
            margin: 1.8 * letter,
        }
    }

    /// What is left for the drawing.
    pub(super) fn window(&self) -> [f64; 4] {
        [
            self.margin,
            self.margin + 6.8 * self.letter,
            self.width - self.margin,
            self.height - self.margin - 7.2 * self.letter,
        ]
    }

    /// Clears what stands outside the window, where a close-up may reach.
    pub(super) fn clear(&self, canvas: &mut Canvas, paper: Colour) {
        let [_, top, _, bottom] = self.window();
        let (top, bottom) = (top - self.letter, bottom + self.letter);
        canvas.rectangle([0.0, 0.0, self.width, top], paper, 1.0);
        canvas.rectangle([0.0, bottom, self.width, self.height], paper, 1.0);
    }

    /// The set's name over lines on what is shown.
    pub(super) fn head(&self, canvas: &mut Canvas, name: &str, lines: [&str; 2]) {
        let at = |row: f64| [self.margin, self.margin + row * self.letter];
        canvas.text(name, at(1.4), 1.4 * self.letter, Anchor::Left, srgb(INK));
        for (line, row) in lines.into_iter().zip([3.5, 5.3]) {
            canvas.text(line, at(row), self.letter, Anchor::Left, srgb(FAINT));
        }
    }

    /// A bar of a round length, at the right end of the foot.
    pub(super) fn scale_bar(&self, canvas: &mut Canvas, camera: &Camera, unit: &str) {
        let most = 0.2 * self.width * camera.pixel;
        let length = round_down(most);
        let wide = length / camera.pixel;
        let right = self.width - self.margin;
        let y = self.height - self.margin;
        let ink = srgb(INK);
        let line = (self.letter / 8.0).max(1.0);
        let tick = 0.45 * self.letter;
        canvas.line(&[[right - wide, y], [right, y]], line, ink, 1.0);
        for x in [right - wide, right - wide / 2.0, right] {
            canvas.line(&[[x, y - tick], [x, y]], line, ink, 1.0);
        }
        let text = format!("{} {unit}", plain(length));
        let at = [right - wide / 2.0, y - 1.1 * self.letter];
        canvas.text(&text, at, self.letter, Anchor::Middle, ink);
    }

    /// A scale of figures in the foot.
    pub(super) fn scale(&self, canvas: &mut Canvas, scale: &Scale, label: &str) {
        // Whole pixels: half covered ones would mix a colour with the paper.
        let left = self.margin.round();
        let right = (left + 0.40 * self.width).round();
        let bottom = self.height - self.margin - 1.9 * self.letter;
        let top = bottom - 1.1 * self.letter;
        let ink = srgb(INK);
        #[allow(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "a width in pixels"
        )]
        let columns = (right - left) as usize;
        for column in 0..columns {
            #[allow(clippy::cast_precision_loss, reason = "a width in pixels")]
            let (x, t) = (left + column as f64, (column as f64 + 0.5) / columns as f64);
            canvas.rectangle([x, top, x + 1.0, bottom], scale.ramp.colour(t), 1.0);
        }
        for (k, value) in scale.ticks().into_iter().enumerate() {
            #[allow(clippy::cast_precision_loss, reason = "0 to 4")]
            let x = left + (right - left) * k as f64 / 4.0;
            let foot = bottom + 0.35 * self.letter;
            canvas.line(&[[x, bottom], [x, foot]], 1.0, ink, 1.0);
            let anchor = match k {
                0 => Anchor::Left,
                4 => Anchor::Right,
                _ => Anchor::Middle,
            };
            let at = [x, self.height - self.margin];
            canvas.text(&plain(value), at, self.letter, anchor, ink);
        }
        let at = [left, top - 0.7 * self.letter];
        canvas.text(label, at, self.letter, Anchor::Left, ink);
    }

    /// Names with their colours in the foot, as many as there is room for.
    /// Beside a scale they keep to the right of it.
    pub(super) fn names(&self, canvas: &mut Canvas, entries: &[Swatch], beside: bool) {
        let share = if beside { 0.46 } else { 0.0 };
        let (left, right) = (self.margin + share * self.width, 0.76 * self.width);
        let (mut x, mut row) = (left, 0);
        let box_side = 1.1 * self.letter;
        for (k, entry) in entries.iter().enumerate() {
            let wide = box_side * 1.4 + Canvas::text_width(&entry.label, self.letter);
            let more = format!("and {} more", entries.len() - k);
            let kept = if k + 1 < entries.len() && row == 2 {
                Canvas::text_width(&more, self.letter) + 2.0 * self.letter
            } else {
                0.0
            };
            if x > left && x + wide + kept > right {
                if row == 2 {
                    let y = self.row(row);
                    canvas.text(&more, [x, y], self.letter, Anchor::Left, srgb(INK));
                    return;
                }
                row += 1;
                x = left;
            }
            let y = self.row(row);
            canvas.rectangle([x, y - box_side, x + box_side, y], entry.colour, 1.0);
            let at = [x + 1.4 * box_side, y - 0.05 * self.letter];
            canvas.text(&entry.label, at, self.letter, Anchor::Left, srgb(INK));
            x += wide + 1.8 * self.letter;
        }
    }

    /// One line in the foot.
    pub(super) fn note(&self, canvas: &mut Canvas, line: &str) {
        let at = [self.margin, self.row(2)];
        canvas.text(line, at, self.letter, Anchor::Left, srgb(INK));
    }

    /// The baseline of a row of the foot, of three.
    fn row(&self, row: usize) -> f64 {
        #[allow(clippy::cast_precision_loss, reason = "0 to 2")]
        let row = row as f64;
        self.height - self.margin - (2.0 - row) * 1.9 * self.letter
    }

    /// Height of a capital, in pixels.
    pub(super) fn letter(&self) -> f64 {
        self.letter
    }
}

/// The largest of 1, 2, 5 times a power of ten that is not above `value`.
pub(super) fn round_down(value: f64) -> f64 {
    if !(value.is_finite() && value > 0.0) {
        return 1.0;
    }
    let power = 10.0_f64.powf(value.log10().floor());
    [5.0, 2.0, 1.0]
        .map(|m| m * power)
        .into_iter()
        .find(|x| *x <= value * (1.0 + 1e-9))
        .unwrap_or(power)
}

/// A figure in at most four digits, with an exponent only where it must be.
pub(super) fn plain(value: f64) -> String {
    let size = value.abs();
    if size > 0.0 && !(1e-3..1e5).contains(&size) {
        let text = format!("{value:.2e}");
        return match text.split_once('e') {
            Some((digits, power)) if digits.contains('.') => {
                let digits = digits.trim_end_matches('0').trim_end_matches('.');
                format!("{digits}e{power}")
            }
            _ => text,
        };
    }
    let decimals = if size >= 100.0 || size == 0.0 {
        0
    } else if size >= 1.0 {
        2
    } else {
        5
    };
    let text = format!("{value:.decimals$}");
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_are_short() {
        for (value, text) in [
            (0.0, "0"),
            (0.025, "0.025"),
            (-0.0005, "-5e-4"),
            (200.0, "200"),
            (1.5, "1.5"),
            (2.5e-7, "2.5e-7"),
            (-0.01, "-0.01"),
        ] {
            assert_eq!(plain(value), text);
        }
        approx::assert_relative_eq!(round_down(730.0), 500.0, max_relative = 1e-12);
    }
}
