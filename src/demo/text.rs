//! Writes a set as RON with comments, for people to read.
//!
//! Coordinates are rounded to 1e-10 mm: far below any tolerance, and the same
//! value always gives the same text, so shared points stay bitwise equal.

use std::collections::BTreeMap;
use std::io::{self, Write};

use super::patch::{CurveText, EndText, PatchText, SetText, SurfaceText};
use crate::scalar::Vector;

/// The shared points, as written, in order of first use.
#[derive(Debug, Default)]
struct PointTable {
    places: BTreeMap<String, usize>,
    texts: Vec<String>,
}

impl PointTable {
    fn place(&mut self, point: &Vector) -> usize {
        let text = triple(point);
        let next = self.texts.len();
        *self.places.entry(text).or_insert_with_key(|text| {
            self.texts.push(text.clone());
            next
        })
    }
}

/// Writes the set.
///
/// # Errors
/// Whatever the writer reports.
pub(super) fn write(set: &SetText, out: &mut impl Write) -> io::Result<()> {
    let mut table = PointTable::default();
    for patch in set.panels.iter().flat_map(|panel| &panel.patches) {
        if let SurfaceText::Indexed(net) = &patch.surface {
            for point in net.rows.iter().flatten() {
                table.place(point);
            }
        }
    }
    for line in set.comment {
        writeln!(out, "{}", format!("// {line}").trim_end())?;
    }
    writeln!(out, "(")?;
    writeln!(out, "    name: \"{}\",", set.name)?;
    writeln!(out, "    units: mm,")?;
    writeln!(
        out,
        "    tolerance: (chord: 0.1, gap: 0.01, search: 0.1, tangent_deg: 0.1, crease_deg: 10),"
    )?;
    if !table.texts.is_empty() {
        writeln!(
            out,
            "\n    // Points used by number, the first one being 0."
        )?;
        writeln!(out, "    points: [")?;
        for row in table.texts.chunks(4) {
            writeln!(out, "        {},", row.join(", "))?;
        }
        writeln!(out, "    ],")?;
    }
    writeln!(out, "\n    patches: [")?;
    for (at, panel) in set.panels.iter().enumerate() {
        if at > 0 {
            writeln!(out)?;
        }
        writeln!(out, "        // {}", panel.name.to_uppercase())?;
        for line in panel.comment {
            writeln!(out, "        // {line}")?;
        }
        for patch in &panel.patches {
            write_patch(panel.name, patch, &mut table, out)?;
        }
    }
    writeln!(out, "    ],")?;
    if !set.copies.is_empty() {
        writeln!(
            out,
            "\n    // The right halves are mirror images in the centre plane y = 0."
        )?;
        writeln!(out, "    copies: [")?;
        for copy in &set.copies {
            writeln!(
                out,
                "        (of: \"{}\", name: \"{}\", mirror: Y),",
                copy.of, copy.name
            )?;
        }
        writeln!(out, "    ],")?;
    }
    writeln!(out, "\n    seams: [")?;
    for seam in &set.seams {
        if let Some(comment) = seam.comment {
            writeln!(out, "        // {comment}")?;
        }
        writeln!(
            out,
            "        (between: {}, and: {}, demand: {}),",
            end(&seam.ends[0]),
            end(&seam.ends[1]),
            seam.demand
        )?;
    }
    writeln!(out, "    ],")?;
    writeln!(out, ")")
}

fn end(end: &EndText) -> String {
    match end.side {
        Some(side) => format!("(\"{}\", {side})", end.name),
        None => format!("\"{}\"", end.name),
    }
}

fn write_patch(
    panel: &str,
    patch: &PatchText,
    table: &mut PointTable,
    out: &mut impl Write,
) -> io::Result<()> {
    if let Some(comment) = patch.comment {
        writeln!(out, "        // {comment}")?;
    }
    write!(
        out,
        "        (name: \"{panel}/{}\", {}surface: ",
        patch.name,
        if patch.flip { "flip: true, " } else { "" }
    )?;
    match &patch.surface {
        SurfaceText::Bezier(net) => {
            writeln!(out, "Bezier(")?;
            write_rows("net", &net.rows, triple, out)?;
            if let Some(weights) = &net.weights {
                write_rows("weights", weights, |w| number(*w), out)?;
            }
        }
        SurfaceText::Indexed(net) => {
            writeln!(out, "Bezier(")?;
            write_rows("indexed", &net.rows, |p| table.place(p).to_string(), out)?;
        }
        SurfaceText::BSpline { degree, knots, net } => {
            writeln!(out, "BSpline(")?;
            writeln!(out, "            degree: ({}, {}),", degree.0, degree.1)?;
            writeln!(
                out,
                "            knots: ({}, {}),",
                list(&knots[0], |k| number(*k)),
                list(&knots[1], |k| number(*k))
            )?;
            write_rows("net", &net.rows, triple, out)?;
        }
        SurfaceText::Revolution {
            profile,
            center,
            axis,
        } => {
            writeln!(out, "Revolution(")?;
            write_curve("profile", profile, out)?;
            writeln!(out, "            center: {},", triple(center))?;
            writeln!(out, "            axis: {},", triple(axis))?;
        }
        SurfaceText::Ruled { from, to } => {
            writeln!(out, "Ruled(")?;
            write_curve("from", from, out)?;
            write_curve("to", to, out)?;
        }
        SurfaceText::Coons { u0, u1, v0, v1 } => {
            writeln!(out, "Coons(")?;
            for (name, curve) in [("u0", u0), ("u1", u1), ("v0", v0), ("v1", v1)] {
                write_curve(name, curve, out)?;
            }
        }
    }
    writeln!(out, "        )),")
}

fn write_rows<T>(
    field: &str,
    rows: &[Vec<T>],
    mut text: impl FnMut(&T) -> String,
    out: &mut impl Write,
) -> io::Result<()> {
    writeln!(out, "            {field}: [")?;
    for row in rows {
        writeln!(out, "                {},", list(row, &mut text))?;
    }
    writeln!(out, "            ],")
}

fn write_curve(field: &str, curve: &CurveText, out: &mut impl Write) -> io::Result<()> {
    write!(
        out,
        "            {field}: Bezier(points: {}",
        list(&curve.points, triple)
    )?;
    if let Some(weights) = &curve.weights {
        write!(out, ", weights: {}", list(weights, |w| number(*w)))?;
    }
    writeln!(out, "),")
}

fn list<T>(items: &[T], text: impl FnMut(&T) -> String) -> String {
    format!(
        "[{}]",
        items.iter().map(text).collect::<Vec<_>>().join(", ")
    )
}

fn triple(point: &Vector) -> String {
    format!(
        "({}, {}, {})",
        number(point.x),
        number(point.y),
        number(point.z)
    )
}

/// A number rounded to 1e-10, without idle zeros or a negative zero.
fn number(value: f64) -> String {
    let text = format!("{value:.10}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" {
        "0".to_owned()
    } else {
        text.to_owned()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_short_and_never_minus_zero() {
        assert_eq!(number(-0.0), "0");
        assert_eq!(number(-1e-12), "0");
        assert_eq!(number(100.0), "100");
        assert_eq!(number(-0.25), "-0.25");
        assert_eq!(number(2.0 / 3.0), "0.6666666667");
    }
}
