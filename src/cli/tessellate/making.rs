//! One mesh made, written and summed up.

use std::io::Write;
use std::time::Instant;

use super::super::figures::Figures;
use super::super::output::OutputError;
use super::super::progress::{Counted, Progress};
use super::TessellateArguments;
use crate::continuity::Survey;
use crate::format::{self, Format, FormatError, Layout, Overlay, WriteOptions, Written};
use crate::mesh::{Budget, Meshed, Strips};
use crate::pace;
use crate::patch_set::{PatchId, PatchSet, PieceId};
use crate::picture::{Extra, seam_curves};
use crate::quality::{Asked, Quality, Target};
use crate::report::{SecondsLine, SizedReport, Summary};
use crate::sampling::Limits;
use crate::scalar::{Cuboid, Tolerance};
use crate::sizing::SizedMesh;

/// What is meshed, into what, whatever the limits.
pub(super) struct Job<'a> {
    pub(super) set: &'a PatchSet,
    /// Patches that were turned over.
    pub(super) turned_over: &'a [PatchId],
    /// Which pieces are meshed.
    pub(super) wanted: &'a [bool],
    pub(super) format: Format,
    pub(super) layout: Option<Layout>,
    pub(super) budget: Budget,
    pub(super) progress: &'a Progress,
    /// Seconds it took to read the set.
    pub(super) reading: f64,
}

/// A mesh by size, with what is told of it.
struct Sized {
    meshed: Meshed,
    by_triangle: Vec<f64>,
    report: SizedReport,
}

/// Writes the file into what it is given.
pub(super) type Writing<'a> = dyn FnMut(&mut dyn Write) -> Result<Written, FormatError> + 'a;

impl Job<'_> {
    pub(super) fn of(&self, piece: PieceId) -> bool {
        self.wanted[piece.index()]
    }

    /// The limits to mesh within, so that the file is within the ones asked for.
    pub(super) fn held(&self, limits: &Limits, chord: Tolerance, thin: bool) -> Limits {
        let Cuboid { low, high } = self.set.cuboid();
        let mut held = Limits::new(
            limits.chord - self.format.rounding(low, high, chord),
            limits.normal_rad,
            limits.max_edge,
        );
        held.thin = thin;
        held
    }
}

impl TessellateArguments {
    /// Meshes within `limits`; `put` gets the file to where it should go. `None` if
    /// nobody was there to take it.
    pub(super) fn make<T>(
        &self,
        job: &Job<'_>,
        limits: &Limits,
        finer: f64,
        put: impl FnOnce(&mut Writing<'_>) -> Result<Option<(Written, T)>, OutputError>,
    ) -> Result<Option<(Summary, T)>, Box<dyn std::error::Error>> {
        let (set, format, progress) = (job.set, job.format, job.progress);
        let chord = Tolerance::new(limits.chord)?;
        let held = job.held(limits, chord, self.thin);
        let of = |piece: PieceId| job.of(piece);
        let evidence = self.carries(format);
        let stage = |name| progress.stage(name);
        let sized = self.sized(job, limits, finer, evidence)?;
        let (mut made, sized) = match sized {
            Some(sized) => (sized.meshed, Some((sized.by_triangle, sized.report))),
            None => (
                Meshed::within(set, &held, &job.budget, of, evidence, stage)?,
                None,
            ),
        };
        let mut figures = None;
        if format == Format::Vtu {
            figures = Some(match &sized {
                Some((by_triangle, _)) => Figures::proved(set, &made.mesh, by_triangle.clone()),
                None => {
                    progress.stage("proving each triangle");
                    Figures::of(set, &made.mesh, chord)?
                }
            });
        }
        if !self.evidence {
            made.mesh.evidence = None;
            made.mesh.corner_parts = None;
        }
        let mut seconds = SecondsLine {
            reading: job.reading,
            ..SecondsLine::default()
        };
        progress.stage("finding strips");
        let clock = Instant::now();
        let strips = Strips::of(&made.mesh);
        seconds.strips = clock.elapsed().as_secs_f64();
        let overlays = self.overlays(job, &made, limits);
        progress.stage("writing");
        let clock = Instant::now();
        let options = WriteOptions {
            overlays: &overlays,
            layout: job.layout,
            strips: Some(&strips),
            normals: self.normals,
            solids: self.solids,
            surface: figures.as_ref().map(Figures::given).unwrap_or_default(),
            ..WriteOptions::new(chord)
        };
        let written = put(&mut |out| {
            pace::expect(format::about_bytes(&made.mesh, format, &options), "bytes");
            let written = format::write(&made.mesh, format, &options, &mut Counted { out })?;
            progress.stage("syncing");
            Ok(written)
        })?;
        seconds.writing = clock.elapsed().as_secs_f64();
        let Some((written, more)) = written else {
            return Ok(None);
        };
        let mut summary = Summary::new(set, limits, &made, &strips, format, &written, seconds)
            .with_turned_over(set, job.turned_over);
        let sizes = sized.as_ref().map(|(_, report)| report.sizes.as_slice());
        // Whoever asks for sizes wants to know what came of them.
        if self.quality || sizes.is_some() {
            let asked = Asked {
                size: sizes.map(Target::Points),
                growth: sized.as_ref().map(|(_, report)| report.growth),
            };
            let found = Quality::of(&made.mesh, &asked);
            summary = summary.with_quality(&made.mesh, &found);
        }
        if let Some((_, report)) = sized {
            summary = summary.with_sized(report, self.meshing.chord.is_some());
        }
        Ok(Some((summary, more)))
    }

    /// The mesh by size, if one is asked for.
    fn sized(
        &self,
        job: &Job<'_>,
        limits: &Limits,
        finer: f64,
        evidence: bool,
    ) -> Result<Option<Sized>, Box<dyn std::error::Error>> {
        let chord = Tolerance::new(limits.chord)?;
        let given = self.meshing.chord.is_some();
        let held = given.then(|| job.held(limits, chord, false).chord);
        let Some(sizing) = self.sized.sizing(job, limits, (held, finer)) else {
            return Ok(None);
        };
        let wanted = (|piece: PieceId| job.of(piece), evidence);
        let stage = |name| job.progress.stage(name);
        // Sizes of panels are the file's, and become finer with the others.
        let mut finer_set = None;
        if finer > 1.0 && job.set.panels().iter().any(|panel| panel.size.is_some()) {
            finer_set.insert(job.set.clone()).divide_panel_sizes(finer);
        }
        let set = finer_set.as_ref().unwrap_or(job.set);
        let made = SizedMesh::within(set, &sizing, &job.budget, wanted, stage)?;
        let report = SizedReport::new(&sizing, &made);
        Ok(Some(Sized {
            meshed: made.meshed,
            by_triangle: made.by_triangle,
            report,
        }))
    }

    /// The extras asked for.
    fn overlays(&self, job: &Job<'_>, made: &Meshed, limits: &Limits) -> Vec<Overlay> {
        if self.extras.is_empty() {
            return Vec::new();
        }
        job.progress.stage("examining seams");
        let survey = Survey::of(job.set, &made.topology);
        let seams = seam_curves(job.set, &made.topology, &survey, limits.chord);
        Extra::ALL
            .into_iter()
            .filter(|extra| self.extras.iter().any(|name| name == extra.name()))
            .flat_map(|extra| extra.make(job.set, &made.mesh, &seams, |piece| job.of(piece)))
            .collect()
    }
}
