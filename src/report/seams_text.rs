//! The seam report as text.

use std::fmt::Write;

use super::seam_line::{EdgeName, FailingLine, FigureLine, SeamLine};
use super::seams::{LoopLine, SeamReport};
use super::wording::{many, written};
use crate::patch_set::Demand;

/// Edges of a loop named in full; the rest is counted.
const LOOP_EDGES: usize = 6;

impl SeamReport {
    /// The report as text: a summary, the seams worst first, what is open, and
    /// the caution.
    #[must_use]
    pub fn text(&self) -> String {
        written(|out| self.write_text(out))
    }

    fn write_text(&self, out: &mut String) -> std::fmt::Result {
        let (unit, sum) = (self.unit, &self.summary);
        let name = if self.name.is_empty() {
            String::new()
        } else {
            format!("{}: ", self.name)
        };
        writeln!(
            out,
            "{name}{}, {}{}{}{}{}",
            many(sum.seams, "seam"),
            many(sum.faults, "fault"),
            some(sum.undecided, ", ", " undecided"),
            some(sum.non_manifold, ", ", " of three edges or more"),
            several(sum.near_misses, "near miss"),
            several(sum.overlaps, "overlap"),
        )?;
        let t = &self.tolerances;
        write!(
            out,
            "tolerances: gap {} {unit}, search {} {unit}, tangent {} deg, crease {} deg",
            t.gap, t.search, t.tangent_deg, t.crease_deg
        )?;
        match t.curvature_per_mm {
            Some(limit) => writeln!(out, ", curvature {limit} 1/mm")?,
            None => writeln!(out, "; no verdict on curvature")?,
        }
        writeln!(
            out,
            "figures: attained value, then the proved upper bound in brackets; a demand in brackets follows from the angle; pictures mark seams by number"
        )?;
        if !self.seams.is_empty() {
            writeln!(out)?;
            self.write_table(out)?;
        }
        self.write_pairs(out)?;
        for crowd in &self.non_manifold {
            let edges: Vec<String> = crowd.edges.iter().map(edge).collect();
            writeln!(
                out,
                "\nnon-manifold, {} edges over {} {unit}: {}",
                edges.len(),
                length(crowd.length),
                edges.join(" | ")
            )?;
        }
        self.write_near(out)?;
        writeln!(
            out,
            "\nopen loops: {}",
            if self.open_loops.is_empty() {
                "none".to_owned()
            } else {
                format!(
                    "{}, {} {unit} in all",
                    sum.open_loops,
                    length(sum.open_length)
                )
            }
        )?;
        for (k, chain) in self.open_loops.iter().enumerate() {
            writeln!(
                out,
                "  {}  {:>10} {unit}  {}",
                k + 1,
                length(chain.length),
                trail(chain)
            )?;
        }
        self.write_orientation(out)?;
        writeln!(out, "\n{}", self.caution)
    }

    fn cells(&self, seam: &SeamLine) -> [String; 10] {
        let demand = seam.demand.to_string();
        [
            seam.number.to_string(),
            seam.verdict.clone(),
            seam.finding.clone(),
            // What the file does not state stands in brackets.
            if seam.demand_source != "inferred" {
                demand
            } else {
                format!("({demand})")
            },
            bracket(&seam.gap),
            seam.angle_deg.as_ref().map_or_else(dash, bracket),
            seam.curvature_per_mm.as_ref().map_or_else(dash, bracket),
            if seam.finding == "apart" {
                dash()
            } else {
                length(seam.length)
            },
            held(seam, self.unit),
            format!("{} | {}", edge(&seam.between), edge(&seam.and)),
        ]
    }

    /// Pairs of panels with findings, worst first.
    fn write_pairs(&self, out: &mut String) -> std::fmt::Result {
        let bad = self.panel_pairs.iter();
        let bad: Vec<_> = bad.filter(|p| p.faults + p.undecided > 0).collect();
        if bad.is_empty() {
            return Ok(());
        }
        writeln!(out, "\nby panels, worst first:")?;
        for pair in bad {
            let name = if pair.between == pair.and {
                format!("within {}", pair.and)
            } else {
                format!("{} | {}", pair.between, pair.and)
            };
            writeln!(
                out,
                "  {name}: {} of {}{}, up to {:.1} x the tolerance, {} of {} {} fail",
                many(pair.faults, "fault"),
                many(pair.seams, "seam"),
                some(pair.undecided, ", ", " undecided"),
                pair.severity,
                length(pair.failing_length),
                length(pair.length),
                self.unit
            )?;
        }
        Ok(())
    }

