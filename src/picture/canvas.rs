//! The picture in memory, lines and lettering on it, and the PNG file.
#![allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    clippy::cast_precision_loss,
    reason = "pixels are counted well below 2^31 and clipped to the picture before a cast"
)]

use std::io::Write;

use image::codecs::png::{CompressionType, FilterType, PngEncoder};
use image::{ExtendedColorType, ImageEncoder, ImageError};
use rayon::prelude::*;

use super::colour::{Colour, mix, to_srgb};
use super::lettering;

/// A picture in linear light, row after row from the top.
#[derive(Debug, Clone)]
pub struct Canvas {
    /// Pixels across.
    pub width: usize,
    /// Pixels down.
    pub height: usize,
    /// The colours.
    pub pixels: Vec<Colour>,
}

/// How far down the page a line of text stands against its place.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Anchor {
    /// The place is the left end of the baseline.
    Left,
    /// The place is the middle of the baseline.
    Middle,
    /// The place is the right end of the baseline.
    Right,
}

impl Canvas {
    /// A picture of one colour.
    #[must_use]
    pub fn new(width: usize, height: usize, colour: Colour) -> Self {
        Self {
            width,
            height,
            pixels: vec![colour; width * height],
        }
    }

    /// Lays a share of a colour over a pixel; nothing outside the picture.
    fn blend(&mut self, index: usize, colour: Colour, share: f32) {
        self.pixels[index] = mix(self.pixels[index], colour, share);
    }

    /// A filled rectangle between two corners, edges softened.
    pub fn rectangle(&mut self, [left, top, right, bottom]: [f64; 4], colour: Colour, share: f32) {
        let clip = |x: f64, most: usize| x.clamp(0.0, most as f64);
        let (x0, x1) = (clip(left, self.width), clip(right, self.width));
        let (y0, y1) = (clip(top, self.height), clip(bottom, self.height));
        for y in y0.floor() as usize..y1.ceil() as usize {
            let tall = (y1.min(y as f64 + 1.0) - y0.max(y as f64)).max(0.0);
            for x in x0.floor() as usize..x1.ceil() as usize {
                let wide = (x1.min(x as f64 + 1.0) - x0.max(x as f64)).max(0.0);
                self.blend(y * self.width + x, colour, share * (tall * wide) as f32);
            }
        }
    }

    /// A filled disc.
    pub fn disc(&mut self, centre: [f64; 2], radius: f64, colour: Colour) {
        self.line(&[centre], 2.0 * radius, colour, 1.0);
    }

    /// A line through points, in pixels, with round ends and joints; each pixel is
    /// covered once, however often the line passes it.
    pub fn line(&mut self, points: &[[f64; 2]], width: f64, colour: Colour, share: f32) {
        let deep: Vec<[f64; 3]> = points.iter().map(|p| [p[0], p[1], 0.0]).collect();
        self.line_where(&deep, width, colour, share, |_, _| true);
    }

    /// As [`Canvas::line`], but only where `shown` holds for the pixel and the
    /// third coordinate of the line there.
    pub fn line_where(
        &mut self,
        points: &[[f64; 3]],
        width: f64,
        colour: Colour,
        share: f32,
        shown: impl Fn(usize, f64) -> bool,
    ) {
        let mut covered: Vec<(usize, f32)> = Vec::new();
        let one;
        let pairs: &mut dyn Iterator<Item = (&[f64; 3], &[f64; 3])> = if points.len() == 1 {
            one = &points[0];
            &mut std::iter::once((one, one))
        } else {
            &mut points.windows(2).map(|w| (&w[0], &w[1]))
        };
        for (a, b) in pairs {
            self.segment(a, b, width, &shown, &mut covered);
        }
        covered.sort_unstable_by(|p, q| p.0.cmp(&q.0).then(q.1.total_cmp(&p.1)));
        covered.dedup_by_key(|c| c.0);
        for (index, cover) in covered {
            self.blend(index, colour, cover * share);
        }
    }

