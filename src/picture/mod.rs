//! Pictures that need no graphics processor: a z-buffer rasteriser of our own,
//! shadings computed from the surfaces, legends, seams, sections.

mod camera;
mod canvas;
mod colour;
mod comb;
mod composition;
mod curves;
mod drawing;
mod extras;
mod legend;
mod lettering;
mod lights;
mod marks;
mod paint;
mod raster;
mod scene;
mod section;
mod setup;

pub use camera::{Camera, View, Window};
pub use canvas::{Anchor, Canvas};
pub use colour::{Colour, Ramp, Scale, mix, panel_colour, round_up, srgb, to_srgb};
pub use comb::{SectionHead, draw_section};
pub use composition::{Focus, Picture, PictureOptions, usual_curvature};
pub use curves::{SeamCurve, borders, deciding, finding_bytes, finding_colour, seam_curves};
pub use drawing::Drawing;
pub use extras::Extra;
pub use lights::Lights;
pub use paint::{Curvature, Shading};
pub use raster::{Fragment, Raster};
pub use scene::{NoEvidence, Scene, Sight, largest_principal};
pub use section::{Cut, Plane, SectionRun, section};
