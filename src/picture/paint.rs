//! Shadings: what colour a place of the surface has.

use super::camera::Camera;
use super::colour::{Colour, Scale, mix, panel_colour, srgb};
use super::lights::Lights;
use super::raster::Fragment;
use super::scene::{Scene, Sight, largest_principal};
use crate::scalar::Vector;

/// A curvature of the surface, with its sign against the outward normal:
/// positive where the surface bends towards it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Curvature {
    /// The product of the principal curvatures, 1/length^2.
    Gaussian,
    /// Their mean, 1/length.
    Mean,
    /// The one of larger size, 1/length.
    Principal,
}

impl Curvature {
    /// The curvature of a sight; `None` where the surface has no normal.
    #[must_use]
    pub fn of(self, sight: &Sight) -> Option<f64> {
        let (gaussian, mean) = sight.gaussian_and_mean()?;
        Some(match self {
            Self::Gaussian => gaussian,
            Self::Mean => mean,
            Self::Principal => largest_principal(gaussian, mean),
        })
    }
}

/// How surfaces are shaded.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Shading {
    /// Plain material.
    Plain,
    /// Panels in distinct colours.
    Panels,
    /// Reflection lines.
    Reflection,
    /// A curvature on a scale of colours.
    Curvature(Curvature),
    /// The proved deviation of each triangle on a scale of colours.
    Deviation,
}

impl Shading {
    /// All shadings.
    pub const ALL: [Self; 7] = [
        Self::Plain,
        Self::Panels,
        Self::Reflection,
        Self::Curvature(Curvature::Gaussian),
        Self::Curvature(Curvature::Mean),
        Self::Curvature(Curvature::Principal),
        Self::Deviation,
    ];

    /// The name as typed.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Plain => "plain",
            Self::Panels => "panels",
            Self::Reflection => "reflection",
            Self::Curvature(Curvature::Gaussian) => "gaussian",
            Self::Curvature(Curvature::Mean) => "mean",
            Self::Curvature(Curvature::Principal) => "principal",
            Self::Deviation => "deviation",
        }
    }

    /// The shading of this name.
    #[must_use]
    pub fn named(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|s| s.name() == name)
    }

    /// The shading in words.
    #[must_use]
    pub fn label(self) -> &'static str {
        match self {
            Self::Plain => "plain material",
            Self::Panels => "panels",
            Self::Reflection => "reflection lines",
            Self::Curvature(Curvature::Gaussian) => "Gaussian curvature",
            Self::Curvature(Curvature::Mean) => "mean curvature",
            Self::Curvature(Curvature::Principal) => "largest principal curvature",
            Self::Deviation => "deviation, proved for each triangle",
        }
    }

    /// Whether the picture has a scale of figures.
    #[must_use]
    pub fn has_scale(self) -> bool {
        matches!(self, Self::Curvature(_) | Self::Deviation)
    }
}

/// Where no figure can be given.
const UNKNOWN: [u8; 3] = [150, 150, 150];
/// Plain material, seen from outside and from inside.
const OUTSIDE: [u8; 3] = [188, 193, 196];
const INSIDE: [u8; 3] = [148, 122, 104];
/// Lacquer between lights, and the lights.
const LACQUER: [u8; 3] = [36, 44, 54];
const LIGHT: [u8; 3] = [246, 247, 244];
/// Edges of the mesh.
const MESH_LINE: [u8; 3] = [28, 30, 34];

/// Everything that decides a colour.
#[derive(Debug)]
pub(super) struct Paint<'a> {
    pub(super) scene: &'a Scene<'a>,
    pub(super) camera: &'a Camera,
    pub(super) shading: Shading,
    pub(super) scale: Option<&'a Scale>,
    pub(super) deviations: &'a [f64],
    pub(super) lights: Lights,
    pub(super) mesh_edges: bool,
}

impl Paint<'_> {
    /// The colour of what is seen.
    pub(super) fn colour(&self, fragment: &Fragment) -> Colour {
        let colour = self.surface(fragment);
        if !self.mesh_edges {
            return colour;
        }
        // Half a line on either side of an edge, softened over a pixel.
        let line = 1.0 - (fragment.edge - 0.1).clamp(0.0, 1.0);
        #[allow(clippy::cast_possible_truncation, reason = "between 0 and 1")]
        let line = line as f32;
        mix(colour, srgb(MESH_LINE), 0.75 * line)
    }

    /// Triangles of one key have the same colour in a pixel.
    pub(super) fn key(&self, triangle: usize) -> Option<u64> {
        let alone = self.mesh_edges || self.shading == Shading::Deviation;
        (!alone).then(|| self.scene.piece(triangle) as u64)
    }

    fn surface(&self, fragment: &Fragment) -> Colour {
        let triangle = fragment.triangle;
        let normal = || {
            let normal = self.scene.mesh_normal(triangle, fragment.weights);
            normal.try_normalize(0.0).unwrap_or(self.camera.toward)
        };
        let sight = || self.scene.sight(triangle, fragment.weights, self.camera);
        let on_scale = |value: Option<f64>| match (self.scale, value) {
            (Some(scale), Some(value)) => scale.colour(value),
            _ => srgb(UNKNOWN),
        };
        match self.shading {
            Shading::Plain => self.lit(srgb(OUTSIDE), &normal()),
            Shading::Panels => self.lit(panel_colour(self.scene.panel(triangle)), &normal()),
            Shading::Reflection => {
                let sight = sight();
                #[allow(clippy::cast_possible_truncation, reason = "between 0 and 1")]
                let share = self.lights.share(&sight) as f32;
                mix(srgb(LACQUER), srgb(LIGHT), share)
            }
            Shading::Curvature(curvature) => on_scale(curvature.of(&sight())),
            Shading::Deviation => on_scale(self.deviations.get(triangle).copied()),
        }
    }

    /// A dull material under a lamp above the eye's left shoulder and light from
    /// all round. The inner side of a sheet is brown.
    fn lit(&self, colour: Colour, normal: &Vector) -> Colour {
        let camera = self.camera;
        let facing = normal.dot(&camera.toward);
        let (normal, colour) = if facing < -0.02 {
            (-normal, mix(colour, srgb(INSIDE), 0.8))
        } else {
            (*normal, colour)
        };
        let lamp = (camera.toward * 0.7 + camera.up * 0.6 - camera.right * 0.45).normalize();
        let direct = normal.dot(&lamp).max(0.0);
        let round = 0.5 + 0.5 * normal.dot(&camera.up);
        let gloss = (normal.dot(&(lamp + camera.toward).normalize()).max(0.0)).powi(24);
        #[allow(clippy::cast_possible_truncation, reason = "between 0 and 2")]
        let (light, gloss) = (
            (0.20 + 0.34 * round + 0.58 * direct) as f32,
            (0.16 * gloss) as f32,
        );
        colour.map(|c| c * light + gloss)
    }
}
