"""The smallest moves that make one seam of two bicubics tangent, by SciPy, for
tests/mend.rs.

Run with NumPy and SciPy installed:  python mended_seam.py > mended_seam.json
The sum of squares of all moves of control points is minimised under two conditions:
the boundary points are equal, and the determinant det(A1, T, A2), of degree 8,
vanishes in nine places. Each round takes the smallest moves in all that meet the
conditions made linear (scipy.linalg.lstsq).
"""

import json

import numpy as np
from scipy.interpolate import BPoly
from scipy.linalg import lstsq

u, v = np.meshgrid(np.arange(4) / 3, np.arange(4) / 3, indexing="ij")


def net(x, slope, far, gap):
    """A bicubic net beside the line x = 0, its row `far` bent down."""
    across = x + 60 * u
    along = 80 * v + 2 * u * v
    height = 6 * np.sin(2 * v + 0.3) + slope * across * (0.4 + v) - 3 * (u == far)
    return np.stack([across + gap * (1 - u) * (1 + v), along, height + gap * (1 - u)], axis=-1)


left = net(-60.0, 0.01, 0.0, 0.0)
right = net(0.0, 0.014, 1.0, 0.018)
right[..., 1] += 2 * v  # as the left one at its seam
nets = np.round(np.stack([left, right]), 6)
places = np.linspace(0, 1, 9)


def value(points, t):
    return BPoly(points[:, None, :], [0, 1])(t)


def conditions(flat):
    moved = nets.copy()
    rows = flat.reshape(2, 2, 4, 3)
    moved[0, 3] += rows[0, 0]
    moved[0, 2] += rows[0, 1]
    moved[1, 0] += rows[1, 0]
    moved[1, 1] += rows[1, 1]
    gap = (moved[0, 3] - moved[1, 0]).ravel()
    a1 = value(moved[0, 3] - moved[0, 2], places)
    a2 = value(moved[1, 1] - moved[1, 0], places)
    t = value(np.diff(moved[0, 3], axis=0), places)
    determinant = np.einsum("ij,ij->i", a1, np.cross(t, a2))
    scale = np.linalg.norm(np.cross(a1, t), axis=1)
    return np.concatenate([gap, determinant / scale])


x = np.zeros(48)
for _ in range(30):
    residual = conditions(x)
    step = 1e-6
    jacobian = np.stack(
        [(conditions(x + step * e) - conditions(x - step * e)) / (2 * step) for e in np.eye(48)], axis=1
    )
    x = lstsq(jacobian, jacobian @ x - residual, cond=1e-7)[0]
# Lengths of 20 across: a sine of 1e-9.
assert np.abs(conditions(x)).max() < 2e-8, conditions(x)
moves = np.linalg.norm(x.reshape(-1, 3), axis=1)
print(json.dumps({
    "scipy": __import__("scipy").__version__,
    "nets": nets.tolist(),
    "sum_of_squares": float(f"{x @ x:.5g}"),
    "largest": float(f"{moves.max():.4g}"),
}))
