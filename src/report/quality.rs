//! The shape and size of a mesh's triangles, for people and programs.

use std::fmt::Write;

use serde::Serialize;

use super::summary_text::figure;
use super::wording::many;
use crate::mesh::{Mesh, Part};
use crate::quality::{Distribution, Measure, Quality, Worst};

/// What the shortest edge means; no material is known here.
pub const TIME_STEP: &str = "the time step of an explicit run is proportional to it: \
     length over the speed of sound in the material, which is not known here";

/// Shape and size of a mesh's triangles. How far the mesh is from the surface is
/// told elsewhere.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct QualityReport {
    /// Whether all measures are told, with the worst twenty of each.
    pub whole: bool,
    /// Triangles without an area, which have no shape and are in no figure.
    pub flat: usize,
    /// The first of them.
    pub flat_at: Vec<WorstLine>,
    /// The shortest edge.
    pub shortest_edge: Option<WorstLine>,
    /// What the shortest edge means for a time step.
    pub time_step: &'static str,
    /// The largest growth asked for.
    pub asked_growth: Option<f64>,
    /// The measures.
    pub measures: Vec<MeasureLine>,
}

/// One measure.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct MeasureLine {
    /// Its name.
    pub measure: &'static str,
    /// Its definition.
    pub definition: &'static str,
    /// What it is counted over.
    pub of: &'static str,
    /// How many figures there are.
    pub count: usize,
    /// The range the Verdict report calls acceptable, where it has one.
    pub acceptable: Option<[f64; 2]>,
    /// How many figures are beyond its bad end.
    pub outside: usize,
    /// The least figure.
    pub minimum: f64,
    /// One in a hundred is at most this.
    pub one_percent: f64,
    /// The mean.
    pub mean: f64,
    /// 99 in a hundred are at most this.
    pub ninety_nine_percent: f64,
    /// The largest figure.
    pub maximum: f64,
    /// The histogram.
    pub histogram: HistogramLine,
    /// The worst figures, the worst first.
    pub worst: Vec<WorstLine>,
    #[serde(skip)]
    kind: Measure,
}

/// How many figures fall where.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct HistogramLine {
    /// Where each bar begins; it ends where the next begins, the last has no end.
    pub from: Vec<f64>,
    /// How many figures it holds.
    pub counts: Vec<usize>,
}

/// A figure with its place.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct WorstLine {
    /// The figure.
    pub value: f64,
    /// The triangle, or one at the edge or point; from 0 as in the file.
    pub triangle: usize,
    /// Its patch.
    pub patch: String,
    /// Its panel.
    pub panel: String,
    /// The triangle's centroid, the middle of the edge, or the point.
    pub at: [f64; 3],
}

impl QualityReport {
    /// Names the places of what was found in a mesh.
    #[must_use]
    pub fn new(mesh: &Mesh, found: &Quality) -> Self {
        let line = |worst: &Worst| {
            let holds = |part: &Part| part.triangles.contains(&worst.triangle);
            // Parts follow each other in the triangles' order.
            let after = mesh
                .parts
                .partition_point(|p| p.triangles.end <= worst.triangle);
            let part = mesh.parts.get(after).filter(|part| holds(part));
            WorstLine {
                value: worst.value,
                triangle: worst.triangle,
                patch: part.map_or_else(String::new, |part| part.name.clone()),
                panel: part.map_or_else(String::new, |part| mesh.panels[part.panel].clone()),
                at: [worst.at.x, worst.at.y, worst.at.z],
            }
        };
        let lines = |worst: &[Worst]| worst.iter().map(line).collect();
        let measure = |d: &Distribution| MeasureLine {
            measure: d.measure.name(),
            definition: d.measure.definition(),
            of: d.measure.of_what(),
            count: d.count,
            acceptable: d.measure.acceptable(),
            outside: d.outside,
            minimum: d.minimum,
            one_percent: d.one_percent,
            mean: d.mean,
            ninety_nine_percent: d.ninety_nine_percent,
            maximum: d.maximum,
            histogram: HistogramLine {
                from: d.bars.clone(),
                counts: d.counts.clone(),
            },
            worst: lines(&d.worst),
            kind: d.measure,
        };
        Self {
            whole: found.whole,
            flat: found.flat,
            flat_at: lines(&found.flat_at),
            shortest_edge: found.shortest.as_ref().map(line),
            time_step: TIME_STEP,
            asked_growth: found.asked_growth,
            measures: found.distributions.iter().map(measure).collect(),
        }
    }

