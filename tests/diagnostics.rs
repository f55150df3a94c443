//! What the reader is told of a faulty file: the rule, the place, the hint.
#![allow(
    clippy::unwrap_used,
    clippy::float_cmp,
    reason = "a panic is how a test fails, and exact values are meant"
)]

use chordwise::patch_set::{Faults, Finding, PatchSet, SetFile, Warning};

fn faults(text: &str) -> Faults {
    match PatchSet::from_ron(text, "set.ron") {
        Ok(_) => panic!("no fault found in {text}"),
        Err(faults) => faults,
    }
}

fn patch(surface: &str) -> String {
    format!("(patches: [(name: \"wing/1\", surface: {surface})])")
}

/// The single fault of a patch: its line as printed must contain `expected`,
/// and its caret must stand under `at`.
#[track_caller]
fn expect(text: &str, at: &str, expected: &str) {
    let faults = faults(text);
    let printed = faults.to_string();
    assert_eq!(faults.list.len(), 1, "{printed}");
    assert!(printed.contains(expected), "{printed}");
    let position = faults.list[0].position.as_ref().unwrap();
    let line = text.lines().nth(position.line - 1).unwrap();
    let rest: String = line.chars().skip(position.column - 1).collect();
    assert!(rest.starts_with(at), "points at {rest}");
}

const NET: &str = "net: [[(0, 0, 0), (0, 1, 0)], [(1, 0, 0), (1, 1, 0)]]";

#[test]
fn faults_of_nets_are_named_at_their_place() {
    for (surface, at, expected) in [
        (
            "Bezier(net: [[(0, 0, 0), (0, 1, 0)], [(1, 0, 0)]])",
            "[(1, 0, 0)]]",
            "patch `wing/1`, net[1]: row 1 has 1 points and row 0 has 2; all rows must be equally long",
        ),
        ("Bezier(net: [])", "[])", "the net is empty"),
        ("Bezier(net: [[], []])", "[[], []]", "the net is empty"),
        (
            "Bezier(net: [[(0, 0, 0)], [(1, 0, 0)]])",
            "[(0, 0, 0)]",
            "degree 0; a degree must be 1 to 15",
        ),
        (
            "Bezier()",
            "Bezier()",
            "none are given of `net` and `indexed`; write exactly one of the two",
        ),
        (
            "Bezier(net: [[(0, 0, 0), (0, NaN, 0)], [(1, 0, 0), (1, 1, 0)]])",
            "NaN",
            "y is NaN; numbers must be finite",
        ),
        (
            "Bezier(net: [[(0, 0, 0), (0, 1, 0)], [(1, 0, 1e999), (1, 1, 0)]])",
            "1e999",
            "z is inf; numbers must be finite",
        ),
        (
            "Bezier(net: [[(-2e9, 0, 0), (0, 1, 0)], [(1, 0, 0), (1, 1, 0)]])",
            "-2e9",
            "x is -2e9; numbers must keep within 1e9",
        ),
        ("Bezier(indexed: [[0, 1], [2, 3]])", "0, 1]", "index"),
    ] {
        if surface.contains("indexed") {
            let faults = faults(&patch(surface));
            assert_eq!(faults.list.len(), 4);
            assert!(
                faults
                    .to_string()
                    .contains("index 3 is not in `points`, which has 0 entries")
            );
        } else {
            expect(&patch(surface), at, expected);
        }
    }
    for (weights, at, expected) in [
        (
            "[[1, 1]]",
            "[[1, 1]]",
            "1 rows of weights where the points have 2",
        ),
        (
            "[[1, 1], [1]]",
            "[1]]",
            "1 columns of weights where the points have 2",
        ),
        (
            "[[1, 0], [1, 1]]",
            "0]",
            "weight is 0; weights must be positive",
        ),
        (
            "[[1, 1], [-1, 1]]",
            "-1",
            "weight is -1; weights must be positive",
        ),
        (
            "[[1, 1], [1, NaN]]",
            "NaN",
            "weight is NaN; weights must be positive",
        ),
        (
            "[[1, 5e-324], [1, 1]]",
            "5e-324",
            "weights must be positive, from 1e-9 to 1e9",
        ),
    ] {
        expect(
            &patch(&format!("Bezier({NET}, weights: {weights})")),
            at,
            expected,
        );
    }
    let wide = format!(
        "Bezier(net: [{0}, {0}])",
        format_args!("[{}]", "(0, 0, 0), ".repeat(17))
    );
    expect(
        &patch(&wide),
        "[(0, 0, 0)",
        "degree 16; a degree must be 1 to 15",
    );
}

