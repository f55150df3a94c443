//! All measures of a mesh.

use rayon::prelude::*;

use super::{Distribution, Measure, Triangle, WORST, Worst};
use crate::mesh::{EdgeTable, Mesh};
use crate::scalar::Point;

/// The edge length that was asked for.
#[derive(Debug, Clone, Copy)]
pub enum Target<'a> {
    /// The same everywhere.
    Everywhere(f64),
    /// For every point of the mesh; that of an edge is the mean of its ends'.
    Points(&'a [f64]),
}

/// What was asked for of a mesh sized on purpose.
#[derive(Debug, Clone, Copy, Default)]
pub struct Asked<'a> {
    /// The edge length.
    pub size: Option<Target<'a>>,
    /// The largest ratio of sizes at the two ends of an edge.
    pub growth: Option<f64>,
}

/// Shape and size of the triangles of a mesh.
#[derive(Debug, Clone, PartialEq)]
pub struct Quality {
    /// Triangles without an area, to rounding: they have no shape and are in no
    /// figure here.
    pub flat: usize,
    /// The first of them.
    pub flat_at: Vec<Worst>,
    /// The shortest edge. An explicit solver's time step goes with it; `None`
    /// where the mesh has no edge.
    pub shortest: Option<Worst>,
    /// One a measure that has figures.
    pub distributions: Vec<Distribution>,
    /// The largest growth that was asked for.
    pub asked_growth: Option<f64>,
    /// Whether this is all measures, and not the shortest account.
    pub whole: bool,
}

impl Quality {
    /// All measures of a mesh. Time is linear in its triangles but for the
    /// logarithm of a point's valence.
    #[must_use]
    pub fn of(mesh: &Mesh, asked: &Asked<'_>) -> Self {
        let mut found = Self::bare(mesh, &Measure::OF_TRIANGLES, WORST);
        let edges = Edges::of(mesh);
        found.distributions.extend(edges.distributions(asked));
        found.asked_growth = asked.growth;
        found.whole = true;
        found
    }

    /// The shortest account: smallest angle, aspect ratio and the shortest edge.
    #[must_use]
    pub fn brief(mesh: &Mesh) -> Self {
        Self::bare(mesh, &[Measure::MinimumAngle, Measure::AspectRatio], 1)
    }

    /// The figures of a measure, where there are any.
    #[must_use]
    pub fn get(&self, measure: Measure) -> Option<&Distribution> {
        self.distributions.iter().find(|d| d.measure == measure)
    }

    fn bare(mesh: &Mesh, measures: &[Measure], listed: usize) -> Self {
        let count = mesh.triangles.len();
        let place = |t: usize| (t, centroid(mesh, t));
        let distribution = |measure: &Measure| {
            // One measure at a time: memory for one figure a triangle.
            let figure = |t: usize| {
                let triangle = Triangle::new(mesh.triangle_corners(t));
                triangle.and_then(|t| measure.of(&t)).unwrap_or(f64::NAN)
            };
            let values: Vec<f64> = (0..count).into_par_iter().map(figure).collect();
            Distribution::of(*measure, values.into_iter(), listed, place)
        };
        let is_flat = |t: &usize| Triangle::new(mesh.triangle_corners(*t)).is_none();
        let flat: Vec<usize> = (0..count).into_par_iter().filter(is_flat).collect();
        Self {
            flat: flat.len(),
            flat_at: flat
                .iter()
                .take(listed)
                .map(|&t| Worst {
                    value: 0.0,
                    triangle: t,
                    at: centroid(mesh, t),
                })
                .collect(),
            shortest: shortest(mesh),
            distributions: measures.iter().filter_map(distribution).collect(),
            asked_growth: None,
            whole: false,
        }
    }
}

fn centroid(mesh: &Mesh, triangle: usize) -> Point {
    let [a, b, c] = mesh.triangle_corners(triangle).map(|p| p.coords / 3.0);
    Point::from(a + b + c)
}

fn halfway(a: &Point, b: &Point) -> Point {
    Point::from(0.5 * a.coords + 0.5 * b.coords)
}

