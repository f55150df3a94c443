//! The whole page.

use super::gallery::Gallery;
use super::histogram::Histogram;
use super::markup::{escape, figure, terms};
use super::quality;
use super::tables;
use super::viewer::ViewerMesh;
use crate::mesh::{Measures, Meshed, Storage, Strips};
use crate::patch_set::PatchSet;
use crate::picture::{Scene, SeamCurve, round_up};
use crate::quality::{Asked, Quality};
use crate::report::{CAUTION, QualityReport, SeamReport, many, upward};

const STYLE: &str = include_str!("assets/page.css");
const SCRIPT: &str = include_str!("assets/page.js");
const VIEWER: &str = include_str!("assets/viewer.js");

/// Where a page comes from.
#[derive(Debug, Clone)]
pub struct Provenance {
    /// The set's file, without its folder.
    pub file: String,
    /// Its bytes.
    pub bytes: usize,
    /// Their SHA-256 in hexadecimal digits.
    pub sha256: String,
    /// The command as typed, paths without their folders.
    pub command: String,
}

/// Everything a page tells.
#[derive(Debug)]
pub struct Sheet<'a> {
    /// The set.
    pub set: &'a PatchSet,
    /// The mesh that is reported.
    pub made: &'a Meshed,
    /// The proved deviation of its triangles.
    pub deviations: &'a [f64],
    /// The chord tolerance it was held to.
    pub chord: f64,
    /// The seams.
    pub report: &'a SeamReport,
    /// The seams as curves.
    pub curves: &'a [SeamCurve],
    /// The pictures.
    pub gallery: &'a Gallery,
    /// The mesh of the viewer, its deviations and its chord tolerance: the mesh
    /// itself, or a coarser one.
    pub shown: (&'a Scene<'a>, &'a [f64], f64),
    /// The ends of the pictures' scales: Gaussian, mean and principal curvature.
    pub ranges: [f64; 3],
    /// Where it comes from.
    pub provenance: Provenance,
}

