//! Colours: linear light to sRGB, the palette of panels, the scales of figures.
//!
//! Panels take the eight colours of Okabe and Ito (*Color Universal Design*,
//! 2008), which people with any common colour vision tell apart, and lighter and
//! darker turns of them after that.
//!
//! The scales are our own, laid out in OKLab (Ottosson 2020), where equal steps
//! look equal: lightness rises (or rises and falls) evenly, and the hue stays on
//! the blue and yellow axis, which red-green blindness leaves alone.
#![allow(
    clippy::cast_possible_truncation,
    reason = "colours are kept in single precision: 24 bits where a screen has 8"
)]

/// Red, green and blue in linear light, 0 to 1.
pub type Colour = [f32; 3];

/// Okabe and Ito's palette as sRGB bytes, black left out: it is kept for lines.
const OKABE_ITO: [[u8; 3]; 7] = [
    [86, 180, 233],
    [230, 159, 0],
    [0, 158, 115],
    [240, 228, 66],
    [0, 114, 178],
    [213, 94, 0],
    [204, 121, 167],
];

/// A colour from sRGB bytes.
#[must_use]
pub fn srgb(bytes: [u8; 3]) -> Colour {
    bytes.map(|byte| {
        let c = f32::from(byte) / 255.0;
        if c <= 0.040_45 {
            c / 12.92
        } else {
            ((c + 0.055) / 1.055).powf(2.4)
        }
    })
}

/// The sRGB bytes of a colour (IEC 61966-2-1).
#[must_use]
pub fn to_srgb(colour: Colour) -> [u8; 3] {
    colour.map(|c| {
        let c = c.clamp(0.0, 1.0);
        let c = if c <= 0.003_130_8 {
            c * 12.92
        } else {
            1.055 * c.powf(1.0 / 2.4) - 0.055
        };
        #[allow(clippy::cast_sign_loss, reason = "clamped to 0..1 above")]
        let byte = (c * 255.0 + 0.5) as u8;
        byte
    })
}

/// `a` with `share` of `b` over it.
#[must_use]
pub fn mix(a: Colour, b: Colour, share: f32) -> Colour {
    [0, 1, 2].map(|i| a[i] + (b[i] - a[i]) * share)
}

/// The colour of panel `number`; from the eighth on lighter and darker turns.
#[must_use]
pub fn panel_colour(number: usize) -> Colour {
    let base = srgb(OKABE_ITO[number % OKABE_ITO.len()]);
    match (number / OKABE_ITO.len()) % 3 {
        0 => base,
        1 => mix(base, [1.0; 3], 0.55),
        _ => mix(base, [0.0; 3], 0.6),
    }
}

/// OKLab (Ottosson 2020, bottosson.github.io/posts/oklab) to linear sRGB.
fn oklab([l, a, b]: [f64; 3]) -> Colour {
    let cube = |x: f64| x * x * x;
    let (l, m, s) = (
        cube(l + 0.396_337_777_4 * a + 0.215_803_757_3 * b),
        cube(l - 0.105_561_345_8 * a - 0.063_854_172_8 * b),
        cube(l - 0.089_484_177_5 * a - 1.291_485_548_0 * b),
    );
    [
        4.076_741_662_1 * l - 3.307_711_591_3 * m + 0.230_969_929_2 * s,
        -1.268_438_004_6 * l + 2.609_757_401_1 * m - 0.341_319_396_5 * s,
        -0.004_196_086_3 * l - 0.703_418_614_7 * m + 1.707_614_701_0 * s,
    ]
    .map(|c| (c as f32).clamp(0.0, 1.0))
}

/// How figures are turned into colours.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Ramp {
    /// From dark blue to light yellow, for figures from zero up.
    Rising,
    /// Blue below, pale in the middle, ochre above, for signed figures.
    Signed,
}

