"""Reference values for whole questions: readings by SciPy's PCHIP, receivers by mpmath.

Writes tests/published/reading.toml and tests/published/sensitivity.toml. Run from the repository's root.
Nothing of the program is used here: the formulas are written again from their definitions.
"""

import math
from pathlib import Path

import mpmath as mp
import numpy as np
import scipy
from scipy.interpolate import PchipInterpolator

mp.mp.dps = 40
OUT = Path("tests/published")


def toml(value):
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{k} = {toml(v)}" for k, v in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(toml(v) for v in value) + "]"
    if isinstance(value, str):
        return '"' + value + '"'
    if isinstance(value, int):
        return str(value)
    return repr(float(value))


def case(name, source, kind, compute, bench, expect, tolerance):
    return "\n".join([
        "[[case]]", f'name = "{name}"', f'source = "{source}"', f'kind = "{kind}"', f'compute = "{compute}"',
        f"input = {{ bench = {toml(bench)} }}", f"expect = {toml(expect)}", f"tolerance = {toml(tolerance)}", "",
    ])


# --- readings -----------------------------------------------------------------------------------------------------

CERTIFICATE = [(850, 0.231, 3.1), (980, 0.713, 2.2), (1064, 0.796, 1.8), (1310, 0.921, 1.1), (1490, 0.972, 1.2),
               (1550, 0.986, 1.1), (1570, 0.985, 1.2), (1600, 0.942, 1.6), (1625, 0.781, 2.4)]
FACTORS = [(1310, 1.012, 1.1), (1490, 1.004, 1.2), (1550, 0.993, 1.1), (1625, 0.961, 2.4)]
TYPICAL = [(1280, 0.90), (1310, 0.915), (1400, 0.95), (1550, 0.99), (1600, 0.95), (1640, 0.70)]


def pchip(rows, column=1):
    return PchipInterpolator([row[0] for row in rows], [row[column] for row in rows])


def points(rows):
    return [{"wavelength_nm": x, "value": y, "expanded_percent": u} for x, y, u in rows]


def relative_standard(rows, at, k, r):
    """By finite differences of SciPy's own interpolation in each node's value."""
    x, y = np.array([row[0] for row in rows], float), np.array([row[1] for row in rows])
    u = y * np.array([row[2] for row in rows]) / 100 / k
    value = PchipInterpolator(x, y)(at)
    c = []
    for i in range(len(x)):
        h = 1e-6 * y[i]
        up, down = y.copy(), y.copy()
        up[i] += h
        down[i] -= h
        c.append((PchipInterpolator(x, up)(at) - PchipInterpolator(x, down)(at)) / (2 * h))
    parts = np.array(c) * u
    return math.sqrt((1 - r) * np.sum(parts**2) + r * np.sum(parts) ** 2) / value


def meter(form, rows, set_nm, reading, k=2, r=None, **more):
    certificate = {"form": form, "coverage_factor": k, "points": points(rows)}
    if r is not None:
        certificate["point_correlation"] = r
    return {"reading_dbm": reading, "set_wavelength_nm": set_nm, "certificate": certificate, **more}


