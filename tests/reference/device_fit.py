"""Reference values for the fits of a device: SciPy's searches, polished and differentiated in 40-digit arithmetic; statsmodels for
the straight line and for Huber's estimate of it.

Writes tests/published/device_fit.toml. Run from tests/reference/.
The models are written again from their formulas; the series resistance is solved by bisection in 40 digits.
"""

import math

import lmfit
import mpmath as mp
import numpy as np
import scipy
import statsmodels
import statsmodels.api as sm
from scipy.optimize import brentq, least_squares
from scipy.stats import norm, t

from cases import write

mp.mp.dps = 40


def miller_current(p, volt, dark, num):
    """I = I1 M with M = 1/(1 - ((V - (I_dark + M I1) R)/V_B)^n): the root in the junction's voltage."""
    breakdown, n, ohm, unity = p

    def excess(junction):
        return junction + (dark + unity / (1 - (junction / breakdown) ** n)) * ohm - volt

    if num is float:
        top = min(volt, breakdown * (1 - 1e-15))
        junction = volt if ohm == 0 else brentq(excess, 1e-9, top, xtol=1e-15, rtol=1e-15)
        return unity / (1 - (junction / breakdown) ** n)
    guess = mp.mpf(miller_junction([float(x) for x in p], float(volt), float(dark)))
    junction = volt if ohm == 0 else mp.findroot(excess, (guess, guess * (1 + mp.mpf(10) ** -9)), tol=mp.mpf(10) ** -60)
    return unity / (1 - (junction / breakdown) ** n)


def miller_junction(p, volt, dark):
    breakdown, n, ohm, unity = p
    top = min(volt, breakdown * (1 - 1e-15))
    return brentq(lambda j: j + (dark + unity / (1 - (j / breakdown) ** n)) * ohm - volt, 1e-9, top, xtol=1e-15, rtol=1e-15)


def polished(residual, start, count):
    """Gauss and Newton in 40 digits until nothing moves, and (J'J)^-1 there."""
    p = [mp.mpf(float(x)) for x in start]
    for _ in range(60):
        r = mp.matrix([residual(p, i) for i in range(count)])
        J = mp.matrix(count, len(p))
        for j in range(len(p)):
            h = abs(p[j]) * mp.mpf(10) ** -14
            up, down = list(p), list(p)
            up[j] += h
            down[j] -= h
            for i in range(count):
                J[i, j] = (residual(up, i) - residual(down, i)) / (2 * h)
        step = mp.lu_solve(J.T * J, -(J.T * r))
        p = [a + b for a, b in zip(p, step)]
        if max(abs(s / a) for s, a in zip(step, p)) < mp.mpf(10) ** -22:
            break
    else:
        raise RuntimeError("does not come to rest")
    r = mp.matrix([residual(p, i) for i in range(count)])
    return p, (J.T * J) ** -1, sum(x * x for x in r)


def outcome(names, p, inverse, squares, count, known):
    """Values, standard uncertainties, 95 % intervals and correlations, with s^2 from the residuals unless it is known."""
    freedom = count - len(p)
    s2 = mp.mpf(1) if known else squares / freedom
    factor = norm.ppf(0.975) if known else t.ppf(0.975, freedom)
    out = {}
    for j, name in enumerate(names):
        u = mp.sqrt(inverse[j, j] * s2)
        out[name] = float(p[j])
        out[name + "_standard"] = float(u)
        out[name + "_interval"] = [float(p[j] - factor * u), float(p[j] + factor * u)]
    pairs = [(i, j) for i in range(len(p)) for j in range(i + 1, len(p))]
    out["correlations"] = [float(inverse[i, j] / mp.sqrt(inverse[i, i] * inverse[j, j])) for i, j in pairs]
    out["residual_deviation"] = float(mp.sqrt(squares / freedom))
    if not known:
        out["degrees_of_freedom"] = float(freedom)
    return out


FIT = "SciPy %s least_squares, polished in mpmath %s with 40 digits; tests/reference/device_fit.py" % (scipy.__version__, mp.__version__)
SEVEN = {"relative": 1e-8, "why": "parameters are found to about 1e-10 of their uncertainty, uncertainties to the rounding of the slopes"}


def case(name, measurements, expect, source=FIT, tolerance=SEVEN):
    return {"name": name, "source": source, "kind": "independent", "compute": "device_fit",
            "input": {"bench": {"measurements": measurements}}, "expect": expect, "tolerance": tolerance}


def currents(seed, truth, volts, dark, noise):
    rng = np.random.default_rng(seed)
    rows = []
    for volt in volts:
        photo = miller_current(truth, volt, dark, float) * (1 + noise * rng.standard_normal())
        rows.append((float(volt), float("%.6g" % dark), float("%.6g" % (photo + dark))))
    return rows


