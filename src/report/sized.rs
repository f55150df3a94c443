//! What was asked of a sized mesh, and what came of it.

use std::fmt::Write;

use serde::Serialize;

use super::summary_text::figure;
use super::wording::many;
use crate::sizing::{SizedMesh, Sizing};

/// Bad triangles told one by one in text; JSON has all.
const SHOWN: usize = 10;

/// Sizes asked for and reached; lengths in the set's unit.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SizedReport {
    /// Edge length asked for.
    pub size: f64,
    /// Smallest edge asked for, if any.
    pub min_edge: Option<f64>,
    /// Growth ratio asked for.
    pub growth: f64,
    /// Normal angle that sizes were made for, degrees, if any.
    pub normal_deg: Option<f64>,
    /// How often it was meshed until the chord was proved.
    pub rounds: usize,
    /// Triangles with no angle below 30 degrees, as a share of all.
    pub share_above_30: f64,
    /// Smallest angle of all, degrees.
    pub smallest_deg: f64,
    /// Smallest angles that 1, 10 and 50 of 100 triangles are below, degrees.
    pub quantiles_deg: [f64; 3],
    /// Mean aspect ratio.
    pub mean_aspect: f64,
    /// Mean edge length.
    pub mean_edge: f64,
    /// Mean of edge over the size asked for at the edge.
    pub mean_to_size: f64,
    /// The largest ratio of sizes asked for at the ends of an edge.
    pub largest_growth: f64,
    /// The shortest edge, and its middle.
    pub shortest_edge: f64,
    /// See `shortest_edge`.
    pub shortest_at: [f64; 3],
    /// Edges below the smallest edge asked for.
    pub edges_below: usize,
    /// Where those are: the shortest first.
    pub edges_below_at: Vec<[f64; 3]>,
    /// Triangles with an angle below 20 degrees, and what forces it.
    pub forced: Vec<ForcedLine>,
    /// Corners of patches that could not be taken out of kept edges.
    pub corners_left: usize,
    /// The size asked for at every point of the mesh.
    #[serde(skip)]
    pub sizes: Vec<f64>,
}

/// A triangle with a bad angle.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ForcedLine {
    /// Its number.
    pub triangle: usize,
    /// Its patch.
    pub patch: String,
    /// Its smallest angle, degrees.
    pub angle_deg: f64,
    /// `corner`, `narrow`, `short` or `unknown`.
    pub cause: &'static str,
    /// The same in words.
    pub text: String,
    /// Its middle.
    pub at: [f64; 3],
}

impl SizedReport {
    /// Gathers it.
    #[must_use]
    pub fn new(asked: &Sizing, made: &SizedMesh) -> Self {
        let figures = &made.figures;
        let forced = figures.forced.iter().map(|of| ForcedLine {
            triangle: of.triangle,
            patch: of.patch.clone(),
            angle_deg: of.angle_deg,
            cause: of.cause.name(),
            text: of.cause.to_string(),
            at: of.at,
        });
        Self {
            size: asked.size,
            min_edge: asked.min_edge,
            growth: asked.growth,
            normal_deg: asked.normal_rad.map(f64::to_degrees),
            rounds: made.rounds,
            share_above_30: figures.share_above_30,
            smallest_deg: figures.smallest_deg,
            quantiles_deg: figures.quantiles_deg,
            mean_aspect: figures.mean_aspect,
            mean_edge: figures.mean_edge,
            mean_to_size: figures.mean_to_size,
            largest_growth: figures.growth,
            shortest_edge: figures.shortest,
            shortest_at: figures.shortest_at,
            edges_below: figures.below_min_edge,
            edges_below_at: figures.below_at.clone(),
            forced: forced.collect(),
            corners_left: figures.left,
            sizes: made.sizes.clone(),
        }
    }

    /// The lines of the text.
    pub(super) fn write_text(&self, unit: &str, out: &mut String) -> std::fmt::Result {
        let least = self.min_edge.map_or_else(String::new, |e| {
            format!(", smallest edge {} {unit}", figure(e))
        });
        let angle = self.normal_deg.map_or_else(String::new, |deg| {
            format!(", normal angle {deg} deg (sizes only, not proved)")
        });
        writeln!(
            out,
            "sized       edges of {} {unit}{least}, growth {}{angle}; meshed {}",
            figure(self.size),
            self.growth,
            if self.rounds == 1 {
                "once".to_owned()
            } else {
                format!("{} times until the chord was proved", self.rounds)
            }
        )?;
        writeln!(
            out,
            "            edges {} {unit} in the mean, {:.3} x the size at their place, shortest {} {unit}; sizes at the ends of an edge differ by {:.3} x at most",
            figure(self.mean_edge),
            self.mean_to_size,
            figure(self.shortest_edge),
            self.largest_growth
        )?;
        writeln!(
            out,
            "            {:.2} % of the triangles without an angle below 30 deg, smallest {:.1} deg, mean aspect ratio {:.3}",
            100.0 * self.share_above_30,
            self.smallest_deg,
            self.mean_aspect
        )?;
        if self.edges_below > 0 {
            let [x, y, z] = self.edges_below_at.first().copied().unwrap_or_default();
            writeln!(
                out,
                "            {} below the smallest edge asked for, the shortest at ({}, {}, {})",
                many(self.edges_below, "edge"),
                figure(x),
                figure(y),
                figure(z)
            )?;
        }
        if self.corners_left > 0 {
            writeln!(
                out,
                "            {} left on kept edges",
                many(self.corners_left, "corner of patches")
            )?;
        }
        if !self.forced.is_empty() {
            let verb = if self.forced.len() == 1 {
                "has"
            } else {
                "have"
            };
            writeln!(
                out,
                "            {} {verb} an angle below 20 deg:",
                many(self.forced.len(), "triangle")
            )?;
        }
        for line in self.forced.iter().take(SHOWN) {
            let [x, y, z] = line.at.map(figure);
            writeln!(
                out,
                "              {:.1} deg in {} at ({x}, {y}, {z}): {}",
                line.angle_deg, line.patch, line.text
            )?;
        }
        if self.forced.len() > SHOWN {
            writeln!(out, "              and {} more", self.forced.len() - SHOWN)?;
        }
        Ok(())
    }
}
