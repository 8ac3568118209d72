"""Reference values of the correlation functions, from their defining formulas with mpmath at 40 digits and more.

    python3 kernels.py           writes kernels.csv beside this file
    python3 kernels.py --check   computes anew and compares

Columns: family, first and second parameter, quantity, place, order, value. Quantities: `value` and `loss` (1 - value)
at a lag; `derivative` of an order at a lag; `density` (one-sided) at an angular frequency; `moment` of an order and
`scale` (of fluctuation), by integration of density and correlation, not from closed forms; infinite ones are left out.
"""

import csv
import pathlib
import sys

from mpmath import mp, mpf, pi, sqrt, exp, cos, sin, gamma, besselk, quad, diff, inf, nstr, quadosc

mp.dps = 40
PATH = pathlib.Path(__file__).with_name("kernels.csv")


def squared_exponential(length, _):
    return {
        "rho": lambda t: exp(-(t / length) ** 2 / 2),
        "density": lambda w: sqrt(2 / pi) * length * exp(-(w * length) ** 2 / 2),
        "times": (length, length),
        "moments": (1, 2, 4),
    }


def exponential(length, _):
    return {
        "rho": lambda t: exp(-t / length),
        "density": lambda w: 2 / pi * (1 / length) / (1 / length**2 + w**2),
        "times": (length, length),
        "moments": (),
    }


def matern(nu, length):
    a = sqrt(2 * nu) / length

    def rho(t):
        # 60 digits: the form is 0 times infinity at short lags.
        with mp.workdps(mp.dps + 30):
            x = sqrt(2 * nu) / length * t
            return 2 ** (1 - nu) / gamma(nu) * x**nu * besselk(nu, x)

    def density(w):
        return 2 * gamma(nu + mpf(1) / 2) / (sqrt(pi) * gamma(nu)) * a ** (2 * nu) * (a**2 + w**2) ** (-nu - mpf(1) / 2)

    def derivative(t, order):
        # d/dx (x^p K_q) = p x^(p-1) K_q - x^p (K_(q-1) + K_(q+1)) / 2, A&S 9.6.26.
        terms = {(nu, nu): 2 ** (1 - nu) / gamma(nu)}
        for _ in range(order):
            following = {}
            for (p, q), c in terms.items():
                for key, change in (((p - 1, q), p * c), ((p, abs(q - 1)), -c / 2), ((p, q + 1), -c / 2)):
                    following[key] = following.get(key, 0) + change
            terms = following
        x = a * t
        return a**order * sum(c * x**p * besselk(q, x) for (p, q), c in terms.items())

    moments = tuple(n for n in (1, 2, 4) if 2 * nu > n + mpf(1) / 10)
    return {"rho": rho, "derivative": derivative, "density": density, "times": (length, length), "moments": moments}


def rational_quadratic(length, alpha):
    def density(w):
        # The cosine transform, A&S 9.6.25 with nu = alpha - 1/2.
        x = w * length * sqrt(2 * alpha)
        order = alpha - mpf(1) / 2
        transform = sqrt(pi) * (x / 2) ** order * besselk(order, x) / gamma(alpha) * length * sqrt(2 * alpha)
        return 2 / pi * transform

    return {
        "rho": lambda t: (1 + (t / length) ** 2 / (2 * alpha)) ** -alpha,
        "density": density,
        "times": (length, length),
        "moments": (1, 2, 4),
        "scale": alpha >= 1,
    }


def oscillator(w0, z):
    s = sqrt(1 - z**2)
    return {
        "rho": lambda t: exp(-z * w0 * t) * (cos(s * w0 * t) + z / s * sin(s * w0 * t)),
        "density": lambda w: 4 * z * w0**3 / pi / ((w0**2 - w**2) ** 2 + (2 * z * w0 * w) ** 2),
        "times": (1 / w0, 1 / (z * w0)),
        "peak": (w0, z * w0),
        "moments": (1, 2),
    }


def damped_cosine(length, frequency):
    a = 1 / length
    lorentzian = lambda w: a / pi / (a**2 + w**2)
    return {
        "rho": lambda t: exp(-t / length) * cos(frequency * t),
        "density": lambda w: lorentzian(w - frequency) + lorentzian(w + frequency),
        "times": (min(length, 1 / frequency), length),
        "peak": (frequency, 1 / length),
        "moments": (),
    }


def harmonic(frequency, _):
    return {"rho": lambda t: cos(frequency * t), "times": (1 / frequency, 1 / frequency), "moments": ()}


def band_limited(lower, upper):
    return {
        "rho": lambda t: (sin(upper * t) - sin(lower * t)) / ((upper - lower) * t),
        "density": lambda w: mpf(1) / (upper - lower) if lower <= w <= upper else mpf(0),
        "times": (1 / upper, 2 / (upper - lower)),
        "band": (lower, upper),
        "moments": (1, 2, 4),
    }


def triangular(length, _):
    return {
        "rho": lambda t: max(1 - t / length, mpf(0)),
        "density": lambda w: 2 / pi * (1 - cos(w * length)) / (w**2 * length),
        "times": (length, length),
        "moments": (),
    }


