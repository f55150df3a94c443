//! Meshes made by hand.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![allow(
    dead_code,
    reason = "several tests and benches share this file, none uses all of it"
)]

use chordwise::mesh::{Mesh, Part, Vertex};
use chordwise::scalar::{LengthUnit, Point, Vector};

/// A longitude-latitude sphere of `k` meridians and `r` rings, facing outwards:
/// k r + 2 points and 2 k r triangles, in a northern and a southern patch.
pub(crate) fn sphere(k: u32, r: u32, radius: f64, centre: Vector) -> Mesh {
    let mut normals = vec![Vector::z()];
    for ring in 1..=r {
        let polar = f64::from(ring) / f64::from(r + 1) * std::f64::consts::PI;
        for meridian in 0..k {
            let turn = f64::from(meridian) / f64::from(k) * std::f64::consts::TAU;
            normals.push(Vector::new(
                polar.sin() * turn.cos(),
                polar.sin() * turn.sin(),
                polar.cos(),
            ));
        }
    }
    normals.push(-Vector::z());
    let at = |ring: u32, meridian: u32| match ring {
        0 => 0,
        _ if ring > r => k * r + 1,
        _ => 1 + (ring - 1) * k + meridian % k,
    };
    let mut triangles = Vec::new();
    let mut north = 0;
    for ring in 0..=r {
        if ring == r.div_ceil(2) {
            north = triangles.len();
        }
        for m in 0..k {
            let [a, b] = [at(ring, m), at(ring, m + 1)];
            let [c, d] = [at(ring + 1, m), at(ring + 1, m + 1)];
            if ring > 0 {
                triangles.push([a, c, b]);
            }
            if ring < r {
                triangles.push([b, c, d]);
            }
        }
    }
    let all = triangles.len();
    let part = |name: &str, triangles| Part {
        name: name.to_owned(),
        panel: 0,
        triangles,
    };
    Mesh {
        name: "sphere".to_owned(),
        unit: LengthUnit::Millimetre,
        panels: vec!["ball".to_owned()],
        points: normals
            .iter()
            .map(|n| Point::from(n * radius + centre))
            .collect(),
        vertices: (0_u32..)
            .zip(&normals)
            .map(|(point, &normal)| Vertex { point, normal })
            .collect(),
        triangles,
        parts: vec![part("ball/north", 0..north), part("ball/south", north..all)],
        evidence: None,
        corner_parts: None,
    }
}

/// A box of 3 x 2 x 1 from a corner: the panel `lid` on top, the panel `front
/// tray` (four walls and a floor, a patch each) below. Eight points, 24
/// vertices, 12 triangles; area 22, volume 6.
pub(crate) fn case(corner: Vector) -> Mesh {
    let points: Vec<Point> = (0_u32..8)
        .map(|i| {
            let pick = |bit: u32, length: f64| if i >> bit & 1 == 1 { length } else { 0.0 };
            Point::from(corner + Vector::new(pick(0, 3.0), pick(1, 2.0), pick(2, 1.0)))
        })
        .collect();
    let faces: [([u32; 4], Vector); 6] = [
        ([0, 2, 3, 1], -Vector::z()),
        ([0, 1, 5, 4], -Vector::y()),
        ([1, 3, 7, 5], Vector::x()),
        ([3, 2, 6, 7], Vector::y()),
        ([2, 0, 4, 6], -Vector::x()),
        ([4, 5, 7, 6], Vector::z()),
    ];
    let names = ["floor", "front", "right", "back", "left"];
    let mut mesh = Mesh {
        name: "case".to_owned(),
        unit: LengthUnit::Millimetre,
        panels: vec!["front tray".to_owned(), "lid".to_owned()],
        points,
        vertices: Vec::new(),
        triangles: Vec::new(),
        parts: Vec::new(),
        evidence: None,
        corner_parts: None,
    };
    for (i, (corners, normal)) in faces.into_iter().enumerate() {
        let first = u32::try_from(mesh.vertices.len()).unwrap();
        mesh.vertices
            .extend(corners.map(|point| Vertex { point, normal }));
        let start = mesh.triangles.len();
        mesh.triangles.push([first, first + 1, first + 2]);
        mesh.triangles.push([first, first + 2, first + 3]);
        mesh.parts.push(Part {
            name: names
                .get(i)
                .map_or("lid/1".to_owned(), |name| format!("front tray/{name}")),
            panel: usize::from(i == 5),
            triangles: start..start + 2,
        });
    }
    mesh
}

/// A flat patch of n x m cells, each cut along the same diagonal.
pub(crate) fn grid(n: u32, m: u32) -> Mesh {
    let at = |i: u32, j: u32| i * (m + 1) + j;
    let mut triangles = Vec::new();
    for i in 0..n {
        for j in 0..m {
            let [a, b] = [at(i, j), at(i + 1, j)];
            triangles.push([a, b, a + 1]);
            triangles.push([a + 1, b, b + 1]);
        }
    }
    let points: Vec<Point> = (0..=n)
        .flat_map(|i| (0..=m).map(move |j| Point::new(f64::from(i), f64::from(j), 0.0)))
        .collect();
    Mesh {
        name: "grid".to_owned(),
        unit: LengthUnit::Metre,
        panels: vec!["grid".to_owned()],
        vertices: (0_u32..)
            .zip(&points)
            .map(|(point, _)| Vertex {
                point,
                normal: Vector::z(),
            })
            .collect(),
        points,
        parts: vec![Part {
            name: "grid".to_owned(),
            panel: 0,
            triangles: 0..triangles.len(),
        }],
        triangles,
        evidence: None,
        corner_parts: None,
    }
}

/// Any triangles over points on a helix, all in one patch.
pub(crate) fn loose(points: u32, triangles: Vec<[u32; 3]>) -> Mesh {
    let mut mesh = grid(1, 1);
    mesh.points = (0..points)
        .map(|i| Point::new(f64::from(i).cos(), f64::from(i).sin(), f64::from(i)))
        .collect();
    mesh.vertices = (0..points)
        .map(|point| Vertex {
            point,
            normal: Vector::z(),
        })
        .collect();
    mesh.parts[0].triangles = 0..triangles.len();
    mesh.triangles = triangles;
    mesh
}
