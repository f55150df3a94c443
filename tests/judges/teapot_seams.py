"""Gap, angle and step of curvature along every shared edge of the teapot, by
SciPy's Bernstein polynomials, for tests/seams.rs.

Run with NumPy and SciPy installed:  python teapot_seams.py > teapot_seams.json
The net is read from patches/teapot.ron; edges are shared where their control
points are the same. Each edge is looked at in 101 places, the largest figure
sharpened by Brent's method. Curvatures come from the two fundamental forms,
across the edge, counted towards the outward normal of the first patch.
"""

import json
import re
from pathlib import Path

import numpy as np
from scipy.interpolate import BPoly
from scipy.optimize import minimize_scalar

text = (Path(__file__).parents[2] / "patches" / "teapot.ron").read_text()
text = re.sub(r"//.*", "", text)
listed = text[text.index("points:") : text.index("patches:")]
points = np.array([[float(x) for x in p.split(",")] for p in re.findall(r"\(([^()]*)\)", listed)])
CM = 10.0


class Patch:
    """A bicubic on the unit square, with its derivatives."""

    def __init__(self, name, rows):
        self.name, self.net = name, points[np.array(rows)]

    def derivative(self, i, j):
        """The (i, j)-th derivative as a function of (u, v)."""
        along_u = BPoly(self.net[:, None, :, :], [0, 1])
        along_u = along_u.derivative(i) if i else along_u

        def at(u, v):
            row = along_u(u)
            along_v = BPoly(row[:, None, :], [0, 1])
            return (along_v.derivative(j) if j else along_v)(v)

        return at

    def forms(self, u, v):
        s = {ij: self.derivative(*ij)(u, v) for ij in [(1, 0), (0, 1), (2, 0), (1, 1), (0, 2)]}
        normal = np.cross(s[1, 0], s[0, 1])
        return s, -normal / np.linalg.norm(normal)  # all patches are flipped


SIDES = {
    "U0": lambda t: (0.0, t),
    "U1": lambda t: (1.0, t),
    "V0": lambda t: (t, 0.0),
    "V1": lambda t: (t, 1.0),
}


def edge(net, side):
    return {"U0": net[0], "U1": net[-1], "V0": net[:, 0], "V1": net[:, -1]}[side]


def curvature(patch, side, t, normal):
    """The normal curvature across the edge, towards `normal`."""
    s, own = patch.forms(*SIDES[side](t))
    su, sv = s[1, 0], s[0, 1]
    along = sv if side[0] == "U" else su
    across = np.cross(own, along)
    a, b = np.linalg.lstsq(np.stack([su, sv], axis=1), across, rcond=None)[0]
    second = a * a * s[2, 0] + 2 * a * b * s[1, 1] + b * b * s[0, 2]
    return second @ normal / (across @ across) / CM


def sharpened(f, t):
    """The largest of f near the best of the places t."""
    values = [f(x) for x in t]
    k = int(np.argmax(values))
    bounds = (t[max(k - 1, 0)], t[min(k + 1, len(t) - 1)])
    best = minimize_scalar(lambda x: -f(x), bounds=bounds, method="bounded", options={"xatol": 1e-10})
    return max((values[k], t[k]), (-best.fun, float(best.x)))


def rounded(x, figures):
    return float(f"{x:.{figures}g}") if abs(x) > 1e-7 else 0.0


patches = [
    Patch(name, json.loads(rows))
    for name, rows in re.findall(r'name: "([^"]+)", flip: true, surface: Bezier\(indexed: (\[\[.*?\]\])\)', text)
]
assert len(patches) == 32
found = []
for i, p in enumerate(patches):
    for q in patches[i + 1 :]:
        for a in SIDES:
            for b in SIDES:
                first, second = edge(p.net, a), edge(q.net, b)
                same = np.array_equal(first, second)
                if not same and not np.array_equal(first, second[::-1]):
                    continue
                if np.ptp(first, axis=0).max() == 0:
                    continue  # both collapsed: a pole
                (x, sx), (y, sy) = sorted([(p, a), (q, b)], key=lambda e: (e[0].name, e[1]))
                there = (lambda t: t) if same else (lambda t: 1 - t)

                def angle(t):
                    n, m = x.forms(*SIDES[sx](t))[1], y.forms(*SIDES[sy](there(t)))[1]
                    return np.degrees(np.arctan2(np.linalg.norm(np.cross(n, m)), n @ m))

                def both(t):
                    normal = x.forms(*SIDES[sx](t))[1]
                    return [curvature(x, sx, t, normal), curvature(y, sy, there(t), normal)]

                def step(t):
                    k = both(t)
                    return abs(k[0] - k[1])

                # A pole has no normal of its own.
                t = np.linspace(0, 1, 101)
                t[0], t[-1] = 1e-5, 1 - 1e-5
                gap = max(
                    float(np.linalg.norm(x.derivative(0, 0)(*SIDES[sx](s)) - y.derivative(0, 0)(*SIDES[sy](there(s)))))
                    for s in t
                )
                turn = max(angle(s) for s in t)
                most, at = sharpened(step, t)
                if most < 1e-7:  # rounding: any place would do
                    most, at = 0.0, 0.5
                found.append({
                    "between": [x.name, sx],
                    "and": [y.name, sy],
                    "gap": gap if gap > 5e-15 else 0.0,
                    "angle_deg": rounded(turn, 8) if turn > 2e-6 else 0.0,
                    "curvature_per_mm": rounded(most, 8),
                    "curvatures_per_mm": [rounded(k, 6) for k in both(at)],
                })
found.sort(key=lambda e: (e["between"], e["and"]))
assert len(found) == 52
print(json.dumps({"scipy": __import__("scipy").__version__, "seams": found}, indent=1))
