//! The pictures of a page.

use rayon::prelude::*;

use super::markup::{base64, escape};
use crate::continuity::Verdict;
use crate::pace;
use crate::picture::{Curvature, Focus, Picture, PictureOptions, Scene, SeamCurve, Shading, View};
use crate::scalar::Point;

/// Close-ups at most: of the worst seams that are not as demanded.
const CLOSE_UPS: usize = 12;

/// Size of a picture, and of a close-up.
const WHOLE: (usize, usize) = (1200, 750);
const CLOSE: (usize, usize) = (800, 500);

/// A picture ready for the page.
#[derive(Debug)]
struct Plate {
    id: String,
    /// What it shows, for those who do not see it.
    text: String,
    caption: String,
    size: (usize, usize),
    png: Vec<u8>,
}

/// All pictures.
#[derive(Debug)]
pub struct Gallery {
    plates: Vec<Plate>,
    close_ups: Vec<(usize, Plate)>,
}

impl Gallery {
    /// Draws them. `deviations` are the proved figures of the triangles.
    ///
    /// # Errors
    /// [`image::ImageError`] where a picture cannot be packed.
    pub fn draw(
        scene: &Scene<'_>,
        options: &PictureOptions,
        deviations: &[f64],
        seams: &[SeamCurve],
        borders: &[Vec<Point>],
    ) -> Result<Self, image::ImageError> {
        let views = [
            (
                "seams",
                Shading::Plain,
                View::FrontQuarter,
                "Seams by finding; the numbers are those of the table.",
            ),
            ("panels", Shading::Panels, View::RearQuarter, "Panels."),
            (
                "lines",
                Shading::Reflection,
                View::FrontQuarter,
                "Reflection lines, from the surfaces' own normals.",
            ),
            (
                "mean",
                Shading::Curvature(Curvature::Mean),
                View::FrontQuarter,
                "Mean curvature.",
            ),
            (
                "principal",
                Shading::Curvature(Curvature::Principal),
                View::Left,
                "Largest principal curvature.",
            ),
            (
                "deviation",
                Shading::Deviation,
                View::FrontQuarter,
                "Deviation, proved for each triangle.",
            ),
        ];
        let bad: Vec<&SeamCurve> = seams
            .iter()
            .filter(|s| s.verdict != Verdict::Met)
            .take(CLOSE_UPS)
            .collect();
        let pixels = |size: (usize, usize)| (size.0 * size.1) as u64;
        let all = pixels(WHOLE) * views.len() as u64 + pixels(CLOSE) * bad.len() as u64;
        pace::expect(all, "pixels");
        let plates = views
            .par_iter()
            .map(|(id, shading, view, caption)| {
                let options = PictureOptions {
                    size: WHOLE,
                    view: *view,
                    shading: *shading,
                    ..options.clone()
                };
                let own: &[SeamCurve] = if *id == "seams" { seams } else { &[] };
                Plate::draw(scene, &options, deviations, own, borders, id, caption)
            })
            .collect::<Result<_, _>>()?;
        let close_ups = bad
            .par_iter()
            .map(|seam| {
                let gap = seam.is_parted() && seam.gap > 0.0;
                let (across, shading, shown) = if gap {
                    // So near that the gap can be seen.
                    (40.0 * seam.gap, Shading::Panels, "panels")
                } else {
                    let across = 1.5 * seam.length.max(10.0 * options.chord);
                    (across, Shading::Reflection, "reflection lines")
                };
                let options = PictureOptions {
                    size: CLOSE,
                    view: seam.normal.map_or(View::FrontQuarter, View::From),
                    focus: Focus::Place {
                        point: seam.worst,
                        across,
                    },
                    shading,
                    lights: 4.0 * options.lights,
                    ..options.clone()
                };
                let id = format!("close-up-{}", seam.number);
                let caption = format!(
                    "Seam {}: {}, {}; {shown}, seen straight on at its worst place.",
                    seam.number, seam.finding, seam.verdict
                );
                // A line along a gap would hide it.
                let lines: &[SeamCurve] = if gap { &[] } else { seams };
                Plate::draw(scene, &options, deviations, lines, borders, &id, &caption)
                    .map(|plate| (seam.number, plate))
            })
            .collect::<Result<_, image::ImageError>>()?;
        Ok(Self { plates, close_ups })
    }

    /// The picture that stands for the viewer where that cannot run.
    pub(super) fn first(&self) -> String {
        self.plates.first().map_or_else(String::new, Plate::image)
    }

    /// All but that as figures.
    pub(super) fn figures(&self) -> String {
        self.plates.iter().skip(1).map(Plate::figure).collect()
    }

    /// The close-ups as figures.
    pub(super) fn close_ups(&self) -> String {
        self.close_ups
            .iter()
            .map(|(_, plate)| plate.figure())
            .collect()
    }

    /// Whether a seam has a close-up.
    pub(super) fn has_close_up(&self, number: usize) -> bool {
        self.close_ups.iter().any(|(n, _)| *n == number)
    }
}

impl Plate {
    fn draw(
        scene: &Scene<'_>,
        options: &PictureOptions,
        deviations: &[f64],
        seams: &[SeamCurve],
        borders: &[Vec<Point>],
        id: &str,
        caption: &str,
    ) -> Result<Self, image::ImageError> {
        let mut picture = Picture::draw(scene, options, deviations);
        if options.shading.has_scale() || options.shading == Shading::Panels || !seams.is_empty() {
            picture.borders(borders);
        }
        picture.seams(seams);
        picture.caption(scene, options, seams);
        let mut png = Vec::new();
        picture.canvas.write_png(&mut png)?;
        Ok(Self {
            id: id.to_owned(),
            text: format!(
                "{} of {}, {}",
                options.shading.label(),
                scene.set.name(),
                options.view.label()
            ),
            caption: caption.to_owned(),
            size: options.size,
            png,
        })
    }

    fn image(&self) -> String {
        format!(
            "<img src=\"data:image/png;base64,{}\" width=\"{}\" height=\"{}\" alt=\"{}\">\n",
            base64(&self.png),
            self.size.0,
            self.size.1,
            escape(&self.text)
        )
    }

    fn figure(&self) -> String {
        format!(
            "<figure id=\"{}\">\n{}<figcaption>{}</figcaption>\n</figure>\n",
            self.id,
            self.image(),
            escape(&self.caption)
        )
    }
}
