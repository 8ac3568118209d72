"""Reference values of the named spectra, from their defining formulas with mpmath at 40 digits.

    python3 spectra.py           writes spectra.csv beside this file
    python3 spectra.py --check   computes anew and compares

Columns: spectrum, its arguments in their order (separated by blanks, SI units), quantity, order or place, value.
Quantities: `density` (one-sided, per rad/s) at an angular frequency; `moment` of an order, the integral of
omega^n over the density, from the density and not from closed forms; infinite ones are left out.
"""

import csv
import pathlib
import sys

from mpmath import mp, mpf, pi, exp, quad, nstr

mp.dps = 40
PATH = pathlib.Path(__file__).with_name("spectra.csv")


def band_limited(level, lower, upper):
    return lambda w: level if lower <= w <= upper else mpf(0), None, [lower, upper]


def sea(hs, tp, enhancement):
    peak = 2 * pi / tp

    def form(x):
        if x < mpf("0.05"):
            return mpf(0)
        widths = (x - 1) / (mpf("0.07") if x < 1 else mpf("0.09"))
        return x**-5 * exp(-mpf(5) / 4 / x**4) * enhancement ** exp(-(widths**2) / 2)

    points = [mpf(p) for p in ("0.05", "0.3", "0.5", "0.7", "0.85", "0.93", "1", "1.1", "1.25", "1.5", "2", "3")]
    area = integral(form, points, 5, 0)
    return lambda w: hs**2 / 16 / peak / area * form(w / peak), 5, [p * peak for p in points]


def pierson_moskowitz(hs, tp):
    peak = 2 * pi / tp
    density = lambda w: mpf(5) / 16 * hs**2 * peak**4 / w**5 * exp(-mpf(5) / 4 * (peak / w) ** 4) if w else mpf(0)
    return density, 5, [x * peak for x in (mpf("0.05"), mpf("0.4"), mpf("0.7"), 1, mpf("1.5"), 3)]


def kaimal(length, speed):
    a = length / speed / (2 * pi)
    return lambda w: 4 * a / (1 + 6 * a * w) ** (mpf(5) / 3), mpf(5) / 3, [0, 1 / a, 10 / a]


def von_karman(length, speed):
    a = length / speed / (2 * pi)
    coefficient = mpf("70.8")
    form = lambda x: 4 / (1 + coefficient * x**2) ** (mpf(5) / 6)
    area = integral(form, [0, mpf(1) / 8, 1, 10], mpf(5) / 3, 0)
    return lambda w: a * form(a * w) / area, mpf(5) / 3, [0, 1 / (8 * a), 1 / a, 10 / a]


def davenport(length, speed):
    a = length / speed / (2 * pi)
    return lambda w: mpf(2) / 3 * a * (a * w) / (1 + (a * w) ** 2) ** (mpf(4) / 3), mpf(5) / 3, [0, 1 / a, 10 / a]


def resonance(r, z):
    return (1 - r**2) ** 2 + 4 * z**2 * r**2


def peak(frequency, damping):
    steps = [damping * 4**k for k in range(9) if damping * 4**k < mpf("0.9")]
    return sorted([frequency * (1 - s) for s in steps] + [frequency] + [frequency * (1 + s) for s in steps])


def kanai_tajimi(level, frequency, damping):
    density = lambda w: level * (1 + 4 * damping**2 * (w / frequency) ** 2) / resonance(w / frequency, damping)
    return density, 2, [0] + peak(frequency, damping) + [8 * frequency]


def clough_penzien(level, frequency, damping, low, low_damping):
    ground, _, _ = kanai_tajimi(level, frequency, damping)
    density = lambda w: ground(w) * (w / low) ** 4 / resonance(w / low, low_damping)
    points = sorted(set([0] + peak(frequency, damping) + peak(low, low_damping) + [8 * max(frequency, low)]))
    return density, 2, points


def integral(density, points, exponent, order):
    """Between the points, and beyond them with w = last t^(-1/s), which makes the tail w^-(s+1) a constant."""
    total = quad(lambda w: w**order * density(w), points)
    if exponent is None:
        return total
    last, s = points[-1], exponent - order - 1
    return total + quad(
        lambda t: last / s * t ** (-1 / s - 1) * (last * t ** (-1 / s)) ** order * density(last * t ** (-1 / s)), [0, 1]
    )


CASES = {
    band_limited: ["0.3 0 2", "0.3 1.5 2", "2 10 10.0009765625"],
    pierson_moskowitz: ["6 11", "0.5 3.2"],
    sea: ["6 11 1", "6 11 1.5", "6 11 2", "6 11 3.3", "1.2 5 5", "6 11 7", "3 16 20"],
    kaimal: ["180 22", "42 6.5"],
    von_karman: ["180 22", "42 6.5"],
    davenport: ["1200 30", "600 11"],
    kanai_tajimi: ["0.02 15.6 0.6", "1 5 0.2", "0.02 15.6 0.001", "3e-4 40 0.95"],
    clough_penzien: ["1 15 0.6 1.5 0.6", "1 5 0.2 0.5 0.6", "0.02 5 0.2 5 0.2", "0.02 8 0.01 8.1 0.012"],
}


def rows():
    for family, cases in CASES.items():
        name = "jonswap" if family is sea else family.__name__
        for case in cases:
            density, exponent, points = family(*(mpf(argument) for argument in case.split()))
            places = [points[-1] * mpf(factor) for factor in ("0.0625", "0.25", "0.4375", "0.75", "1", "2", "64")]
            for place in places:
                # The place as a double, so that both sides mean one frequency.
                place = mpf(float(place))
                if place == points[-1] and exponent is None:
                    continue
                yield [name, case, "density", nstr(place, 20), nstr(density(place), 20)]
            for order in range(5):
                if exponent is None or order + 1 < exponent:
                    yield [name, case, "moment", order, nstr(integral(density, points, exponent, order), 20)]


def main():
    table = [["spectrum", "arguments", "quantity", "place", "value"]] + [[str(field) for field in row] for row in rows()]
    if "--check" not in sys.argv[1:]:
        with PATH.open("w", newline="") as out:
            csv.writer(out, lineterminator="\n").writerows(table)
        return
    with PATH.open(newline="") as found:
        kept = list(csv.reader(found))
    assert len(kept) == len(table), "another number of rows"
    for one, other in zip(kept, table):
        same = one[:4] == other[:4]
        if same and one[4] != other[4]:
            same = abs(mpf(one[4]) - mpf(other[4])) <= mpf("1e-17") * abs(mpf(other[4]))
        assert same, f"{one} against {other}"
    print(f"{len(table) - 1} values agree")


if __name__ == "__main__":
    main()
