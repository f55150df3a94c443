"""Compares two JSON files: numbers to round-off, everything else exactly.

usage: same_values.py STORED COMPUTED
The entry "scipy", a version, may differ.
"""

import json
import math
import sys


def differ(a, b, place):
    if isinstance(a, dict) and isinstance(b, dict) and a.keys() == b.keys():
        for key in a:
            if key != "scipy":
                yield from differ(a[key], b[key], f"{place}.{key}")
    elif isinstance(a, list) and isinstance(b, list) and len(a) == len(b):
        for at, (x, y) in enumerate(zip(a, b)):
            yield from differ(x, y, f"{place}[{at}]")
    elif isinstance(a, (int, float)) and isinstance(b, (int, float)):
        # Coordinates are of the order of 100.
        if not math.isclose(a, b, rel_tol=1e-13, abs_tol=1e-11):
            yield f"{place}: {a!r} stored, {b!r} computed"
    elif a != b:
        yield f"{place}: {a!r} stored, {b!r} computed"


stored, computed = (json.load(open(name)) for name in sys.argv[1:3])
found = list(differ(stored, computed, ""))
print("\n".join(found[:20]) or "the stored values are SciPy's")
sys.exit(1 if found else 0)
