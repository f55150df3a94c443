//! The round kinds of the trade: cylinder, cone, sphere, torus. All are
//! revolutions of a line or an arc.

use serde::{Deserialize, Serialize};

use super::angle::{self, even_breaks};
use super::context::Context;
use super::fault::{Step, SurfaceFault};
use super::frame::Frame;
use super::grid::PieceGrid;
use super::kind::{origin, whole_turn, z_axis};
use super::revolution::{ProfilePoint, revolve};

/// A circular cylinder from its base up along the axis. u runs round the axis,
/// v along it; the normal points outwards.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Cylinder {
    /// The centre of the base. Default the origin.
    #[serde(default = "origin")]
    pub center: [f64; 3],
    /// The direction from base to top. Default (0, 0, 1).
    #[serde(default = "z_axis")]
    pub axis: [f64; 3],
    /// The direction of angle 0. Default X, or Y where X is along the axis.
    #[serde(default)]
    pub start: Option<[f64; 3]>,
    /// The radius.
    pub radius: f64,
    /// The length along the axis.
    pub height: f64,
    /// First and last angle. Default (0, 360).
    #[serde(default = "whole_turn")]
    pub angle_deg: (f64, f64),
}

/// A circular cone, cut off where `top_radius` is not 0; with height 0 a disc
/// or a ring. u runs round the axis, v from base to top; the normal points
/// outwards.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Cone {
    /// The centre of the base. Default the origin.
    #[serde(default = "origin")]
    pub center: [f64; 3],
    /// The direction from base to top. Default (0, 0, 1).
    #[serde(default = "z_axis")]
    pub axis: [f64; 3],
    /// The direction of angle 0. Default X, or Y where X is along the axis.
    #[serde(default)]
    pub start: Option<[f64; 3]>,
    /// The radius of the base.
    pub radius: f64,
    /// The radius of the top. Default 0: a tip.
    #[serde(default)]
    pub top_radius: f64,
    /// The length along the axis.
    pub height: f64,
    /// First and last angle. Default (0, 360).
    #[serde(default = "whole_turn")]
    pub angle_deg: (f64, f64),
}

/// A sphere or a part of it. u runs with the longitude, v with the latitude;
/// the normal points outwards. At latitude -90 or 90 an edge is collapsed.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Sphere {
    /// The centre. Default the origin.
    #[serde(default = "origin")]
    pub center: [f64; 3],
    /// The direction from pole to pole. Default (0, 0, 1).
    #[serde(default = "z_axis")]
    pub axis: [f64; 3],
    /// The direction of longitude 0. Default X, or Y where X is along the axis.
    #[serde(default)]
    pub start: Option<[f64; 3]>,
    /// The radius.
    pub radius: f64,
    /// First and last longitude. Default (0, 360).
    #[serde(default = "whole_turn")]
    pub longitude_deg: (f64, f64),
    /// First and last latitude, -90 to 90. Default (-90, 90).
    #[serde(default = "pole_to_pole")]
    pub latitude_deg: (f64, f64),
}

/// A torus or a part of it. u runs round the axis, v round the tube, from the
/// outermost circle towards the axis' direction; the normal points out of the
/// tube.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Torus {
    /// The centre. Default the origin.
    #[serde(default = "origin")]
    pub center: [f64; 3],
    /// The axis. Default (0, 0, 1).
    #[serde(default = "z_axis")]
    pub axis: [f64; 3],
    /// The direction of angle 0. Default X, or Y where X is along the axis.
    #[serde(default)]
    pub start: Option<[f64; 3]>,
    /// From the centre to the middle of the tube.
    pub major: f64,
    /// The radius of the tube.
    pub minor: f64,
    /// First and last angle round the axis. Default (0, 360).
    #[serde(default = "whole_turn")]
    pub angle_deg: (f64, f64),
    /// First and last angle round the tube. Default (0, 360).
    #[serde(default = "whole_turn")]
    pub tube_deg: (f64, f64),
}

fn pole_to_pole() -> (f64, f64) {
    (-90.0, 90.0)
}