def readings():
    scipy_source = f"SciPy {scipy.__version__} PchipInterpolator, numpy {np.__version__}; tests/reference/door.py"
    digits = {"relative": 2e-13, "why": "two different orders of the same double arithmetic"}
    weights = {"relative": 1e-8, "why": "the reference takes central differences with a step of 1e-6"}
    absolute = {"absolute": 1e-12, "why": "double arithmetic on values of a few dB"}
    cases = []
    bench = {"source": {"wavelength_nm": 1310},
             "meter": {"reading_dbm": -20, "set_wavelength_nm": 1550,
                       "certificate": {"form": "responsivity", "points": [
                           {"wavelength_nm": 1310, "value": 0.9}, {"wavelength_nm": 1550, "value": 1.0}]}}}
    cases.append(case(
        "one-tenth-less-responsivity", "arithmetic by hand: 1.00/0.90 = 1.111..., 10 log10 of it", "exact", "ask_reading",
        bench, {"correction_factor": 1 / 0.9, "correction_db": 0.45757490560675125, "power_dbm": -19.54242509439325},
        {"relative": 4e-16, "why": "one rounding of each"}))
    for set_nm, source_nm, r in [(1310, 1551.7, None), (1550, 1310, 0.0), (1310, 1585, 0.5), (1550, 1617.3, 1.0),
                                 (980, 850, 0.9), (850, 1625, None)]:
        curve = pchip(CERTIFICATE)
        a, b = float(curve(set_nm)), float(curve(source_nm))
        u = relative_standard(CERTIFICATE, source_nm, 2, 1.0 if r is None else r)
        slope = -float(curve.derivative()(source_nm)) / b * 100
        power = 10 ** (-30.52 / 10) * 1e-3 * a / b
        cases.append(case(
            f"set-{set_nm}-light-{source_nm}-correlation-{'unsaid' if r is None else r}", scipy_source, "independent",
            "ask_reading",
            {"source": {"wavelength_nm": source_nm}, "meter": meter("responsivity", CERTIFICATE, set_nm, -30.52, r=r)},
            {"power_w": power, "correction_db": 10 * math.log10(a / b), "responsivity_set_a_per_w": a,
             "responsivity_source_a_per_w": b, "slope_percent_per_nm": slope, "standard_percent": u * 100,
             "expanded_percent": 2 * u * 100, "low_dbm": 10 * math.log10(power * (1 - 2 * u) / 1e-3),
             "high_dbm": 10 * math.log10(power * (1 + 2 * u) / 1e-3)},
            {"power_w": digits, "correction_db": absolute, "responsivity_set_a_per_w": digits,
             "responsivity_source_a_per_w": digits, "slope_percent_per_nm": {"relative": 1e-10, "why": "a derivative of differences"},
             "standard_percent": weights, "expanded_percent": weights,
             "low_dbm": {"absolute": 1e-9, "why": "the uncertainty's differences"},
             "high_dbm": {"absolute": 1e-9, "why": "the uncertainty's differences"}}))
    for set_nm, source_nm in [(1550, 1550), (1310, 1550), (1310, 1612)]:
        factor, typical = pchip(FACTORS), pchip(TYPICAL)
        ratio = float(factor(source_nm)) * float(typical(set_nm)) / float(typical(source_nm))
        cases.append(case(
            f"correction-factors-set-{set_nm}-light-{source_nm}", scipy_source, "independent", "ask_reading",
            {"source": {"wavelength_nm": source_nm},
             "detector": {"responsivity": {"kind": "table", "points": [
                 {"wavelength_nm": x, "a_per_w": y} for x, y in TYPICAL]}},
             "meter": meter("correction_factor", FACTORS, set_nm, -20, table_wavelengths_nm=[1310, 1550])},
            {"correction_factor": ratio,
             "responsivity_source_a_per_w": float(typical(source_nm)) / float(factor(source_nm)),
             "table_db": [10 * math.log10(float(factor(x)) * float(typical(set_nm)) / float(typical(x))) for x in (1310, 1550)]},
            {"correction_factor": digits, "responsivity_source_a_per_w": digits, "table_db": absolute}))
    return "# Readings, through the door. Written by tests/reference/door.py.\n\n" + "\n".join(cases)


# --- receivers ----------------------------------------------------------------------------------------------------

Q, H, C, KB = mp.mpf("1.602176634e-19"), mp.mpf("6.62607015e-34"), mp.mpf(299792458), mp.mpf("1.380649e-23")


def tail(x):
    return mp.erfc(x / mp.sqrt(2)) / 2


def noise(p, d):
    rate = 10 ** (mp.mpf(d["rin"]) / 10) if d["rin"] is not None else mp.mpf(0)
    m, r = mp.mpf(d["m"]), d["r"]
    f = mp.mpf(d["k"]) * m + (1 - mp.mpf(d["k"])) * (2 - 1 / m)
    shot = 2 * Q * (m**2 * f * (r * p + r * d["background"] + d["bulk"]) + d["surface"]) * d["bn"]
    return mp.sqrt(shot + d["ic2"] + rate * (m * r * p) ** 2 * d["bn"])


