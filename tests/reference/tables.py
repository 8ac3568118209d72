#!/usr/bin/env python3
"""Reference values of the special functions, by mpmath with at least fifty digits.

Without arguments writes normal.csv, gamma.csv and bessel.csv beside this file; with --check computes them again,
compares, and exits with status 1 on a difference. Arguments are the doubles that their shortest decimals denote.
"""

import pathlib
import sys

from mpmath import besselk, erfc, exp, gamma, log, loggamma, mp, mpf, nstr, pi, sqrt

DIGITS = 25
mp.dps = 60


def text(value):
    return nstr(value, DIGITS, strip_zeros=True)


def ln_scaled(x):
    """ln(1 - Phi(x)) + x²/2; far out by the asymptotic series, exact to 1e-500 there."""
    if x < 50:
        return log(erfc(x / sqrt(mpf(2))) / 2) + x * x / 2
    term = total = mpf(1)
    for k in range(1, 40):
        term *= -(2 * k - 1) / x**2
        total += term
    return log(total) - log(x * sqrt(2 * pi))


def ln_upper(x):
    return ln_scaled(x) - x * x / 2


def quantile_of_ln(ln_p):
    """Root of ln Phi(x) = ln_p by Newton's method."""
    if ln_p > -log(mpf(2)):
        return -quantile_of_ln(log(-mp.expm1(ln_p)))
    x = -sqrt(-2 * ln_p) if ln_p < -3 else mpf(0)
    for _ in range(200):
        slope = exp(-log(2 * pi) / 2 - ln_scaled(-x))
        step = (ln_upper(-x) - ln_p) / slope
        x -= step
        if abs(step) <= mpf(10) ** -50 * abs(x):
            return x
    raise ArithmeticError(f"no quantile of ln p = {ln_p}")


def normal():
    rows = []

    def add(function, argument, value):
        rows.append((function, repr(float(argument)), text(value)))

    points = [round(-37.3 + 0.37 * i, 2) for i in range(203)]
    points += [0.0, 1e-20, -1e-20, 1e-5, -1e-5, -0.5, -1.0, 0.5, 1.0, 37.5]
    for x in points:
        X = mpf(x)
        add("pdf", x, exp(-X * X / 2) / sqrt(2 * pi))
        add("ln_pdf", x, -X * X / 2 - log(2 * pi) / 2)
        add("upper", x, erfc(X / sqrt(mpf(2))) / 2)
        add("ln_upper", x, ln_upper(X) if X > -10 else mp.log1p(-erfc(-X / sqrt(mpf(2))) / 2))
    for x in [37.6, 38.0, 38.3, 38.45]:
        add("upper", x, erfc(mpf(x) / sqrt(mpf(2))) / 2)
    for x in [38.6, 50.0, 123.4, 1e3, 98765.4, 1e10, 1e50, 1e150, 1.3e154]:
        add("ln_upper", x, ln_upper(mpf(x)))
    points = [round(-26.0 + 0.41 * i, 2) for i in range(120)]
    for x in points + [11.999, 12.0, 12.001, 26.6, 50.0, 1e3, 1e8, 1e100, 1e300]:
        X = mpf(x)
        add("erfcx", x, 2 * exp(ln_scaled(X * sqrt(mpf(2)))))
    probabilities = [float(f"{m}e-{k}") for k in range(1, 301, 7) for m in (1, 3.7)]
    probabilities += [0.5, 0.4, 0.49, 0.499999, 0.25, 0.24999, 0.3]
    probabilities += [
        0.6, 0.75, 0.7500001, 0.9, 0.999, 1 - 1e-10, 0.50001, 1e-300, 1e-305, 1e-315, 5e-324, 1e-2, 1e-4,
        1e-6,
    ]
    for p in probabilities:
        add("quantile", p, mpf(0) if p == 0.5 else quantile_of_ln(log(mpf(p))))
    logs = [
        -1e-300, -1e-100, -1e-20, -1e-10, -1e-4, -0.01, -0.1, -0.3, -0.4, -0.5, -0.6, -0.65, -0.69, -0.6931,
        -0.6932, -0.7, -0.8,
    ]
    logs += [
        -0.94, -0.95, -1.0, -1.5, -2.0, -3.3, -5.0, -10.0, -33.3, -100.0, -345.6, -690.0, -699.99, -700.1,
        -707.0, -745.0, -1e3, -1e4,
    ]
    logs += [-123456.7, -1e6, -1e8, -1e10, -1e12, -1e15, -1e19, -1.1e20, -1e30, -1e100, -1e300, -1.7e308]
    for l in logs:
        add("quantile_of_ln", l, quantile_of_ln(mpf(l)))
    return ["function,argument,value"], rows


