//! Every shipped set reads without faults, and so does every example of the
//! format's description.
#![allow(
    clippy::unwrap_used,
    clippy::float_cmp,
    reason = "a panic is how a test fails, and exact values are meant"
)]

use chordwise::patch_set::{Finding, PatchSet, Reading, Warning};

fn shipped() -> Vec<(String, Reading)> {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/patches");
    let mut paths: Vec<_> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|ending| ending == "ron"))
        .collect();
    paths.sort();
    paths
        .into_iter()
        .map(|path| {
            let name = path.file_stem().unwrap().to_str().unwrap().to_owned();
            let reading = PatchSet::read(&path).unwrap_or_else(|faults| panic!("{faults}"));
            (name, reading)
        })
        .collect()
}

#[test]
fn every_shipped_set_reads() {
    let sets = shipped();
    assert!(sets.len() >= 21);
    for (name, reading) in &sets {
        for warning in &reading.warnings {
            // Poles are meant; anything else would be a slip of ours.
            assert!(
                matches!(warning.finding, Finding::Warning(Warning::CollapsedEdge(_))),
                "{name}: {}",
                warning.sentence()
            );
        }
    }
}

#[test]
fn every_shipped_set_says_what_it_is_for() {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/patches");
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_some_and(|ending| ending == "ron") {
            let text = std::fs::read_to_string(&path).unwrap();
            assert!(text.starts_with("// "), "{}", path.display());
        }
    }
}

/// The table of the classic teapot (published by M. Newell, 1975; figures
/// computed from that net independently of this project).
#[test]
fn the_teapot_is_the_teapot() {
    let (_, reading) = shipped()
        .into_iter()
        .find(|(name, _)| name == "teapot")
        .unwrap();
    let set = &reading.set;
    assert_eq!(set.patches().len(), 32);
    assert_eq!(set.pieces().len(), 32);
    let panels: Vec<(&str, usize)> = set
        .panels()
        .iter()
        .map(|panel| (panel.name.as_str(), panel.patches.len()))
        .collect();
    assert_eq!(
        panels,
        [
            ("rim", 4),
            ("body", 8),
            ("handle", 4),
            ("spout", 4),
            ("lid", 8),
            ("bottom", 4)
        ]
    );
    // Eight collapsed edges, each told once.
    assert_eq!(reading.warnings.len(), 8);
    let (mut low, mut high) = ([f64::INFINITY; 3], [f64::NEG_INFINITY; 3]);
    for piece in set.pieces() {
        for point in piece.surface.control_points() {
            for axis in 0..3 {
                low[axis] = low[axis].min(point[axis]);
                high[axis] = high[axis].max(point[axis]);
            }
        }
    }
    assert!(low == [-3.0, -2.0, 0.0] && high == [3.525, 2.0, 3.15]);
    let areas = [2.3198, 28.7035, 3.3039, 4.3084, 6.7484, 7.4992];
    for (panel, expected) in set.panels().iter().zip(areas) {
        let pieces = panel.patches.iter().map(|id| &set.pieces()[id.index()]);
        let area: f64 = pieces.map(|piece| area(&piece.surface)).sum();
        assert!((area - expected).abs() < 1e-3, "{}: {area}", panel.name);
    }
}

/// The midpoint rule on 80 x 80 cells.
fn area(surface: &chordwise::bezier::BezierPatch) -> f64 {
    let n = 80;
    let middle = |k: i32| (f64::from(k) + 0.5) / f64::from(n);
    let cells = (0..n).flat_map(|i| (0..n).map(move |j| (i, j)));
    let sum: f64 = cells
        .map(|(i, j)| surface.jet(middle(i), middle(j)).cross().norm())
        .sum();
    sum / f64::from(n * n)
}

#[test]
fn every_example_of_the_description_reads() {
    let text = include_str!("../patches/README.md");
    let mut count = 0;
    for block in text.split("```ron\n").skip(1) {
        let example = block.split("```").next().unwrap();
        if let Err(faults) = PatchSet::from_ron(example, "patches/README.md") {
            panic!("{}\n{example}", faults.render(false));
        }
        count += 1;
    }
    assert!(count >= 17, "{count}");
}

/// Every kind and every field of the schema appears in the description.
#[test]
fn the_description_names_every_kind_and_field() {
    let text = include_str!("../patches/README.md");
    for kind in chordwise::surface::Surface::KINDS {
        assert!(text.contains(&format!("### {kind}\n")), "{kind}");
    }
    for field in [
        "name",
        "units",
        "tolerance",
        "points",
        "patches",
        "copies",
        "seams",
        "surface",
        "flip",
        "mirror",
        "place",
        "axis",
        "angle_deg",
        "about",
        "shift",
        "of",
        "between",
        "and",
        "demand",
        "chord",
        "normal_deg",
        "max_edge",
        "gap",
        "search",
        "tangent_deg",
        "crease_deg",
        "curvature_per_mm",
        "net",
        "indexed",
        "weights",
        "degree",
        "knots",
        "origin",
        "center",
        "start",
        "radius",
        "height",
        "top_radius",
        "longitude_deg",
        "latitude_deg",
        "major",
        "minor",
        "tube_deg",
        "profile",
        "from",
        "to",
        "u0",
        "u1",
        "v0",
        "v1",
    ] {
        let written = format!("{field}: ");
        let broken = format!("{field}:\n");
        assert!(text.contains(&written) || text.contains(&broken), "{field}");
    }
}
