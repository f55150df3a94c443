//! The seams as comma-separated values, one line a seam (RFC 4180).

use std::fmt::Write;

use super::seam_line::{FigureLine, SeamLine};
use super::seams::SeamReport;

/// The columns; lengths and coordinates are in the set's unit.
const HEAD: &str = "number,between_patch,between_edge,and_patch,and_edge,verdict,finding,demand,\
demand_source,severity,length,failing_length,joined,bridged,normals_agree,gap_attained,gap_proved,\
gap_limit,gap_limit_source,angle_attained_deg,angle_proved_deg,angle_limit_deg,angle_limit_source,\
curvature_attained_per_mm,curvature_proved_per_mm,curvature_limit_per_mm,\
curvature_limit_source,between_curvature_per_mm,and_curvature_per_mm,curvature_ratio,x,y,z,between_u,between_v,and_u,and_v\r\n";

impl SeamReport {
    /// One line a seam, with a head; what is not known is left empty. The place
    /// is that of the figure that decides.
    #[must_use]
    pub fn csv(&self) -> String {
        let mut out = HEAD.to_owned();
        for seam in &self.seams {
            let line = cells(seam).join(",");
            // Writing to a string cannot fail.
            let _ = write!(out, "{line}\r\n");
        }
        out
    }
}

fn cells(seam: &SeamLine) -> Vec<String> {
    let number = |value: Option<f64>| value.map_or(String::new(), |v| v.to_string());
    let attained = |figure: Option<&FigureLine>| number(figure.map(|f| f.attained));
    let proved = |figure: Option<&FigureLine>| number(figure.and_then(|f| f.proved));
    let demand = serde_json::to_value(seam.demand).unwrap_or_default();
    let at = seam.deciding().at;
    let both = seam.curvatures_per_mm;
    let limit = seam.curvature_limit.as_ref();
    let mut cells: Vec<String> = vec![
        seam.number.to_string(),
        quoted(&seam.between.0),
        quoted(&seam.between.1),
        quoted(&seam.and.0),
        quoted(&seam.and.1),
        seam.verdict.clone(),
        seam.finding.clone(),
        demand.as_str().unwrap_or_default().to_owned(),
        seam.demand_source.to_owned(),
        seam.severity.to_string(),
        seam.length.to_string(),
        seam.failing
            .iter()
            .map(|f| f.length)
            .sum::<f64>()
            .to_string(),
        seam.joined.to_string(),
        seam.bridged.to_string(),
        seam.normals_agree.to_string(),
        attained(Some(&seam.gap)),
        proved(Some(&seam.gap)),
        seam.gap_limit.value.to_string(),
        quoted(&seam.gap_limit.source),
        attained(seam.angle_deg.as_ref()),
        proved(seam.angle_deg.as_ref()),
        seam.angle_limit.value.to_string(),
        quoted(&seam.angle_limit.source),
        attained(seam.curvature_per_mm.as_ref()),
        proved(seam.curvature_per_mm.as_ref()),
        number(limit.map(|l| l.value)),
        limit.map_or(String::new(), |l| quoted(&l.source)),
        number(both.map(|k| k[0])),
        number(both.map(|k| k[1])),
        number(seam.curvature_ratio),
    ];
    let place = at.point.into_iter().chain(at.between).chain(at.and);
    cells.extend(place.map(|x| x.to_string()));
    cells
}

/// A text as one cell.
fn quoted(text: &str) -> String {
    if text.contains([',', '"', '\n', '\r']) {
        format!("\"{}\"", text.replace('"', "\"\""))
    } else {
        text.to_owned()
    }
}
