//! Control nets: Bezier and B-spline surfaces.

use serde::{Deserialize, Serialize};

use super::context::Context;
use super::fault::{Step, SurfaceFault};
use super::grid::PieceGrid;
use super::homogeneous::{Lifted, lift, project};
use super::kind::piece;
use super::spline::Knots;
use crate::bezier::MAX_DEGREE;
use crate::scalar::Point;

/// A Bezier surface: the degrees follow from the net.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct BezierNet {
    /// `net[i][j]`: i along u, j along v.
    #[serde(default)]
    pub net: Option<Vec<Vec<[f64; 3]>>>,
    /// The net as indices into the set's `points`.
    #[serde(default)]
    pub indexed: Option<Vec<Vec<u64>>>,
    /// One weight a point, in the same shape; without them the surface is
    /// polynomial.
    #[serde(default)]
    pub weights: Option<Vec<Vec<f64>>>,
}

/// A B-spline surface.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct BSplineNet {
    /// The degrees along u and v, 1 to 15.
    pub degree: (usize, usize),
    /// The knots along u and v: for n points of degree p there are n + p + 1,
    /// and the domain is [t_p, t_n].
    pub knots: (Vec<f64>, Vec<f64>),
    /// `net[i][j]`: i along u, j along v.
    #[serde(default)]
    pub net: Option<Vec<Vec<[f64; 3]>>>,
    /// The net as indices into the set's `points`.
    #[serde(default)]
    pub indexed: Option<Vec<Vec<u64>>>,
    /// One weight a point, in the same shape; without them the surface is
    /// polynomial.
    #[serde(default)]
    pub weights: Option<Vec<Vec<f64>>>,
}

/// A checked net, rows along u.
struct Net {
    rows: usize,
    columns: usize,
    points: Vec<Point>,
    weights: Option<Vec<f64>>,
}

impl BezierNet {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let (rows, columns) = shape(context, &self.net, &self.indexed)?;
        let field = field(&self.net);
        let mut good = true;
        for (count, at) in [
            (rows, vec![Step::Field(field)]),
            (columns, vec![Step::Field(field), Step::Item(0)]),
        ] {
            if !(2..=MAX_DEGREE + 1).contains(&count) {
                context.fault(&at, SurfaceFault::Degree(count - 1));
                good = false;
            }
        }
        if !good {
            return None;
        }
        let net = read(
            context,
            (rows, columns),
            &self.net,
            &self.indexed,
            &self.weights,
        )?;
        let degree = (net.rows - 1, net.columns - 1);
        Some(PieceGrid {
            breaks_u: vec![0.0, 1.0],
            breaks_v: vec![0.0, 1.0],
            pieces: vec![piece(context, degree, net.points, net.weights)?],
        })
    }
}

impl BSplineNet {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        for (k, degree) in [self.degree.0, self.degree.1].into_iter().enumerate() {
            if degree == 0 || degree > MAX_DEGREE {
                context.fault(
                    &[Step::Field("degree"), Step::Item(k)],
                    SurfaceFault::Degree(degree),
                );
            }
        }
        let (rows, columns) = shape(context, &self.net, &self.indexed)?;
        let at = |k| [Step::Field("knots"), Step::Item(k)];
        let along_u = Knots::new(context, self.degree.0, &self.knots.0, rows, &at(0));
        let along_v = Knots::new(context, self.degree.1, &self.knots.1, columns, &at(1));
        let net = read(
            context,
            (rows, columns),
            &self.net,
            &self.indexed,
            &self.weights,
        )?;
        let (along_u, along_v) = (along_u?, along_v?);

