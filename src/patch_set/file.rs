//! The file as written: the schema of the RON text, and at the same time the
//! structures from which a set is built in code.
//!
//! All lengths are in the set's unit. Every field that has a default may be
//! left out of the text.

use serde::{Deserialize, Deserializer, Serialize, Serializer, de, ser::SerializeTuple};

use super::{Class, Demand};
use crate::bezier::Side;
use crate::pace;
use crate::scalar::LengthUnit;
use crate::surface::Surface;

/// A whole patch set as written.
///
/// ```
/// use chordwise::patch_set::{PatchSet, PatchEntry, SetFile};
/// use chordwise::surface::{Plane, Surface};
/// let plane = Plane { origin: [0.0; 3], u: [100.0, 0.0, 0.0], v: [0.0, 50.0, 0.0] };
/// let file = SetFile {
///     patches: vec![PatchEntry::new("lid/1", Surface::Plane(plane))],
///     ..SetFile::new("lid")
/// };
/// let reading = PatchSet::build(file)?;
/// assert_eq!(reading.set.panels()[0].name, "lid");
/// # Ok::<(), chordwise::patch_set::Faults>(())
/// ```
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SetFile {
    /// The set's name. Default empty.
    #[serde(default)]
    pub name: String,
    /// The unit of all lengths. Default mm.
    #[serde(default)]
    pub units: Units,
    /// Tolerances; what is left out has its default.
    #[serde(default)]
    pub tolerance: ToleranceEntry,
    /// Points shared by index.
    #[serde(default)]
    pub points: Vec<[f64; 3]>,
    /// The patches.
    #[serde(deserialize_with = "entries")]
    pub patches: Vec<PatchEntry>,
    /// Repetitions of panels or patches.
    #[serde(default)]
    pub copies: Vec<CopyEntry>,
    /// Demands on seams.
    #[serde(default)]
    pub seams: Vec<SeamEntry>,
    /// Tolerance classes of panels.
    #[serde(default)]
    pub classes: Vec<ClassEntry>,
    /// Sizes of panels, for sized meshes.
    #[serde(default)]
    pub sizes: Vec<SizeEntry>,
}

impl SetFile {
    /// An empty set in millimetres. It needs patches before it can be built.
    #[must_use]
    pub fn new(name: impl Into<String>) -> Self {
        Self {
            name: name.into(),
            ..Self::default()
        }
    }
}

/// The unit as written.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize)]
#[allow(non_camel_case_types, reason = "units are written in small letters")]
pub enum Units {
    /// Metre.
    m,
    /// Centimetre.
    cm,
    /// Millimetre, the default.
    #[default]
    mm,
    /// Inch.
    inch,
}

impl From<Units> for LengthUnit {
    fn from(units: Units) -> Self {
        match units {
            Units::m => Self::Metre,
            Units::cm => Self::Centimetre,
            Units::mm => Self::Millimetre,
            Units::inch => Self::Inch,
        }
    }
}

/// Tolerances as written; lengths in the set's unit, angles in degrees.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ToleranceEntry {
    /// The class of the whole set, for what is not given as a number here.
    #[serde(default)]
    pub class: Option<Class>,
    /// Largest distance between mesh and surface. Default 0.1 mm.
    #[serde(default)]
    pub chord: Option<f64>,
    /// Largest turn of the normal in a triangle. No default.
    #[serde(default)]
    pub normal_deg: Option<f64>,
    /// Largest triangle edge. No default.
    #[serde(default)]
    pub max_edge: Option<f64>,
    /// Edges within this distance are joined. Default 0.01 mm.
    #[serde(default)]
    pub gap: Option<f64>,
    /// Edges within this distance are looked at together. Default 10 x gap.
    #[serde(default)]
    pub search: Option<f64>,
    /// Largest angle of a tangent seam. Default 0.1.
    #[serde(default)]
    pub tangent_deg: Option<f64>,
    /// Smallest angle of an undeclared crease. Default 10.
    #[serde(default)]
    pub crease_deg: Option<f64>,
    /// Largest difference of normal curvature, in 1/mm. No default.
    #[serde(default)]
    pub curvature_per_mm: Option<f64>,
}

/// The list of patches, counted as they are read.
fn entries<'de, D: Deserializer<'de>>(source: D) -> Result<Vec<PatchEntry>, D::Error> {
    struct Entries;
    impl<'de> de::Visitor<'de> for Entries {
        type Value = Vec<PatchEntry>;

        fn expecting(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
            out.write_str("a sequence")
        }

        fn visit_seq<A: de::SeqAccess<'de>>(self, mut list: A) -> Result<Self::Value, A::Error> {
            let mut found = Vec::new();
            while let Some(entry) = list.next_element()? {
                found.push(entry);
                pace::step(1);
            }
            Ok(found)
        }
    }
    source.deserialize_seq(Entries)
}

