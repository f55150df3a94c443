//! What a run of the tessellator came to.

use std::collections::BTreeSet;

use serde::Serialize;

use super::wording::many;
use super::{CAUTION, QualityReport, SizedReport};
use crate::format::Written;
use crate::mesh::{Measures, Mesh, Meshed, Storage, Strips};
use crate::patch_set::{Demand, PatchId, PatchSet};
use crate::quality::Quality;
use crate::sampling::Limits;
use crate::topology::{Contact, EdgeId, Topology, demand_between};

/// Version of the JSON fields of [`Summary`]; raised when one changes meaning
/// or goes away.
const SCHEMA_VERSION: u32 = 1;

/// The outcome, as told in text and as JSON; lengths in the set's unit.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Summary {
    /// Version of these fields.
    pub schema_version: u32,
    /// The set's name.
    pub name: String,
    /// The unit of all lengths.
    pub unit: &'static str,
    /// The chord tolerance the mesh was held to; none for a sized mesh that was
    /// not given one.
    pub chord: Option<f64>,
    /// Largest turn of the normal in a triangle, if asked for.
    pub normal_deg: Option<f64>,
    /// Largest edge, if asked for.
    pub max_edge: Option<f64>,
    /// Patches meshed.
    pub patches: usize,
    /// Panels they belong to.
    pub panels: usize,
    /// Edges of their Bezier pieces that are not one point, in the whole set.
    pub edges: usize,
    /// Seams of the whole set where two edges or more are joined.
    pub seams: usize,
    /// Triangles.
    pub triangles: usize,
    /// Geometric points, each once.
    pub vertices: usize,
    /// Points as the file stores them.
    pub file_vertices: u64,
    /// Triangle strips found.
    pub strips: usize,
    /// Strip indices a triangle, restarts counted.
    pub indices_per_triangle: f64,
    /// The deviation between mesh and surface.
    pub deviation: DeviationLine,
    /// How few triangles would do: sampled from the curvature.
    pub floor: f64,
    /// Triangles over that floor.
    pub triangles_over_floor: f64,
    /// Open chains of edges in the mesh.
    pub open_loops: usize,
    /// Edges of the mesh with more than two triangles, or two the same way.
    pub non_manifold_edges: usize,
    /// Vertices - edges + triangles of the mesh.
    pub euler: i64,
    /// Parts of the mesh that hang together by edges.
    pub components: usize,
    /// Vertices in excess of the places they stand at: where parts touch in a
    /// point only.
    pub touching: usize,
    /// Whether every mesh edge is run once in each direction.
    pub closed: bool,
    /// Whether the mesh is watertight, and why or why not, in words.
    pub watertight: String,
    /// Lengths of the open chains along the mesh, the longest first.
    pub open_loop_lengths: Vec<f64>,
    /// Seams whose gap is beyond the tolerance and closed even so, because that
    /// was asked for: patches, sides and the proved gap.
    pub bridged: Vec<BridgedLine>,
    /// Patches turned over because that was asked for.
    pub turned_over: Vec<String>,
    /// Area of the mesh.
    pub area: f64,
    /// Volume, if the mesh is closed.
    pub volume: Option<f64>,
    /// Shape and size of the triangles, which says nothing of the deviation.
    pub quality: QualityReport,
    /// What was asked of a sized mesh, and what came of it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sized: Option<SizedReport>,
    /// Bytes of bare geometry by way of storing.
    pub storage: StorageLine,
    /// The file.
    pub written: WrittenLine,
    /// Wall-clock seconds by stage.
    pub seconds: SecondsLine,
    /// The usual caution.
    pub caution: &'static str,
}

/// A gap that is closed because that was asked for.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BridgedLine {
    /// A patch and its side.
    pub between: (String, String),
    /// The other patch and its side.
    pub and: (String, String),
    /// The gap, proved.
    pub gap: f64,
}

