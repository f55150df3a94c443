//! Which boxes meet: a tree of boxes, halved at the middle.
//!
//! A tree rather than a grid: a sill's edge of two metres beside a lamp's of
//! two millimetres costs a tree nothing. Built by index alone, so the order of
//! what it finds is the same on every machine.

use crate::scalar::Cuboid;

/// Entries in a leaf.
const LEAF: usize = 4;

#[derive(Debug)]
struct TreeNode {
    cuboid: Cuboid,
    /// Entries below, as a range of `BoxTree::order`.
    start: usize,
    end: usize,
    /// Nodes below and including this one, for skipping.
    size: usize,
}

/// Boxes by index, to be asked which of them meet another box.
#[derive(Debug)]
pub(super) struct BoxTree {
    nodes: Vec<TreeNode>,
    order: Vec<usize>,
    boxes: Vec<Cuboid>,
}

impl BoxTree {
    /// A tree over `boxes[i]` for every i in `entries`.
    pub(super) fn new(boxes: Vec<Cuboid>, entries: Vec<usize>) -> Self {
        let mut tree = Self {
            nodes: Vec::with_capacity(entries.len()),
            order: entries,
            boxes,
        };
        let count = tree.order.len();
        if count > 0 {
            tree.grow(0, count);
        }
        tree
    }

    fn grow(&mut self, start: usize, end: usize) {
        let here = self.nodes.len();
        let entries = &mut self.order[start..end];
        let cuboid = entries
            .iter()
            .map(|&i| self.boxes[i])
            .reduce(|a, b| a.union(&b))
            .expect("a tree node has entries");
        self.nodes.push(TreeNode {
            cuboid,
            start,
            end,
            size: 1,
        });
        if entries.len() > LEAF {
            let axis = (cuboid.high - cuboid.low).imax();
            let boxes = &self.boxes;
            let middle = entries.len() / 2;
            entries.select_nth_unstable_by(middle, |&a, &b| {
                let (p, q) = (boxes[a].middle(), boxes[b].middle());
                p[axis].total_cmp(&q[axis]).then(a.cmp(&b))
            });
            self.grow(start, start + middle);
            self.grow(start + middle, end);
            self.nodes[here].size = self.nodes.len() - here;
        }
    }

    /// Calls `found` with every entry whose box meets `with`.
    pub(super) fn meeting(&self, with: &Cuboid, mut found: impl FnMut(usize)) {
        let mut at = 0;
        while let Some(node) = self.nodes.get(at) {
            if !node.cuboid.meets(with) {
                at += node.size;
                continue;
            }
            if node.size == 1 {
                for &entry in &self.order[node.start..node.end] {
                    if self.boxes[entry].meets(with) {
                        found(entry);
                    }
                }
            }
            at += 1;
        }
    }
}
