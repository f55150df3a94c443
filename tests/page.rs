//! The page as text; how it looks and behaves a browser judges (`tests/judges`).
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::fs;
use std::path::Path;

use assert_cmd::Command;
use sha2::{Digest, Sha256};

fn page(set: &Path, jobs: &str) -> (i32, String) {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("page.html");
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(folder.path())
        .arg("report")
        .arg(set)
        .arg("-o")
        .arg(&file)
        .args(["--jobs", jobs])
        .output()
        .unwrap();
    assert_eq!(String::from_utf8_lossy(&output.stdout), "");
    assert_eq!(String::from_utf8_lossy(&output.stderr), "");
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
