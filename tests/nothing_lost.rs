//! A file is the old one or the new one, whole: whatever the disk, the system
//! or a signal does; and nothing is left beside it.
#![cfg(target_os = "linux")]
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::ffi::{OsStr, OsString};
use std::fs::{self, Permissions};
use std::os::unix::ffi::OsStrExt;
use std::os::unix::fs::{PermissionsExt, symlink};
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};
use std::time::Duration;

const OLD: &[u8] = b"the old file";

fn program() -> PathBuf {
    assert_cmd::cargo::cargo_bin!("chordwise").to_owned()
}

fn set(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("patches")
        .join(name)
}

/// What meshes a set to a file.
fn mesh_to(set: &Path, target: &Path) -> Vec<OsString> {
    let mut arguments: Vec<OsString> = ["tessellate", "-o"].map(Into::into).to_vec();
    arguments.extend([target.into(), set.into()]);
    arguments
}

fn run(arguments: &[OsString]) -> Output {
    Command::new(program()).args(arguments).output().unwrap()
}

/// Runs what a shell makes of the arguments, `$@`.
fn through_shell(script: &str, arguments: &[OsString]) -> Output {
    Command::new("sh")
        .args(["-c", script, "sh"])
        .arg(program())
        .args(arguments)
        .output()
        .unwrap()
}

fn names(folder: &Path) -> Vec<OsString> {
    let entries = fs::read_dir(folder).unwrap();
    let mut names: Vec<OsString> = entries.map(|entry| entry.unwrap().file_name()).collect();
    names.sort();
    names
}

fn said(output: &Output) -> String {
    String::from_utf8_lossy(&output.stderr).into_owned()
}

/// Ends with 2 and a message that has `words`.
#[track_caller]
fn refused(output: &Output, words: &[&str]) {
    let all = said(output);
    assert_eq!(output.status.code(), Some(2), "{all}");
    // Warnings of the set stand before it.
    let said = all
        .rsplit_once("\n\n")
        .map_or(all.as_str(), |(_, last)| last);
    assert!(said.starts_with("error: "), "{said}");
    assert_eq!(said.lines().count(), 1, "{said}");
    for word in words {
        assert!(said.contains(word), "{word}: {said}");
    }
}

#[test]
fn a_file_size_limit_leaves_the_old_file() {
    let folder = tempfile::tempdir().unwrap();
    let target = folder.path().join("teapot.obj");
    for old in [false, true] {
        if old {
            fs::write(&target, OLD).unwrap();
        }
        let before = names(folder.path());
        // Eight blocks of 512 or 1024 bytes; the teapot takes far more.
        let arguments = mesh_to(&set("teapot.ron"), &target);
        let output = through_shell("ulimit -f 8; exec \"$@\"", &arguments);
        refused(
            &output,
            &["teapot.obj: cannot write it; ", "File too large"],
        );
        assert_eq!(names(folder.path()), before);
        assert_eq!(fs::read(&target).ok().as_deref(), old.then_some(OLD));
    }
}

#[test]
fn a_full_small_disk_leaves_the_old_file() {
    let folder = tempfile::tempdir().unwrap();
    let disk = folder.path().join("disk");
    fs::create_dir(&disk).unwrap();
    let mounted = Command::new("mount")
        .args(["-t", "tmpfs", "-o", "size=64k", "tmpfs"])
        .arg(&disk)
        .stderr(Stdio::null())
        .status();
    if !mounted.is_ok_and(|status| status.success()) {
        eprintln!("not tried: only root can make a small disk");
        return;
    }
    let target = disk.join("teapot.obj");
    fs::write(&target, OLD).unwrap();
    let output = run(&mesh_to(&set("teapot.ron"), &target));
    let left = (names(&disk), fs::read(&target).unwrap());
    assert!(
        Command::new("umount")
            .arg(&disk)
            .status()
            .unwrap()
            .success()
    );
    refused(&output, &["teapot.obj: cannot write it; ", "No space left"]);
    assert_eq!(left, (vec!["teapot.obj".into()], OLD.to_vec()));
}

