"""Makes tests/published/bias.toml: gain against bias, excess noise laws, and whole answers about the bias.

Nothing of the program is used. Formulas are written from their definitions in 50-digit arithmetic; slopes are numerical
derivatives; the gain with a series resistance is bisected from its implicit equation; the best gain is where the numerical
derivative of the power is zero. Tables are interpolated by SciPy.

Run in this folder: python3 bias.py     (mpmath 1.3.0, scipy 1.17.1, numpy 2.4.6; about a minute)
"""

import math

import mpmath as mp
import numpy as np
import scipy
from cases import write
from scipy.interpolate import PchipInterpolator
from scipy.optimize import brentq

mp.mp.dps = 50
Q_E = mp.mpf("1.602176634e-19")
SOURCE = "mpmath 1.3.0, 50 digits, from the definitions: tests/reference/bias.py"
MILLER = "S. L. Miller, Phys. Rev. 99, 1234 (1955), the formula; " + SOURCE
SCIPY = "SciPy %s PchipInterpolator and brentq, numpy %s: tests/reference/bias.py" % (scipy.__version__, np.__version__)


def x(value):
    return mp.mpf(repr(value))


def case(name, compute, given, expect, tolerance, source=SOURCE):
    expect = {k: v if isinstance(v, (str, list, tuple)) else float(v) for k, v in expect.items()}
    expect = {k: [float(one) for one in v] if isinstance(v, (list, tuple)) else v for k, v in expect.items()}
    return {
        "name": name,
        "source": source,
        "kind": "independent",
        "compute": compute,
        "input": given,
        "expect": expect,
        "tolerance": tolerance,
    }


# --- Miller's formula, and what lies in series --------------------------------------------------------------------------


def miller(v, v_b, n):
    return 1 / (1 - (v / v_b) ** n)


def held(v, v_b, n, i0, beside, r):
    """The gain that holds itself: bisected in the voltage across the junction."""
    def excess(v_j):
        return v_j + (miller(v_j, v_b, n) * i0 + beside) * r - v

    low, high = mp.mpf(0), v_b
    for _ in range(160):
        middle = (low + high) / 2
        if middle == v_b or excess(middle) > 0:
            high = middle
        else:
            low = middle
    return miller(low, v_b, n)


def millers():
    cases = []
    rows = [(50.0, 60.0, 3.0), (58.0, 60.0, 3.0), (180.0, 200.0, 2.0), (36.0, 40.0, 1.5), (0.6, 60.0, 3.0),
            (59.999, 60.0, 3.0), (30.0, 55.0, 0.5), (390.0, 400.0, 6.5)]
    for v, v_b, n in rows:
        gain = miller(x(v), x(v_b), x(n))
        slope = mp.diff(lambda u: miller(u, x(v_b), x(n)), x(v))
        # Near breakdown one rounding of V counts M·n times.
        digits = {"relative": float(4e-16 * (2 + gain * n)), "why": "one rounding of V/V_B counts M·n times"}
        cases.append(case("miller-%g-of-%g-n-%g" % (v, v_b, n), "miller", {"junction_v": v, "breakdown_v": v_b, "exponent": n},
                          {"gain": gain, "gain_per_v": slope}, {"gain": digits, "gain_per_v": {**digits, "relative": 2 * digits["relative"]}}, MILLER))
    for gain, v_b, n in [(1.0, 60.0, 3.0), (1.000001, 60.0, 3.0), (10.0, 60.0, 3.0), (1000.0, 180.0, 1.7), (12.5, 44.0, 0.5)]:
        v = x(v_b) * (1 - 1 / x(gain)) ** (1 / x(n))
        cases.append(case("voltage-for-gain-%r-n-%g" % (gain, n), "miller_inverse", {"gain": gain, "breakdown_v": v_b, "exponent": n},
                          {"junction_v": v}, {"absolute": 3e-10 if 1 < gain < 1.01 else 1e-13, "why": "a gain near 1 is rounded to 1e-16 of itself, M − 1 to 1e-10"}, MILLER))
    return cases


