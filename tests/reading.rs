//! What a file means: units, tolerances, names, panels, copies, demands.
#![allow(
    clippy::unwrap_used,
    clippy::float_cmp,
    reason = "a panic is how a test fails, and exact values are meant"
)]

use chordwise::bezier::Side;
use chordwise::patch_set::{Demand, PatchSet, Reading, SeamEnd};
use chordwise::scalar::LengthUnit;

fn read(text: &str) -> Reading {
    PatchSet::from_ron(text, "test.ron").unwrap_or_else(|faults| panic!("{faults}"))
}

#[test]
fn the_schema_reads_as_documented() {
    let reading = read(
        r#"(
        name: "front quarter", units: m,
        tolerance: (chord: 0.00005, normal_deg: 15, gap: 0.00001, curvature_per_mm: 0.0002),
        points: [(0, 0, 0), (1, 0, 0), (0, 1, 0), (1, 1, 0)],
        patches: [
            (name: "wing left/1", surface: Bezier(indexed: [[0, 2], [1, 3]])),
            (name: "wing left/2", flip: true, surface: Bezier(net: [[(1, 0, 0), (1, 1, 0)], [(2, 0, 0), (2, 1, 0)]], weights: [[1, 1], [1, 2]])),
            (name: "sill/1", mirror: Y, place: (axis: (0, 0, 1), angle_deg: 90, about: (1, 0, 0), shift: (0, 0, 2)),
             surface: BSpline(degree: (1, 2), knots: ([0, 0, 1, 1], [0, 0, 0, 1, 1, 1]), net: [[(0, 0, 0), (0, 1, 1), (0, 2, 0)], [(1, 0, 0), (1, 1, 1), (1, 2, 0)]])),
            (name: "lamp", surface: Sphere(radius: 0.1, latitude_deg: (0, 90))),
        ],
        copies: [(of: "wing left", name: "wing right", mirror: Y, place: (shift: (0, -1, 0)))],
        seams: [
            (between: ("wing left/1", U1), and: ("wing left/2", U0), demand: G1),
            (between: "wing right", and: "sill", demand: open),
            (between: ("wing right/2", V0), and: "lamp", demand: crease),
        ],
    )"#,
    );
    let set = &reading.set;
    assert_eq!(set.unit(), LengthUnit::Metre);
    assert_eq!(set.patches().len(), 6);
    let names: Vec<&str> = set.panels().iter().map(|p| p.name.as_str()).collect();
    assert_eq!(names, ["wing left", "sill", "lamp", "wing right"]);
    // A mirrored patch is turned over, a flipped one back again.
    let flips: Vec<bool> = set.patches().iter().map(|p| p.flipped).collect();
    assert_eq!(flips, [false, true, true, false, true, false]);
    approx::assert_relative_eq!(set.tolerances().search.get(), 1e-4);
    let corner = set.pieces()[2].surface.control_point(1, 2);
    // (1, 2, 0) mirrored to (1, -2, 0), turned by 90 degrees about (1, 0, 0).
    assert_eq!(corner, chordwise::scalar::Point::new(3.0, 0.0, 2.0));
    let ids: Vec<_> = (0..6)
        .map(|k| {
            set.panels()
                .iter()
                .flat_map(|p| &p.patches)
                .copied()
                .find(|id| id.index() == k)
                .unwrap()
        })
        .collect();
    assert_eq!(
        set.demand((ids[1], Side::U0), (ids[0], Side::U1)),
        Some(Demand::G1)
    );
    assert_eq!(set.demand((ids[1], Side::U0), (ids[0], Side::U0)), None);
    assert_eq!(
        set.demand((ids[2], Side::V0), (ids[4], Side::U0)),
        Some(Demand::Open)
    );
    assert_eq!(
        set.demand((ids[3], Side::V0), (ids[5], Side::V0)),
        Some(Demand::Crease)
    );
    assert!(matches!(set.demands()[1].between, SeamEnd::Panel(_)));
}

/// Defaults are stated in millimetres: 0.1 chord, 0.01 gap, 10 x gap search.
#[test]
fn default_tolerances_are_converted_to_the_unit() {
    for (unit, in_mm) in [("m", 1000.0), ("cm", 10.0), ("mm", 1.0), ("inch", 25.4)] {
        let text = format!("(units: {unit}, patches: [(name: \"a\", surface: Sphere(radius: 9))])");
        let set = read(&text).set;
        let tolerances = set.tolerances();
        for (found, mm) in [
            (tolerances.chord, 0.1),
            (tolerances.gap, 0.01),
            (tolerances.search, 0.1),
        ] {
            approx::assert_relative_eq!(found.get() * in_mm, mm, max_relative = 1e-14);
        }
        approx::assert_relative_eq!(tolerances.tangent_deg.get(), 0.1);
        approx::assert_relative_eq!(tolerances.crease_deg.get(), 10.0);
        assert!(tolerances.normal_deg.is_none());
        assert!(tolerances.max_edge.is_none());
        assert!(tolerances.curvature_per_mm.is_none());
    }
}
