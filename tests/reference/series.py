"""Series coefficients of functions right of a point, by mpmath's numerical differentiation with 80 digits.

    python3 tests/reference/series.py           writes series.csv beside this file
    python3 tests/reference/series.py --check   fails if series.csv differs from what would be written

Each row is one term: coefficient * h^exponent * (ln h)^logs of f(at + h). All terms with an exponent below 8 are listed,
and whole powers with a zero coefficient too. Where f is no power series, it is one in a power of h once a factor is
taken out; that is written beside the case. Arguments of 0.7 and the like are the doubles nearest to them.
"""

import pathlib
import sys

from mpmath import acos, asin, atan, cos, cosh, erf, exp, factorial, ln, log10, mp, mpf, nstr, pi, sin, sinh, sqrt, tan, tanh, taylor

mp.dps = 80
BELOW = 8

SMOOTH = {
    "exp(-h^2/2)": (lambda x: exp(-x * x / 2), [0, 0.7, 3, 9]),
    "1/(1+h^2/2)": (lambda x: 1 / (1 + x * x / 2), [0, 0.7, 3]),
    "(1+h+h^2/3)*exp(-h)": (lambda x: (1 + x + x * x / 3) * exp(-x), [0, 0.7, 20]),
    "sin(h)/h": (lambda x: sin(x) / x, [0, 0.7, 3]),
    "erf(h)/h": (lambda x: erf(x) / x, [0, 2]),
    "sqrt(1-h)": (lambda x: sqrt(1 - x), [0, 0.7]),
    "(1-h)^3*(1+3*h)": (lambda x: (1 - x) ** 3 * (1 + 3 * x), [0, 0.7]),
    "cos(3*h)*exp(-h)*(1+h)": (lambda x: cos(3 * x) * exp(-x) * (1 + x), [0, 0.7, 3]),
    "(1+h^2)^-1.3": (lambda x: (1 + x * x) ** -mpf(1.3), [0, 0.7, 3]),
    "(1+h)^h": (lambda x: (1 + x) ** x, [0, 0.7]),
    "ln(1+h)": (lambda x: ln(1 + x), [0, 0.7]),
    "log10(1+h)": (lambda x: log10(1 + x), [0, 9]),
    "tan(h)": (tan, [0, 0.7, 2]),
    "asin(h)": (asin, [0, 0.7]),
    "acos(h)": (acos, [0, 0.7]),
    "atan(h)": (atan, [0, 0.7, 3]),
    "sinh(h)": (sinh, [0, 0.7, 3]),
    "cosh(h)": (cosh, [0, 0.7, 3]),
    "tanh(h)": (tanh, [0, 0.7, 3]),
    "erf(h)": (erf, [0, 0.7, 3]),
}


def series(function, at=0, below=BELOW):
    """Coefficients of h^0 ... below h^below, from values right of the point alone."""
    values = taylor(function, mpf(at), below - 1, singular=True, direction=1)
    return [value if abs(value) > mpf(10) ** -25 else mpf(0) for value in values]


def smooth_terms(function, at):
    return [(mpf(k), 0, value) for k, value in enumerate(series(function, at))]


def special_terms():
    """Cases at 0 that are no power series in h."""
    exponential = series(lambda y: exp(-y))
    yield "exp(-h^1.9)", [(mpf("1.9") * k, 0, value) for k, value in enumerate(exponential)]
    # acos(1-h) / sqrt(h), a power series in h
    root = series(lambda w: acos(1 - w) / sqrt(w))
    yield "acos(1-h)", [(k + mpf("0.5"), 0, value) for k, value in enumerate(root)]
    # acos(h-1) = pi - acos(1-h)
    yield "acos(h-1)", [(mpf(0), 0, +pi)] + [(k + mpf("0.5"), 0, -value) for k, value in enumerate(root)]
    # sqrt(sin(h)/h), a power series in h
    root = series(lambda w: sqrt(sin(w) / w))
    yield "sqrt(sin(h))", [(k + mpf("0.5"), 0, value) for k, value in enumerate(root) if value]
    # (1+y)^(1/3) with y = sqrt(h)
    cube = series(lambda y: (1 + y) ** (mpf(1) / 3), 0, 16)
    yield "(h+h^1.5)^(1/3)", [(mpf(1) / 3 + mpf(k) / 2, 0, value) for k, value in enumerate(cube)]
    yield "h^2*ln(h)", [(mpf(2), 1, mpf(1))]
    # ln(tan(h)/h), a power series in h
    rest = series(lambda w: ln(tan(w) / w))
    yield "ln(tan(h))", [(mpf(0), 1, mpf(1))] + [(mpf(k), 0, value) for k, value in enumerate(rest)]
    # exp(y) with y = h ln h
    yield "h^h", [(mpf(k), k, 1 / factorial(k)) for k in range(BELOW)]
    # tan(w) - 1/w about the pole at pi/2 is -1/w + ...: tan(pi/2 + h) = -cos(h)/sin(h)
    pole = series(lambda w: -w * cos(w) / sin(w), 0, BELOW + 1)
    yield "tan(pi/2+h)", [(mpf(k - 1), 0, value) for k, value in enumerate(pole)]


def text():
    lines = ["case,at,exponent,logs,coefficient"]
    cases = [(name, at, smooth_terms(function, at)) for name, (function, places) in SMOOTH.items() for at in places]
    cases += [(name, 0, terms) for name, terms in special_terms()]
    for name, at, terms in cases:
        for exponent, logs, value in terms:
            if exponent < BELOW:
                lines.append(f"{name},{at},{nstr(exponent, 17)},{logs},{nstr(value, 19)}")
    return "\n".join(lines) + "\n"


if __name__ == "__main__":
    path = pathlib.Path(__file__).with_suffix(".csv")
    if "--check" in sys.argv[1:]:
        sys.exit(0 if path.read_text(encoding="utf-8") == text() else f"{path} is out of date")
    path.write_text(text(), encoding="utf-8")
