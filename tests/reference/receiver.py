"""Makes tests/published/sensitivity_reference.toml: receivers solved in 130-digit arithmetic.

Independent of the program in its route: four levels are counted region by region with the bits that differ, thresholds
are found from numerical derivatives of that sum, and nothing is written as a tail.

Run in this folder: python3 receiver.py     (mpmath 1.3.0; about a minute)
"""

import mpmath as mp
from cases import write

mp.mp.dps = 130
Q_E = mp.mpf("1.602176634e-19")
GRAY = {2: [0, 1], 4: [0b00, 0b01, 0b11, 0b10]}


def cdf(x):
    return mp.ncdf(x)


def model(given, average):
    """Currents and RMS noises of the levels, as the formula in receiver.rs is printed."""
    get = lambda key: mp.mpf(repr(given.get(key, 0.0)))
    m = mp.mpf(repr(given.get("gain", 1.0)))
    k = get("ionisation_ratio")
    f = k * m + (1 - k) * (2 - 1 / m)
    b, r = get("noise_bandwidth_hz"), get("responsivity_a_per_w")
    rin = mp.mpf(10) ** (get("rin_db_per_hz") / 10) if "rin_db_per_hz" in given else mp.mpf(0)
    e = mp.mpf(10) ** (-get("extinction_ratio_db") / 10) if "extinction_ratio_db" in given else mp.mpf(0)
    high = 2 * average / (1 + e)
    low = e * high
    n = 4 if given["format"] == "pam4" else 2
    powers = [low + (high - low) * i / (n - 1) for i in range(n)]
    levels = []
    for p in powers:
        before = r * p + r * get("background_power_w") + get("dark_current_bulk_a")
        square = 2 * Q_E * (m**2 * f * before + get("dark_current_surface_a")) * b
        square += get("circuit_noise_a") ** 2 + rin * (m * r * p) ** 2 * b
        levels.append((m * r * p, mp.sqrt(square)))
    return levels


