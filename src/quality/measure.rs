//! What is measured, by name.

use std::cmp::Ordering;

use super::Triangle;

/// A measure of shape or size.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Measure {
    /// Smallest angle of a triangle, degrees.
    MinimumAngle,
    /// Largest angle of a triangle, degrees.
    MaximumAngle,
    /// Longest edge over `2 sqrt 3` inradii.
    AspectRatio,
    /// Circumradius over two inradii.
    RadiusRatio,
    /// Twice the area over the largest product of two edges, times `2 / sqrt 3`.
    ScaledJacobian,
    /// Longest over shortest edge of a triangle.
    EdgeRatio,
    /// `4 sqrt 3` areas over the sum of squared edges.
    Shape,
    /// Length of an edge.
    EdgeLength,
    /// Length of an edge over what was asked for there.
    Size,
    /// The sizes asked for at the two ends of an edge, the larger over the smaller.
    Grading,
    /// Across an edge: the mean edge of one of its triangles over that of the
    /// other, the larger over the smaller.
    Growth,
    /// At a point: the longest over the shortest edge that ends there.
    Spread,
}

impl Measure {
    /// The measures of single triangles.
    pub const OF_TRIANGLES: [Self; 7] = [
        Self::MinimumAngle,
        Self::MaximumAngle,
        Self::AspectRatio,
        Self::RadiusRatio,
        Self::ScaledJacobian,
        Self::EdgeRatio,
        Self::Shape,
    ];