def iv_case(name, seed, truth, volts, dark=2e-9, noise=0.004, unity_v=None, standard=None):
    rows = currents(seed, truth, volts, dark, noise)
    points = [{"bias_v": v, "dark_a": d, "light_a": a} for v, d, a in rows]
    if standard:
        for point in points:
            point["standard_a"] = float("%.3g" % (standard * point["light_a"]))
    measurements = {"iv": {"points": points}}
    names = ["breakdown_v", "miller_exponent", "series_resistance_ohm", "unity_gain_current_a"]
    fixed = None
    if unity_v is not None:
        measurements["unity_gain_v"] = unity_v
        fixed = next(a - d for v, d, a in rows if v == unity_v)
        points = [point for point in points if point["bias_v"] >= unity_v]

    def model(p, point, num):
        full = list(p) + ([num(fixed)] if fixed is not None else [])
        return miller_current(full, num(point["bias_v"]), num(point["dark_a"]), num)

    def residual(p, i, num=mp.mpf, log=mp.log):
        point = points[i]
        # The program takes the difference in doubles; so does this.
        photo = num(point["light_a"] - point["dark_a"])
        if standard:
            return (model(p, point, num) - photo) / num(point["standard_a"])
        return log(model(p, point, num)) - log(photo)

    start = truth if fixed is None else truth[:3]
    scale = np.array(start)
    first = least_squares(lambda q: [residual(list(q * scale), i, float, math.log) for i in range(len(points))],
                          np.ones(len(start)), xtol=1e-13, ftol=1e-13, gtol=1e-13).x * scale
    p, inverse, squares = polished(residual, first, len(points))
    return case(name, measurements, outcome(names[:len(p)], p, inverse, squares, len(points), bool(standard)))


def bandwidth_rows(seed, count, flat, product, noise, wild=()):
    rng = np.random.default_rng(seed)
    rows = []
    for i, gain in enumerate(np.geomspace(2, 40, count)):
        value = flat / math.sqrt(1 + (gain * flat / product) ** 2) * (1 + noise * rng.standard_normal())
        value *= dict(wild).get(i, 1.0)
        rows.append((float("%.4g" % gain), float("%.5g" % value)))
    return rows


def bandwidth_case():
    rows = bandwidth_rows(5, 12, 6e9, 7e10, 0.02)

    def residual(p, i):
        gain, value = rows[i]
        return mp.log(p[0]) - mp.log(1 + (gain * p[0] / p[1]) ** 2) / 2 - mp.log(value)

    def floats(params):
        flat, product = params["flat"] * 1e9, params["product"] * 1e9
        return [math.log(flat / math.sqrt(1 + (g * flat / product) ** 2) / b) for g, b in rows]

    params = lmfit.Parameters()
    params.add("flat", 5.0, min=0)
    params.add("product", 50.0, min=0)
    found = lmfit.minimize(floats, params, xtol=1e-13, ftol=1e-13)
    start = [found.params["flat"].value * 1e9, found.params["product"].value * 1e9]
    p, inverse, squares = polished(residual, start, len(rows))
    # lmfit's own uncertainties are from differences of the residuals.
    for name, value, j in (("flat", p[0], 0), ("product", p[1], 1)):
        u = float(mp.sqrt(inverse[j, j] * squares / (len(rows) - 2))) / 1e9
        assert abs(found.params[name].stderr / u - 1) < 1e-3, name
    points = [{"gain": g, "bandwidth_hz": b} for g, b in rows]
    expect = outcome(["bandwidth_hz", "gain_bandwidth_hz"], p, inverse, squares, len(rows), False)
    return case("bandwidth-against-gain", {"bandwidth": {"points": points}}, expect,
                FIT.replace("SciPy", "lmfit %s and SciPy" % lmfit.__version__))


def robust_bandwidth_case():
    rows = bandwidth_rows(6, 21, 6e9, 7e10, 0.02, ((4, 0.5), (15, 1.8)))

    def residual(q):
        return np.array([math.log(q[0] * 1e9 / math.sqrt(1 + (g * q[0] / q[1]) ** 2) / b) for g, b in rows])

    q, scale = np.array([6.0, 70.0]), 1.0
    for _ in range(300):
        q = least_squares(residual, q, loss="huber", f_scale=1.345 * scale, xtol=1e-15, ftol=1e-15, gtol=1e-15).x
        scale = float(np.median(np.abs(residual(q))) / norm.ppf(0.75))
    points = [{"gain": g, "bandwidth_hz": b} for g, b in rows]
    return case("bandwidth-with-two-wild-points", {"estimator": "huber", "bandwidth": {"points": points}},
                {"bandwidth_hz": q[0] * 1e9, "gain_bandwidth_hz": q[1] * 1e9, "residual_deviation": scale},
                "SciPy %s least_squares with Huber's loss, its scale from the median in turn; tests/reference/device_fit.py" % scipy.__version__,
                {"relative": 1e-6, "why": "the reference's search stops by differences of the residuals"})


