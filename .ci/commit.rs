//! Gives a release build the commit it was made from, where there is one: what
//! `--version` says. A build from an archive goes without.
//!
//! Other builds do without too, so that they are not made anew with every
//! commit. No file that is written has the commit in it.

use std::path::Path;
use std::process::Command;

fn main() {
    println!("cargo::rerun-if-changed=.ci/commit.rs");
    let version = std::env::var("CARGO_PKG_VERSION").unwrap_or_default();
    let release = std::env::var("PROFILE").is_ok_and(|profile| profile == "release");
    let commit = if release { commit() } else { None };
    let said = commit.map_or_else(|| version.clone(), |hash| format!("{version} ({hash})"));
    println!("cargo::rustc-env=CHORDWISE_VERSION={said}");
}

/// The commit, if this folder is the top of a working tree of its own.
fn commit() -> Option<String> {
    let folder = std::env::var("CARGO_MANIFEST_DIR").ok()?;
    let git = |arguments: &[&str]| {
        let output = Command::new("git")
            .current_dir(&folder)
            .args(arguments)
            .output()
            .ok()?;
        let text = String::from_utf8(output.stdout).ok()?;
        let text = text.trim();
        (output.status.success() && !text.is_empty()).then(|| text.to_owned())
    };
    // An archive unpacked inside somebody's working tree is not that tree's.
    let top = git(&["rev-parse", "--show-toplevel"])?;
    if Path::new(&top).canonicalize().ok()? != Path::new(&folder).canonicalize().ok()? {
        return None;
    }
    let log = git(&[
        "rev-parse",
        "--path-format=absolute",
        "--git-path",
        "logs/HEAD",
    ])?;
    if Path::new(&log).is_file() {
        println!("cargo::rerun-if-changed={log}");
    }
    git(&["rev-parse", "--short=12", "HEAD"])
}