CASES = (
    [(squared_exponential, "3", "0"), (exponential, "0.7", "0"), (harmonic, "1.7", "0"), (triangular, "2.5", "0")]
    + [(matern, nu, "2") for nu in ("0.3 0.5 0.6 1 1.3 1.5 1.999 2 2.0001 2.2 2.5 3.7 7 50".split())]
    + [(rational_quadratic, "1.5", alpha) for alpha in "0.3 0.5 0.7 1 2 10 50".split()]
    + [(oscillator, "2.5", z) for z in "0.0001 0.01 0.05 0.2 0.7 0.99 0.999 0.99999999".split()]
    + [(damped_cosine, "4", "0.3"), (damped_cosine, "4", "5"), (damped_cosine, "0.01", "0.02")]
    + [(band_limited, a, b) for a, b in [("0", "2"), ("1", "3"), ("1.999999", "2"), ("1e-9", "1"), ("1e-3", "2000")]]
)


def moment(family, n):
    """The integral of w^n G."""
    f = lambda w: w**n * family["density"](w)
    if "band" in family:
        return quad(f, family["band"])
    scale = 1 / family["times"][0]
    grid = {mpf(0)} | {scale * mpf(4) ** k for k in range(-4, 5)}
    if "peak" in family:
        middle, width = family["peak"]
        grid |= {w for k in range(12) for w in (middle - width * 4**k, middle, middle + width * 4**k) if w > 0}
    grid = sorted(grid)
    end = grid[-1]
    # w = end v^10 makes slow algebraic tails fast ones.
    tail = quad(lambda v: f(end * v**10) * 10 * end * v**9, [1, 2, 4, inf])
    return quad(f, grid) + tail


def scale(family, name):
    """Twice the integral of the correlation."""
    rho, (short, long) = family["rho"], family["times"]
    if name == "triangular":
        return 2 * quad(rho, [0, long])
    if name == "band_limited":
        lower, upper = family["band"]
        return 2 * quadosc(lambda t: sin(upper * t) / (upper * t), [0, inf], omega=upper) if lower == 0 else mpf(0)
    if name in ("oscillator", "damped_cosine"):
        return 2 * quad(rho, [k * 3 * short for k in range(int(35 * long / short) + 2)])
    return 2 * quad(rho, [0] + [short * mpf(4) ** k for k in range(-3, 4)] + [inf])


def double(text):
    """The double that a decimal denotes."""
    return mpf(float(text))


def rows():
    for make, first, second in CASES:
        name = make.__name__
        family = make(double(first), double(second))
        rho, (short, long) = family["rho"], family["times"]
        row = lambda quantity, place, order, value: (name, first, second, quantity, place, order, nstr(value, 20))
        lags = sorted({nstr(short * mpf(x), 6) for x in "1e-7 1e-3 0.1 0.45 1 2.3 7".split()} | {nstr(min(long, 10000 * short) * mpf("1.7"), 6)})
        for text in lags:
            lag = double(text)
            with mp.workdps(80):
                yield row("value", text, 0, rho(lag))
                yield row("loss", text, 0, 1 - rho(lag))
            if name == "triangular":
                continue
            numerically = lambda t, order: diff(rho, t, order, h=t * mpf(10) ** -25)
            derivative = family.get("derivative", numerically)
            with mp.workdps(130 if derivative is numerically else 60):
                for order in (1, 2, 3, 4):
                    if lag > short / 1000:
                        yield row("derivative", text, order, derivative(lag, order))
        if "density" in family:
            middle, width = family.get("peak", (0, 0))
            for w in sorted({mpf(x) / short for x in "0.001 0.3 1 2.5 20".split()} | {middle + width, middle + 5 * width} - {0}):
                text = nstr(w, 8)
                yield row("density", text, 0, family["density"](double(text)))
        for order in family["moments"]:
            with mp.workdps(30):
                yield row("moment", 0, order, moment(family, order))
        # Bessel functions of whole order are slow, and long ringing takes long.
        whole = name == "matern" and double(first) == int(double(first))
        if family.get("scale", True) and name != "harmonic" and long < 10 * short and not whole:
            with mp.workdps(25):
                yield row("scale", 0, 0, scale(family, name))


def main():
    computed = [tuple(map(str, row)) for row in rows()]
    if "--check" in sys.argv:
        with PATH.open() as file:
            stored = [tuple(row) for row in csv.reader(file)][1:]
        wrong = [
            (old, new)
            for old, new in zip(stored, computed)
            if old[:6] != new[:6] or abs(mpf(old[6]) - mpf(new[6])) > mpf("1e-15") * abs(mpf(new[6]))
        ]
        if wrong or len(stored) != len(computed):
            sys.exit(f"{len(wrong)} rows differ, the first {wrong[:1]}")
        print(f"{len(computed)} rows agree")
        return
    with PATH.open("w", newline="") as file:
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow("family first second quantity place order value".split())
        writer.writerows(computed)
    print(f"{len(computed)} rows written")


if __name__ == "__main__":
    main()
