"""Reference values for light that is spread over wavelengths: SciPy's PCHIP, integrated by mpmath between all breaks.

Writes tests/published/spectrum.toml. Run from tests/reference/.
Nothing of the program is used here: the averages are written again from their definition.
"""

import math

import mpmath as mp
import numpy as np
import scipy
from scipy.interpolate import PchipInterpolator

from cases import write

mp.mp.dps = 30
SOURCE = "SciPy %s PchipInterpolator, mpmath %s quad; tests/reference/spectrum.py" % (scipy.__version__, mp.__version__)

CERTIFICATE = [(1200, 0.861, 1.4), (1310, 0.921, 1.1), (1490, 0.972, 1.2), (1550, 0.986, 1.1), (1570, 0.985, 1.2),
               (1600, 0.942, 1.6), (1625, 0.781, 2.4), (1650, 0.402, 4.1)]
FACTORS = [(1310, 1.012, 1.1), (1490, 1.004, 1.2), (1550, 0.993, 1.1), (1625, 0.961, 2.4)]
TYPICAL = [(1280, 0.90), (1310, 0.915), (1400, 0.95), (1550, 0.99), (1600, 0.95), (1640, 0.70)]
TABLE = [(1520, -61.5), (1534, -48.0), (1541.5, -31.2), (1549, -20.0), (1552, -23.5), (1563, -38.1), (1577, -60.0)]


class Curve:
    """SciPy's curve with its pieces evaluated in mpmath's digits."""

    def __init__(self, x, y):
        self.x = [mp.mpf(float(v)) for v in x]
        self.pieces = PchipInterpolator(np.array(x, float), np.array(y, float)).c

    def __call__(self, at):
        i = min(max(sum(1 for v in self.x if v <= at) - 1, 0), len(self.x) - 2)
        t = at - self.x[i]
        return sum(mp.mpf(float(c)) * t ** (3 - k) for k, c in enumerate(self.pieces[:, i]))

    def slope(self, at):
        i = min(max(sum(1 for v in self.x if v <= at) - 1, 0), len(self.x) - 2)
        t = at - self.x[i]
        return sum((3 - k) * mp.mpf(float(c)) * t ** (2 - k) for k, c in enumerate(self.pieces[:3, i]))


class Line:
    def __init__(self, centre, fwhm):
        self.centre, self.sigma = mp.mpf(centre), mp.mpf(fwhm) / (2 * mp.sqrt(2 * mp.log(2)))
        self.low, self.high = self.centre - 3 * mp.mpf(fwhm), self.centre + 3 * mp.mpf(fwhm)
        self.breaks = [self.centre + k * self.sigma for k in range(-7, 8)]

    def __call__(self, at):
        return mp.exp(-((at - self.centre) / self.sigma) ** 2 / 2)


class Table:
    def __init__(self, rows, level):
        self.x = [mp.mpf(float(r[0])) for r in rows]
        self.s = [mp.mpf(10) ** (mp.mpf(float(r[1])) / 10 - 3) if level else mp.mpf(float(r[1])) for r in rows]
        self.low, self.high, self.breaks = self.x[0], self.x[-1], self.x

    def __call__(self, at):
        i = min(max(sum(1 for v in self.x if v <= at) - 1, 0), len(self.x) - 2)
        part = (at - self.x[i]) / (self.x[i + 1] - self.x[i])
        return self.s[i] * (1 - part) + self.s[i + 1] * part


def mean(spectrum, of, breaks):
    inner = sorted({b for b in list(spectrum.breaks) + breaks if spectrum.low < b < spectrum.high})
    places = [spectrum.low] + inner + [spectrum.high]
    return mp.quad(lambda x: spectrum(x) * of(x), places) / mp.quad(spectrum, places)


def responsivity(form, rows):
    curve = Curve([r[0] for r in rows], [r[1] for r in rows])
    if form == "responsivity":
        return curve, curve.x, curve
    typical = Curve([r[0] for r in TYPICAL], [r[1] for r in TYPICAL])
    return (lambda x: typical(x) / curve(x)), curve.x + typical.x, typical


def relative_standard(spectrum, form, rows, k, r):
    centre = mean(spectrum, *responsivity(form, rows)[:2])
    parts = []
    for i, (x, y, u) in enumerate(rows):
        step = 1e-5 * y
        moved = []
        for sign in (1, -1):
            changed = list(rows)
            changed[i] = (x, y + sign * step, u)
            moved.append(mean(spectrum, *responsivity(form, changed)[:2]))
        parts.append((moved[0] - moved[1]) / (2 * step) / centre * y * u / 100 / k)
    parts = np.array([float(p) for p in parts])
    return math.sqrt((1 - r) * np.sum(parts**2) + r * np.sum(parts) ** 2)


