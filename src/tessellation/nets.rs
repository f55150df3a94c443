//! Derivatives of a piece as nets of their own, and their values on a grid.
//!
//! With N = sum b_i B_i of degree m, N' = sum m (b_(i+1) - b_i) B_i of degree
//! m - 1. A piece is taken in homogeneous form (N, w), N from the piece's first
//! control point.

use nalgebra::Vector4;

use crate::bezier::BezierPatch;
use crate::sampling::ratio;
use crate::scalar::Point;

pub(super) type Homogeneous = Vector4<f64>;

/// Grid cells in each direction; more where degrees or weights let second
/// derivatives vary.
const CELLS: usize = 6;
const CELLS_FINE: usize = 12;

/// The highest order of derivatives that is kept.
const HIGHEST: usize = 5;

/// The derivatives of a piece up to the fifth.
#[derive(Debug)]
pub(super) struct Nets {
    pub(super) origin: Point,
    /// Cells of the grid in each direction.
    pub(super) cells: usize,
    /// By order, and in each from all along u to all along v.
    orders: Vec<Vec<Net>>,
    /// Bernstein polynomials of every degree at the grid's lines.
    bases: Vec<Vec<f64>>,
}

/// A net of homogeneous control values, v fastest.
#[derive(Debug, Clone)]
pub(super) struct Net {
    degree: [usize; 2],
    values: Vec<Homogeneous>,
}

impl Nets {
    pub(super) fn new(surface: &BezierPatch) -> Self {
        let (m, n) = surface.degree();
        let origin = surface.control_point(0, 0);
        let values = surface.control_points().enumerate().map(|(k, p)| {
            let w = surface.weight(k / (n + 1), k % (n + 1));
            let from = (p - origin) * w;
            Homogeneous::new(from.x, from.y, from.z, w)
        });
        let net = Net {
            degree: [m, n],
            values: values.collect(),
        };
        let mut orders = vec![vec![net]];
        for order in 0..HIGHEST {
            let below = &orders[order];
            let mut next: Vec<Net> = below.iter().map(|net| net.derivative(0)).collect();
            next.push(below[order].derivative(1));
            orders.push(next);
        }
        let fine = surface.is_rational() || m.max(n) > 3;
        let cells = if fine { CELLS_FINE } else { CELLS };
        let mut row = Vec::new();
        let bases = (0..=m.max(n)).map(|degree| {
            let mut basis = Vec::with_capacity((cells + 1) * (degree + 1));
            for line in 0..=cells {
                bernstein(degree, ratio(line, cells), &mut row);
                basis.extend_from_slice(&row);
            }
            basis
        });
        let bases = bases.collect();
        Self {
            origin,
            cells,
            orders,
            bases,
        }
    }

    /// The derivative `i` times along u and `j` times along v.
    pub(super) fn derived(&self, i: usize, j: usize) -> &Net {
        &self.orders[i + j][j]
    }

    /// The piece itself.
    pub(super) fn itself(&self) -> &Net {
        self.derived(0, 0)
    }

    /// Values of a derivative at the grid's nodes, v fastest.
    pub(super) fn grid(&self, net: &Net) -> Vec<Homogeneous> {
        let [m, n] = net.degree;
        let lines = self.cells + 1;
        // First along v: a column of m + 1 values for each line of the grid.
        let mut columns = Vec::with_capacity(lines * (m + 1));
        for basis in self.bases[n].chunks_exact(n + 1) {
            for row in net.values.chunks_exact(n + 1) {
                columns.push(weighted(row, basis));
            }
        }
        let mut nodes = Vec::with_capacity(lines * lines);
        for basis in self.bases[m].chunks_exact(m + 1) {
            for column in columns.chunks_exact(m + 1) {
                nodes.push(weighted(column, basis));
            }
        }
        nodes
    }
}

fn weighted(values: &[Homogeneous], basis: &[f64]) -> Homogeneous {
    let mut sum = Homogeneous::zeros();
    for (value, b) in values.iter().zip(basis) {
        sum += value * *b;
    }
    sum
}

impl Net {
    /// The derivative along one parameter; a single zero where the degree is.
    fn derivative(&self, axis: usize) -> Self {
        if self.degree[axis] == 0 {
            return Self {
                degree: [0, 0],
                values: vec![Homogeneous::zeros()],
            };
        }
        let [m, n] = self.degree;
        let mut degree = self.degree;
        degree[axis] -= 1;
        let factor = ratio(self.degree[axis], 1);
        let step = if axis == 0 { n + 1 } else { 1 };
        let mut values = Vec::with_capacity(self.values.len());
        for i in 0..=m.min(degree[0]) {
            for j in 0..=n.min(degree[1]) {
                let at = i * (n + 1) + j;
                values.push((self.values[at + step] - self.values[at]) * factor);
            }
        }
        Self { degree, values }
    }

    pub(super) fn values(&self) -> &[Homogeneous] {
        &self.values
    }

    /// The value at a place.
    pub(super) fn at(&self, [u, v]: [f64; 2]) -> Homogeneous {
        let [m, n] = self.degree;
        let (mut bu, mut bv) = (Vec::new(), Vec::new());
        bernstein(m, u, &mut bu);
        bernstein(n, v, &mut bv);
        let rows = self.values.chunks_exact(n + 1);
        rows.zip(&bu).fold(Homogeneous::zeros(), |sum, (row, b)| {
            sum + weighted(row, &bv) * *b
        })
    }

    /// The largest size of a value, as a functional (n, -n . s) sees it, s no
    /// farther than `reach` from the origin.
    pub(super) fn largest(&self, reach: f64) -> f64 {
        let size = |x: &Homogeneous| x.xyz().norm() + reach * x.w.abs();
        self.values.iter().map(size).fold(0.0, f64::max)
    }
}

/// Bernstein polynomials of one degree at t.
fn bernstein(degree: usize, t: f64, row: &mut Vec<f64>) {
    row.clear();
    row.push(1.0);
    for k in 0..degree {
        row.push(row[k] * t);
        for i in (1..=k).rev() {
            row[i] = row[i] * (1.0 - t) + row[i - 1] * t;
        }
        row[0] *= 1.0 - t;
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// On a polynomial piece a derivative at a node of the grid is the surface's own.
    #[test]
    fn the_grid_holds_the_derivatives() {
        let points = (0..12).map(|k| {
            let (x, y) = (f64::from(k / 4), f64::from(k % 4));
            Point::new(x + 0.1 * y * y, y, (x * 1.3 + y).sin())
        });
        let surface = BezierPatch::new((2, 3), points.collect(), None).unwrap();
        let nets = Nets::new(&surface);
        let (uv, vv) = (nets.grid(nets.derived(1, 1)), nets.grid(nets.derived(0, 2)));
        for i in 0..=CELLS {
            for j in 0..=CELLS {
                let place = [ratio(i, CELLS), ratio(j, CELLS)];
                let jet = surface.jet(place[0], place[1]);
                let node = i * (CELLS + 1) + j;
                assert_relative_eq!(uv[node].xyz(), jet.duv, epsilon = 1e-12);
                assert_relative_eq!(vv[node].xyz(), jet.dvv, epsilon = 1e-12);
                assert_relative_eq!(nets.derived(0, 2).at(place).xyz(), jet.dvv, epsilon = 1e-12);
            }
        }
    }
}