    fn segment(
        &self,
        a: &[f64; 3],
        b: &[f64; 3],
        width: f64,
        shown: &impl Fn(usize, f64) -> bool,
        covered: &mut Vec<(usize, f32)>,
    ) {
        // A line thinner than a pixel is one pixel wide and fainter.
        let strength = width.min(1.0);
        let reach = width.max(1.0) / 2.0 + 0.5;
        let along = [b[0] - a[0], b[1] - a[1]];
        let square = along[0] * along[0] + along[1] * along[1];
        if !square.is_finite() {
            return;
        }
        let clip = |x: f64, most: usize| x.clamp(0.0, most as f64) as usize;
        let (top, bottom) = (a[1].min(b[1]) - reach, a[1].max(b[1]) + reach);
        for y in clip(top.floor(), self.height)..clip(bottom.ceil(), self.height) {
            let middle = y as f64 + 0.5;
            // The stretch of the line that can reach this row.
            let (mut low, mut high) = (a[0].min(b[0]), a[0].max(b[0]));
            if along[1].abs() > 1e-9 {
                let at = |row: f64| a[0] + along[0] * ((row - a[1]) / along[1]).clamp(0.0, 1.0);
                let (p, q) = (at(middle - reach), at(middle + reach));
                (low, high) = (p.min(q), p.max(q));
            }
            for x in
                clip((low - reach).floor(), self.width)..clip((high + reach).ceil(), self.width)
            {
                let from = [x as f64 + 0.5 - a[0], middle - a[1]];
                let t = if square > 0.0 {
                    ((from[0] * along[0] + from[1] * along[1]) / square).clamp(0.0, 1.0)
                } else {
                    0.0
                };
                let off = (from[0] - along[0] * t).hypot(from[1] - along[1] * t);
                let cover = (reach - off).clamp(0.0, 1.0) * strength;
                let index = y * self.width + x;
                if cover > 0.0 && shown(index, a[2] + (b[2] - a[2]) * t) {
                    covered.push((index, cover as f32));
                }
            }
        }
    }

    /// A line of text; `height` is that of a capital, in pixels.
    pub fn text(
        &mut self,
        text: &str,
        [x, y]: [f64; 2],
        height: f64,
        anchor: Anchor,
        colour: Colour,
    ) {
        let wide = lettering::width(text) * height;
        let left = match anchor {
            Anchor::Left => x,
            Anchor::Middle => x - wide / 2.0,
            Anchor::Right => x - wide,
        };
        for stroke in lettering::strokes(text) {
            let points: Vec<[f64; 2]> = stroke
                .iter()
                .map(|p| [left + p[0] * height, y + p[1] * height])
                .collect();
            let width = height * if points.len() == 1 { 0.2 } else { 0.13 };
            self.line(&points, width, colour, 1.0);
        }
    }

    /// How wide a line of text is, in pixels.
    #[must_use]
    pub fn text_width(text: &str, height: f64) -> f64 {
        lettering::width(text) * height
    }

    /// The pixels as sRGB bytes.
    #[must_use]
    pub fn bytes(&self) -> Vec<u8> {
        let mut bytes = vec![0; self.pixels.len() * 3];
        bytes
            .par_chunks_mut(3 * 4096)
            .zip(self.pixels.par_chunks(4096))
            .for_each(|(out, pixels)| {
                for (out, pixel) in out.chunks_exact_mut(3).zip(pixels) {
                    out.copy_from_slice(&to_srgb(*pixel));
                }
            });
        bytes
    }

    /// Writes the picture as PNG.
    ///
    /// # Errors
    /// [`ImageError`] where the writer fails.
    pub fn write_png(&self, out: &mut dyn Write) -> Result<(), ImageError> {
        PngEncoder::new_with_quality(out, CompressionType::Default, FilterType::Adaptive)
            .write_image(
                &self.bytes(),
                self.width as u32,
                self.height as u32,
                ExtendedColorType::Rgb8,
            )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ink(canvas: &Canvas) -> f64 {
        canvas.pixels.iter().map(|p| f64::from(1.0 - p[0])).sum()
    }

    #[test]
    fn lines_and_discs_cover_their_area() {
        let mut canvas = Canvas::new(100, 100, [1.0; 3]);
        canvas.line(&[[20.3, 30.7], [70.3, 68.2]], 4.0, [0.0; 3], 1.0);
        let length = 50.0_f64.hypot(37.5);
        // A stadium: the rectangle and two half discs.
        let area = 4.0 * length + std::f64::consts::PI * 4.0;
        assert!((ink(&canvas) / area - 1.0).abs() < 0.02, "{}", ink(&canvas));
        let mut canvas = Canvas::new(100, 100, [1.0; 3]);
        canvas.disc([50.2, 49.9], 20.0, [0.0; 3]);
        let area = std::f64::consts::PI * 400.0;
        assert!((ink(&canvas) / area - 1.0).abs() < 0.01);
        // Joints are covered once.
        let mut canvas = Canvas::new(100, 100, [1.0; 3]);
        canvas.line(
            &[[10.0, 50.0], [90.0, 50.0], [10.0, 50.0]],
            3.0,
            [0.0; 3],
            0.5,
        );
        assert!(canvas.pixels.iter().all(|p| p[0] > 0.49));
    }

    #[test]
    fn what_is_outside_the_picture_is_no_fault() {
        let mut canvas = Canvas::new(10, 10, [1.0; 3]);
        canvas.line(&[[-1e9, -50.0], [1e9, 60.0]], 3.0, [0.0; 3], 1.0);
        canvas.text("outside", [-500.0, 4.0], 8.0, Anchor::Left, [0.0; 3]);
        canvas.rectangle([-5.0, -5.0, 50.0, 2.0], [0.0; 3], 1.0);
        canvas.disc([f64::NAN, 3.0], 2.0, [0.0; 3]);
        assert!(ink(&canvas) > 19.9);
    }
}