    /// The name as a field in files and reports.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::MinimumAngle => "minimum_angle",
            Self::MaximumAngle => "maximum_angle",
            Self::AspectRatio => "aspect_ratio",
            Self::RadiusRatio => "radius_ratio",
            Self::ScaledJacobian => "scaled_jacobian",
            Self::EdgeRatio => "edge_ratio",
            Self::Shape => "shape",
            Self::EdgeLength => "edge_length",
            Self::Size => "size",
            Self::Grading => "grading",
            Self::Growth => "growth",
            Self::Spread => "spread",
        }
    }

    /// The name in running text.
    #[must_use]
    pub fn title(self) -> &'static str {
        match self {
            Self::MinimumAngle => "smallest angle",
            Self::MaximumAngle => "largest angle",
            Self::AspectRatio => "aspect ratio",
            Self::RadiusRatio => "radius ratio",
            Self::ScaledJacobian => "scaled Jacobian",
            Self::EdgeRatio => "edge ratio",
            Self::Shape => "shape",
            Self::EdgeLength => "edge length",
            Self::Size => "edge over size",
            Self::Grading => "grading",
            Self::Growth => "growth",
            Self::Spread => "spread at points",
        }
    }

    /// The definition in one line.
    #[must_use]
    pub fn definition(self) -> &'static str {
        match self {
            Self::MinimumAngle => "smallest angle of a triangle, degrees",
            Self::MaximumAngle => "largest angle of a triangle, degrees",
            Self::AspectRatio => "longest edge / (2 sqrt 3 inradius)",
            Self::RadiusRatio => "circumradius / (2 inradius)",
            Self::ScaledJacobian => "(2 / sqrt 3) 2 area / largest product of two edges",
            Self::EdgeRatio => "longest edge / shortest edge",
            Self::Shape => "4 sqrt 3 area / sum of squared edges",
            Self::EdgeLength => "length of an edge",
            Self::Size => "length of an edge / the size asked for there",
            Self::Grading => "sizes asked for at the ends of an edge, larger / smaller",
            Self::Growth => "mean edges of the two triangles at an edge, larger / smaller",
            Self::Spread => "longest / shortest edge at a point",
        }
    }

    /// What it is counted over.
    #[must_use]
    pub fn of_what(self) -> &'static str {
        match self {
            Self::EdgeLength | Self::Size | Self::Grading => "edges",
            Self::Growth => "inner edges",
            Self::Spread => "points",
            _ => "triangles",
        }
    }

    /// The range that the Verdict report calls acceptable; `None` for what it
    /// does not speak of. That of the largest angle is quoted from memory.
    #[must_use]
    pub fn acceptable(self) -> Option<[f64; 2]> {
        match self {
            Self::MinimumAngle => Some([30.0, 60.0]),
            Self::MaximumAngle => Some([60.0, 90.0]),
            Self::AspectRatio | Self::EdgeRatio => Some([1.0, 1.3]),
            Self::RadiusRatio => Some([1.0, 3.0]),
            // 2 sqrt 3 / 3, which rounding must not exceed.
            Self::ScaledJacobian => Some([0.5, 2.0 / 3.0_f64.sqrt()]),
            Self::Shape => Some([0.25, 1.0]),
            Self::EdgeLength | Self::Size | Self::Grading | Self::Growth | Self::Spread => None,
        }
    }

    /// Whether a figure is beyond the bad end of the acceptable range. The other
    /// end is what the best triangle reaches.
    #[must_use]
    pub fn is_outside(self, value: f64) -> bool {
        self.acceptable().is_some_and(|[low, high]| {
            if self.better_high() {
                value < low
            } else {
                value > high
            }
        })
    }

    /// Whether more is better.
    #[must_use]
    pub fn better_high(self) -> bool {
        matches!(
            self,
            Self::MinimumAngle | Self::ScaledJacobian | Self::Shape | Self::EdgeLength
        )
    }

    /// The worse of two figures is the greater one in this order.
    #[must_use]
    pub fn worse(self, a: f64, b: f64) -> Ordering {
        let far = |ratio: f64| ratio.max(1.0 / ratio);
        match self {
            Self::Size => far(a).total_cmp(&far(b)),
            _ if self.better_high() => b.total_cmp(&a),
            _ => a.total_cmp(&b),
        }
    }

    /// The figure of a triangle, for the measures of triangles.
    #[must_use]
    pub fn of(self, triangle: &Triangle) -> Option<f64> {
        Some(match self {
            Self::MinimumAngle => triangle.minimum_angle_deg(),
            Self::MaximumAngle => triangle.maximum_angle_deg(),
            Self::AspectRatio => triangle.aspect_ratio(),
            Self::RadiusRatio => triangle.radius_ratio(),
            Self::ScaledJacobian => triangle.scaled_jacobian(),
            Self::EdgeRatio => triangle.edge_ratio(),
            Self::Shape => triangle.shape(),
            Self::EdgeLength | Self::Size | Self::Grading | Self::Growth | Self::Spread => {
                return None;
            }
        })
    }

    /// Where the bars of the histogram begin; each ends where the next begins,
    /// the last has no end. `most` is the largest figure.
    pub(super) fn bars(self, most: f64) -> Vec<f64> {
        let steps = |from: f64, step: f64, count: u32| {
            (0..count).map(|k| from + step * f64::from(k)).collect()
        };
        match self {
            Self::MinimumAngle => steps(0.0, 5.0, 12),
            Self::MaximumAngle => steps(60.0, 10.0, 12),
            Self::ScaledJacobian | Self::Shape => steps(0.0, 0.05, 20),
            Self::AspectRatio | Self::EdgeRatio | Self::RadiusRatio | Self::Spread => vec![
                1.0, 1.05, 1.1, 1.15, 1.2, 1.3, 1.4, 1.5, 1.75, 2.0, 2.5, 3.0, 5.0, 10.0, 100.0,
                1000.0,
            ],
            Self::Grading | Self::Growth => vec![
                1.0, 1.02, 1.05, 1.1, 1.15, 1.2, 1.25, 1.3, 1.5, 2.0, 3.0, 5.0, 10.0,
            ],
            Self::Size => vec![
                0.0, 0.1, 0.25, 0.5, 0.6, 0.7, 0.8, 0.9, 0.95, 1.0, 1.05, 1.1, 1.2, 1.3, 1.5, 2.0,
            ],
            Self::EdgeLength => steps(0.0, most / 20.0, 20),
        }
    }
}