/// The shortest edge between different points; of equal ones the first.
fn shortest(mesh: &Mesh) -> Option<Worst> {
    let found = (0..mesh.triangles.len())
        .into_par_iter()
        .filter_map(|t| {
            let numbers = mesh.triangle_points(t);
            let corners = mesh.triangle_corners(t);
            (0..3)
                .filter(|&k| numbers[k] != numbers[(k + 1) % 3])
                .map(|k| {
                    let (a, b) = (corners[k], corners[(k + 1) % 3]);
                    ((b - a).norm(), t, k)
                })
                .min_by(|a, b| a.0.total_cmp(&b.0))
        })
        .min_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
    found.map(|(value, triangle, k)| {
        let corners = mesh.triangle_corners(triangle);
        Worst {
            value,
            triangle,
            at: halfway(&corners[k], &corners[(k + 1) % 3]),
        }
    })
}

/// The edges of a mesh, each once.
struct Edges<'a> {
    mesh: &'a Mesh,
    /// Ends, a triangle at the edge, and its growth; not finite at a border.
    edges: Vec<([u32; 2], u32, f64)>,
}

impl<'a> Edges<'a> {
    fn of(mesh: &'a Mesh) -> Self {
        let count = mesh.triangles.len();
        let triangles: Vec<[u32; 3]> = (0..count).map(|t| mesh.triangle_points(t)).collect();
        let mean = |t: u32| {
            let [a, b, c] = mesh.triangle_corners(t as usize);
            ((b - a).norm() + (c - b).norm() + (a - c).norm()) / 3.0
        };
        let table = EdgeTable::new(&triangles, mesh.points.len());
        let edges = table.edges().map(|edge| {
            let (mut low, mut high, mut first) = (f64::INFINITY, 0.0_f64, None);
            for side in edge.sides() {
                let triangle = side / 3;
                first.get_or_insert(triangle);
                low = low.min(mean(triangle));
                high = high.max(mean(triangle));
            }
            let growth = if edge.len() > 1 { high / low } else { f64::NAN };
            ([edge.low, edge.high()], first.unwrap_or(0), growth)
        });
        Self {
            mesh,
            edges: edges.collect(),
        }
    }

    fn distributions(&self, asked: &Asked<'_>) -> Vec<Distribution> {
        let point = |p: u32| &self.mesh.points[p as usize];
        let lengths = || {
            let ends = self.edges.iter().map(|(ends, _, _)| ends);
            ends.map(|[a, b]| (point(*b) - point(*a)).norm())
        };
        let middle = |n: usize| {
            let ([a, b], triangle, _) = self.edges[n];
            (triangle as usize, halfway(point(a), point(b)))
        };
        let mut found = vec![Distribution::of(
            Measure::EdgeLength,
            lengths(),
            WORST,
            middle,
        )];
        if let Some(target) = asked.size {
            let target = |[a, b]: [u32; 2]| match target {
                Target::Everywhere(size) => size,
                Target::Points(sizes) => 0.5 * sizes[a as usize] + 0.5 * sizes[b as usize],
            };
            let ratios = lengths()
                .zip(&self.edges)
                .map(|(length, (ends, _, _))| length / target(*ends));
            found.push(Distribution::of(Measure::Size, ratios, WORST, middle));
        }
        if let Some(Target::Points(sizes)) = asked.size {
            let ratios = self.edges.iter().map(|([a, b], _, _)| {
                let [a, b] = [a, b].map(|end| sizes[*end as usize]);
                a.max(b) / a.min(b)
            });
            found.push(Distribution::of(Measure::Grading, ratios, WORST, middle));
        }
        let growth = self.edges.iter().map(|(_, _, growth)| *growth);
        found.push(Distribution::of(Measure::Growth, growth, WORST, middle));
        found.push(self.spread(lengths()));
        found.into_iter().flatten().collect()
    }

    fn spread(&self, lengths: impl Iterator<Item = f64>) -> Option<Distribution> {
        let none = (f64::INFINITY, 0.0_f64, 0_u32);
        let mut at = vec![none; self.mesh.points.len()];
        for (length, (ends, triangle, _)) in lengths.zip(&self.edges) {
            for end in ends {
                let (low, high, first) = &mut at[*end as usize];
                (*low, *high) = (low.min(length), high.max(length));
                *first = *triangle;
            }
        }
        // A point without edges has no figure: nothing over infinity is dropped.
        let ratios = at.iter().map(
            |(low, high, _)| {
                if *high > 0.0 { high / low } else { f64::NAN }
            },
        );
        Distribution::of(Measure::Spread, ratios, WORST, |n| {
            (at[n].2 as usize, self.mesh.points[n])
        })
    }
}
