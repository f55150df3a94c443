//! Shape and size of a sized mesh, and where geometry forced a bad angle.

use std::fmt;

use super::Sizing;
use super::assemble::Assembled;
use super::job::Made;
use super::mend::sharpest;
use super::parts::Part;
use super::region::{NONE, previous};
use crate::scalar::{Point, angle_rad};

/// Angles below this are listed one by one, degrees.
pub const LISTED_DEG: f64 = 20.0;

/// Edges below the smallest edge are told with their place, so many.
const MOST_BELOW: usize = 100;

/// A corner of kept edges sharper than this forces a triangle as sharp, degrees.
const SHARP_DEG: f64 = 40.0;

/// Figures of a whole mesh; lengths in the set's unit.
#[derive(Debug, Clone, PartialEq)]
pub struct Figures {
    /// Smallest angle of all triangles, degrees.
    pub smallest_deg: f64,
    /// The smallest angles of triangles at 1, 10 and 50 of 100, degrees.
    pub quantiles_deg: [f64; 3],
    /// Share of triangles with no angle below 30 degrees.
    pub share_above_30: f64,
    /// Triangles with an angle below [`LISTED_DEG`].
    pub below_20: usize,
    /// Mean aspect ratio, longest edge times perimeter over 4 sqrt 3 area.
    pub mean_aspect: f64,
    /// Mean edge length.
    pub mean_edge: f64,
    /// Mean of edge length over the size asked for at the edge.
    pub mean_to_size: f64,
    /// Shortest edge.
    pub shortest: f64,
    /// Its middle.
    pub shortest_at: [f64; 3],
    /// Edges below the smallest edge asked for.
    pub below_min_edge: usize,
    /// Where the shortest of those are, the shortest first.
    pub below_at: Vec<[f64; 3]>,
    /// The largest ratio of the sizes asked for at the two ends of an edge.
    pub growth: f64,
    /// Triangles with an angle below [`LISTED_DEG`], each with its cause.
    pub forced: Vec<Forced>,
    /// Corners of patches on kept curves that could not be taken out.
    pub left: usize,
}

/// A triangle with a bad angle.
#[derive(Debug, Clone, PartialEq)]
pub struct Forced {
    /// Its number in the mesh.
    pub triangle: usize,
    /// The patch it is counted to.
    pub patch: String,
    /// Its smallest angle, degrees.
    pub angle_deg: f64,
    /// Why.
    pub cause: Cause,
    /// Its middle.
    pub at: [f64; 3],
}

/// What forces a bad angle.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Cause {
    /// Kept edges meet at a sharp corner, of so many degrees.
    Corner(f64),
    /// Kept edges lie close together, this far apart.
    Narrow(f64),
    /// A kept edge is short: two corners of kept curves this far apart.
    Short(f64),
    /// None of these.
    Unknown,
}

impl Cause {
    /// A short name for programs.
    #[must_use]
    pub fn name(&self) -> &'static str {
        match self {
            Self::Corner(_) => "corner",
            Self::Narrow(_) => "narrow",
            Self::Short(_) => "short",
            Self::Unknown => "unknown",
        }
    }
}

impl fmt::Display for Cause {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Corner(deg) => write!(f, "kept edges meet at {deg:.1} deg"),
            Self::Narrow(apart) => write!(f, "kept edges lie {apart:.4} apart"),
            Self::Short(length) => write!(f, "a kept edge is {length:.4} long"),
            Self::Unknown => f.write_str("no kept edge forces it"),
        }
    }
}

fn index_of(k: usize) -> u32 {
    u32::try_from(k).expect("there are three corners")
}

#[allow(clippy::cast_precision_loss, reason = "counts stay far below 2^52")]
fn float(count: usize) -> f64 {
    count as f64
}