/// A patch as written.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct PatchEntry {
    /// Its name, `panel/part`; without a slash it is its own panel.
    pub name: String,
    /// The surface.
    pub surface: Surface,
    /// Whether the outward normal is -(S_u x S_v). Default false.
    #[serde(default)]
    pub flip: bool,
    /// The coordinate that changes sign, before `place`. Outward stays outward.
    #[serde(default)]
    pub mirror: Option<Axis>,
    /// A rigid motion.
    #[serde(default)]
    pub place: Option<PlaceEntry>,
}

impl PatchEntry {
    /// A patch where its surface stands.
    #[must_use]
    pub fn new(name: impl Into<String>, surface: Surface) -> Self {
        Self {
            name: name.into(),
            surface,
            flip: false,
            mirror: None,
            place: None,
        }
    }
}

/// A coordinate.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum Axis {
    /// x.
    X,
    /// y.
    Y,
    /// z.
    Z,
}

/// A rigid motion as written: a turn, then a shift.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct PlaceEntry {
    /// The direction turned about. Default (0, 0, 1).
    #[serde(default)]
    pub axis: Option<[f64; 3]>,
    /// The angle, anticlockwise seen against the axis. Default 0.
    #[serde(default)]
    pub angle_deg: f64,
    /// A point on the axis. Default the origin.
    #[serde(default)]
    pub about: [f64; 3],
    /// The shift after the turn. Default none.
    #[serde(default)]
    pub shift: [f64; 3],
}

/// A repetition of a panel or of one patch.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct CopyEntry {
    /// The panel or patch that is repeated: from `patches`, or an earlier copy.
    pub of: String,
    /// The copy's name: of the panel (`wing left/3` becomes `<name>/3`), or of
    /// the patch.
    pub name: String,
    /// The coordinate that changes sign, before `place`. Outward stays outward.
    #[serde(default)]
    pub mirror: Option<Axis>,
    /// A rigid motion.
    #[serde(default)]
    pub place: Option<PlaceEntry>,
}

/// A demand on a seam, or on all seams between two panels or patches.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SeamEntry {
    /// One end.
    pub between: SeamEndEntry,
    /// The other end.
    pub and: SeamEndEntry,
    /// What is asked.
    pub demand: Demand,
    /// The tolerance class the seam is held to.
    #[serde(default)]
    pub class: Option<Class>,
}

/// The tolerance class of a panel, or of all panels that fit a pattern.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ClassEntry {
    /// The panel; `*` stands for any run of letters.
    pub of: String,
    /// Its class.
    pub class: Class,
}

/// The size of edges on a panel, or on all panels that fit a pattern.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SizeEntry {
    /// The panel; `*` stands for any run of letters.
    pub of: String,
    /// Largest edge that a sized mesh aims at there.
    pub size: f64,
}

/// One end of a seam as written: `("wing/1", U1)` for an edge, `"wing"` for
/// any edge of a panel or patch.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum SeamEndEntry {
    /// One edge of a patch.
    Edge(String, Side),
    /// All edges of a panel, or of a patch if no panel has the name; with `*`
    /// for any run of letters, of all panels that fit.
    Any(String),
}

impl SeamEndEntry {
    /// The name it gives.
    #[must_use]
    pub fn name(&self) -> &str {
        match self {
            Self::Edge(name, _) | Self::Any(name) => name,
        }
    }
}

impl Serialize for SeamEndEntry {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        match self {
            Self::Any(name) => serializer.serialize_str(name),
            Self::Edge(name, side) => {
                let mut pair = serializer.serialize_tuple(2)?;
                pair.serialize_element(name)?;
                pair.serialize_element(side)?;
                pair.end()
            }
        }
    }
}

impl<'de> Deserialize<'de> for SeamEndEntry {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(SeamEndVisitor)
    }
}

struct SeamEndVisitor;

impl<'de> de::Visitor<'de> for SeamEndVisitor {
    type Value = SeamEndEntry;

    fn expecting(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str("an edge like (\"wing/1\", U1), or the name of a panel or patch")
    }

    fn visit_str<E: de::Error>(self, name: &str) -> Result<SeamEndEntry, E> {
        Ok(SeamEndEntry::Any(name.to_owned()))
    }

    fn visit_seq<A: de::SeqAccess<'de>>(self, mut pair: A) -> Result<SeamEndEntry, A::Error> {
        let missing = |at, visitor: &Self| de::Error::invalid_length(at, visitor);
        let name = pair.next_element()?.ok_or_else(|| missing(0, &self))?;
        let side = pair.next_element()?.ok_or_else(|| missing(1, &self))?;
        Ok(SeamEndEntry::Edge(name, side))
    }
}
