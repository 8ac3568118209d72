#!/usr/bin/env python3
"""The program against general-purpose libraries, from outside: black_box.py BINARY [SEED]

Random models go through the binary's JSON and are computed again by other means: kernels by scikit-learn, splines by SciPy,
probabilities and moments by mpmath at 30 to 50 digits, from spectral densities or correlation functions as the literature
has them. Prints a line a family of checks, with the largest difference, its bound and where it arose; exits with 1 when a
bound is exceeded. Needs numpy, scipy, mpmath and scikit-learn.
"""

import json
import math
import random
import subprocess
import sys
import tempfile
from pathlib import Path

import mpmath as mp
import numpy as np
from scipy.integrate import quad
from scipy.interpolate import CubicSpline
from scipy.optimize import brentq
from scipy.special import expit, log_ndtr, roots_legendre
from sklearn.gaussian_process import kernels as sk

mp.mp.dps = 30
INFINITE = mp.inf


class Family:
    """The largest difference of a family of checks, and where it arose."""

    all = []

    def __init__(self, name, bound):
        self.name, self.bound = name, bound
        self.worst, self.place, self.count = 0.0, "", 0
        Family.all.append(self)

    def note(self, difference, place):
        self.count += 1
        difference = float(difference)
        if math.isnan(difference):
            difference = math.inf
        if difference > self.worst:
            self.worst, self.place = difference, place

    def relative(self, found, exact, place):
        """Against a number that may be infinite or 0; a missing number is a fault."""
        found = {"infinite": mp.inf, None: mp.nan}.get(found, found)
        if mp.isinf(exact) or mp.isinf(found):
            return self.note(0 if found == exact else mp.inf, place)
        self.note(abs(mp.mpf(found) - exact) / (abs(exact) if exact else 1), place)

    def absolute(self, found, exact, place):
        self.note(abs(mp.mpf(mp.nan if found is None else found) - exact), place)

    def report(self):
        verdict = "holds" if self.worst <= self.bound and self.count else "EXCEEDED"
        print(f"{self.name:<58} {self.count:6d} values, at most {self.worst:8.1e} of {self.bound:7.0e}  {verdict}")
        if verdict != "holds":
            print(f"    {self.place}")
        return verdict == "holds"


class Program:
    """The binary, and a folder for its files."""

    def __init__(self, binary, folder):
        self.binary, self.folder = Path(binary).resolve(), Path(folder)
        self.reached = Family("runs that left a result out of reach", 0)

    def run(self, text, command="evaluate"):
        path = self.folder / "model.limit"
        path.write_text(text)
        return subprocess.run([self.binary, command, "--json", path], capture_output=True, text=True, check=False)

    def results(self, text):
        done = self.run(text)
        if done.returncode not in (0, 1, 3):
            sys.exit(f"exit status {done.returncode} on\n{text}\n{done.stderr}")
        self.reached.note(done.returncode == 3, f"{done.stderr}{text}")
        return json.loads(done.stdout)

    def named(self, text):
        """Processes and margins by name."""
        found = self.results(text)
        return {one["name"]: one for one in found["processes"] + found["margins"]}

    def codes(self, text):
        """The codes of the errors; what is only looked at twice does not count."""
        found = json.loads(self.run(text, "check").stdout)["diagnostics"]
        return sorted({one["code"] for one in found if one["severity"] == "error"})


def number(value):
    """A double as the language reads it back."""
    return repr(float(value))


def moments_of(entry):
    return entry.get("spectral_moments", [None] * 4)


# --------------------------------------------------------------------------------------------- kernels by scikit-learn


def random_family(rng, depth):
    """A kernel as text, and scikit-learn's."""
    kind = rng.choice(["se", "matern", "matern", "rq", "sum", "product"] if depth else ["se", "matern", "matern", "rq"])
    length = math.exp(rng.uniform(-2, 2))
    if kind == "se":
        return f"squared_exponential(length: {number(length)} s)", sk.RBF(length)
    if kind == "matern":
        smoothness = rng.choice([0.5, 1.5, 2.5, round(rng.uniform(0.2, 6), 3), rng.uniform(0.2, 6)])
        text = f"matern(smoothness: {number(smoothness)}, length: {number(length)} s)"
        return text, sk.Matern(length, nu=smoothness)
    if kind == "rq":
        mixture = math.exp(rng.uniform(-2, 3))
        text = f"rational_quadratic(mixture: {number(mixture)}, length: {number(length)} s)"
        return text, sk.RationalQuadratic(length, mixture)
    one, one_kernel = random_family(rng, depth - 1)
    two, two_kernel = random_family(rng, depth - 1)
    if kind == "product":
        return f"({one}) * ({two})", one_kernel * two_kernel
    weight = rng.randint(1, 1023) / 1024
    text = f"({number(weight)} * ({one}) + {number(1 - weight)} * ({two}))"
    return text, sk.ConstantKernel(weight) * one_kernel + sk.ConstantKernel(1 - weight) * two_kernel


def kernels(program, rng):
    family = Family("kernels, sums and products against scikit-learn", 1e-12)
    for _ in range(80):
        text, kernel = random_family(rng, 2)
        lags = [math.exp(rng.uniform(-4, 2.5)) for _ in range(8)]
        lines = [f"process x = gaussian(standard_deviation: 1, correlation: {text})"]
        for index, lag in enumerate(lags):
            lines.append(f"margin plus{index} = x + delay(x, by: {number(lag)} s)")
            lines.append(f"margin minus{index} = x - delay(x, by: {number(lag)} s)")
        found = program.named("\n".join(lines))
        for index, lag in enumerate(lags):
            plus, minus = (found[f"{side}{index}"]["standard_deviation"] for side in ("plus", "minus"))
            expected = float(kernel(np.array([[0.0]]), np.array([[lag]]))[0, 0])
            family.absolute((plus * plus - minus * minus) / 4, expected, f"{text} at {lag}")


# --------------------------------------------------------------------------------------- moments of linear combinations


class Exponentials:
    """K(tau) = sum of Re(p(tau) exp(s tau)) for tau >= 0, the p polynomials: Matérn of half-integer smoothness, oscillators.

    Derivatives are exact: (p exp(s tau))' = (p' + s p) exp(s tau)."""

    def __init__(self, parts):
        self.orders = [[([mp.mpc(c) for c in p], mp.mpc(s)) for p, s in parts]]

    def derivative(self, order, tau):
        while len(self.orders) <= order:
            following = []
            for p, s in self.orders[-1]:
                slope = [k * c for k, c in enumerate(p)][1:] + [0]
                following.append(([s * c + d for c, d in zip(p, slope)], s))
            self.orders.append(following)
        return mp.fsum(mp.re(mp.polyval(p[::-1], tau) * mp.exp(s * tau)) for p, s in self.orders[order])

    def reach(self):
        """Where it has fallen by 35 digits or so."""
        return max(85 / -mp.re(s) for _, s in self.orders[0])


def matern(half, length):
    """Smoothness half + 1/2 (Rasmussen and Williams 2006, eq. 4.16)."""
    rate = mp.sqrt(2 * half + 1) / mp.mpf(length)
    polynomial = [
        mp.factorial(half) / mp.factorial(2 * half) * mp.factorial(half + i) / (mp.factorial(i) * mp.factorial(half - i))
        * (2 * rate) ** (half - i)
        for i in range(half + 1)
    ]
    return Exponentials([(polynomial[::-1], -rate)])


