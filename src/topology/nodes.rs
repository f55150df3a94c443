//! Corners and splits that are one place, and where edges are split.
//!
//! Places become one only through joined contacts, collapsed edges and the
//! corner of a piece that two of its edges share; distance alone decides
//! nothing except along one edge, where two splits closer than the gap
//! tolerance are one.

use super::EdgeId;
use super::edge_curve::EdgeCurve;
use super::model::Contact;
use super::nearest::nearest_from;
use crate::bezier::Side;

/// Rounds after which corners that fall on edges must have settled.
const ROUNDS: usize = 64;

/// Why marks could not be settled.
#[derive(Debug)]
pub(super) enum Unsettled {
    /// The two ends of an edge, or of a part of it, became one place: the edge
    /// and the loosest of the joined contacts that made them one.
    Collapse(Vec<(EdgeId, Option<usize>)>),
    /// Corners that fall on edges go on for ever.
    Endless,
}

/// A place on an edge that is a node.
#[derive(Debug, Clone, Copy)]
pub(super) struct Mark {
    pub(super) t: f64,
    class: usize,
}

/// Marks on all edges and the classes they fall into.
#[derive(Debug)]
pub(super) struct Marks {
    edges: Vec<Vec<Mark>>,
    parent: Vec<usize>,
}

/// Index of the corner at (u, v) of a piece.
fn corner(piece: usize, [u, v]: [f64; 2]) -> usize {
    piece * 4 + usize::from(u > 0.5) * 2 + usize::from(v > 0.5)
}

impl Marks {
    /// Marks that follow from the corners of all edges and the joined contacts.
    pub(super) fn settle(
        edges: &[EdgeCurve],
        contacts: &[Contact],
        gap: f64,
    ) -> Result<Self, Unsettled> {
        let mut marks = Self {
            edges: Vec::with_capacity(edges.len()),
            parent: (0..edges.len()).collect(),
        };
        for edge in edges {
            let (piece, side) = (edge.id.piece().index(), edge.id.side());
            let ends = [0.0, 1.0].map(|t| Mark {
                t,
                class: corner(piece, Side::at(side, t)),
            });
            marks.edges.push(ends.to_vec());
            if edge.collapsed {
                marks.unite(ends[0].class, ends[1].class);
            }
        }
        let joined: Vec<&Contact> = contacts.iter().filter(|c| c.joined).collect();
        // The class of both ends of every joined contact, for blame.
        let mut ends: Vec<[usize; 2]> = Vec::with_capacity(joined.len());
        for contact in &joined {
            let classes = [0, 1].map(|end| {
                let [a, b] = contact.edges.map(|e| &edges[e.index()]);
                let p = marks.mark(a, contact.first[end], gap);
                let q = marks.mark(b, contact.second[end], gap);
                marks.unite(p, q);
                p
            });
            ends.push(classes);
        }
        for _ in 0..ROUNDS {
            let mut settled = true;
            for contact in &joined {
                settled &= !marks.carry(edges, contact, gap);
            }
            if settled {
                marks.thin_out();
                let collapsed = marks.collapsed(edges);
                if collapsed.is_empty() {
                    return Ok(marks);
                }
                let blame = marks.loosest(&collapsed, contacts, &ends);
                return Err(Unsettled::Collapse(blame));
            }
        }
        Err(Unsettled::Endless)
    }

    /// The class a mark belongs to.
    pub(super) fn class(&self, mark: &Mark) -> usize {
        let mut at = mark.class;
        while self.parent[at] != at {
            at = self.parent[at];
        }
        at
    }

    /// Marks of an edge, ascending, its two ends included.
    pub(super) fn of(&self, edge: usize) -> &[Mark] {
        &self.edges[edge]
    }

    fn find(&mut self, mut at: usize) -> usize {
        while self.parent[at] != at {
            self.parent[at] = self.parent[self.parent[at]];
            at = self.parent[at];
        }
        at
    }

    fn unite(&mut self, a: usize, b: usize) -> bool {
        let (a, b) = (self.find(a), self.find(b));
        // The least index stands for the class.
        self.parent[a.max(b)] = a.min(b);
        a != b
    }

