//! What can be wrong with a surface as written, and where in it.

use std::fmt;

use thiserror::Error;

use crate::bezier::MAX_DEGREE;

/// The largest coordinate, length, knot or radius accepted, in the set's unit.
/// There the spacing of doubles is 1.2e-7: a hundredth of the default gap
/// tolerance even in metres, so beyond it no seam could be judged.
pub const MAX_COORDINATE: f64 = 1e9;

/// Weights must lie between this and its inverse: outside, the quotient of a
/// rational surface loses the digits that the tolerances need.
pub const MAX_WEIGHT: f64 = 1e9;

/// One step from a value to a part of it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Step {
    /// A named field.
    Field(&'static str),
    /// An entry of a list or a tuple, counted from 0.
    Item(usize),
}

/// The way from a value to a part of it, written like `net[2][3]`.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Place(pub Vec<Step>);

impl fmt::Display for Place {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (at, step) in self.0.iter().enumerate() {
            match step {
                Step::Field(name) if at == 0 => f.write_str(name)?,
                Step::Field(name) => write!(f, ".{name}")?,
                Step::Item(index) => write!(f, "[{index}]")?,
            }
        }
        Ok(())
    }
}

/// A fault and its place in the surface.
#[derive(Debug, Clone, PartialEq)]
pub struct PlacedFault {
    /// Where, from the surface's own fields on.
    pub place: Place,
    /// What.
    pub fault: SurfaceFault,
}