def noise_case(name, seed, k, gains, noise, standard=None):
    rng = np.random.default_rng(seed)
    rows = [(g, float("%.4g" % ((k * g + (1 - k) * (2 - 1 / g)) * (1 + noise * rng.standard_normal())))) for g in gains]
    points = [{"gain": g, "factor": f} for g, f in rows]
    if standard:
        for point in points:
            point["standard"] = standard

    def residual(p, i):
        g, f = mp.mpf(rows[i][0]), rows[i][1]
        model = p[0] * g + (1 - p[0]) * (2 - 1 / g)
        return (model - f) / standard if standard else mp.log(model) - mp.log(f)

    p, inverse, squares = polished(residual, [k], len(rows))
    return case(name, {"noise": {"points": points}},
                outcome(["ionisation_ratio"], p, inverse, squares, len(rows), bool(standard)),
                "Gauss and Newton in mpmath %s with 40 digits; tests/reference/device_fit.py" % mp.__version__)


def breakdown_rows(seed, wild=()):
    rng = np.random.default_rng(seed)
    rows = []
    for i, celsius in enumerate(range(-20, 65, 5)):
        value = 56.4 + 0.11 * (celsius - 22) + 0.02 * rng.standard_normal() + dict(wild).get(i, 0.0)
        rows.append((float(celsius), float("%.6g" % value)))
    return rows


def breakdown_case(robust):
    rows = breakdown_rows(8, ((3, 1.5), (11, -0.9)) if robust else ())
    x, y = np.array([r[0] for r in rows]) - 22, np.array([r[1] for r in rows])
    A = sm.add_constant(x)
    if robust:
        found = sm.RLM(y, A, M=sm.robust.norms.HuberT(1.345)).fit(cov="H1", conv="coefs", tol=1e-14, maxiter=2000)
        how = "statsmodels %s RLM with HuberT(1.345), covariance H1" % statsmodels.__version__
    else:
        found = sm.OLS(y, A).fit()
        how = "statsmodels %s OLS" % statsmodels.__version__
    expect = {"breakdown_by_temperature_v": found.params[0], "breakdown_by_temperature_v_standard": found.bse[0],
              "breakdown_v_per_k": found.params[1], "breakdown_v_per_k_standard": found.bse[1],
              "residual_deviation": found.scale if robust else math.sqrt(found.scale),
              "degrees_of_freedom": float(len(rows) - 2)}
    measurements = {"temperature_c": 22.0, "breakdown": {"points": [{"temperature_c": a, "breakdown_v": b} for a, b in rows]}}
    if robust:
        measurements["estimator"] = "huber"
    return case("breakdown-against-temperature" + ("-with-two-wild-points" if robust else ""), measurements, expect,
                how + "; tests/reference/device_fit.py",
                {"relative": 1e-8, "why": "double arithmetic on both sides, and weights that settle to 1e-12"})


LOW = np.concatenate([np.arange(6, 50, 2.0), np.arange(50, 56, 0.5), [56.0, 56.25, 56.5, 56.75, 57.0]])
BELOW = np.concatenate([np.arange(6, 50, 2.0), np.arange(50, 56, 0.4)])
cases = [
    iv_case("gain-with-series-resistance-beyond-breakdown", 1, [56.4, 2.6, 1e4, 1.1e-6], LOW),
    iv_case("gain-with-chosen-unity", 2, [56.4, 2.6, 2.5e4, 2e-6], LOW, unity_v=8.0),
    iv_case("gain-with-given-uncertainties", 3, [142.0, 1.7, 8e3, 4e-6], np.arange(20, 142, 3.0), noise=0.006, standard=0.006),
    noise_case("noise-of-a-telecom-diode", 4, 0.45, [2.0, 3.0, 5.0, 7.0, 10.0, 14.0, 20.0], 0.02),
    noise_case("noise-with-given-uncertainties", 9, 0.02, [10.0, 20.0, 50.0, 100.0, 150.0], 0.02, standard=0.08),
    bandwidth_case(),
    robust_bandwidth_case(),
    breakdown_case(False),
    breakdown_case(True),
]
write("../published/device_fit.toml", ["Fits of a device from its measurements. Written by tests/reference/device_fit.py."], cases)