impl Sheet<'_> {
    /// The page as HTML.
    #[must_use]
    pub fn html(&self) -> String {
        let set = self.set;
        let name = if set.name().is_empty() {
            &self.provenance.file
        } else {
            set.name()
        };
        let strips = Strips::of(&self.made.mesh);
        let storage = Storage::of(&self.made.mesh, &strips);
        let viewer = ViewerMesh::new(self.shown, self.ranges, self.curves);
        // In a script element only this could end it or open a comment.
        let data = viewer.data.to_string().replace('<', "\\u003c");
        let template = include_str!("assets/page.html");
        let parts: [(&str, String); 19] = [
            ("{title}", escape(name)),
            ("{style}", STYLE.to_owned()),
            ("{verdict}", self.verdict()),
            ("{summary}", self.summary()),
            ("{fallback}", self.gallery.first()),
            ("{shown}", escape(&self.shown_note(viewer.moved))),
            ("{figures}", self.gallery.figures()),
            ("{seams}", tables::seams(self.report, self.gallery)),
            ("{close-ups}", self.gallery.close_ups()),
            ("{histograms}", self.histograms()),
            ("{quality}", self.quality()),
            (
                "{panels}",
                tables::panels(set, &self.made.mesh, self.deviations),
            ),
            (
                "{storage}",
                tables::storage(&self.made.mesh, &storage, strips.len()),
            ),
            ("{tolerances}", self.tolerances()),
            ("{provenance}", self.origin()),
            ("{caution}", escape(CAUTION)),
            ("{page-script}", SCRIPT.to_owned()),
            ("{viewer-script}", VIEWER.to_owned()),
            ("{data}", data),
        ];
        let mut out = String::new();
        let mut rest = template;
        // In one pass, so that a name cannot be taken for a place to fill.
        while let Some(at) = rest.find('{') {
            out.push_str(&rest[..at]);
            rest = &rest[at..];
            match parts.iter().find(|(key, _)| rest.starts_with(key)) {
                Some((key, text)) => {
                    out.push_str(text);
                    rest = &rest[key.len()..];
                }
                None => {
                    out.push('{');
                    rest = &rest[1..];
                }
            }
        }
        out + rest
    }

    fn verdict(&self) -> String {
        let unit = self.set.unit().symbol();
        let s = &self.report.summary;
        let mesh = format!(
            "every triangle is proved within {} {unit} of the surface, both ways (tolerance {} {unit})",
            upward(self.made.deviation.proved(), figure),
            figure(self.chord)
        );
        let (class, head) = if self.report.has_findings() {
            let mut found = Vec::new();
            if s.faults > 0 {
                found.push(format!("{} not as demanded", many(s.faults, "seam")));
            }
            if s.undecided > 0 {
                found.push(format!("{} undecided", many(s.undecided, "seam")));
            }
            if s.non_manifold > 0 {
                found.push(format!(
                    "{} of three edges or more",
                    many(s.non_manifold, "seam")
                ));
            }
            ("findings", format!("Findings: {}.", found.join(", ")))
        } else {
            (
                "clean",
                "No findings: every seam is as demanded.".to_owned(),
            )
        };
        format!(
            "<p class=\"verdict {class}\"><strong>{}</strong> Mesh: {}.</p>\n",
            escape(&head),
            escape(&mesh)
        )
    }

    fn summary(&self) -> String {
        let unit = self.set.unit().symbol();
        let mesh = &self.made.mesh;
        let measures = Measures::of(mesh);
        let d = &self.made.deviation;
        let s = &self.report.summary;
        let closed = if measures.closed {
            "closed".to_owned()
        } else {
            many(measures.open_loops, "open loop")
        };
        let volume = measures.volume.map_or("none, not closed".to_owned(), |v| {
            format!("{} {unit}^3", figure(v))
        });
        #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
        let economy = mesh.triangles.len() as f64 / self.made.floor.max(1.0);
        terms(&[
            (
                "patches",
                format!(
                    "{} in {}",
                    mesh.parts.len(),
                    many(mesh.panels.len(), "panel")
                ),
            ),
            ("triangles", mesh.triangles.len().to_string()),
            ("over the floor", format!("{economy:.2} times")),
            ("vertices", mesh.points.len().to_string()),
            (
                "proved deviation",
                format!("{} {unit}", upward(d.proved(), figure)),
            ),
            (
                "attained deviation",
                format!(
                    "{} {unit} at {} ({:.4}, {:.4})",
                    figure(d.to_mesh.attained),
                    d.patch,
                    d.u,
                    d.v
                ),
            ),
            ("seams", format!("{}, {}", s.seams, many(s.faults, "fault"))),
            ("border", closed),
            ("area", format!("{} {unit}^2", figure(measures.area))),
            ("volume", volume),
        ])
    }

    fn shown_note(&self, moved: f64) -> String {
        let unit = self.set.unit().symbol();
        let (scene, _, chord) = self.shown;
        let count = scene.mesh.triangles.len();
        let coarse = if count == self.made.mesh.triangles.len() {
            format!("The viewer has the mesh's own {count} triangles")
        } else {
            format!(
                "The mesh has {} triangles; the viewer has a coarser one of {count}, at a chord tolerance of {} {unit}",
                self.made.mesh.triangles.len(),
                figure(chord)
            )
        };
        format!(
            "{coarse}. Its points are rounded to 16 bits of the box, by {} {unit} at most, and its shadings are interpolated between corners; the pictures on this page are not.",
            figure(moved)
        )
    }

    fn histograms(&self) -> String {
        let unit = self.set.unit().symbol();
        let mesh = &self.made.mesh;
        let most = self.deviations.iter().copied().fold(self.chord, f64::max);
        let mut deviation = Histogram::of(
            "Proved deviation",
            &format!("proved deviation, {unit}"),
            [0.0, round_up(most)],
            self.deviations.iter().copied(),
        );
        deviation.limit = Some((self.chord, "tolerance".to_owned()));
        std::iter::once(deviation)
            .chain(quality::histograms(mesh))
            .enumerate()
            .map(|(k, h)| {
                format!(
                    "<figure>\n{}<figcaption>{} of every triangle.</figcaption>\n</figure>\n",
                    h.svg(k + 1),
                    escape(&h.title)
                )
            })
            .collect()
    }

    fn quality(&self) -> String {
        let mesh = &self.made.mesh;
        let found = Quality::of(mesh, &Asked::default());
        quality::measures(&QualityReport::new(mesh, &found), self.set.unit().symbol())
    }

    fn tolerances(&self) -> String {
        let unit = self.set.unit().symbol();
        let t = &self.report.tolerances;
        let curvature = t
            .curvature_per_mm
            .map_or("no verdict".to_owned(), |c| format!("{} 1/mm", figure(c)));
        terms(&[
            ("unit", unit.to_owned()),
            ("chord", format!("{} {unit}", figure(self.chord))),
            ("gap", format!("{} {unit}", figure(t.gap))),
            ("search", format!("{} {unit}", figure(t.search))),
            ("tangent", format!("{} deg", figure(t.tangent_deg))),
            ("crease", format!("{} deg", figure(t.crease_deg))),
            ("curvature", curvature),
        ])
    }

    fn origin(&self) -> String {
        let p = &self.provenance;
        terms(&[
            ("file", p.file.clone()),
            ("bytes", p.bytes.to_string()),
            ("SHA-256", p.sha256.clone()),
            (
                "made by",
                format!("chordwise {}", env!("CARGO_PKG_VERSION")),
            ),
            ("command", p.command.clone()),
        ])
    }
}
