//! A projected triangle in whole numbers: its edge functions, its depth as a
//! plane, its box.
#![allow(
    clippy::cast_possible_truncation,
    clippy::cast_precision_loss,
    reason = "corners are clipped to 2^22 pixels before they are rounded"
)]

/// Steps of rounding a pixel.
pub(super) const STEPS: i64 = 256;

/// Triangles reaching farther out than this many pixels are left out: a view
/// closer than that shows nothing.
const FARTHEST: f64 = 4_194_304.0;

/// A corner as projected: pixels from the left and the top, depth towards the eye.
pub(super) type Corner = [f64; 3];

/// A triangle set up for drawing.
#[derive(Debug)]
pub(super) struct Setup {
    /// Edge functions (a, b, c): a x + b y + c, positive inside, in steps.
    pub(super) edges: [[i64; 3]; 3],
    /// Depth as (along x, along y, at 0), in pixels.
    pub(super) depth: [f64; 3],
    /// Twice the area in steps squared.
    pub(super) area: f64,
    /// Box in pixels: left, top, right, bottom, the last two not included.
    pub(super) reach: [i64; 4],
    /// Edge lengths in steps.
    pub(super) lengths: [f64; 3],
}

impl Setup {
    /// `None` for what has no area or is not on the picture.
    pub(super) fn new(corners: [Corner; 3], (width, height): (usize, usize)) -> Option<Self> {
        let all = corners.iter().flatten();
        if all.clone().any(|x| !x.is_finite() || x.abs() > FARTHEST) {
            return None;
        }
        let step = |x: f64| (x * STEPS as f64).round() as i64;
        let mut at = corners.map(|c| [step(c[0]), step(c[1])]);
        let mut deep = corners.map(|c| c[2]);
        let mut order = [0, 1, 2];
        let cross = |at: &[[i64; 2]; 3]| {
            (at[1][0] - at[0][0]) * (at[2][1] - at[0][1])
                - (at[1][1] - at[0][1]) * (at[2][0] - at[0][0])
        };
        let mut area = cross(&at);
        if area < 0 {
            at.swap(1, 2);
            deep.swap(1, 2);
            order.swap(1, 2);
            area = -area;
        }
        if area == 0 {
            return None;
        }
        let bound = |axis: usize, most: usize| {
            let low = at
                .iter()
                .map(|p| p[axis])
                .min()
                .unwrap_or(0)
                .div_euclid(STEPS);
            let high = at
                .iter()
                .map(|p| p[axis])
                .max()
                .unwrap_or(0)
                .div_euclid(STEPS)
                + 1;
            (low.clamp(0, most as i64), high.clamp(0, most as i64))
        };
        let ((left, right), (top, bottom)) = (bound(0, width), bound(1, height));
        if left >= right || top >= bottom {
            return None;
        }
        // Edge k is opposite corner k, so that it weighs that corner.
        let mut edges = [[0; 3]; 3];
        let mut lengths = [0.0; 3];
        for k in 0..3 {
            let (p, q) = (at[(k + 1) % 3], at[(k + 2) % 3]);
            let (dx, dy) = (q[0] - p[0], q[1] - p[1]);
            // What lies on an edge belongs to the triangle on one side only.
            let owned = dy > 0 || (dy == 0 && dx < 0);
            edges[order[k]] = [-dy, dx, dy * p[0] - dx * p[1] - i64::from(!owned)];
            lengths[order[k]] = (dx as f64).hypot(dy as f64);
        }
        let area = area as f64;
        let plane = |i: usize| {
            (0..3).fold(0.0, |sum, k| {
                let corner = order.iter().position(|o| *o == k).map_or(0.0, |p| deep[p]);
                sum + edges[k][i] as f64 * corner
            }) / area
        };
        Some(Self {
            depth: [plane(0), plane(1), plane(2)],
            edges,
            area,
            reach: [left, top, right, bottom],
            lengths,
        })
    }

    /// The barycentric coordinates at a place in steps.
    pub(super) fn weights(&self, x: f64, y: f64) -> [f64; 3] {
        self.edges
            .map(|[a, b, c]| (a as f64 * x + b as f64 * y + c as f64) / self.area)
    }
}
