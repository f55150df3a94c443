//! The lowest eigenvalues of the Laplace-Beltrami operator on a closed mesh, by
//! linear elements: K u = lambda M u.

use chordwise::mesh::Mesh;
use nalgebra::DMatrix;
use rsparse::data::{Nmrc, Sprs, Symb};

/// How many are sought: the constants' zero and three more.
const SOUGHT: usize = 4;

/// Subspace iterations. A round shrinks what is foreign by (2 + s) / (6 + s) or less,
/// eigenvalues by its square.
const ROUNDS: usize = 25;

/// A symmetric matrix from entries, which add up where they meet; by columns.
fn matrix(size: usize, mut entries: Vec<(usize, usize, f64)>) -> Sprs<f64> {
    entries.sort_by_key(|(row, column, _)| (*column, *row));
    let mut matrix = Sprs::new();
    (matrix.m, matrix.n) = (size, size);
    matrix.p = vec![0; size + 1];
    let mut last = None;
    for (row, column, value) in entries {
        if last == Some((row, column)) {
            *matrix.x.last_mut().unwrap() += value;
        } else {
            matrix.i.push(row);
            matrix.x.push(value);
            last = Some((row, column));
        }
        matrix.p[column + 1] = isize::try_from(matrix.x.len()).unwrap();
    }
    matrix.nzmax = matrix.x.len();
    matrix
}

/// Stiffness by cotangents (Pinkall and Polthier 1993) and mass of linear elements:
/// K_ij = -(cot a + cot b) / 2 for the angles across the edge, M_ij = A / 12, twice
/// that on the diagonal, summed over triangles.
fn stiffness_and_mass(mesh: &Mesh) -> [Sprs<f64>; 2] {
    let (mut stiffness, mut mass) = (Vec::new(), Vec::new());
    for t in 0..mesh.triangles.len() {
        let numbers = mesh.triangle_points(t).map(|p| p as usize);
        let corners = mesh.triangle_corners(t);
        for k in 0..3 {
            let [i, j] = [numbers[(k + 1) % 3], numbers[(k + 2) % 3]];
            let (a, b) = (
                corners[(k + 1) % 3] - corners[k],
                corners[(k + 2) % 3] - corners[k],
            );
            let doubled = a.cross(&b).norm();
            let half = a.dot(&b) / doubled / 2.0;
            stiffness.extend([(i, j, -half), (j, i, -half), (i, i, half), (j, j, half)]);
            let part = doubled / 24.0;
            mass.extend([(i, j, part), (j, i, part), (i, i, part), (j, j, part)]);
        }
    }
    [stiffness, mass].map(|entries| matrix(mesh.points.len(), entries))
}

/// A Cholesky factor with the order that keeps it sparse.
struct Factor {
    symbolic: Symb,
    numeric: Nmrc<f64>,
}

impl Factor {
    fn of(matrix: &Sprs<f64>) -> Self {
        // Minimum degree on A + A'.
        let mut symbolic = rsparse::schol(matrix, 0);
        let numeric = rsparse::chol(matrix, &mut symbolic).unwrap();
        Self { symbolic, numeric }
    }

    fn solve(&self, right: &[f64]) -> Vec<f64> {
        let order = self.symbolic.pinv.as_ref().unwrap();
        let place = |k: usize| usize::try_from(order[k]).unwrap();
        let mut x = vec![0.0; right.len()];
        for (k, value) in right.iter().enumerate() {
            x[place(k)] = *value;
        }
        rsparse::lsolve(&self.numeric.l, &mut x);
        rsparse::ltsolve(&self.numeric.l, &mut x);
        (0..right.len()).map(|k| x[place(k)]).collect()
    }
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

fn times(matrix: &Sprs<f64>, vector: &[f64]) -> Vec<f64> {
    rsparse::gaxpy(matrix, vector, &vec![0.0; vector.len()])
}

/// The lowest eigenvalues, ascending: inverse iteration of a subspace, shifted so that
/// the constants do no harm, then Rayleigh and Ritz.
pub(crate) fn eigenvalues(mesh: &Mesh) -> [f64; SOUGHT] {
    let [stiffness, mass] = stiffness_and_mass(mesh);
    // About the eigenvalue sought, in 1 / area.
    let area: f64 = mass.x.iter().sum();
    let shift = 8.0 * std::f64::consts::PI / area / 4.0;
    let factor = Factor::of(&rsparse::add(&stiffness, &mass, 1.0, shift));
    // Anything that is not orthogonal to what is sought.
    let mut basis: Vec<Vec<f64>> = (0..SOUGHT)
        .map(|k| {
            let own = |p: &chordwise::scalar::Point| match k {
                0 => 1.0,
                _ => p[k - 1] + 0.3 * (p.x + 2.0 * p.y * p.z).sin(),
            };
            mesh.points.iter().map(own).collect()
        })
        .collect();
    for _ in 0..ROUNDS {
        let mut made: Vec<Vec<f64>> = Vec::new();
        for vector in &basis {
            let mut next = factor.solve(&times(&mass, vector));
            // Orthonormal under the mass, twice for rounding.
            for _ in 0..2 {
                for other in &made {
                    let along = dot(&times(&mass, other), &next);
                    next.iter_mut()
                        .zip(other)
                        .for_each(|(n, o)| *n -= along * o);
                }
            }
            let norm = dot(&times(&mass, &next), &next).sqrt();
            next.iter_mut().for_each(|n| *n /= norm);
            made.push(next);
        }
        basis = made;
    }
    let small = DMatrix::from_fn(SOUGHT, SOUGHT, |i, j| {
        dot(&basis[i], &times(&stiffness, &basis[j]))
    });
    let mut values: Vec<f64> = small.symmetric_eigenvalues().iter().copied().collect();
    values.sort_by(f64::total_cmp);
    values.try_into().unwrap()
}
