//! The formats and layouts by name.

use std::fmt;
use std::path::Path;
use std::str::FromStr;

use thiserror::Error;

use super::{FormatError, rounding, vtu};
use crate::scalar::{Point, Tolerance};

/// A file format for meshes.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Format {
    /// Binary STL: separate triangles in single precision.
    Stl,
    /// Wavefront OBJ: text, doubles, names.
    Obj,
    /// PLY, binary, little endian: doubles.
    Ply,
    /// glTF 2.0 in one binary file (ISO/IEC 12113).
    Glb,
    /// VTK's XML file of an unstructured grid, raw appended data: doubles, and
    /// arrays for solvers.
    Vtu,
}

/// How triangles are stored.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Layout {
    /// Every triangle with its own three points.
    Triangles,
    /// Points once, three indices a triangle.
    Indexed,
    /// Points once, strips of indices.
    Strips,
}

/// A name that is no format's.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
#[error("`{0}` is no mesh format; write stl, obj, ply, glb or vtu")]
pub struct FormatNameError(pub String);

impl Format {
    /// All formats.
    pub const ALL: [Self; 5] = [Self::Stl, Self::Obj, Self::Ply, Self::Glb, Self::Vtu];

    /// The format a file's extension asks for, in any case of letters.
    #[must_use]
    pub fn from_extension(path: &Path) -> Option<Self> {
        path.extension()?.to_str()?.parse().ok()
    }

    /// The name, which is also the extension.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Stl => "stl",
            Self::Obj => "obj",
            Self::Ply => "ply",
            Self::Glb => "glb",
            Self::Vtu => "vtu",
        }
    }

    /// The layouts the format has, its default first.
    #[must_use]
    pub fn layouts(self) -> &'static [Layout] {
        match self {
            Self::Stl => &[Layout::Triangles],
            Self::Obj | Self::Ply => &[Layout::Indexed, Layout::Triangles],
            Self::Glb => &[Layout::Strips, Layout::Indexed, Layout::Triangles],
            Self::Vtu => &[Layout::Indexed],
        }
    }

    /// How far single precision can move any point of a box, in the unit of its
    /// corners: what is to be set aside of the chord tolerance, so that the
    /// mesh is within it still when the file is read. Zero for formats that
    /// keep doubles; never more than a tenth of the chord, above which
    /// [`write`](super::write) refuses.
    #[must_use]
    pub fn rounding(self, low: Point, high: Point, chord: Tolerance) -> f64 {
        rounding::reserve(self, low, high, chord)
    }

    /// The most triangles the format can count: STL in 32 bits, PLY in 31, VTU
    /// their corners in 31.
    pub(super) fn most_triangles(self) -> u64 {
        match self {
            Self::Stl => u32::MAX.into(),
            Self::Ply => i32::MAX.unsigned_abs().into(),
            Self::Vtu => vtu::MOST_TRIANGLES.into(),
            Self::Obj | Self::Glb => u64::MAX,
        }
    }

    /// The most bytes the format can count.
    pub(super) fn most_bytes(self) -> u64 {
        match self {
            Self::Glb => u32::MAX.into(),
            _ => u64::MAX,
        }
    }

    /// Whether the format has room for the patch, u and v of every corner.
    #[must_use]
    pub fn holds_evidence(self) -> bool {
        matches!(self, Self::Obj | Self::Ply | Self::Vtu)
    }

    /// The layout to use where the given one was asked for.
    ///
    /// # Errors
    /// [`FormatError::Layout`] where the format does not have it.
    pub fn layout(self, asked: Option<Layout>) -> Result<Layout, FormatError> {
        match asked {
            None => Ok(self.layouts()[0]),
            Some(layout) if self.layouts().contains(&layout) => Ok(layout),
            Some(layout) => Err(FormatError::Layout {
                format: self,
                layout,
            }),
        }
    }
}

impl fmt::Display for Format {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

impl FromStr for Format {
    type Err = FormatNameError;

    fn from_str(text: &str) -> Result<Self, FormatNameError> {
        Self::ALL
            .into_iter()
            .find(|format| format.name().eq_ignore_ascii_case(text))
            .ok_or_else(|| FormatNameError(text.to_owned()))
    }
}

/// A name that is no layout's.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
#[error("`{0}` is no layout; write triangles, indexed or strips")]
pub struct LayoutNameError(pub String);

impl Layout {
    /// All layouts.
    pub const ALL: [Self; 3] = [Self::Triangles, Self::Indexed, Self::Strips];

    /// The name as typed and printed.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Triangles => "triangles",
            Self::Indexed => "indexed",
            Self::Strips => "strips",
        }
    }
}

impl fmt::Display for Layout {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

impl FromStr for Layout {
    type Err = LayoutNameError;

    fn from_str(text: &str) -> Result<Self, LayoutNameError> {
        Self::ALL
            .into_iter()
            .find(|layout| layout.name() == text)
            .ok_or_else(|| LayoutNameError(text.to_owned()))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn formats_go_by_extension() {
        let of = |path: &str| Format::from_extension(Path::new(path));
        assert_eq!(of("a/front.glb"), Some(Format::Glb));
        assert_eq!(of("FRONT.STL"), Some(Format::Stl));
        assert_eq!(of("front.tar.ply"), Some(Format::Ply));
        assert_eq!(of("front"), None);
        assert_eq!(of("front.step"), None);
        assert_eq!(of(".obj"), None);
    }

    #[test]
    fn a_layout_the_format_lacks_is_refused_with_a_hint() {
        assert_eq!(Format::Glb.layout(None).unwrap(), Layout::Strips);
        let error = Format::Obj.layout(Some(Layout::Strips)).unwrap_err();
        assert_eq!(
            error.to_string(),
            "obj: layout strips cannot be stored; choose indexed or triangles, or write glb"
        );
        let error = Format::Stl.layout(Some(Layout::Indexed)).unwrap_err();
        assert_eq!(
            error.to_string(),
            "stl: layout indexed cannot be stored; choose triangles, or write glb"
        );
    }
}