def gammas():
    rows = []
    points = [
        1e-6, 1e-3, 0.01, 0.1, 0.25, 0.5, 0.75, 0.99, 1.0, 1.01, 1.5, 1.99, 2.0, 2.01, 2.5, 3.3, 5.0, 7.77,
        9.99, 10.0, 10.01,
    ]
    points += [round(0.3 * 1.37**i, 3) for i in range(70)] + [1e8, 1e12]
    for x in points:
        X = mpf(x)
        if 1e-3 <= x <= 1e8:
            rows.append(("ln_gamma", repr(x), text(loggamma(X))))
        rows.append(("ratio_half", repr(x), text(exp(loggamma(X + mpf(1) / 2) - loggamma(X)))))
    return ["function,argument,value"], rows


def bessels():
    rows = []
    orders = [
        0.0, 1e-3, 0.1, 0.25, 0.3, 0.499999, 0.5, 0.500001, 0.7, 0.999999, 1.0, 1.000001, 1.3, 1.5, 1.500001,
        1.9, 2.0, 2.2, 2.5,
    ]
    orders += [
        3.0, 3.5, 3.500000001, 3.7, 5.0, 7.5, 8.500000001, 10.0, 11.9, 12.0, 12.5, 20.0, 50.5, 99.7, 150.0,
        200.0,
    ]
    lags = [
        1e-300, 1e-150, 1e-30, 1e-13, 1e-10, 1e-8, 1e-5, 1e-3, 0.01, 0.1, 0.5, 1.0, 1.7, 2.0, 2.01, 2.5, 3.4,
        3.5, 5.0, 7.0, 10.0, 14.0, 15.0, 20.0, 33.3,
    ]
    lags += [60.0, 100.0, 200.0, 400.0, 600.0, 700.0, 1000.0]
    for order in orders:
        for lag in lags:
            # Digits for the cancellation in 1 - M, and between the two series of K at nearly whole orders.
            mp.dps = 80 + (0 if lag >= 1e-2 else int(-4 * mp.log10(mpf(lag))))
            nu, x = mpf(order), mpf(lag)
            k = besselk(nu, x)
            scaled = exp(x) * k
            if scaled < mpf(10) ** 300:
                rows.append(("k", repr(order), repr(lag), text(scaled)))
            if order > 0:
                correlation = 2 ** (1 - nu) / gamma(nu) * x**nu * k
                if correlation > mpf(10) ** -290:
                    rows.append(("correlation", repr(order), repr(lag), text(correlation)))
                if lag >= 1e-150 and 1 - correlation > mpf(10) ** -300:
                    rows.append(("variogram", repr(order), repr(lag), text(1 - correlation)))
    mp.dps = 60
    return ["function,order,argument,value"], rows


def main():
    here = pathlib.Path(__file__).parent
    different = []
    for name, table in (("normal.csv", normal), ("gamma.csv", gammas), ("bessel.csv", bessels)):
        header, rows = table()
        content = "\n".join(header + [",".join(row) for row in rows]) + "\n"
        path = here / name
        if "--check" not in sys.argv[1:]:
            path.write_text(content)
        elif not path.exists() or path.read_text() != content:
            different.append(name)
    for name in different:
        print(f"{name} differs from what is computed now", file=sys.stderr)
    return 1 if different else 0


if __name__ == "__main__":
    sys.exit(main())
