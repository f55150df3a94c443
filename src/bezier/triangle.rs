//! Restriction of a tensor-product patch to a triangle of parameters.
//!
//! ```text
//! b_ijk = sum C(i,a) C(j,b) C(k,c) / C(d,m)  F(p^a q^b r^c ; p^(i-a) q^(j-b) r^(k-c)),
//! a + b + c = m,   d = m + n,   i + j + k = d
//! ```
//!
//! F is the tensor blossom: its first m arguments take the u, its last n the v
//! of the corners p, q, r. The triangular blossom is the mean of F over all
//! ways of dealing the d arguments to the two groups (Ramshaw 1989; DeRose,
//! Goldman, Hagen and Mann 1993). Corners inside the unit square make every
//! step a convex combination, so rounding stays below (2 d + 2) ulp of the
//! largest coordinate.

use nalgebra::SVector;

use super::binomial;
use crate::scalar::{Point, Vector};

/// A triangular (rational) Bezier net: `S(t)` lies in the hull of `points`.
#[derive(Debug, Clone, Default)]
pub struct TriangleNet {
    /// The degree d.
    pub degree: usize,
    /// The (d + 1)(d + 2) / 2 control points relative to the origin asked for,
    /// ordered by i from d down to 0, then j from d - i down to 0: the corners
    /// stand at the indices of [`TriangleNet::corner`].
    pub points: Vec<Vector>,
    /// The weights in the same order; empty for a polynomial net.
    pub weights: Vec<f64>,
}

impl TriangleNet {
    /// Index of control point (i, j, d - i - j).
    #[must_use]
    pub fn index(&self, i: usize, j: usize) -> usize {
        index(self.degree, i, j)
    }

    /// Index of corner 0, 1 or 2.
    #[must_use]
    pub fn corner(&self, corner: usize) -> usize {
        match corner {
            0 => 0,
            1 => self.index(0, self.degree),
            _ => self.points.len() - 1,
        }
    }
}

/// Position of (i, j, k) among the triples with sum d, i falling, then j.
fn index(degree: usize, i: usize, j: usize) -> usize {
    let below = degree - i;
    below * (below + 1) / 2 + (below - j)
}

/// How often each tensor blossom value enters each control point; kept between
/// calls, since almost all patches of a set share one pair of degrees.
#[derive(Debug, Clone, Default)]
pub struct TriangleRestriction {
    degree: (usize, usize),
    /// For every control point in turn: its terms (index of F, factor).
    terms: Vec<(u32, f64)>,
    /// End of each control point's terms.
    ends: Vec<u32>,
    scratch3: Scratch<3>,
    scratch4: Scratch<4>,
}

/// Buffers of one restriction.
#[derive(Debug, Clone, Default)]
struct Scratch<const N: usize> {
    /// The net relative to the origin.
    local: Vec<SVector<f64, N>>,
    /// For every column j of the net, its blossom at every u set.
    columns: Vec<SVector<f64, N>>,
    /// F(u set; v set), u set fastest.
    values: Vec<SVector<f64, N>>,
    stages: [Vec<SVector<f64, N>>; 3],
}

impl TriangleRestriction {
    pub(super) fn polynomial(
        &mut self,
        degree: (usize, usize),
        net: &[SVector<f64, 3>],
        corners: [[f64; 2]; 3],
        origin: &Point,
        into: &mut TriangleNet,
    ) {
        self.prepare(degree);
        self.scratch3.local.clear();
        self.scratch3
            .local
            .extend(net.iter().map(|p| p - origin.coords));
        self.scratch3.blossoms(degree, corners);
        into.degree = degree.0 + degree.1;
        into.weights.clear();
        into.points.clear();
        let values = &self.scratch3.values;
        into.points
            .extend(self.sums(|f| values[f], SVector::zeros()));
    }

    pub(super) fn rational(
        &mut self,
        degree: (usize, usize),
        net: &[SVector<f64, 4>],
        corners: [[f64; 2]; 3],
        origin: &Point,
        into: &mut TriangleNet,
    ) {
        self.prepare(degree);
        let lift = |p: &SVector<f64, 4>| {
            let q = p.xyz() - origin.coords * p.w;
            SVector::<f64, 4>::new(q.x, q.y, q.z, p.w)
        };
        self.scratch4.local.clear();
        self.scratch4.local.extend(net.iter().map(lift));
        self.scratch4.blossoms(degree, corners);
        into.degree = degree.0 + degree.1;
        into.weights.clear();
        into.points.clear();
        let values = &self.scratch4.values;
        for h in self.sums(|f| values[f], SVector::zeros()) {
            into.points.push(h.xyz() / h.w);
            into.weights.push(h.w);
        }
    }

    fn sums<'a, const N: usize>(
        &'a self,
        value: impl Fn(usize) -> SVector<f64, N> + 'a,
        zero: SVector<f64, N>,
    ) -> impl Iterator<Item = SVector<f64, N>> + 'a {
        let mut start = 0;
        self.ends.iter().map(move |&end| {
            let terms = &self.terms[start..end as usize];
            start = end as usize;
            terms
                .iter()
                .fold(zero, |sum, &(f, factor)| sum + value(f as usize) * factor)
        })
    }

    fn prepare(&mut self, degree: (usize, usize)) {
        if self.degree == degree {
            return;
        }
        self.degree = degree;
        self.terms.clear();
        self.ends.clear();
        let (m, n) = degree;
        let u_sets = (m + 1) * (m + 2) / 2;
        let total = m + n;
        for (i, j, k) in triples(total) {
            for (a, b, c) in triples(m) {
                if a <= i && b <= j && c <= k {
                    let factor =
                        binomial(i, a) * binomial(j, b) * binomial(k, c) / binomial(total, m);
                    let f = index(n, i - a, j - b) * u_sets + index(m, a, b);
                    self.terms.push((narrow(f), factor));
                }
            }
            self.ends.push(narrow(self.terms.len()));
        }
    }
}