def oscillator(frequency, damping):
    """exp(-z w tau) (cos wd tau + z/sqrt(1-z^2) sin wd tau) as the real part of one complex exponential."""
    frequency, damping = mp.mpf(frequency), mp.mpf(damping)
    damped = mp.sqrt(1 - damping**2)
    return Exponentials([([mp.mpc(1, -damping / damped)], frequency * mp.mpc(-damping, damped))])


class Correlated:
    """Sources by their correlation function; terms are (coefficient, derivatives, delay)."""

    def __init__(self, text, kernel, tail):
        # tail: the density falls with omega^-tail
        self.text, self.kernel, self.tail = text, kernel, tail

    def covariance(self, terms, tau, order=0):
        """The derivative of the terms' autocovariance, at tau > 0 or from the right at 0."""
        total = mp.mpf(0)
        for a, n, d in terms:
            for b, m, e in terms:
                lag = tau + mp.mpf(d) - mp.mpf(e)
                k = n + m + order
                sign = -1 if lag < 0 and k % 2 else 1
                total += a * b * (-1) ** n * sign * self.kernel.derivative(k, abs(lag))
        return total

    def moment(self, terms, order):
        most = max(n for _, n, _ in terms)
        if self.tail - 2 * most - order <= 1:
            return INFINITE
        if order % 2 == 0:
            # At an even order the kinks of odd derivatives cancel in pairs.
            return (-1) ** (order // 2) * self.covariance(terms, mp.mpf(0), order)
        # lambda_1 = (2/pi) integral of (C(0) - C(tau))/tau^2: the pair 1/tau^2 and omega of cosine transforms.
        at_zero = self.covariance(terms, mp.mpf(0))
        curvature = self.covariance(terms, mp.mpf(0), 2)
        delays = [mp.mpf(d) for _, _, d in terms]
        spread = max(delays) - min(delays)
        end = self.kernel.reach() + spread
        kinks = sorted({abs(a - b) for a in delays for b in delays})
        points = [mp.mpf(0)] + [k for k in kinks if k > 0]
        step = self.step()
        while points[-1] < end:
            points.append(points[-1] + step)
            step *= mp.mpf("1.15") if len(points) > 40 else 1
        small = step * mp.mpf("1e-12")

        def integrand(tau):
            if tau < small:
                return -curvature / 2
            return (at_zero - self.covariance(terms, tau)) / tau**2

        return 2 / mp.pi * (mp.quad(integrand, points, maxdegree=7) + at_zero / points[-1])

    def step(self):
        return min(1 / abs(s) for _, s in self.kernel.orders[0]) * 3


class Spectral:
    """Sources by their one-sided density on an interval outside which it vanishes (or is below 1e-40)."""

    def __init__(self, text, density, lower, upper):
        self.text, self.density, self.lower, self.upper = text, density, mp.mpf(lower), mp.mpf(upper)

    def moment(self, terms, order):
        def transfer(omega):
            return mp.fsum(a * mp.mpc(0, omega) ** n * mp.expj(-omega * mp.mpf(d)) for a, n, d in terms)

        delays = [mp.mpf(d) for _, _, d in terms]
        pieces = int(2 + (max(delays) - min(delays)) * (self.upper - self.lower) / 6)
        points = mp.linspace(self.lower, self.upper, pieces + 1)
        return mp.quad(lambda w: w**order * abs(transfer(w)) ** 2 * self.density(w), points)


def random_source(rng):
    scale = math.exp(rng.uniform(-3, 3))
    kind = rng.choice(["se", "band", "matern", "matern", "oscillator"])
    if kind == "se":
        density = lambda w: mp.sqrt(2 / mp.pi) * mp.mpf(scale) * mp.exp(-((w * mp.mpf(scale)) ** 2) / 2)
        return Spectral(f"squared_exponential(length: {number(scale)} s)", density, 0, 15 / mp.mpf(scale)), scale
    if kind == "band":
        upper = 1 / scale
        lower = rng.choice([0, upper * rng.random()])
        density = lambda w: 1 / (mp.mpf(upper) - mp.mpf(lower))
        text = f"band_limited(lower: {number(lower)} rad/s, upper: {number(upper)} rad/s)"
        return Spectral(text, density, lower, upper), scale
    if kind == "matern":
        half = rng.randint(1, 6)
        text = f"matern(smoothness: {2 * half + 1}/2, length: {number(scale)} s)"
        return Correlated(text, matern(half, scale), 2 * half + 2), scale
    damping = rng.choice([0.05, 0.2, 0.7, 0.95])
    text = f"oscillator(frequency: {number(1 / scale)} rad/s, damping: {number(damping)})"
    return Correlated(text, oscillator(1 / scale, damping), 4), scale


def random_terms(rng, source, scale, name):
    """Terms of a process whose derivative variance is finite, and their text."""
    limit = 2 if isinstance(source, Spectral) else int(source.tail - 4) // 2
    terms, texts = [], []
    for _ in range(rng.choice([1, 1, 2, 2, 3])):
        coefficient = rng.choice([-1, 1]) * math.exp(rng.uniform(-1, 1))
        derivatives = rng.randint(0, min(2, limit)) if rng.random() < 0.5 else 0
        delay = rng.choice([0.0, scale * rng.uniform(0.05, 4), -scale * rng.uniform(0.05, 4)])
        if any((n, d) == (derivatives, delay) for _, n, d in terms):
            continue
        # Derivatives are worth as much as the process itself.
        coefficient *= scale**derivatives
        text = f"delay({name}, by: {number(delay)} s)" if delay else name
        text = "derivative(" * derivatives + text + ")" * derivatives
        unit = f" s^{derivatives}" if derivatives else ""
        texts.append(f"{number(coefficient)}{unit} * {text}")
        terms.append((mp.mpf(coefficient), derivatives, delay))
    return terms, " + ".join(f"({text})" for text in texts)


def forms(program, rng):
    even = Family("lambda_0, lambda_2, lambda_4 of one source, terms delayed", 1e-10)
    first = Family("lambda_1 of one source, terms delayed", 1e-7)
    plain = Family("lambda_1 of a source alone", 1e-10)
    width = Family("bandwidth, squared", 1e-7)
    several = Family("lambda_0, lambda_2, lambda_4 of several sources", 1e-10)
    for _ in range(110):
        parts = []
        for index in range(rng.choice([1, 1, 1, 2])):
            source, scale = random_source(rng)
            name = f"x{index}"
            parts.append((name, source, *random_terms(rng, source, scale, name)))
        lines = []
        for name, source, terms, text in parts:
            lines.append(f"process {name} = gaussian(standard_deviation: 1, correlation: {source.text})")
            lines.append(f"process form_{name} = {text}")
        lines.append("margin m = " + " + ".join(f"form_{name}" for name, *_ in parts))
        model = "\n".join(lines)
        found = program.named(model)
        sums = [mp.mpf(0)] * 4
        for name, source, terms, _ in parts:
            exact = [source.moment(terms, order) for order in (0, 1, 2, 4)]
            sums = [a + b for a, b in zip(sums, exact)]
            values = moments_of(found[f"form_{name}"])
            alone = len(terms) == 1 and terms[0][1] == 0
            for value, moment, order in zip(values, exact, (0, 1, 2, 4)):
                group = even if order != 1 else plain if alone else first
                group.relative(value, moment, f"lambda_{order} {value} not {mp.nstr(moment, 17)} of {name} in\n{model}")
        if len(parts) > 1:
            for place, order in ((0, 0), (2, 2), (3, 4)):
                several.relative(moments_of(found["m"])[place], sums[place], model)
        squared = 1 - sums[1] ** 2 / (sums[0] * sums[2])
        width.absolute(found["m"].get("bandwidth", math.nan) ** 2, squared, model)


def differences(program, rng):
    """X(t) - X(t - d) for a short d: what a kernel loses over d is a small difference."""
    first = Family("lambda_1 of X(t) - X(t - d), d down to 1e-3 of the length", 1e-9)
    even = Family("lambda_0 and lambda_2 of the same", 1e-8)
    for _ in range(12):
        scale = math.exp(rng.uniform(-3, 3))
        delay = scale * 10 ** rng.uniform(-3, -1)
        half = rng.randint(2, 4)
        smooth = f"squared_exponential(length: {number(scale)} s)"
        rough = f"matern(smoothness: {2 * half + 1}/2, length: {number(2 * scale)} s)"
        bell = lambda t: mp.exp(-((t / mp.mpf(scale)) ** 2) / 2)
        spiked = matern(half, 2 * scale)
        kind = rng.randrange(3)
        text = [smooth, rough, f"{smooth} * {rough}"][kind]
        rho = [bell, lambda t: spiked.derivative(0, t), lambda t: bell(t) * spiked.derivative(0, t)][kind]
        model = f"process x = gaussian(standard_deviation: 1, correlation: {text})\nmargin m = x - delay(x, by: {number(delay)} s)"
        reported = moments_of(program.named(model)["m"])
        with mp.workdps(60):
            unit, d = mp.mpf(scale), mp.mpf(delay)
            covariance = lambda t: 2 * rho(t) - rho(t + d) - rho(abs(t - d))
            variance = covariance(mp.mpf(0))
            lost = lambda t: (variance - covariance(max(t, unit * mp.mpf("1e-15")))) / max(t, unit * mp.mpf("1e-15")) ** 2
            lags = [0, d / 100, d / 10, d / 2, d, 2 * d, 10 * d]
            lags += [unit * k for k in (mp.mpf("0.3"), 1, 2, 4, 8, 16, 32, 64, 200) if unit * k > lags[-1]]
            exact = 2 / mp.pi * (mp.quad(lost, lags) + variance / lags[-1])
            even.relative(reported[0], variance, model)
            even.relative(reported[2], 2 * lost(mp.mpf(0)), model)
            first.relative(reported[1], exact, f"lambda_1 {reported[1]} not {mp.nstr(exact, 15)} in\n{model}")


# ----------------------------------------------------------------------------------- rates, survival, reliability index

UNITS = [("kN", 1000), ("N", 1), ("MPa", 10**6), ("mm", mp.mpf(1) / 1000), ("m", 1)]
TIMES = [("ms", mp.mpf(1) / 1000), ("s", 1), ("h", 3600), ("day", 86400), ("year", 31557600)]


def tail(x):
    return mp.erfc(x / mp.sqrt(2)) / 2


def index_of(failure, survival):
    """-Phi^-1(failure), by Newton's method on the logarithm of the smaller tail."""
    if failure > survival:
        return -index_of(survival, failure)
    target = mp.log(failure)
    x = mp.sqrt(max(-2 * target - mp.log(2 * mp.pi), mp.mpf("0.01")))
    for _ in range(100):
        step = (mp.log(tail(x)) - target) * tail(x) / (mp.npdf(x))
        x += step
        if abs(step) < mp.mpf(10) ** -35:
            break
    return x


def passages(program, rng):
    mp.mp.dps = 50
    failure = Family("failure probability from 0.5 down to 1e-300", 1e-9)
    survival = Family("survival where failure is likelier", 1e-9)
    index = Family("reliability index, over max(1, index)", 1e-9)
    start = Family("failure probability at the start", 1e-9)
    rates = Family("rate of entries", 1e-9)
    lives = Family("mean time to failure", 1e-9)
    honest = Family("miss over the stated relative error", 1)
    for number_of_run in range(60):
        unit, size = rng.choice(UNITS)
        mean, deviation = rng.uniform(-5, 5), math.exp(rng.uniform(-2, 2))
        length = math.exp(rng.uniform(-6, 8))
        smoothness = rng.choice([1.5, 2.5, round(rng.uniform(1.2, 6), 2)])
        lines = [
            f"process load : {unit} = gaussian(mean: {number(mean)} {unit}, standard_deviation: {number(deviation)} {unit},"
            f" correlation: matern(smoothness: {number(smoothness)}, length: {number(length)} s))"
        ]
        frequency = mp.sqrt(mp.mpf(smoothness) / (mp.mpf(smoothness) - 1)) / mp.mpf(length)
        cases = []
        for case in range(16):
            reduced = rng.choice([0.0, rng.uniform(0, 3), rng.uniform(0, 8), rng.uniform(0, 38)])
            other = reduced + rng.choice([0.0, rng.uniform(0, 0.1), rng.uniform(0, 10)])
            if rng.random() < 0.1:
                reduced = -reduced / 8
            kind = rng.choice(["below", "above", "abs", "outside"])
            lower, upper = mean - reduced * deviation, mean + other * deviation
            if kind == "below":
                condition, levels = f"load < {number(lower)} {unit}", (lower, None)
            elif kind == "above":
                condition, levels = f"load > {number(upper)} {unit}", (None, upper)
            elif kind == "abs":
                level = abs(upper)
                condition, levels = f"abs(load) > {number(level)} {unit}", (-level, level)
            else:
                if not lower < upper:
                    continue
                condition, levels = f"load outside {number(lower)} {unit} to {number(upper)} {unit}", (lower, upper)
            time_unit, seconds = rng.choice(TIMES)
            time = float(f"{math.exp(rng.uniform(0, 7)):.4g}")
            method = rng.choice(["poisson", "poisson_safe_start"])
            lines.append(
                f"limit state s{case} {{ failure when {condition} reference period {number(time)} {time_unit}"
                f" first passage {method} tabulate at 1 {time_unit} }}"
            )
            cases.append((f"s{case}", levels, mp.mpf(time) * seconds, mp.mpf(seconds), method, condition))
        model = "\n".join(lines)
        found = {one["name"]: one for one in program.results(model)["limit_states"]}
        for name, (lower, upper), period, first_time, method, condition in cases:
            one = found[name]
            r = [(mp.mpf(mean) - lower) / deviation if lower is not None else None,
                 (mp.mpf(upper) - mean) / deviation if upper is not None else None]
            r = [x for x in r if x is not None]
            initial = mp.fsum(tail(x) for x in r)
            safe = tail(-r[0]) if len(r) == 1 else 1 - initial if initial < 0.9 else between(*r)
            rate = frequency / (2 * mp.pi) * mp.fsum(mp.exp(-x * x / 2) for x in r)
            hazard = rate if method == "poisson" else rate / safe
            place = f"{name}: {condition}, {method}, {mp.nstr(period, 8)} s in\n{model}"
            if initial > mp.mpf("1e-300"):
                start.relative(one["initial_failure_probability"], initial, place)
            if rate > mp.mpf("1e-300"):
                rates.relative(one["upcrossing_rate"], rate, place)
            if safe / hazard < mp.mpf("1e300"):
                lives.relative(one["mean_time_to_failure"], safe / hazard, place)
            table = one["table"][0]
            for entry, time in ((one, period), (table, first_time)):
                lasting = safe * mp.exp(-hazard * time)
                failing = initial - safe * mp.expm1(-hazard * time)
                if failing > 0.5 and lasting > mp.mpf("1e-300"):
                    survival.relative(entry["survival"], lasting, place)
                if mp.mpf("1e-300") < failing <= 0.5:
                    failure.relative(entry["failure_probability"], failing, place)
                    miss = abs(entry["failure_probability"] / failing - 1)
                    honest.note(miss / one["relative_error"], place)
                if lasting > mp.mpf("1e-10000") and failing > mp.mpf("1e-10000"):
                    beta = index_of(failing, lasting)
                    index.absolute(entry["reliability_index"] / max(1, abs(beta)), beta / max(1, abs(beta)), place)
    mp.mp.dps = 30


def between(lower, upper):
    """The probability of lying between -lower and upper standard deviations of the mean."""
    return mp.quad(mp.npdf, [-lower, upper]) if upper + lower < 1 else tail(-upper) - tail(lower)


# ---------------------------------------------------------------------------------------------------------- extremes


def extremes(program, rng):
    """Fractiles, design values and means of extremes by root finding and quadrature of SciPy, by all three methods."""
    fractiles = Family("extremes: fractiles and design values, in standard deviations", 1e-9)
    means = Family("extremes: mean, in standard deviations", 1e-8)
    clumped = Family("extremes: failure probability by vanmarcke", 1e-9)
    for _ in range(60):
        mean, deviation = rng.uniform(-5, 5), math.exp(rng.uniform(-2, 2))
        frequency, damping = math.exp(rng.uniform(-3, 3)), math.exp(rng.uniform(-5, -0.5))
        damped = math.sqrt(1 - damping**2)
        first = 2 / math.pi * math.atan2(damped, damping) / damped
        bandwidth = math.sqrt(1 - first**2)
        kind = rng.choice(["above", "below", "abs"])
        method = rng.choice(["poisson", "poisson_safe_start", "vanmarcke"])
        if kind == "abs":
            mean = 0.0
        period = float(f"{math.exp(rng.uniform(0, 14)) / frequency:.4g}")
        cycles = frequency / (2 * math.pi) * period
        fractile = rng.choice([0.5, 0.9, 0.98, round(rng.uniform(0.05, 0.999), 4)])
        rarity = float(f"{math.exp(rng.uniform(-200, -3)):.6g}")
        sign = -1 if kind == "below" else 1
        barrier = mean + sign * deviation * rng.uniform(0.5, 9)
        condition = f"abs(x) > {number(barrier)}" if kind == "abs" else f"x {'<' if sign < 0 else '>'} {number(barrier)}"
        model = (
            f"process x = gaussian(mean: {number(mean)}, standard_deviation: {number(deviation)},"
            f" correlation: oscillator(frequency: {number(frequency)} rad/s, damping: {number(damping)}))\n"
            f"limit state s {{ failure when {condition} reference period {number(period)} s first passage {method}"
            f" extremes at {number(fractile)} }}\n"
            f"expect extreme(s, failure_probability: {rarity}) = 0 within 0 %"
        )
        sides = 2 if kind == "abs" else 1

        def logarithms(r):
            """ln of failing and of lasting with the barrier at r standard deviations."""
            ln_start = math.log(sides) + log_ndtr(-r)
            if sides == 1:
                ln_safe = log_ndtr(r)
            else:
                ln_safe = math.log(math.erf(r / math.sqrt(2))) if r < 1 else math.log1p(-math.exp(ln_start))
            ln_hazard = math.log(sides * cycles) - r * r / 2
            if method == "poisson_safe_start":
                ln_hazard -= ln_safe
            if method == "vanmarcke":
                k = math.sqrt(2 * math.pi) if sides == 1 else math.sqrt(math.pi / 2)
                ln_hazard += math.log(-math.expm1(-k * bandwidth**1.2 * r)) - math.log(-math.expm1(-r * r / 2))
            ln_lasting = ln_safe - math.exp(min(ln_hazard, 700))
            ln_chance = ln_hazard if ln_hazard < -37 else math.log(-math.expm1(-math.exp(min(ln_hazard, 700))))
            return float(np.logaddexp(ln_start, ln_safe + ln_chance)), ln_lasting

        least = 1e-9 if method == "vanmarcke" or sides == 2 else -9.0

        def level(target):
            """The outermost root, from far out."""
            outer = 40.0
            while target(outer - 0.05) < 0 and outer - 0.05 > least:
                outer -= 0.05
            return brentq(target, max(outer - 0.05, least), outer, xtol=1e-14, rtol=1e-14)

        one = program.results(model)
        state, expectation = one["limit_states"][0], one["expectations"][0]
        place = f"{model}\nbandwidth {bandwidth}"
        r = abs(barrier - mean) / deviation
        if logarithms(r)[0] < math.log(0.5):
            clumped.relative(state["failure_probability"], mp.exp(mp.mpf(float(logarithms(r)[0]))), place)
        found = (state["extremes"]["levels"][0]["level"] - mean) * sign / deviation
        fractiles.absolute(found, level(lambda x: math.log(fractile) - logarithms(x)[1]), place)
        found = (expectation["value"] - mean) * sign / deviation
        fractiles.absolute(found, level(lambda x: logarithms(x)[0] - math.log(rarity)), place)
        # Where survival by `poisson` is no distribution, below the mean, the program says what it does; not compared.
        if method == "poisson" and sides == 1 and 0.9 < cycles < 30:
            continue
        floor = max(least, 0.0) if method == "poisson" and cycles > 0.9 else least
        middle = level(lambda x: math.log(0.5) - logarithms(x)[1])
        steps = [middle + (40 - middle) * t for t in (0, 0.02, 0.05, 0.1, 0.2, 0.4, 1)]
        outer = sum(quad(lambda x: math.exp(logarithms(x)[0]), a, b, epsabs=1e-13, epsrel=1e-12)[0]
                    for a, b in zip(steps, steps[1:]))
        steps = [floor + (middle - floor) * t for t in (0, 0.25, 0.5, 0.75, 0.9, 1)]
        inner = sum(quad(lambda x: math.exp(logarithms(x)[1]), a, b, epsabs=1e-13, epsrel=1e-12)[0]
                    for a, b in zip(steps, steps[1:]))
        found = (state["extremes"]["mean"] - mean) * sign / deviation
        means.absolute(found, middle + outer - inner, place)


# -------------------------------------------------------------------------------------------- user and tabulated kernels


def user_kernels():
    """Body in tau, p (a time) and w (per second); the same in mpmath; spectral moments that are infinite; crossings."""
    rad = "(w * tau * 1 rad)"
    return [
        ("exp(-(tau / p)^2)", lambda t, p, w: mp.exp(-((t / p) ** 2)), (), True),
        ("(1 + tau / p) * exp(-tau / p)", lambda t, p, w: (1 + t / p) * mp.exp(-t / p), (4,), True),
        ("1 / (1 + (tau / p)^2)", lambda t, p, w: 1 / (1 + (t / p) ** 2), (), True),
        ("exp(-(tau / p)^1.9)", lambda t, p, w: mp.exp(-((t / p) ** mp.mpf(1.9))), (2, 4), False),
        ("exp(-(tau / p)^0.8)", lambda t, p, w: mp.exp(-((t / p) ** mp.mpf(0.8))), (1, 2, 4), False),
        (f"exp(-tau / p) * (cos{rad} + sin{rad} / (w * p))",
         lambda t, p, w: mp.exp(-t / p) * (mp.cos(w * t) + mp.sin(w * t) / (w * p)), (4,), True),
        (f"exp(-tau / p) * cos{rad}", lambda t, p, w: mp.exp(-t / p) * mp.cos(w * t), (1, 2, 4), False),
        ("1 / cosh(tau / p)", lambda t, p, w: mp.sech(t / p), (), True),
        (f"exp(-(tau / p)^2 / 2) * cos{rad}", lambda t, p, w: mp.exp(-((t / p) ** 2) / 2) * mp.cos(w * t), (), True),
        ("exp(1 - sqrt(1 + (tau / p)^2))", lambda t, p, w: mp.exp(1 - mp.sqrt(1 + (t / p) ** 2)), (), True),
        ("(1 + tau / p + (tau / p)^2 / 3) * exp(-tau / p)",
         lambda t, p, w: (1 + t / p + (t / p) ** 2 / 3) * mp.exp(-t / p), (), True),
        ("exp(1 / (1 + (tau / p)^2) - 1)", lambda t, p, w: mp.exp(1 / (1 + (t / p) ** 2) - 1), (), True),
        ("1.5 * exp(-tau / p) - 0.5 * exp(-3 * tau / p)",
         lambda t, p, w: 1.5 * mp.exp(-t / p) - 0.5 * mp.exp(-3 * t / p), (4,), True),
        ("exp(-tau / p)", lambda t, p, w: mp.exp(-t / p), (1, 2, 4), False),
        (f"exp(0.5 * (cos{rad} - 1)) * exp(-(tau / p)^2)",
         lambda t, p, w: mp.exp((mp.cos(w * t) - 1) / 2) * mp.exp(-((t / p) ** 2)), (), True),
    ]


def written_kernels(program, rng):
    even = Family("user kernels: lambda_0, lambda_2, lambda_4", 1e-10)
    first = Family("user kernels: lambda_1", 1e-7)
    smooth = Family("user kernels: crossings counted or refused", 0)
    values = Family("user kernels: correlation at a lag", 1e-12)
    for body, function, infinite, crossable in user_kernels():
        for _ in range(3):
            p, w = math.exp(rng.uniform(-5, 5)), 0.0
            w = rng.uniform(0.3, 2) / p
            lag = p * rng.uniform(0.1, 3)
            declared = f"kernel k(tau, p: s, w: /s) = {body}\n"
            model = (
                declared + f"process x = gaussian(standard_deviation: 1, correlation: k(p: {number(p)} s, w: {number(w)} /s))\n"
                f"margin plus = x + delay(x, by: {number(lag)} s)\nmargin minus = x - delay(x, by: {number(lag)} s)"
            )
            found = program.named(model)
            p, w = mp.mpf(p), mp.mpf(w)
            rho = lambda t: function(mp.mpf(t), p, w)
            plus, minus = (found[side]["standard_deviation"] for side in ("plus", "minus"))
            values.absolute((plus * plus - minus * minus) / 4, rho(lag), model)
            reported = moments_of(found["x"])
            for place, order in ((0, 0), (2, 2), (3, 4)):
                if order == 0:
                    exact = mp.mpf(1)
                elif order in infinite:
                    exact = INFINITE
                else:
                    exact = derivative_at_zero(rho, order, p)
                even.relative(reported[place], exact, f"lambda_{order} {reported[place]} not {mp.nstr(exact, 15)}\n{model}")
            exact = INFINITE if 1 in infinite else first_moment(rho, p, float(w))
            first.relative(reported[1], exact, f"lambda_1 {reported[1]} not {mp.nstr(exact, 15)}\n{model}")
            refused = program.codes(model + "\nlimit state l { failure when x > 3 reference period 1 s }")
            smooth.note(refused != ([] if crossable else ["process/not-differentiable"]), f"{refused}\n{model}")


def derivative_at_zero(rho, order, scale):
    """(-1)^(order/2) times the derivative from the right, by Richardson extrapolation at 120 digits."""
    with mp.workdps(160):
        step = mp.mpf(scale) * mp.mpf("1e-16")
        points = 12
        # The coefficient of tau^order of the polynomial through points near 0.
        matrix = mp.matrix(points, points)
        right = mp.matrix(points, 1)
        for i in range(points):
            for j in range(points):
                matrix[i, j] = mp.mpf(i) ** j
            right[i] = rho(step * i)
        coefficient = mp.lu_solve(matrix, right)[order]
        return (-1) ** (order // 2) * coefficient / step**order * mp.factorial(order)


def first_moment(rho, scale, w):
    """(2/pi) times the integral of (1 - rho)/tau^2."""
    scale = mp.mpf(scale)
    with mp.workdps(40):
        step = min(scale, 3 / mp.mpf(w))
        points = [0, step / 100, step / 10] + [step * k for k in range(1, 60)]
        head = mp.quad(lambda t: (1 - rho(t)) / t**2 if t > scale * mp.mpf("1e-18") else mp.mpf(0), points)
        rest = mp.quad(lambda t: rho(t) / t**2, [points[-1] * mp.mpf(2) ** k for k in range(60)])
        return 2 / mp.pi * (head + 1 / points[-1] - rest)


def tables(program, rng):
    even = Family("tabulated kernels: lambda_0, lambda_2", 1e-10)
    first = Family("tabulated kernels: lambda_1", 1e-7)
    values = Family("tabulated kernels: correlation at a lag", 1e-12)
    for _ in range(30):
        scale = math.exp(rng.uniform(-3, 5))
        rows = rng.randint(12, 40)
        lags = np.concatenate([[0.0], np.cumsum([scale * rng.uniform(0.1, 0.4) for _ in range(rows)])])
        lags *= max(1.0, 6 * scale / lags[-1])
        correlations = np.exp(-0.5 * (lags / scale) ** 2) * np.cos(0.7 * lags / scale)
        (program.folder / "table.csv").write_text(
            "lag [s],correlation\n" + "\n".join(f"{float(a)!r},{float(b)!r}" for a, b in zip(lags, correlations)) + "\n"
        )
        beyond = rng.choice(["zero", "hold"])
        lag = rng.uniform(0, float(lags[-1]))
        model = (
            f'process x = gaussian(standard_deviation: 1, correlation: tabulated("table.csv", beyond: {beyond}))\n'
            f"margin plus = x + delay(x, by: {number(lag)} s)\nmargin minus = x - delay(x, by: {number(lag)} s)"
        )
        found = program.named(model)
        spline = CubicSpline(lags, correlations, bc_type=((1, 0.0), (2, 0.0)))
        plus, minus = (found[side]["standard_deviation"] for side in ("plus", "minus"))
        place = f"{model}\n{lags} {correlations}"
        values.absolute((plus * plus - minus * minus) / 4, float(spline(lag)), place)
        reported = moments_of(found["x"])
        even.relative(reported[0], mp.mpf(1), place)
        even.relative(reported[2], mp.mpf(-float(spline(0.0, 2))), place)
        # (2/pi) integral of (1 - rho)/tau^2, each cubic piece in closed form by mpmath.
        total = mp.mpf(0)
        for k in range(rows):
            d, c, b, a = (mp.mpf(float(v)) for v in spline.c[:, k])
            start, end = mp.mpf(lags[k]), mp.mpf(lags[k + 1])
            if k == 0:
                total += -c * end - d * end**2 / 2
            else:
                total += mp.quad(lambda t: (1 - (a + (t - start) * (b + (t - start) * (c + (t - start) * d)))) / t**2,
                                 [start, end])
        plateau = mp.mpf(float(correlations[-1])) if beyond == "hold" else mp.mpf(0)
        exact = 2 / mp.pi * (total + (1 - plateau) / mp.mpf(lags[-1]))
        first.relative(reported[1], exact, place)


# ------------------------------------------------------------------------------------ responses by SciPy's quadrature


def random_kernel(rng):
    """A kernel as text, its one-sided density over omega, the power with which that falls, and frequencies of its shape."""
    kind = rng.choice(["se", "exponential", "matern", "matern", "cosine", "oscillator"])
    length = math.exp(rng.uniform(-1.5, 1.5))
    if kind == "se":
        density = lambda w: math.sqrt(2 / math.pi) * length * np.exp(-0.5 * (w * length) ** 2)
        return f"squared_exponential(length: {number(length)} s)", density, math.inf, [1 / length, 8 / length]
    if kind in ("exponential", "matern"):
        nu = 0.5 if kind == "exponential" else rng.choice([1.5, 2.5, rng.randint(0, 3) + rng.choice([0.7, 0.8, 0.85])])
        a = math.sqrt(2 * nu) / length if kind == "matern" else 1 / length
        factor = 2 / math.sqrt(math.pi) * math.gamma(nu + 0.5) / math.gamma(nu)
        density = lambda w: factor / a * (1 + (w / a) ** 2) ** -(nu + 0.5)
        text = f"matern(smoothness: {number(nu)}, length: {number(length)} s)" if kind == "matern" else f"exponential(length: {number(length)} s)"
        return text, density, 2 * nu + 1, [a, 8 * a]
    w0 = math.exp(rng.uniform(-1, 2))
    if kind == "cosine":
        a = 1 / length
        density = lambda w: a / math.pi * (1 / (a * a + (w - w0) ** 2) + 1 / (a * a + (w + w0) ** 2))
        text = f"damped_cosine(length: {number(length)} s, frequency: {number(w0)} rad/s)"
        return text, density, 2, graded(w0, a)
    z = math.exp(rng.uniform(-6, -0.3))
    density = lambda w: 4 * z * w0**3 / math.pi / ((w0**2 - w**2) ** 2 + (2 * z * w0 * w) ** 2)
    return f"oscillator(frequency: {number(w0)} rad/s, damping: {number(z)})", density, 4, graded(w0, z * w0)


def graded(peak, width):
    return [x for k in range(7) for x in (peak - width * 4**k, peak + width * 4**k) if x > 0] + [peak, 4 * peak]


class Response:
    """A random chain of operations as text, its transfer function, and the same by instants: averages taken apart."""

    def __init__(self, rng, exponent):
        self.text, self.exponent, self.frequencies = "x", exponent, []
        self.plain, self.instants = [], {0.0: 1.0}
        self.power, self.averages = 0, []
        for _ in range(rng.randint(1, 4)):
            self.operate(rng, rng.choice(["oscillator", "oscillator", "first", "average", "delay", "derivative"]))

    def operate(self, rng, kind):
        if kind == "oscillator":
            w0, z = math.exp(rng.uniform(-1, 2)), math.exp(rng.uniform(-6.9, 0.4))
            system = f"oscillator(frequency: {number(w0)} rad/s, damping: {number(z)}, gain: 1)"
            self.plain.append(lambda w: w0**2 / (w0**2 - w**2 + 2j * z * w0 * w))
            self.frequencies += graded(w0, z * w0)
            self.text, self.exponent = f"respond({self.text}, through: {system})", self.exponent + 4
        elif kind == "first":
            time = math.exp(rng.uniform(-2, 2))
            self.plain.append(lambda w: 1 / (1 + 1j * w * time))
            self.frequencies += [1 / time, 8 / time]
            self.text, self.exponent = f"respond({self.text}, through: first_order(time_constant: {number(time)} s))", self.exponent + 2
        elif kind == "average" and len(self.averages) < 2:
            over = math.exp(rng.uniform(-1.5, 1.5))
            self.averages.append(over)
            self.frequencies += [1 / over, 8 / over]
            self.text, self.exponent = f"average({self.text}, over: {number(over)} s)", self.exponent + 2
        elif kind == "delay":
            by = rng.uniform(-2, 2)
            self.instants = {at + by: weight for at, weight in self.instants.items()}
            self.text = f"delay({self.text}, by: {number(by)} s)"
        elif kind == "derivative" and self.exponent > 3 and self.power < 3:
            self.power += 1
            self.text, self.exponent = f"derivative({self.text})", self.exponent - 2

    def rational(self, w):
        value = (1j * w) ** self.power
        for system in self.plain:
            value = value * system(w)
        return value

    def whole(self, w):
        value = self.rational(w)
        for over in self.averages:
            value = value * np.exp(-0.5j * w * over) * np.sinc(w * over / (2 * math.pi))
        return value * sum(weight * np.exp(-1j * w * at) for at, weight in self.instants.items())

    def by_instant(self, w):
        """What comes at each instant, without the wave exp(-i w t) that its lateness makes."""
        value, instants = self.rational(w), dict(self.instants)
        for over in self.averages:
            value = value / (1j * w * over)
            split = {}
            for at, weight in instants.items():
                split[at] = split.get(at, 0) + weight
                split[at + over] = split.get(at + over, 0) - weight
            instants = split
        return {round(at, 12): weight * value for at, weight in instants.items()}


def integral(function, breakpoints):
    """SciPy's Gauss-Legendre rule of 24 points on every panel."""
    nodes, weights = roots_legendre(24)
    breakpoints = np.asarray(breakpoints)
    half = 0.5 * np.diff(breakpoints)
    middle = breakpoints[:-1] + half
    values = function((middle[:, None] + half[:, None] * nodes).ravel())
    return values.reshape(values.shape[:-1] + (len(half), len(nodes))) @ weights @ half


def panels(frequencies, start, end, widest):
    steps = [w for w in frequencies if start < w < end]
    steps += list(np.geomspace(max(start, 1e-4 * end), end, 60))
    steps = [start] + sorted(set(steps))
    cut = [np.linspace(a, b, max(2, math.ceil((b - a) / widest) + 1))[:-1] for a, b in zip(steps, steps[1:])]
    return np.concatenate(cut + [[end]])


def systems(program, rng):
    families = [Family(f"responses: lambda_{n}", 1e-7) for n in (0, 1, 2, 4)]
    for batch in range(25):
        lines, cases = [], []
        for case in range(12):
            text, density, exponent, frequencies = random_kernel(rng)
            parts = [(1.0, Response(rng, exponent))]
            parts += [(rng.uniform(-2, 2), Response(rng, exponent)) for _ in range(rng.randint(0, 2))]
            unit = lambda part: f" s^{part.power}" if part.power else ""
            margin = " + ".join(f"({number(c)}{unit(part)}) * {part.text}" for c, part in parts).replace("(x", f"(x{case}")
            margin = margin.replace("* x", f"* x{case}")
            lines.append(f"process x{case} = gaussian(standard_deviation: 1, correlation: {text})\nmargin m{case} = {margin}")
            cases.append((density, min(part.exponent for _, part in parts), frequencies, parts, lines[-1]))
        found = program.named("\n".join(lines))
        for case, (density, exponent, frequencies, parts, place) in enumerate(cases):
            reported = moments_of(found[f"m{case}"])
            frequencies = frequencies + [w for _, part in parts for w in part.frequencies]
            for family, value, exact in zip(families, reported, exact_moments(density, exponent, frequencies, parts)):
                family.relative(value, mp.mpf(exact), f"{value} not {exact} in\n{place}")


def exact_moments(density, exponent, frequencies, parts):
    """lambda_0, lambda_1, lambda_2 and lambda_4. Far out the waves between instants fade out smoothly over many periods,
    where they add nothing; what is left goes on over the logarithm of frequency."""
    orders = np.array([0, 1, 2, 4])
    finite = orders + 1 < exponent

    def powers(w, values):
        return np.array([w**n for n in orders[finite]]) * (density(w) * values)

    def with_waves(w):
        return abs(sum(c * part.whole(w) for c, part in parts)) ** 2

    def without(w):
        instants = {}
        for c, part in parts:
            for at, value in part.by_instant(w).items():
                instants[at] = instants.get(at, 0) + c * value
        return sum(abs(value) ** 2 for value in instants.values())

    def fading(w):
        share = np.clip(w / end - 1, 1e-3, 1 - 1e-3)
        left = expit(1 / share - 1 / (1 - share))
        return powers(w, left * with_waves(w) + (1 - left) * without(w))

    latest = [at for _, part in parts for at in part.by_instant(np.array([1.0]))]
    span = max(latest) - min(latest)
    end = max(frequencies) * 150
    while span * end > 5e4:
        end /= 2
    widest = 2 * math.pi / span if span else 2 * end
    total = integral(lambda w: powers(w, with_waves(w)), panels(frequencies, 0.0, end, widest))
    total = total + integral(fading, panels([], end, 2 * end, min(widest, end / 30)))
    far = max(60, min(600, 25 / (exponent - orders[finite].max() - 1))) if math.isfinite(exponent) else 20
    beyond = lambda x: powers(np.exp(x), np.exp(x) * without(np.exp(x)))
    total = total + integral(beyond, np.linspace(math.log(2 * end), math.log(2 * end) + far, 600))
    exact = np.full(4, np.inf)
    exact[finite] = total
    return exact


# ------------------------------------------------------------------------------------ spectra by SciPy's quadrature


def random_spectrum(rng):
    """A spectrum as text, its one-sided density over omega, the powers with which it begins and falls, its frequencies, and
    declarations it needs."""
    kind = rng.choice(["sea", "sea", "wind", "ground", "ground", "clough", "band", "power", "gamma", "rational"])
    index = rng.randrange(10**9)
    if kind == "sea":
        hs, tp, gamma = rng.uniform(0.2, 12), rng.uniform(2, 20), rng.choice([1, 3.3, rng.uniform(1, 7)])
        peak = 2 * math.pi / tp

        def form(x):
            y = np.maximum(x, 0.05)
            sharp = np.exp(-0.5 * ((y - 1) / np.where(y < 1, 0.07, 0.09)) ** 2)
            return np.where(x > 0.05, y**-5 * np.exp(-1.25 * y**-4) * gamma**sharp, 0.0)

        marks = [peak * m for m in (0.3, 0.5, 0.65, 0.8, 0.86, 0.93, 1, 1.09, 1.18, 1.36, 1.8)]
        area = by_logarithm(form, 5, math.inf, [m / peak for m in marks], 0)
        density = lambda w: hs**2 / 16 / peak / area * form(w / peak)
        text = f"jonswap(hs: {number(hs)} m, tp: {number(tp)} s, peak_enhancement: {number(gamma)})"
        if gamma == 1 and rng.random() < 0.5:
            text = f"pierson_moskowitz(hs: {number(hs)} m, tp: {number(tp)} s)"
        return text, density, math.inf, 5, marks, ""
    if kind == "wind":
        length, speed = rng.uniform(20, 1500), rng.uniform(2, 60)
        a = length / speed / (2 * math.pi)
        name = rng.choice(["kaimal", "von_karman", "davenport"])
        area = math.sqrt(math.pi) / 2 * math.gamma(1 / 3) / math.gamma(5 / 6)
        density = {
            "kaimal": lambda w: 4 * a / (1 + 6 * a * w) ** (5 / 3),
            "von_karman": lambda w: math.sqrt(70.8) * a / area * (1 + 70.8 * (a * w) ** 2) ** (-5 / 6),
            "davenport": lambda w: 2 / 3 * a * a * w * (1 + (a * w) ** 2) ** (-4 / 3),
        }[name]
        head = 1 if name == "davenport" else 0
        text = f"{name}(length: {number(length)} m, mean_speed: {number(speed)} m/s)"
        return f"(1 m)^2 * {text}", density, head, 5 / 3, [1 / a], ""
    w0, z, level = math.exp(rng.uniform(-1, 4)), math.exp(rng.uniform(-7, -0.2)), math.exp(rng.uniform(-6, 3))
    ground = lambda w: level * (1 + (2 * z * w / w0) ** 2) / ((1 - (w / w0) ** 2) ** 2 + (2 * z * w / w0) ** 2)
    here = f"level: {number(level)} m^2/(rad/s), frequency: {number(w0)} rad/s, damping: {number(z)}"
    if kind == "ground":
        return f"kanai_tajimi({here})", ground, 0, 2, graded(w0, z * w0), ""
    if kind == "clough":
        low, low_z = w0 * rng.uniform(0.02, 1.5), math.exp(rng.uniform(-5, -0.2))
        density = lambda w: ground(w) * (w / low) ** 4 / ((1 - (w / low) ** 2) ** 2 + (2 * low_z * w / low) ** 2)
        text = f"clough_penzien({here}, low_frequency: {number(low)} rad/s, low_damping: {number(low_z)})"
        return text, density, 4, 2, graded(w0, z * w0) + graded(low, low_z * low), ""
    if kind == "band":
        upper = w0
        lower = rng.choice([0.0, upper * rng.uniform(0.1, 0.99)])
        density = lambda w: np.where((w >= lower) & (w <= upper), level, 0.0)
        text = f"band_limited(level: {number(level)} m^2/(rad/s), lower: {number(lower)} rad/s, upper: {number(upper)} rad/s)"
        return text, density, math.inf if lower else 0, math.inf, [lower, upper], ""
    f0 = number(w0 / (2 * math.pi))
    f0_w = float(f0) * 2 * math.pi
    name = f"written{index}"
    head = f"spectrum {name}(f, level: m^2/(rad/s), f0: Hz)"
    call = f"{name}(level: {number(level)} m^2/(rad/s), f0: {f0} Hz)"
    if kind == "power":
        p = rng.choice([2, 4, 6, round(rng.uniform(1.2, 9), 2)])
        density = lambda w: level / (1 + (w / f0_w) ** p)
        return call, density, 0, p, [f0_w], f"{head} = level / (1 + (f / f0)^{number(p)})"
    if kind == "gamma":
        q, r = rng.choice([0, 2, round(rng.uniform(-0.7, 4), 2)]), rng.choice([1, 2, round(rng.uniform(0.7, 3), 2)])
        density = lambda w: level * (w / f0_w) ** q * np.exp(-((w / f0_w) ** r))
        text = f"{head} = level * (f / f0)^({number(q)}) * exp(-(f / f0)^{number(r)})"
        return call, density, q, math.inf, [f0_w], text
    density = lambda w: level / ((1 - (w / f0_w) ** 2) ** 2 + (2 * z * w / f0_w) ** 2)
    body = f"level / ((1 - (f / f0)^2)^2 + (2 * {number(z)} * f / f0)^2)"
    return call, density, 0, 4, graded(f0_w, z * f0_w), f"{head} = {body}"


def by_logarithm(density, tail, head, frequencies, order):
    """The integral of omega^order over a density, over the logarithm of omega, in which powers are exponentials."""
    marks = sorted(math.log(w) for w in frequencies if w > 0)
    below = 40 / min(head + order + 1, 5)
    above = 40 / min(tail - order - 1, 5) if math.isfinite(tail) else 7
    points = [marks[0] - below, *marks, marks[-1] + above]
    cut = np.concatenate([np.linspace(a, b, max(2, math.ceil((b - a) / 0.2) + 1))[:-1] for a, b in zip(points, points[1:])])
    integrand = lambda x: np.exp((order + 1) * x) * density(np.exp(x))
    return float(integral(integrand, np.concatenate([cut, points[-1:]])))


def spectra(program, rng):
    families = [Family(f"spectra: lambda_{n}", 1e-11) for n in (0, 1, 2, 4)]
    for _ in range(12):
        lines, cases = [], []
        for case in range(25):
            parts = [random_spectrum(rng) for _ in range(rng.choice([1, 1, 1, 2]))]
            weights = [rng.choice([1.0, 2.0, rng.uniform(0.1, 5)]) for _ in parts]
            terms = [f"two_sided({t})" if w == 2.0 and not closed(t) else f"{number(w)} * {t}" for w, (t, *_) in zip(weights, parts)]
            lines += [declaration for *_, declaration in parts]
            lines.append(f"process x{case} : m = gaussian(spectrum: {' + '.join(terms)})")
            cases.append((parts, weights, "\n".join(lines[-1 - len(parts):])))
        found = program.named("\n".join(lines))
        for case, (parts, weights, place) in enumerate(cases):
            for family, order, value in zip(families, (0, 1, 2, 4), moments_of(found[f"x{case}"])):
                finite = all(order + 1 < tail for _, _, _, tail, *_ in parts)
                exact = mp.inf
                if finite:
                    exact = mp.fsum(
                        w * by_logarithm(density, tail, head, marks, order)
                        for w, (_, density, head, tail, marks, _) in zip(weights, parts)
                    )
                family.relative(value, exact, f"{value} not {exact}, order {order}, in\n{place}")


# ----------------------------------------------------------------------------------------------------- coherence


def coherences(program, rng):
    """Margins of processes that go together by a constant share or by the distance of points, some of them delayed, by the
    Gauss-Legendre rule on the whole cross-spectral matrix."""
    families = [Family(f"coherent processes: lambda_{n}", 1e-8) for n in (0, 1, 2)]
    for _ in range(60):
        count = rng.randint(2, 5)
        scale = math.exp(rng.uniform(-3, 4))
        lines, densities = [], []
        for index in range(count):
            deviation, length = rng.uniform(0.5, 3), scale * rng.uniform(0.3, 3)
            if rng.random() < 0.5:
                kernel = f"squared_exponential(length: {number(length)} s)"
                densities.append(lambda w, s=deviation, l=length: s * s * math.sqrt(2 / math.pi) * l * np.exp(-((w * l) ** 2) / 2))
            else:
                kernel = f"matern(smoothness: 7/2, length: {number(length)} s)"
                # 2 sigma^2 Gamma(4)/(sqrt(pi) Gamma(7/2)) a^7 / (a^2 + w^2)^4, a = sqrt(7)/length.
                constant = 2 * math.gamma(4) / (math.sqrt(math.pi) * math.gamma(3.5))
                densities.append(lambda w, s=deviation, a=math.sqrt(7) / length: s * s * constant * a**7 / (a * a + w * w) ** 4)
            lines.append(f"process x{index} = gaussian(standard_deviation: {number(deviation)}, correlation: {kernel})")
        names = [f"x{index}" for index in range(count)]
        if rng.random() < 0.5:
            loadings = np.array([rng.uniform(-1, 1) for _ in names])
            for i in range(count):
                for j in range(i + 1, count):
                    lines.append(f"correlate x{i}, x{j} with {number(loadings[i] * loadings[j])}")
            matrix = lambda w: (np.outer(loadings, loadings) + np.diag(1 - loadings**2))[:, :, None] * np.ones_like(w)
        else:
            points = np.array([[rng.uniform(0, 80), rng.uniform(0, 60)] for _ in names])
            decays, speed = np.array([rng.uniform(1, 12), rng.uniform(1, 12)]), 200 / scale
            at = ", ".join(f"(x: {number(x)} m, z: {number(z)} m)" for x, z in points)
            lines.append(
                f"correlate {', '.join(names)} with exponential_coherence(mean_speed: {number(speed)} m/s,"
                f" decay: (x: {number(decays[0])}, z: {number(decays[1])}), at: points({at}))"
            )
            apart = np.sqrt((((points[:, None] - points[None, :]) * decays) ** 2).sum(axis=2)) / (2 * math.pi * speed)
            matrix = lambda w, apart=apart: np.exp(-apart[:, :, None] * w)
        weights = np.array([rng.uniform(-2, 2) for _ in names])
        late = rng.random() < 0.5
        delays = np.array([rng.uniform(0, 2) * scale if late else 0.0 for _ in names])
        terms = [f"{number(a)} * delay({x}, by: {number(d)} s)" for a, x, d in zip(weights, names, delays)]
        lines.append(f"margin m = {' + '.join(terms)}")

        def power(w):
            waves = np.array([a * np.sqrt(g(w)) * np.exp(-1j * w * d) for a, g, d in zip(weights, densities, delays)])
            return np.einsum("iw,ijw,jw->w", waves.conj(), matrix(w), waves).real

        edges = np.concatenate([np.linspace(0, 40, 400), np.geomspace(40, 4e4, 400)[1:]]) / scale
        exact = integral(lambda w: np.array([power(w), w * power(w), w * w * power(w)]), edges)
        reported = moments_of(program.named("\n".join(lines))["m"])
        for family, value, reference in zip(families, reported, exact):
            family.relative(value, mp.mpf(reference), f"{value} not {reference} in\n" + "\n".join(lines))


def closed(text):
    """Whether a spectrum is one-sided by definition."""
    return text.startswith(("jonswap", "pierson", "(1 m)"))


def main():
    binary = sys.argv[1]
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else 20
    with tempfile.TemporaryDirectory() as folder:
        program = Program(binary, folder)
        for checks in (kernels, forms, differences, passages, extremes, written_kernels, tables, systems, spectra, coherences):
            checks(program, random.Random(f"{seed} {checks.__name__}"))
    if not all([family.report() for family in Family.all]):
        sys.exit(1)


if __name__ == "__main__":
    main()