def series():
    cases = []
    rows = [
        ("published-58", 58.0, 60.0, 3.0, 1e-6, 0.0, 5e3),
        ("published-59.9", 59.9, 60.0, 3.0, 1e-6, 0.0, 5e3),
        ("at-breakdown", 60.0, 60.0, 3.0, 1e-6, 0.0, 5e3),
        ("above-breakdown", 75.0, 60.0, 3.0, 1e-6, 0.0, 5e3),
        ("with-current-beside", 57.3, 55.5, 2.6, 8e-7, 1.5e-8, 1e5),
        ("starved-almost", 1.0, 60.0, 3.0, 1e-3, 0.0, 990.0),
        ("no-resistance", 58.0, 60.0, 3.0, 1e-6, 1e-8, 0.0),
    ]
    for name, v, v_b, n, i0, beside, r in rows:
        args = [x(one) for one in (v_b, n, i0, beside, r)]
        gain = held(x(v), *args)
        h = mp.mpf(10) ** -12
        per_v = (held(x(v) + h, *args) - held(x(v) - h, *args)) / (2 * h)
        per_b = (held(x(v), args[0] + h, *args[1:]) - held(x(v), args[0] - h, *args[1:])) / (2 * h)
        given = {"bias_v": v, "breakdown_v": v_b, "exponent": n, "multiplied_a": i0, "beside_a": beside,
                 "series_resistance_ohm": r, "breakdown_v_per_k": 0.11}
        expect = {"gain": gain, "gain_per_v": per_v, "gain_per_k": per_b * x(0.11), "bias_v": v}
        loss = float(4e-16 * (4 + gain * n))
        why = "one rounding of the voltage counts M·n times; a second one in the slopes"
        if r > 0:
            expect["multiplied_a"] = i0
        tolerance = {"gain": {"relative": loss, "why": why},
                     "gain_per_v": {"relative": 1e-12 + 3 * loss, "why": "reference by differences of 1e-12 V in 50 digits; " + why},
                     "gain_per_k": {"relative": 1e-12 + 3 * loss, "why": "reference by differences of 1e-12 V in 50 digits; " + why},
                     "bias_v": {"relative": 1e-14, "why": "there and back: a few roundings"},
                     "multiplied_a": {"relative": 1e-11, "why": "the drop is a small difference of two voltages"}}
        if name == "starved-almost":
            # Half a millionth of the bias is left for the junction, so its own digits are few.
            few = "the gain is 1 + 5e-12, of which a double keeps four digits: as many as V_j = 0.01 V then has"
            tolerance["bias_v"] = tolerance["multiplied_a"] = {"relative": 1e-8, "why": few}
            tolerance["gain_per_v"] = tolerance["gain_per_k"] = {"relative": 1e-9, "why": "what is left for the junction is a difference of 0.99 V and 1 V, cubed"}
        cases.append(case("series-" + name, "biased_gain", given, expect, {k: tolerance[k] for k in expect}, MILLER))
    # Largest gain at V = V_B to leading order, printed as such: sqrt(V_B/(n I0 R)) = 63.2455532034.
    return cases


GAINS = [(20.0, 1.04), (30.0, 1.19), (38.0, 1.62), (44.0, 2.71), (47.5, 4.4), (50.0, 8.3), (51.5, 15.9), (52.3, 33.0)]
FACTORS = [(2.0, 1.62), (5.0, 2.94), (10.0, 5.2), (20.0, 9.9), (30.0, 14.8)]