/// What can be wrong with a surface as written: fault, then rule.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum SurfaceFault {
    /// A coordinate or another number is NaN or infinite.
    #[error("{name} is {value}; numbers must be finite")]
    NotFinite {
        /// The coordinate or field.
        name: &'static str,
        /// Its value.
        value: f64,
    },
    /// A number is absurdly large.
    #[error("{name} is {value:e}; numbers must keep within 1e9 in the set's unit")]
    TooLarge {
        /// The coordinate or field.
        name: &'static str,
        /// Its value.
        value: f64,
    },
    /// A length that must be positive is not.
    #[error("{name} is {value}; it must be positive")]
    NotPositive {
        /// The field.
        name: &'static str,
        /// Its value.
        value: f64,
    },
    /// A length is negative.
    #[error("{name} is {value}; it must not be negative")]
    Negative {
        /// The field.
        name: &'static str,
        /// Its value.
        value: f64,
    },
    /// A weight is not positive, or absurd.
    #[error("weight is {0}; weights must be positive, from 1e-9 to 1e9")]
    Weight(f64),
    /// Neither or both of two fields that exclude each other.
    #[error("{} are given of `{first}` and `{second}`; write exactly one of the two", if *both { "both" } else { "none" })]
    Choice {
        /// Whether both are given, or none.
        both: bool,
        /// The one field.
        first: &'static str,
        /// The other.
        second: &'static str,
    },
    /// The net has no points.
    #[error("the net is empty; it must have at least 2 rows of 2 points")]
    EmptyNet,
    /// The rows have unequal lengths.
    #[error("row {row} has {found} points and row 0 has {expected}; all rows must be equally long")]
    RaggedNet {
        /// The offending row.
        row: usize,
        /// Its length.
        found: usize,
        /// The length of row 0.
        expected: usize,
    },
    /// The weights do not match the points.
    #[error(
        "{found} {what} of weights where the points have {expected}; each point needs one weight"
    )]
    WeightCount {
        /// `rows`, `columns` or `entries`.
        what: &'static str,
        /// How many there are.
        found: usize,
        /// How many there should be.
        expected: usize,
    },
    /// The degree is out of range.
    #[error("degree {0}; a degree must be 1 to {MAX_DEGREE}")]
    Degree(usize),
    /// Too few points for the degree.
    #[error("{found} points for degree {degree}; there must be at least degree + 1 = {}", degree + 1)]
    TooFewPoints {
        /// How many there are.
        found: usize,
        /// The degree.
        degree: usize,
    },
    /// The number of knots is wrong.
    #[error(
        "{found} knots for {points} points of degree {degree}; there must be points + degree + 1 = {}",
        points + degree + 1
    )]
    KnotCount {
        /// How many there are.
        found: usize,
        /// The number of control points in that direction.
        points: usize,
        /// The degree in that direction.
        degree: usize,
    },
    /// A knot is smaller than the one before it.
    #[error("knot {value} comes after {before}; knots must not decrease")]
    KnotOrder {
        /// The offending knot.
        value: f64,
        /// The one before.
        before: f64,
    },
    /// A knot inside the domain occurs more often than the degree.
    #[error(
        "knot {value} occurs {count} times at degree {degree}; inside the domain more than the degree tears the surface"
    )]
    KnotMultiplicity {
        /// The knot.
        value: f64,
        /// How often it occurs.
        count: usize,
        /// The degree.
        degree: usize,
    },
    /// The domain has no extent.
    #[error("the domain from knot {degree} to knot {points} is empty; it must have a length")]
    EmptyDomain {
        /// The degree, the index of the first knot of the domain.
        degree: usize,
        /// The number of points, the index of the last.
        points: usize,
    },
    /// An index into the point table is out of range.
    #[error("index {index} is not in `points`, which has {len} entries; indices count from 0")]
    Index {
        /// The index.
        index: u64,
        /// The number of points in the table.
        len: usize,
    },
    /// A direction has no length.
    #[error("{0} has no length; a direction must not be zero")]
    ZeroDirection(&'static str),
    /// `start` is parallel to `axis`.
    #[error("start is parallel to the axis; it must point away from it")]
    ParallelStart,
    /// The sides of a plane are parallel or zero.
    #[error("u and v are parallel; they must span a parallelogram")]
    FlatPlane,
    /// A range of angles is empty or too long.
    #[error("{name} runs from {from} to {to} degrees; a range must run upwards by at most {most}")]
    AngleRange {
        /// The field.
        name: &'static str,
        /// Its start.
        from: f64,
        /// Its end.
        to: f64,
        /// The longest range allowed.
        most: f64,
    },
    /// A latitude is outside -90 to 90 degrees.
    #[error("latitude_deg runs from {from} to {to}; latitudes are -90 to 90 degrees")]
    Latitude {
        /// Its start.
        from: f64,
        /// Its end.
        to: f64,
    },
    /// The tube of a torus reaches over the axis.
    #[error("minor {minor} exceeds major {major}; the surface would run through its own axis")]
    SpindleTorus {
        /// The radius of the ring.
        major: f64,
        /// The radius of the tube.
        minor: f64,
    },
    /// A cone with no extent.
    #[error("both radii are {radius} and the height is {height}; that is no surface")]
    FlatCone {
        /// The radius at both ends.
        radius: f64,
        /// The height.
        height: f64,
    },
    /// A revolution of a profile that lies on the axis.
    #[error("the profile lies on the axis; revolved it would be a line")]
    ProfileOnAxis,
    /// Two of the four curves of a Coons patch do not meet.
    #[error(
        "{first} and {second} are {distance:.6} apart at u = {u}, v = {v}; the four curves must meet within the gap tolerance of {gap}"
    )]
    CoonsCorner {
        /// The curve named first.
        first: &'static str,
        /// The curve named second.
        second: &'static str,
        /// Where they should meet.
        u: u8,
        /// Where they should meet.
        v: u8,
        /// How far apart they are.
        distance: f64,
        /// The gap tolerance.
        gap: f64,
    },
    /// Blending the four curves gives a weight that is not positive.
    #[error(
        "blending the curves gives a weight of {0}; the weights of opposite curves differ too much"
    )]
    CoonsWeight(f64),
    /// The breaks of the curves multiply to too many pieces.
    #[error("the breaks of the curves make {0} pieces; at most 10 000 are accepted")]
    TooManyPieces(usize),
    /// The construction leaves the range of numbers.
    #[error(
        "the control points come out beyond 1e9; numbers must keep within 1e9 in the set's unit"
    )]
    Overflow,
}

impl SurfaceFault {
    /// What to try, where there is something more to say than the rule.
    #[must_use]
    pub fn hint(&self) -> Option<String> {
        Some(match self {
            Self::CoonsCorner { .. } => {
                "v0 and v1 run in u from u0 to u1; u0 and u1 run in v from v0 to v1".to_owned()
            }
            Self::SpindleTorus { .. } => {
                "for a part of such a surface revolve an Arc as a Revolution".to_owned()
            }
            Self::KnotCount {
                found,
                points,
                degree,
            } if found + 2 == points + degree + 1 => {
                "repeat the first and the last knot once more".to_owned()
            }
            Self::AngleRange { from, to, .. } if to < from => {
                format!("write ({to}, {from}) and `flip: true` if the normal shall turn over")
            }
            _ => return None,
        })
    }
}