def error_ratio(average, d):
    ratio = None if d["er"] is None else 10 ** (mp.mpf(d["er"]) / 10)
    p1 = 2 * average if ratio is None else 2 * average * ratio / (ratio + 1)
    p0 = 2 * average - p1
    i0, i1 = mp.mpf(d["m"]) * d["r"] * p0, mp.mpf(d["m"]) * d["r"] * p1
    s0, s1 = noise(p0, d), noise(p1, d)
    total = lambda t: (tail((t - i0) / s0) + tail((i1 - t) / s1)) / 2
    # The least of the sum of both tails: where its derivative, the difference of the densities, vanishes.
    density = lambda t: -((t - i0) / s0) ** 2 / 2 - mp.log(s0) + ((i1 - t) / s1) ** 2 / 2 + mp.log(s1)
    lo, hi = i0, i1
    for _ in range(140):
        mid = (lo + hi) / 2
        lo, hi = (mid, hi) if density(mid) > 0 else (lo, mid)
    t = (lo + hi) / 2
    return total(t), t, (i0, i1), (s0, s1)


def solve(d, target):
    lo, hi = mp.mpf("1e-12"), mp.mpf("1e-2")
    for _ in range(160):
        mid = mp.sqrt(lo * hi)
        lo, hi = (mid, hi) if error_ratio(mid, d)[0] > target else (lo, mid)
    return mp.sqrt(lo * hi)


def receiver(name, bench, d, target, rate, wavelength_nm, launched, loss):
    p = solve(d, target)
    _, t, currents, noises = error_ratio(p, d)
    photons = p / (H * C / (wavelength_nm * mp.mpf("1e-9"))) / rate
    at_source = error_ratio(mp.mpf(10) ** ((mp.mpf(launched) - loss) / 10) / 1000, d)[0]
    dbm = 10 * mp.log10(p * 1000)
    expect = {"average_power_dbm": dbm, "photons_per_bit": photons, "threshold_a": t, "noise_bandwidth_hz": d["bn"],
              "currents_a": [float(i) for i in currents], "noises_a": [float(s) for s in noises],
              "error_ratio": at_source, "margin_db": mp.mpf(launched) - loss - dbm, "outcome": "power"}
    if currents[0] == 0:
        del expect["currents_a"]  # zero has no relative error; the noises fix both levels
    close = {"relative": 1e-12, "why": "a root found to 1e-14 and a dozen roundings"}
    decibel = {"absolute": 1e-11, "why": "1e-12 of the power, in dB"}
    tolerance = {"average_power_dbm": decibel, "photons_per_bit": close, "threshold_a": close, "noise_bandwidth_hz": close,
                 "currents_a": close, "noises_a": close, "margin_db": decibel,
                 "error_ratio": {"relative": 1e-10, "why": "the exponent of the tail multiplies what the dBm round"}}
    tolerance = {key: value for key, value in tolerance.items() if key in expect}
    return case(name, f"mpmath {mp.__version__}, 40 digits, both tails minimised by bisection; tests/reference/door.py",
                "independent", "ask_sensitivity", bench, expect, tolerance)


