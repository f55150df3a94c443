//! Shape and size of triangles on a page.

use std::fmt::Write;

use super::histogram::Histogram;
use super::markup::{escape, figure};
use super::tables::{CLOSE, number, open};
use crate::mesh::Mesh;
use crate::quality::{Measure, Triangle};
use crate::report::{QualityReport, many};

/// The measures that are drawn, with the ends of their axes.
const DRAWN: [(Measure, [f64; 2]); 7] = [
    (Measure::MinimumAngle, [0.0, 60.0]),
    (Measure::MaximumAngle, [60.0, 180.0]),
    (Measure::AspectRatio, [1.0, 5.0]),
    (Measure::RadiusRatio, [1.0, 5.0]),
    (Measure::ScaledJacobian, [0.0, 1.0]),
    (Measure::EdgeRatio, [1.0, 5.0]),
    (Measure::Shape, [0.0, 1.0]),
];

/// A histogram of every measure of triangles.
pub(super) fn histograms(mesh: &Mesh) -> Vec<Histogram> {
    let triangles: Vec<Triangle> = (0..mesh.triangles.len())
        .filter_map(|t| Triangle::new(mesh.triangle_corners(t)))
        .collect();
    let drawn = DRAWN.iter().map(|(measure, range)| {
        let mut title = measure.title().to_owned();
        title[..1].make_ascii_uppercase();
        let values = triangles.iter().filter_map(|t| measure.of(t));
        Histogram::of(&title, measure.definition(), *range, values)
    });
    drawn.collect()
}

/// Figures of all measures.
pub(super) fn measures(report: &QualityReport, unit: &str) -> String {
    let mut out = open(
        "quality-table",
        "Shape and size of triangles, whatever their deviation; acceptable as in the Verdict report",
        &[
            ("measure", false),
            ("definition", false),
            ("figures", true),
            ("minimum", true),
            ("1 %", true),
            ("mean", true),
            ("99 %", true),
            ("maximum", true),
            ("acceptable", false),
            ("outside", true),
        ],
    );
    let count = |n: usize| {
        #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
        let value = n as f64;
        number(value, &n.to_string())
    };
    for line in &report.measures {
        let range = line.acceptable.map_or_else(
            || "no range".to_owned(),
            |[low, high]| format!("{} to {}", figure(low), figure(high)),
        );
        let figures: String = [
            line.minimum,
            line.one_percent,
            line.mean,
            line.ninety_nine_percent,
            line.maximum,
        ]
        .map(|value| number(value, &figure(value)))
        .concat();
        // Writing to a string cannot fail.
        let _ = writeln!(
            out,
            "<tr><td>{}</td><td>{}</td>{}{figures}<td>{}</td>{}</tr>",
            escape(line.title()),
            escape(line.definition),
            count(line.count),
            escape(&range),
            count(line.outside),
        );
    }
    out.push_str(CLOSE);
    let mut notes = Vec::new();
    if let Some(edge) = &report.shortest_edge {
        notes.push(format!(
            "Shortest edge: {} {unit}, in {}; {}.",
            figure(edge.value),
            edge.patch,
            report.time_step
        ));
    }
    if report.flat > 0 {
        notes.push(format!(
            "Without an area, and in no figure: {}.",
            many(report.flat, "triangle")
        ));
    }
    if !notes.is_empty() {
        let _ = writeln!(out, "<p class=\"note\">{}</p>", escape(&notes.join(" ")));
    }
    out + &worst(report)
}

/// The worst figures of every measure, with their places.
fn worst(report: &QualityReport) -> String {
    let mut out = open(
        "worst-table",
        "The worst of every measure, with their places",
        &[
            ("measure", false),
            ("figure", true),
            ("x", true),
            ("y", true),
            ("z", true),
            ("panel", false),
            ("patch", false),
            ("triangle", true),
        ],
    );
    for line in &report.measures {
        for worst in &line.worst {
            let at: String = worst.at.map(|x| number(x, &figure(x))).concat();
            #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
            let triangle = worst.triangle as f64;
            let _ = writeln!(
                out,
                "<tr><td>{}</td>{}{at}<td>{}</td><td>{}</td>{}</tr>",
                escape(line.title()),
                number(worst.value, &figure(worst.value)),
                escape(&worst.panel),
                escape(&worst.patch),
                number(triangle, &worst.triangle.to_string()),
            );
        }
    }
    out + CLOSE
}
