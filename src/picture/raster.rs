//! Which triangle is seen where: a z-buffer of eight samples a pixel, tile by
//! tile.
//!
//! Corners are rounded to 1/256 of a pixel and edges are weighed in whole numbers,
//! so two triangles with a common edge neither overlap nor leave a sample out. A
//! tile is worked by one thread from its own list of triangles in the mesh's
//! order: the picture is the same for any number of threads.
//!
//! Colours are asked for once for each thing seen in a pixel and averaged in
//! linear light, weighted by the samples it covers.
#![allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    clippy::cast_precision_loss,
    reason = "corners are clipped to 2^22 pixels before they are rounded; depths are compared, not kept"
)]

use rayon::prelude::*;

use super::colour::Colour;
use super::setup::{Corner, STEPS, Setup};
use crate::pace;

/// Pixels along a tile's side.
const TILE: usize = 64;

/// Samples a pixel.
const SAMPLES: usize = 8;

/// Where samples stand, in sixteenths of a pixel: one in each row and in each
/// column of an 8 x 8 grid.
const PATTERN: [[i64; 2]; SAMPLES] = [
    [1, 7],
    [3, 13],
    [5, 3],
    [7, 9],
    [9, 15],
    [11, 5],
    [13, 11],
    [15, 1],
];

const NOTHING: u32 = u32::MAX;

/// What is seen in part of a pixel.
#[derive(Debug, Clone, Copy)]
pub struct Fragment {
    /// The triangle.
    pub triangle: usize,
    /// Barycentric coordinates of the middle of what is seen.
    pub weights: [f64; 3],
    /// Distance from the triangle's nearest edge, in pixels.
    pub edge: f64,
}

/// The finished picture of the triangles.
#[derive(Debug)]
pub struct Raster {
    /// Colours times their cover.
    pub colours: Vec<Colour>,
    /// Share of each pixel that is covered.
    pub cover: Vec<f32>,
    /// The farthest depth seen in each pixel; minus infinity where something of
    /// it is left uncovered.
    pub depth: Vec<f32>,
}

/// Draws `count` triangles given by their projected corners. `colour` is asked
/// for what is seen. Fragments of a pixel share a colour if their triangles have
/// the same `key`, and their depths are no more than `near` apart; a triangle
/// without a key has colours of its own.
pub(super) fn draw(
    size: (usize, usize),
    count: usize,
    corners: impl Fn(usize) -> [Corner; 3] + Sync,
    colour: impl Fn(&Fragment) -> Colour + Sync,
    key: impl Fn(usize) -> Option<u64> + Sync,
    near: f64,
) -> Raster {
    let (width, height) = size;
    let columns = width.div_ceil(TILE);
    let rows = height.div_ceil(TILE);
    let reaches: Vec<Option<[u16; 4]>> = (0..count)
        .into_par_iter()
        .map(|t| {
            let setup = Setup::new(corners(t), size)?;
            let [x0, y0, x1, y1] = setup.reach.map(|x| x as usize);
            Some([
                (x0 / TILE) as u16,
                (y0 / TILE) as u16,
                ((x1 - 1) / TILE) as u16,
                ((y1 - 1) / TILE) as u16,
            ])
        })
        .collect();
    let mut lists: Vec<Vec<u32>> = vec![Vec::new(); columns * rows];
    for (t, reach) in (0_u32..).zip(&reaches) {
        let Some([x0, y0, x1, y1]) = *reach else {
            continue;
        };
        for row in y0..=y1 {
            for column in x0..=x1 {
                lists[row as usize * columns + column as usize].push(t);
            }
        }
    }
    let tiles: Vec<Tile> = lists
        .par_iter()
        .enumerate()
        .map(|(index, list)| {
            let origin = [(index % columns) * TILE, (index / columns) * TILE];
            let tile = Tile::draw(origin, list, size, &corners, &colour, &key, near);
            pace::step((TILE * TILE) as u64);
            tile
        })
        .collect();
    let mut raster = Raster {
        colours: vec![[0.0; 3]; width * height],
        cover: vec![0.0; width * height],
        depth: vec![f32::NEG_INFINITY; width * height],
    };
    for (index, tile) in tiles.iter().enumerate() {
        let (left, top) = ((index % columns) * TILE, (index / columns) * TILE);
        for (y, row) in tile.seen.chunks_exact(TILE).enumerate() {
            if top + y >= height {
                break;
            }
            for (x, seen) in row.iter().enumerate().take(width - left) {
                let at = (top + y) * width + left + x;
                raster.colours[at] = seen.colour;
                raster.cover[at] = seen.cover;
                raster.depth[at] = seen.depth;
            }
        }
    }
    raster
}

/// One pixel of a tile.
#[derive(Clone, Copy)]
struct Seen {
    colour: Colour,
    cover: f32,
    depth: f32,
}

