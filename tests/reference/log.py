"""Statistics of logs, raw and corrected, in exact fractions: writes tests/published/log.toml. Python 3.11 and its own library.

A level becomes a power by Decimal arithmetic with 60 digits; a mean, a standard deviation and a slope are then fractions of
whole numbers (module statistics, module fractions), so nothing is lost by cancelling. The certificate is used at its own
wavelengths only, so that its factors are quotients and no interpolation is needed.
"""

import datetime
import decimal
import random
import statistics
import sys
from fractions import Fraction

from cases import write

decimal.getcontext().prec = 60
SOURCE = "exact fractions and 60-digit decimals, Python %d.%d (statistics, fractions, decimal); tests/reference/log.py" % sys.version_info[:2]
POINTS = [(1310, "0.921", 1.1), (1550, "0.986", 1.3), (1625, "0.781", 2.4)]


def watt(level):
    return Fraction(decimal.Decimal(10) ** ((decimal.Decimal(level) - 30) / 10))


def slope(times, powers):
    t, p = statistics.mean(times), statistics.mean(powers)
    return sum((x - t) * (y - p) for x, y in zip(times, powers)) / sum((x - t) ** 2 for x in times)


def level(power):
    return float(10 * (decimal.Decimal(power.numerator) / decimal.Decimal(power.denominator)).log10() + 30)


def summed(name, powers, times, rows):
    mean = statistics.mean(powers)
    deviation = decimal.Decimal(statistics.variance(powers).numerator) / decimal.Decimal(statistics.variance(powers).denominator)
    least, greatest = powers.index(min(powers)), powers.index(max(powers))
    out = {
        "mean_w": float(mean),
        "standard_deviation_w": float(deviation.sqrt()),
        "least_w": float(powers[least]),
        "greatest_w": float(powers[greatest]),
        "least_line": rows[least],
        "greatest_line": rows[greatest],
    }
    if mean > 0:
        out["mean_dbm"] = level(mean)
    if times:
        out["drift_w_per_h"] = float(slope(times, powers) * 3600)
        if mean > 0:
            out["drift_percent_per_h"] = float(slope(times, powers) * 3600 / mean * 100)
    return {"%s_%s" % (name, key): value for key, value in out.items()}


def case(name, lines, header, rows, source_nm, tolerance):
    """rows: (line, power in W as a fraction, time in s as a fraction or None, setting in nm)"""
    responsivity = {nm: Fraction(value) for nm, value, _ in POINTS}
    powers = [power for _, power, _, _ in rows]
    corrected = [power * responsivity[nm] / responsivity[source_nm] for _, power, _, nm in rows]
    times = [time for _, _, time, _ in rows]
    times = times if None not in times else None
    numbers = [line for line, _, _, _ in rows]
    expect = {"rows": len(lines), "read": len(rows), **summed("raw", powers, times, numbers), **summed("corrected", corrected, times, numbers)}
    expect["expanded_percent"] = [u for nm, _, u in POINTS if nm == source_nm][0]
    points = [{"wavelength_nm": nm, "value": float(value), "expanded_percent": u} for nm, value, u in POINTS]
    return {
        "name": name,
        "source": SOURCE,
        "kind": "independent",
        "compute": "log",
        "input": {
            "text": "\\n".join([header, *lines]),
            "bench": {
                "source": {"wavelength_nm": source_nm},
                "meter": {"set_wavelength_nm": 1310, "certificate": {"form": "responsivity", "coverage_factor": 2, "points": points}},
            },
        },
        "expect": expect,
        "tolerance": tolerance,
    }


def levels():
    """Levels every quarter of a second, two settings, gaps and flags between."""
    chance, lines, rows = random.Random(1), [], []
    begin = datetime.datetime(2026, 11, 30, 23, 59, 30)
    for index in range(240):
        time = begin + datetime.timedelta(milliseconds=250 * index)
        nm = 1310 if index % 3 else 1625
        text = "%.3f" % (-20.13 - 0.002 * index + chance.gauss(0, 0.02))
        status = "UNLOCK" if index % 50 == 7 else "OK"
        if index % 40 == 11:
            text = "9.91E37"
        elif index % 60 == 13:
            text = "-9.9E+37"
        lines.append("%s,%03d;%s;%d;%s" % (time.isoformat(timespec="seconds"), time.microsecond // 1000, text.replace(".", ",") if "E" not in text else text, nm, status))
        if "E" not in text and status == "OK":
            rows.append((index + 2, watt(text), Fraction(index, 4), nm))
    return lines, rows


def nearly_dark():
    """Nanowatts about zero, after the dark reading was taken off."""
    chance, lines, rows = random.Random(2), [], []
    for index in range(300):
        text = "%.3f" % chance.gauss(0.2, 1.0)
        time = "%.1f" % (0.5 * index)
        lines.append("%s,%s" % (time, text))
        rows.append((index + 2, Fraction(text) / 10**9, Fraction(time), 1310))
    return lines, rows


def steady():
    """A large mean and a tiny scatter: what a sum of squares would lose."""
    chance, lines, rows = random.Random(3), [], []
    for index in range(200):
        text = "%.12f" % (1.0 + chance.gauss(0, 1e-9))
        lines.append(text)
        rows.append((index + 2, Fraction(text) / 1000, None, 1310))
    return lines, rows


def ordinary(scatter, why):
    by_key = {key: {"relative": 1e-12, "why": "sums of some hundred doubles"} for key in ("mean_w", "least_w", "greatest_w")}
    by_key.update({key: {"relative": scatter, "why": why} for key in ("standard_deviation_w", "drift_w_per_h", "drift_percent_per_h")})
    by_key["mean_dbm"] = {"absolute": 1e-11, "why": "a logarithm of such a sum"}
    by_key.update({key: {"absolute": 0, "why": "lines are counted, not measured"} for key in ("least_line", "greatest_line")})
    out = {"%s_%s" % (name, key): value for name in ("raw", "corrected") for key, value in by_key.items()}
    out.update({key: {"absolute": 0, "why": "rows are counted, not measured"} for key in ("rows", "read")})
    out["expanded_percent"] = {"relative": 1e-13, "why": "two factors that cancel"}
    return out


def only(tolerances, case_of):
    case_of["tolerance"] = {key: value for key, value in tolerances.items() if key in case_of["expect"]}
    return case_of


a, b, c = levels(), nearly_dark(), steady()
write(
    "../published/log.toml",
    ["Logs of readings, through the door. Written by tests/reference/log.py."],
    [
        only(ordinary(1e-11, "differences of doubles that agree in one to three digits"), case("levels-at-two-settings", a[0], "Time;Level (dBm);Wavelength (nm);Status", a[1], 1550, None)),
        only(ordinary(1e-11, "differences of doubles about zero"), case("nanowatts-about-zero", b[0], "Time (s),Power (nW)", b[1], 1550, None)),
        only(ordinary(1e-6, "the scatter is in the last seven of sixteen digits"), case("a-steady-milliwatt", c[0], "Power (mW)", c[1], 1625, None)),
    ],
)