def error_ratio(levels, thresholds):
    gray, total = GRAY[len(levels)], mp.mpf(0)
    edges = [-mp.inf] + list(thresholds) + [mp.inf]
    for i, (current, noise) in enumerate(levels):
        for region in range(len(levels)):
            bits = bin(gray[i] ^ gray[region]).count("1")
            if not bits:
                continue
            if noise == 0:
                # "At the threshold" is its right side.
                inside = mp.mpf(edges[region] < current < edges[region + 1])
            else:
                inside = cdf((edges[region + 1] - current) / noise) - cdf((edges[region] - current) / noise)
            total += bits * inside
    return total / len(levels) / (len(levels) // 2)


def q_form(levels):
    pairs = list(zip(levels, levels[1:]))
    tails = [cdf(-(b[0] - a[0]) / (a[1] + b[1])) for a, b in pairs]
    thresholds = [(a[1] * b[0] + b[1] * a[0]) / (a[1] + b[1]) for a, b in pairs]
    return mp.fsum(tails) * 2 / len(levels) / (len(levels) // 2), thresholds


def solved(levels, rule):
    pairs = list(zip(levels, levels[1:]))
    if rule == "q_factor":
        return q_form(levels)
    if rule == "midpoint":
        thresholds = [(a[0] + b[0]) / 2 for a, b in pairs]
        return error_ratio(levels, thresholds), thresholds
    thresholds = q_form(levels)[1]
    scale = [min(s for s in (a[1], b[1]) if s > 0) for a, b in pairs]
    for index, (a, b) in enumerate(pairs):
        if a[1] == 0:
            thresholds[index] = a[0]
            continue

        def slope(u):
            at = list(thresholds)

            def moved(v):
                at[index] = thresholds[index] + v * scale[index]
                return error_ratio(levels, at)

            return mp.diff(moved, u, h=mp.mpf(10) ** -20) / error_ratio(levels, thresholds)

        reach = mp.mpf("0.25")
        while slope(-reach) * slope(reach) > 0:
            reach *= 2
        u = mp.findroot(slope, (-reach, reach), solver="bisect", tol=1e-14, maxsteps=60, verify=False)
        thresholds[index] += u * scale[index]
    best = error_ratio(levels, thresholds)
    for index in range(len(thresholds)):  # a minimum, not only a flat place
        for side in (-1, 1):
            at = list(thresholds)
            at[index] += side * scale[index] / 1000
            if levels[index][1] > 0 or side > 0:
                assert error_ratio(levels, at) > best, (index, side)
    return best, thresholds


def power(given, guess):
    target, rule = mp.mpf(repr(given["target_error_ratio"])), given["threshold"]
    off = lambda u: mp.log(solved(model(given, mp.exp(u)), rule)[0] / target)
    u = mp.findroot(off, (mp.log(mp.mpf(guess)), mp.log(mp.mpf(guess)) + mp.mpf("0.02")), tol=1e-40, verify=False)
    assert abs(off(u)) < 1e-18
    return mp.exp(u)


def bisected(given):
    """A first guess from the Q form, which is cheap."""
    target = mp.mpf(repr(given["target_error_ratio"]))
    low, high = mp.mpf("1e-16"), mp.mpf(1e3)
    for _ in range(30):
        middle = mp.sqrt(low * high)
        low, high = (middle, high) if q_form(model(given, middle))[0] > target else (low, middle)
    return high


PIN = {"responsivity_a_per_w": 0.9, "noise_bandwidth_hz": 7.5e9, "circuit_noise_a": 1.2e-6}
APD = PIN | {"gain": 10.0, "ionisation_ratio": 0.4, "dark_current_bulk_a": 1e-8, "dark_current_surface_a": 2e-8}
QUIET = {"responsivity_a_per_w": 0.9, "noise_bandwidth_hz": 7.5e9}

NRZ, PAM4 = {"format": "nrz"}, {"format": "pam4"}
BEST, MID, Q = {"threshold": "optimum"}, {"threshold": "midpoint"}, {"threshold": "q_factor"}


def er(db):
    return {"extinction_ratio_db": db}


def at(target):
    return {"target_error_ratio": target}


LINKS = {
    "extinction-of-a-twentieth-of-a-decibel": PIN | NRZ | BEST | er(0.05) | at(1e-9),
    "avalanche-to-1e-30": APD | NRZ | BEST | er(8.2) | at(1e-30),
    "pin-to-four-tenths": PIN | NRZ | BEST | at(0.4),
    "avalanche-to-four-tenths-with-light-in-the-zero": APD | NRZ | BEST | er(6.0) | at(0.4),
    "no-circuit-noise-dark-zero": QUIET | NRZ | BEST | at(1e-9),
    "no-circuit-noise-light-in-the-zero": QUIET | NRZ | BEST | er(10.0) | at(1e-9),
    "no-circuit-noise-midpoint": QUIET | NRZ | MID | er(10.0) | at(1e-9),
    "equal-carriers-k-one": APD | {"ionisation_ratio": 1.0} | NRZ | BEST | er(10.0) | at(1e-12),
    "one-carrier-k-zero": APD | {"ionisation_ratio": 0.0, "gain": 30.0} | NRZ | BEST | er(10.0) | at(1e-12),
    "background-light": APD | {"background_power_w": 1e-6} | NRZ | BEST | er(10.0) | at(1e-12),
    "intensity-noise-near-its-floor": PIN | {"rin_db_per_hz": -114.8} | NRZ | BEST | at(1e-9),
    "intensity-noise-midpoint": PIN | {"rin_db_per_hz": -130.0} | NRZ | MID | er(8.2) | at(1e-6),
    "pam4-pin": PIN | PAM4 | BEST | er(6.0) | at(2.4e-4),
    "pam4-avalanche-optimum": APD | PAM4 | BEST | er(6.0) | at(1e-6),
    "pam4-avalanche-midpoint": APD | PAM4 | MID | er(6.0) | at(1e-6),
    "pam4-avalanche-q-form": APD | PAM4 | Q | er(6.0) | at(1e-6),
    "pam4-intensity-noise": APD | {"rin_db_per_hz": -140.0} | PAM4 | BEST | er(4.0) | at(1e-3),
    "pam4-no-circuit-noise-dark-lowest-level": QUIET | PAM4 | BEST | at(1e-6),
    "pam4-to-1e-30": APD | PAM4 | BEST | er(10.0) | at(1e-30),
    "pam4-high-error-ratio": APD | PAM4 | BEST | er(4.0) | at(0.1),
}

# Where a target lies close to a floor, or the levels nearly coincide, the power magnifies rounding.
LOOSE = {"extinction-of-a-twentieth-of-a-decibel": 1e-11, "intensity-noise-near-its-floor": 1e-11}

SOURCE = "mpmath 1.3.0, 130 digits, region by region: tests/reference/receiver.py"


def case(name, compute, given, expect, tolerance, source=SOURCE):
    return {
        "name": name,
        "source": source,
        "kind": "independent",
        "compute": compute,
        "input": given,
        "expect": expect,
        "tolerance": tolerance,
    }


def main():
    cases = []
    for name, given in LINKS.items():
        watt = power(given, bisected(given))
        levels = model(given, watt)
        _, thresholds = solved(levels, given["threshold"])
        print(name, mp.nstr(10 * mp.log10(watt * 1000), 15), flush=True)
        cases.append(
            case(
                name,
                "sensitivity",
                given,
                {"outcome": "power", "average_w": float(watt), "thresholds_a": [float(t) for t in thresholds]},
                {
                    "average_w": {
                        "relative": LOOSE.get(name, 1e-12),
                        "why": "the root is sought to 1e-14, the error ratio is good to 1e-14 times its slope",
                    },
                    "thresholds_a": {
                        "absolute": float(max(thresholds)) * 1e-10,
                        "why": "they follow the power, and the four-level ones are sought to 1e-13",
                    },
                },
            )
        )

    # Floors: the limit of infinite power has noise in proportion to current.
    for name, given in {
        "floor-of-a-dark-zero": PIN | {"rin_db_per_hz": -114.0} | NRZ | BEST | at(1e-12),
        "floor-of-the-q-form": PIN | {"rin_db_per_hz": -114.0} | NRZ | Q | at(1e-12),
        "floor-with-light-in-the-zero": PIN | {"rin_db_per_hz": -120.0} | NRZ | BEST | er(6.0) | at(1e-12),
        "floor-of-pam4": PIN | {"rin_db_per_hz": -130.0} | PAM4 | BEST | er(6.0) | at(1e-12),
    }.items():
        only = {key: given[key] for key in given if key != "circuit_noise_a"}
        floor = solved([(c, c * mp.sqrt(mp.mpf(10) ** (mp.mpf(repr(given["rin_db_per_hz"])) / 10) * 7.5e9))
                        for c, _ in model(only, mp.mpf(1))], given["threshold"])[0]
        print(name, mp.nstr(floor, 15), flush=True)
        tolerance = {"relative": 1e-12, "why": "rounding of Q = 8 costs 64 units of the last place in its tail"}
        cases.append(case(name, "sensitivity", given, {"outcome": "floor", "error_floor": float(floor)}, tolerance))

    # Vanishing light without other noise: two Gaussians of one centre, RMS 1 and sqrt(r), cut where they cross.
    for db in (3.0, 10.0):
        rho = mp.sqrt(mp.mpf(10) ** (mp.mpf(db) / 10))
        x = mp.findroot(lambda x: mp.npdf(x, 0, 1) - mp.npdf(x, 0, rho), 1.5)
        dark = (cdf(-x) + cdf(x / rho)) / 2
        given = QUIET | NRZ | BEST | er(db) | at(0.49)
        expect = {"outcome": "any_power", "error_ratio_in_the_dark": float(dark)}
        tolerance = {"relative": 1e-14, "why": "two tails near one half, each to the last place"}
        cases.append(case("vanishing-light-%g-decibels" % db, "sensitivity", given, expect, tolerance))

    # The best gain: the power, solved as above, has no slope there.
    for name, given, start in (
        ("best-gain-of-the-full-model", APD | NRZ | BEST | er(8.2) | at(1e-12), 8),
        ("best-gain-pam4", {k: v for k, v in APD.items() if k != "gain"} | PAM4 | Q | er(6.0) | at(1e-4), 8),
    ):
        def ln_power(u):
            here = given | {"gain": float(mp.exp(u))}
            return mp.log(power(here, bisected(here)))

        u = [mp.log(start) + d for d in (mp.mpf("-0.1"), mp.mpf(0), mp.mpf("0.1"))]
        for width in (0.1, 0.003, 0.0003):  # vertex of a parabola; its error falls with the square of the width
            y = [ln_power(v) for v in u]
            centre = u[1] - width * (y[2] - y[0]) / (2 * (y[2] - 2 * y[1] + y[0]))
            u = [centre - mp.mpf(0.0003), centre, centre + mp.mpf(0.0003)] if width < 0.01 else [
                centre - mp.mpf(0.003), centre, centre + mp.mpf(0.003)]
        best = mp.exp(centre)
        watt = power(given | {"gain": float(best)}, bisected(given | {"gain": float(best)}))
        print(name, best, watt, flush=True)
        without = {key: value for key, value in given.items() if key != "gain"}
        cases.append(
            case(
                name,
                "best_gain",
                without,
                {"outcome": "gain", "gain": float(best), "average_w": float(watt)},
                {
                    "gain": {"relative": 1e-6, "why": "the floor of the valley is flat within the last digits of the power"},
                    "average_w": {"relative": 1e-12, "why": "the root is sought to 1e-14; at the floor the gain does not matter"},
                },
            )
        )

    # Decisions by themselves, very unequal noises included.
    for name, currents, noises in (
        ("one-percent-wider", [0.0, 10.0], [1.0, 1.01]),
        ("wider-by-1e-9", [0.0, 10.0], [1.0, 1.000000001]),
        ("ten-times-wider", [0.0, 30.0], [0.5, 5.0]),
        ("narrower-above", [0.0, 10.0], [2.0, 0.5]),
        ("four-unequal", [0.0, 8.0, 18.0, 30.0], [0.8, 1.0, 1.4, 2.0]),
        ("four-narrower-above", [0.0, 8.0, 14.0, 19.0], [2.0, 1.0, 0.9, 0.3]),
    ):
        levels = [(mp.mpf(repr(c)), mp.mpf(repr(s))) for c, s in zip(currents, noises)]
        for rule in ("optimum", "midpoint", "q_factor"):
            ratio, thresholds = solved(levels, rule)
            cases.append(
                case(
                    "%s-%s" % (name, rule.replace("_", "-")),
                    "decision",
                    {"currents_a": currents, "noises_a": noises, "threshold": rule},
                    {"error_ratio": float(ratio), "thresholds_a": [float(t) for t in thresholds]},
                    {
                        "error_ratio": {"relative": 2e-14, "why": "the argument of a tail at 8 is rounded: 64 units of the last place"},
                        "thresholds_a": {"absolute": 1e-11, "why": "the four-level ones are sought to 1e-13 of some tens"},
                    },
                )
            )

    write(
        "../published/sensitivity_reference.toml",
        ["Receivers, solved in 130-digit arithmetic by another route. Written by tests/reference/receiver.py."],
        cases,
    )


main()
