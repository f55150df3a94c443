//! Lines and texts that become a PNG or an SVG.

use std::fmt::Write;

use super::canvas::{Anchor, Canvas};
use super::colour::{Colour, to_srgb};

/// A line through points, in pixels.
#[derive(Debug, Clone)]
pub(super) struct Line {
    pub(super) points: Vec<[f64; 2]>,
    pub(super) width: f64,
    pub(super) colour: Colour,
}

/// A line of text.
#[derive(Debug, Clone)]
pub(super) struct Label {
    pub(super) text: String,
    pub(super) at: [f64; 2],
    /// Height of a capital, in pixels.
    pub(super) height: f64,
    pub(super) anchor: Anchor,
    pub(super) colour: Colour,
}

/// A drawing without a raster.
#[derive(Debug, Clone)]
pub struct Drawing {
    pub(super) size: (usize, usize),
    pub(super) paper: Colour,
    pub(super) lines: Vec<Line>,
    pub(super) labels: Vec<Label>,
}

impl Drawing {
    /// The drawing as a picture.
    #[must_use]
    pub fn canvas(&self) -> Canvas {
        let mut canvas = Canvas::new(self.size.0, self.size.1, self.paper);
        for line in &self.lines {
            canvas.line(&line.points, line.width, line.colour, 1.0);
        }
        for label in &self.labels {
            canvas.text(
                &label.text,
                label.at,
                label.height,
                label.anchor,
                label.colour,
            );
        }
        canvas
    }

    /// The drawing as SVG.
    #[must_use]
    pub fn svg(&self) -> String {
        let (width, height) = self.size;
        let hex = |colour: Colour| {
            let [r, g, b] = to_srgb(colour);
            format!("#{r:02x}{g:02x}{b:02x}")
        };
        let mut out = format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{width}\" height=\"{height}\" viewBox=\"0 0 {width} {height}\">\n\
             <rect width=\"{width}\" height=\"{height}\" fill=\"{}\"/>\n\
             <g fill=\"none\" stroke-linecap=\"round\" stroke-linejoin=\"round\">\n",
            hex(self.paper)
        );
        for line in &self.lines {
            let points: Vec<String> = line
                .points
                .iter()
                .map(|p| format!("{:.3},{:.3}", p[0], p[1]))
                .collect();
            // Writing to a string cannot fail.
            let _ = writeln!(
                out,
                "<polyline points=\"{}\" stroke=\"{}\" stroke-width=\"{:.2}\"/>",
                points.join(" "),
                hex(line.colour),
                line.width
            );
        }
        out += "</g>\n<g font-family=\"sans-serif\">\n";
        for label in &self.labels {
            let anchor = match label.anchor {
                Anchor::Left => "start",
                Anchor::Middle => "middle",
                Anchor::Right => "end",
            };
            let text = label
                .text
                .replace('&', "&amp;")
                .replace('<', "&lt;")
                .replace('>', "&gt;");
            // A capital is about seven tenths of the size of a font.
            let _ = writeln!(
                out,
                "<text x=\"{:.2}\" y=\"{:.2}\" font-size=\"{:.2}\" text-anchor=\"{anchor}\" fill=\"{}\">{text}</text>",
                label.at[0],
                label.at[1],
                label.height / 0.7,
                hex(label.colour)
            );
        }
        out + "</g>\n</svg>\n"
    }
}
