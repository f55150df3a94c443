//! A set of any size, for trying the tool at scale.
//!
//! Panels of 8 by 8 bicubic patches stand in a square field, a shut line of
//! 4 mm apart. Each panel is one uniform cubic B-spline surface, domed like a
//! quilt and varied from panel to panel, cut into its Bezier patches:
//!
//! ```text
//! b_0 = (d_0 + 4 d_1 + d_2) / 6,   b_1 = (2 d_1 + d_2) / 3,
//! b_2 = (d_1 + 2 d_2) / 3,         b_3 = (d_1 + 4 d_2 + d_3) / 6
//! ```
//!
//! (standard; Farin). Heights of the spline are whole multiples of 0.036 mm, so
//! the 36ths of the patches are whole micrometres: the text holds every
//! coordinate exactly, and the joints are continuous in curvature.

use std::io::{self, Write};

/// Patches along a panel's side.
const SIDE: u32 = 8;
/// Patches of a full panel.
const PANEL: u32 = SIDE * SIDE;
/// A third of a patch's side, in mm.
const THIRD: i64 = 20;
/// From one panel's corner to the next one's, in mm: 480 and the shut line.
const PITCH: i64 = 484;
/// The four Bezier values of a span as sixths of its four spline values.
const SIXTHS: [[i64; 4]; 4] = [[1, 4, 1, 0], [0, 4, 2, 0], [0, 2, 4, 0], [0, 1, 4, 1]];

/// Writes a set of `count` smooth bicubic patches, 64 to a panel (the last
/// panel may have fewer), in mm. Nothing is held in memory but one patch.
///
/// # Errors
/// Whatever the writer reports.
pub fn write_panels(count: u32, out: &mut impl Write) -> io::Result<()> {
    let panels = count.div_ceil(PANEL);
    let columns = (1..).find(|&k: &u32| u64::from(k) * u64::from(k) >= u64::from(panels));
    let columns = columns.unwrap_or(1);
    writeln!(
        out,
        "// {count} bicubic patches, 64 to a panel, made by `chordwise demo --panels {count}`."
    )?;
    writeln!(
        out,
        "// Patches of a panel join continuous in curvature; panels lie a shut line of 4 mm apart."
    )?;
    writeln!(
        out,
        "(\n    name: \"panels\",\n    units: mm,\n    patches: ["
    )?;
    let mut line = Vec::with_capacity(1024);
    for patch in 0..count {
        line.clear();
        let (panel, cell) = (patch / PANEL, patch % PANEL);
        let dome = Dome::of(panel);
        let corner = [panel % columns, panel / columns].map(|k| i64::from(k) * PITCH);
        let (i, j) = (i64::from(cell / SIDE), i64::from(cell % SIDE));
        line.extend_from_slice(b"        (name: \"panel ");
        push(i64::from(panel) + 1, &mut line);
        line.push(b'/');
        push(i64::from(cell) + 1, &mut line);
        line.extend_from_slice(b"\", surface: Bezier(net: [");
        dome.push_net(corner, [i, j], &mut line);
        line.extend_from_slice(b"])),\n");
        out.write_all(&line)?;
    }
    writeln!(out, "    ],\n)")
}

/// The shape of one panel: small whole factors of its terms.
#[derive(Debug, Clone, Copy)]
struct Dome {
    twist: i64,
    bend: i64,
    sway: [i64; 2],
}

impl Dome {
    fn of(panel: u32) -> Self {
        let panel = i64::from(panel);
        Self {
            twist: panel * 5 % 13 - 6,
            bend: panel * 3 % 11 - 5,
            sway: [panel * 7 % 3 - 1, panel / 3 % 3 - 1],
        }
    }

    /// Height of the spline's point (i, j), -1 to 9 each, in units of 0.036 mm.
    fn height(self, i: i64, j: i64) -> i64 {
        let (p, q) = (i - 4, j - 4);
        (36 - p * p) * (36 - q * q)
            + self.twist * p * q
            + self.bend * (p * p - q * q)
            + self.sway[0] * p * p * p
            + self.sway[1] * q * q * q
    }

    /// The 4 by 4 points of the patch in cell (i, j).
    fn push_net(self, corner: [i64; 2], cell: [i64; 2], line: &mut Vec<u8>) {
        let mut spline = [[0; 4]; 4];
        for (i, row) in (cell[0] - 1..).zip(&mut spline) {
            for (j, height) in (cell[1] - 1..).zip(row) {
                *height = self.height(i, j);
            }
        }
        for (i, across) in (0..).zip(SIXTHS) {
            line.extend_from_slice(if i == 0 { b"[" } else { b", [" });
            for (j, along) in (0..).zip(SIXTHS) {
                let micrometres: i64 = across
                    .iter()
                    .zip(spline)
                    .map(|(a, row)| a * along.iter().zip(row).map(|(b, h)| b * h).sum::<i64>())
                    .sum();
                line.extend_from_slice(if j == 0 { b"(" } else { b", (" });
                push(corner[0] + (cell[0] * 3 + i) * THIRD, line);
                line.extend_from_slice(b", ");
                push(corner[1] + (cell[1] * 3 + j) * THIRD, line);
                line.extend_from_slice(b", ");
                push_thousandths(micrometres, line);
                line.push(b')');
            }
            line.push(b']');
        }
    }
}

/// Writes a whole number that is not negative.
fn push(value: i64, line: &mut Vec<u8>) {
    let mut digits = [0u8; 20];
    let mut at = digits.len();
    let mut rest = value.unsigned_abs();
    loop {
        at -= 1;
        digits[at] = b'0' + u8::try_from(rest % 10).unwrap_or(0);
        rest /= 10;
        if rest == 0 {
            break;
        }
    }
    line.extend_from_slice(&digits[at..]);
}

/// Writes thousandths as a decimal number, without idle zeros.
fn push_thousandths(value: i64, line: &mut Vec<u8>) {
    if value < 0 {
        line.push(b'-');
    }
    push(value.abs() / 1000, line);
    let rest = value.abs() % 1000;
    if rest > 0 {
        line.push(b'.');
        let mut unit = 100;
        let mut left = rest;
        while left > 0 {
            push(left / unit, line);
            left %= unit;
            unit /= 10;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn decimals_are_exact_and_short() {
        for (value, text) in [(0, "0"), (-1500, "-1.5"), (12_034, "12.034"), (7, "0.007")] {
            let mut line = Vec::new();
            push_thousandths(value, &mut line);
            assert_eq!(String::from_utf8(line).unwrap(), text);
        }
    }
}