        // Rows first, then the columns of all pieces of a strip in v.
        let lifted: Vec<Lifted> = match &net.weights {
            Some(weights) => net
                .points
                .iter()
                .zip(weights)
                .map(|(&p, &w)| lift(p, w))
                .collect(),
            None => net.points.iter().map(|&p| lift(p, 1.0)).collect(),
        };
        let strips: Vec<Vec<Vec<Lifted>>> = lifted
            .chunks_exact(net.columns)
            .map(|row| along_v.pieces(row))
            .collect();
        let (p, q) = self.degree;
        let (breaks_u, breaks_v) = (along_u.breaks(), along_v.breaks());
        let (count_u, count_v) = (breaks_u.len() - 1, breaks_v.len() - 1);
        let mut nets = vec![vec![Lifted::zeros(); (p + 1) * (q + 1)]; count_u * count_v];
        for b in 0..count_v {
            for j in 0..=q {
                // The first column of a piece is the last of the one before.
                let column: Vec<Lifted> = strips.iter().map(|strip| strip[b][j]).collect();
                for (a, points) in along_u.pieces(&column).iter().enumerate() {
                    for (i, point) in points.iter().enumerate() {
                        nets[a * count_v + b][i * (q + 1) + j] = *point;
                    }
                }
            }
        }
        let pieces: Option<Vec<_>> = nets
            .into_iter()
            .map(|lifted| {
                let rational = net.weights.is_some();
                let points = lifted.iter().map(|h| {
                    if rational {
                        project(h)
                    } else {
                        Point::from(h.xyz())
                    }
                });
                let weights = rational.then(|| lifted.iter().map(|h| h.w).collect());
                piece(context, (p, q), points.collect(), weights)
            })
            .collect();
        Some(PieceGrid {
            breaks_u,
            breaks_v,
            pieces: pieces?,
        })
    }
}

fn field(net: &Option<Vec<Vec<[f64; 3]>>>) -> &'static str {
    if net.is_some() { "net" } else { "indexed" }
}

/// Rows and columns of whichever net is given, if it is a rectangle.
fn shape(
    context: &mut Context<'_>,
    net: &Option<Vec<Vec<[f64; 3]>>>,
    indexed: &Option<Vec<Vec<u64>>>,
) -> Option<(usize, usize)> {
    let lengths: Vec<usize> = match (net, indexed) {
        (Some(net), None) => net.iter().map(Vec::len).collect(),
        (None, Some(net)) => net.iter().map(Vec::len).collect(),
        (first, _) => {
            context.fault(
                &[],
                SurfaceFault::Choice {
                    both: first.is_some(),
                    first: "net",
                    second: "indexed",
                },
            );
            return None;
        }
    };
    let field = field(net);
    let expected = lengths.first().copied().unwrap_or(0);
    if lengths.iter().all(|&length| length == 0) {
        context.fault(&[Step::Field(field)], SurfaceFault::EmptyNet);
        return None;
    }
    let mut good = true;
    for (row, &found) in lengths.iter().enumerate() {
        if found != expected {
            let fault = SurfaceFault::RaggedNet {
                row,
                found,
                expected,
            };
            context.fault(&[Step::Field(field), Step::Item(row)], fault);
            good = false;
        }
    }
    good.then_some((lengths.len(), expected))
}

/// Points and weights of a rectangular net.
fn read(
    context: &mut Context<'_>,
    (rows, columns): (usize, usize),
    net: &Option<Vec<Vec<[f64; 3]>>>,
    indexed: &Option<Vec<Vec<u64>>>,
    weights: &Option<Vec<Vec<f64>>>,
) -> Option<Net> {
    let at = |field, i, j| move || vec![Step::Field(field), Step::Item(i), Step::Item(j)];
    let before = context.faults.len();
    let mut points = Vec::with_capacity(rows * columns);
    for (i, row) in net.iter().flatten().enumerate() {
        for (j, &point) in row.iter().enumerate() {
            points.extend(context.point(point, at("net", i, j)));
        }
    }
    for (i, row) in indexed.iter().flatten().enumerate() {
        for (j, &index) in row.iter().enumerate() {
            points.extend(context.indexed(index, at("indexed", i, j)));
        }
    }
    let flat = weights.as_ref().map(|weights| {
        if weights.len() != rows {
            let fault = SurfaceFault::WeightCount {
                what: "rows",
                found: weights.len(),
                expected: rows,
            };
            context.fault(&[Step::Field("weights")], fault);
        }
        let mut flat = Vec::with_capacity(rows * columns);
        for (i, row) in weights.iter().enumerate() {
            if row.len() != columns {
                let fault = SurfaceFault::WeightCount {
                    what: "columns",
                    found: row.len(),
                    expected: columns,
                };
                context.fault(&[Step::Field("weights"), Step::Item(i)], fault);
            }
            for (j, &weight) in row.iter().enumerate() {
                flat.extend(context.weight(weight, at("weights", i, j)));
            }
        }
        flat
    });
    (context.faults.len() == before).then_some(Net {
        rows,
        columns,
        points,
        weights: flat,
    })
}
