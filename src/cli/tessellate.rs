//! `chordwise tessellate`: from a patch set to a proved mesh in a file.

mod family;
mod making;
mod sizing;

use std::path::PathBuf;
use std::time::Instant;

use clap::Args;
use clap::builder::{PossibleValuesParser, TypedValueParser};

use super::Outcome;
use super::figures::Figures;
use super::meshing::MeshingArguments;
use super::message::report;
use super::output::Output;
use super::panels::panels;
use super::source;
use super::stream::stream;
use super::style::OutputStyle;
use crate::format::{self, Format, FormatError, Layout, WriteOptions};
use crate::mesh::Prediction;
use crate::patch_set::{PanelId, PatchId, PatchSet, PieceId};
use crate::picture::Extra;
use crate::report::{FamilySummary, Forecast, SecondsLine, StreamSummary, Summary};
use crate::sampling::Limits;
use crate::scalar::{Length, Tolerance};
use making::Job;
use sizing::SizingArguments;

const EXAMPLES: &str = "\
Examples:
  chordwise tessellate front.ron -o front.glb
  chordwise tessellate front.ron -o wing.stl --chord 0.02mm --panel wing
  chordwise tessellate front.ron -o front.ply --normal-angle 10 --max-edge 25
  chordwise tessellate front.ron --as obj -o - | gzip > front.obj.gz
  chordwise tessellate front.ron -o front.ply --evidence
  chordwise tessellate front.ron -o front.glb --chord 0.001 --dry-run
  chordwise tessellate front.ron -o front.vtu --family 4
  chordwise tessellate front.ron -o front.vtu --size 5mm --chord 0.05mm

The format follows the extension. Every triangle is proved to lie within the
chord tolerance of the surface, and the surface of the mesh, or nothing is
written. Joined edges share their vertices.

Exit code 0: written. 2: bad usage, unreadable, or a triangle that cannot be
proved.";

/// Mesh a patch set within a proved chord tolerance
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct TessellateArguments {
    /// The patch set; `-` is standard input
    #[arg(value_name = "SET.ron")]
    set: PathBuf,

    /// The file to write; `-` is standard output, with --as
    #[arg(short, long, value_name = "FILE")]
    output: PathBuf,

    #[command(flatten)]
    meshing: MeshingArguments,

    /// Largest turn of the surface normal between corners of a triangle, in
    /// degrees [default: the set's, else none]
    #[arg(long, value_name = "DEG", allow_negative_numbers = true, value_parser = angle)]
    normal_angle: Option<f64>,

    /// Largest edge of a triangle [default: the set's, else none]
    #[arg(long, value_name = "LENGTH", allow_negative_numbers = true)]
    max_edge: Option<Length>,

    #[command(flatten)]
    sized: SizingArguments,

    /// Take out every vertex the proof can do without: fewer triangles, for many
    /// times the time
    #[arg(long)]
    thin: bool,

    /// How triangles are stored [default: strips for GLB, triangles for STL,
    /// else indexed]
    #[arg(long, value_name = "LAYOUT", value_parser = names(&Layout::ALL.map(Layout::name)))]
    layout: Option<String>,

    /// The file format, where the extension does not say
    #[arg(long = "as", value_name = "FORMAT", value_parser = names(&Format::ALL.map(Format::name)))]
    format_name: Option<String>,

    /// Give a PLY file vertex normals; OBJ and GLB always have them. A point
    /// of a crease is then stored once for each of its normals
    #[arg(long)]
    normals: bool,

    /// Write STL as text, with a named solid for every panel
    #[arg(long, conflicts_with = "stream")]
    solids: bool,

    /// Only this panel; may be repeated. Seams keep the vertices they have in
    /// the whole set, so that panels meshed apart fit together
    #[arg(long = "panel", value_name = "NAME")]
    panels: Vec<String>,

    /// Keep the patch, u and v of every corner in the file (PLY, OBJ and VTU), so
    /// that `chordwise audit` can prove a PLY file anew
    #[arg(long)]
    evidence: bool,

    /// Give a GLB file lines and points besides the mesh: seams by finding, worst
    /// places, normals, curvature combs, curves of constant u and v; may be repeated
    #[arg(long = "extra", value_name = "KIND", value_parser = names(&Extra::ALL.map(Extra::name)))]
    extras: Vec<String>,

    /// Say how many triangles, bytes and seconds it would take, and write
    /// nothing. The file is named all the same: its extension says the format
    #[arg(long)]
    dry_run: bool,

    /// Write triangles as they are proved and hold few of them (STL only). What
    /// needs the whole mesh (strips, its area, loops of its edges) is not told
    #[arg(long, conflicts_with_all = ["dry_run", "evidence", "normals", "extras"])]
    stream: bool,

    /// Make this many meshes, each 1.5 times finer in length than the one before,
    /// for convergence studies: OUT_1, OUT_2 and so on, the first as asked for
    #[arg(long, value_name = "N", conflicts_with_all = ["dry_run", "stream"],
          value_parser = clap::value_parser!(u32).range(1..=20))]
    family: Option<u32>,

    /// Tell the shape and size of triangles in full: all measures with quantiles,
    /// histograms and the worst twenty with their places
    #[arg(long, conflicts_with_all = ["dry_run", "stream"])]
    quality: bool,

    /// How the summary is printed
    #[arg(long, value_enum, default_value_t)]
    format: OutputStyle,
}

