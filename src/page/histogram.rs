//! Histograms as SVG, drawn by hand.

use std::fmt::Write;

use super::markup::{escape, figure};
use crate::picture::round_up;

/// Bars across.
const BARS: usize = 24;

/// Size of the drawing and its margins: left, top, right, bottom.
const WIDTH: f64 = 420.0;
const HEIGHT: f64 = 220.0;
const MARGIN: [f64; 4] = [56.0, 14.0, 28.0, 44.0];

/// How often figures fall into which range.
#[derive(Debug, Clone)]
pub(super) struct Histogram {
    /// What is counted, for those who do not see it.
    pub(super) title: String,
    /// The axis' name with its unit.
    pub(super) axis: String,
    /// The figures at both ends.
    pub(super) range: [f64; 2],
    counts: Vec<usize>,
    /// A limit to be marked, with its name.
    pub(super) limit: Option<(f64, String)>,
}

impl Histogram {
    /// Counts the finite figures; those beyond the ends go into the last bars.
    pub(super) fn of(
        title: &str,
        axis: &str,
        range: [f64; 2],
        values: impl Iterator<Item = f64>,
    ) -> Self {
        let mut counts = vec![0; BARS];
        for value in values.filter(|v| v.is_finite()) {
            #[allow(
                clippy::cast_possible_truncation,
                clippy::cast_sign_loss,
                clippy::cast_precision_loss,
                reason = "clamped to the bars there are"
            )]
            let bar = ((value - range[0]) / (range[1] - range[0]) * BARS as f64)
                .clamp(0.0, BARS as f64 - 1.0) as usize;
            counts[bar] += 1;
        }
        Self {
            title: title.to_owned(),
            axis: axis.to_owned(),
            range,
            counts,
            limit: None,
        }
    }

    /// The drawing; `number` makes its names unlike those of others.
    #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
    pub(super) fn svg(&self, number: usize) -> String {
        let [left, top, right, bottom] =
            [MARGIN[0], MARGIN[1], WIDTH - MARGIN[2], HEIGHT - MARGIN[3]];
        let fullest = self.counts.iter().copied().max().unwrap_or(0).max(1);
        let most = round_up(fullest as f64);
        let mut out = format!(
            "<svg viewBox=\"0 0 {WIDTH} {HEIGHT}\" role=\"img\" aria-labelledby=\"h{number}\">\n\
             <title id=\"h{number}\">{}</title>\n",
            escape(&self.describe())
        );
        let mut line = |text: std::fmt::Arguments<'_>| {
            // Writing to a string cannot fail.
            let _ = out.write_fmt(text);
            out.push('\n');
        };
        for k in 0..=4 {
            let y = bottom - (bottom - top) * f64::from(k) / 4.0;
            let count = most * f64::from(k) / 4.0;
            line(format_args!(
                "<line class=\"grid\" x1=\"{left}\" y1=\"{y:.1}\" x2=\"{right}\" y2=\"{y:.1}\"></line>"
            ));
            line(format_args!(
                "<text x=\"{:.1}\" y=\"{:.1}\" text-anchor=\"end\">{}</text>",
                left - 6.0,
                y + 4.0,
                figure(count)
            ));
        }
        let step = (right - left) / BARS as f64;
        for (k, count) in self.counts.iter().enumerate() {
            if *count > 0 {
                let tall = ((bottom - top) * *count as f64 / most).max(1.0);
                line(format_args!(
                    "<rect class=\"bar\" x=\"{:.2}\" y=\"{:.2}\" width=\"{:.2}\" height=\"{tall:.2}\"></rect>",
                    left + step * k as f64 + 0.5,
                    bottom - tall,
                    step - 1.0
                ));
            }
        }
        for k in 0..=4 {
            let t = f64::from(k) / 4.0;
            let x = left + (right - left) * t;
            line(format_args!(
                "<line class=\"axis\" x1=\"{x:.1}\" y1=\"{bottom}\" x2=\"{x:.1}\" y2=\"{:.1}\"></line>",
                bottom + 4.0
            ));
            line(format_args!(
                "<text x=\"{x:.1}\" y=\"{:.1}\" text-anchor=\"middle\">{}</text>",
                bottom + 17.0,
                figure(self.range[0] + (self.range[1] - self.range[0]) * t)
            ));
        }
        line(format_args!(
            "<line class=\"axis\" x1=\"{left}\" y1=\"{bottom}\" x2=\"{right}\" y2=\"{bottom}\"></line>"
        ));
        if let Some((at, name)) = &self.limit {
            let x = left + (right - left) * (at - self.range[0]) / (self.range[1] - self.range[0]);
            let x = x.clamp(left, right);
            line(format_args!(
                "<line class=\"limit\" x1=\"{x:.1}\" y1=\"{top}\" x2=\"{x:.1}\" y2=\"{bottom}\"></line>"
            ));
            let anchor = if x > (left + right) / 2.0 {
                "end"
            } else {
                "start"
            };
            let off = if anchor == "end" { -5.0 } else { 5.0 };
            line(format_args!(
                "<text x=\"{:.1}\" y=\"{:.1}\" text-anchor=\"{anchor}\">{}</text>",
                x + off,
                top + 10.0,
                escape(name)
            ));
        }
        line(format_args!(
            "<text x=\"{:.1}\" y=\"{:.1}\" text-anchor=\"middle\">{}</text>",
            f64::midpoint(left, right),
            HEIGHT - 8.0,
            escape(&self.axis)
        ));
        line(format_args!(
            "<text transform=\"translate(13 {:.1}) rotate(-90)\" text-anchor=\"middle\">triangles</text>",
            f64::midpoint(top, bottom)
        ));
        out + "</svg>\n"
    }

    /// The same in words.
    fn describe(&self) -> String {
        let whole: usize = self.counts.iter().sum();
        let fullest = (0..BARS)
            .max_by_key(|k| (self.counts[*k], BARS - k))
            .unwrap_or(0);
        #[allow(clippy::cast_precision_loss, reason = "at most 24 bars")]
        let at = |k: usize| {
            figure(self.range[0] + (self.range[1] - self.range[0]) * k as f64 / BARS as f64)
        };
        format!(
            "{}: {whole} triangles from {} to {}, most of them ({}) from {} to {}",
            self.title,
            figure(self.range[0]),
            figure(self.range[1]),
            self.counts[fullest],
            at(fullest),
            at(fullest + 1)
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bars_hold_what_falls_between_their_ends() {
        let values = [-1.0, 0.0, 0.5, 0.99, 1.0, 7.0, f64::NAN, f64::INFINITY];
        let histogram = Histogram::of("t", "a", [0.0, 1.0], values.into_iter());
        assert_eq!(histogram.counts.iter().sum::<usize>(), 6);
        assert_eq!(histogram.counts[0], 2);
        assert_eq!(histogram.counts[12], 1);
        assert_eq!(histogram.counts[BARS - 1], 3);
    }
}