/// Deviation, proved and attained.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct DeviationLine {
    /// Proved for every triangle, in both directions, rounding of the file
    /// included.
    pub proved: f64,
    /// Proved from the surface to the mesh.
    pub proved_to_mesh: f64,
    /// Proved from the mesh to the surface.
    pub proved_to_surface: f64,
    /// What rounding in the file adds to each.
    pub rounding: f64,
    /// A true distance of a point of the surface from the mesh in memory.
    pub attained: f64,
    /// The patch of that point.
    pub patch: String,
    /// Its parameters.
    pub u: f64,
    /// Its parameters.
    pub v: f64,
    /// The point.
    pub at: [f64; 3],
}

/// Bytes with 4-byte floats and indices, bare geometry.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct StorageLine {
    /// Separate triangles.
    pub triangles: u64,
    /// Points once, three indices a triangle.
    pub indexed: u64,
    /// Points in strip order.
    pub strips: u64,
    /// Points once, strips of indices.
    pub indexed_strips: u64,
}

/// The file written.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct WrittenLine {
    /// The format's name.
    pub format: &'static str,
    /// The layout's name.
    pub layout: &'static str,
    /// Bytes.
    pub bytes: u64,
}

/// Seconds by stage.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize)]
pub struct SecondsLine {
    /// Reading and validating the set.
    pub reading: f64,
    /// Pairing edges.
    pub pairing: f64,
    /// Sampling seams.
    pub sampling: f64,
    /// Triangles and their proof.
    pub tessellation: f64,
    /// Joining, normals, attained deviation.
    pub assembly: f64,
    /// Strips and measures.
    pub strips: f64,
    /// Writing.
    pub writing: f64,
}

impl Summary {
    /// Puts together what the stages found.
    #[must_use]
    pub fn new(
        set: &PatchSet,
        limits: &Limits,
        made: &Meshed,
        strips: &Strips,
        format: crate::format::Format,
        written: &Written,
        mut seconds: SecondsLine,
    ) -> Self {
        let mesh = &made.mesh;
        let measures = Measures::of(mesh);
        let storage = Storage::of(mesh, strips);
        let joined = made
            .topology
            .seams()
            .iter()
            .filter(|s| s.spans.len() > 1)
            .count();
        let mut panels: Vec<usize> = mesh.parts.iter().map(|p| p.panel).collect();
        panels.sort_unstable();
        panels.dedup();
        seconds.pairing = made.seconds.pairing;
        seconds.sampling = made.seconds.sampling;
        seconds.tessellation = made.seconds.tessellation;
        seconds.assembly = made.seconds.assembly;
        let deviation = &made.deviation;
        #[allow(clippy::cast_precision_loss, reason = "counts stay far below 2^52")]
        let triangles = mesh.triangles.len() as f64;
        Self {
            schema_version: SCHEMA_VERSION,
            name: set.name().to_owned(),
            unit: set.unit().symbol(),
            chord: Some(limits.chord),
            normal_deg: limits.normal_rad.map(f64::to_degrees),
            max_edge: limits.max_edge,
            patches: mesh.parts.len(),
            panels: panels.len(),
            edges: made
                .topology
                .edges()
                .iter()
                .filter(|e| !e.collapsed)
                .count(),
            seams: joined,
            triangles: mesh.triangles.len(),
            vertices: mesh.points.len(),
            file_vertices: written.file_vertices,
            strips: strips.len(),
            indices_per_triangle: strips.indices_per_triangle(),
            deviation: DeviationLine {
                proved: deviation.proved() + written.rounding,
                proved_to_mesh: deviation.to_mesh.proved + written.rounding,
                proved_to_surface: deviation.to_surface + written.rounding,
                rounding: written.rounding,
                attained: deviation.to_mesh.attained,
                patch: deviation.patch.clone(),
                u: deviation.u,
                v: deviation.v,
                at: [deviation.point.x, deviation.point.y, deviation.point.z],
            },
            floor: made.floor,
            triangles_over_floor: triangles / made.floor,
            open_loops: measures.open_loops,
            non_manifold_edges: measures.non_manifold_edges,
            euler: measures.euler,
            components: measures.components,
            touching: measures.touching,
            closed: measures.closed,
            watertight: watertight(&measures, made, set),
            open_loop_lengths: measures.open_lengths.clone(),
            bridged: bridged(set, &made.topology),
            turned_over: Vec::new(),
            area: measures.area,
            volume: measures.volume,
            quality: QualityReport::new(mesh, &Quality::brief(mesh)),
            sized: None,
            storage: StorageLine {
                triangles: storage.triangles,
                indexed: storage.indexed,
                strips: storage.strips,
                indexed_strips: storage.indexed_strips,
            },
            written: WrittenLine {
                format: format.name(),
                layout: written.layout.name(),
                bytes: written.bytes,
            },
            seconds,
            caution: CAUTION,
        }
    }
}

