"""Makes tests/published/pchip.toml from SciPy's PchipInterpolator.

Run in this folder: python3 pchip.py     (SciPy 1.17.1, NumPy 2.4.6)
"""

import numpy as np
import scipy
from scipy.interpolate import PchipInterpolator

from cases import write

TABLES = {
    "two-points": ([1.0, 3.0], [2.0, -1.0]),
    "three-points-rising": ([0.0, 1.0, 3.0], [0.0, 2.0, 3.0]),
    "three-points-turning": ([0.0, 1.0, 3.0], [1.0, 3.0, 0.5]),
    "end-slope-set-to-zero": ([0.0, 1.0, 1.5, 3.0], [0.0, 0.1, 2.0, 2.5]),
    "end-slope-limited-to-three": ([0.0, 3.0, 3.5, 5.0, 5.5], [0.0, 1.0, -4.0, -1.0, -1.5]),
    "plateau-inside": ([0.0, 1.0, 2.0, 3.0, 4.0, 6.0], [0.0, 1.0, 1.0, 1.0, 3.0, 3.5]),
    "plateau-at-both-ends": ([0.0, 1.0, 2.0, 4.0, 5.0], [1.0, 1.0, 2.0, 3.0, 3.0]),
    "zigzag": ([-3.0, -1.0, 0.5, 1.0, 4.0, 4.5], [1.0, -2.0, 3.0, -1.0, 0.5, 0.25]),
    "certificate-like": (
        [850.0, 980.0, 1310.0, 1490.0, 1550.0, 1625.0],
        [0.21, 0.43, 0.885, 0.992, 1.031, 1.018],
    ),
}


def places(x):
    inner = [a + (b - a) * share for a, b in zip(x, x[1:]) for share in (0.0, 0.125, 0.5, 0.8)]
    return inner + [x[-1]]


def weights(x, y, at):
    """Central differences with two steps, extrapolated: error of order step**4, so about 1e-10 here."""
    rows = np.zeros((len(at), len(y)))
    for i in range(len(y)):

        def difference(step):
            up, down = np.array(y), np.array(y)
            up[i] += step
            down[i] -= step
            return (PchipInterpolator(x, up)(at) - PchipInterpolator(x, down)(at)) / (2 * step)

        step = 1e-3
        rows[:, i] = (4 * difference(step / 2) - difference(step)) / 3
    return rows


cases = []
for name, (x, y) in TABLES.items():
    curve, at = PchipInterpolator(x, y), places(x)
    source = "SciPy %s, scipy.interpolate.PchipInterpolator; tests/reference/pchip.py" % scipy.__version__
    given = {"x": x, "y": y, "at": at}
    scale = max(abs(v) for v in y)
    cases.append(
        {
            "name": name,
            "source": source,
            "kind": "independent",
            "compute": "pchip",
            "input": given,
            "expect": {"value": [float(v) for v in curve(at)], "slope": [float(v) for v in curve(at, 1)]},
            "tolerance": {"absolute": 2e-14 * scale, "why": "two double computations in another order of operations"},
        }
    )
    if "plateau" in name:
        continue  # at a kink there is no derivative to difference; the weights there are checked by their sum
    cases.append(
        {
            "name": name + "-weights",
            "source": source + ", differenced in each y",
            "kind": "independent",
            "compute": "pchip",
            "input": given,
            "expect": {"weights": [float(v) for v in weights(x, y, at).ravel()]},
            "tolerance": {"absolute": 1e-8, "why": "truncation of the differences, seen by halving their step"},
        }
    )

x = [7.99, 8.09, 8.19, 8.7, 9.2, 10.0, 12.0, 15.0, 20.0]
y = [0.0, 2.76429e-5, 4.37498e-2, 0.169183, 0.469428, 0.943740, 0.998636, 0.999919, 0.999994]
at = [8.0, 8.15, 8.5, 9.0, 9.5, 11.0, 13.0, 18.0]
cases.append(
    {
        "name": "nine-points-of-fritsch-and-carlson",
        "source": "points: F. N. Fritsch, R. E. Carlson, SIAM J. Numer. Anal. 17, 238 (1980), set RPN 14, from memory; "
        "values: SciPy %s (Fritsch-Butland slopes), tests/reference/pchip.py" % scipy.__version__,
        "kind": "independent",
        "compute": "pchip",
        "input": {"x": x, "y": y, "at": at},
        "expect": {"value": [float(v) for v in PchipInterpolator(x, y)(at)]},
        "tolerance": {"relative": 1e-12, "why": "double computations in another order; the first value is small beside y"},
    }
)

write(
    "../published/pchip.toml",
    ["A shape-preserving curve through a table, against SciPy. Written by tests/reference/pchip.py."],
    cases,
)
