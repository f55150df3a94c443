"""Reads mesh files with trimesh and meshio and compares them with a summary.

usage: judge_mesh.py (MESH SUMMARY.json)...

A summary has the fields of `chordwise tessellate --format json`: triangles,
vertices, file_vertices, area, volume (or null), closed, unit. Where it has
panels (a list of names), euler, components or touching too, these are compared
as well. Points are merged only where all their bits are equal; where parts of a
mesh touch in a point, that makes one point of two, which `touching` counts. The arrays
of VTU files are worked out anew, as far as the file itself allows.
"""

import json
import math
import pathlib
import sys
import tempfile
import urllib.parse

import meshio
import numpy
import scipy.sparse
import trimesh

METRES = {"m": 1.0, "cm": 0.01, "mm": 0.001, "in": 0.0254}
# Relative to the figure: doubles to round-off, singles to what they can hold.
DOUBLE, SINGLE = 1e-9, 1e-4


class Faults(Exception):
    """What is wrong with a file."""


def by_trimesh(path):
    """Points, triangles, and names by node where the format has nodes."""
    loaded = trimesh.load(path, process=False)
    names, merges = None, False
    if isinstance(loaded, trimesh.Scene):
        # White space in the names of solids is percent-encoded.
        names = sorted(map(urllib.parse.unquote, loaded.graph.nodes_geometry))
        loaded = loaded.to_mesh()
        # It merges the points of several solids itself.
        merges = path.suffix == ".stl"
    points = numpy.asarray(loaded.vertices)
    # It splits the points of an OBJ file where normals differ: count them there.
    stored = points_of_obj(path) if path.suffix == ".obj" else len(points)
    if merges:
        stored = 3 * len(loaded.faces)
    return points, numpy.asarray(loaded.faces), stored, names


def points_of_obj(path):
    with path.open() as lines:
        return sum(line.startswith("v ") for line in lines)


def by_meshio(path):
    """meshio takes the normals of an OBJ file for one a point, and refuses the
    file where a crease has two: it gets the file without its normals."""
    if path.suffix == ".obj":
        with tempfile.TemporaryDirectory() as folder, path.open() as lines:
            plain = pathlib.Path(folder) / path.name
            plain.write_text("".join(l for l in lines if not l.startswith("vn ")))
            mesh = meshio.read(plain)
    else:
        mesh = meshio.read(path)
    triangles = [block.data for block in mesh.cells if block.type == "triangle"]
    faces = numpy.vstack(triangles)
    # It merges the points of an STL file itself.
    stored = 3 * len(faces) if path.suffix == ".stl" else len(mesh.points)
    return numpy.asarray(mesh.points), faces, stored, None


def without_joints(faces):
    """Drops what joins two strips: triangles with a repeated index."""
    a, b, c = faces.T
    return faces[(a != b) & (b != c) & (c != a)]


def merged(points, faces):
    """Merges points whose bits are equal."""
    points = numpy.ascontiguousarray(points) + 0.0
    _, first, number = numpy.unique(
        points.view(numpy.uint64 if points.dtype == numpy.float64 else numpy.uint32),
        axis=0,
        return_index=True,
        return_inverse=True,
    )
    return points[first], number.reshape(-1)[faces]


def is_closed(faces):
    """Whether every edge is run exactly once in each direction."""
    start = faces.astype(numpy.int64).reshape(-1)
    end = numpy.roll(faces, -1, axis=1).astype(numpy.int64).reshape(-1)
    count = start.max() + 1
    forward, uses = numpy.unique(start * count + end, return_counts=True)
    backward = numpy.sort(end * count + start)
    return bool((uses == 1).all() and numpy.array_equal(forward, backward))


def shape(points, faces):
    """The measures of the Verdict report (SAND2007-1751), by the array."""
    corners = points[faces]
    sides = [corners[:, (k + 1) % 3] - corners[:, k] for k in range(3)]
    lengths = numpy.stack([numpy.linalg.norm(s, axis=1) for s in sides])
    doubled = numpy.linalg.norm(numpy.cross(sides[0], sides[1]), axis=1)
    longest, shortest = lengths.max(axis=0), lengths.min(axis=0)
    inradius = doubled / lengths.sum(axis=0)
    circumradius = lengths.prod(axis=0) / (2 * doubled)
    dots = [-(sides[k] * sides[(k + 2) % 3]).sum(axis=1) for k in range(3)]
    angles = numpy.degrees(numpy.stack([numpy.arctan2(doubled, d) for d in dots]))
    products = numpy.stack([lengths[k] * lengths[(k + 1) % 3] for k in range(3)])
    return {
        "minimum_angle": angles.min(axis=0),
        "maximum_angle": angles.max(axis=0),
        "aspect_ratio": longest / (2 * math.sqrt(3) * inradius),
        "radius_ratio": circumradius / (2 * inradius),
        "scaled_jacobian": 2 / math.sqrt(3) * doubled / products.max(axis=0),
        "edge_ratio": longest / shortest,
        "shape": 2 * math.sqrt(3) * doubled / (lengths**2).sum(axis=0),
    }


