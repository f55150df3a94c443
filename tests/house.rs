//! The house keeps its order: rooms import only from rooms above them, files
//! stay short, and what README says can be typed is there.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};

use assert_cmd::Command;

/// A file longer than this, its tests left out, is to be split by noun.
const LONGEST: usize = 400;

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// The rooms in the order of `src/lib.rs`.
fn rooms() -> Vec<String> {
    let text = fs::read_to_string(root().join("src/lib.rs")).unwrap();
    text.lines()
        .filter_map(|line| line.strip_prefix("pub mod ")?.strip_suffix(';'))
        .map(str::to_owned)
        .collect()
}

/// All files below a folder, in order.
fn sources(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(sources(&path));
        } else if path.extension().is_some_and(|e| e == "rs") {
            found.push(path);
        }
    }
    found.sort();
    found
}

/// The room a file belongs to; `None` for the two at the top.
fn room_of(path: &Path) -> Option<String> {
    let below = path.strip_prefix(root().join("src")).unwrap();
    let first = below.components().next().unwrap();
    let name = Path::new(first.as_os_str()).file_stem()?.to_str()?;
    (name != "lib" && name != "main").then(|| name.to_owned())
}

/// The rooms a text names as `crate::room`, also in `use crate::{room, ...}`.
/// Comments count: a link in one says that its writer thinks of that room.
fn imports(text: &str) -> BTreeSet<String> {
    let word = |text: &str| -> String {
        text.chars()
            .take_while(|c| c.is_ascii_alphanumeric() || *c == '_')
            .collect()
    };
    let mut found = BTreeSet::new();
    for (at, _) in text.match_indices("crate::") {
        let after = &text[at + "crate::".len()..];
        let Some(group) = after.strip_prefix('{') else {
            found.insert(word(after));
            continue;
        };
        let (mut depth, mut start) = (0_i32, true);
        for (at, letter) in group.char_indices() {
            match letter {
                '{' => depth += 1,
                '}' if depth == 0 => break,
                '}' => depth -= 1,
                ',' if depth == 0 => start = true,
                _ if start && !letter.is_whitespace() => {
                    found.insert(word(&group[at..]));
                    start = false;
                }
                _ => {}
            }
        }
    }
    found
}

#[test]
fn imports_are_found_in_every_form() {
    let text = "use crate::bezier::Patch;\nuse crate::{scalar::{Point, Vector},\n  mesh, self::x};\n\
                fn f(a: crate::format::Format) {} // [`crate::demo`]";
    let found: Vec<String> = imports(text).into_iter().collect();
    assert_eq!(
        found,
        ["bezier", "demo", "format", "mesh", "scalar", "self"]
    );
}

