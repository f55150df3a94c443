//! Looks for a place where a mesh is farther from its surface, or the surface
//! from it, than was proved.

use chordwise::bezier::BezierPatch;
use chordwise::mesh::Meshed;
use chordwise::patch_set::PatchSet;
use chordwise::scalar::Point;

use super::atlas::Atlas;
use super::chance::Chance;
use super::soup::Soup;

/// How hard to look.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Effort {
    /// Samples along u and v of every piece.
    pub(crate) grid: u32,
    /// Random samples of every piece.
    pub(crate) random: usize,
    /// Samples along every edge.
    pub(crate) edge: u32,
    /// Samples from which the distance is climbed.
    pub(crate) climbs: usize,
    /// Places of triangles measured against the surface, at most.
    pub(crate) triangles: usize,
    /// Lattice of the surface for the reverse.
    pub(crate) lattice: u32,
}

/// The largest distances that were found.
#[derive(Debug, Clone, Copy, Default)]
pub(crate) struct Found {
    pub(crate) to_mesh: f64,
    pub(crate) to_surface: f64,
}

/// What the measuring itself may be wrong by: some roundings of coordinates.
pub(crate) fn rounding(set: &PatchSet) -> f64 {
    let largest = set
        .pieces()
        .iter()
        .flat_map(|piece| piece.surface.control_points())
        .map(|p| p.coords.amax())
        .fold(0.0, f64::max);
    16.0 * f64::EPSILON * largest
}

/// The mesh as a soup.
pub(crate) fn soup(made: &Meshed) -> Soup {
    let mesh = &made.mesh;
    Soup::new(
        (0..mesh.triangles.len())
            .map(|t| mesh.triangle_corners(t))
            .collect(),
    )
}

/// Measures both ways; a message where a proved figure is exceeded.
pub(crate) fn refute(
    set: &PatchSet,
    made: &Meshed,
    effort: Effort,
    chance: &mut Chance,
) -> Result<Found, String> {
    let slack = rounding(set);
    let soup = soup(made);
    let mut found = Found::default();
    for (index, piece) in set.pieces().iter().enumerate() {
        let (distance, place) = farthest(&piece.surface, &soup, effort, chance);
        found.to_mesh = found.to_mesh.max(distance);
        if distance > made.deviation.to_mesh.proved + slack {
            return Err(format!(
                "piece {index} of patch `{}` at {place:?}: the surface is {distance:e} off the mesh, proved {:e}",
                set.patches()[piece.patch.index()].name,
                made.deviation.to_mesh.proved,
            ));
        }
    }
    let atlas = Atlas::new(set.pieces().iter().map(|p| &p.surface), effort.lattice);
    let proved = made.deviation.to_surface;
    let count = soup.corners().len();
    let measured = effort.triangles.min(4 * count);
    for k in 0..measured {
        let triangle = if measured == 4 * count {
            k / 4
        } else {
            chance.below(count)
        };
        let l = match k % 4 {
            0 => [1.0 / 3.0; 3],
            1 => {
                // The middle of a side.
                let mut l = [0.5; 3];
                l[chance.below(3)] = 0.0;
                l
            }
            _ => chance.barycentric(),
        };
        let [a, b, c] = soup.corners()[triangle];
        let p = Point::from(a.coords * l[0] + b.coords * l[1] + c.coords * l[2]);
        let foot = atlas.foot(&p, proved);
        found.to_surface = found.to_surface.max(foot.distance);
        if foot.distance > proved + slack {
            return Err(format!(
                "triangle {triangle} at {l:?}, place {p:?}: the mesh is {:e} off the surface, proved {proved:e}",
                foot.distance,
            ));
        }
    }
    stated(set, made, &soup, slack)?;
    Ok(found)
}

/// The attained figure is a true distance at the place it names.
fn stated(set: &PatchSet, made: &Meshed, soup: &Soup, slack: f64) -> Result<(), String> {
    let d = &made.deviation;
    let true_distance = soup.nearest(&d.point).distance;
    if (true_distance - d.to_mesh.attained).abs() > slack {
        return Err(format!(
            "attained is stated as {:e}; the distance there is {true_distance:e}",
            d.to_mesh.attained
        ));
    }
    if d.to_mesh.attained > d.to_mesh.proved {
        return Err(format!("attained above proved: {d:?}"));
    }
    let patch = set
        .patches()
        .iter()
        .find(|patch| patch.name == d.patch)
        .ok_or("attained at a patch that is not there")?;
    let inside = |range: [f64; 2], t: f64| t >= range[0] && t <= range[1];
    let nearest = set.pieces()[patch.pieces.clone()]
        .iter()
        .filter(|piece| inside(piece.u, d.u) && inside(piece.v, d.v))
        .map(|piece| {
            let local = |range: [f64; 2], t: f64| (t - range[0]) / (range[1] - range[0]);
            let s = piece.surface.eval(local(piece.u, d.u), local(piece.v, d.v));
            (s - d.point).norm()
        })
        .fold(f64::INFINITY, f64::min);
    // Parameters pass through the patch's range and back.
    let size = soup
        .corners()
        .iter()
        .flatten()
        .map(|p| (p - soup.corners()[0][0]).norm())
        .fold(0.0, f64::max);
    if nearest > slack + 1e-12 * size {
        return Err(format!("attained is not on the surface by {nearest:e}"));
    }
    Ok(())
}

/// The sample of a surface farthest from the mesh, climbed to the top.
fn farthest(
    surface: &BezierPatch,
    soup: &Soup,
    effort: Effort,
    chance: &mut Chance,
) -> (f64, [f64; 2]) {
    let measure = |[u, v]: [f64; 2]| soup.nearest(&surface.eval(u, v)).distance;
    let at = |k: u32, n: u32| f64::from(k) / f64::from(n.max(2) - 1);
    let mut places: Vec<[f64; 2]> = Vec::new();
    for i in 0..effort.grid {
        for j in 0..effort.grid {
            places.push([at(i, effort.grid), at(j, effort.grid)]);
        }
    }
    for _ in 0..effort.random {
        places.push([chance.unit(), chance.unit()]);
    }
    for k in 0..effort.edge {
        let t = at(k, effort.edge);
        places.extend([[0.0, t], [1.0, t], [t, 0.0], [t, 1.0]]);
    }
    let mut measured: Vec<(f64, [f64; 2])> = places.into_iter().map(|p| (measure(p), p)).collect();
    measured.sort_by(|a, b| b.0.total_cmp(&a.0));
    let mut best = measured[0];
    for &(distance, place) in measured.iter().take(effort.climbs) {
        let (mut top, mut step) = ((distance, place), 0.02);
        while step > 1e-4 {
            let mut moved = false;
            for [x, y] in [[1.0, 0.0], [-1.0, 0.0], [0.0, 1.0], [0.0, -1.0]] {
                let next = [top.1[0] + x * step, top.1[1] + y * step];
                let next = next.map(|t| t.clamp(0.0, 1.0));
                let distance = measure(next);
                if distance > top.0 {
                    top = (distance, next);
                    moved = true;
                }
            }
            if !moved {
                step *= 0.5;
            }
        }
        if top.0 > best.0 {
            best = top;
        }
    }
    best
}