#[test]
fn faults_of_knots_are_named_at_their_place() {
    let spline = |degree: &str, knots: &str| {
        patch(&format!("BSpline(degree: {degree}, knots: {knots}, {NET})"))
    };
    for (degree, knots, at, expected) in [
        (
            "(1, 1)",
            "([0, 0, 1], [0, 0, 1, 1])",
            "[0, 0, 1],",
            "3 knots for 2 points of degree 1; there must be points + degree + 1 = 4",
        ),
        (
            "(1, 1)",
            "([0, 0, 1, 1], [0, 1, 0.5, 1])",
            "0.5",
            "knot 0.5 comes after 1; knots must not decrease",
        ),
        (
            "(1, 1)",
            "([0, 0, 1, inf], [0, 0, 1, 1])",
            "inf",
            "knot is inf; numbers must be finite",
        ),
        (
            "(1, 1)",
            "([0, 0, 0, 0], [0, 0, 1, 1])",
            "[0, 0, 0, 0]",
            "the domain from knot 1 to knot 2 is empty",
        ),
        (
            "(2, 1)",
            "([0, 0, 1, 1], [0, 0, 1, 1])",
            "[0, 0, 1, 1],",
            "2 points for degree 2; there must be at least degree + 1 = 3",
        ),
        (
            "(255, 1)",
            "([0, 0, 1, 1], [0, 0, 1, 1])",
            "255",
            "degree 255; a degree must be 1 to 15",
        ),
        (
            "(1, 0)",
            "([0, 0, 1, 1], [0, 0, 1, 1])",
            "0)",
            "degree 0; a degree must be 1 to 15",
        ),
    ] {
        expect(&spline(degree, knots), at, expected);
    }
    let torn = patch(
        "BSpline(degree: (1, 1), knots: ([0, 0, 1, 1, 2, 2], [0, 0, 1, 1]), net: [[(0,0,0),(0,1,0)],[(1,0,0),(1,1,0)],[(2,0,0),(2,1,0)],[(3,0,0),(3,1,0)]])",
    );
    expect(&torn, "1, 2, 2", "knot 1 occurs 2 times at degree 1");
}

#[test]
fn faults_of_the_round_kinds_are_named() {
    for (surface, at, expected) in [
        ("Sphere(radius: 0)", "0", "radius is 0; it must be positive"),
        (
            "Sphere(radius: 1, latitude_deg: (-100, 0))",
            "(-100",
            "latitudes are -90 to 90 degrees",
        ),
        (
            "Sphere(radius: 1, longitude_deg: (90, 0))",
            "(90, 0)",
            "write (0, 90) and `flip: true`",
        ),
        (
            "Sphere(radius: 1, axis: (0, 0, 0))",
            "(0, 0, 0)",
            "axis has no length",
        ),
        (
            "Sphere(radius: 1, start: (0, 0, 4))",
            "(0, 0, 4)",
            "start is parallel to the axis",
        ),
        ("Torus(major: 1, minor: 2)", "2", "minor 2 exceeds major 1"),
        (
            "Cone(radius: -1, height: 2)",
            "-1",
            "radius is -1; it must not be negative",
        ),
        (
            "Cone(radius: 1, top_radius: 1, height: 0)",
            "0)",
            "that is no surface",
        ),
        (
            "Cylinder(radius: 1, height: 1, angle_deg: (0, 361))",
            "(0, 361)",
            "by at most 360",
        ),
        (
            "Plane(origin: (0, 0, 0), u: (1, 0, 0), v: (-2, 0, 0))",
            "(-2",
            "they must span a parallelogram",
        ),
        (
            "Revolution(profile: Line(from: (0, 0, 0), to: (0, 0, 1)))",
            "Line",
            "the profile lies on the axis",
        ),
        (
            "Revolution(profile: Bezier(points: [(1, 0, 0)]))",
            "[(1",
            "profile.points: 1 points for degree 1",
        ),
        (
            "Ruled(from: Line(from: (0, 0, 0), to: (0, 0, 1)), to: Bezier(points: [(1, 0, 0), (2, 0, inf)]))",
            "inf",
            "to.points[1][2]: z is inf",
        ),
    ] {
        expect(&patch(surface), at, expected);
    }
}

#[test]
fn coons_curves_that_do_not_meet_are_named() {
    let coons = |y: &str| {
        patch(&format!(
            "Coons(u0: Line(from: (0, 0, 0), to: (0, 1, 0)), u1: Line(from: (1, 0, 0), to: (1, {y}, 0)), \
             v0: Line(from: (0, 0, 0), to: (1, 0, 0)), v1: Line(from: (0, 1, 0), to: (1, 1, 0)))"
        ))
    };
    expect(
        &coons("1.5"),
        "Line(from: (1, 0, 0)",
        "v1 and u1 are 0.500000 apart at u = 1, v = 1; the four curves must meet within the gap tolerance of 0.01",
    );
    // Within the gap they do.
    assert!(PatchSet::from_ron(&coons("1.009"), "set.ron").is_ok());
}