    fn write_table(&self, out: &mut String) -> std::fmt::Result {
        let head = [
            "no".to_owned(),
            "verdict".to_owned(),
            "finding".to_owned(),
            "demand".to_owned(),
            format!("gap {}", self.unit),
            "angle deg".to_owned(),
            "curvature 1/mm".to_owned(),
            format!("length {}", self.unit),
            "held against".to_owned(),
            "seam".to_owned(),
        ];
        let rows: Vec<[String; 10]> = self.seams.iter().map(|s| self.cells(s)).collect();
        let mut widths = head.each_ref().map(|h| h.chars().count());
        for row in &rows {
            for (width, cell) in widths.iter_mut().zip(row) {
                *width = (*width).max(cell.chars().count());
            }
        }
        let line = |out: &mut String, cells: &[String; 10]| -> std::fmt::Result {
            let mut text = String::new();
            for (k, (cell, width)) in cells.iter().zip(widths).enumerate() {
                // Figures end in one column, words begin in one.
                let width = if k == 9 { 0 } else { width };
                if k == 0 || (4..8).contains(&k) {
                    write!(text, "{cell:>width$}  ")?;
                } else {
                    write!(text, "{cell:<width$}  ")?;
                }
            }
            writeln!(out, "{}", text.trim_end())
        };
        line(out, &head)?;
        let indent = " ".repeat(widths[0] + 2);
        for (seam, row) in self.seams.iter().zip(&rows) {
            line(out, row)?;
            if seam.verdict != "met" {
                let place = seam.deciding();
                let [x, y, z] = place.at.point.map(length);
                writeln!(
                    out,
                    "{indent}at ({x}, {y}, {z}): {} {}, {} {}",
                    seam.between.0,
                    parameters(place.at.between),
                    seam.and.0,
                    parameters(place.at.and)
                )?;
                for stretch in &seam.failing {
                    writeln!(out, "{indent}{}", failing(stretch, self.unit))?;
                }
            }
        }
        Ok(())
    }
}

/// What the figures are held against, and where that comes from.
fn held(seam: &SeamLine, unit: &str) -> String {
    let (gap, angle) = (&seam.gap_limit, &seam.angle_limit);
    let mut text = match seam.demand {
        Demand::Open => return dash(),
        Demand::G0 | Demand::Crease => format!("{} {unit} ({})", gap.value, gap.source),
        Demand::G1 | Demand::G2 if gap.source == angle.source => {
            format!("{} {unit}, {} deg ({})", gap.value, angle.value, gap.source)
        }
        Demand::G1 | Demand::G2 => format!(
            "{} {unit} ({}), {} deg ({})",
            gap.value, gap.source, angle.value, angle.source
        ),
    };
    if let (Demand::G2, Some(limit)) = (seam.demand, &seam.curvature_limit) {
        text += &format!(", {} 1/mm ({})", limit.value, limit.source);
    }
    text
}

fn failing(stretch: &FailingLine, unit: &str) -> String {
    let place = |point: [f64; 3]| {
        let [x, y, z] = point.map(length);
        format!("({x}, {y}, {z})")
    };
    format!(
        "fails from {} to {}, {} {unit}",
        place(stretch.from.point),
        place(stretch.to.point),
        length(stretch.length)
    )
}

fn dash() -> String {
    "-".to_owned()
}

fn bracket(line: &FigureLine) -> String {
    match line.proved {
        Some(proved) => format!("{} ({})", figure(line.attained), upward(proved)),
        None => figure(line.attained),
    }
}

/// Three figures, the last one rounded.
pub(super) fn figure(value: f64) -> String {
    if value.abs() < 5e-13 {
        "0".to_owned()
    } else if value.abs() < 1e-3 {
        format!("{value:.2e}")
    } else {
        let digits = if value.abs() < 1.0 {
            4
        } else if value.abs() < 100.0 {
            3
        } else {
            1
        };
        format!("{value:.digits$}")
    }
}

/// As [`figure`], but never below the value: a bound stays a bound in print.
pub(super) fn upward(value: f64) -> String {
    if value <= 0.0 {
        return "0".to_owned();
    }
    super::upward(value, |shown| {
        if shown < 1e-3 {
            format!("{shown:.2e}")
        } else {
            figure(shown)
        }
    })
}

pub(super) fn length(value: f64) -> String {
    let text = format!("{value:.3}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0" } else { text }.to_owned()
}

fn parameters([u, v]: [f64; 2]) -> String {
    let short = |t: f64| {
        let text = format!("{t:.4}");
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    };
    format!("({}, {})", short(u), short(v))
}

pub(super) fn edge((patch, side): &EdgeName) -> String {
    format!("{patch} {side}")
}

fn trail(chain: &LoopLine) -> String {
    let mut names: Vec<String> = chain.edges.iter().take(LOOP_EDGES).map(edge).collect();
    let more = chain.edges.len().saturating_sub(LOOP_EDGES);
    if more > 0 {
        names.push(format!("and {more} more"));
    }
    names.join(", ")
}

fn several(count: usize, one: &str) -> String {
    if count == 0 {
        String::new()
    } else {
        format!(", {}", many(count, one))
    }
}

fn some(count: usize, before: &str, after: &str) -> String {
    if count == 0 {
        String::new()
    } else {
        format!("{before}{count}{after}")
    }
}

#[cfg(test)]
mod tests {
    use super::upward;

    #[test]
    fn a_printed_bound_is_never_below_the_bound() {
        for value in [
            1e-13, 3.14159e-7, 9.96e-4, 0.01234, 0.06001, 3.0, 99.9996, 123.456,
        ] {
            let printed: f64 = upward(value).parse().unwrap();
            assert!(
                printed >= value && printed < value * 1.06,
                "{value} {printed}"
            );
        }
    }
}