/// The smallest normal angle, degrees: a hundredth of what anybody asks for, and
/// 36,000 samples round a full circle.
const LEAST_ANGLE: f64 = 0.01;

/// An angle as typed, in degrees.
fn angle(text: &str) -> Result<f64, UsageError> {
    match text.parse() {
        Ok(angle) if (LEAST_ANGLE..=180.0).contains(&angle) => Ok(angle),
        _ => Err(UsageError::Angle(text.to_owned())),
    }
}

fn names(names: &[&'static str]) -> impl TypedValueParser<Value = String> + use<> {
    PossibleValuesParser::new(names.to_vec())
}

/// Why the job was refused before it began.
#[derive(Debug, thiserror::Error)]
enum UsageError {
    #[error(
        "--output {0}: no format is known for this extension; name it stl, obj, ply, glb or vtu, or give --as"
    )]
    Extension(String),
    #[error(
        "--output -: standard output has no extension; give the format with --as stl, obj, ply, glb or vtu"
    )]
    Standard,
    #[error("`{0}` is no normal angle; write degrees, from 0.01 to 180")]
    Angle(String),
    #[error(
        "--normals: stl has no vertex normals, only those of its facets; write ply, obj or glb"
    )]
    Normals,
    #[error(
        "--family: a file a level is written, and all get their names together; name a plain file"
    )]
    Family,
    #[error(
        "--evidence: obj has one patch a triangle, and triangles of a sized mesh may lie on several; write ply or vtu"
    )]
    SizedEvidence,
    #[error("--solids: only stl has solids; write stl")]
    Solids,
    #[error("--stream: {0} needs the whole mesh before its first byte; write stl")]
    Stream(Format),
    #[error("--extra {0}: only glb has room for lines and points besides the mesh")]
    Extra(String),
}

impl TessellateArguments {
    /// Reads, meshes, writes, and tells how it went.
    pub(super) fn run(&self) -> Outcome {
        match self.try_run() {
            Ok(outcome) => outcome,
            Err(error) => Outcome::refuse(error),
        }
    }