impl Ramp {
    /// The colour at `t` from 0 to 1; beyond that the end's.
    #[must_use]
    pub fn colour(self, t: f64) -> Colour {
        let t = t.clamp(0.0, 1.0);
        match self {
            Self::Rising => {
                // A straight line in OKLab: every step of t is as large.
                let from = [0.30, -0.01, -0.11];
                let to = [0.93, -0.03, 0.13];
                oklab([0, 1, 2].map(|i| from[i] + (to[i] - from[i]) * t))
            }
            Self::Signed => {
                // Two straight lines that meet in a pale grey.
                let middle = [0.94, 0.0, 0.005];
                let end = if t < 0.5 {
                    [0.42, -0.03, -0.14]
                } else {
                    [0.42, 0.06, 0.085]
                };
                let share = (t - 0.5).abs() * 2.0;
                oklab([0, 1, 2].map(|i| middle[i] + (end[i] - middle[i]) * share))
            }
        }
    }
}

/// A ramp laid over a range of figures.
#[derive(Debug, Clone, PartialEq)]
pub struct Scale {
    /// The colours.
    pub ramp: Ramp,
    /// The figure at the low end.
    pub low: f64,
    /// The figure at the high end.
    pub high: f64,
}

impl Scale {
    /// The colour of a figure.
    #[must_use]
    pub fn colour(&self, value: f64) -> Colour {
        self.ramp
            .colour((value - self.low) / (self.high - self.low))
    }

    /// Five figures from end to end, for the legend.
    #[must_use]
    pub fn ticks(&self) -> [f64; 5] {
        [0.0, 0.25, 0.5, 0.75, 1.0].map(|t| {
            let tick = self.low + (self.high - self.low) * t;
            let zero = tick.abs() < 1e-12 * (self.high - self.low);
            if zero { 0.0 } else { tick }
        })
    }
}

/// The least of 1, 2, 4, 5 times a power of ten that is not below `value`.
#[must_use]
pub fn round_up(value: f64) -> f64 {
    if !(value.is_finite() && value > 0.0) {
        return 1.0;
    }
    let power = 10.0_f64.powf(value.log10().floor());
    [1.0, 2.0, 4.0, 5.0, 10.0]
        .map(|m| m * power)
        .into_iter()
        .find(|x| *x >= value * (1.0 - 1e-9))
        .unwrap_or(10.0 * power)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bytes_survive_the_way_to_linear_light_and_back() {
        for byte in 0..=255 {
            assert_eq!(to_srgb(srgb([byte; 3])), [byte; 3]);
        }
    }

    /// Relative luminance of sRGB (IEC 61966-2-1, ITU-R BT.709).
    fn luminance(c: Colour) -> f32 {
        0.2126 * c[0] + 0.7152 * c[1] + 0.0722 * c[2]
    }

    /// What a person without green cones sees: the projection of Vienot, Brettel
    /// and Mollon (1999), its matrix for linear sRGB as published.
    fn without_green(c: Colour) -> Colour {
        let yellow = 0.292_75 * c[0] + 0.707_25 * c[1];
        [yellow, yellow, -0.022_34 * c[0] + 0.022_34 * c[1] + c[2]]
    }

    #[test]
    fn scales_rise_evenly_and_can_be_read_without_red_or_green() {
        let steps: Vec<Colour> = (0..=20)
            .map(|k| Ramp::Rising.colour(f64::from(k) / 20.0))
            .collect();
        for pair in steps.windows(2) {
            let [a, b] = [pair[0], pair[1]];
            // Lightness as CIE defines it, about the cube root of luminance.
            let lightness = |c| luminance(c).cbrt();
            let step = lightness(b) - lightness(a);
            assert!((0.015..0.06).contains(&step), "{step}");
            assert!(luminance(without_green(b)) > luminance(without_green(a)));
        }
        for k in 1..=10 {
            let t = f64::from(k) / 20.0;
            let (below, above) = (Ramp::Signed.colour(0.5 - t), Ramp::Signed.colour(0.5 + t));
            let (p, q) = (without_green(below), without_green(above));
            let blueness = |c: Colour| c[2] / c.iter().sum::<f32>();
            assert!(blueness(p) > blueness(q) + 0.01 * k as f32, "{k}");
        }
    }

    #[test]
    fn limits_are_round_figures() {
        for (value, up) in [
            (0.013, 0.02),
            (0.1, 0.1),
            (3.7, 4.0),
            (4.1, 5.0),
            (7.0, 10.0),
        ] {
            approx::assert_relative_eq!(round_up(value), up, max_relative = 1e-12);
        }
    }
}
