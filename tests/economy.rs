//! Triangle counts against the theoretical floor, on surfaces with a known
//! best. The limits are those of `demo::family`; the area of the best triangle
//! behind the floor is from Pottmann, Krasauskas, Hamann, Joy and Seibold
//! (2000), from memory, its constants recomputed by optimisation.

use chordwise::demo::family;
use chordwise::mesh::Meshed;
use chordwise::sampling::Limits;

#[test]
fn counts_keep_to_their_limits_and_figures_are_tight() {
    for member in family() {
        for &(chord, goal) in member.goals {
            let limits = Limits::new(chord, None, None);
            let made =
                Meshed::new(&member.set, &limits, |_| true, |_| ()).expect("the family meshes");
            let what = format!("{} at {chord}", member.name);
            let deviation = &made.deviation;
            assert!(
                deviation.proved() <= chord,
                "{what}: proved {}",
                deviation.proved()
            );
            assert!(
                deviation.to_mesh.proved <= 1.15 * deviation.to_mesh.attained
                    || deviation.proved() < 1e-9,
                "{what}: proved {} but attained {}",
                deviation.to_mesh.proved,
                deviation.to_mesh.attained
            );
            let count = f64::from(u32::try_from(made.mesh.triangles.len()).expect("small sets"));
            let ratio = count / made.floor;
            assert!(ratio >= 0.999, "{what}: {ratio:.3} is below the floor");
            assert!(
                ratio <= goal,
                "{what}: {ratio:.3} times the floor, limit {goal}"
            );
        }
    }
}

/// A flat patch needs two triangles however its parameters run, at any chord.
#[test]
fn a_flat_patch_is_two_triangles_at_any_chord() {
    let members = family();
    let flat = members
        .iter()
        .find(|m| m.name == "uneven flat")
        .expect("in the family");
    for chord in [1.0, 1e-3, 1e-6] {
        let limits = Limits::new(chord, None, None);
        let made = Meshed::new(&flat.set, &limits, |_| true, |_| ()).expect("flat");
        assert_eq!(made.mesh.triangles.len(), 2);
    }
}
