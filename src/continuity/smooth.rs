//! Where vertex normals are shared across a seam.

use rayon::prelude::*;

use super::angle::Meeting;
use crate::patch_set::PatchSet;
use crate::topology::{Seam, Topology};

/// For every seam of the topology, whether vertex normals are shared across
/// it: two uses whose normals point to one side and whose angle, at nine
/// places, is within the tangent tolerance. An open edge shares nothing, but
/// has nothing to split either: true.
#[must_use]
pub fn smooth_seams(set: &PatchSet, topology: &Topology) -> Vec<bool> {
    let tangent = set.tolerances().tangent_deg.get();
    topology
        .seams()
        .par_iter()
        .with_min_len(64)
        .map(|seam| match meeting_of(topology, seam) {
            Some(meeting) => {
                meeting.normals_agree(set) && meeting.sampled_angle_deg(set) <= tangent
            }
            None => seam.spans.len() < 2,
        })
        .collect()
}

/// The two uses of an ordinary seam as a meeting.
fn meeting_of(topology: &Topology, seam: &Seam) -> Option<Meeting> {
    let [a, b] = seam.spans.as_slice() else {
        return None;
    };
    let [a, b] = [a, b].map(|span| &topology.spans()[span.index()]);
    let second = if a.reversed == b.reversed {
        b.t
    } else {
        [b.t[1], b.t[0]]
    };
    Some(Meeting {
        edges: [a.edge, b.edge],
        first: a.t,
        second,
    })
}
