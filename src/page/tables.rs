//! The tables of a page.

use std::fmt::Write;

use super::gallery::Gallery;
use super::markup::{escape, figure};
use crate::mesh::{Mesh, Storage};
use crate::patch_set::{Demand, PatchSet};
use crate::report::many;
use crate::report::{FigureLine, SeamLine, SeamReport, upward};

/// Opens a table whose columns can be sorted; `numbers` says which hold figures.
pub(super) fn open(id: &str, caption: &str, columns: &[(&str, bool)]) -> String {
    let mut out = format!(
        "<section class=\"wide\" tabindex=\"0\" aria-label=\"{0}\">\n\
         <table id=\"{id}\" class=\"sortable\">\n<caption>{0}</caption>\n<thead>\n<tr>\n",
        escape(caption)
    );
    for (name, number) in columns {
        let class = if *number { " class=\"number\"" } else { "" };
        // Writing to a string cannot fail.
        let _ = writeln!(
            out,
            "<th scope=\"col\"{class}><button type=\"button\" class=\"sort\">{}</button></th>",
            escape(name)
        );
    }
    out + "</tr>\n</thead>\n<tbody>\n"
}

/// Closes what [`open`] has opened.
pub(super) const CLOSE: &str = "</tbody>\n</table>\n</section>\n";

/// A cell with a figure and the value it is sorted by.
pub(super) fn number(value: f64, text: &str) -> String {
    format!("<td class=\"number\" data-value=\"{value:e}\">{text}</td>")
}

/// Attained, with the proved bound in brackets.
fn bracket(line: Option<&FigureLine>) -> String {
    let Some(line) = line else {
        return "<td class=\"number\" data-value=\"-1\">none</td>".to_owned();
    };
    let text = match line.proved {
        Some(proved) => format!("{} ({})", figure(line.attained), upward(proved, figure)),
        None => figure(line.attained),
    };
    number(line.attained, &text)
}

/// The seams, worst first.
pub(super) fn seams(report: &SeamReport, gallery: &Gallery) -> String {
    let unit = report.unit;
    let gap = format!("gap, {unit}");
    let length = format!("length, {unit}");
    let mut out = open(
        "seams-table",
        "Seams, worst first: attained figures, proved upper bounds in brackets",
        &[
            ("No.", true),
            ("verdict", false),
            ("finding", false),
            ("demand", false),
            (&gap, true),
            ("angle, deg", true),
            ("curvature step, 1/mm", true),
            (&length, true),
            ("between", false),
            ("and", false),
        ],
    );
    for (index, seam) in report.seams.iter().enumerate() {
        let n = index + 1;
        let name = format!(
            "{} {} and {} {}",
            seam.between.0, seam.between.1, seam.and.0, seam.and.1
        );
        let link = if gallery.has_close_up(n) {
            format!("<a class=\"close-up\" href=\"#close-up-{n}\">picture</a>")
        } else {
            String::new()
        };
        let _ = writeln!(
            out,
            "<tr class=\"{0}\"><td class=\"number\" data-value=\"{n}\">\
             <button type=\"button\" class=\"show\" data-seam=\"{n}\" aria-label=\"show seam {n}, {1}\">{n}</button>{link}</td>\
             <td>{0}</td><td>{2}</td><td>{3}</td>{4}{5}{6}{7}<td>{8} {9}</td><td>{10} {11}</td></tr>",
            escape(&seam.verdict),
            escape(&name),
            escape(&seam.finding),
            demand(seam),
            bracket(Some(&seam.gap)),
            bracket(seam.angle_deg.as_ref()),
            bracket(seam.curvature_per_mm.as_ref()),
            number(seam.length, &figure(seam.length)),
            escape(&seam.between.0),
            escape(&seam.between.1),
            escape(&seam.and.0),
            escape(&seam.and.1),
        );
    }
    out + CLOSE
}

fn demand(seam: &SeamLine) -> String {
    let name = match seam.demand {
        Demand::G0 => "G0",
        Demand::G1 => "G1",
        Demand::G2 => "G2",
        Demand::Crease => "crease",
        Demand::Open => "open",
    };
    if seam.demand_source == "stated" {
        name.to_owned()
    } else {
        format!("{name}, inferred")
    }
}

/// The panels: what they hold and how far they deviate.
pub(super) fn panels(set: &PatchSet, mesh: &Mesh, deviations: &[f64]) -> String {
    let unit = set.unit().symbol();
    let area = format!("area, {unit}^2");
    let deviation = format!("largest proved deviation, {unit}");
    let mut out = open(
        "panels-table",
        "What each panel holds, and how far its mesh deviates",
        &[
            ("panel", false),
            ("patches", true),
            ("triangles", true),
            (&area, true),
            (&deviation, true),
        ],
    );
    for (index, name) in mesh.panels.iter().enumerate() {
        let parts: Vec<_> = mesh.parts.iter().filter(|p| p.panel == index).collect();
        if parts.is_empty() {
            continue;
        }
        let (mut area, mut proved, mut triangles) = (0.0, 0.0_f64, 0);
        for t in parts.iter().flat_map(|p| p.triangles.clone()) {
            let [a, b, c] = mesh.triangle_corners(t);
            area += (b - a).cross(&(c - a)).norm() / 2.0;
            proved = proved.max(deviations.get(t).copied().unwrap_or(0.0));
            triangles += 1;
        }
        let count = |n: usize| {
            #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
            let value = n as f64;
            number(value, &n.to_string())
        };
        let _ = writeln!(
            out,
            "<tr><td>{}</td>{}{}{}{}</tr>",
            escape(name),
            count(parts.len()),
            count(triangles),
            number(area, &figure(area)),
            number(proved, &upward(proved, figure)),
        );
    }
    out + CLOSE
}

/// What the ways of storing take.
pub(super) fn storage(mesh: &Mesh, storage: &Storage, strips: usize) -> String {
    let columns = [
        ("way of storing", false),
        ("bytes", true),
        ("bytes a triangle", true),
    ];
    let mut out = open(
        "storage-table",
        &format!(
            "Bare geometry with 4-byte numbers; {}, {}",
            many(mesh.triangles.len(), "triangle"),
            many(strips, "strip")
        ),
        &columns,
    );
    for (name, bytes) in [
        ("separate triangles", storage.triangles),
        ("indexed", storage.indexed),
        ("strips of points", storage.strips),
        ("indexed strips", storage.indexed_strips),
    ] {
        #[allow(clippy::cast_precision_loss, reason = "sizes stay below 2^52")]
        let (size, each) = (
            bytes as f64,
            bytes as f64 / mesh.triangles.len().max(1) as f64,
        );
        let _ = writeln!(
            out,
            "<tr><td>{name}</td>{}{}</tr>",
            number(size, &bytes.to_string()),
            number(each, &format!("{each:.2}")),
        );
    }
    out + CLOSE
}
