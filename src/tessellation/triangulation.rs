//! A triangulation of the parameter square: connectivity and parameters only.
//!
//! Triangles run counterclockwise in (u, v). Every change keeps every triangle
//! at a positive area there, so the triangles always cover the square exactly
//! once: the certificate needs no other property of them.

use crate::bezier::Side;

/// No triangle on the other side: the border of the piece.
pub(super) const BORDER: u32 = u32::MAX;

/// Twice the area below which a parameter triangle counts as flat. The square
/// has sides of 1 and f64 keeps cross products to about 1e-16.
const FLAT: f64 = 1e-14;

/// A vertex that stands for a whole collapsed side. It has no parameter along
/// that side: in each of its triangles it takes the mean of the two others',
/// so that a triangle with the pole and corners at a and b stands for the
/// trapezoid between them and the stretch a..b of the side.
#[derive(Debug, Clone, Copy)]
pub(super) struct Pole {
    pub(super) vertex: u32,
    pub(super) side: Side,
}

impl Pole {
    /// The place on the side beside another place.
    pub(super) fn beside(&self, [u, v]: [f64; 2]) -> [f64; 2] {
        match self.side {
            Side::U0 | Side::U1 => self.side.at(v),
            Side::V0 | Side::V1 => self.side.at(u),
        }
    }
}

/// Where the trapezoid of a triangle at the pole is cut, from the pole. Heights
/// there grow with the distance from the pole, as on a cone, and the remainder of
/// a band over its quadratic part with the band's part of that distance: so bands
/// become narrower outwards. With the whole trapezoid at once the bound of a
/// cone's height is 1.3 times too wide.
const BANDS: [f64; 9] = [
    0.0,
    0.5,
    0.75,
    0.875,
    0.9375,
    0.96875,
    0.984_375,
    0.992_187_5,
    1.0,
];

/// Triangles with their neighbours.
#[derive(Debug, Clone, Default)]
pub(super) struct Triangulation {
    /// Parameters of the vertices.
    pub(super) places: Vec<[f64; 2]>,
    /// The pole, if a side is collapsed.
    pub(super) pole: Option<Pole>,
    /// Corners of the triangles.
    pub(super) triangles: Vec<[u32; 3]>,
    /// `neighbours[t][i]` shares the edge from corner i to corner i + 1.
    pub(super) neighbours: Vec<[u32; 3]>,
}

/// Edge `i` of triangle `t`.
pub(super) type TriangleEdge = (u32, usize);

