//! Thinning: inner vertices are taken out where what closes the hole is proved.
//!
//! The triangles round a vertex are replaced by two fewer, ears cut off the hole
//! one after the other, the one with the smallest estimated error first. What is
//! new and the rings round it are proved as ever; if that fails the triangles
//! are put back.

use super::certificate::Prover;
use super::fill::Proved;
use super::layout::INNER;
use super::triangulation::{BORDER, doubled_area, is_proper};
use super::work::{Work, index};

/// A hole is not tried where an ear is estimated above this part of the chord.
const HOPEFUL: f64 = 1.03;

/// Vertices with more triangles are left where they are.
const WIDEST: usize = 10;

/// Passes over all vertices at most: each ends what the one before has made
/// possible.
const PASSES: usize = 3;

impl Work<'_> {
    /// Takes out what vertices it can. All triangles must be proved before, and
    /// are after.
    pub(super) fn thin(&mut self, prover: &mut Prover) {
        self.dead = vec![false; self.figures.len()];
        let mut star_of = vec![BORDER; self.layout.points.len()];
        for (t, corners) in self.layout.triangulation.triangles.iter().enumerate() {
            corners.iter().for_each(|&v| star_of[v as usize] = index(t));
        }
        for _ in 0..PASSES {
            let mut any = false;
            for vertex in 0..index(star_of.len()) {
                let inner = self.layout.vertices[vertex as usize] == INNER;
                if inner && star_of[vertex as usize] != BORDER {
                    any |= self.take_out(prover, vertex, &mut star_of);
                }
            }
            if !any {
                break;
            }
        }
    }

    /// Takes one vertex out if what closes the hole is proved.
    fn take_out(&mut self, prover: &mut Prover, vertex: u32, star_of: &mut [u32]) -> bool {
        let mesh = &self.layout.triangulation;
        let star = mesh.star(star_of[vertex as usize], vertex);
        if star.len() < 3 || star.len() > WIDEST {
            return false;
        }
        let Some(ears) = self.ears(vertex, &star) else {
            return false;
        };
        let before = self.layout.triangulation.replace(&star, &ears);
        for &t in &star {
            self.forget(t);
        }
        let Some(figures) = self.proved_round(prover, &star[..ears.len()]) else {
            self.layout.triangulation.put_back(&star, before);
            for &t in &star {
                self.forget(t);
            }
            return false;
        };
        for (t, figure) in figures {
            self.figures[t as usize] = figure;
        }
        for (&t, corners) in star.iter().zip(&ears) {
            corners.iter().for_each(|&v| star_of[v as usize] = t);
        }
        for &t in &star[ears.len()..] {
            self.dead[t as usize] = true;
            self.figures[t as usize] = Proved::default();
        }
        star_of[vertex as usize] = BORDER;
        true
    }

    /// The triangles that close the hole of a vertex, if they are worth a proof.
    fn ears(&self, vertex: u32, star: &[u32]) -> Option<Vec<[u32; 3]>> {
        let mesh = &self.layout.triangulation;
        let most = HOPEFUL * self.limits.chord;
        let mut rim: Vec<u32> = star
            .iter()
            .map(|&t| {
                let corners = mesh.triangles[t as usize];
                let at = corners.iter().position(|&v| v == vertex);
                corners[(at.expect("a star is made of triangles at its vertex") + 1) % 3]
            })
            .collect();
        let mut ears = Vec::with_capacity(rim.len() - 2);
        while rim.len() > 2 {
            let count = rim.len();
            let ear = |k: usize| [rim[(k + count - 1) % count], rim[k], rim[(k + 1) % count]];
            let rated = (0..count).filter(|&k| self.is_ear(ear(k), &rim));
            let rated = rated.map(|k| (self.error(ear(k)), k));
            let (error, k) = rated.min_by(|a, b| a.0.total_cmp(&b.0))?;
            if error > most || self.faces_inwards(ear(k)) {
                return None;
            }
            ears.push(ear(k));
            rim.remove(k);
        }
        Some(ears)
    }

    /// Whether a corner of a rim can be cut off: with area, and nothing in it.
    fn is_ear(&self, corners: [u32; 3], rim: &[u32]) -> bool {
        let mesh = &self.layout.triangulation;
        let places = mesh.places_of(corners);
        if !is_proper(places) {
            return false;
        }
        let [a, b, c] = places;
        rim.iter().filter(|v| !corners.contains(v)).all(|&v| {
            let p = mesh.places[v as usize];
            let sides = [[a, b, p], [b, c, p], [c, a, p]];
            sides.into_iter().any(|side| doubled_area(side) < 0.0)
        })
    }

    /// The figures of some triangles and of the rings round them; `None` if one
    /// fails.
    fn proved_round(&mut self, prover: &mut Prover, changed: &[u32]) -> Option<Vec<(u32, Proved)>> {
        let mut ring = Vec::new();
        let mut affected = self.with_rings(changed.to_vec(), &mut ring);
        // What is new fails first.
        affected.sort_by_key(|t| !changed.contains(t));
        let mut figures = Vec::with_capacity(affected.len());
        for t in affected {
            let figure = self.judge(prover, t, &mut ring);
            if figure.largest() > self.limits.chord || !self.keeps_shape(t) {
                return None;
            }
            figures.push((t, figure));
        }
        Some(figures)
    }
}
