"""Reference budgets for whole questions, by GTC and by uncertainties.

Writes tests/published/uncertainty.toml. Run from the repository's root. Needs GTC 1.5.1, uncertainties 3.2.3,
SciPy 1.17.1. Nothing of the program is used here: the formulas are written again from their definitions.
"""

import math
import sys

import GTC
import numpy as np
import scipy
import uncertainties
from scipy.interpolate import PchipInterpolator
from scipy.stats import norm, t
from uncertainties import ufloat
from uncertainties.umath import log10

sys.path.insert(0, "tests/reference")
import cases

GTC_SOURCE = f"GTC {GTC.version}, SciPy {scipy.__version__} for the interpolation and Student's t; tests/reference/uncertainty.py"
UNC_SOURCE = f"uncertainties {uncertainties.__version__}, closed form of G. P. Agrawal, Fiber-Optic Communication Systems, ch. 4; tests/reference/uncertainty.py"
CERTIFICATE = [(1310, 0.921, 1.1), (1490, 0.972, 1.2), (1550, 0.986, 1.1), (1570, 0.985, 1.2), (1600, 0.942, 1.6), (1625, 0.781, 2.4)]
X = np.array([row[0] for row in CERTIFICATE], float)
Y = np.array([row[1] for row in CERTIFICATE])
U = Y * np.array([row[2] for row in CERTIFICATE]) / 100 / 2


def certificate(**more):
    points = [{"wavelength_nm": x, "value": y, "expanded_percent": u} for x, y, u in CERTIFICATE]
    return {"form": "responsivity", "coverage_factor": 2, "points": points, **more}


def node_derivatives(at):
    """Of the interpolated value, by each node, by central differences of SciPy's own interpolation."""
    out = []
    for i in range(len(X)):
        step = 1e-6 * Y[i]
        up, down = Y.copy(), Y.copy()
        up[i] += step
        down[i] -= step
        out.append((PchipInterpolator(X, up)(at) - PchipInterpolator(X, down)(at)) / (2 * step))
    return np.array(out)


def certified(at, r):
    """The value at a wavelength with the certificate's uncertainty, points hanging together by r, as GTC sees it."""
    c = node_derivatives(at) * U
    common, own = GTC.ureal(0, 1, label="common"), [GTC.ureal(0, 1) for _ in U]
    value = float(PchipInterpolator(X, Y)(at))
    return value, c, common, own


def watt(dbm):
    return 1e-3 * 10 ** (dbm / 10)


def budget(y, p):
    nu = y.df
    k = norm.ppf(0.5 + p / 2) if math.isinf(nu) else t.ppf(0.5 + p / 2, nu)
    return {"estimate": y.x, "standard": y.u, "coverage_factor": float(k), "expanded": float(k) * y.u,
            **({} if math.isinf(nu) else {"effective_degrees_of_freedom": nu})}


TOLERANCE = {"relative": 2e-8, "why": "the reference's weights are central differences with a step of 1e-6"}
written = []


def add(name, source, question, bench, uncertainty, expect, tolerance=TOLERANCE):
    written.append({"name": name, "source": source, "kind": "independent", "compute": "ask_uncertainty",
                    "input": {"question": question, "bench": bench, "uncertainty": uncertainty}, "expect": expect,
                    "tolerance": tolerance})


# --- a reading, level and wavelength in doubt, with few degrees of freedom ------------------------------------------

def reading(at, r, level, wavelength):
    """Power with the set wavelength's stored value exact."""
    value, c, common, own = certified(at, r)
    slope = float(PchipInterpolator(X, Y).derivative()(at))
    truly = value + slope * wavelength + math.sqrt(r) * float(c.sum()) * common
    for part, z in zip(c, own):
        truly = truly + math.sqrt(1 - r) * float(part) * z
    stored = float(PchipInterpolator(X, Y)(1310))
    return 1e-3 * GTC.pow(10, level / 10) * stored / truly


for at, r in [(1551.7, 1.0), (1612.0, 0.4)]:
    level = GTC.ureal(-30.52, 0.05, 6)
    wavelength = GTC.ureal(0, 0.8 / math.sqrt(3), 3)
    y = reading(at, r, level, wavelength)
    bench = {"source": {"wavelength_nm": at},
             "meter": {"reading_dbm": -30.52, "set_wavelength_nm": 1310, "certificate": certificate(point_correlation=r)}}
    doubts = {"inputs": [
        {"pointer": "/meter/reading_dbm", "standard": 0.05, "degrees_of_freedom": 6},
        {"pointer": "/source/wavelength_nm", "half_width": 0.8, "distribution": "rectangular", "degrees_of_freedom": 3},
    ]}
    add(f"reading-at-{at}-correlation-{r}", GTC_SOURCE, "reading", bench, doubts, budget(y, 0.95))

# --- the same with the level and the wavelength correlated ----------------------------------------------------------

level, wavelength = GTC.ureal(-30.52, 0.05, independent=False), GTC.ureal(0, 0.3, independent=False)
GTC.set_correlation(-0.7, level, wavelength)
y = reading(1612.0, 1.0, level, wavelength)
bench = {"source": {"wavelength_nm": 1612.0},
         "meter": {"reading_dbm": -30.52, "set_wavelength_nm": 1310, "certificate": certificate()}}
doubts = {"inputs": [{"pointer": "/meter/reading_dbm", "standard": 0.05},
                     {"pointer": "/source/wavelength_nm", "standard": 0.3}],
          "correlations": [[0, 1, -0.7]], "coverage_probability": 0.99}