#[test]
fn a_full_device_is_an_error_wherever_it_is_written_to() {
    let full = || {
        fs::OpenOptions::new()
            .write(true)
            .open("/dev/full")
            .unwrap()
    };
    let onto = |arguments: &[OsString]| {
        Command::new(program())
            .args(arguments)
            .stdout(full())
            .output()
            .unwrap()
    };
    let boxed = set("box.ron");
    let output = run(&mesh_to(&boxed, Path::new("/dev/full"))
        .into_iter()
        .chain(["--as".into(), "stl".into()])
        .collect::<Vec<_>>());
    refused(&output, &["/dev/full: cannot write it; ", "No space left"]);
    let mut arguments = mesh_to(&boxed, Path::new("-"));
    arguments.extend(["--as", "stl"].map(Into::into));
    refused(&onto(&arguments), &["standard output: cannot write it; "]);
    // Reports that get lost are told of, and do not end well.
    let folder = tempfile::tempdir().unwrap();
    let target = folder.path().join("box.ply");
    let mut mesh = mesh_to(&boxed, &target);
    mesh.push("--evidence".into());
    refused(
        &onto(&mesh),
        &["standard output: cannot write the report; "],
    );
    assert!(fs::metadata(&target).unwrap().len() > 100);
    for command in ["check", "seams"] {
        let output = onto(&[command.into(), boxed.clone().into()]);
        refused(&output, &["standard output: cannot write "]);
    }
    let audit = ["audit".into(), target.into(), boxed.clone().into()];
    refused(
        &onto(&audit),
        &["standard output: cannot write the report; "],
    );
    mesh.push("--dry-run".into());
    refused(
        &onto(&mesh),
        &["standard output: cannot write the report; "],
    );
    // Where even messages cannot be written, the exit code speaks.
    for arguments in [
        vec!["check".into(), "no such file".into()],
        mesh_to(&boxed, Path::new("/")),
    ] {
        let status = Command::new(program())
            .args(arguments)
            .stderr(full())
            .status()
            .unwrap();
        assert_eq!(status.code(), Some(2));
    }
}

#[test]
fn a_read_only_folder_is_told_of() {
    let folder = tempfile::tempdir().unwrap();
    let target = folder.path().join("box.stl");
    fs::write(&target, OLD).unwrap();
    fs::copy(set("box.ron"), folder.path().join("box.ron")).unwrap();
    fs::set_permissions(folder.path(), Permissions::from_mode(0o555)).unwrap();
    let mut arguments = mesh_to(&folder.path().join("box.ron"), &target);
    // Root may write anywhere, so be somebody else.
    let script = "if [ \"$(id -u)\" = 0 ]; then exec setpriv --reuid=65534 --clear-groups \"$@\"; else exec \"$@\"; fi";
    // The program must be where everybody may run it.
    let public = tempfile::tempdir().unwrap();
    fs::set_permissions(public.path(), Permissions::from_mode(0o755)).unwrap();
    let copy = public.path().join("chordwise");
    fs::copy(program(), &copy).unwrap();
    arguments.insert(0, copy.into());
    let output = Command::new("sh")
        .args(["-c", script, "sh"])
        .args(&arguments)
        .output()
        .unwrap();
    fs::set_permissions(folder.path(), Permissions::from_mode(0o755)).unwrap();
    refused(
        &output,
        &[
            "box.stl: cannot make a file beside it; ",
            "Permission denied",
        ],
    );
    assert_eq!(fs::read(&target).unwrap(), OLD);
    assert_eq!(names(folder.path()), ["box.ron", "box.stl"]);
}

