"""Solves an eigenvalue problem on a family of meshes of a sphere.

usage: judge_family.py SUMMARY.json SLACK

The summary is that of `chordwise tessellate --family N -o OUT.vtu --format json`;
the files are beside it. The first eigenvalue of the Laplace-Beltrami operator on a
sphere is 2 / R^2, three times. Linear elements with the cotangent matrix (Pinkall
and Polthier 1993), solved by SciPy's `eigsh` (ARPACK), have to come to it at second
order, and area and volume to theirs, to within SLACK of the order.
"""

import json
import math
import pathlib
import sys

import meshio
import numpy
import scipy.sparse
import scipy.sparse.linalg


def matrices(points, faces):
    """Stiffness and mass of linear elements, and the area and volume."""
    rows, columns, stiffness, mass = [], [], [], []
    corners = points[faces]
    doubled = numpy.linalg.norm(
        numpy.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]), axis=1
    )
    for k in range(3):
        i, j = faces[:, (k + 1) % 3], faces[:, (k + 2) % 3]
        a = corners[:, (k + 1) % 3] - corners[:, k]
        b = corners[:, (k + 2) % 3] - corners[:, k]
        half = (a * b).sum(axis=1) / doubled / 2
        for row, column, sign in ((i, j, -1), (j, i, -1), (i, i, 1), (j, j, 1)):
            rows.append(row)
            columns.append(column)
            stiffness.append(sign * half)
            mass.append(doubled / 24)
    where = (numpy.concatenate(rows), numpy.concatenate(columns))
    shape = (len(points), len(points))
    volume = numpy.einsum("ij,ij->i", corners[:, 0], numpy.cross(corners[:, 1], corners[:, 2]))
    return (
        scipy.sparse.coo_matrix((numpy.concatenate(stiffness), where), shape).tocsc(),
        scipy.sparse.coo_matrix((numpy.concatenate(mass), where), shape).tocsc(),
        doubled.sum() / 2,
        volume.sum() / 6,
    )


def main(arguments):
    if len(arguments) != 2:
        sys.exit(__doc__)
    path, slack = pathlib.Path(arguments[0]), float(arguments[1])
    summary = json.loads(path.read_text())
    sizes, errors, failed = [], {"eigenvalue": [], "area": [], "volume": []}, 0
    for level in summary["levels"]:
        mesh = meshio.read(path.parent / level["file"])
        (block,) = mesh.cells
        middle = (mesh.points.min(axis=0) + mesh.points.max(axis=0)) / 2
        points = mesh.points - numpy.round(middle, 3)
        radius = numpy.linalg.norm(points, axis=1).mean()
        stiffness, mass, area, volume = matrices(points, block.data)
        values = scipy.sparse.linalg.eigsh(
            stiffness, k=4, M=mass, sigma=-0.5 / radius**2, return_eigenvectors=False
        )
        exact = 2 / radius**2
        sizes.append(math.sqrt(4 * area / math.sqrt(3) / len(block.data)))
        found = sorted(values)[1:]
        errors["eigenvalue"].append(abs(sum(found) / 3 / exact - 1))
        errors["area"].append(abs(area / (4 * math.pi * radius**2) - 1))
        errors["volume"].append(abs(volume / (4 / 3 * math.pi * radius**3) - 1))
        if not math.isclose(sizes[-1], level["mean_edge"], rel_tol=1e-9):
            failed += 1
            print(f"FAULT {level['file']}: mean edge {level['mean_edge']}, should be {sizes[-1]}")
    for what, own in errors.items():
        order = math.log(own[0] / own[-1]) / math.log(sizes[0] / sizes[-1])
        steps = [
            math.log(own[k] / own[k + 1]) / math.log(sizes[k] / sizes[k + 1])
            for k in range(len(own) - 1)
        ]
        told = ", ".join(f"{step:.3f}" for step in steps)
        print(f"{what}: errors {own[0]:.3e} to {own[-1]:.3e}, order {order:.3f} ({told})")
        if not abs(order - 2) <= slack:
            failed += 1
            print(f"FAULT {what} does not converge at second order")
    sys.exit(1 if failed else 0)


if __name__ == "__main__":
    main(sys.argv[1:])