def receivers():
    bessel4 = mp.mpf("1.0463688870")
    # The factor to more digits: the Bessel polynomial of order 4, by quadrature.
    h2 = lambda w: 105**2 / ((105 - 45 * w**2 + w**4) ** 2 + (105 * w - 10 * w**3) ** 2)
    f3 = mp.findroot(lambda w: h2(w) - mp.mpf(1) / 2, 2.1)
    bessel4_exact = mp.quad(h2, [0, 1, 2, 4, 8, 32, 256, mp.inf]) / f3
    assert abs(bessel4_exact - bessel4) < mp.mpf("1e-9")
    cases = []
    base = {"m": 10, "k": 0.4, "r": mp.mpf(0.9), "background": 0, "bulk": mp.mpf(5e-9), "surface": mp.mpf(2e-8), "er": 10,
            "rin": -145, "bn": mp.mpf(1.75e9) * bessel4_exact, "ic2": mp.mpf(3e-7) ** 2}
    source = {"wavelength_nm": 1550, "average_power_dbm": -24, "format": "nrz", "symbol_rate_baud": 2.5e9,
              "extinction_ratio_db": 10, "rin_db_per_hz": -145}
    detector = {"responsivity": {"kind": "value", "a_per_w": 0.9}, "dark_current_bulk_a": 5e-9,
                "dark_current_surface_a": 2e-8, "avalanche": {"gain": 10, "ionisation_ratio": 0.4}}
    amplifier = {"noise": {"kind": "rms", "current_a": 3e-7}, "bandwidth_hz": 1.75e9, "filter": "bessel4"}
    decision = {"target_error_ratio": 1e-12}
    bench = {"source": source, "path": {"loss_db": 3.5}, "detector": detector, "amplifier": amplifier, "decision": decision}
    cases.append(receiver("avalanche-bessel-filter", bench, base, mp.mpf(1e-12), mp.mpf(2.5e9), 1550, -24, mp.mpf(3.5)))
    eta = mp.mpf(0.7) * Q * mp.mpf("1310e-9") / (H * C)
    other = {"m": 1, "k": 0, "r": eta, "background": mp.mpf(2e-7), "bulk": 0, "surface": mp.mpf(1e-9), "er": None, "rin": None,
             "bn": mp.mpf(622e6) * mp.pi / 2, "ic2": 4 * KB * 300 * mp.mpf(10) ** mp.mpf("0.3") * mp.mpf(622e6) * mp.pi / 2 / 1000}
    bench = {"source": {**source, "wavelength_nm": 1310, "extinction_ratio_db": None, "rin_db_per_hz": None,
                        "symbol_rate_baud": 622e6, "average_power_dbm": -33},
             "detector": {"responsivity": {"kind": "quantum_efficiency", "efficiency": 0.7}, "dark_current_surface_a": 1e-9},
             "amplifier": {"noise": {"kind": "resistor", "ohm": 1000, "noise_figure_db": 3, "temperature_k": 300},
                           "bandwidth_hz": 622e6, "filter": "first_order"},
             "decision": {"target_error_ratio": 1e-9}, "surroundings": {"background_power_w": 2e-7}}
    bench["source"] = {k: v for k, v in bench["source"].items() if v is not None}
    cases.append(receiver("pin-with-load-resistor-and-background", bench, other, mp.mpf(1e-9), mp.mpf(622e6), 1310, -33, 0))
    dense = {**base, "ic2": mp.mpf(7e-12) ** 2 * mp.mpf(1e9) * mp.pi / (2 * mp.sqrt(2)), "bn": mp.mpf(1e9) * mp.pi / (2 * mp.sqrt(2)),
             "m": 100, "k": 0.02, "r": mp.mpf(0.5), "er": 3, "rin": -135}
    bench = {"source": {**source, "wavelength_nm": 850, "extinction_ratio_db": 3, "rin_db_per_hz": -135, "average_power_dbm": -42},
             "detector": {"responsivity": {"kind": "table", "points": [{"wavelength_nm": 800, "a_per_w": 0.48}, {"wavelength_nm": 850, "a_per_w": 0.5}]},
                          "dark_current_bulk_a": 5e-9, "dark_current_surface_a": 2e-8, "avalanche": {"gain": 100, "ionisation_ratio": 0.02}},
             "amplifier": {"noise": {"kind": "density", "a_per_rthz": 7e-12}, "bandwidth_hz": 1e9, "filter": "butterworth2"},
             "decision": {"target_error_ratio": 1e-3}}
    cases.append(receiver("silicon-avalanche-noise-density-table", bench, dense, mp.mpf(1e-3), mp.mpf(2.5e9), 850, -42, 0))
    # An intensity-noise floor: half of 1/sqrt(RIN B) in Q for a dark zero. With s0 ~ 0 against s1 the least is half a tail.
    rin, bn = mp.mpf(10) ** mp.mpf("-11.0"), mp.mpf(1e9)
    floor = tail(1 / mp.sqrt(rin * bn)) / 2
    bench = {"source": {"format": "nrz", "rin_db_per_hz": -110}, "detector": {"responsivity": {"kind": "value", "a_per_w": 0.9}},
             "amplifier": {"noise": {"kind": "rms", "current_a": 1e-7}, "noise_bandwidth_hz": 1e9},
             "decision": {"target_error_ratio": 1e-24}}
    cases.append(case("intensity-noise-floor-of-a-dark-zero", "by hand: the zero has no noise, the one has Q = 1/sqrt(RIN B) = 10; half its tail, "
                      f"mpmath {mp.__version__}", "exact", "ask_sensitivity", bench, {"outcome": "none", "error_floor": floor},
                      {"relative": 1e-12, "why": "the tail at Q = 10 multiplies the rounding of RIN by 100"}))
    bench = {"source": {"wavelength_nm": 1550, "symbol_rate_baud": 10e9}, "detector": {"responsivity": {"kind": "value", "a_per_w": 1.0}},
             "amplifier": {"noise": {"kind": "rms", "current_a": 1e-7}, "noise_bandwidth_hz": 1e9},
             "decision": {"target_error_ratio": mp.mpf(1) / 2 * mp.exp(-20), "threshold": "q"}}
    cases.append(case("ten-photons-per-bit-at-10-gbit", "the quantum limit at 1.55 um and 10 Gb/s is 13 nW or -48.9 dBm (G. P. Agrawal, Fiber-Optic "
                      "Communication Systems, ch. 4, from memory); 10 h f B by hand", "exact", "ask_sensitivity", bench,
                      {"ideal_photons_per_bit": 10, "ideal_dbm": 10 * mp.log10(10 * H * C / mp.mpf("1.55e-6") * 10**10 * 1000)},
                      {"relative": 1e-14, "why": "a handful of roundings"}))
    # In its own limit (dark zero, no dark current, Q form) the closed form and the full model must agree.
    for r, k, sigma, bn, q in [(1.0, 0.7, 1e-7, 1e9, 6), (0.8, 0.02, 1e-8, 5e8, 6), (0.9, 0.45, 5e-7, 5e9, 7)]:
        best = mp.sqrt((mp.mpf(sigma) / (Q * q * mp.mpf(bn)) + mp.mpf(k) - 1) / mp.mpf(k))
        power = 2 * Q * mp.mpf(bn) / mp.mpf(r) * q * q * (mp.mpf(k) * best + 1 - mp.mpf(k))
        bench = {"source": {"format": "nrz"}, "detector": {"responsivity": {"kind": "value", "a_per_w": r},
                 "avalanche": {"gain": 1, "ionisation_ratio": k}},
                 "amplifier": {"noise": {"kind": "rms", "current_a": sigma}, "noise_bandwidth_hz": bn},
                 "decision": {"target_error_ratio": tail(mp.mpf(q)), "threshold": "q"}}
        cases.append(case(f"closed-form-best-gain-k-{k}", "M^2 k = s/(q Q B) + k - 1 and P = (2qB/R)Q^2(kM + 1 - k): the textbook's closed form "
                          f"(G. P. Agrawal, Fiber-Optic Communication Systems, ch. 4, from memory), derived again by hand; mpmath {mp.__version__}",
                          "independent", "ask_sensitivity", bench,
                          {"best_gain": best, "closed_form_gain": best, "best_gain_dbm": 10 * mp.log10(power * 1000)},
                          {"best_gain": {"relative": 1e-6, "why": "the bottom of a valley is flat: the root of the search's 1e-13"},
                           "closed_form_gain": {"relative": 1e-13, "why": "a handful of roundings"},
                           "best_gain_dbm": {"absolute": 1e-11, "why": "double arithmetic and a root found to 1e-14"}}))
    return "# Sensitivities, through the door. Written by tests/reference/door.py.\n\n" + "\n".join(cases)


OUT.joinpath("reading.toml").write_text(readings())
OUT.joinpath("sensitivity.toml").write_text(receivers())
