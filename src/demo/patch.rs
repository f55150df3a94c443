//! A shipped set before it is text: panels of patches, and what is asked of
//! their seams.

use super::sheet::Net;
use crate::bezier::Side;
use crate::scalar::Vector;

/// A polynomial or rational Bezier curve.
#[derive(Debug, Clone)]
pub(super) struct CurveText {
    pub(super) points: Vec<Vector>,
    pub(super) weights: Option<Vec<f64>>,
}

impl CurveText {
    pub(super) fn polynomial(points: Vec<Vector>) -> Self {
        Self {
            points,
            weights: None,
        }
    }
}

/// A surface as it will be written.
#[derive(Debug, Clone)]
pub(super) enum SurfaceText {
    /// A net of its own.
    Bezier(Net),
    /// A net whose points go into the shared table.
    Indexed(Net),
    /// A B-spline net with its degrees and knots.
    BSpline {
        degree: (usize, usize),
        knots: [Vec<f64>; 2],
        net: Net,
    },
    /// A profile turned fully about an axis.
    Revolution {
        profile: CurveText,
        center: Vector,
        axis: Vector,
    },
    /// Straight lines between two curves.
    Ruled { from: CurveText, to: CurveText },
    /// Four boundary curves.
    Coons {
        u0: CurveText,
        u1: CurveText,
        v0: CurveText,
        v1: CurveText,
    },
}

/// A patch: its name within the panel, and what it is.
#[derive(Debug, Clone)]
pub(super) struct PatchText {
    pub(super) name: String,
    pub(super) surface: SurfaceText,
    pub(super) flip: bool,
    pub(super) comment: Option<&'static str>,
}

impl PatchText {
    pub(super) fn new(name: impl Into<String>, surface: SurfaceText) -> Self {
        Self {
            name: name.into(),
            surface,
            flip: false,
            comment: None,
        }
    }
}

/// A panel with the lines a reader should know about it.
#[derive(Debug, Clone)]
pub(super) struct PanelText {
    pub(super) name: &'static str,
    pub(super) comment: &'static [&'static str],
    pub(super) patches: Vec<PatchText>,
}

/// A panel that is the mirror image of another in the plane y = 0.
#[derive(Debug, Clone)]
pub(super) struct CopyText {
    pub(super) of: &'static str,
    pub(super) name: &'static str,
}

/// An edge, or a whole panel where there is no side.
#[derive(Debug, Clone)]
pub(super) struct EndText {
    pub(super) name: String,
    pub(super) side: Option<Side>,
}

/// A demand on the seam between two edges or two panels.
#[derive(Debug, Clone)]
pub(super) struct SeamText {
    pub(super) ends: [EndText; 2],
    pub(super) demand: &'static str,
    pub(super) comment: Option<&'static str>,
}

/// A whole set, millimetres.
#[derive(Debug, Clone)]
pub(super) struct SetText {
    pub(super) name: &'static str,
    pub(super) comment: &'static [&'static str],
    pub(super) panels: Vec<PanelText>,
    pub(super) copies: Vec<CopyText>,
    pub(super) seams: Vec<SeamText>,
}
