"""Reference values for the transfer calibration: NumPy's least squares in each block, SciPy's Student factors.

Writes tests/published/transfer.toml. Run from tests/reference/.
The drift is fitted by a general solver, not by the closed form; the rest is written again from JCGM 100.
"""

import math

import numpy as np
import scipy
from scipy.interpolate import PchipInterpolator
from scipy.stats import t

from cases import write

SOURCE = "NumPy %s lstsq, SciPy %s t.ppf and PchipInterpolator; tests/reference/transfer.py" % (np.__version__, scipy.__version__)

FACTORS = [(1310, 1.012, 1.1), (1490, 1.004, 1.2), (1550, 0.993, 1.1), (1625, 0.961, 2.4)]
RESPONSIVITY = [(1310, 0.921, 0.8), (1490, 0.972, 0.9), (1550, 0.986, 0.8)]


def readings(seed, wavelengths, blocks, drift_db, noise, levels, timed=False):
    """Rows (wavelength, label, watts, seconds) of A B B A and B A A B blocks in turn; A is the reference."""
    rng = np.random.default_rng(seed)
    rows, second = [], 0.0
    for nm, dut in wavelengths:
        for block in range(blocks):
            for which in ("ABBA", "BAAB")[block % 2]:
                second += float(rng.integers(5, 40)) if timed else 1.0
                light = 1e-5 * 10 ** (drift_db * second / 10)
                shown = light / (dut if which == "B" else 1.0) * (1 + noise * rng.standard_normal())
                shown = float("%.6g" % (10 * math.log10(shown / 1e-3) if levels else shown))
                rows.append((nm, which, shown, second))
    return rows


def text(rows, levels, timed):
    head = "wavelength / nm;meter;reading / %s" % ("dBm" if levels else "W") + (";time / s" if timed else "")
    lines = [head]
    for nm, which, shown, second in rows:
        lines.append("%g;%s;%r" % (nm, which, shown) + (";%r" % second if timed else ""))
    return "\\n".join(lines)


def expected(rows, certificate, form, k_ref, r, levels, timed, probability, others, nu_ref):
    out = {key: [] for key in ("correction_factor", "scatter_percent", "drift_db", "type_a_percent", "reference_percent",
                               "standard_percent", "effective_degrees_of_freedom", "student_factor")}
    for nm in sorted({row[0] for row in rows}):
        own = [row for row in rows if row[0] == nm]
        ratios, drifts = [], []
        for i in range(0, len(own), 4):
            block = own[i:i + 4]
            y = np.array([row[2] * math.log(10) / 10 if levels else math.log(row[2]) for row in block])
            times = np.array([row[3] for row in block]) if timed else np.arange(4.0)
            times = times - times.mean()
            ref = np.array([row[1] == "A" for row in block], float)
            (a, b, d), *_ = np.linalg.lstsq(np.stack([ref, 1 - ref, times], 1), y, rcond=None)
            ratios.append(a - b)
            drifts.append(d)
        n, s = len(ratios), np.std(ratios, ddof=1)
        x = np.array([row[0] for row in certificate], float)
        v = np.array([row[1] for row in certificate])
        u = v * np.array([row[2] for row in certificate]) / 100 / k_ref
        value = float(PchipInterpolator(x, v)(nm))
        c = []
        for i in range(len(x)):
            h = 1e-6 * v[i]
            up, down = v.copy(), v.copy()
            up[i] += h
            down[i] -= h
            c.append(float(PchipInterpolator(x, up)(nm) - PchipInterpolator(x, down)(nm)) / (2 * h))
        parts = np.array(c) * u / value
        reference = math.sqrt((1 - r) * np.sum(parts**2) + r * np.sum(parts) ** 2)
        all_parts = [(s / math.sqrt(n), n - 1), (reference, nu_ref)] + [(p / 100, nu) for _, p, nu in others]
        whole = math.sqrt(sum(p * p for p, _ in all_parts))
        nu = whole**4 / sum(p**4 / nu for p, nu in all_parts)
        out["correction_factor"].append((value if form == "correction_factor" else 1.0) * math.exp(np.mean(ratios)))
        out["scatter_percent"].append(100 * s)
        out["drift_db"].append(10 / math.log(10) * np.mean(drifts))
        out["type_a_percent"].append(100 * s / math.sqrt(n))
        out["reference_percent"].append(100 * reference)
        out["standard_percent"].append(100 * whole)
        out["effective_degrees_of_freedom"].append(nu)
        out["student_factor"].append(t.ppf(0.5 + probability / 2, nu))
    k = max(out["student_factor"])
    out["coverage_factor"] = k
    out["expanded_percent"] = [k * u for u in out["standard_percent"]]
    return {key: [float(v) for v in value] if isinstance(value, list) else float(value) for key, value in out.items()}


