//! The nearest of many triangles, by a tree of boxes. Written for these tests
//! alone: it shares no line with what it judges.

use chordwise::scalar::{Point, Vector};

/// Triangles in space and a binary tree of boxes over them.
pub(crate) struct Soup {
    corners: Vec<[Point; 3]>,
    /// Triangles in the order of the tree's leaves.
    order: Vec<usize>,
    nodes: Vec<Node>,
}

struct Node {
    low: Point,
    high: Point,
    /// Leaf: a range of `order`. Inner: `children` are set.
    range: (usize, usize),
    children: Option<(usize, usize)>,
}

/// The nearest place of a soup.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Hit {
    pub(crate) distance: f64,
    pub(crate) triangle: usize,
    /// Barycentric coordinates of the nearest place.
    pub(crate) place: [f64; 3],
}

const LEAF: usize = 4;

impl Soup {
    pub(crate) fn new(corners: Vec<[Point; 3]>) -> Self {
        let mut soup = Self {
            order: (0..corners.len()).collect(),
            corners,
            nodes: Vec::new(),
        };
        let count = soup.order.len();
        soup.grow((0, count));
        soup
    }

    pub(crate) fn corners(&self) -> &[[Point; 3]] {
        &self.corners
    }

    fn grow(&mut self, range: (usize, usize)) -> usize {
        let mut low = Point::from([f64::INFINITY; 3]);
        let mut high = Point::from([f64::NEG_INFINITY; 3]);
        for &t in &self.order[range.0..range.1] {
            for p in &self.corners[t] {
                low = low.inf(p);
                high = high.sup(p);
            }
        }
        let at = self.nodes.len();
        self.nodes.push(Node {
            low,
            high,
            range,
            children: None,
        });
        if range.1 - range.0 > LEAF {
            let axis = (high - low).imax();
            let corners = &self.corners;
            let key = |t: usize| corners[t].iter().map(|p| p[axis]).sum::<f64>();
            let middle = (range.1 - range.0) / 2;
            self.order[range.0..range.1]
                .select_nth_unstable_by(middle, |&a, &b| key(a).total_cmp(&key(b)));
            let split = range.0 + middle;
            let left = self.grow((range.0, split));
            let right = self.grow((split, range.1));
            self.nodes[at].children = Some((left, right));
        }
        at
    }

    /// The nearest triangle of all.
    pub(crate) fn nearest(&self, p: &Point) -> Hit {
        let mut best = Hit {
            distance: f64::INFINITY,
            triangle: 0,
            place: [1.0, 0.0, 0.0],
        };
        let mut stack = vec![(self.nodes[0].square(p), 0)];
        while let Some((square, at)) = stack.pop() {
            if square > best.distance {
                continue;
            }
            let node = &self.nodes[at];
            if let Some((left, right)) = node.children {
                let (a, b) = (self.nodes[left].square(p), self.nodes[right].square(p));
                if a < b {
                    stack.push((b, right));
                    stack.push((a, left));
                } else {
                    stack.push((a, left));
                    stack.push((b, right));
                }
            } else {
                for &triangle in &self.order[node.range.0..node.range.1] {
                    let (distance, place) = nearest_in(p, &self.corners[triangle]);
                    if distance < best.distance {
                        best = Hit {
                            distance,
                            triangle,
                            place,
                        };
                    }
                }
            }
        }
        best.distance = best.distance.sqrt();
        best
    }
}

impl Node {
    /// Squared distance of a point from the box.
    fn square(&self, p: &Point) -> f64 {
        let below = (self.low - p).sup(&(p - self.high));
        below.sup(&Vector::zeros()).norm_squared()
    }
}

/// Squared distance to a triangle and the nearest place: the height over the
/// plane where the foot is inside, else the best of the three sides.
fn nearest_in(p: &Point, [a, b, c]: &[Point; 3]) -> (f64, [f64; 3]) {
    // Differences first, which keeps far-away triangles sharp.
    let (e, f, r) = (b - a, c - a, p - a);
    let normal = e.cross(&f);
    let square = normal.norm_squared();
    if square > 0.0 {
        let v = r.cross(&f).dot(&normal) / square;
        let w = e.cross(&r).dot(&normal) / square;
        if v >= 0.0 && w >= 0.0 && v + w <= 1.0 {
            let height = r.dot(&normal);
            return (height * height / square, [1.0 - v - w, v, w]);
        }
    }
    let along = |from: &Point, to: &Point| {
        let (d, r) = (to - from, p - from);
        let square = d.norm_squared();
        let t = if square > 0.0 {
            (r.dot(&d) / square).clamp(0.0, 1.0)
        } else {
            0.0
        };
        ((r - d * t).norm_squared(), t)
    };
    let (ab, t) = along(a, b);
    let mut best = (ab, [1.0 - t, t, 0.0]);
    let (bc, t) = along(b, c);
    if bc < best.0 {
        best = (bc, [0.0, 1.0 - t, t]);
    }
    let (ca, t) = along(c, a);
    if ca < best.0 {
        best = (ca, [t, 0.0, 1.0 - t]);
    }
    best
}