impl Summary {
    /// The same, with another account of the triangles of the same mesh.
    #[must_use]
    pub fn with_quality(mut self, mesh: &Mesh, found: &Quality) -> Self {
        self.quality = QualityReport::new(mesh, found);
        self
    }

    /// The same, telling of sizes; `held` says whether a chord was given.
    #[must_use]
    pub fn with_sized(mut self, sized: SizedReport, held: bool) -> Self {
        self.chord = self.chord.filter(|_| held);
        // These make sizes and are not held for every triangle.
        self.normal_deg = None;
        self.max_edge = None;
        self.sized = Some(sized);
        self
    }

    /// The same, telling of patches that were turned over.
    #[must_use]
    pub fn with_turned_over(mut self, set: &PatchSet, patches: &[PatchId]) -> Self {
        let name = |patch: &PatchId| set.patches()[patch.index()].name.clone();
        self.turned_over = patches.iter().map(name).collect();
        self
    }
}

fn bridged(set: &PatchSet, topology: &Topology) -> Vec<BridgedLine> {
    let name = |edge: EdgeId| {
        let patch = set.patch_of(edge.piece());
        (patch.name.clone(), edge.side().to_string())
    };
    let contacts = topology.contacts().iter().filter(|c| c.bridged);
    let line = |contact: &Contact| BridgedLine {
        between: name(contact.edges[0]),
        and: name(contact.edges[1]),
        gap: contact.gap.proved,
    };
    contacts.map(line).collect()
}

fn watertight(measures: &Measures, made: &Meshed, set: &PatchSet) -> String {
    if measures.closed {
        return "yes: every edge is run once in each direction".to_owned();
    }
    let loops = measures.open_loops;
    let all: f64 = measures.open_lengths.iter().sum();
    let along = format!(
        "{}, {all:.1} {} in all",
        many(loops, "open loop"),
        set.unit().symbol()
    );
    if measures.non_manifold_edges > 0 {
        let count = measures.non_manifold_edges;
        return format!(
            "no: {count} mesh edges have more than two triangles or two that run the same way (panels may face different ways); {along}"
        );
    }
    // Several pieces of one patch edge are one edge to the reader.
    let name = |edge: EdgeId| {
        (
            set.patch_of(edge.piece()).name.as_str(),
            edge.side().index(),
        )
    };
    let meshed: BTreeSet<&str> = made.mesh.parts.iter().map(|p| p.name.as_str()).collect();
    let contacts = made.topology.contacts().iter().filter(|c| {
        let meant = demand_between(set, c.edges[0], c.edges[1]) == Some(Demand::Open);
        !c.joined && !meant && c.edges.iter().any(|e| meshed.contains(name(*e).0))
    });
    let pairs: BTreeSet<_> = contacts.map(|c| c.edges.map(name)).collect();
    let apart = pairs.len();
    match apart {
        0 => format!("no: {along}, where edges have no neighbour; all joined seams are crack-free"),
        1 => format!(
            "no: {along}; 1 pair of neighbouring edges was not joined, see `chordwise seams`"
        ),
        _ => format!(
            "no: {along}; {apart} pairs of neighbouring edges were not joined, see `chordwise seams`"
        ),
    }
}
