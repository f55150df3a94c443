//! How the parameters of one patch run in another: which of the eight ways to
//! lay a square on a square.

use super::sheet::Sheet;
use crate::bezier::Side;

/// A map of the unit square onto itself: exchanged first, then reversed.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Course {
    /// Whether u and v are exchanged.
    pub exchanged: bool,
    /// Whether the new u, and the new v, run backwards.
    pub reversed: [bool; 2],
}

impl Course {
    /// All eight, the plain one first.
    #[must_use]
    pub fn all() -> [Self; 8] {
        std::array::from_fn(|k| Self {
            exchanged: k & 4 != 0,
            reversed: [k & 1 != 0, k & 2 != 0],
        })
    }

    /// The course along which two patches lie nearest each other, judged at 25
    /// places; of equals the first.
    pub(super) fn between(old: &Sheet<'_>, new: &Sheet<'_>) -> Self {
        let places = || (0..25_u8).map(|k| [k / 5, k % 5].map(|i| f64::from(i) / 4.0));
        let points: Vec<_> = places().map(|at| old.eval(at)).collect();
        let sum = |course: &Self| -> f64 {
            let there = places().map(|at| new.eval(course.place(at)));
            points.iter().zip(there).map(|(p, q)| (p - q).norm()).sum()
        };
        let mut best = (Self::default(), f64::INFINITY);
        for course in Self::all() {
            let apart = sum(&course);
            if apart < best.1 {
                best = (course, apart);
            }
        }
        best.0
    }

    /// Where a place of the old square is on the new one.
    #[must_use]
    pub fn place(self, at: [f64; 2]) -> [f64; 2] {
        let [a, b] = if self.exchanged { [at[1], at[0]] } else { at };
        let turn = |t: f64, reversed: bool| if reversed { 1.0 - t } else { t };
        [turn(a, self.reversed[0]), turn(b, self.reversed[1])]
    }

    /// The way back.
    #[must_use]
    pub fn inverse(self) -> Self {
        let [a, b] = self.reversed;
        Self {
            exchanged: self.exchanged,
            reversed: if self.exchanged { [b, a] } else { [a, b] },
        }
    }

    /// The new side that an old side became.
    #[must_use]
    pub fn side(self, side: Side) -> Side {
        let [u, v] = self.place(side.at(0.5));
        match (u, v) {
            (u, _) if u < 0.25 => Side::U0,
            (u, _) if u > 0.75 => Side::U1,
            (_, v) if v < 0.25 => Side::V0,
            _ => Side::V1,
        }
    }

    /// Whether S_u x S_v points the other way.
    #[must_use]
    pub fn turns_over(self) -> bool {
        self.exchanged ^ self.reversed[0] ^ self.reversed[1]
    }
}