def tables():
    cases = []
    v, m = np.array(GAINS).T
    curve = PchipInterpolator(v, 1 / m)
    digits = {"relative": 2e-13, "why": "two orders of the same double arithmetic; 1/M costs M·1e-16"}
    for at in (20.0, 33.3, 49.0, 51.1, 52.3):
        h = 1e-6 if 20.0 < at < 52.3 else 0.0
        slope = -curve(at, 1) / curve(at) ** 2
        cases.append(case("gain-table-at-%g" % at, "gain_table", {"voltages_v": list(v), "gains": list(m), "junction_v": at, "shift_v": 0.0},
                          {"gain": 1 / curve(at), "gain_per_v": slope},
                          {"gain": digits, "gain_per_v": {"relative": 1e-11, "why": "a slope of a table, and the square of the gain"}}, SCIPY))
    for gain, shift in ((1.04, 0.0), (6.0, 0.0), (25.0, -1.3), (33.0, 0.0)):
        at = brentq(lambda u: 1 / curve(u) - gain, v[0], v[-1], xtol=1e-13) if gain not in (1.04, 33.0) else (v[0] if gain == 1.04 else v[-1])
        cases.append(case("voltage-in-gain-table-for-%g" % gain, "gain_table_inverse", {"voltages_v": list(v), "gains": list(m), "gain": gain, "shift_v": shift},
                          {"junction_v": at + shift}, {"absolute": 1e-11, "why": "brentq to 1e-13 of a gain that is good to 1e-14 M"}, SCIPY))
    g, f = np.array(FACTORS).T
    curve = PchipInterpolator(np.log(np.r_[1.0, g]), np.log(np.r_[1.0, f]))
    for at in (1.0, 1.5, 4.0, 10.0, 26.0, 30.0):
        cases.append(case("factor-table-at-%g" % at, "factor_table", {"gains": list(g), "factors": list(f), "gain": at},
                          {"factor": math.exp(curve(math.log(at)))}, digits, SCIPY))
    for at, e in ((10.0, 0.7), (100.0, 0.3), (1.0, 0.7), (37.0, 0.0)):
        cases.append(case("power-law-%g-to-%g" % (at, e), "factor_power", {"gain": at, "exponent": e}, {"factor": x(at) ** x(e)},
                          {"relative": 1e-15, "why": "one power, a few units of the last place"}))
    return cases


def least(power):
    """Where a power that depends on the gain is least."""
    slope = lambda u: mp.diff(lambda w: mp.log(power(mp.exp(w))), u)
    u = mp.findroot(slope, (mp.mpf("0.1"), mp.log(1000)), solver="bisect", maxsteps=150, tol=1e-60, verify=False)
    assert abs(slope(u)) < mp.mpf(10) ** -25, slope(u)
    return mp.exp(u)


def closed_forms():
    cases = []
    for r, e, sigma, b, q in ((1.0, 0.7, 1e-7, 1e9, 6.0), (0.9, 0.3, 5e-7, 5e9, 7.0), (0.8, 1.0, 1e-8, 5e8, 6.0)):
        power = lambda m: x(q) / x(r) * (Q_E * m ** x(e) * x(q) * x(b) + x(sigma) / m)
        best = least(power)
        given = {"responsivity_a_per_w": r, "circuit_noise_a": sigma, "noise_bandwidth_hz": b, "q_factor": q, "exponent": e}
        cases.append(case("best-gain-by-power-%g" % e, "closed_form_by_power", given, {"best_gain": best}, {"relative": 1e-14, "why": "one root of one quotient"}))
    return cases


# --- whole answers ------------------------------------------------------------------------------------------------------