    /// The class of the mark at `t`, which is made if there is none within the
    /// gap tolerance along the edge.
    fn mark(&mut self, edge: &EdgeCurve, t: f64, gap: f64) -> usize {
        let index = edge.id.index();
        let near = gap.min(edge.length / 4.0);
        let place = edge.curve.eval(t);
        let held = &self.edges[index];
        let nearest = held
            .iter()
            .filter(|m| (m.t - t).abs() <= 0.5)
            .map(|m| {
                // The two ends were made exact; only a split has to be evaluated.
                let distance = if m.t.total_cmp(&t).is_eq() {
                    0.0
                } else {
                    (edge.curve.eval(m.t) - place).norm()
                };
                (distance, m.class)
            })
            .min_by(|p, q| p.0.total_cmp(&q.0));
        if let Some((distance, class)) = nearest
            && distance <= near
        {
            return class;
        }
        let class = self.parent.len();
        self.parent.push(class);
        let at = held.partition_point(|m| m.t < t);
        self.edges[index].insert(at, Mark { t, class });
        class
    }

    /// Gives each edge of a contact the marks of the other that fall within
    /// the common stretch. Returns whether anything changed.
    fn carry(&mut self, edges: &[EdgeCurve], contact: &Contact, gap: f64) -> bool {
        let mut changed = false;
        for forth in [true, false] {
            let [from, to] = if forth {
                contact.edges
            } else {
                [contact.edges[1], contact.edges[0]]
            };
            let (here, there) = if forth {
                (contact.first, contact.second)
            } else {
                (contact.second, contact.first)
            };
            if self.edges[from.index()].len() == 2 {
                continue;
            }
            let (low, high) = (here[0].min(here[1]), here[0].max(here[1]));
            let inner: Vec<Mark> = self.edges[from.index()]
                .iter()
                .filter(|m| m.t > low && m.t < high)
                .copied()
                .collect();
            for mark in inner {
                let class = self.find(mark.class);
                let known = (0..self.edges[to.index()].len()).any(|k| {
                    let other = self.edges[to.index()][k].class;
                    self.find(other) == class
                });
                if known {
                    continue;
                }
                let point = edges[from.index()].curve.eval(mark.t);
                let x = (mark.t - here[0]) / (here[1] - here[0]);
                let range = [there[0].min(there[1]), there[0].max(there[1])];
                let guess = there[0] * (1.0 - x) + there[1] * x;
                let other = &edges[to.index()];
                let foot = nearest_from(&other.curve, &point, guess, range);
                let found = self.mark(other, foot.t, gap);
                self.unite(class, found);
                changed = true;
            }
        }
        changed
    }

    /// Drops splits that have become one with their neighbour.
    fn thin_out(&mut self) {
        for index in 0..self.edges.len() {
            if self.edges[index].len() == 2 {
                continue;
            }
            let mut kept: Vec<Mark> = Vec::with_capacity(self.edges[index].len());
            let last = self.edges[index].len() - 1;
            for k in 0..=last {
                let mark = self.edges[index][k];
                match kept.last().copied() {
                    Some(before) if self.find(before.class) == self.find(mark.class) => {
                        if k == last && kept.len() > 1 {
                            kept.pop();
                            kept.push(mark);
                        } else if k == last {
                            kept.push(mark);
                        }
                    }
                    _ => kept.push(mark),
                }
            }
            self.edges[index] = kept;
        }
    }

    /// Edges that are no points, but of which two neighbouring marks are one
    /// place, with that place.
    fn collapsed(&mut self, edges: &[EdgeCurve]) -> Vec<(EdgeId, usize)> {
        let mut found = Vec::new();
        for edge in edges.iter().filter(|e| !e.collapsed) {
            let count = self.edges[edge.id.index()].len();
            for k in 1..count {
                let [p, q] = [k - 1, k].map(|k| self.edges[edge.id.index()][k].class);
                let (p, q) = (self.find(p), self.find(q));
                if p == q {
                    found.push((edge.id, p));
                }
            }
        }
        found
    }

    /// For every collapsed edge, the joined contact of largest gap that ends
    /// at the place in question.
    fn loosest(
        &mut self,
        collapsed: &[(EdgeId, usize)],
        contacts: &[Contact],
        ends: &[[usize; 2]],
    ) -> Vec<(EdgeId, Option<usize>)> {
        let mut at: Vec<(usize, usize)> = Vec::new();
        let joined = (0..contacts.len()).filter(|&i| contacts[i].joined);
        for (contact, classes) in joined.zip(ends) {
            for &class in classes {
                at.push((self.find(class), contact));
            }
        }
        at.sort_unstable();
        let loosest = |class: usize| {
            let from = at.partition_point(|a| a.0 < class);
            at[from..]
                .iter()
                .take_while(|a| a.0 == class)
                .map(|a| a.1)
                .max_by(|&i, &j| {
                    let proved = |k: usize| contacts[k].gap.proved;
                    proved(i).total_cmp(&proved(j)).then(j.cmp(&i))
                })
        };
        collapsed
            .iter()
            .map(|&(edge, class)| (edge, loosest(class)))
            .collect()
    }
}