/// Twice the signed area of a parameter triangle.
pub(super) fn doubled_area([a, b, c]: [[f64; 2]; 3]) -> f64 {
    (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
}

/// Whether the triangle is counterclockwise and not flat.
pub(super) fn is_proper(corners: [[f64; 2]; 3]) -> bool {
    doubled_area(corners) > FLAT
}

pub(super) fn narrow(count: usize) -> u32 {
    u32::try_from(count).expect("a piece has far fewer than 2^32 triangles")
}

impl Triangulation {
    /// Links triangles that share an edge.
    pub(super) fn new(places: Vec<[f64; 2]>, pole: Option<Pole>, triangles: Vec<[u32; 3]>) -> Self {
        let mut half_edges: Vec<(u64, u32)> = Vec::with_capacity(triangles.len() * 3);
        for (t, corners) in triangles.iter().enumerate() {
            for i in 0..3 {
                let (a, b) = (corners[i], corners[(i + 1) % 3]);
                let key = u64::from(a.min(b)) << 32 | u64::from(a.max(b));
                half_edges.push((key, narrow(t * 3 + i)));
            }
        }
        half_edges.sort_unstable();
        let mut neighbours = vec![[BORDER; 3]; triangles.len()];
        for pair in half_edges.windows(2) {
            if pair[0].0 == pair[1].0 {
                let (one, other) = (pair[0].1, pair[1].1);
                neighbours[one as usize / 3][one as usize % 3] = other / 3;
                neighbours[other as usize / 3][other as usize % 3] = one / 3;
            }
        }
        Self {
            places,
            pole,
            triangles,
            neighbours,
        }
    }

    /// Parameters of three vertices as corners of one triangle.
    pub(super) fn places_of(&self, vertices: [u32; 3]) -> [[f64; 2]; 3] {
        let mut places = vertices.map(|v| self.places[v as usize]);
        if let Some((k, pole)) = self.pole_corner(vertices) {
            let (a, b) = (places[(k + 1) % 3], places[(k + 2) % 3]);
            places[k] = pole.beside([(a[0] + b[0]) / 2.0, (a[1] + b[1]) / 2.0]);
        }
        places
    }

    /// Which corner is the pole, if one is.
    pub(super) fn pole_corner(&self, vertices: [u32; 3]) -> Option<(usize, Pole)> {
        let pole = self.pole?;
        let k = vertices.iter().position(|&v| v == pole.vertex)?;
        Some((k, pole))
    }

    /// Parameters of the corners of triangle `t`.
    pub(super) fn corners(&self, t: u32) -> [[f64; 2]; 3] {
        self.places_of(self.triangles[t as usize])
    }

    /// The parameter triangles that a triangle stands for: itself, or with a
    /// corner at the pole its trapezoid in pieces (see [`BANDS`]).
    pub(super) fn cell(&self, corners: [u32; 3]) -> Vec<[[f64; 2]; 3]> {
        let Some((k, pole)) = self.pole_corner(corners) else {
            return vec![self.places_of(corners)];
        };
        let sides = [(k + 1) % 3, (k + 2) % 3].map(|side| {
            let end = self.places[corners[side] as usize];
            let start = pole.beside(end);
            BANDS.map(|part| [0, 1].map(|axis| start[axis] + (end[axis] - start[axis]) * part))
        });
        let bands = sides[0].windows(2).zip(sides[1].windows(2));
        bands
            .flat_map(|(x, y)| [[x[0], x[1], y[1]], [x[0], y[1], y[0]]])
            .collect()
    }

    /// Parameters of the ends of an edge; a pole takes the other end's.
    pub(super) fn ends(&self, (t, i): TriangleEdge) -> [[f64; 2]; 2] {
        let corners = self.triangles[t as usize];
        let ends = [corners[i], corners[(i + 1) % 3]];
        let [a, b] = ends.map(|v| self.places[v as usize]);
        match self.pole {
            Some(pole) if pole.vertex == ends[0] => [pole.beside(b), b],
            Some(pole) if pole.vertex == ends[1] => [a, pole.beside(a)],
            _ => [a, b],
        }
    }

    /// Which edge of `t` leads to `neighbour`.
    pub(super) fn edge_towards(&self, t: u32, neighbour: u32) -> usize {
        self.neighbours[t as usize]
            .iter()
            .position(|&n| n == neighbour)
            .expect("neighbours are mutual")
    }

    /// The four corners round edge `i` of `t`: edge start, far corner of the
    /// neighbour, edge end, far corner of `t`; `None` at the border.
    pub(super) fn quad(&self, (t, i): TriangleEdge) -> Option<[u32; 4]> {
        let other = self.neighbours[t as usize][i];
        if other == BORDER {
            return None;
        }
        let here = self.triangles[t as usize];
        let j = self.edge_towards(other, t);
        let far = self.triangles[other as usize][(j + 2) % 3];
        Some([here[i], far, here[(i + 1) % 3], here[(i + 2) % 3]])
    }

    fn replace_neighbour(&mut self, t: u32, old: u32, new: u32) {
        if t != BORDER {
            let i = self.edge_towards(t, old);
            self.neighbours[t as usize][i] = new;
        }
    }

    /// Exchanges the edge for the other diagonal of its quadrilateral, which
    /// must be convex. Returns the four outer edges.
    pub(super) fn flip(&mut self, (t, i): TriangleEdge) -> [TriangleEdge; 4] {
        let other = self.neighbours[t as usize][i];
        let j = self.edge_towards(other, t);
        let here = self.triangles[t as usize];
        let there = self.triangles[other as usize];
        let (a, b, far, near) = (
            here[i],
            here[(i + 1) % 3],
            there[(j + 2) % 3],
            here[(i + 2) % 3],
        );
        let (n_b_near, n_near_a) = (
            self.neighbours[t as usize][(i + 1) % 3],
            self.neighbours[t as usize][(i + 2) % 3],
        );
        let (n_a_far, n_far_b) = (
            self.neighbours[other as usize][(j + 1) % 3],
            self.neighbours[other as usize][(j + 2) % 3],
        );
        self.triangles[t as usize] = [near, a, far];
        self.neighbours[t as usize] = [n_near_a, n_a_far, other];
        self.triangles[other as usize] = [far, b, near];
        self.neighbours[other as usize] = [n_far_b, n_b_near, t];
        self.replace_neighbour(n_a_far, other, t);
        self.replace_neighbour(n_b_near, t, other);
        [(t, 0), (t, 1), (other, 0), (other, 1)]
    }

    /// Puts a vertex inside triangle `t`; returns the outer edges of the three
    /// triangles it makes.
    pub(super) fn insert_inside(&mut self, t: u32, place: [f64; 2]) -> [TriangleEdge; 3] {
        let vertex = narrow(self.places.len());
        self.places.push(place);
        let [a, b, c] = self.triangles[t as usize];
        let [ab, bc, ca] = self.neighbours[t as usize];
        let (second, third) = (
            narrow(self.triangles.len()),
            narrow(self.triangles.len() + 1),
        );
        self.triangles[t as usize] = [a, b, vertex];
        self.neighbours[t as usize] = [ab, second, third];
        self.triangles.push([b, c, vertex]);
        self.neighbours.push([bc, third, t]);
        self.triangles.push([c, a, vertex]);
        self.neighbours.push([ca, t, second]);
        self.replace_neighbour(bc, t, second);
        self.replace_neighbour(ca, t, third);
        [(t, 0), (second, 0), (third, 0)]
    }

    /// Puts a vertex on edge `i` of `t`, splitting the triangles on both
    /// sides; returns the outer edges of the new triangles.
    pub(super) fn insert_on_edge(
        &mut self,
        (t, i): TriangleEdge,
        place: [f64; 2],
    ) -> Vec<TriangleEdge> {
        let vertex = narrow(self.places.len());
        self.places.push(place);
        let other = self.neighbours[t as usize][i];
        let j = (other != BORDER).then(|| self.edge_towards(other, t));
        let (here_new, here_outer) = self.halve(t, i, vertex);
        let mut outer = here_outer.to_vec();
        if let Some(j) = j {
            let (there_new, there_outer) = self.halve(other, j, vertex);
            outer.extend(there_outer);
            // `t` keeps the edge start, `other` keeps its own: the far halves meet.
            self.neighbours[t as usize][i] = there_new;
            self.neighbours[there_new as usize][0] = t;
            self.neighbours[other as usize][j] = here_new;
            self.neighbours[here_new as usize][0] = other;
        }
        outer
    }

    /// Cuts `t` from `vertex` on its edge `i` to the far corner. `t` keeps the
    /// start of the edge (still as its edge `i`); the new triangle has the end,
    /// as its edge 0.
    fn halve(&mut self, t: u32, i: usize, vertex: u32) -> (u32, [TriangleEdge; 2]) {
        let here = self.triangles[t as usize];
        let (b, c) = (here[(i + 1) % 3], here[(i + 2) % 3]);
        let beyond = self.neighbours[t as usize][(i + 1) % 3];
        let new = narrow(self.triangles.len());
        self.triangles.push([vertex, b, c]);
        self.neighbours.push([BORDER, beyond, t]);
        self.replace_neighbour(beyond, t, new);
        self.triangles[t as usize][(i + 1) % 3] = vertex;
        self.neighbours[t as usize][(i + 1) % 3] = new;
        (new, [(t, (i + 2) % 3), (new, 1)])
    }

    /// All triangles that share a corner with `t` (without `t`), and whether
    /// one of its corners is on the border.
    pub(super) fn ring(&self, t: u32, ring: &mut Vec<u32>) -> bool {
        ring.clear();
        let mut border = false;
        for i in 0..3 {
            border |= !self.fan(t, i, ring);
        }
        ring.sort_unstable();
        ring.dedup();
        border
    }

    /// Adds the triangles round corner `i` of `t`; false if the border cuts
    /// the fan.
    fn fan(&self, t: u32, i: usize, ring: &mut Vec<u32>) -> bool {
        let vertex = self.triangles[t as usize][i];
        // Forward over the edge that ends in the vertex, then, if the border
        // is met, backward over the edge that starts there.
        let mut at = t;
        let mut edge = (i + 2) % 3;
        loop {
            let next = self.neighbours[at as usize][edge];
            if next == t {
                return true;
            }
            if next == BORDER {
                break;
            }
            ring.push(next);
            edge = (self.corner_of(next, vertex) + 2) % 3;
            at = next;
        }
        let (mut at, mut edge) = (t, i);
        loop {
            let next = self.neighbours[at as usize][edge];
            if next == BORDER {
                return false;
            }
            ring.push(next);
            edge = self.corner_of(next, vertex);
            at = next;
        }
    }

    pub(super) fn corner_of(&self, t: u32, vertex: u32) -> usize {
        self.triangles[t as usize]
            .iter()
            .position(|&v| v == vertex)
            .expect("a fan is made of triangles at its vertex")
    }

    /// Every invariant: areas, mutual neighbours on the same edge.
    #[cfg(test)]
    pub(super) fn check(&self) {
        let mut area = 0.0;
        for (t, corners) in self.triangles.iter().enumerate() {
            let t32 = narrow(t);
            assert!(is_proper(self.corners(t32)), "triangle {t} is flat");
            area += doubled_area(self.corners(t32)) / 2.0;
            if let Some((k, pole)) = self.pole_corner(*corners) {
                // The trapezoid is the triangle and two more beside it.
                let at = |i: usize| self.places[corners[(k + i) % 3] as usize];
                let apex = self.corners(t32)[k];
                area += doubled_area([apex, pole.beside(at(1)), at(1)]) / 2.0;
                area += doubled_area([apex, at(2), pole.beside(at(2))]) / 2.0;
            }
            for i in 0..3 {
                let other = self.neighbours[t][i];
                if other != BORDER {
                    let j = self.edge_towards(other, t32);
                    let there = self.triangles[other as usize];
                    assert_eq!(
                        [there[j], there[(j + 1) % 3]],
                        [corners[(i + 1) % 3], corners[i]]
                    );
                }
            }
        }
        approx::assert_relative_eq!(area, 1.0, epsilon = 1e-12);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_fan_round_a_pole_covers_the_square() {
        let places = vec![
            [0.0, 0.0],
            [1.0, 0.4],
            [1.0, 1.0],
            [0.0, 1.0],
            [0.0, 0.3],
            [0.4, 0.5],
        ];
        let fan = vec![[0, 1, 5], [0, 5, 4], [5, 1, 2], [5, 2, 3], [4, 5, 3]];
        let pole = Pole {
            vertex: 0,
            side: Side::V0,
        };
        let mut t = Triangulation::new(places, Some(pole), fan);
        t.check();
        let [a, b] = t.ends((0, 2));
        t.insert_on_edge((0, 2), [(a[0] + b[0]) / 2.0, (a[1] + b[1]) / 2.0]);
        t.check();
    }

    #[test]
    fn insertions_and_flips_keep_the_square_covered() {
        let places = vec![[0.0, 0.0], [1.0, 0.0], [1.0, 1.0], [0.0, 1.0]];
        let mut t = Triangulation::new(places, None, vec![[0, 1, 2], [0, 2, 3]]);
        t.check();
        t.insert_inside(0, [0.6, 0.3]);
        t.check();
        t.insert_on_edge((1, 0), [0.5, 0.5]);
        t.check();
        t.insert_on_edge((0, 0), [0.5, 0.0]);
        t.check();
        let mut flipped = 0;
        for e in 0..narrow(t.triangles.len()) {
            for i in 0..3 {
                if let Some([a, b, c, d]) = t.quad((e, i)) {
                    let at = |v: u32| t.places[v as usize];
                    if is_proper([at(d), at(a), at(b)]) && is_proper([at(b), at(c), at(d)]) {
                        t.flip((e, i));
                        t.check();
                        flipped += 1;
                    }
                }
            }
        }
        assert!(flipped > 3);
        let mut ring = Vec::new();
        assert!(t.ring(0, &mut ring));
        assert!(!ring.is_empty());
    }
}