struct Tile {
    seen: Vec<Seen>,
}

/// Things seen in one pixel, before they are coloured.
#[derive(Clone, Copy)]
struct Group {
    triangle: u32,
    key: Option<u64>,
    depth: f32,
    samples: u32,
    /// The sum of their places in sixteenths.
    at: [i64; 2],
    /// The same of the first triangle's alone.
    own: i64,
    own_at: [i64; 2],
}

impl Tile {
    fn draw(
        [left, top]: [usize; 2],
        list: &[u32],
        size: (usize, usize),
        corners: &impl Fn(usize) -> [Corner; 3],
        paint: &impl Fn(&Fragment) -> Colour,
        key: &impl Fn(usize) -> Option<u64>,
        near: f64,
    ) -> Self {
        let empty = Seen {
            colour: [0.0; 3],
            cover: 0.0,
            depth: f32::NEG_INFINITY,
        };
        let mut seen = vec![empty; TILE * TILE];
        if list.is_empty() {
            return Self { seen };
        }
        let mut ids = vec![[NOTHING; SAMPLES]; TILE * TILE];
        let mut deep = vec![[f32::NEG_INFINITY; SAMPLES]; TILE * TILE];
        for &triangle in list {
            if let Some(setup) = Setup::new(corners(triangle as usize), size) {
                cover(triangle, &setup, [left, top], &mut ids, &mut deep);
            }
        }
        // A pixel's neighbours mostly show the same triangle.
        let mut known: Option<(u32, Setup)> = None;
        let mut groups: Vec<Group> = Vec::with_capacity(SAMPLES);
        for (pixel, seen) in seen.iter_mut().enumerate() {
            gather(&ids[pixel], &deep[pixel], key, near as f32, &mut groups);
            let corner = [left + pixel % TILE, top + pixel / TILE];
            let mut total = 0;
            for group in &groups {
                if known.as_ref().is_none_or(|k| k.0 != group.triangle) {
                    known = Setup::new(corners(group.triangle as usize), size)
                        .map(|s| (group.triangle, s));
                }
                let Some((_, setup)) = &known else { continue };
                let weigh = |at: [i64; 2], count: i64| {
                    let place = [0, 1].map(|i| {
                        (corner[i] as f64 + at[i] as f64 / (16 * count) as f64) * STEPS as f64
                    });
                    setup.weights(place[0], place[1])
                };
                // The middle of all that gets this colour, or narrow stripes would
                // be ragged; but a needle is not drawn out far.
                let mut weights = weigh(group.at, i64::from(group.samples));
                if weights.iter().any(|w| *w < -1.0) {
                    weights = weigh(group.own_at, group.own);
                }
                let edge = (0..3)
                    .map(|k| weights[k] * setup.area / setup.lengths[k].max(1e-9))
                    .fold(f64::INFINITY, f64::min)
                    / STEPS as f64;
                let colour = paint(&Fragment {
                    triangle: group.triangle as usize,
                    weights,
                    edge,
                });
                let share = group.samples as f32 / SAMPLES as f32;
                for (sum, c) in seen.colour.iter_mut().zip(colour) {
                    *sum += c * share;
                }
                total += group.samples;
            }
            seen.cover = total as f32 / SAMPLES as f32;
            if total as usize == SAMPLES {
                seen.depth = deep[pixel].iter().copied().fold(f32::INFINITY, f32::min);
            }
        }
        Self { seen }
    }
}

/// Writes a triangle into the samples of a tile where it is nearest.
fn cover(
    triangle: u32,
    setup: &Setup,
    [left, top]: [usize; 2],
    ids: &mut [[u32; SAMPLES]],
    deep: &mut [[f32; SAMPLES]],
) {
    let (left, top) = (left as i64, top as i64);
    let tile = TILE as i64;
    let x0 = setup.reach[0].max(left);
    let x1 = setup.reach[2].min(left + tile);
    let y0 = setup.reach[1].max(top);
    let y1 = setup.reach[3].min(top + tile);
    let unit = STEPS / 16;
    let offsets = setup
        .edges
        .map(|[a, b, _]| PATTERN.map(|[x, y]| a * x * unit + b * y * unit));
    let extremes = offsets.map(|o| {
        let least = o.iter().copied().min().unwrap_or(0);
        let most = o.iter().copied().max().unwrap_or(0);
        (least, most)
    });
    let slope = PATTERN
        .map(|[x, y]| setup.depth[0] * (x * unit) as f64 + setup.depth[1] * (y * unit) as f64);
    for y in y0..y1 {
        let mut at = setup
            .edges
            .map(|[a, b, c]| a * x0 * STEPS + b * y * STEPS + c);
        let first = ((y - top) * tile + x0 - left) as usize;
        let mut depth = setup.depth[0] * (x0 * STEPS) as f64
            + setup.depth[1] * (y * STEPS) as f64
            + setup.depth[2];
        for pixel in first..first + (x1 - x0).max(0) as usize {
            if (0..3).all(|k| at[k] + extremes[k].1 >= 0) {
                let whole = (0..3).all(|k| at[k] + extremes[k].0 >= 0);
                let (ids, deep) = (&mut ids[pixel], &mut deep[pixel]);
                for s in 0..SAMPLES {
                    let inside = whole || (0..3).all(|k| at[k] + offsets[k][s] >= 0);
                    let here = (depth + slope[s]) as f32;
                    if inside && here > deep[s] {
                        deep[s] = here;
                        ids[s] = triangle;
                    }
                }
            }
            for (at, edge) in at.iter_mut().zip(&setup.edges) {
                *at += edge[0] * STEPS;
            }
            depth += setup.depth[0] * STEPS as f64;
        }
    }
}

