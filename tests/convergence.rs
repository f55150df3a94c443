//! Convergence over families of meshes, each finer than the one before by
//! [`FAMILY_FACTOR`] in length: integrals with known answers, and one real solve.
//!
//! Linear elements on an inscribed mesh are of second order in the edge length h:
//! errors go with h^2. The order between two levels is
//! log(e_1 / e_2) / log(h_1 / h_2), with h the edge of the equilateral triangle of
//! mean area.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use chordwise::mesh::{Measures, Mesh, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::report::FAMILY_FACTOR;
use chordwise::sampling::Limits;
use chordwise::scalar::Point;
use chordwise::sizing::{SizedMesh, Sizing};

#[path = "convergence/laplace.rs"]
mod laplace;

const PI: f64 = std::f64::consts::PI;

/// Which limit makes a family finer.
#[derive(Debug, Clone, Copy)]
enum By {
    /// Meshes for display, of as few triangles as a chord lets: numbers of rows go in
    /// steps, so orders are good to a tenth either way, and another tenth.
    Chord(f64),
    /// Meshes by size and shape.
    Size(f64),
}

/// How far an order may be from the true one.
fn slack(by: By) -> f64 {
    match by {
        By::Chord(_) => 0.2,
        By::Size(_) => 0.1,
    }
}

/// Meshes of a surface, each finer than the one before.
fn family(surface: &str, by: By, levels: u32) -> Vec<Mesh> {
    let text = format!("(patches: [(name: \"it\", surface: {surface})])");
    let set = PatchSet::from_ron(&text, "it").unwrap().set;
    let mut finer = 1.0;
    (0..levels)
        .map(|_| {
            let mesh = match by {
                By::Chord(chord) => {
                    let limits = Limits::new(chord / (finer * finer), None, None);
                    Meshed::new(&set, &limits, |_| true, |_| ()).unwrap().mesh
                }
                By::Size(size) => {
                    let sizing = Sizing::new(size / finer);
                    let made = SizedMesh::new(&set, &sizing, |_| true, |_| ());
                    made.unwrap().meshed.mesh
                }
            };
            finer *= FAMILY_FACTOR;
            mesh
        })
        .collect()
}

fn areas(mesh: &Mesh) -> Vec<f64> {
    (0..mesh.triangles.len())
        .map(|t| {
            let [a, b, c] = mesh.triangle_corners(t);
            (b - a).cross(&(c - a)).norm() / 2.0
        })
        .collect()
}

fn edge(mesh: &Mesh) -> f64 {
    let area: f64 = areas(mesh).iter().sum();
    (4.0 * area / (3.0_f64.sqrt() * mesh.triangles.len() as f64)).sqrt()
}

/// The orders from level to level, and over the whole family.
fn orders(sizes: &[f64], errors: &[f64]) -> (Vec<f64>, f64) {
    let order = |a: usize, b: usize| (errors[a] / errors[b]).ln() / (sizes[a] / sizes[b]).ln();
    let last = sizes.len() - 1;
    ((0..last).map(|k| order(k, k + 1)).collect(), order(0, last))
}

/// Prints what is found and demands second order over the whole family.
fn converges(what: &str, by: By, meshes: &[Mesh], errors: &[f64]) {
    let sizes: Vec<f64> = meshes.iter().map(edge).collect();
    let (steps, whole) = orders(&sizes, errors);
    let told: Vec<String> = errors.iter().map(|e| format!("{e:.3e}")).collect();
    println!(
        "{what}, {by:?}: h {sizes:.4?}, errors {told:?}, orders {steps:.3?}, over all {whole:.4}"
    );
    let range = 2.0 - slack(by)..=2.0 + slack(by);
    assert!(
        range.contains(&whole),
        "{what}, {by:?}: order {whole} of {errors:?} at {sizes:?}"
    );
}

/// The order is told by what is compared, not by chance: known errors have known
/// orders.
#[test]
fn orders_are_those_of_known_errors() {
    let sizes = [1.0, 0.5, 0.25];
    for power in [1, 2, 3] {
        let errors = sizes.map(|h: f64| 7.0 * h.powi(power));
        let (steps, whole) = orders(&sizes, &errors);
        for order in steps.into_iter().chain([whole]) {
            assert!((order - f64::from(power)).abs() < 1e-12);
        }
    }
}