#[test]
fn a_room_imports_only_from_rooms_above_it() {
    let rooms = rooms();
    let place = |name: &str| rooms.iter().position(|room| room == name);
    assert_eq!(place("scalar"), Some(1), "src/lib.rs is not understood");
    assert!(rooms.len() > 10, "src/lib.rs is not understood");
    let (mut wrong, mut seen) = (Vec::new(), 0);
    for path in sources(&root().join("src")) {
        let Some(room) = room_of(&path) else { continue };
        let own = place(&room).unwrap_or_else(|| panic!("{room} is not in src/lib.rs"));
        for import in imports(&fs::read_to_string(&path).unwrap()) {
            seen += 1;
            match place(&import) {
                Some(other) if other <= own => {}
                Some(_) => wrong.push(format!("{}: `{import}` is below `{room}`", path.display())),
                None => wrong.push(format!("{}: `{import}` is no room", path.display())),
            }
        }
    }
    assert!(seen > 100, "only {seen} imports found");
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn the_guide_draws_the_rooms_in_the_order_of_the_library() {
    let text = fs::read_to_string(root().join("DEVELOPERS.md")).unwrap();
    let drawn: Vec<&str> = text
        .split("```text")
        .nth(1)
        .unwrap()
        .split("```")
        .next()
        .unwrap()
        .lines()
        .filter(|line| !line.starts_with(' ') && !line.is_empty())
        .map(|line| line.split_whitespace().next().unwrap())
        .collect();
    assert_eq!(drawn, rooms());
}

#[test]
fn no_file_is_too_long() {
    let long: Vec<String> = sources(&root().join("src"))
        .into_iter()
        .filter_map(|path| {
            let name = path.file_stem().unwrap().to_str().unwrap().to_owned();
            let is_test = name == "tests" || name.ends_with("_tests") || name == "test_sets";
            let text = fs::read_to_string(&path).unwrap();
            let lines = text
                .lines()
                .take_while(|line| *line != "#[cfg(test)]")
                .count();
            (!is_test && lines > LONGEST).then(|| format!("{}: {lines} lines", path.display()))
        })
        .collect();
    assert!(long.is_empty(), "{}", long.join("\n"));
}

#[test]
fn every_direct_dependency_has_its_reason_in_the_guide() {
    let manifest = fs::read_to_string(root().join("Cargo.toml")).unwrap();
    let guide = fs::read_to_string(root().join("DEVELOPERS.md")).unwrap();
    let mut within = false;
    let mut count = 0;
    for line in manifest.lines() {
        if line.starts_with('[') {
            within = line.ends_with("dependencies]");
        } else if let Some((name, _)) = line.split_once(" = ")
            && within
        {
            count += 1;
            assert!(
                guide.contains(&format!("| {name} |")),
                "DEVELOPERS.md gives no reason for {name}"
            );
        }
    }
    assert!(count > 15, "Cargo.toml is not understood");
}

fn help(arguments: &[&str]) -> String {
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .args(arguments)
        .arg("--help")
        .output()
        .unwrap();
    assert!(output.status.success(), "{arguments:?}");
    String::from_utf8(output.stdout).unwrap()
}

/// The commands, as the program lists them.
fn commands() -> Vec<String> {
    let text = help(&[]);
    let list = text.split("Commands:\n").nth(1).unwrap();
    list.lines()
        .take_while(|line| !line.is_empty())
        .filter_map(|line| line.strip_prefix("  ")?.split_whitespace().next())
        .filter(|name| *name != "help")
        .map(str::to_owned)
        .collect()
}

/// Words of a text that begin with two dashes.
fn options(text: &str) -> BTreeSet<&str> {
    text.split(|c: char| !(c.is_ascii_alphanumeric() || c == '-'))
        .filter(|word| {
            word.strip_prefix("--")
                .is_some_and(|name| name.starts_with(|c: char| c.is_ascii_lowercase()))
        })
        .collect()
}

#[test]
fn the_readme_names_only_what_can_be_typed_and_all_of_it() {
    let readme = fs::read_to_string(root().join("README.md")).unwrap();
    let commands = commands();
    assert_eq!(
        commands,
        [
            "tessellate",
            "audit",
            "seams",
            "draw",
            "report",
            "check",
            "compare",
            "mend",
            "demo",
            "completions",
            "man"
        ]
    );
    let pages: Vec<String> = commands.iter().map(|name| help(&[name])).collect();
    let known: BTreeSet<&str> = pages.iter().flat_map(|page| options(page)).collect();
    // Options of cargo, where README tells how to run and build.
    let others = BTreeSet::from(["--release", "--"]);
    for option in options(&readme).difference(&others) {
        assert!(known.contains(option), "README.md: {option} is no option");
    }
    for option in &known {
        let said = readme.contains(option) || matches!(*option, "--help" | "--version");
        assert!(said, "README.md does not tell of {option}");
    }
    for name in &commands {
        assert!(
            readme.contains(&format!("chordwise {name}")),
            "README.md does not tell of chordwise {name}"
        );
    }
    for after in readme.split("`chordwise ").skip(1) {
        let name: String = after.chars().take_while(char::is_ascii_lowercase).collect();
        assert!(
            commands.contains(&name),
            "README.md: `chordwise {name}` is no command"
        );
    }
}