#[test]
fn faults_of_the_set_are_named() {
    let good = "(name: \"wing/1\", surface: Sphere(radius: 1))";
    for (text, at, expected) in [
        ("(patches: [])".to_owned(), "[]", "the set has no patches"),
        (
            format!("(patches: [{good}, {good}])"),
            "\"wing/1\"",
            "the name `wing/1` is taken",
        ),
        (
            "(patches: [(name: \"a//b\", surface: Sphere(radius: 1))])".to_owned(),
            "\"a//b\"",
            "empty part",
        ),
        (
            format!("(tolerance: (chord: 0), patches: [{good}])"),
            "0)",
            "chord is 0; a tolerance must be positive",
        ),
        (
            format!("(tolerance: (search: 0.001), patches: [{good}])"),
            "0.001",
            "search 0.001 is below gap 0.01",
        ),
        (
            format!("(points: [(0, NaN, 0)], patches: [{good}])"),
            "NaN",
            "points[0]: y is NaN",
        ),
        (
            format!(
                "(patches: [{good}], seams: [(between: (\"wimg/1\", U0), and: (\"wing/1\", U1), demand: G1)])"
            ),
            "\"wimg/1\"",
            "did you mean `wing/1`?",
        ),
        (
            format!(
                "(patches: [{good}], seams: [(between: \"wnig\", and: \"wing\", demand: open)])"
            ),
            "\"wnig\"",
            "did you mean `wing`?",
        ),
        (
            format!(
                "(patches: [{good}], seams: [(between: (\"wing/1\", U0), and: (\"wing/1\", U0), demand: G1)])"
            ),
            "(\"wing/1\", U0), demand",
            "a seam is between two edges",
        ),
        (
            format!("(patches: [{good}], copies: [(of: \"wnig\", name: \"b\")])"),
            "\"wnig\"",
            "did you mean `wing`?",
        ),
        (
            format!("(patches: [{good}], copies: [(of: \"wing\", name: \"wing\", mirror: Y)])"),
            "\"wing\", mirror",
            "the name `wing/1` is taken",
        ),
        (
            format!(
                "(patches: [{good}], copies: [(of: \"wing\", name: \"b\", place: (axis: (0, 0, 0)))])"
            ),
            "(0, 0, 0)",
            "axis has no length",
        ),
        (
            format!(
                "(patches: [{good}], seams: [(between: \"wing\", and: \"wing\", demand: G1), (between: \"wing\", and: \"wing\", demand: open)])"
            ),
            "open",
            "open is demanded here and G1 before",
        ),
    ] {
        expect(&text, at, expected);
    }
}

#[test]
fn faults_of_writing_are_named_in_our_words() {
    for (text, at, expected) in [
        (
            "(patches: [(name: \"a\", surfase: Sphere(radius: 1))])",
            "surfase",
            "did you mean `surface`?",
        ),
        (
            "(patches: [(name: \"a\", surface: Spere(radius: 1))])",
            "Spere",
            "did you mean `Sphere`?",
        ),
        (
            "(patches: [(name: \"a\", surface: Sphere(radios: 1))])",
            "radios",
            "did you mean `radius`?",
        ),
        (
            "(patches: [(name: \"a\", surface: Sphere())])",
            ")",
            "the field `radius` is missing",
        ),
        (
            "(patches: [(name: \"a\", surface: Sphere(radius: \"x\"))])",
            "\"x\"",
            "expected a number",
        ),
        (
            "(patches: [(name: \"a\", surface: Plane(origin: (0, 0), u: (1, 0, 0), v: (0, 1, 0)))])",
            ")",
            "2 numbers; a point has three, (x, y, z)",
        ),
        (
            "(patches: [(name: \"a\", name: \"b\", surface: Sphere(radius: 1))])",
            "",
            "`name` is given twice",
        ),
        (
            "(units: feet, patches: [])",
            "feet",
            "it must be one of `m`, `cm`, `mm`, `inch`",
        ),
        ("(patches: [(name: \"a\"", "", "the text ends too early"),
    ] {
        expect(text, at, expected);
    }
    let deep = format!("(patches: {}", "[".repeat(200_000));
    assert_eq!(faults(&deep).list.len(), 1);
    let comments = format!("{}(patches: [])", "/*".repeat(200_000));
    assert_eq!(faults(&comments).list.len(), 1);
}

