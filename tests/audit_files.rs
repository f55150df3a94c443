//! Meshes with evidence as files: written, read back, refused, audited.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use assert_cmd::Command;
use chordwise::format::{EvidenceError, Format, Layout, WriteOptions, read_evidence, write};
use chordwise::mesh::{Evidence, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use chordwise::scalar::Tolerance;

fn cap() -> Meshed {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/patches/three_sided_cap.ron");
    let set = PatchSet::read(std::path::Path::new(path)).unwrap().set;
    Meshed::with_evidence(&set, &Limits::new(1.0, None, None), |_| true, |_| ()).unwrap()
}

fn ply(made: &Meshed, layout: Option<Layout>, normals: bool) -> Vec<u8> {
    let options = WriteOptions {
        layout,
        normals,
        ..WriteOptions::new(Tolerance::new(1.0).unwrap())
    };
    let mut bytes = Vec::new();
    write(&made.mesh, Format::Ply, &options, &mut bytes).unwrap();
    bytes
}

#[test]
fn evidence_comes_back_as_written() {
    let made = cap();
    let evidence = Evidence::of(&made.mesh).unwrap();
    let read = read_evidence(&ply(&made, None, false)).unwrap();
    assert_eq!(read, evidence);
    // Repeated points are made one again, if in another order.
    for (layout, normals) in [(Some(Layout::Triangles), false), (None, true)] {
        let read = read_evidence(&ply(&made, layout, normals)).unwrap();
        assert_eq!(read.points.len(), evidence.points.len());
        for (a, b) in read.faces.iter().zip(&evidence.faces) {
            let places = [(a, &read), (b, &evidence)]
                .map(|(face, of)| face.points.map(|p| of.points[p as usize]));
            assert_eq!(places[0], places[1]);
            assert_eq!(a.places, b.places);
        }
    }
}

/// Every cut is told with the place where the file ends.
#[test]
fn a_file_cut_short_is_refused() {
    let bytes = ply(&cap(), None, false);
    let header = bytes
        .windows(11)
        .position(|w| w == b"end_header\n")
        .unwrap()
        + 11;
    for end in 0..bytes.len() {
        let error = read_evidence(&bytes[..end]).unwrap_err();
        match error {
            EvidenceError::Length {
                found, expected, ..
            } => {
                assert!(end >= header);
                assert_eq!(found, end as u64);
                assert_eq!(expected, bytes.len() as u64);
            }
            _ => assert!(end < header, "{end}: {error}"),
        }
    }
    let mut longer = bytes.clone();
    longer.push(0);
    assert!(read_evidence(&longer).is_err());
}

/// No bit of the file, turned over, makes the reader or the audit panic.
#[test]
fn no_turned_bit_breaks_the_reader() {
    let made = cap();
    let bytes = ply(&made, None, false);
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/patches/three_sided_cap.ron");
    let set = PatchSet::read(std::path::Path::new(path)).unwrap().set;
    let mut read = 0;
    for at in 0..8 * bytes.len() {
        let mut bytes = bytes.clone();
        bytes[at / 8] ^= 1 << (at % 8);
        if let Ok(evidence) = read_evidence(&bytes) {
            read += 1;
            if at % 97 == 0 {
                let chord = Tolerance::new(1.0).unwrap();
                let _ = chordwise::mesh::Audit::of(&set, &evidence, chord);
            }
        }
    }
    assert!(read > 0);
}

#[test]
fn counts_are_checked_before_anything_is_stored() {
    let text = "ply\nformat binary_little_endian 1.0\nelement vertex 18446744073709551615\n\
        property double x\nproperty double y\nproperty double z\nelement face 4000000000000\n\
        property list uchar int vertex_indices\nproperty int patch\nproperty double u0\n\
        property double v0\nproperty double u1\nproperty double v1\nproperty double u2\n\
        property double v2\nend_header\n";
    let error = read_evidence(text.as_bytes()).unwrap_err();
    assert!(matches!(error, EvidenceError::Length { .. }), "{error}");
    for (text, told) in [
        ("solid stl\n", "header line 1: not `ply`"),
        (
            "ply\nformat ascii 1.0\n",
            "header line 2: `format ascii 1.0`",
        ),
        ("ply\nelement face 3\n", "header line 2: element `face`"),
        ("ply\nelement vertex -1\n", "header line 2: count `-1`"),
        ("ply\ncomment unit ell\n", "header line 2: unit `ell`"),
        (
            "ply\nend_header\n",
            "tessellate SET.ron -o MESH.ply --evidence",
        ),
        ("ply\n", "header: no line `end_header`"),
    ] {
        let error = read_evidence(text.as_bytes()).unwrap_err().to_string();
        assert!(error.contains(told), "{error}");
    }
}

#[test]
fn obj_has_a_place_for_every_corner() {
    let made = cap();
    let mut bytes = Vec::new();
    let options = WriteOptions::new(Tolerance::new(1.0).unwrap());
    write(&made.mesh, Format::Obj, &options, &mut bytes).unwrap();
    let load = tobj::LoadOptions {
        single_index: false,
        ..Default::default()
    };
    let (models, _) = tobj::load_obj_buf(&mut &bytes[..], &load, |_| unreachable!()).unwrap();
    let mesh = &models[0].mesh;
    let evidence = made.mesh.evidence.as_ref().unwrap();
    assert_eq!(mesh.texcoord_indices.len(), 3 * evidence.len());
    for (corner, place) in mesh.texcoord_indices.iter().zip(evidence.as_flattened()) {
        let at = 2 * *corner as usize;
        for (found, given) in mesh.texcoords[at..].iter().zip(place) {
            assert!((f64::from(*found) - given).abs() < 1e-6);
        }
    }
}

fn chordwise(arguments: &[&str]) -> (i32, String, String) {
    let run = Command::new(env!("CARGO_BIN_EXE_chordwise"))
        .args(arguments)
        .output()
        .unwrap();
    (
        run.status.code().unwrap(),
        String::from_utf8(run.stdout).unwrap(),
        String::from_utf8(run.stderr).unwrap(),
    )
}

#[test]
fn the_command_proves_finds_and_refuses() {
    let folder = tempfile::tempdir().unwrap();
    let mesh = folder.path().join("cap.ply");
    let mesh = mesh.to_str().unwrap();
    let set = concat!(env!("CARGO_MANIFEST_DIR"), "/patches/three_sided_cap.ron");
    let (code, _, told) = chordwise(&["tessellate", set, "-o", mesh, "--evidence"]);
    assert_eq!(code, 0, "{told}");

    let (code, text, _) = chordwise(&["audit", mesh, set]);
    assert_eq!(code, 0, "{text}");
    assert!(text.contains("verdict     proved within the chord tolerance"));
    assert!(text.contains("A geometric check only"));

    let (code, json, _) = chordwise(&["audit", mesh, set, "--chord", "0.05mm", "--format", "json"]);
    assert_eq!(code, 1);
    let report: serde_json::Value = serde_json::from_str(&json).unwrap();
    assert_eq!(report["schema_version"], 1);
    assert_eq!(report["verdict"], "findings");
    assert_eq!(report["findings"][0]["fault"], "deviates");
    assert!(report["findings"][0]["place"][0].is_number());
    assert!(report["deviation"]["proved"].as_f64() >= report["deviation"]["attained"].as_f64());
    assert!(
        report["caution"]
            .as_str()
            .unwrap()
            .contains("geometric check")
    );

    let bytes = std::fs::read(mesh).unwrap();
    std::fs::write(mesh, &bytes[..bytes.len() - 10]).unwrap();
    let (code, _, told) = chordwise(&["audit", mesh, set]);
    assert_eq!(code, 2);
    assert!(
        told.contains(&format!("byte {}: the file ends", bytes.len() - 10)),
        "{told}"
    );

    let plain = folder.path().join("plain.ply");
    let plain = plain.to_str().unwrap();
    assert_eq!(chordwise(&["tessellate", set, "-o", plain]).0, 0);
    let (code, _, told) = chordwise(&["audit", plain, set]);
    assert_eq!(code, 2);
    assert!(told.contains("--evidence"), "{told}");

    for name in ["cap.stl", "cap.glb"] {
        let file = folder.path().join(name);
        let (code, _, told) = chordwise(&[
            "tessellate",
            set,
            "-o",
            file.to_str().unwrap(),
            "--evidence",
        ]);
        assert_eq!(code, 2);
        assert!(told.contains("write ply"), "{told}");
        assert!(!file.exists());
    }
}