impl Default for Sphere {
    /// The whole unit sphere about the origin.
    fn default() -> Self {
        Self {
            center: origin(),
            axis: z_axis(),
            start: None,
            radius: 1.0,
            longitude_deg: whole_turn(),
            latitude_deg: pole_to_pole(),
        }
    }
}

impl Cylinder {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let frame = Frame::new(context, self.center, self.axis, self.start);
        let radius = context.positive(self.radius, "radius");
        let height = context.positive(self.height, "height");
        let range = angle::range(context, self.angle_deg, "angle_deg");
        let (frame, radius, height) = (frame?, radius?, height?);
        let profile = vec![
            ProfilePoint::new(&frame, radius, 0.0, 1.0),
            ProfilePoint::new(&frame, radius, height, 1.0),
        ];
        revolve(context, &angle::arcs(range?), vec![0.0, 1.0], &[profile])
    }
}

impl Cone {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let frame = Frame::new(context, self.center, self.axis, self.start);
        let mut not_negative = |value, name| {
            let value = context.finite(value, name)?;
            if value >= 0.0 {
                return Some(value);
            }
            let fault = SurfaceFault::Negative { name, value };
            context.fault(&[Step::Field(name)], fault);
            None
        };
        let radius = not_negative(self.radius, "radius");
        let top = not_negative(self.top_radius, "top_radius");
        let height = not_negative(self.height, "height");
        let range = angle::range(context, self.angle_deg, "angle_deg");
        let (frame, radius, top, height) = (frame?, radius?, top?, height?);
        let same = (radius - top).abs() <= 0.0;
        if same && (radius <= 0.0 || height <= 0.0) {
            let fault = SurfaceFault::FlatCone { radius, height };
            context.fault(&[Step::Field("height")], fault);
            return None;
        }
        let profile = vec![
            ProfilePoint::new(&frame, radius, 0.0, 1.0),
            ProfilePoint::new(&frame, top, height, 1.0),
        ];
        revolve(context, &angle::arcs(range?), vec![0.0, 1.0], &[profile])
    }
}

impl Sphere {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let frame = Frame::new(context, self.center, self.axis, self.start);
        let radius = context.positive(self.radius, "radius");
        let longitude = angle::range(context, self.longitude_deg, "longitude_deg");
        let latitude = angle::range(context, self.latitude_deg, "latitude_deg");
        let (from, to) = self.latitude_deg;
        if latitude.is_some() && (from < -90.0 || to > 90.0) {
            context.fault(
                &[Step::Field("latitude_deg")],
                SurfaceFault::Latitude { from, to },
            );
        }
        let (frame, radius) = (frame?, radius?);
        let meridian = circle(&frame, 0.0, radius, latitude?);
        let breaks = even_breaks(meridian.len());
        revolve(context, &angle::arcs(longitude?), breaks, &meridian)
    }
}

impl Torus {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let frame = Frame::new(context, self.center, self.axis, self.start);
        let major = context.positive(self.major, "major");
        let minor = context.positive(self.minor, "minor");
        let range = angle::range(context, self.angle_deg, "angle_deg");
        let tube = angle::range(context, self.tube_deg, "tube_deg");
        let (frame, major, minor) = (frame?, major?, minor?);
        if minor > major {
            let fault = SurfaceFault::SpindleTorus { major, minor };
            context.fault(&[Step::Field("minor")], fault);
            return None;
        }
        let profile = circle(&frame, major, minor, tube?);
        let breaks = even_breaks(profile.len());
        revolve(context, &angle::arcs(range?), breaks, &profile)
    }
}

/// The arcs of a circle in the half plane of angle 0, its centre `offset` off
/// the axis.
fn circle(frame: &Frame, offset: f64, radius: f64, range: [f64; 2]) -> Vec<Vec<ProfilePoint>> {
    angle::arcs(range)
        .iter()
        .map(|arc| {
            let points = arc.points.iter().zip(arc.weights());
            points
                .map(|(&[c, s], weight)| {
                    ProfilePoint::new(frame, offset + radius * c, radius * s, weight)
                })
                .collect()
        })
        .collect()
}
