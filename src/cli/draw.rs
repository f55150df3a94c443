//! `chordwise draw`: pictures of a set.

use std::io::Write;
use std::path::PathBuf;

use clap::Args;
use clap::builder::{PossibleValuesParser, TypedValueParser};

use super::Outcome;
use super::meshing::MeshingArguments;
use super::output::Output;
use super::panels::panels;
use super::source;
use crate::continuity::Survey;
use crate::format::FormatError;
use crate::mesh::{Audit, Evidence, Mesh, Meshed};
use crate::pace;
use crate::patch_set::PatchSet;
use crate::picture::{
    Canvas, Drawing, Focus, Picture, PictureOptions, Plane, Scene, SeamCurve, SectionHead, Shading,
    View, borders, draw_section, seam_curves, section,
};
use crate::scalar::{Length, LengthUnit, Tolerance, Vector};

const EXAMPLES: &str = "\
Examples:
  chordwise draw front.ron -o front.png
  chordwise draw front.ron -o lines.png --shading reflection --view left
  chordwise draw front.ron -o bend.png --shading mean --range -0.002:0.002
  chordwise draw front.ron -o mesh.png --edges --zoom-panel wing
  chordwise draw front.ron -o seams.png --seams
  chordwise draw front.ron -o worst.png --zoom-seam 1 --shading reflection
  chordwise draw front.ron -o cut.svg --section x=300
  chordwise draw front.ron -o below.png --direction -1,-1,-0.5 --size 1280x720

Pictures are PNG, in parallel projection, and the same for any number of threads.
Axes are those of a vehicle: x rearwards, y to the right, z up.

Exit code 0: drawn. 2: bad usage, unreadable, or a triangle that cannot be
proved.";

/// Draw a set: surfaces, reflection lines, curvature, deviation, mesh, seams
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct DrawArguments {
    /// The patch set; `-` is standard input
    #[arg(value_name = "SET.ron")]
    set: PathBuf,

    /// The picture to write; `-` is standard output
    #[arg(short, long, value_name = "FILE")]
    output: PathBuf,

    /// How surfaces are shaded
    #[arg(long, value_name = "SHADING", default_value = "plain",
        value_parser = PossibleValuesParser::new(Shading::ALL.map(Shading::name))
            .map(|name| Shading::named(&name).unwrap_or(Shading::Plain)))]
    shading: Shading,

    /// From where the set is seen [default: front-quarter; straight on, with
    /// --zoom-seam]
    #[arg(long, value_name = "VIEW", conflicts_with = "direction",
        value_parser = PossibleValuesParser::new(View::NAMED.map(|v| v.name().unwrap_or_default()))
            .map(|name| View::named(&name).unwrap_or(View::FrontQuarter)))]
    view: Option<View>,

    /// From where the set is seen, as a vector towards the eye
    #[arg(long, value_name = "X,Y,Z", allow_hyphen_values = true, value_parser = direction)]
    direction: Option<Vector>,

    /// Draw the edges of the mesh
    #[arg(long)]
    edges: bool,

    /// Draw the seams by finding, and number those that are not as demanded, worst
    /// first
    #[arg(long)]
    seams: bool,

    /// Fill the picture with this panel
    #[arg(long, value_name = "NAME", conflicts_with = "zoom_seam")]
    zoom_panel: Option<String>,

    /// Show the worst place of this seam, by its number in the list of seams,
    /// worst first
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..))]
    zoom_seam: Option<u32>,

    /// What the picture's width covers at a seam [default: half as much again as
    /// the seam is long]
    #[arg(
        long,
        value_name = "LENGTH",
        requires = "zoom_seam",
        allow_negative_numbers = true
    )]
    across: Option<Length>,

    /// Ends of the scale of figures [default: round figures that hold nineteen
    /// twentieths of the area]
    #[arg(long, value_name = "LOW:HIGH", allow_hyphen_values = true, value_parser = range)]
    range: Option<[f64; 2]>,

    /// Parallel lights to the full turn, for reflection lines [default: 48, and
    /// 192 with --zoom-seam]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(2..=2000))]
    lights: Option<u16>,

    /// Stand the lights upright in the picture
    #[arg(long)]
    upright: bool,

    /// Cut the set by a plane and draw the curves with their curvature as a comb,
    /// as PNG or SVG: x=LENGTH, y=LENGTH, z=LENGTH, or NX,NY,NZ=LENGTH
    #[arg(long, value_name = "PLANE", allow_hyphen_values = true, value_parser = plane)]
    section: Option<Plane>,

    /// The curvature that the tooth in the legend stands for [default: a round
    /// figure that nine tenths of the places keep to]
    #[arg(long, value_name = "CURVATURE", requires = "section", allow_hyphen_values = true, value_parser = curvature)]
    comb: Option<f64>,

    /// Pixels across and down, from 64 to 8192
    #[arg(long, value_name = "WIDTHxHEIGHT", default_value = "1920x1080", value_parser = size)]
    size: (usize, usize),

    /// Only this panel; may be repeated
    #[arg(long = "panel", value_name = "NAME")]
    panels: Vec<String>,

    #[command(flatten)]
    meshing: MeshingArguments,
}