class Receiver:
    """Two levels, optimum or Q threshold, as the formula of the levels is printed."""

    def __init__(self, bench, f):
        self.f = f
        self.r = x(bench["detector"]["responsivity"]["a_per_w"])
        self.bulk = x(bench["detector"].get("dark_current_bulk_a", 0.0))
        self.surface = x(bench["detector"].get("dark_current_surface_a", 0.0))
        self.background = x(bench.get("surroundings", {}).get("background_power_w", 0.0))
        self.circuit = x(bench["amplifier"]["noise"]["current_a"])
        self.b = x(bench["amplifier"]["noise_bandwidth_hz"])
        source = bench["source"]
        self.e = mp.mpf(10) ** (-x(source["extinction_ratio_db"]) / 10) if "extinction_ratio_db" in source else mp.mpf(0)
        self.rin = mp.mpf(10) ** (x(source["rin_db_per_hz"]) / 10) if "rin_db_per_hz" in source else mp.mpf(0)
        self.target = x(bench["decision"]["target_error_ratio"])
        self.rule = bench["decision"]["threshold"]

    def levels(self, m, p):
        one = 2 * p / (1 + self.e)
        for power in (self.e * one, one):
            square = 2 * Q_E * (m**2 * self.f(m) * (self.r * (power + self.background) + self.bulk) + self.surface) * self.b
            square += self.circuit**2 + self.rin * (m * self.r * power) ** 2 * self.b
            yield m * self.r * power, mp.sqrt(square)

    def error_ratio(self, m, p):
        (i0, s0), (i1, s1) = self.levels(m, p)
        d = (s0 * i1 + s1 * i0) / (s0 + s1)
        if self.rule == "q":
            return mp.ncdf(-(i1 - i0) / (s0 + s1))
        # The crossing of the two densities, by Newton's method from the Q threshold.
        log_ratio = lambda d: mp.log(s1 / s0) - ((d - i0) / s0) ** 2 / 2 + ((d - i1) / s1) ** 2 / 2
        d = mp.findroot(log_ratio, d)
        return (mp.ncdf((i0 - d) / s0) + mp.ncdf((d - i1) / s1)) / 2

    def power(self, m):
        ln_off = lambda u: mp.log(self.error_ratio(m, mp.exp(u)) / self.target)
        low, high = mp.log(mp.mpf("1e-12")), mp.log(mp.mpf("1e-1"))
        for _ in range(24):
            middle = (low + high) / 2
            low, high = (middle, high) if ln_off(middle) > 0 else (low, middle)
        return mp.exp(mp.findroot(ln_off, (low, high), tol=1e-60, verify=False))

    def best_gain(self, start):
        h = mp.mpf(10) ** -9
        slope = lambda u: (mp.log(self.power(mp.exp(u + h))) - mp.log(self.power(mp.exp(u - h)))) / (2 * h)
        u = mp.log(start)
        return mp.exp(mp.findroot(slope, (u, u + mp.mpf("0.05")), tol=1e-24, verify=False))


def mcintyre(k):
    return lambda m: k * m + (1 - k) * (2 - 1 / m)


def dbm(watt):
    return 10 * mp.log10(watt * 1000)


BENCH = {
    "source": {"wavelength_nm": 1550.0, "average_power_dbm": -3.0, "format": "nrz", "extinction_ratio_db": 9.0, "rin_db_per_hz": -140.0},
    "path": {"loss_db": 27.4},
    "detector": {
        "responsivity": {"kind": "value", "a_per_w": 0.88}, "dark_current_bulk_a": 4e-9, "dark_current_surface_a": 1.5e-8,
        "avalanche": {"ionisation_ratio": 0.45, "bias": {
            "kind": "miller", "breakdown_v": 56.4, "miller_exponent": 2.6, "reference_temperature_c": 22.0, "breakdown_v_per_k": 0.11,
            "series_resistance_ohm": 10000.0, "set_v": 51.0, "table_from_c": -20.0, "table_to_c": 40.0, "table_step_k": 20.0}},
    },
    "amplifier": {"noise": {"kind": "rms", "current_a": 3.2e-7}, "noise_bandwidth_hz": 1.95e9},
    "decision": {"target_error_ratio": 1e-12, "threshold": "optimum"},
    "surroundings": {"temperature_c": 14.0, "background_power_w": 1e-9},
}


def deep(tree, **paths):
    """A copy with values at dotted paths."""
    def copy(part):
        return {k: copy(v) for k, v in part.items()} if isinstance(part, dict) else part
    tree = copy(tree)
    for path, value in paths.items():
        at, *steps = [tree] + path.split("__")
        for step in steps[:-1]:
            at = at[step]
        if value is None:
            at.pop(steps[-1], None)
        else:
            at[steps[-1]] = value
    return tree