    fn try_run(&self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let (output, family) = match self.family {
            None => (Some(Output::open(&self.output, &[&self.set])?), Vec::new()),
            Some(levels) => (None, self.family_outputs(levels)?),
        };
        let format = self.file_format()?;
        let layout = self
            .layout
            .as_deref()
            .map(str::parse::<Layout>)
            .transpose()?;
        format.layout(layout)?;
        if self.normals && format == Format::Stl {
            return Err(UsageError::Normals.into());
        }
        if self.solids && format != Format::Stl {
            return Err(UsageError::Solids.into());
        }
        if let Some(extra) = self.extras.first()
            && format != Format::Glb
        {
            return Err(UsageError::Extra(extra.clone()).into());
        }
        if self.evidence && !format.holds_evidence() {
            return Err(FormatError::Evidence(format).into());
        }
        if self.evidence && self.sized.given() && format == Format::Obj {
            return Err(UsageError::SizedEvidence.into());
        }
        if self.stream && format != Format::Stl {
            return Err(UsageError::Stream(format).into());
        }
        let progress = self.meshing.begin();
        let clock = Instant::now();
        let mut reading = match source::read(&self.set) {
            Ok(reading) => reading,
            Err(faults) => {
                drop(progress);
                source::show_faults(&faults);
                return Ok(Outcome::Refused);
            }
        };
        let seconds = clock.elapsed().as_secs_f64();
        let turned_over = self.meshing.prepare(&mut reading, &progress)?;
        let set = &reading.set;
        let limits = self.limits(set)?;
        let wanted = self.wanted(set)?;
        let of = |piece: PieceId| wanted[piece.index()];
        let budget = self.meshing.budget();
        let stage = |name| progress.stage(name);
        let job = Job {
            set,
            turned_over: &turned_over,
            wanted: &wanted,
            format,
            layout,
            budget,
            progress: &progress,
            reading: seconds,
        };
        let chord = Tolerance::new(limits.chord)?;
        let held = job.held(&limits, chord, self.thin);
        if self.dry_run {
            let mut prediction = Prediction::new(set, &held, of, self.carries(format), stage)?;
            if !self.evidence {
                prediction.sample.evidence = None;
            }
            let none = Figures::default();
            let options = WriteOptions {
                layout,
                normals: self.normals,
                solids: self.solids,
                // Only whether they are there tells on the size.
                surface: none.given(),
                ..WriteOptions::new(chord)
            };
            let written = format::predict(&prediction, set, format, &options)?;
            let refused = prediction.affordable(&budget).err();
            drop(progress);
            let why = refused.as_ref().map(ToString::to_string);
            let forecast = Forecast::new(set, &limits, &prediction, format, &written, why);
            report(&self.format.print(&forecast, Forecast::text)?, false)?;
            return Ok(refused.map_or(Outcome::Done, Outcome::refuse));
        }
        let Some(output) = output else {
            let summary = self.family(&job, &limits, family)?;
            drop(progress);
            let text = if self.quality {
                FamilySummary::text_with_places
            } else {
                FamilySummary::text
            };
            report(&self.format.print(&summary, text)?, false)?;
            return Ok(Outcome::Done);
        };
        if self.stream {
            let limits_held = (&held, chord);
            let (made, written) = stream(output, set, limits_held, &budget, of, &progress)?;
            drop(progress);
            let name = |patch: &PatchId| set.patches()[patch.index()].name.clone();
            let turned_over = turned_over.iter().map(name).collect();
            let reading = SecondsLine {
                reading: seconds,
                ..SecondsLine::default()
            };
            let summary = StreamSummary::new(set, &limits, &made, &written, reading, turned_over);
            report(&self.format.print(&summary, StreamSummary::text)?, false)?;
            return Ok(Outcome::Done);
        }
        let standard = output.is_standard();
        let made = self.make(&job, &limits, 1.0, |write| {
            Ok(output.write(write)?.map(|written| (written, ())))
        })?;
        drop(progress);
        let Some((summary, ())) = made else {
            return Ok(Outcome::Done);
        };
        let text = if self.quality {
            Summary::text_with_places
        } else {
            Summary::text
        };
        report(&self.format.print(&summary, text)?, standard)?;
        Ok(Outcome::Done)
    }

    /// Whether the mesh has to know the places of its corners.
    fn carries(&self, format: Format) -> bool {
        self.evidence || format == Format::Vtu
    }

    fn file_format(&self) -> Result<Format, Box<dyn std::error::Error>> {
        if let Some(name) = &self.format_name {
            return Ok(name.parse()?);
        }
        if self.output.as_os_str() == "-" {
            return Err(UsageError::Standard.into());
        }
        let unknown = || UsageError::Extension(self.output.display().to_string());
        Ok(Format::from_extension(&self.output).ok_or_else(unknown)?)
    }

    fn limits(&self, set: &PatchSet) -> Result<Limits, UsageError> {
        let own = set.tolerances();
        let limits = self.meshing.limits(set);
        let angle = self.normal_angle.or(own.normal_deg.map(Tolerance::get));
        if let Some(angle) = angle.filter(|a| !(LEAST_ANGLE..=180.0).contains(a)) {
            return Err(UsageError::Angle(angle.to_string()));
        }
        let edge = self
            .max_edge
            .map(|e| e.in_unit(set.unit()))
            .or(limits.max_edge);
        Ok(Limits::new(limits.chord, angle.map(f64::to_radians), edge))
    }

    /// Which pieces belong to the panels asked for.
    fn wanted(&self, set: &PatchSet) -> Result<Vec<bool>, super::panels::NoPanel> {
        let chosen: Option<Vec<PanelId>> = panels(set, &self.panels)?;
        let of_piece = |piece: &crate::patch_set::Piece| set.patches()[piece.patch.index()].panel;
        Ok(set
            .pieces()
            .iter()
            .map(|piece| chosen.as_ref().is_none_or(|c| c.contains(&of_piece(piece))))
            .collect())
    }
}