def judge_arrays(path, summary):
    """What a VTU file has besides points and triangles."""
    mesh = meshio.read(path)
    faults = []

    def holds(what, is_so):
        if not is_so:
            faults.append(what)

    (block,) = mesh.cells
    cells = {name: data for name, (data,) in mesh.cell_data.items()}
    for name, data in [*cells.items(), *mesh.point_data.items()]:
        holds(f"{name} is finite", numpy.isfinite(data).all())
    # Needles have lost digits wherever one begins.
    for name, meant in shape(mesh.points, block.data).items():
        holds(f"{name} is what it is", numpy.allclose(cells[name], meant, rtol=1e-6, atol=1e-7))
    lengths = numpy.linalg.norm(mesh.point_data["normal"], axis=1)
    holds("normals are of unit length", numpy.allclose(lengths, 1, rtol=1e-12))
    names = {
        name: bytes(mesh.field_data[name]).decode().splitlines()
        for name in ("unit", "panel_names", "patch_names")
    }
    holds("the unit is the summary's", names["unit"] == [summary["unit"]])
    for kind in ("panel", "patch"):
        numbers = cells[kind]
        named = names[f"{kind}_names"]
        holds(f"{kind}: every number has a name", numbers.max() < len(named) and numbers.min() >= 0)
    pairs = numpy.stack([mesh.point_data["panel"], mesh.point_data["node"]])
    holds("every node has a name of its own", len(numpy.unique(pairs, axis=1).T) == len(mesh.points))
    pairs = numpy.stack([cells["panel"], cells["element"]])
    holds("every element has a name of its own", len(numpy.unique(pairs, axis=1).T) == len(block.data))
    if "deviation" in summary:
        holds("all patches are there", len(names["patch_names"]) == summary["patches"])
        # Two proofs, of which either may be the closer one; sized meshes have one, and
        # need not have a chord.
        most = cells["proved_deviation"].max()
        bound = summary["chord"] or summary["deviation"]["proved"]
        holds("every deviation is within the chord", 0 < most <= bound)
        holds("there are curvatures", mesh.point_data["principal_curvatures"].shape[1] == 2)
        high, low = mesh.point_data["principal_curvatures"].T
        holds("the larger curvature is first", (high >= low).all())
    if faults:
        raise Faults(f"{path} read by meshio: " + "; ".join(f"it is not so that {f}" for f in faults))
    print(f"{path.name}: all {len(cells)} + {len(mesh.point_data)} arrays are as they should be")


def judge(reader, read, path, summary):
    scale = METRES[summary["unit"]] if path.suffix == ".glb" else 1.0
    near = SINGLE if path.suffix in (".glb", ".stl") else DOUBLE
    points, faces, stored, names = read(path)
    faces = without_joints(faces)
    faults = []

    def equal(what, found, meant):
        if found != meant:
            faults.append(f"{what} is {found}, should be {meant}")

    def close(what, found, meant):
        if not math.isclose(found, meant, rel_tol=near):
            faults.append(f"{what} is {found!r}, should be {meant!r}")

    equal("the number of triangles", len(faces), summary["triangles"])
    equal("the number of stored vertices", stored, summary["file_vertices"])
    if names is not None and "panels" in summary and isinstance(summary["panels"], list):
        equal("the list of nodes", names, sorted(summary["panels"]))
    points, faces = merged(points, faces)
    touching = summary.get("touching", 0)
    equal("the number of points once merged", len(points), summary["vertices"] - touching)
    mesh = trimesh.Trimesh(points, faces, process=False)
    close("the area", mesh.area, summary["area"] * scale**2)
    equal("closed", is_closed(faces), summary["closed"])
    if summary["closed"]:
        equal("trimesh's watertight", bool(mesh.is_watertight), True)
        equal("trimesh's consistent winding", bool(mesh.is_winding_consistent), True)
        close("the volume", mesh.volume, summary["volume"] * scale**3)
        equal("the euler number", mesh.euler_number, len(points) - len(faces) // 2)
    if "euler" in summary:
        equal("the euler number", mesh.euler_number, summary["euler"] - touching)
    if "components" in summary:
        pairs = mesh.face_adjacency
        graph = scipy.sparse.coo_matrix(
            (numpy.ones(len(pairs)), (pairs[:, 0], pairs[:, 1])), (len(faces), len(faces))
        )
        found = scipy.sparse.csgraph.connected_components(graph, directed=False)[0]
        equal("the number of components", found, summary["components"])
    if faults:
        raise Faults(f"{path} read by {reader}: " + "; ".join(faults))
    print(f"{path.name}: {reader} agrees, {len(faces)} triangles, {len(points)} points")


def main(arguments):
    if not arguments or len(arguments) % 2:
        sys.exit(__doc__)
    failed = 0
    for path, summary in zip(arguments[::2], arguments[1::2]):
        path = pathlib.Path(path)
        summary = json.loads(pathlib.Path(summary).read_text())
        readers = [("trimesh", by_trimesh)]
        if path.suffix == ".vtu":
            readers = [("meshio", by_meshio)]
        elif path.suffix != ".glb":
            readers.append(("meshio", by_meshio))
        for name, read in readers:
            try:
                judge(name, read, path, summary)
                if path.suffix == ".vtu":
                    judge_arrays(path, summary)
            except Faults as faults:
                failed += 1
                print(f"FAULT {faults}")
    sys.exit(1 if failed else 0)


if __name__ == "__main__":
    main(sys.argv[1:])