def whole(name, bench, f, start):
    receiver = Receiver(bench, f)
    best = receiver.best_gain(start)
    least = receiver.power(best)
    bias = bench["detector"]["avalanche"]["bias"]
    n, r = x(bias["miller_exponent"]), x(bias.get("series_resistance_ohm", 0.0))
    per_k = x(bias["breakdown_v_per_k"])
    v_b = lambda t: x(bias["breakdown_v"]) + per_k * (t - x(bias["reference_temperature_c"]))
    now = x(bench["surroundings"]["temperature_c"])
    light = mp.mpf(10) ** ((x(bench["source"]["average_power_dbm"]) - x(bench["path"]["loss_db"])) / 10) / 1000
    i0 = lambda p: receiver.r * (p + receiver.background) + receiver.bulk
    beside = receiver.surface
    bias_at = lambda t: v_b(t) * (1 - 1 / best) ** (1 / n) + (best * i0(light) + beside) * r
    v = bias_at(now)
    gain = lambda v, t, p=light: held(v, v_b(t), n, i0(p), beside, r)
    lost = lambda m: 10 * mp.log10(receiver.power(m) / least)
    h = mp.mpf(10) ** -12
    dark = gain(v, now, mp.mpf(0))
    # The light at which the gain is 1 dB down, by bisection.
    low, high = mp.mpf(0), mp.mpf(1)
    for _ in range(120):
        middle = (low + high) / 2
        low, high = (middle, high) if gain(v, now, middle) > dark / mp.mpf(10) ** mp.mpf("0.1") else (low, middle)
    temperatures, t = [], x(bias["table_from_c"])
    while t <= x(bias["table_to_c"]):
        temperatures.append(t)
        t += x(bias["table_step_k"])
    set_gain = gain(x(bias["set_v"]), now)
    expect = {
        "best_gain": best, "average_power_dbm": dbm(least), "unit_gain_power_dbm": dbm(receiver.power(mp.mpf(1))),
        "bias_v": v, "breakdown_v": v_b(now), "margin_v": v_b(now) - v,
        "current_a": best * i0(light) + beside, "drop_v": (best * i0(light) + beside) * r,
        "gain_per_v": (gain(v + h, now) - gain(v - h, now)) / (2 * h), "gain_per_k": (gain(v, now + h) - gain(v, now - h)) / (2 * h),
        "volt_above_db": lost(gain(v + 1, now)), "volt_below_db": lost(gain(v - 1, now)),
        "kelvin_above_db": lost(gain(v, now + 1)), "kelvin_below_db": lost(gain(v, now - 1)),
        "gain_in_the_dark": dark, "sag_power_dbm": dbm(low), "set_gain": set_gain, "set_lost_db": lost(set_gain),
        "table_c": temperatures, "table_bias_v": [bias_at(t) for t in temperatures], "table_left_gain": [gain(v, t) for t in temperatures],
        "table_left_lost_db": [lost(gain(v, t)) for t in temperatures],
    }
    flat = "the best gain is known to 1e-7 only, the floor of the valley being flat; this follows it"
    follows = lambda relative: {"relative": relative, "why": flat}
    level = {"absolute": 1e-10, "why": "1e-11 of a power is 5e-11 dB"}
    tolerance = {key: follows(1e-6) for key in expect}
    for key in ("average_power_dbm", "unit_gain_power_dbm"):
        tolerance[key] = level
    for key in ("bias_v", "margin_v", "drop_v", "table_bias_v", "volt_above_db", "volt_below_db", "kelvin_above_db", "kelvin_below_db", "sag_power_dbm", "set_lost_db", "table_left_lost_db"):
        tolerance[key] = {"absolute": 1e-5, "why": flat}
    tolerance["table_left_gain"] = follows(1e-5)
    tolerance["breakdown_v"] = tolerance["set_gain"] = {"relative": 1e-13, "why": "no best gain in it; M·n roundings"}
    tolerance["table_c"] = {"absolute": 1e-12, "why": "sums of whole numbers"}
    print(name, mp.nstr(best, 12), mp.nstr(v, 12), flush=True)
    return case(name, "ask_avalanche_bias", {"bench": bench}, expect, tolerance)