    fn get(&self, measure: Measure) -> Option<&MeasureLine> {
        self.measures.iter().find(|line| line.kind == measure)
    }

    /// The account of two or three lines; lengths in `unit`.
    pub(super) fn write_short(&self, out: &mut String, unit: &str) -> std::fmt::Result {
        let (angle, aspect) = (
            self.get(Measure::MinimumAngle),
            self.get(Measure::AspectRatio),
        );
        if let (Some(angle), Some(aspect)) = (angle, aspect) {
            writeln!(
                out,
                "shape       smallest angle {} deg, at most {} in 1 % of the triangles, mean {}; aspect ratio mean {}, above {} in 1 %",
                figure(angle.minimum),
                figure(angle.one_percent),
                figure(angle.mean),
                figure(aspect.mean),
                figure(aspect.ninety_nine_percent)
            )?;
        }
        if self.flat > 0 {
            writeln!(
                out,
                "            {} without an area, in no figure of shape",
                many(self.flat, "triangle")
            )?;
        }
        if let Some(edge) = &self.shortest_edge {
            writeln!(
                out,
                "            shortest edge {} {unit} at {}; {}",
                figure(edge.value),
                edge.place(),
                self.time_step
            )?;
        }
        Ok(())
    }

    /// The table of all measures, where they are told.
    pub(super) fn write_table(&self, out: &mut String) -> std::fmt::Result {
        if !self.whole {
            return Ok(());
        }
        writeln!(
            out,
            "{:12}{:17}{:>10}{:>10}{:>10}{:>10}{:>10}  acceptable, outside",
            "quality", "", "minimum", "1 %", "mean", "99 %", "maximum"
        )?;
        for line in &self.measures {
            let range = match line.acceptable {
                Some([low, high]) => format!(
                    "{low} to {}, {} of {}",
                    figure(high).trim_end_matches('0').trim_end_matches('.'),
                    line.outside,
                    line.count
                ),
                None => match (line.kind, self.asked_growth) {
                    (Measure::Grading, Some(asked)) => format!("at most {asked} asked for"),
                    _ => "no range".to_owned(),
                },
            };
            writeln!(
                out,
                "{:12}{:17}{:>10}{:>10}{:>10}{:>10}{:>10}  {range}",
                "",
                line.kind.title(),
                figure(line.minimum),
                figure(line.one_percent),
                figure(line.mean),
                figure(line.ninety_nine_percent),
                figure(line.maximum)
            )?;
        }
        Ok(())
    }

    /// Histograms and the worst figures with their places.
    pub(super) fn write_places(&self, out: &mut String) -> std::fmt::Result {
        for line in &self.measures {
            writeln!(out, "\n{}: {}", line.kind.title(), line.definition)?;
            write!(out, "  from")?;
            for (from, count) in line.histogram.from.iter().zip(&line.histogram.counts) {
                write!(out, "  {}: {count}", short(*from))?;
            }
            writeln!(out)?;
            for worst in &line.worst {
                let value = figure(worst.value);
                writeln!(
                    out,
                    "  {value:>10}  {}, triangle {}",
                    worst.place(),
                    worst.triangle
                )?;
            }
        }
        if self.flat > 0 {
            writeln!(out, "\nwithout an area: {}", many(self.flat, "triangle"))?;
        }
        for flat in &self.flat_at {
            writeln!(out, "  {}, triangle {}", flat.place(), flat.triangle)?;
        }
        Ok(())
    }
}

impl MeasureLine {
    /// The name in running text.
    #[must_use]
    pub fn title(&self) -> &'static str {
        self.kind.title()
    }
}

impl WorstLine {
    fn place(&self) -> String {
        let [x, y, z] = self.at.map(short);
        format!("({x}, {y}, {z}), {}", self.patch)
    }
}

/// A coordinate or the beginning of a bar, without decimals that say nothing.
fn short(value: f64) -> String {
    let text = format!("{value:.3}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" {
        "0".to_owned()
    } else {
        text.to_owned()
    }
}
