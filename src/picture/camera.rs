//! Where a picture is seen from. Parallel projection: a scale bar holds all over
//! the picture.
//!
//! Axes are those of a vehicle: x rearwards, y to the right, z up. Other sets are
//! seen along the same axes.

use crate::scalar::{Point, Vector};

/// From where one looks.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum View {
    /// From the front, along +x.
    Front,
    /// From the rear, along -x.
    Rear,
    /// From the left, along +y.
    Left,
    /// From the right, along -y.
    Right,
    /// From above, along -z; the front is on the left.
    Top,
    /// From below, along +z; the front is on the left.
    Bottom,
    /// From the front, the left and a little above.
    FrontQuarter,
    /// From the rear, the left and a little above.
    RearQuarter,
    /// From this side: a vector from the set towards the eye.
    From(Vector),
}

impl View {
    /// The views that have names.
    pub const NAMED: [Self; 8] = [
        Self::Front,
        Self::Rear,
        Self::Left,
        Self::Right,
        Self::Top,
        Self::Bottom,
        Self::FrontQuarter,
        Self::RearQuarter,
    ];

    /// The name as typed; `None` for a direction by numbers.
    #[must_use]
    pub fn name(self) -> Option<&'static str> {
        Some(match self {
            Self::Front => "front",
            Self::Rear => "rear",
            Self::Left => "left",
            Self::Right => "right",
            Self::Top => "top",
            Self::Bottom => "bottom",
            Self::FrontQuarter => "front-quarter",
            Self::RearQuarter => "rear-quarter",
            Self::From(_) => return None,
        })
    }

    /// The view of this name.
    #[must_use]
    pub fn named(name: &str) -> Option<Self> {
        Self::NAMED.into_iter().find(|v| v.name() == Some(name))
    }

    /// From the set towards the eye.
    #[must_use]
    pub fn toward(self) -> Vector {
        match self {
            Self::Front => -Vector::x(),
            Self::Rear => Vector::x(),
            Self::Left => -Vector::y(),
            Self::Right => Vector::y(),
            Self::Top => Vector::z(),
            Self::Bottom => -Vector::z(),
            Self::FrontQuarter => Vector::new(-0.62, -0.68, 0.39),
            Self::RearQuarter => Vector::new(0.62, -0.68, 0.39),
            Self::From(direction) => direction,
        }
    }

    /// The view in words, for a picture's head.
    #[must_use]
    pub fn label(self) -> String {
        match self {
            Self::FrontQuarter => "from the front left, above".to_owned(),
            Self::RearQuarter => "from the rear left, above".to_owned(),
            Self::Top => "from above".to_owned(),
            Self::Bottom => "from below".to_owned(),
            Self::From(d) => format!("from ({:.3}, {:.3}, {:.3})", d.x, d.y, d.z),
            named => format!("from the {}", named.name().unwrap_or_default()),
        }
    }
}

/// A rectangle of the picture, in pixels: left, top, right, bottom.
pub type Window = [f64; 4];

/// A view with its scale and place on the picture.
#[derive(Debug, Clone, Copy)]
pub struct Camera {
    /// To the right on the picture, unit length.
    pub right: Vector,
    /// Upwards on the picture, unit length.
    pub up: Vector,
    /// Towards the eye, unit length.
    pub toward: Vector,
    /// What stands in the middle of the window.
    pub centre: Point,
    /// The length that a pixel covers.
    pub pixel: f64,
    /// The middle of the window, in pixels.
    middle: [f64; 2],
}

impl Camera {
    /// A camera of a view that has `points` fill the window. What lies at one
    /// place is given a width of `least`.
    #[must_use]
    pub fn fit<'a>(
        view: View,
        points: impl Iterator<Item = &'a Point>,
        window: Window,
        least: f64,
    ) -> Self {
        let mut camera = Self::axes(view.toward(), window);
        let (mut low, mut high) = ([f64::INFINITY; 3], [f64::NEG_INFINITY; 3]);
        for point in points {
            let along = [camera.right, camera.up, camera.toward].map(|a| a.dot(&point.coords));
            for i in 0..3 {
                low[i] = low[i].min(along[i]);
                high[i] = high[i].max(along[i]);
            }
        }
        if low[0] > high[0] {
            (low, high) = ([0.0; 3], [0.0; 3]);
        }
        let middle = [0, 1, 2].map(|i| low[i].midpoint(high[i]));
        camera.centre = Point::from(
            camera.right * middle[0] + camera.up * middle[1] + camera.toward * middle[2],
        );
        let wide = (high[0] - low[0]).max(least) / (window[2] - window[0]);
        let tall = (high[1] - low[1]) / (window[3] - window[1]);
        camera.pixel = wide.max(tall);
        camera
    }

    /// A camera that has `centre` in the middle of the window, which is `across`
    /// wide.
    #[must_use]
    pub fn near(toward: Vector, centre: Point, across: f64, window: Window) -> Self {
        Self {
            centre,
            pixel: across / (window[2] - window[0]),
            ..Self::axes(toward, window)
        }
    }

    fn axes(toward: Vector, window: Window) -> Self {
        let toward = toward.try_normalize(0.0).unwrap_or_else(Vector::z);
        // Seen straight from above or below, +x goes to the right.
        let right = if toward.x.hypot(toward.y) < 1e-9 {
            Vector::x()
        } else {
            Vector::z().cross(&toward).normalize()
        };
        Self {
            right,
            up: toward.cross(&right),
            toward,
            centre: Point::origin(),
            pixel: 1.0,
            middle: [window[0].midpoint(window[2]), window[1].midpoint(window[3])],
        }
    }

    /// Pixels from the left, pixels from the top, and the length towards the eye
    /// from the centre.
    #[must_use]
    pub fn project(&self, point: &Point) -> [f64; 3] {
        let from = point - self.centre;
        [
            self.middle[0] + from.dot(&self.right) / self.pixel,
            self.middle[1] - from.dot(&self.up) / self.pixel,
            from.dot(&self.toward),
        ]
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn views_look_the_way_they_say() {
        let window = [0.0, 0.0, 100.0, 100.0];
        let corner = Point::new(1.0, 1.0, 1.0);
        let all = [Point::origin(), corner];
        // Rearwards, to the right and up of a vehicle, as each view sees them.
        for (view, x, y, z) in [
            (View::Front, [0, 0], [-1, 0], [0, 1]),
            (View::Rear, [0, 0], [1, 0], [0, 1]),
            (View::Left, [1, 0], [0, 0], [0, 1]),
            (View::Right, [-1, 0], [0, 0], [0, 1]),
            (View::Top, [1, 0], [0, 1], [0, 0]),
            (View::Bottom, [1, 0], [0, -1], [0, 0]),
        ] {
            let camera = Camera::fit(view, all.iter(), window, 0.0);
            for (axis, [right, up]) in [(Vector::x(), x), (Vector::y(), y), (Vector::z(), z)] {
                approx::assert_relative_eq!(axis.dot(&camera.right), f64::from(right));
                approx::assert_relative_eq!(axis.dot(&camera.up), f64::from(up));
            }
            approx::assert_relative_eq!(camera.right.cross(&camera.up), camera.toward);
            approx::assert_relative_eq!(camera.pixel, 0.01);
        }
    }
}