/// Why a picture was refused before it was begun.
#[derive(Debug, thiserror::Error)]
enum UsageError {
    #[error("`{0}` is no direction; write three numbers that are not all zero, as -1,-1,0.5")]
    Direction(String),
    #[error("`{0}` is no range; write two figures, the lower first, as -0.01:0.01")]
    Range(String),
    #[error("`{0}` is no size; write pixels across and down, from 64 to 8192, as 1920x1080")]
    Size(String),
    #[error("--zoom-seam {0}: the set has {1} seams; `chordwise seams` lists them, worst first")]
    NoSeam(u32, usize),
    #[error("`{0}` is no plane; write x=100, y=0, z=-20 or a normal and an offset, as 1,1,0=250")]
    Plane(String),
    #[error("`{0}` is no curvature; write a positive figure")]
    Curvature(String),
    #[error("--output {0}: pictures are PNG, sections also SVG; end the name in .png or .svg")]
    Extension(String),
}

fn numbers<const N: usize>(text: &str, between: char) -> Option<[f64; N]> {
    let found: Vec<f64> = text
        .split(between)
        .map(|part| part.trim().parse::<f64>().ok().filter(|x| x.is_finite()))
        .collect::<Option<_>>()?;
    found.try_into().ok()
}

fn direction(text: &str) -> Result<Vector, UsageError> {
    numbers::<3>(text, ',')
        .map(Vector::from)
        .and_then(|v| v.try_normalize(0.0))
        .ok_or_else(|| UsageError::Direction(text.to_owned()))
}

fn range(text: &str) -> Result<[f64; 2], UsageError> {
    numbers::<2>(text, ':')
        .filter(|[low, high]| low < high)
        .ok_or_else(|| UsageError::Range(text.to_owned()))
}

fn plane(text: &str) -> Result<Plane, UsageError> {
    let fault = || UsageError::Plane(text.to_owned());
    let (normal, offset) = text.split_once('=').ok_or_else(fault)?;
    let normal = match normal.trim() {
        "x" => Vector::x(),
        "y" => Vector::y(),
        "z" => Vector::z(),
        numbers_text => Vector::from(numbers::<3>(numbers_text, ',').ok_or_else(fault)?),
    };
    let [offset] = numbers::<1>(offset, '\0').ok_or_else(fault)?;
    let length = normal.norm();
    let unit = normal.try_normalize(0.0).ok_or_else(fault)?;
    Ok(Plane {
        normal: unit,
        offset: offset / length,
    })
}

fn curvature(text: &str) -> Result<f64, UsageError> {
    let found = text
        .parse()
        .ok()
        .filter(|k: &f64| k.is_finite() && *k > 0.0);
    found.ok_or_else(|| UsageError::Curvature(text.to_owned()))
}

fn size(text: &str) -> Result<(usize, usize), UsageError> {
    let fault = || UsageError::Size(text.to_owned());
    let (width, height) = text.split_once('x').ok_or_else(fault)?;
    let side = |text: &str| text.parse().ok().filter(|n| (64..=8192).contains(n));
    Ok((
        side(width).ok_or_else(fault)?,
        side(height).ok_or_else(fault)?,
    ))
}

impl DrawArguments {
    /// Reads, meshes, draws.
    pub(super) fn run(&self) -> Outcome {
        match self.try_run() {
            Ok(outcome) => outcome,
            Err(error) => Outcome::refuse(error),
        }
    }

