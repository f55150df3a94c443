//! The border of a layout in space: by how much a triangle's surface may stand
//! beyond it. The bound is derived in `sweep`.

use super::layout::Layout;
use super::quick::Bound;
use super::triangulation::BORDER;
use crate::scalar::Vector;

/// Least half angle between border edges at a vertex, as a sine.
pub(super) const SHARPEST: f64 = 0.38;

/// No neighbour along the border.
const NONE: u32 = u32::MAX;

/// The vertices before and after every vertex of the border, by vertex.
#[derive(Debug)]
pub(super) struct Border {
    around: Vec<[u32; 2]>,
}

impl Border {
    pub(super) fn new(layout: &Layout) -> Self {
        let mesh = &layout.triangulation;
        let mut around = vec![[NONE; 2]; mesh.places.len()];
        for (corners, neighbours) in mesh.triangles.iter().zip(&mesh.neighbours) {
            for k in 0..3 {
                if neighbours[k] == BORDER {
                    let (a, b) = (corners[k], corners[(k + 1) % 3]);
                    around[a as usize][1] = b;
                    around[b as usize][0] = a;
                }
            }
        }
        Self { around }
    }

    /// How far the surface over a triangle may reach beyond the border lines at
    /// its corners, over the sine of half the least angle there; `None` where
    /// this bound does not apply. `bends` are the second derivatives along its
    /// edges.
    pub(super) fn beyond(
        &self,
        layout: &Layout,
        corners: [u32; 3],
        bound: &Bound,
        bends: &[Vector; 3],
    ) -> Option<f64> {
        let point = |v: u32| layout.points[v as usize];
        let own = |[a, b]: [u32; 2]| (0..3).find(|&k| [corners[k], corners[(k + 1) % 3]] == [a, b]);
        let line = |edge: [u32; 2]| {
            let start = point(edge[0]);
            let along = point(edge[1]) - start;
            let away = along.cross(&bound.normal).try_normalize(0.0)?;
            let slack = 1e-9 * along.norm();
            let out = bends.map(|bend| (-bend.dot(&away)).max(0.0));
            let most = out[0].max(out[1]).max(out[2]) / 2.0;
            let behind = corners.map(|v| -(point(v) - start).dot(&away));
            if behind.iter().any(|&d| d < -slack) {
                return None;
            }
            // What stands on the line, or too near to it to make up for more.
            let near = behind.map(|d| d < most);
            let between = (0..3).filter(|&k| near[k] && near[(k + 1) % 3]);
            let bulge = between.map(|k| out[k] / 8.0).fold(0.0, f64::max);
            (near != [true; 3]).then_some(bulge + bound.rest)
        };
        let (mut most, mut sharpest) = (0.0_f64, 1.0_f64);
        for corner in corners {
            let [before, after] = self.around[corner as usize];
            if before == NONE || after == NONE {
                continue;
            }
            let (incoming, outgoing) = ([before, corner], [corner, after]);
            let along = |[a, b]: [u32; 2]| -> Vector { point(b) - point(a) };
            let (first, second) = (along(incoming), along(outgoing));
            if let Some(half) = half_angle(&first, &second, &bound.normal) {
                most = most.max(line(incoming)?).max(line(outgoing)?);
                sharpest = sharpest.min(half);
            } else {
                // Inside one of the two lines is inside the piece.
                let edges = if own(outgoing).is_some() {
                    [outgoing, incoming]
                } else {
                    [incoming, outgoing]
                };
                most = most.max(edges.into_iter().find_map(line)?);
            }
        }
        (sharpest >= SHARPEST).then_some(most / sharpest)
    }
}

/// Sine of half the angle inside a corner of the border, between the edge that
/// comes in and the one that goes out; `None` where the border turns inwards.
pub(super) fn half_angle(incoming: &Vector, outgoing: &Vector, normal: &Vector) -> Option<f64> {
    let turn = incoming.cross(outgoing);
    let angle = turn.norm().atan2(-incoming.dot(outgoing));
    (turn.dot(normal) >= 0.0).then(|| (angle / 2.0).sin())
}

#[cfg(test)]
mod tests {
    use super::super::layout::INNER;
    use super::super::nets::Nets;
    use super::super::quick::Quick;
    use super::super::triangulation::Triangulation;
    use super::*;
    use crate::bezier::BezierPatch;
    use crate::sampling::ratio;
    use crate::scalar::Point;

    #[test]
    fn a_corner_is_half_its_angle() {
        let [east, north] = [Vector::x(), Vector::y()];
        let half =
            |incoming: Vector, outgoing: Vector| half_angle(&incoming, &outgoing, &Vector::z());
        // Counterclockwise round the piece: a right angle, straight on, and inwards.
        let right = half(east, north).unwrap();
        assert!((right - 0.5_f64.sqrt()).abs() < 1e-15, "{right}");
        let acute = half(east, -(east * 3.0_f64.sqrt()) + north).unwrap();
        assert!(
            (acute - 15.0_f64.to_radians().sin()).abs() < 1e-15,
            "{acute}"
        );
        assert!((half(east, east).unwrap() - 1.0).abs() < 1e-15);
        assert!(half(north, east).is_none());
    }

    /// A plane patch of parabolas y = v - 4 b x (1 - x), so that third derivatives
    /// vanish and nothing is added for them: on one
    /// segment for that side the surface stands b beyond it, by hand, and on four
    /// segments a sixteenth of that.
    #[test]
    fn a_bulge_of_the_border_is_as_by_hand() {
        let b = 0.01;
        let points = (0..6).map(|k| {
            let (x, row) = (ratio(k / 2, 2), k % 2);
            let y = ratio(row, 1) - if k / 2 == 1 { 2.0 * b } else { 0.0 };
            Point::new(x, y, 0.0)
        });
        let surface = BezierPatch::new((2, 1), points.collect(), None).unwrap();
        let quick = Quick::new(&surface, &Nets::new(&surface)).unwrap();
        for segments in [1, 4] {
            let mut places: Vec<[f64; 2]> =
                (0..=segments).map(|k| [ratio(k, segments), 0.0]).collect();
            let (left, right) = (segments + 1, segments + 2);
            places.extend([[0.0, 1.0], [1.0, 1.0]]);
            let [left, right] = [left, right].map(|v| u32::try_from(v).unwrap());
            let segments = left - 1;
            let mut triangles: Vec<[u32; 3]> = (0..segments).map(|k| [k, k + 1, left]).collect();
            triangles.push([segments, right, left]);
            let points: Vec<Point> = places.iter().map(|p| surface.eval(p[0], p[1])).collect();
            let layout = Layout {
                vertices: vec![0; points.len()],
                triangulation: Triangulation::new(places, None, triangles),
                points,
            };
            assert!(!layout.vertices.contains(&INNER));
            let corners = layout.triangulation.triangles[0];
            let at = corners.map(|v| layout.triangulation.places[v as usize]);
            let bound = quick.bound(at, corners.map(|v| layout.points[v as usize]), 0.0);
            let border = Border::new(&layout);
            let beyond = border
                .beyond(&layout, corners, &bound, &quick.bends(at))
                .unwrap();
            let by_hand = b / f64::from(segments * segments);
            // Corners of ninety degrees cost a square root of two.
            assert!(
                beyond >= by_hand && beyond <= 1.5 * by_hand + 1.5 * bound.rest,
                "{beyond}"
            );
        }
    }
}
