//! A whole picture: surfaces, lines on them, head and legend.

use rayon::prelude::*;

use super::camera::{Camera, View};
use super::canvas::Canvas;
use super::colour::{Colour, Ramp, Scale, panel_colour, round_up, srgb};
use super::curves::SeamCurve;
use super::legend::{Layout, Swatch, plain};
use super::lights::Lights;
use super::paint::{Curvature, Paint, Shading};
use super::raster;
use super::scene::{Scene, largest_principal};
use crate::scalar::{Cuboid, Point};

/// What the picture is filled with.
#[derive(Debug, Clone, PartialEq)]
pub enum Focus {
    /// All that is meshed.
    All,
    /// One panel, by number.
    Panel(usize),
    /// A place, and the length that the picture's width covers.
    Place {
        /// The middle of the picture.
        point: Point,
        /// The width.
        across: f64,
    },
}

/// How a picture is drawn.
#[derive(Debug, Clone)]
pub struct PictureOptions {
    /// Pixels across and down.
    pub size: (usize, usize),
    /// From where.
    pub view: View,
    /// What fills it.
    pub focus: Focus,
    /// The shading.
    pub shading: Shading,
    /// Whether the mesh's edges are drawn.
    pub mesh_edges: bool,
    /// The ends of the scale of figures; found where `None`.
    pub range: Option<[f64; 2]>,
    /// Light tubes to the full turn.
    pub lights: f64,
    /// Whether the tubes stand upright in the picture.
    pub upright: bool,
    /// The chord tolerance, as the head states it.
    pub chord: f64,
    /// The proved deviation, as the head states it.
    pub proved: f64,
}

/// The background.
const BORDER: [u8; 3] = [60, 66, 74];
const PAPER: [u8; 3] = [233, 235, 238];

/// A picture and how it came about.
#[derive(Debug)]
pub struct Picture {
    /// The picture.
    pub canvas: Canvas,
    /// From where it is seen.
    pub camera: Camera,
    /// The scale of its figures, if it has one.
    pub scale: Option<Scale>,
    /// Share of each pixel that surfaces cover.
    pub cover: Vec<f32>,
    /// The farthest depth in each pixel, for lines that may be hidden.
    pub(super) depth: Vec<f32>,
    pub(super) layout: Layout,
    /// Lines lie no farther behind the mesh than this.
    pub(super) slack: f64,
}

impl Picture {
    /// Draws a scene. `deviations` are the proved figures of its triangles, for
    /// the shading that shows them.
    #[must_use]
    pub fn draw(scene: &Scene<'_>, options: &PictureOptions, deviations: &[f64]) -> Self {
        let (width, height) = options.size;
        let layout = Layout::of(width, height);
        let window = layout.window();
        let camera = match &options.focus {
            Focus::All => Camera::fit(options.view, scene.points(None), window, 0.0),
            Focus::Panel(panel) => {
                Camera::fit(options.view, scene.points(Some(*panel)), window, 0.0)
            }
            Focus::Place { point, across } => {
                Camera::near(options.view.toward(), *point, *across, window)
            }
        };
        let scale = scale(scene, options, deviations);
        let (centre, radius) = bounds(scene);
        let paint = Paint {
            scene,
            camera: &camera,
            shading: options.shading,
            scale: scale.as_ref(),
            deviations,
            lights: Lights::new(
                &camera,
                centre,
                3.0 * radius,
                options.lights,
                options.upright,
            ),
            mesh_edges: options.mesh_edges,
        };
        let projected: Vec<[f64; 3]> = scene
            .mesh
            .points
            .par_iter()
            .map(|p| camera.project(p))
            .collect();
        let raster = raster::draw(
            options.size,
            scene.mesh.triangles.len(),
            |t| scene.mesh.triangle_points(t).map(|p| projected[p as usize]),
            |fragment| paint.colour(fragment),
            |triangle| paint.key(triangle),
            4.0 * camera.pixel,
        );
        let mut canvas = Canvas::new(width, height, srgb(PAPER));
        canvas
            .pixels
            .par_iter_mut()
            .zip(&raster.colours)
            .zip(&raster.cover)
            .for_each(|((pixel, colour), cover)| {
                *pixel = [0, 1, 2].map(|i| pixel[i] * (1.0 - cover) + colour[i]);
            });
        Self {
            canvas,
            camera,
            scale,
            cover: raster.cover,
            depth: raster.depth,
            layout,
            slack: 2.0 * options.chord + 0.5 * camera.pixel,
        }
    }