fn narrow(count: usize) -> u32 {
    u32::try_from(count).expect("degrees up to 15 give fewer than 2^32 terms")
}

fn triples(degree: usize) -> impl Iterator<Item = (usize, usize, usize)> {
    (0..=degree)
        .rev()
        .flat_map(move |i| (0..=degree - i).rev().map(move |j| (i, j, degree - i - j)))
}

impl<const N: usize> Scratch<N> {
    /// All tensor blossom values F(u set; v set), u set fastest. The net's rows
    /// are blossomed as wholes, then the columns of that, so that every inner
    /// loop runs over neighbours in memory.
    fn blossoms(&mut self, degree: (usize, usize), corners: [[f64; 2]; 3]) {
        let (m, n) = degree;
        let u_sets = (m + 1) * (m + 2) / 2;
        let v_sets = (n + 1) * (n + 2) / 2;
        self.columns.resize((n + 1) * u_sets, SVector::zeros());
        self.values.resize(v_sets * u_sets, SVector::zeros());
        let columns = &mut self.columns;
        multisets(
            &self.local,
            n + 1,
            corners.map(|c| c[0]),
            &mut self.stages,
            |set, row| {
                for (j, value) in row.iter().enumerate() {
                    columns[j * u_sets + set] = *value;
                }
            },
        );
        let values = &mut self.values;
        multisets(
            &self.columns,
            u_sets,
            corners.map(|c| c[1]),
            &mut self.stages,
            |set, row| {
                values[set * u_sets..(set + 1) * u_sets].copy_from_slice(row);
            },
        );
    }
}

/// The blossom of a run of rows, each `width` long, at every multiset of the
/// three arguments; partial results are shared.
fn multisets<const N: usize>(
    rows: &[SVector<f64, N>],
    width: usize,
    args: [f64; 3],
    [first, second, third]: &mut [Vec<SVector<f64, N>>; 3],
    mut found: impl FnMut(usize, &[SVector<f64, N>]),
) {
    let degree = rows.len() / width - 1;
    first.clear();
    first.extend_from_slice(rows);
    for a in 0..=degree {
        let left = degree - a;
        second.clear();
        second.extend_from_slice(&first[..(left + 1) * width]);
        for b in 0..=left {
            let rest = left - b;
            third.clear();
            third.extend_from_slice(&second[..(rest + 1) * width]);
            for len in (2..=rest + 1).rev() {
                step(&mut third[..len * width], width, args[2]);
            }
            found(index(degree, a, b), &third[..width]);
            step(&mut second[..(rest + 1) * width], width, args[1]);
        }
        step(&mut first[..(left + 1) * width], width, args[0]);
    }
}

/// One step of de Casteljau's algorithm on rows.
fn step<const N: usize>(rows: &mut [SVector<f64, N>], width: usize, t: f64) {
    let s = 1.0 - t;
    for at in 0..rows.len() - width {
        rows[at] = rows[at] * s + rows[at + width] * t;
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::bezier::BezierPatch;
    use approx::assert_relative_eq;

    fn bernstein(net: &TriangleNet, l: [f64; 3]) -> Vector {
        let d = net.degree;
        let (mut sum, mut weight) = (Vector::zeros(), 0.0);
        for (at, (i, j, k)) in triples(d).enumerate() {
            let powers = [(l[0], i), (l[1], j), (l[2], k)];
            let basis = binomial(d, i)
                * binomial(d - i, j)
                * powers
                    .iter()
                    .map(|&(x, e)| x.powi(i32::try_from(e).unwrap()))
                    .product::<f64>();
            let w = net.weights.get(at).copied().unwrap_or(1.0) * basis;
            sum += net.points[at] * w;
            weight += w;
        }
        sum / weight
    }

    #[test]
    fn the_triangle_net_is_the_surface_over_the_triangle() {
        for (m, n, rational) in [(1, 1, false), (3, 3, false), (2, 4, true), (5, 1, true)] {
            let count = (m + 1) * (n + 1);
            let wave = |k: usize, f: f64| (f64::from(u32::try_from(k).unwrap()) * f).sin();
            let points = (0..count).map(|k| Point::new(wave(k, 1.3), wave(k, 2.1), wave(k, 0.7)));
            let weights = rational.then(|| (0..count).map(|k| 1.5 + wave(k, 3.3)).collect());
            let patch = BezierPatch::new((m, n), points.collect(), weights).unwrap();
            let corners = [[0.1, 0.2], [0.9, 0.3], [0.4, 0.8]];
            let origin = Point::new(0.3, -0.2, 0.1);
            let mut restriction = TriangleRestriction::default();
            let mut net = TriangleNet::default();
            patch.restrict_triangle(corners, &origin, &mut restriction, &mut net);
            for l in [
                [1.0, 0.0, 0.0],
                [0.2, 0.5, 0.3],
                [0.0, 0.6, 0.4],
                [0.0, 0.0, 1.0],
            ] {
                let at = |axis: usize| (0..3).map(|c| l[c] * corners[c][axis]).sum::<f64>();
                let expected = patch.eval(at(0), at(1)) - origin;
                assert_relative_eq!(bernstein(&net, l), expected, epsilon = 1e-13);
            }
            for (c, corner) in corners.iter().enumerate() {
                let expected = patch.eval(corner[0], corner[1]) - origin;
                assert_relative_eq!(net.points[net.corner(c)], expected, epsilon = 1e-13);
            }
        }
    }
}
