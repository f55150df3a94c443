//! What a run may take: triangles and memory.

/// The triangles made unless more are allowed: two and a half gigabytes of STL,
/// which is ten times what a whole vehicle takes at a tenth of a millimetre.
pub const MOST_TRIANGLES: u64 = 50_000_000;

/// The memory taken unless more is allowed: half of what a workstation has that
/// surfaces of vehicles are drawn on, so that it stays usable meanwhile.
pub const MOST_BYTES: u64 = 16_000_000_000;

/// Corners are numbered in 32 bits, three a triangle, with some numbers set
/// apart: more than this is never made, whatever is allowed.
const NUMBERED: u64 = 1_400_000_000;

/// Bytes a triangle of the finished mesh takes at the peak: measured at 160 to
/// 180 with a million triangles, strips and measures included, and rounded up.
const PER_TRIANGLE: f64 = 190.0;

/// Bytes of the parameters of a triangle's corners, where they are kept.
const PER_EVIDENCE: f64 = 48.0;

/// Bytes a piece takes, its net, edges, seams and share of the text: measured
/// at 3,000 with bicubic patches.
const PER_PIECE: f64 = 4_000.0;

/// Bytes of the program itself, its threads and their work: measured at 24 MB with
/// two threads at pieces of tens of thousands of triangles.
const BASE: f64 = 32e6;

/// What a run may take. It is refused before anything is set aside where it is
/// predicted to take more.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Budget {
    /// The most triangles.
    pub triangles: u64,
    /// The most memory, bytes.
    pub bytes: u64,
}

impl Default for Budget {
    fn default() -> Self {
        Self {
            triangles: MOST_TRIANGLES,
            bytes: MOST_BYTES,
        }
    }
}

impl Budget {
    /// The most triangles that can be numbered, if not fewer.
    pub(super) fn triangles(&self) -> f64 {
        as_float(self.triangles.min(NUMBERED))
    }

    /// Bytes that a mesh is predicted to take at the peak.
    #[must_use]
    pub fn predicted_bytes(triangles: f64, pieces: usize, evidence: bool) -> f64 {
        let each = PER_TRIANGLE + if evidence { PER_EVIDENCE } else { 0.0 };
        BASE + each * triangles + PER_PIECE * as_float(pieces as u64)
    }

    /// As the two above and below, for the rooms beneath.
    pub(crate) fn triangles_allowed(&self) -> f64 {
        self.triangles()
    }

    /// Bytes that may be taken.
    pub(crate) fn bytes_allowed(&self) -> f64 {
        self.bytes()
    }

    /// Bytes that may be taken.
    pub(super) fn bytes(&self) -> f64 {
        as_float(self.bytes)
    }
}

/// A count as a float; what is lost above 2^53 is no matter here.
#[allow(
    clippy::cast_precision_loss,
    reason = "a prediction is good to a fifth, not to a unit"
)]
pub(super) fn as_float(count: u64) -> f64 {
    count as f64
}