#[test]
fn folders_inputs_and_missing_folders_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let at = |name: &str| folder.path().join(name);
    fs::create_dir(at("meshes.stl")).unwrap();
    fs::copy(set("box.ron"), at("box.ron")).unwrap();
    symlink("box.ron", at("link.stl")).unwrap();
    let input = fs::read(at("box.ron")).unwrap();
    let to = |name: &str| {
        let mut arguments = mesh_to(&at("box.ron"), &at(name));
        arguments.extend(["--as", "stl"].map(Into::into));
        run(&arguments)
    };
    refused(&to("meshes.stl"), &["is a folder; name a file in it"]);
    refused(&to("new/"), &["is a folder; name a file in it"]);
    refused(&to("no/box.stl"), &["there is no folder", "make it first"]);
    for itself in ["box.ron", "./box.ron", "link.stl"] {
        refused(&to(itself), &["is the input itself"]);
    }
    assert_eq!(fs::read(at("box.ron")).unwrap(), input);
    assert_eq!(names(folder.path()), ["box.ron", "link.stl", "meshes.stl"]);
}

#[test]
fn links_stay_and_what_they_lead_to_is_replaced() {
    let folder = tempfile::tempdir().unwrap();
    let at = |name: &str| folder.path().join(name);
    fs::create_dir(at("deep")).unwrap();
    fs::write(at("deep/box.stl"), OLD).unwrap();
    symlink("deep/box.stl", at("link.stl")).unwrap();
    assert_eq!(
        run(&mesh_to(&set("box.ron"), &at("link.stl")))
            .status
            .code(),
        Some(0)
    );
    assert!(fs::symlink_metadata(at("link.stl")).unwrap().is_symlink());
    assert_eq!(
        fs::metadata(at("deep/box.stl")).unwrap().len(),
        84 + 50 * 12
    );
    assert_eq!(names(&at("deep")), ["box.stl"]);
}

#[test]
fn names_need_not_be_unicode() {
    let folder = tempfile::tempdir().unwrap();
    let at = |name: &[u8]| folder.path().join(OsStr::from_bytes(name));
    let (input, output) = (at(b"fl\xfcgel.ron"), at(b"\xff\xfe wing.obj"));
    fs::copy(set("box.ron"), &input).unwrap();
    assert_eq!(run(&mesh_to(&input, &output)).status.code(), Some(0));
    assert!(fs::metadata(&output).unwrap().len() > 500);
    assert_eq!(
        run(&["check".into(), input.clone().into()]).status.code(),
        Some(0)
    );
    // They are told of as well as can be.
    refused(
        &run(&mesh_to(&input, &input)),
        &["gel.ron: is the input itself"],
    );
    assert_eq!(names(folder.path()).len(), 2);
}

#[test]
fn modes_are_as_the_mask_says() {
    let folder = tempfile::tempdir().unwrap();
    for (mask, mode) in [("022", 0o644), ("077", 0o600), ("002", 0o664)] {
        let target = folder.path().join(format!("{mask}.stl"));
        let script = format!("umask {mask}; exec \"$@\"");
        let output = through_shell(&script, &mesh_to(&set("box.ron"), &target));
        assert_eq!(output.status.code(), Some(0), "{}", said(&output));
        assert_eq!(
            fs::metadata(&target).unwrap().permissions().mode() & 0o777,
            mode
        );
    }
}

/// Instants by chance, the same in every run (the constants are Knuth's).
struct Instants(u64);

impl Instants {
    fn below(&mut self, most: Duration) -> Duration {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        Duration::from_nanos((self.0 >> 33) % u64::try_from(most.as_nanos()).unwrap())
    }
}

