//! The page as text; how it looks and behaves a browser judges (`tests/judges`).
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::fs;
use std::path::Path;

use assert_cmd::Command;
use sha2::{Digest, Sha256};

fn page(set: &Path, jobs: &str) -> (i32, String) {
    page_with(set, &["--jobs", jobs])
}

fn page_with(set: &Path, more: &[&str]) -> (i32, String) {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("page.html");
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(folder.path())
        .arg("report")
        .arg(set)
        .arg("-o")
        .arg(&file)
        .args(more)
        .output()
        .unwrap();
    assert_eq!(String::from_utf8_lossy(&output.stdout), "");
    let said = String::from_utf8_lossy(&output.stderr);
    assert!(said.is_empty() || said.starts_with("warning: "), "{said}");
    (
        output.status.code().unwrap(),
        fs::read_to_string(file).unwrap(),
    )
}

#[test]
fn a_page_tells_where_it_comes_from_and_nothing_of_the_machine() {
    let set = Path::new(env!("CARGO_MANIFEST_DIR")).join("patches/nearly_closed.ron");
    let (code, text) = page(&set, "1");
    assert_eq!(code, 1, "the gap is a finding");
    let hash = Sha256::digest(fs::read(&set).unwrap());
    let digits: String = hash.iter().map(|byte| format!("{byte:02x}")).collect();
    assert!(text.contains(&digits));
    assert!(text.contains("chordwise report nearly_closed.ron -o page.html"));
    assert!(text.contains("<strong>Findings: 1 seam not as demanded.</strong>"));
    assert!(text.contains("seam 1") && text.contains("id=\"close-up-1\""));
    let caution: Vec<&str> = chordwise::report::CAUTION.split(' ').collect();
    assert!(text.contains(&caution.join(" ")));
    let folder = set.parent().unwrap().to_str().unwrap();
    assert!(!text.contains(folder));
    // Nothing is loaded: no address but the name of a standard.
    assert_eq!(
        text.matches("http").count(),
        text.matches("http-equiv").count()
    );
    assert_eq!((1, text), page(&set, "3"), "it depends on the threads");
}

#[test]
fn a_clean_set_has_a_clean_page() {
    let set = Path::new(env!("CARGO_MANIFEST_DIR")).join("patches/plane.ron");
    let (code, text) = page(&set, "2");
    assert_eq!(code, 0);
    assert!(text.contains("No findings: every seam is as demanded."));
    assert!(text.contains("the mesh's own 2 triangles"));
}

/// What a user calls things must not end up as markup or script.
#[test]
fn names_are_no_markup() {
    let folder = tempfile::tempdir().unwrap();
    let set = folder.path().join("odd.ron");
    let text = r#"(name: "</script><b>{title}", patches: [(name: "<i>/&x", surface: Plane(origin: (0, 0, 0), u: (9, 0, 0), v: (0, 9, 0)))])"#;
    fs::write(&set, text).unwrap();
    let (_, text) = page(&set, "2");
    assert!(!text.contains("<b>") && !text.contains("<i>"));
    assert_eq!(text.matches("</script>").count(), 2);
    assert!(text.contains("&lt;/script&gt;&lt;b&gt;{title}"));
}

/// Above 100,000 triangles the viewer has a coarser mesh of the whole set; figures
/// and pictures stay those of the mesh itself.
#[test]
fn a_large_mesh_is_coarser_in_the_viewer_and_the_page_says_so() {
    let set = Path::new(env!("CARGO_MANIFEST_DIR")).join("patches/sphere.ron");
    let (code, text) = page_with(&set, &["--chord", "0.025"]);
    assert_eq!(code, 0);
    let numbers = |from: &str| -> Vec<usize> {
        let at = text.find(from).unwrap() + from.len();
        let words = text[at..].split(|c: char| !c.is_ascii_digit() && c != '.');
        words.filter_map(|word| word.parse().ok()).take(2).collect()
    };
    let [whole, shown] = numbers("The mesh has ")[..] else {
        panic!("the page does not say so");
    };
    assert!(whole > 100_000, "{whole}");
    assert!((10_000..=100_000).contains(&shown), "{shown}");
    assert!(text.contains(&format!("<dd>{whole}</dd>")), "the summary");
    let data = text.split("id=\"data\">").nth(1).unwrap();
    let data: serde_json::Value =
        serde_json::from_str(data.split("</script>").next().unwrap()).unwrap();
    // Four characters of base 64 are three bytes; three corners of four bytes.
    let corners = data["corners"].as_str().unwrap();
    let bytes = corners.trim_end_matches('=').len() * 3 / 4;
    assert_eq!(bytes, 12 * shown);
    assert!(data["chord"].as_f64().unwrap() > 0.025);
}

/// The options by which a set is meshed hold here too.
#[test]
fn limits_gaps_and_orientation_are_heeded() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("patches");
    let (code, text) = page_with(&folder.join("nearly_closed.ron"), &["--close-gaps", "0.08"]);
    assert_eq!(code, 1, "a closed gap stays a fault");
    assert!(text.contains("report nearly_closed.ron -o page.html --close-gaps 0.08"));
    let (_, open) = page_with(&folder.join("nearly_closed.ron"), &[]);
    let border = |text: &str| {
        let at = text.find("<dt>border</dt>").unwrap();
        text[at..].lines().next().unwrap().to_owned()
    };
    assert_ne!(border(&text), border(&open), "the gap is not closed");
    for (more, words) in [
        (["--max-triangles", "100"], "at most 1.0e2 are to be made"),
        (["--max-memory", "1MB"], "at most 1 MB are to be taken"),
    ] {
        let output = Command::cargo_bin("chordwise")
            .unwrap()
            .arg("report")
            .arg(folder.join("sphere.ron"))
            .args(["-o", "never.html"])
            .args(more)
            .output()
            .unwrap();
        let said = String::from_utf8_lossy(&output.stderr);
        assert_eq!(output.status.code(), Some(2), "{said}");
        assert!(said.contains(words), "{said}");
    }
    assert!(!Path::new("never.html").exists());
}