/// Area 4 pi R^2 and volume 4/3 pi R^3 (handbook).
#[test]
fn area_and_volume_of_the_sphere() {
    let radius = 10.0_f64;
    let area = 4.0 * PI * radius.powi(2);
    let volume = 4.0 / 3.0 * PI * radius.powi(3);
    for by in [By::Chord(0.3), By::Size(3.0)] {
        let meshes = family("Sphere(radius: 10)", by, 5);
        let measures: Vec<Measures> = meshes.iter().map(Measures::of).collect();
        let errors: Vec<f64> = measures.iter().map(|m| 1.0 - m.area / area).collect();
        converges("sphere, area", by, &meshes, &errors);
        let errors = measures.iter().map(|m| 1.0 - m.volume.unwrap() / volume);
        let errors: Vec<f64> = errors.collect();
        converges("sphere, volume", by, &meshes, &errors);
    }
}

/// Area 4 pi^2 R r and volume 2 pi^2 R r^2 (handbook).
#[test]
fn area_and_volume_of_the_torus() {
    let (major, minor) = (10.0_f64, 4.0_f64);
    let area = 4.0 * PI * PI * major * minor;
    let volume = 2.0 * PI * PI * major * minor.powi(2);
    // From a chord at which triangles are small beside the tube: on the way there
    // their shapes still change, and with them the constant before the square.
    for by in [By::Chord(0.03), By::Size(2.5)] {
        let meshes = family("Torus(major: 10, minor: 4)", by, 5);
        let measures: Vec<Measures> = meshes.iter().map(Measures::of).collect();
        let errors: Vec<f64> = measures
            .iter()
            .map(|m| (1.0 - m.area / area).abs())
            .collect();
        converges("torus, area", by, &meshes, &errors);
        let errors = measures
            .iter()
            .map(|m| (1.0 - m.volume.unwrap() / volume).abs());
        let errors: Vec<f64> = errors.collect();
        converges("torus, volume", by, &meshes, &errors);
    }
}

/// The mean of a harmonic function over a sphere is its value at the centre (Gauss).
/// Here the potential of a charge outside, 1 / |x - q|, integrated by the mean of the
/// corners of each triangle, over the sphere's area 4 pi R^2. Over the mesh's own area
/// nearly all of the error falls out, as the mean over any concentric sphere is the
/// same: what is left goes with how uneven the mesh is, and has no order to speak of.
#[test]
fn mean_of_a_harmonic_function_over_the_sphere() {
    let charge = Point::new(14.0, -5.0, 8.0);
    let centre = 1.0 / charge.coords.norm();
    let area = 4.0 * PI * 100.0;
    let potential = |p: Point| 1.0 / (p - charge).norm();
    for by in [By::Chord(0.3), By::Size(3.0)] {
        let meshes = family("Sphere(radius: 10)", by, 5);
        let mut errors = Vec::new();
        for mesh in &meshes {
            let areas = areas(mesh);
            let of = |(t, area): (usize, &f64)| {
                area * mesh.triangle_corners(t).map(potential).iter().sum::<f64>() / 3.0
            };
            let integral: f64 = areas.iter().enumerate().map(of).sum();
            errors.push((integral / area / centre - 1.0).abs());
            let own = (integral / areas.iter().sum::<f64>() / centre - 1.0).abs();
            let whole = errors[errors.len() - 1];
            assert!(own < 0.1 * whole, "{by:?}: {own:e} of {whole:e} is left");
        }
        converges("sphere, harmonic mean", by, &meshes, &errors);
    }
}

/// The first eigenvalue of the Laplace-Beltrami operator on a sphere is 2 / R^2, three
/// times; then come 6 / R^2. Linear elements, cotangent matrix (Pinkall and Polthier
/// 1993), a sparse Cholesky solve by a library. An eigenvalue is of second order on
/// meshes that a solver likes.
#[test]
fn first_eigenvalue_of_the_laplace_beltrami_operator_on_the_sphere() {
    let radius = 10.0_f64;
    let exact = 2.0 / radius.powi(2);
    let error = |mesh: &Mesh| {
        let values = laplace::eigenvalues(mesh);
        assert!(values[0].abs() < 1e-9 * exact, "constants: {values:?}");
        for value in &values[1..] {
            assert!((value / exact - 1.0).abs() < 0.1, "{values:?}");
        }
        let mean = values[1..].iter().sum::<f64>() / 3.0;
        (mean / exact - 1.0).abs()
    };
    for by in [By::Chord(0.3), By::Size(3.0)] {
        let meshes = family("Sphere(radius: 10)", by, 5);
        let errors: Vec<f64> = meshes.iter().map(error).collect();
        converges("sphere, eigenvalue", by, &meshes, &errors);
    }
}