/// Five hundred runs are killed, half of them while they mesh and half while
/// they write a set of some megabytes, at instants spread over their time.
#[test]
fn five_hundred_kills_leave_the_old_file_or_the_new_one() {
    let folder = tempfile::tempdir().unwrap();
    let mut instants = Instants(1);
    let mut ended = [0; 2];
    for (name, arguments) in [
        (
            "mesh.obj",
            mesh_to(&set("teapot.ron"), &folder.path().join("mesh.obj")),
        ),
        ("set.ron", {
            let target = folder.path().join("set.ron").into();
            let demo = ["demo", "--panels", "3000", "-o"].map(OsString::from);
            demo.into_iter().chain([target]).collect()
        }),
    ] {
        let target = folder.path().join(name);
        let clock = std::time::Instant::now();
        assert_eq!(run(&arguments).status.code(), Some(0));
        let time = clock.elapsed();
        let new = fs::read(&target).unwrap();
        let mut is_new = true;
        for _ in 0..250 {
            if is_new {
                fs::write(&target, OLD).unwrap();
            }
            let mut child = Command::new(program())
                .args(&arguments)
                .stdout(Stdio::null())
                .stderr(Stdio::null())
                .spawn()
                .unwrap();
            std::thread::sleep(instants.below(time + time / 4));
            child.kill().unwrap();
            child.wait().unwrap();
            let left = fs::read(&target).unwrap();
            is_new = left == new;
            assert!(
                is_new || left == OLD,
                "{name}: {} bytes of a mix",
                left.len()
            );
            ended[usize::from(is_new)] += 1;
            // Whoever is killed outright cannot clean up.
            for litter in names(folder.path()) {
                if litter.as_bytes().ends_with(b".part") {
                    fs::remove_file(folder.path().join(litter)).unwrap();
                }
            }
        }
    }
    assert!(
        ended[0] > 50,
        "{ended:?}: hardly any run was killed in time"
    );
    assert!(ended[1] > 10, "{ended:?}: hardly any run got through");
}

/// An interrupt while a mesh is made, before there is a file: 130, the old file
/// as it was, nothing beside it.
#[test]
fn an_interrupt_while_meshing_leaves_the_old_file() {
    for signal in ["INT", "TERM", "HUP"] {
        let folder = tempfile::tempdir().unwrap();
        let target = folder.path().join("mesh.stl");
        fs::write(&target, OLD).unwrap();
        let mut arguments = mesh_to(&set("front_quarter.ron"), &target);
        arguments.extend(["--chord", "0.0005"].map(Into::into));
        let mut child = Command::new("env")
            .args(["--default-signal=INT,TERM,HUP"])
            .arg(program())
            .args(&arguments)
            .spawn()
            .unwrap();
        std::thread::sleep(Duration::from_millis(400));
        let sent = Command::new("kill")
            .args([format!("-{signal}"), child.id().to_string()])
            .status();
        assert!(sent.unwrap().success());
        assert_eq!(child.wait().unwrap().code(), Some(130), "{signal}");
        assert_eq!(fs::read(&target).unwrap(), OLD);
        assert_eq!(names(folder.path()), ["mesh.stl"]);
    }
}

/// Where some signals are ignored by the wish of whoever started the program (a
/// script's background, `nohup`), the others clean up all the same; and those that
/// are ignored do nothing.
#[test]
fn signals_that_are_not_ignored_clean_up() {
    let sent = |signal: &str, child: &std::process::Child| {
        let arguments = [format!("-{signal}"), child.id().to_string()];
        let status = Command::new("kill").args(arguments).status();
        assert!(status.unwrap().success());
    };
    for (ignored, signal) in [("INT,HUP", "TERM"), ("HUP", "INT")] {
        let folder = tempfile::tempdir().unwrap();
        let target = folder.path().join("mesh.stl");
        fs::write(&target, OLD).unwrap();
        let mut arguments = mesh_to(&set("front_quarter.ron"), &target);
        arguments.extend(["--chord", "0.0005", "--stream"].map(Into::into));
        let mut child = Command::new("env")
            .arg("--default-signal=INT,TERM,HUP")
            .arg(format!("--ignore-signal={ignored}"))
            .arg(program())
            .args(&arguments)
            .stderr(Stdio::null())
            .spawn()
            .unwrap();
        // A stream has its file from the beginning.
        while names(folder.path()).len() < 2 {
            std::thread::sleep(Duration::from_millis(5));
        }
        sent("HUP", &child);
        std::thread::sleep(Duration::from_millis(200));
        assert!(child.try_wait().unwrap().is_none(), "HUP is ignored");
        sent(signal, &child);
        assert_eq!(child.wait().unwrap().code(), Some(130), "{signal}");
        assert_eq!(fs::read(&target).unwrap(), OLD);
        assert_eq!(names(folder.path()), ["mesh.stl"]);
    }
}
