//! `--close-gaps` and `--orient`, as several commands have them.

use crate::patch_set::{PatchId, PatchSet};
use crate::scalar::{Length, Tolerance, ToleranceError};
use crate::topology::{Orientation, Topology, TopologyError};

/// Has gaps up to `length` closed.
///
/// # Errors
/// [`ToleranceError`] where the length is not positive.
pub(super) fn close_gaps(set: &mut PatchSet, length: Option<Length>) -> Result<(), ToleranceError> {
    if let Some(length) = length {
        let wide = Tolerance::new(length.in_unit(set.unit()))?;
        set.tolerances_mut().close_gaps = Some(wide);
    }
    Ok(())
}

/// Turns over what faces the wrong way, and says what that was.
///
/// # Errors
/// [`TopologyError`] where the edges do not make a topology.
pub(super) fn orient(set: &mut PatchSet) -> Result<Vec<PatchId>, TopologyError> {
    let topology = Topology::build(set)?;
    let turned = Orientation::of(set, &topology).turned();
    set.turn_over(&turned);
    Ok(turned)
}
