//! `chordwise audit`: proves a mesh anew from its file and the set.

use std::path::{Path, PathBuf};

use clap::Args;

use super::Outcome;
use super::message;
use super::progress::Progress;
use super::source;
use super::style::OutputStyle;
use crate::format::read_evidence;
use crate::mesh::Audit;
use crate::report::AuditReport;
use crate::scalar::{Length, Tolerance};

const EXAMPLES: &str = "\
Examples:
  chordwise tessellate front.ron -o front.ply --evidence
  chordwise audit front.ply front.ron
  chordwise audit front.ply front.ron --chord 0.02mm --format json

The mesh is a PLY file written with --evidence. Its deviation is proved from the
two files alone, with none of the code that made the mesh: every corner lies on
its patch, the triangles cover each patch exactly once, surface and mesh are
within the chord tolerance both ways, and the mesh is open only where the set
is. Whatever is not so is listed with its place.

Exit code 0: proved within the chord tolerance. 1: there are findings. 2: a
file cannot be used.";

/// Prove the deviation of a mesh anew from its file and the set
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct AuditArguments {
    /// The mesh, a PLY file with evidence
    #[arg(value_name = "MESH.ply")]
    mesh: PathBuf,

    /// The patch set it was made from; `-` is standard input
    #[arg(value_name = "SET.ron")]
    set: PathBuf,

    /// Largest distance between mesh and surface, in the set's unit or with
    /// m, cm, mm or in behind it [default: the set's, else 0.1 mm]
    #[arg(long, value_name = "LENGTH")]
    chord: Option<Length>,

    /// The mesh was made with --orient
    #[arg(long)]
    orient: bool,

    /// The mesh was made with --close-gaps of this length
    #[arg(long, value_name = "LENGTH", allow_negative_numbers = true)]
    close_gaps: Option<Length>,

    /// How the report is printed
    #[arg(long, value_enum, default_value_t)]
    format: OutputStyle,
}

/// A mesh file that cannot be used, with its name.
#[derive(Debug, thiserror::Error)]
#[error("{path}: {fault}")]
struct MeshFileError {
    path: String,
    fault: String,
}

impl AuditArguments {
    /// Reads both files, proves, and prints the report.
    pub(super) fn run(&self) -> Outcome {
        match self.try_run() {
            Ok(outcome) => outcome,
            Err(error) => Outcome::refuse(error),
        }
    }

    fn try_run(&self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let progress = Progress::new();
        progress.stage("reading");
        let mut reading = match source::read(&self.set) {
            Ok(reading) => reading,
            Err(faults) => {
                drop(progress);
                source::show_faults(&faults);
                return Ok(Outcome::Refused);
            }
        };
        super::joining::close_gaps(&mut reading.set, self.close_gaps)?;
        if self.orient {
            super::joining::orient(&mut reading.set)?;
        }
        let set = &reading.set;
        let bytes = std::fs::read(&self.mesh).map_err(|e| fault(&self.mesh, &e))?;
        let evidence = read_evidence(&bytes).map_err(|e| fault(&self.mesh, &e))?;
        drop(bytes);
        let own = set.tolerances().chord.get();
        let chord = Tolerance::new(self.chord.map_or(own, |c| c.in_unit(set.unit())))?;
        progress.stage("proving each triangle");
        let audit = Audit::of(set, &evidence, chord).map_err(|e| fault(&self.mesh, &e))?;
        drop(progress);
        let report = AuditReport::new(set, chord, &audit);
        let text = match self.format {
            OutputStyle::Text => report.text(),
            OutputStyle::Json => serde_json::to_string_pretty(&report)? + "\n",
        };
        message::report(&text, false)?;
        Ok(if report.findings.is_empty() {
            Outcome::Done
        } else {
            Outcome::Findings
        })
    }
}

fn fault(path: &Path, error: &dyn std::fmt::Display) -> MeshFileError {
    MeshFileError {
        path: path.display().to_string(),
        fault: error.to_string(),
    }
}