def points(rows):
    return [{"wavelength_nm": x, "value": y, "expanded_percent": u} for x, y, u in rows]


def case(name, spectrum, source, form, rows, set_nm, r=1.0):
    of, breaks, set_curve = responsivity(form, rows)
    average = mean(spectrum, of, breaks)
    centre = mean(spectrum, lambda x: x, [])
    factor = set_curve(mp.mpf(set_nm)) / average
    single = set_curve(mp.mpf(set_nm)) / of(centre)
    certificate = {"form": form, "coverage_factor": 2, "point_correlation": r, "points": points(rows)}
    meter = {"reading_dbm": -20, "set_wavelength_nm": set_nm, "certificate": certificate}
    if form == "correction_factor":
        meter["typical_curve"] = [{"wavelength_nm": x, "a_per_w": y} for x, y in TYPICAL]
    digits = {"relative": 1e-11, "why": "a cut Gaussian line leaves 1e-12; the rest is double arithmetic"}
    return {
        "name": name,
        "source": SOURCE,
        "kind": "independent",
        "compute": "ask_reading",
        "input": {"bench": {"source": source, "meter": meter}},
        "expect": {
            "correction_factor": factor,
            "responsivity_source_a_per_w": average,
            "centre_wavelength_nm": centre,
            "averaging_percent": (factor / single - 1) * 100,
            "standard_percent": 100 * relative_standard(spectrum, form, rows, 2, r),
        },
        "tolerance": {
            "correction_factor": digits,
            "responsivity_source_a_per_w": digits,
            "centre_wavelength_nm": {"absolute": 1e-9, "why": "double arithmetic at 1550"},
            "averaging_percent": {"absolute": 1e-9, "why": "the difference of two ratios near one, in per cent"},
            "standard_percent": {"relative": 1e-7, "why": "the reference takes differences with a step of 1e-5"},
        },
    }


def line(centre, fwhm):
    return Line(centre, fwhm), {"wavelength_nm": centre, "linewidth_nm": fwhm}


def table(rows, unit):
    given = {"unit": unit, "points": [{"wavelength_nm": x, "value": y} for x, y in rows]}
    return Table(rows, unit == "dbm_per_nm"), {"spectrum": given}


cases = [
    {
        "name": "the-mean-of-a-parabola-is-its-centre-and-half-its-curvature-times-the-variance",
        "source": "analysis: R(centre) + R'' sigma^2/2 = 0.9 - 1e-5 * 20^2 = 0.896",
        "kind": "exact",
        "compute": "mean_of_a_parabola",
        "input": {"centre_nm": 1550, "sigma_nm": 20, "level": 0.9, "slope_per_nm": 2e-3, "curvature_per_nm2": -1e-5},
        "expect": {"mean": [0.896, 0.896], "ratio": 0.896 / 0.9},
        "tolerance": {"absolute": 1e-11, "why": "the line is cut at three times its width, which takes 1.6e-12 of it"},
    },
]
for name, (spectrum, source) in [
    ("laser-line-inside-one-piece", line(1532.3, 0.8)),
    ("laser-line-across-a-point-of-the-certificate", line(1550, 0.8)),
    ("light-emitting-diode-1550", line(1550, 31)),
    ("light-emitting-diode-1420", line(1420, 70)),
    ("steep-edge", line(1624, 8)),
    ("levels", table(TABLE, "dbm_per_nm")),
    ("linear", table([(1502, 0.0), (1511, 0.4), (1530, 1.0), (1558, 0.2), (1601, 0.0)], "w_per_nm")),
]:
    cases.append(case(name, spectrum, source, "responsivity", CERTIFICATE, 1310, r=0.4))
for name, (spectrum, source) in [
    ("factors-laser-line", line(1532.3, 0.8)),
    ("factors-light-emitting-diode", line(1500, 40)),
    ("factors-levels", table(TABLE, "dbm_per_nm")),
]:
    cases.append(case(name, spectrum, source, "correction_factor", FACTORS, 1310, r=0.4))

write(
    "../published/spectrum.toml",
    ["Responsivities averaged over spectra. Written by tests/reference/spectrum.py."],
    cases,
)