    fn try_run(&self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let ends_in = |name: &str| {
            let end = self.output.extension();
            end.is_some_and(|e| e.eq_ignore_ascii_case(name))
        };
        let is_svg = self.section.is_some() && ends_in("svg");
        if self.output.as_os_str() != "-" && !ends_in("png") && !is_svg {
            return Err(UsageError::Extension(self.output.display().to_string()).into());
        }
        let output = Output::open(&self.output, &[&self.set])?;
        let progress = self.meshing.begin();
        let mut reading = match source::read(&self.set) {
            Ok(reading) => reading,
            Err(faults) => {
                drop(progress);
                source::show_faults(&faults);
                return Ok(Outcome::Refused);
            }
        };
        self.meshing.prepare(&mut reading, &progress)?;
        let set = &reading.set;
        let options = self.options(set)?;
        let limits = self.meshing.limits(set);
        let chosen = panels(set, &self.panels)?;
        let wanted = |piece: crate::patch_set::PieceId| {
            chosen
                .as_ref()
                .is_none_or(|c| c.contains(&set.patch_of(piece).panel))
        };
        let stage = |name| progress.stage(name);
        let budget = self.meshing.budget();
        let made = Meshed::within(set, &limits, &budget, wanted, true, stage)?;
        let deviations = if self.shading == Shading::Deviation {
            progress.stage("proving each triangle");
            deviations(set, &made.mesh, options.chord)?
        } else {
            Vec::new()
        };
        let scene = Scene::new(set, &made.mesh)?;
        if let Some(plane) = &self.section {
            progress.stage("cutting");
            let drawing = self.cut(&scene, plane);
            progress.stage("writing");
            output.write(|out| {
                if is_svg {
                    out.write_all(drawing.svg().as_bytes())?;
                    return Ok(());
                }
                write_png(&drawing.canvas(), out)
            })?;
            return Ok(Outcome::Done);
        }
        let mut options = PictureOptions {
            proved: made.deviation.proved(),
            ..options
        };
        let mut seams = Vec::new();
        if self.seams || self.zoom_seam.is_some() {
            progress.stage("examining seams");
            let survey = Survey::of(set, &made.topology);
            seams = seam_curves(set, &made.topology, &survey, options.chord);
        }
        if let Some(number) = self.zoom_seam {
            self.zoom(&seams, number, set.unit(), &mut options)?;
        }
        progress.stage("drawing");
        pace::expect((self.size.0 * self.size.1) as u64, "pixels");
        let mut picture = Picture::draw(&scene, &options, &deviations);
        if self.shading.has_scale() || !seams.is_empty() {
            let curves = borders(set, &made.topology, wanted, options.chord);
            picture.borders(&curves);
        }
        picture.seams(&seams);
        picture.caption(&scene, &options, &seams);
        progress.stage("writing");
        output.write(|out| write_png(&picture.canvas, out))?;
        Ok(Outcome::Done)
    }

    /// The drawing of a section.
    fn cut(&self, scene: &Scene<'_>, plane: &Plane) -> Drawing {
        let head = SectionHead {
            name: scene.set.name().to_owned(),
            unit: scene.set.unit().symbol(),
            panels: scene.mesh.panels.clone(),
            comb: self.comb,
        };
        draw_section(&section(scene, plane), plane, self.size, &head)
    }

    /// Turns the picture to the worst place of a seam.
    fn zoom(
        &self,
        seams: &[SeamCurve],
        number: u32,
        unit: LengthUnit,
        options: &mut PictureOptions,
    ) -> Result<(), UsageError> {
        let seam = seams
            .get(number as usize - 1)
            .ok_or(UsageError::NoSeam(number, seams.len()))?;
        let usual = 1.5 * seam.length.max(10.0 * options.chord);
        options.focus = Focus::Place {
            point: seam.worst,
            across: self.across.map_or(usual, |a| a.in_unit(unit)),
        };
        if let (None, None, Some(normal)) = (self.view, self.direction, seam.normal) {
            options.view = View::From(normal);
        }
        Ok(())
    }

    fn options(&self, set: &PatchSet) -> Result<PictureOptions, Box<dyn std::error::Error>> {
        let focus = match &self.zoom_panel {
            Some(name) => panels(set, std::slice::from_ref(name))?
                .and_then(|list| list.first().copied())
                .map_or(Focus::All, |panel| Focus::Panel(panel.index())),
            None => Focus::All,
        };
        let chord = self.meshing.limits(set).chord;
        let usual = if self.zoom_seam.is_some() { 192 } else { 48 };
        Ok(PictureOptions {
            size: self.size,
            view: self
                .direction
                .map(View::From)
                .or(self.view)
                .unwrap_or(View::FrontQuarter),
            focus,
            shading: self.shading,
            mesh_edges: self.edges,
            range: self.range,
            lights: f64::from(self.lights.unwrap_or(usual)),
            upright: self.upright,
            chord: Tolerance::new(chord)?.get(),
            proved: 0.0,
        })
    }
}

fn write_png(canvas: &Canvas, out: &mut dyn Write) -> Result<(), FormatError> {
    let failed = |error| FormatError::Io(std::io::Error::other(error));
    canvas.write_png(out).map_err(failed)
}

/// The proved deviation of every triangle.
pub(super) fn deviations(
    set: &PatchSet,
    mesh: &Mesh,
    chord: f64,
) -> Result<Vec<f64>, Box<dyn std::error::Error>> {
    match Evidence::of(mesh) {
        Some(evidence) => Ok(Audit::by_triangle(set, &evidence, Tolerance::new(chord)?)?),
        None => Ok(Vec::new()),
    }
}