#[test]
fn one_run_names_all_faults_and_no_echoes() {
    let text = "(\n\
        tolerance: (gap: -1),\n\
        points: [(0, 0, 0), (1, NaN, 0)],\n\
        patches: [\n\
            (name: \"wing/1\", surface: Bezier(indexed: [[0, 1], [1, 7]])),\n\
            (name: \"wing/1\", surface: Sphere(radius: 1)),\n\
            (name: \"lamp\", surface: Sphere(radius: NaN)),\n\
        ],\n\
        copies: [(of: \"wing\", name: \"wing right\", mirror: Y)],\n\
        seams: [\n\
            (between: (\"wing/1\", U1), and: (\"lamp\", U0), demand: G1),\n\
            (between: (\"wing right/1\", U1), and: (\"lump\", U0), demand: G1),\n\
        ],\n)";
    let faults = faults(text);
    let lines: Vec<usize> = faults
        .list
        .iter()
        .map(|f| f.position.as_ref().unwrap().line)
        .collect();
    // The gap, the point, the index, the second name, the radius, the lump; what
    // only refers to the faulty wing and lamp is no fault of its own.
    assert_eq!(lines, [2, 3, 5, 6, 7, 12], "{faults}");
}

#[test]
fn carets_stand_under_the_fault_even_in_long_lines() {
    let text = format!(
        "(patches: [(name: \"w\", surface: Bezier(net: [{}[(0, 0, 0), (ä",
        ""
    );
    assert_eq!(faults(&text).list.len(), 1);
    let row = "[(0.25, 0.5, 0.125), (0.75, 0.5, 0.25)], ".repeat(10);
    let text = patch(&format!("Bezier(net: [{row}[(0, 0, NaN), (1, 2, 3)]])"));
    let rendered = faults(&text).render(false);
    let lines: Vec<&str> = rendered.lines().collect();
    let source = lines
        .iter()
        .position(|line| line.contains("NaN") && line.contains(" | "))
        .unwrap();
    let caret = lines[source + 1].find("^^^").unwrap();
    assert_eq!(lines[source].find("NaN"), Some(caret), "{rendered}");
    assert!(rendered.contains("set.ron:1:"), "{rendered}");
    assert!(lines[source].len() < 160);
}

#[test]
fn a_byte_order_mark_is_no_fault() {
    let text = format!("\u{feff}{}", patch("Sphere(radius: 1)"));
    assert!(PatchSet::from_ron(&text, "set.ron").is_ok());
}

#[test]
fn warnings_do_not_stop_the_work() {
    let warnings = |surface: &str| -> Vec<Warning> {
        let reading = PatchSet::from_ron(&patch(surface), "set.ron").unwrap();
        let list = reading.warnings.into_iter();
        list.map(|diagnostic| match diagnostic.finding {
            Finding::Warning(warning) => warning,
            Finding::Fault(fault) => panic!("{fault}"),
        })
        .collect()
    };
    use chordwise::bezier::Side;
    assert_eq!(
        warnings("Sphere(radius: 1)"),
        [
            Warning::CollapsedEdge(Side::V0),
            Warning::CollapsedEdge(Side::V1)
        ]
    );
    assert_eq!(
        warnings("Cone(radius: 1, height: 1)"),
        [Warning::CollapsedEdge(Side::V1)]
    );
    assert_eq!(
        warnings("Bezier(net: [[(0, 0, 0), (1, 0, 0)], [(2, 0, 0), (3, 0, 0)]])"),
        [Warning::ZeroArea]
    );
    assert!(matches!(
        warnings("Sphere(radius: 0.001)")[..],
        [Warning::Tiny { .. }]
    ));
    // The middle rows cross over: the surface folds.
    let fold = "Bezier(net: [[(0, 0, 0), (0, 9, 0)], [(30, 0, 0), (30, 9, 0)], [(-20, 0, 0), (-20, 9, 0)], [(10, 0, 0), (10, 9, 0)]])";
    assert!(matches!(
        warnings(fold)[..],
        [Warning::NormalReverses { .. }]
    ));
    assert!(warnings("Cylinder(radius: 1, height: 1)").is_empty());
}

/// A set built in code passes through the same checks.
#[test]
fn a_set_built_in_code_is_checked_too() {
    let file = SetFile::from_ron(&patch("Sphere(radius: -1)"), "").unwrap();
    let faults = PatchSet::build(file).unwrap_err();
    assert_eq!(
        faults.to_string(),
        "patch `wing/1`, radius: radius is -1; it must be positive"
    );
}

#[test]
fn a_missing_file_and_bytes_that_are_no_text_are_named() {
    let missing = PatchSet::read("no/such/set.ron").unwrap_err();
    assert!(
        missing
            .to_string()
            .starts_with("no/such/set.ron: the file cannot be read")
    );
    let bytes = PatchSet::from_bytes(vec![0xff, 0xfe, 0x00], "x").unwrap_err();
    assert!(bytes.to_string().contains("not UTF-8"));
}