    /// Writes head, legend and scale bar on the picture; `seams` are those drawn on
    /// it.
    pub fn caption(&mut self, scene: &Scene<'_>, options: &PictureOptions, seams: &[SeamCurve]) {
        let set = scene.set;
        let unit = set.unit().symbol();
        let name = if set.name().is_empty() {
            "patch set without a name"
        } else {
            set.name()
        };
        let mut line = format!("{}, {}", options.shading.label(), options.view.label());
        if options.mesh_edges {
            line += ", edges of the mesh";
        }
        if !seams.is_empty() {
            line += ", seams by finding";
        }
        let figures = format!(
            "{} triangles, chord tolerance {} {unit}, proved {} {unit}",
            scene.mesh.triangles.len(),
            plain(options.chord),
            figure(options.proved),
        );
        self.layout.clear(&mut self.canvas, srgb(PAPER));
        self.layout.head(&mut self.canvas, name, [&line, &figures]);
        self.layout.scale_bar(&mut self.canvas, &self.camera, unit);
        if !seams.is_empty() {
            let entries = Self::findings(seams);
            let beside = self.scale.is_some();
            self.layout.names(&mut self.canvas, &entries, beside);
        }
        match (options.shading, &self.scale) {
            (Shading::Panels, _) if seams.is_empty() => {
                let mut panels: Vec<usize> = scene.mesh.parts.iter().map(|p| p.panel).collect();
                panels.sort_unstable();
                panels.dedup();
                let entries: Vec<Swatch> = panels
                    .into_iter()
                    .map(|panel| Swatch {
                        colour: panel_colour(panel),
                        label: scene.mesh.panels[panel].clone(),
                    })
                    .collect();
                self.layout.names(&mut self.canvas, &entries, false);
            }
            (shading, Some(scale)) => {
                let label = scale_label(shading, unit);
                self.layout.scale(&mut self.canvas, scale, &label);
            }
            (Shading::Reflection, None) if seams.is_empty() => {
                let way = if options.upright { "upright" } else { "across" };
                let text = format!(
                    "{} parallel lights to the full turn, {way}; from the surface's normals",
                    plain(options.lights)
                );
                self.layout.note(&mut self.canvas, &text);
            }
            _ => {}
        }
    }

    /// Draws a curve in space where nothing hides it.
    pub(super) fn curve(&mut self, points: &[Point], width: f64, colour: Colour, share: f32) {
        let projected: Vec<[f64; 3]> = points.iter().map(|p| self.camera.project(p)).collect();
        let (depth, slack) = (&self.depth, self.slack);
        self.canvas
            .line_where(&projected, width, colour, share, |pixel, along| {
                along + slack >= f64::from(depth[pixel])
            });
    }

    /// Draws faint borders of patches, so that shapes can be read where colours
    /// stand for figures.
    pub fn borders(&mut self, curves: &[Vec<Point>]) {
        let width = (self.layout.letter() / 14.0).max(0.8);
        for curve in curves {
            self.curve(curve, width, srgb(BORDER), 0.5);
        }
    }
}

/// What a scale's figures are, with their unit.
fn scale_label(shading: Shading, unit: &str) -> String {
    match shading {
        Shading::Curvature(Curvature::Gaussian) => {
            format!(
                "{}, 1/{unit}^2; positive: dome or bowl, negative: saddle",
                shading.label()
            )
        }
        Shading::Curvature(_) => {
            format!(
                "{}, 1/{unit}; seen from outside negative: crowned, positive: hollow",
                shading.label()
            )
        }
        _ => format!("{}, {unit}", shading.label()),
    }
}

/// A proved figure, rounded up in its fourth digit.
fn figure(value: f64) -> String {
    if value <= 0.0 || !value.is_finite() {
        return plain(value);
    }
    let unit = 10.0_f64.powf(value.log10().floor() - 3.0);
    plain((value / unit).ceil() * unit)
}

/// The middle of all points and half their box's diagonal.
fn bounds(scene: &Scene<'_>) -> (Point, f64) {
    let cuboid = Cuboid::around(scene.mesh.points.iter().copied());
    (
        cuboid.middle(),
        (cuboid.diagonal() / 2.0).max(f64::MIN_POSITIVE),
    )
}

/// The scale for the figures shown: as asked for, or round figures that hold all
/// but the most extreme twentieth of the area.
fn scale(scene: &Scene<'_>, options: &PictureOptions, deviations: &[f64]) -> Option<Scale> {
    let (ramp, found) = match options.shading {
        Shading::Deviation => {
            let most = deviations.iter().copied().fold(0.0, f64::max);
            (Ramp::Rising, [0.0, round_up(most.max(options.chord))])
        }
        Shading::Curvature(curvature) => {
            let most = match options.range {
                Some(_) => 1.0,
                None => usual_curvature(scene, curvature),
            };
            (Ramp::Signed, [-most, most])
        }
        _ => return None,
    };
    let [low, high] = options.range.unwrap_or(found);
    Some(Scale { ramp, low, high })
}

/// A round figure that nineteen twentieths of the area keep to in size, from the
/// middles of all triangles: the end of a scale where none is asked for.
#[must_use]
pub fn usual_curvature(scene: &Scene<'_>, curvature: Curvature) -> f64 {
    let mut sizes: Vec<(f64, f64)> = (0..scene.mesh.triangles.len())
        .into_par_iter()
        .filter_map(|t| {
            let [a, b, c] = scene.mesh.triangle_corners(t);
            let area = (b - a).cross(&(c - a)).norm() / 2.0;
            let (gaussian, mean) = scene.middle_curvatures(t)?;
            let value = match curvature {
                Curvature::Gaussian => gaussian,
                Curvature::Mean => mean,
                Curvature::Principal => largest_principal(gaussian, mean),
            };
            value.is_finite().then_some((value.abs(), area))
        })
        .collect();
    sizes.par_sort_by(|a, b| a.0.total_cmp(&b.0));
    let whole: f64 = sizes.iter().map(|s| s.1).sum();
    let mut sum = 0.0;
    let enough = sizes.iter().find(|s| {
        sum += s.1;
        sum >= 0.95 * whole
    });
    let largest = sizes.last().map_or(0.0, |s| s.0);
    let usual = enough.map_or(0.0, |s| s.0);
    // Rounding of a plane is no curvature to be shown.
    let (_, radius) = bounds(scene);
    let power = if curvature == Curvature::Gaussian {
        2
    } else {
        1
    };
    let least = (1e-6 / radius).powi(power);
    round_up(if usual > least {
        usual
    } else {
        largest.max(least)
    })
}
