//! Wavefront OBJ. Numbers are the shortest decimals that read back as the same
//! double. A panel is an object (`o`), a patch a group (`g`) with its full
//! name; white space, control characters, `#` and `%` in names are
//! percent-encoded. Points are shared by index across everything, normals have
//! indices of their own, so a crease costs no point. A mesh with evidence has
//! the patch's own (u, v) of every corner as texture coordinates (`vt`), in the
//! order of the corners.

use std::io::Write;

use super::names::Encoded;
use super::normals::Normals;
use super::sink::Sink;
use super::{FormatError, Layout, Written, panels};
use crate::mesh::Mesh;

pub(super) fn write(
    mesh: &Mesh,
    layout: Layout,
    out: &mut dyn Write,
) -> Result<Written, FormatError> {
    let normals = Normals::of(mesh);
    let shared = layout != Layout::Triangles;
    let mut sink = Sink::new(out);
    writeln!(sink, "# chordwise {}", env!("CARGO_PKG_VERSION"))?;
    writeln!(sink, "# set {}", Encoded::line(&mesh.name))?;
    writeln!(sink, "# unit {}", mesh.unit)?;
    if shared {
        for p in &mesh.points {
            writeln!(sink, "v {:?} {:?} {:?}", p.x, p.y, p.z)?;
        }
        for (v, _) in (0_u32..).zip(&mesh.vertices) {
            normal(&mut sink, &normals, v)?;
        }
    }
    let (mut corner, mut places) = (0_u64, 0_u64);
    for (name, parts) in panels(mesh) {
        writeln!(sink, "o {}", Encoded::word(name))?;
        for (_, part) in parts {
            writeln!(sink, "g {}", Encoded::word(&part.name))?;
            for t in part.triangles.clone() {
                let corners = mesh.triangles[t];
                let indices = if shared {
                    corners.map(|v| (mesh.vertices[v as usize].point.into(), u64::from(v)))
                } else {
                    for p in mesh.triangle_corners(t) {
                        writeln!(sink, "v {:?} {:?} {:?}", p.x, p.y, p.z)?;
                    }
                    for v in corners {
                        normal(&mut sink, &normals, v)?;
                    }
                    corner += 3;
                    [corner - 3, corner - 2, corner - 1].map(|i| (i, i))
                };
                // Indices count from one.
                let [[a, n], [b, m], [c, o]] = indices.map(|(p, n)| [p + 1, n + 1]);
                if let Some(evidence) = &mesh.evidence {
                    for [u, v] in evidence[t] {
                        writeln!(sink, "vt {u:?} {v:?}")?;
                    }
                    let [r, s, t] = [1, 2, 3].map(|k| places + k);
                    places += 3;
                    writeln!(sink, "f {a}/{r}/{n} {b}/{s}/{m} {c}/{t}/{o}")?;
                } else {
                    writeln!(sink, "f {a}//{n} {b}//{m} {c}//{o}")?;
                }
            }
        }
    }
    Ok(Written {
        bytes: sink.finish()?,
        file_vertices: if shared {
            mesh.points.len() as u64
        } else {
            corner
        },
        layout,
        rounding: 0.0,
    })
}

fn normal(sink: &mut Sink<'_>, normals: &Normals<'_>, vertex: u32) -> std::io::Result<()> {
    let n = normals.get(vertex);
    writeln!(sink, "vn {:?} {:?} {:?}", n.x, n.y, n.z)
}
