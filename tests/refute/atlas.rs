//! The nearest place of a surface, from evaluation alone: a lattice of samples
//! gives the start, Gauss and Newton's step with difference quotients the rest.

use chordwise::bezier::BezierPatch;
use chordwise::scalar::Point;

use super::soup::Soup;

pub(crate) struct Atlas<'a> {
    pieces: Vec<&'a BezierPatch>,
    lattice: Soup,
    /// Piece and parameters of every lattice triangle.
    places: Vec<(usize, [[f64; 2]; 3])>,
}

/// A place of the surface.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Foot {
    pub(crate) distance: f64,
    pub(crate) piece: usize,
    pub(crate) place: [f64; 2],
}

impl<'a> Atlas<'a> {
    /// Samples every piece at (n + 1) x (n + 1) places.
    pub(crate) fn new(pieces: impl IntoIterator<Item = &'a BezierPatch>, n: u32) -> Self {
        let pieces: Vec<&BezierPatch> = pieces.into_iter().collect();
        let (mut corners, mut places) = (Vec::new(), Vec::new());
        let at = |k: u32| f64::from(k) / f64::from(n);
        for (index, piece) in pieces.iter().enumerate() {
            for i in 0..n {
                for j in 0..n {
                    let [a, b, c, d] = [[i, j], [i + 1, j], [i + 1, j + 1], [i, j + 1]]
                        .map(|[i, j]| [at(i), at(j)]);
                    for triangle in [[a, b, c], [a, c, d]] {
                        corners.push(triangle.map(|[u, v]| piece.eval(u, v)));
                        places.push((index, triangle));
                    }
                }
            }
        }
        Self {
            pieces,
            lattice: Soup::new(corners),
            places,
        }
    }

    /// A near place of the surface; searches on while it is farther than
    /// `enough`. Never nearer than the truth, so it may be taken as proof that
    /// the surface is within its distance.
    pub(crate) fn foot(&self, p: &Point, enough: f64) -> Foot {
        let hit = self.lattice.nearest(p);
        let (piece, corners) = self.places[hit.triangle];
        let at = |axis: usize| (0..3).map(|k| hit.place[k] * corners[k][axis]).sum::<f64>();
        let mut best = self.descend(p, piece, [at(0), at(1)]);
        if best.distance <= enough {
            return best;
        }
        // A fine grid of the likeliest pieces, its best places refined.
        let mut likely: Vec<(f64, usize)> = self
            .places
            .iter()
            .zip(self.lattice.corners())
            .map(|((piece, _), corners)| ((corners[0] - p).norm(), *piece))
            .collect();
        likely.sort_by(|a, b| a.0.total_cmp(&b.0));
        let mut tried: Vec<usize> = Vec::new();
        for (_, piece) in likely {
            if tried.contains(&piece) || tried.len() == 4 {
                continue;
            }
            tried.push(piece);
            // Closer at the ends, where uneven weights crowd the surface.
            let at = |k: u32| (1.0 - (f64::from(k) / 250.0 * std::f64::consts::PI).cos()) / 2.0;
            let mut starts: Vec<(f64, [f64; 2])> = (0..=250)
                .flat_map(|i| (0..=250).map(move |j| [at(i), at(j)]))
                .map(|place| (self.at(p, piece, place), place))
                .collect();
            starts.sort_by(|a, b| a.0.total_cmp(&b.0));
            for &(_, start) in starts.iter().take(40) {
                let foot = self.creep(p, self.descend(p, piece, start), enough);
                if foot.distance < best.distance {
                    best = foot;
                }
                if best.distance <= enough {
                    return best;
                }
            }
        }
        best
    }

    fn at(&self, p: &Point, piece: usize, [u, v]: [f64; 2]) -> f64 {
        (self.pieces[piece].eval(u, v) - p).norm()
    }

    fn descend(&self, p: &Point, piece: usize, start: [f64; 2]) -> Foot {
        let surface = self.pieces[piece];
        let mut best = Foot {
            distance: self.at(p, piece, start),
            piece,
            place: start,
        };
        let h = 1e-5;
        for _ in 0..12 {
            let [u, v] = best.place;
            let from = surface.eval(u, v) - p;
            let slope = |low: [f64; 2], high: [f64; 2], step: f64| {
                (surface.eval(high[0], high[1]) - surface.eval(low[0], low[1])) / step
            };
            let (u0, u1) = ((u - h).max(0.0), (u + h).min(1.0));
            let (v0, v1) = ((v - h).max(0.0), (v + h).min(1.0));
            let su = slope([u0, v], [u1, v], u1 - u0);
            let sv = slope([u, v0], [u, v1], v1 - v0);
            let (a, b, c) = (su.dot(&su), su.dot(&sv), sv.dot(&sv));
            let (f, g) = (-su.dot(&from), -sv.dot(&from));
            let determinant = a * c - b * b;
            let full = [(f * c - g * b) / determinant, (g * a - f * b) / determinant];
            let single = [[f / a, 0.0], [0.0, g / c]];
            let mut moved = false;
            'steps: for step in [full, single[0], single[1]] {
                for shrink in [1.0, 0.5, 0.1, 0.01] {
                    let place = [u + shrink * step[0], v + shrink * step[1]];
                    if !place.iter().all(|x| x.is_finite()) {
                        continue;
                    }
                    let place = place.map(|x| x.clamp(0.0, 1.0));
                    let distance = self.at(p, piece, place);
                    if distance < best.distance {
                        moved = best.distance - distance > 1e-12 * best.distance;
                        best = Foot {
                            distance,
                            piece,
                            place,
                        };
                        break 'steps;
                    }
                }
            }
            if !moved {
                break;
            }
        }
        best
    }

    /// Tries the eight neighbours of a place with shrinking steps.
    fn creep(&self, p: &Point, mut best: Foot, enough: f64) -> Foot {
        let mut step = 0.02;
        while step > 1e-9 && best.distance > enough {
            let mut moved = false;
            for [x, y] in [
                [1.0, 0.0],
                [-1.0, 0.0],
                [0.0, 1.0],
                [0.0, -1.0],
                [1.0, 1.0],
                [-1.0, -1.0],
                [1.0, -1.0],
                [-1.0, 1.0],
            ] {
                let place = [best.place[0] + x * step, best.place[1] + y * step];
                let place = place.map(|t| t.clamp(0.0, 1.0));
                let distance = self.at(p, best.piece, place);
                if distance < best.distance {
                    best.distance = distance;
                    best.place = place;
                    moved = true;
                }
            }
            if !moved {
                step *= 0.5;
            }
        }
        best
    }
}