def case(name, certificate, form, wavelengths, levels=False, timed=False, r=1.0, probability=0.95, others=(), nu_ref=math.inf,
         blocks=5, seed=1):
    rows = readings(seed, wavelengths, blocks, 0.002 if timed else 0.011, 1.5e-3, levels, timed)
    points = [{"wavelength_nm": x, "value": y, "expanded_percent": u} for x, y, u in certificate]
    choices = {"reference": "A", "date": "2026-11-30", "reference_certificate": "AR-0042", "coverage_probability": probability}
    if others:
        choices["contributions"] = [{"name": n, "standard_percent": p, "degrees_of_freedom": nu} for n, p, nu in others]
    if nu_ref != math.inf:
        choices["reference_degrees_of_freedom"] = nu_ref
    expect = expected(rows, certificate, form, 2, r, levels, timed, probability, others, nu_ref)
    return {
        "name": name,
        "source": SOURCE,
        "kind": "independent",
        "compute": "transfer",
        "input": {
            "text": text(rows, levels, timed),
            "bench": {"meter": {"certificate": {"form": form, "coverage_factor": 2, "point_correlation": r, "points": points}}},
            "choices": choices,
        },
        "expect": expect,
        "tolerance": {"relative": 1e-8, "why": "the reference takes differences with a step of 1e-6, and a general solver"},
    }


# By hand: the light loses exactly 0.01 dB a reading; the reference shows -20.00 and -20.03, the test -20.51 and -20.52
# within: ratio 0.50 dB without drift. The second block is the same at 0.52 dB: mean 0.51 dB, s = 0.02/sqrt(2) dB.
HAND = "\\n".join(["nm;which;dBm", "1550;ref;-20.00", "1550;dut;-20.51", "1550;dut;-20.52", "1550;ref;-20.03",
                   "1550;ref;-20.00", "1550;dut;-20.53", "1550;dut;-20.54", "1550;ref;-20.03"])
db = math.log(10) / 10
hand = {
    "name": "two-blocks-by-hand",
    "source": "by hand: 10^(0.051) = 1.124604...; s = 0.02/sqrt(2) dB, u = s/sqrt(2) = 0.01 dB, u of the reference 1.1/2 %",
    "kind": "exact",
    "compute": "transfer",
    "input": {
        "text": HAND,
        "bench": {"meter": {"certificate": {"form": "responsivity", "coverage_factor": 2,
                                            "points": [{"wavelength_nm": 1550, "value": 0.986, "expanded_percent": 1.1}]}}},
        "choices": {"date": "2026-11-30", "reference_certificate": "AR-0042"},
    },
    "expect": {
        "correction_factor": [10**0.051],
        "drift_db": [-0.01],
        "scatter_percent": [100 * db * 0.02 / math.sqrt(2)],
        "type_a_percent": [100 * db * 0.01],
        "reference_percent": [0.55],
        "standard_percent": [math.hypot(100 * db * 0.01, 0.55)],
    },
    "tolerance": {"relative": 1e-11, "why": "differences of 0.01 dB between levels of 20 dB in double arithmetic"},
}

cases = [
    hand,
    case("watts-at-even-times", FACTORS, "correction_factor", [(1310, 1.031), (1500, 0.988), (1550, 1.002)]),
    case("levels-and-times", FACTORS, "correction_factor", [(1550, 1.031), (1310, 0.94)], levels=True, timed=True, r=0.3, seed=2),
    case("reference-of-responsivities", RESPONSIVITY, "responsivity", [(1490, 1.2), (1521.7, 0.97)], levels=True, seed=3,
         probability=0.9545, others=[("connectors", 0.15, 12.0), ("linearity", 0.1, 50.0)], nu_ref=30.0, blocks=4),
    case("scatter-rules", [(1300, 1.0, 0.01), (1550, 1.0, 0.01)], "correction_factor", [(1550, 1.05)], blocks=3, seed=4),
]
write(
    "../published/transfer.toml",
    ["Detectors compared in turn. Written by tests/reference/transfer.py."],
    cases,
)
