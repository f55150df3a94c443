//! How a set is meshed, as several commands have it typed.

use clap::Args;

use super::budget::BudgetArguments;
use super::joining::{close_gaps, orient};
use super::progress::Progress;
use super::source;
use crate::mesh::Budget;
use crate::patch_set::{PatchId, PatchSet, Reading};
use crate::sampling::Limits;
use crate::scalar::{Length, Tolerance};

/// How a set is meshed.
#[derive(Debug, Args)]
pub(super) struct MeshingArguments {
    /// Largest distance between mesh and surface, in the set's unit or with
    /// m, cm, mm or in behind it [default: the set's, else 0.1 mm]
    #[arg(long, value_name = "LENGTH", allow_negative_numbers = true)]
    pub(super) chord: Option<Length>,

    /// Turn patches over so that each part faces one way, closed parts outwards
    #[arg(long)]
    pub(super) orient: bool,

    /// Close gaps up to this in the mesh, in the set's unit or with m, cm, mm
    /// or in behind it; must be below the chord tolerance
    #[arg(long, value_name = "LENGTH", allow_negative_numbers = true)]
    pub(super) close_gaps: Option<Length>,

    #[command(flatten)]
    budget: BudgetArguments,

    /// Threads to work with; the result is the same for any number
    /// [default: all cores]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..))]
    jobs: Option<u16>,
}

impl MeshingArguments {
    /// Begins: sets the threads to work and shows what is done.
    pub(super) fn begin(&self) -> Progress {
        super::work_with(self.jobs);
        let progress = Progress::new();
        progress.stage("reading");
        progress
    }

    /// Shows the warnings of what was read, and has gaps closed and patches turned
    /// over as asked for; returns which were turned.
    ///
    /// # Errors
    /// Where the gap is no length or the edges make no topology.
    pub(super) fn prepare(
        &self,
        reading: &mut Reading,
        progress: &Progress,
    ) -> Result<Vec<PatchId>, Box<dyn std::error::Error>> {
        progress.aside(|| source::show_warnings(reading));
        close_gaps(&mut reading.set, self.close_gaps)?;
        if !self.orient {
            return Ok(Vec::new());
        }
        progress.stage("finding which way patches face");
        Ok(orient(&mut reading.set)?)
    }

    /// What the run may take.
    pub(super) fn budget(&self) -> Budget {
        self.budget.budget()
    }

    /// The limits of the set, with the chord as asked for, in its unit.
    pub(super) fn limits(&self, set: &PatchSet) -> Limits {
        let own = set.tolerances();
        Limits::new(
            self.chord
                .map_or(own.chord.get(), |c| c.in_unit(set.unit())),
            own.normal_deg.map(|a| a.get().to_radians()),
            own.max_edge.map(Tolerance::get),
        )
    }

    /// The options as typed, without defaults, for a record of the command.
    pub(super) fn typed(&self) -> String {
        let mut text = String::new();
        if let Some(chord) = &self.chord {
            text += &format!(" --chord {chord}");
        }
        if self.orient {
            text += " --orient";
        }
        if let Some(length) = &self.close_gaps {
            text += &format!(" --close-gaps {length}");
        }
        text
    }
}