impl Figures {
    pub(super) fn of(made: &Made, of: &Assembled, sizing: &Sizing) -> Self {
        let mesh = &of.mesh;
        let mut angles = Vec::with_capacity(mesh.triangles.len());
        let mut figures = Self {
            smallest_deg: 180.0,
            quantiles_deg: [0.0; 3],
            share_above_30: 0.0,
            below_20: 0,
            mean_aspect: 0.0,
            mean_edge: 0.0,
            mean_to_size: 0.0,
            shortest: f64::INFINITY,
            shortest_at: [0.0; 3],
            below_min_edge: 0,
            below_at: Vec::new(),
            growth: 1.0,
            forced: Vec::new(),
            left: made.left.len(),
        };
        let mut edges = 0;
        let mut below: Vec<(f64, [f64; 3])> = Vec::new();
        let mut part_of = Vec::with_capacity(mesh.triangles.len());
        for (index, part) in mesh.parts.iter().enumerate() {
            part_of.extend(part.triangles.clone().map(|_| index));
        }
        for (t, &(part, number)) in of.from.iter().enumerate() {
            let part = &made.parts[part as usize];
            let corners = part.region.triangles[number as usize];
            let [p, q, r] = mesh.triangle_corners(t);
            let deg = sharpest(&p, &q, &r).clamp(-1.0, 1.0).acos().to_degrees();
            angles.push(deg);
            let lengths = [(q - p).norm(), (r - q).norm(), (p - r).norm()];
            let area = 0.5 * (q - p).cross(&(r - p)).norm();
            let longest = lengths.iter().copied().fold(0.0, f64::max);
            let perimeter: f64 = lengths.iter().sum();
            figures.mean_aspect += longest * perimeter / (4.0 * 3.0_f64.sqrt() * area);
            let size = corners.map(|v| part.region.vertices[v as usize].size);
            for k in 0..3 {
                // Inner edges are met twice, each time as half of one.
                let (a, b) = (size[k], size[(k + 1) % 3]);
                edges += 1;
                figures.mean_edge += lengths[k];
                figures.mean_to_size += lengths[k] / (0.5 * (a + b));
                figures.growth = figures.growth.max(a / b).max(b / a);
                let ends = [[p, q], [q, r], [r, p]][k];
                let middle = (ends[0].coords + ends[1].coords) / 2.0;
                let at = [middle.x, middle.y, middle.z];
                if lengths[k] < figures.shortest {
                    figures.shortest = lengths[k];
                    figures.shortest_at = at;
                }
                // An inner edge is met twice, once from its lesser end.
                let [from, to] = [corners[k], corners[(k + 1) % 3]];
                let once = part.region.twin(3 * number + index_of(k)) == NONE || from < to;
                if once && sizing.min_edge.is_some_and(|least| lengths[k] < least) {
                    below.push((lengths[k], at));
                }
            }
            if deg < LISTED_DEG {
                let middle = (p.coords + q.coords + r.coords) / 3.0;
                figures.forced.push(Forced {
                    triangle: t,
                    patch: mesh.parts[part_of[t]].name.clone(),
                    angle_deg: deg,
                    cause: cause(part, corners),
                    at: [middle.x, middle.y, middle.z],
                });
            }
        }
        let count = float(angles.len());
        figures.below_20 = figures.forced.len();
        below.sort_by(|a, b| a.0.total_cmp(&b.0));
        figures.below_min_edge = below.len();
        figures.below_at = below.iter().take(MOST_BELOW).map(|b| b.1).collect();
        figures.mean_aspect /= count;
        figures.mean_edge /= float(edges);
        figures.mean_to_size /= float(edges);
        figures.share_above_30 = float(angles.iter().filter(|a| **a >= 30.0).count()) / count;
        angles.sort_by(f64::total_cmp);
        let last = angles.len() - 1;
        figures.smallest_deg = angles[0];
        figures.quantiles_deg = [100, 10, 2].map(|part| angles[last / part]);
        figures
    }
}

/// Why a triangle has a bad angle.
fn cause(part: &Part, corners: [u32; 3]) -> Cause {
    let region = &part.region;
    let on: Vec<u32> = corners
        .into_iter()
        .filter(|&v| region.on_border(v))
        .collect();
    let mut sharp: Option<f64> = None;
    for &v in &on {
        let around: Vec<u32> = region.around(v).collect();
        let at = region.point(v);
        let turn: f64 = around
            .iter()
            .map(|&h| {
                let (p, q) = (region.point(region.end(h)), region.point(region.apex(h)));
                angle_rad(&(p - at), &(q - at))
            })
            .sum();
        let deg = turn.to_degrees();
        if deg < SHARP_DEG && sharp.is_none_or(|s| deg < s) {
            sharp = Some(deg);
        }
    }
    if let Some(deg) = sharp {
        return Cause::Corner(deg);
    }
    let length = |a: u32, b: u32| -> f64 {
        let (p, q): (Point, Point) = (region.point(a), region.point(b));
        (p - q).norm()
    };
    // The shortest edge is across from the smallest angle.
    let sides = [(0, 1), (1, 2), (2, 0)].map(|(i, j)| (corners[i], corners[j]));
    let mut shortest = sides[0];
    for side in sides {
        if length(side.0, side.1) < length(shortest.0, shortest.1) {
            shortest = side;
        }
    }
    let (a, b) = shortest;
    if region.on_border(a) && region.on_border(b) {
        let first = region.leaving[a as usize];
        let last = region.around(a).last().map_or(first, previous);
        return if region.end(first) == b || region.origin(last) == b {
            Cause::Short(length(a, b))
        } else {
            Cause::Narrow(length(a, b))
        };
    }
    if on.len() >= 2 {
        let apart = on
            .windows(2)
            .map(|w| length(w[0], w[1]))
            .fold(f64::INFINITY, f64::min);
        return Cause::Narrow(apart);
    }
    Cause::Unknown
}
