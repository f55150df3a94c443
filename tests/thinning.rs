//! `--thin`: fewer triangles, and still proved, by the audit too, which shares
//! nothing with the tessellator.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use chordwise::demo::family;
use chordwise::mesh::{Audit, Evidence, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use chordwise::scalar::Tolerance;

fn meshed(set: &PatchSet, chord: f64, thin: bool) -> Meshed {
    let mut limits = Limits::new(chord, None, None);
    limits.thin = thin;
    Meshed::with_evidence(set, &limits, |_| true, |_| ()).unwrap()
}

#[test]
fn thinned_meshes_are_smaller_and_stand_up_to_an_audit() {
    for (name, chord, part) in [
        ("smooth panel", 0.1, 0.97),
        ("ridge panel", 0.1, 0.97),
        ("three-sided cap", 0.05, 0.95),
        ("quarter cylinder", 0.01, 1.0),
    ] {
        let members = family();
        let member = members.iter().find(|m| m.name == name).unwrap();
        let [plain, thin] = [false, true].map(|thin| meshed(&member.set, chord, thin));
        let [before, after] = [&plain, &thin]
            .map(|made| f64::from(u32::try_from(made.mesh.triangles.len()).unwrap()));
        assert!(after <= part * before, "{name}: {after} of {before}");
        assert!(thin.deviation.proved() <= chord, "{name}");
        let evidence = Evidence::of(&thin.mesh).unwrap();
        let audit = Audit::of(&member.set, &evidence, Tolerance::new(chord).unwrap()).unwrap();
        assert!(audit.findings.is_empty(), "{name}: {:?}", audit.findings);
        assert!(audit.proved() <= chord, "{name}: {}", audit.proved());
        // Nothing is left that no triangle has.
        let mut used = vec![false; thin.mesh.points.len()];
        for corner in thin.mesh.triangles.as_flattened() {
            used[thin.mesh.vertices[*corner as usize].point as usize] = true;
        }
        assert!(used.iter().all(|u| *u), "{name}");
    }
}
