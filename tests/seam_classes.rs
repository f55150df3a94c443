//! Tolerance classes and demands by pattern, from the text of a set.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use chordwise::continuity::{Finding, Survey, SurveyedSeam, Verdict};
use chordwise::patch_set::{Demand, DemandSource, PatchSet};
use chordwise::report::SeamReport;
use chordwise::topology::Topology;

/// Two planes that meet at 0.3 degrees, and what the set says besides.
fn seam(more: &str, tolerance: &str) -> (PatchSet, SurveyedSeam) {
    let z = 100.0 * 0.3_f64.to_radians().tan();
    let text = format!(
        r#"(tolerance: ({tolerance}), patches: [
            (name: "roof left/1", surface: Plane(origin: (0, 0, 0), u: (100, 0, 0), v: (0, 50, 0))),
            (name: "roof right/1", surface: Plane(origin: (100, 0, 0), u: (100, 0, {z}), v: (0, 50, 0))),
        ], {more})"#
    );
    let set = PatchSet::from_ron(&text, "classes").expect("valid").set;
    let topology = Topology::build(&set).expect("pairs");
    let seam = Survey::of(&set, &topology).seams.remove(0);
    (set, seam)
}

#[test]
fn classes_of_seams_go_before_panels_before_the_set() {
    for (more, tolerance, limit, source, verdict) in [
        ("", "", 0.1, "default", Verdict::Fault),
        ("", "tangent_deg: 0.4", 0.4, "set", Verdict::Met),
        ("", "class: B", 0.2, "class B, set", Verdict::Fault),
        ("", "class: C", 0.5, "class C, set", Verdict::Met),
        (
            "",
            "class: C, tangent_deg: 0.15",
            0.15,
            "set",
            Verdict::Fault,
        ),
        (
            r#"classes: [(of: "roof*", class: C)]"#,
            "class: A",
            0.5,
            "class C, panel roof left",
            Verdict::Met,
        ),
        // The stricter of two, the later of two that fit.
        (
            r#"classes: [(of: "*", class: C), (of: "roof right", class: B)]"#,
            "",
            0.2,
            "class B, panel roof right",
            Verdict::Fault,
        ),
        (
            r#"seams: [(between: "roof left", and: "roof right", demand: G1, class: C)],
               classes: [(of: "*", class: A)]"#,
            "",
            0.5,
            "class C, seam",
            Verdict::Met,
        ),
        (
            r#"seams: [(between: "*right", and: "roof*", demand: G1, class: C)]"#,
            "",
            0.5,
            "class C, seam",
            Verdict::Met,
        ),
    ] {
        let (set, seam) = seam(more, tolerance);
        assert!(
            (seam.limits.tangent_deg.value - limit).abs() < 1e-12,
            "{more}"
        );
        assert_eq!(seam.limits.tangent_deg.source.label(&set), source);
        assert_eq!(seam.verdict, verdict, "{more} {tolerance}");
        assert!((seam.severity - 0.3 / limit).abs() < 1e-6);
    }
}

#[test]
fn names_go_before_patterns_and_the_first_pattern_holds() {
    let pattern = r#"(between: "roof*", and: "*", demand: G0)"#;
    let later = r#"(between: "*", and: "*", demand: G2)"#;
    let named = r#"(between: "roof left", and: "roof right", demand: crease)"#;
    let demand = |list: &str| {
        let (_, seam) = seam(&format!("seams: [{list}]"), "");
        (seam.demand, seam.demand_source)
    };
    assert_eq!(
        demand(&format!("{pattern}, {later}")),
        (Demand::G0, DemandSource::Pattern)
    );
    assert_eq!(
        demand(&format!("{pattern}, {named}")),
        (Demand::Crease, DemandSource::Stated)
    );
    // Open by pattern is not joined.
    let (_, seam) = seam(r#"seams: [(between: "*", and: "*", demand: open)]"#, "");
    assert_eq!((seam.finding, seam.joined), (Finding::Open, false));
}

#[test]
fn a_pattern_that_fits_nothing_is_refused() {
    let text = r#"(patches: [(name: "a/1", surface: Sphere(radius: 5))],
        seams: [(between: "b*", and: "a", demand: G1)], classes: [(of: "c*", class: B)])"#;
    let faults = PatchSet::from_ron(text, "x").expect_err("refused").list;
    assert_eq!(faults.len(), 2);
}

/// Every field and column is explained.
#[test]
fn the_description_names_every_field() {
    let guide =
        std::fs::read_to_string(concat!(env!("CARGO_MANIFEST_DIR"), "/patches/SEAMS.md")).unwrap();
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/patches/front_quarter.ron");
    let set = PatchSet::read(path).unwrap().set;
    let topology = Topology::build(&set).unwrap();
    let report = SeamReport::new(&set, &Survey::of(&set, &topology), None);
    fn names(value: &serde_json::Value, into: &mut Vec<String>) {
        match value {
            serde_json::Value::Object(map) => {
                for (name, value) in map {
                    into.push(name.clone());
                    names(value, into);
                }
            }
            serde_json::Value::Array(list) => list.iter().for_each(|v| names(v, into)),
            _ => {}
        }
    }
    let mut all = Vec::new();
    names(&serde_json::to_value(&report).unwrap(), &mut all);
    all.sort();
    all.dedup();
    assert!(all.len() > 50);
    for name in all {
        assert!(
            guide.contains(&format!("`{name}`")),
            "SEAMS.md lacks {name}"
        );
    }
    // As many cells in every line as in the head; no name here needs quotes.
    let csv = report.csv();
    let mut lines = csv.split("\r\n");
    let columns = lines.next().unwrap().split(',').count();
    assert_eq!(columns, 37);
    assert_eq!(csv.matches("\r\n").count(), report.seams.len() + 1);
    for line in lines.filter(|line| !line.is_empty()) {
        assert!(line.split(',').count() >= columns, "{line}");
    }
}
