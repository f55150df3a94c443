//! The difference of normal curvature across a seam, sampled.
//!
//! Taken along n x t, t the seam's tangent: once the tangent planes agree, one
//! direction that is not the seam's own settles all (the linkage curve theorem,
//! Pegna and Wolter 1992).

use super::angle::Meeting;
use crate::patch_set::PatchSet;
use crate::topology::nearest_from;

/// The largest difference found, and where.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CurvatureStep {
    /// |k1 - k2| in 1/mm: sampled, so at most the true figure.
    pub difference_per_mm: f64,
    /// Both normal curvatures there, in 1/mm, positive where the surface bends
    /// towards the first patch's outward normal.
    pub curvatures_per_mm: [f64; 2],
    /// The parameters on both edges.
    pub at: [f64; 2],
}

impl Meeting {
    /// The largest step of normal curvature at nine places; `None` where
    /// no place has a tangent plane on both sides.
    #[must_use]
    pub fn curvature_step(&self, set: &PatchSet) -> Option<CurvatureStep> {
        let surfaces = self.edges.map(|e| &set.pieces()[e.piece().index()].surface);
        let outward = self.edges.map(|e| {
            if set.patch_of(e.piece()).flipped {
                -1.0
            } else {
                1.0
            }
        });
        let agree = if self.normals_agree(set) { 1.0 } else { -1.0 };
        let edges = [0, 1].map(|k| surfaces[k].edge(self.edges[k].side()));
        let range = [
            self.second[0].min(self.second[1]),
            self.second[0].max(self.second[1]),
        ];
        let per_mm = 1.0 / set.unit().in_mm();
        let mut worst: Option<CurvatureStep> = None;
        for k in 0..=8 {
            let [s, guess] = self.at(f64::from(k) / 8.0);
            let jet = edges[0].jet(s);
            let t = nearest_from(&edges[1], &jet.point, guess, range).t;
            let [u, v] = self.edges[0].side().at(s);
            let first = surfaces[0].jet(u, v);
            let [u, v] = self.edges[1].side().at(t);
            let second = surfaces[1].jet(u, v);
            let (Some(n), Some(m)) = (first.normal(), second.normal()) else {
                continue;
            };
            let (n, m) = (n * outward[0], m * outward[1] * agree);
            let (Some(p), Some(q)) = (
                first.normal_curvature(&n, &n.cross(&jet.dt)),
                second.normal_curvature(&m, &m.cross(&jet.dt)),
            ) else {
                continue;
            };
            let difference = (p - q).abs() * per_mm;
            if worst.is_none_or(|w| difference > w.difference_per_mm) {
                worst = Some(CurvatureStep {
                    difference_per_mm: difference,
                    curvatures_per_mm: [p * per_mm, q * per_mm],
                    at: [s, t],
                });
            }
        }
        worst
    }
}