expect = {"estimate": y.x, "standard": y.u, "coverage_factor": float(norm.ppf(0.995)), "expanded": float(norm.ppf(0.995)) * y.u}
add("reading-with-correlated-inputs", GTC_SOURCE, "reading", bench, doubts, expect)

# --- repeated readings: mean in watts, s/sqrt(n) --------------------------------------------------------------------

READINGS = [-20.13, -20.15, -20.12, -20.16, -20.14]
mean = GTC.type_a.estimate([watt(dbm) for dbm in READINGS])
bench = {"source": {"wavelength_nm": 1550},
         "meter": {"set_wavelength_nm": 1550, "certificate": {"form": "responsivity", "points": [
             {"wavelength_nm": 1310, "value": 0.921}, {"wavelength_nm": 1550, "value": 0.986}]}}}
bench["meter"]["reading_dbm"] = 10 * math.log10(mean.x / 1e-3)
doubts = {"inputs": [{"pointer": "/meter/reading_dbm", "readings": READINGS}], "coverage_probability": 0.9545}
add("repeated-readings", GTC_SOURCE, "reading", bench, doubts, budget(mean, 0.9545),
    {"relative": 1e-9, "why": "Student's t of the one library against that of the other"})

# --- ratio of two readings of one meter -----------------------------------------------------------------------------

for r in [0.0, 0.9, 1.0]:
    one, two = U[2] / Y[2], U[0] / Y[0]
    common, first, second = GTC.ureal(0, 1), GTC.ureal(0, 1), GTC.ureal(0, 1)
    at_1550 = Y[2] * (1 + one * (math.sqrt(r) * common + math.sqrt(1 - r) * first))
    at_1310 = Y[0] * (1 + two * (math.sqrt(r) * common + math.sqrt(1 - r) * second))
    y = watt(-20) / watt(-23.5) * (Y[2] / at_1550) / (Y[0] / at_1310)
    bench = {"source": {"wavelength_nm": 1550},
             "meter": {"reading_dbm": -20, "set_wavelength_nm": 1550,
                       "comparison": {"reading_dbm": -23.5, "set_wavelength_nm": 1310, "wavelength_nm": 1310},
                       "certificate": certificate(point_correlation=r)}}
    doubts = {"of": "ratio", "inputs": []}
    expect = {"estimate": y.x, "standard": y.u, "coverage_factor": float(norm.ppf(0.975)), "expanded": float(norm.ppf(0.975)) * y.u}
    # At r = 1 the 1.1 % of both points are the same, and the scale cancels: zero but for a rounding.
    tolerance = {"standard": {"absolute": 1e-12, "why": "the scale cancels"}, "expanded": {"absolute": 1e-11, "why": "the scale cancels"},
                 "estimate": {"relative": 1e-13, "why": "double arithmetic"}, "coverage_factor": {"relative": 1e-12, "why": "SciPy's normal quantile"}}
    add(f"ratio-of-two-readings-correlation-{r}", GTC_SOURCE, "reading", bench, doubts, expect, tolerance if r == 1.0 else TOLERANCE)

# --- sensitivity of an avalanche receiver, closed form --------------------------------------------------------------

ELEMENTARY = 1.602176634e-19
TARGET = 1e-9
Q = float(norm.isf(TARGET))
BANDWIDTH = 1.2e9
responsivity, gain, ratio, noise = ufloat(0.9, 0.02), ufloat(10, 0.6), ufloat(0.4, 0.03), ufloat(3e-7, 2.4e-8)
excess = ratio * gain + (1 - ratio) * (2 - 1 / gain)
power = Q / responsivity * (ELEMENTARY * excess * Q * BANDWIDTH + noise / gain)
bench = {"source": {"wavelength_nm": 1550, "format": "nrz"},
         "detector": {"responsivity": {"kind": "value", "a_per_w": 0.9}, "avalanche": {"gain": 10, "ionisation_ratio": 0.4}},
         "amplifier": {"noise": {"kind": "rms", "current_a": 3e-7}, "noise_bandwidth_hz": BANDWIDTH},
         "decision": {"target_error_ratio": TARGET, "threshold": "q"}}
doubts = {"inputs": [
    {"pointer": "/detector/responsivity/a_per_w", "standard": 0.02},
    {"pointer": "/detector/avalanche/gain", "standard": 0.06, "relative": True},
    {"pointer": "/detector/avalanche/ionisation_ratio", "standard": 0.03},
    {"pointer": "/amplifier/noise/current_a", "expanded": 0.16, "coverage_factor": 2, "relative": True},
]}
parts = [abs(part) for part in (power.derivatives[variable] * variable.s for variable in (responsivity, gain, ratio, noise))]
expect = {"estimate": power.n, "standard": power.s, "contributions": parts}
add("avalanche-sensitivity-in-watts", UNC_SOURCE, "sensitivity", bench, doubts, expect,
    {"relative": 1e-8, "why": "the program's sensitivities are extrapolated differences of a root found to 1e-14"})
level = 10 * log10(power / 1e-3)
add("avalanche-sensitivity-in-dbm", UNC_SOURCE, "sensitivity", bench, {"of": "average_power_dbm", **doubts},
    {"estimate": level.n, "standard": level.s},
    {"relative": 1e-8, "why": "the program's sensitivities are extrapolated differences of a root found to 1e-14"})


original = cases.text
cases.text = lambda value: ("true" if value else "false") if isinstance(value, bool) else original(value)
cases.write("tests/published/uncertainty.toml", ["Budgets of whole questions. Written by tests/reference/uncertainty.py."], written)
