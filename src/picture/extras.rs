//! What a mesh file can carry besides the mesh: seams by finding, worst places,
//! normals, curvature combs along borders, isoparametric curves.

use super::colour::srgb;
use super::curves::{SeamCurve, finding_colour};
use crate::bezier::Side;
use crate::continuity::{Finding, Verdict};
use crate::format::{Overlay, Stroke};
use crate::mesh::Mesh;
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::{Cuboid, Point, Vector};
use crate::topology::{EdgeId, patch_side};

/// One kind of extra.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Extra {
    /// Seams as line strips, coloured by finding.
    Seams,
    /// The worst places of seams that are not as demanded, as points.
    Worst,
    /// A line along the normal at every vertex.
    Normals,
    /// The curvature of patch borders as teeth.
    Combs,
    /// Curves of constant u and v.
    Isolines,
}

/// Isoparametric curves of each direction in a piece.
const CURVES: u32 = 3;

/// Places along a border or an isoparametric curve.
const PLACES: u32 = 16;

/// Normals, and teeth at the usual curvature, as a share of the box's diagonal.
const LONG: f64 = 0.02;

/// Normals and isolines.
const PALE: [u8; 3] = [90, 110, 130];
/// Combs.
const TEETH: [u8; 3] = [204, 121, 167];

impl Extra {
    /// All kinds.
    pub const ALL: [Self; 5] = [
        Self::Seams,
        Self::Worst,
        Self::Normals,
        Self::Combs,
        Self::Isolines,
    ];

    /// The name as typed.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Seams => "seams",
            Self::Worst => "worst",
            Self::Normals => "normals",
            Self::Combs => "combs",
            Self::Isolines => "isolines",
        }
    }

    /// The kind of this name.
    #[must_use]
    pub fn named(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|e| e.name() == name)
    }

    /// Makes this kind for the pieces of which `wanted` holds.
    #[must_use]
    pub fn make(
        self,
        set: &PatchSet,
        mesh: &Mesh,
        seams: &[SeamCurve],
        wanted: impl Fn(PieceId) -> bool,
    ) -> Vec<Overlay> {
        let pieces = || {
            (0..set.pieces().len())
                .map(PieceId::new)
                .filter(|p| wanted(*p))
        };
        match self {
            Self::Seams => by_finding(self.name(), Stroke::Strip, seams, |seam| {
                seam.stretches.clone()
            }),
            Self::Worst => {
                let bad: Vec<SeamCurve> = seams
                    .iter()
                    .filter(|s| s.verdict != Verdict::Met)
                    .cloned()
                    .collect();
                by_finding(self.name(), Stroke::Points, &bad, |seam| {
                    vec![vec![seam.worst]]
                })
            }
            Self::Normals => {
                let long = LONG * Cuboid::around(mesh.points.iter().copied()).diagonal();
                let lines = mesh.vertices.iter().flat_map(|vertex| {
                    let from = mesh.points[vertex.point as usize];
                    [from, from + vertex.normal * long]
                });
                vec![self.plain("at vertices", Stroke::Segments, vec![lines.collect()], PALE)]
            }
            Self::Combs => {
                let edges: Vec<EdgeId> = pieces()
                    .flat_map(|piece| Side::ALL.map(|side| EdgeId::of(piece, side)))
                    .filter(|edge| patch_side(set, *edge).is_some())
                    .collect();
                vec![self.plain(
                    "along borders",
                    Stroke::Segments,
                    vec![combs(set, mesh, &edges)],
                    TEETH,
                )]
            }
            Self::Isolines => ["u", "v"]
                .iter()
                .enumerate()
                .map(|(way, name)| {
                    let runs = pieces().flat_map(|p| isolines(set, p, way)).collect();
                    self.plain(&format!("constant {name}"), Stroke::Strip, runs, PALE)
                })
                .collect(),
        }
    }

    fn plain(self, name: &str, stroke: Stroke, runs: Vec<Vec<Point>>, colour: [u8; 3]) -> Overlay {
        Overlay {
            group: self.name(),
            name: name.to_owned(),
            stroke,
            runs,
            colour: srgb(colour),
        }
    }
}

/// One overlay a finding that occurs.
fn by_finding(
    group: &'static str,
    stroke: Stroke,
    seams: &[SeamCurve],
    runs: impl Fn(&SeamCurve) -> Vec<Vec<Point>>,
) -> Vec<Overlay> {
    let mut findings: Vec<Finding> = seams.iter().map(|s| s.finding).collect();
    findings.sort_unstable();
    findings.dedup();
    findings
        .into_iter()
        .map(|finding| Overlay {
            group,
            name: finding.to_string(),
            stroke,
            runs: seams
                .iter()
                .filter(|s| s.finding == finding)
                .flat_map(&runs)
                .collect(),
            colour: finding_colour(finding),
        })
        .collect()
}

/// Teeth along edges, away from the side to which they bend.
fn combs(set: &PatchSet, mesh: &Mesh, edges: &[EdgeId]) -> Vec<Point> {
    let mut found: Vec<(Point, Vector)> = Vec::new();
    for edge in edges {
        let curve = set.pieces()[edge.piece().index()].surface.edge(edge.side());
        for k in 0..=PLACES {
            let jet = curve.jet(f64::from(k) / f64::from(PLACES));
            let square = jet.dt.norm_squared();
            // k n = (c'' - t (t . c'')) / |c'|^2.
            let bend = (jet.dtt - jet.dt * (jet.dt.dot(&jet.dtt) / square)) / square;
            if bend.iter().all(|c| c.is_finite()) {
                found.push((jet.point, bend));
            }
        }
    }
    let mut sizes: Vec<f64> = found.iter().map(|f| f.1.norm()).collect();
    sizes.sort_by(f64::total_cmp);
    let usual = sizes.get(sizes.len() * 9 / 10).copied().unwrap_or(0.0);
    let long = LONG * Cuboid::around(mesh.points.iter().copied()).diagonal()
        / usual.max(f64::MIN_POSITIVE);
    found
        .into_iter()
        .filter(|_| usual > 0.0)
        .flat_map(|(point, bend)| [point, point - bend * long])
        .collect()
}

/// Curves of constant u (way 0) or v (way 1) inside a piece.
fn isolines(set: &PatchSet, piece: PieceId, way: usize) -> Vec<Vec<Point>> {
    let surface = &set.pieces()[piece.index()].surface;
    (1..=CURVES)
        .map(|line| {
            let fixed = f64::from(line) / f64::from(CURVES + 1);
            (0..=PLACES)
                .map(|k| {
                    let along = f64::from(k) / f64::from(PLACES);
                    if way == 0 {
                        surface.eval(fixed, along)
                    } else {
                        surface.eval(along, fixed)
                    }
                })
                .collect()
        })
        .collect()
}
