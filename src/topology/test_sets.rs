//! Sets built in code, for tests of topology and of what rests on it.

use std::collections::BTreeMap;

use crate::bezier::{BezierPatch, Side};
use crate::patch_set::{
    Demand, Panel, PanelId, Patch, PatchId, PatchSet, Piece, SeamDemand, SeamEnd, Standard,
    Tolerances,
};
use crate::scalar::{LengthUnit, Point, Tolerance};

/// An empty set in millimetres with the documented default tolerances.
pub(crate) fn empty() -> PatchSet {
    let tolerance = |x| Tolerance::new(x).unwrap();
    PatchSet {
        name: "test".to_owned(),
        unit: LengthUnit::Millimetre,
        tolerances: Tolerances {
            chord: tolerance(0.1),
            normal_deg: None,
            max_edge: None,
            gap: tolerance(0.01),
            search: tolerance(0.1),
            tangent_deg: tolerance(0.1),
            crease_deg: tolerance(10.0),
            curvature_per_mm: None,
            close_gaps: None,
        },
        panels: vec![],
        patches: vec![],
        pieces: vec![],
        demands: vec![],
        demand_of: BTreeMap::new(),
        standard: Standard::default(),
    }
}

/// Adds a patch cut at the given breaks (0 and 1 included).
pub(crate) fn add_grid(
    set: &mut PatchSet,
    name: &str,
    surface: &BezierPatch,
    breaks: [&[f64]; 2],
) -> PatchId {
    let panel_name = name.rsplit_once('/').map_or(name, |(panel, _)| panel);
    let id = PatchId::new(set.patches.len());
    let panel = set
        .panels
        .iter()
        .position(|p| p.name == panel_name)
        .unwrap_or_else(|| {
            set.panels.push(Panel {
                name: panel_name.to_owned(),
                patches: vec![],
                size: None,
            });
            set.panels.len() - 1
        });
    set.panels[panel].patches.push(id);
    let start = set.pieces.len();
    for u in breaks[0].windows(2) {
        for v in breaks[1].windows(2) {
            let (u, v) = ([u[0], u[1]], [v[0], v[1]]);
            set.pieces.push(Piece {
                patch: id,
                u,
                v,
                surface: surface.restrict(u, v),
            });
        }
    }
    set.patches.push(Patch {
        name: name.to_owned(),
        panel: PanelId::new(panel),
        kind: "Bezier",
        flipped: false,
        pieces: start..set.pieces.len(),
        breaks_u: breaks[0].to_vec(),
        breaks_v: breaks[1].to_vec(),
    });
    id
}

/// Adds a patch of one piece.
pub(crate) fn add(set: &mut PatchSet, name: &str, surface: &BezierPatch) -> PatchId {
    add_grid(set, name, surface, [&[0.0, 1.0], &[0.0, 1.0]])
}

/// Adds a patch given as one piece after another in v (a closed surface).
pub(crate) fn add_pieces(set: &mut PatchSet, name: &str, pieces: &[BezierPatch]) -> PatchId {
    let id = add(set, name, &pieces[0]);
    set.pieces.pop();
    let count = pieces.len();
    let at = |k: usize| f64::from(u32::try_from(k).unwrap());
    for (k, surface) in pieces.iter().enumerate() {
        set.pieces.push(Piece {
            patch: id,
            u: [0.0, 1.0],
            v: [at(k), at(k + 1)],
            surface: surface.clone(),
        });
    }
    let patch = &mut set.patches[id.index()];
    patch.pieces = patch.pieces.start..patch.pieces.start + count;
    patch.breaks_v = (0..=count).map(at).collect();
    id
}

/// States a demand between two patch edges.
pub(crate) fn demand(
    set: &mut PatchSet,
    between: (PatchId, Side),
    and: (PatchId, Side),
    demand: Demand,
) {
    let ends = [between, and].map(|(patch, side)| SeamEnd::Edge(patch, side));
    set.demands.push(SeamDemand {
        between: ends[0],
        and: ends[1],
        demand,
    });
    let mut key = ends;
    key.sort_unstable();
    set.demand_of.insert(key, demand);
}

/// A patch of degree (m, n) whose control points are `at(i / m, j / n)`.
pub(crate) fn net((m, n): (usize, usize), at: impl Fn(f64, f64) -> (f64, f64, f64)) -> BezierPatch {
    let ratio = |i: usize, m: usize| {
        f64::from(u32::try_from(i).unwrap()) / f64::from(u32::try_from(m).unwrap())
    };
    let points = (0..=m)
        .flat_map(|i| (0..=n).map(move |j| (i, j)))
        .map(|(i, j)| {
            let (x, y, z) = at(ratio(i, m), ratio(j, n));
            Point::new(x, y, z)
        })
        .collect();
    BezierPatch::new((m, n), points, None).unwrap()
}

/// A flat rectangle in the plane z = 0, bilinear.
pub(crate) fn rectangle(x: [f64; 2], y: [f64; 2]) -> BezierPatch {
    net((1, 1), |u, v| {
        (
            x[0] * (1.0 - u) + x[1] * u,
            y[0] * (1.0 - v) + y[1] * v,
            0.0,
        )
    })
}

/// Quarters of a surface of revolution of the rational profile with control
/// points (radius, height) and weights; u along the profile, v round the axis.
pub(crate) fn revolved(profile: &[(f64, f64, f64)]) -> Vec<BezierPatch> {
    let s = 0.5_f64.sqrt();
    let square = [
        (1.0, 0.0),
        (1.0, 1.0),
        (0.0, 1.0),
        (-1.0, 1.0),
        (-1.0, 0.0),
        (-1.0, -1.0),
        (0.0, -1.0),
        (1.0, -1.0),
    ];
    (0..4)
        .map(|quarter| {
            let mut points = vec![];
            let mut weights = vec![];
            for &(radius, height, weight) in profile {
                for (k, w) in [(0, 1.0), (1, s), (2, 1.0)] {
                    let (x, y) = square[(2 * quarter + k) % 8];
                    points.push(Point::new(radius * x, radius * y, height));
                    weights.push(weight * w);
                }
            }
            BezierPatch::new((profile.len() - 1, 2), points, Some(weights)).unwrap()
        })
        .collect()
}