def ideal():
    """The full model in the closed form's own limit: the values of section 3.5 of the textbook forms, found by another root."""
    cases = []
    for r, k, sigma, b, q in ((1.0, 0.7, 1e-7, 1e9, 6.0), (0.8, 0.02, 1e-8, 5e8, 6.0), (0.9, 0.45, 5e-7, 5e9, 7.0), (0.5, 0.02, 2e-8, 1e8, 6.0)):
        f = mcintyre(x(k))
        power = lambda m: x(q) / x(r) * (Q_E * f(m) * x(q) * x(b) + x(sigma) / m)
        best = least(power)
        bench = {
            "source": {"format": "nrz"},
            "detector": {"responsivity": {"kind": "value", "a_per_w": r},
                         "avalanche": {"ionisation_ratio": k, "bias": {"kind": "miller", "breakdown_v": 60.0, "miller_exponent": 3.0}}},
            "amplifier": {"noise": {"kind": "rms", "current_a": sigma}, "noise_bandwidth_hz": b},
            "decision": {"target_error_ratio": float(mp.ncdf(-x(q))), "threshold": "q"},
        }
        expect = {"best_gain": best, "closed_form_gain": best, "average_power_dbm": dbm(power(best)), "unit_gain_power_dbm": dbm(power(mp.mpf(1))),
                  "bias_v": 60 * (1 - 1 / best) ** (mp.mpf(1) / 3)}
        tolerance = {"best_gain": {"relative": 1e-6, "why": "the floor of the valley is flat"}, "closed_form_gain": {"relative": 1e-13, "why": "Q back from a double error ratio"},
                     "average_power_dbm": {"absolute": 1e-10, "why": "1e-11 of a power"}, "unit_gain_power_dbm": {"absolute": 1e-10, "why": "1e-11 of a power"},
                     "bias_v": {"absolute": 1e-5, "why": "follows the gain"}}
        cases.append(case("ideal-k-%g-sigma-%g" % (k, sigma), "ask_avalanche_bias", {"bench": bench}, expect, tolerance,
                          "closed form of G. P. Agrawal, Fiber-Optic Communication Systems, chapter 4, minimised numerically; " + SOURCE))
    return cases


def main():
    cases = millers() + series() + tables() + closed_forms() + ideal()
    cases.append(whole("whole-answer-mcintyre", BENCH, mcintyre(x(0.45)), 13))
    power = deep(BENCH, detector__avalanche__ionisation_ratio=None, detector__avalanche__excess_noise={"kind": "power", "exponent": 0.7},
                 decision__threshold="q", surroundings__temperature_c=31.0, detector__avalanche__bias__series_resistance_ohm=1e6)
    cases.append(whole("whole-answer-power-law-large-resistance", power, lambda m: m ** x(0.7), 13))

    # Measured gains: the best gain of the first bench, its voltage by SciPy, moved with temperature.
    receiver = Receiver(BENCH, mcintyre(x(0.45)))
    best = receiver.best_gain(13)
    v, m = np.array(GAINS).T
    curve = PchipInterpolator(v, 1 / m)
    at = brentq(lambda u: 1 / curve(u) - float(best), v[0], v[-1], xtol=1e-13)
    moved = 0.11 * (14.0 - 22.0)
    points = [{"bias_v": float(a), "gain": float(b)} for a, b in GAINS]
    table = deep(BENCH, detector__avalanche__bias={"kind": "table", "points": points, "reference_temperature_c": 22.0, "breakdown_v_per_k": 0.11})
    expect = {"best_gain": best, "bias_v": at + moved, "gain_per_v": -curve(at, 1) / curve(at) ** 2, "gain_per_k": 0.11 * curve(at, 1) / curve(at) ** 2}
    flat = {"relative": 1e-6, "why": "follows the best gain, whose valley is flat"}
    cases.append(case("whole-answer-measured-gains", "ask_avalanche_bias", {"bench": table}, expect, {key: flat for key in expect}, SCIPY))
    write("../published/bias.toml", ["Gain against bias, excess noise laws, and whole answers. Written by tests/reference/bias.py."], cases)


main()
