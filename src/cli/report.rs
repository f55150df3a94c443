//! `chordwise report`: one page to sign off.

use std::path::{Path, PathBuf};

use clap::Args;
use sha2::{Digest, Sha256};

use super::Outcome;
use super::draw::deviations;
use super::meshing::MeshingArguments;
use super::output::Output;
use super::source;
use crate::continuity::Survey;
use crate::mesh::{Mesh, Meshed};
use crate::page::{Gallery, Provenance, Sheet};
use crate::patch_set::PatchSet;
use crate::picture::{
    Curvature, Focus, PictureOptions, Scene, Shading, View, borders, seam_curves, usual_curvature,
};
use crate::report::SeamReport;
use crate::sampling::Limits;
use crate::scalar::Tolerance;

const EXAMPLES: &str = "\
Examples:
  chordwise report front.ron -o front.html
  chordwise report front.ron -o front.html --chord 0.05mm

The page is one file: summary and verdict, pictures, seams with close-ups,
distributions, tables, and a viewer of the mesh. It loads nothing from anywhere.

Exit code 0: written. 1: written, and there are findings. 2: bad usage,
unreadable, or a triangle that cannot be proved.";

/// Triangles that the viewer is given at most.
const MOST_SHOWN: usize = 100_000;

/// Write one page with pictures, seams, distributions and a viewer
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct ReportArguments {
    /// The patch set; `-` is standard input
    #[arg(value_name = "SET.ron")]
    set: PathBuf,

    /// The page to write; `-` is standard output
    #[arg(short, long, value_name = "FILE")]
    output: PathBuf,

    #[command(flatten)]
    meshing: MeshingArguments,
}

impl ReportArguments {
    /// Reads, meshes, surveys, draws, writes.
    pub(super) fn run(&self) -> Outcome {
        match self.try_run() {
            Ok(outcome) => outcome,
            Err(error) => Outcome::refuse(error),
        }
    }

    fn try_run(&self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let output = Output::open(&self.output, &[&self.set])?;
        let progress = self.meshing.begin();
        let bytes = match source::bytes(&self.set) {
            Ok(bytes) => bytes,
            Err(faults) => {
                drop(progress);
                source::show_faults(&faults);
                return Ok(Outcome::Refused);
            }
        };
        let (length, hash) = (bytes.len(), Sha256::digest(&bytes));
        let mut reading = match PatchSet::from_bytes(bytes, &source::name(&self.set)) {
            Ok(reading) => reading,
            Err(faults) => {
                drop(progress);
                source::show_faults(&faults);
                return Ok(Outcome::Refused);
            }
        };
        let turned_over = self.meshing.prepare(&mut reading, &progress)?;
        let set = &reading.set;
        let limits = self.meshing.limits(set);
        let chord = Tolerance::new(limits.chord)?.get();
        let stage = |name| progress.stage(name);
        let budget = self.meshing.budget();
        let made = Meshed::within(set, &limits, &budget, |_| true, true, stage)?;
        progress.stage("proving each triangle");
        let proved = deviations(set, &made.mesh, chord)?;
        progress.stage("examining seams");
        let survey = Survey {
            turned_over,
            ..Survey::of(set, &made.topology)
        };
        let report = SeamReport::new(set, &survey, None);
        let curves = seam_curves(set, &made.topology, &survey, chord);
        progress.stage("drawing");
        let scene = Scene::new(set, &made.mesh)?;
        let options = PictureOptions {
            size: (0, 0),
            view: View::FrontQuarter,
            focus: Focus::All,
            shading: Shading::Plain,
            mesh_edges: false,
            range: None,
            lights: 48.0,
            upright: false,
            chord,
            proved: made.deviation.proved(),
        };
        let ranges = [Curvature::Gaussian, Curvature::Mean, Curvature::Principal]
            .map(|curvature| usual_curvature(&scene, curvature));
        let lines = borders(set, &made.topology, |_| true, chord);
        let gallery = Gallery::draw(&scene, &options, &proved, &curves, &lines)?;
        progress.stage("packing the viewer's mesh");
        let coarse = coarser(set, &made.mesh, &limits)?;
        let coarse_scene = match &coarse {
            Some((mesh, _, _)) => Some(Scene::new(set, mesh)?),
            None => None,
        };
        let shown = match (&coarse_scene, &coarse) {
            (Some(scene), Some((_, proved, chord))) => (scene, proved.as_slice(), *chord),
            _ => (&scene, proved.as_slice(), chord),
        };
        let sheet = Sheet {
            set,
            made: &made,
            deviations: &proved,
            chord,
            report: &report,
            curves: &curves,
            gallery: &gallery,
            shown,
            ranges,
            provenance: self.provenance(length, &hash),
        };
        let html = sheet.html();
        progress.stage("writing");
        output.write(|out| Ok(out.write_all(html.as_bytes())?))?;
        Ok(if report.has_findings() {
            Outcome::Findings
        } else {
            Outcome::Done
        })
    }

    fn provenance(&self, bytes: usize, hash: &[u8]) -> Provenance {
        let file = base_name(&self.set);
        let output = base_name(&self.output);
        let command = format!(
            "chordwise report {file} -o {output}{}",
            self.meshing.typed()
        );
        Provenance {
            file,
            bytes,
            sha256: hash.iter().map(|byte| format!("{byte:02x}")).collect(),
            command,
        }
    }
}

/// A path without its folders, which are nobody else's business.
fn base_name(path: &Path) -> String {
    path.file_name()
        .unwrap_or(path.as_os_str())
        .to_string_lossy()
        .into_owned()
}

/// A mesh with its proved deviations and its chord tolerance.
type Coarser = (Mesh, Vec<f64>, f64);

/// A coarser mesh for the viewer, where the mesh itself has too many triangles.
fn coarser(
    set: &PatchSet,
    mesh: &Mesh,
    limits: &Limits,
) -> Result<Option<Coarser>, Box<dyn std::error::Error>> {
    let mut chord = limits.chord;
    let mut count = mesh.triangles.len();
    let mut best = None;
    // Triangles go with one over the chord; a few rounds are enough, unless other
    // limits keep them many.
    for _ in 0..6 {
        if count <= MOST_SHOWN {
            break;
        }
        #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
        let factor = (1.2 * count as f64 / MOST_SHOWN as f64).max(1.5);
        chord *= factor;
        let limits = Limits::new(chord, limits.normal_rad, limits.max_edge);
        let made = Meshed::with_evidence(set, &limits, |_| true, |_| ())?;
        count = made.mesh.triangles.len();
        best = Some((made.mesh, chord));
    }
    match best {
        Some((mesh, chord)) => {
            let proved = deviations(set, &mesh, chord)?;
            Ok(Some((mesh, proved, chord)))
        }
        None => Ok(None),
    }
}