/// Sorts the samples of a pixel into things that get one colour each.
fn gather(
    ids: &[u32; SAMPLES],
    deep: &[f32; SAMPLES],
    key: &impl Fn(usize) -> Option<u64>,
    near: f32,
    groups: &mut Vec<Group>,
) {
    groups.clear();
    for s in 0..SAMPLES {
        let triangle = ids[s];
        if triangle == NOTHING {
            continue;
        }
        if let Some(group) = groups.iter_mut().find(|g| g.triangle == triangle) {
            group.samples += 1;
            group.own += 1;
            group.at = [0, 1].map(|i| group.at[i] + PATTERN[s][i]);
            group.own_at = [0, 1].map(|i| group.own_at[i] + PATTERN[s][i]);
            continue;
        }
        let key = key(triangle as usize);
        let same =
            |g: &&mut Group| key.is_some() && g.key == key && (g.depth - deep[s]).abs() <= near;
        if let Some(group) = groups.iter_mut().find(same) {
            group.samples += 1;
            group.at = [0, 1].map(|i| group.at[i] + PATTERN[s][i]);
            continue;
        }
        groups.push(Group {
            triangle,
            key,
            depth: deep[s],
            samples: 1,
            at: PATTERN[s],
            own: 1,
            own_at: PATTERN[s],
        });
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A square cut into triangles round a point: every sample of it belongs to
    /// just one of them, wherever the point lies.
    #[test]
    fn triangles_with_common_edges_cover_every_sample_once() {
        for k in 0..40_u32 {
            let at = |seed: u32| f64::from((k * 7919 + seed * 104_729) % 1000) / 1000.0;
            let middle = [20.0 + 60.0 * at(1), 20.0 + 60.0 * at(2), 0.0];
            let low = 8.0 + at(3);
            let corners = [[low, low], [92.5, low], [92.5, 90.25], [low, 90.25]];
            let triangle = |t: usize| {
                let [p, q] = [corners[t], corners[(t + 1) % 4]];
                // Turned over now and then, as seen from the other side.
                let (p, q) = if t == 2 { (q, p) } else { (p, q) };
                [middle, [p[0], p[1], 1.0], [q[0], q[1], 1.0]]
            };
            let draw = |range: std::ops::Range<usize>| {
                let first = range.start;
                let corners = |t: usize| triangle(first + t);
                draw(
                    (100, 100),
                    range.len(),
                    corners,
                    |_| [1.0; 3],
                    |_| None,
                    0.0,
                )
            };
            let whole = draw(0..4);
            let parts: Vec<Raster> = (0..4).map(|t| draw(t..t + 1)).collect();
            for pixel in 0..whole.cover.len() {
                let sum: f32 = parts.iter().map(|p| p.cover[pixel]).sum();
                assert_eq!(sum.to_bits(), whole.cover[pixel].to_bits(), "{k} {pixel}");
            }
            let area: f64 = whole.cover.iter().map(|c| f64::from(*c)).sum();
            let true_area = (92.5 - low) * (90.25 - low);
            assert!((area / true_area - 1.0).abs() < 2e-3, "{area} {true_area}");
        }
    }

    #[test]
    fn the_nearer_triangle_hides_the_farther_one_in_any_order() {
        let at = |deep: f64| [[0.0, 0.0, deep], [200.0, 0.0, deep], [0.0, 200.0, deep]];
        for depths in [[1.0, 2.0], [2.0, 1.0]] {
            let nearer = if depths[0] > depths[1] { 0 } else { 1 };
            let colour = |f: &Fragment| {
                if f.triangle == nearer {
                    [1.0; 3]
                } else {
                    [0.0; 3]
                }
            };
            let raster = draw((64, 64), 2, |t| at(depths[t]), colour, |_| None, 0.0);
            assert!(raster.colours.iter().all(|c| c[0] > 0.999));
        }
    }
}
