"""Values of B-spline surfaces and curves by SciPy, for tests/reading_splines.rs.

Run with NumPy and SciPy installed:  python bspline_values.py > bspline_values.json
Rational surfaces are evaluated as four homogeneous splines and divided.
"""

import json

import numpy as np
from scipy.interpolate import BSpline

rng = np.random.default_rng(20)


def surface(net, weights, ku, kv, p, q, u, v):
    homogeneous = np.concatenate([net * weights[..., None], weights[..., None]], axis=2)
    along_u = BSpline(ku, homogeneous, p, axis=0)(u)
    value = BSpline(kv, along_u, q, axis=0)(v)
    return (value[:3] / value[3]).tolist()


def case(name, p, q, ku, kv, rational):
    n, m = len(ku) - p - 1, len(kv) - q - 1
    net = rng.uniform(-100, 100, (n, m, 3)).round(3)
    weights = rng.uniform(0.3, 3, (n, m)).round(3) if rational else np.ones((n, m))
    samples = []
    for u in np.linspace(ku[p], ku[n], 9):
        for v in np.linspace(kv[q], kv[m], 7):
            point = surface(net, weights, np.array(ku, float), np.array(kv, float), p, q, u, v)
            samples.append({"u": u, "v": v, "point": point})
    return {
        "name": name,
        "degree": [p, q],
        "knots": [ku, kv],
        "net": net.tolist(),
        "weights": weights.tolist() if rational else None,
        "samples": samples,
    }


cases = [
    case("clamped bicubic", 3, 3, [0, 0, 0, 0, 1, 2.5, 4, 4, 4, 4], [0, 0, 0, 0, 1, 1, 1, 1], False),
    case("unclamped, degrees 2 and 4", 2, 4, [0, 1, 2, 3, 4.5, 5, 7, 8], [-3, -2, -1, 0, 0.5, 1, 2, 3, 4, 5, 6], False),
    case("double and triple knots", 3, 2, [0, 0, 0, 0, 1, 1, 1, 2, 2, 3, 3, 3, 3], [0, 0, 0, 2, 2, 5, 5, 5], False),
    case("rational", 3, 2, [0, 0, 0, 0, 1, 2, 2, 2, 2], [0, 0, 0, 1, 3, 3, 3], True),
    case("rational, unclamped, degrees 5 and 1", 5, 1, [0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12], [0, 0, 1, 2, 2], True),
]
print(json.dumps({"scipy": __import__("scipy").__version__, "cases": cases}))
