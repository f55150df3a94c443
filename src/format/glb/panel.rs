//! Which vertices and indices a panel gets, and in which order.

use std::ops::Range;

use crate::format::{Layout, panels};
use crate::mesh::{Mesh, Part, Strips};

/// The vertices and indices of all panels, one panel after another.
#[derive(Debug, Default)]
pub(super) struct Streams<'a> {
    /// Vertices of the mesh in the order in which the file stores them: by
    /// panel, and in it by first use.
    pub(super) vertices: Vec<u32>,
    /// Indices into the vertices of the panel. Empty for separate triangles.
    pub(super) indices: Vec<u32>,
    pub(super) panels: Vec<Panel<'a>>,
}

/// What one panel takes of the streams.
#[derive(Debug)]
pub(super) struct Panel<'a> {
    pub(super) name: &'a str,
    pub(super) vertices: Range<usize>,
    pub(super) indices: Range<usize>,
    /// Each patch's range in the panel's indices, or in its vertices where
    /// there are no indices.
    pub(super) patches: Vec<(&'a str, Range<usize>)>,
}

impl<'a> Streams<'a> {
    /// The streams for a layout; `strips` belong to the layout of that name.
    pub(super) fn of(mesh: &'a Mesh, layout: Layout, strips: Option<&Strips>) -> Self {
        let mut streams = Self::default();
        let mut local = vec![u32::MAX; mesh.vertices.len()];
        for (name, parts) in panels(mesh) {
            let starts = (streams.vertices.len(), streams.indices.len());
            let patches = parts
                .into_iter()
                .map(|(number, part)| {
                    let range = streams.patch(mesh, layout, strips, number, part, starts);
                    (part.name.as_str(), range)
                })
                .collect();
            let vertices = starts.0..streams.vertices.len();
            let indices = starts.1..streams.indices.len();
            if layout != Layout::Triangles {
                streams.number(&mut local, vertices.start, indices.start);
            }
            if streams.vertices.len() == vertices.start {
                // Nothing but triangles that repeat a corner: these are in no
                // strip, and the standard wants at least one point a mesh.
                continue;
            }
            streams.panels.push(Panel {
                name,
                vertices: vertices.start..streams.vertices.len(),
                indices,
                patches,
            });
        }
        streams
    }

    /// Appends one patch, with indices into the mesh as yet.
    fn patch(
        &mut self,
        mesh: &Mesh,
        layout: Layout,
        strips: Option<&Strips>,
        number: usize,
        part: &Part,
        starts: (usize, usize),
    ) -> Range<usize> {
        let corners = mesh.triangles[part.triangles.clone()].as_flattened();
        match (layout, strips) {
            (Layout::Triangles, _) => {
                let first = self.vertices.len() - starts.0;
                self.vertices.extend_from_slice(corners);
                first..self.vertices.len() - starts.0
            }
            (Layout::Strips, Some(strips)) => {
                let mut first = None;
                for strip in strips.part(number) {
                    self.join(strip, starts.1);
                    first.get_or_insert(self.indices.len() - starts.1);
                    self.indices.extend_from_slice(strip);
                }
                let end = self.indices.len() - starts.1;
                first.unwrap_or(end)..end
            }
            _ => {
                let first = self.indices.len() - starts.1;
                self.indices.extend_from_slice(corners);
                first..self.indices.len() - starts.1
            }
        }
    }

    /// Repeats indices, so that the next strip begins at an even place.
    fn join(&mut self, next: &[u32], start: usize) {
        let (Some(&last), Some(&first)) = (self.indices[start..].last(), next.first()) else {
            return;
        };
        self.indices.extend([last, first]);
        if (self.indices.len() - start) % 2 == 1 {
            self.indices.push(first);
        }
    }

    /// Gives the vertices of one panel their numbers in the file.
    fn number(&mut self, local: &mut [u32], vertices: usize, indices: usize) {
        let mut fresh = 0;
        for index in &mut self.indices[indices..] {
            let vertex = *index;
            let slot = &mut local[vertex as usize];
            if *slot == u32::MAX {
                *slot = fresh;
                fresh += 1;
                self.vertices.push(vertex);
            }
            *index = *slot;
        }
        for &vertex in &self.vertices[vertices..] {
            local[vertex as usize] = u32::MAX;
        }
    }
}
