#!/usr/bin/env python3
"""The proofs by which kernels are refused, checked from outside: witnesses.py BINARY [SEED]

Random functions that are no covariance functions are given to the binary, written out and as tables. It must refuse each,
and the instants and weights that it shows must make the sum of w_i w_j rho(t_i - t_j) negative: computed here by mpmath at 50
digits from the function itself, and by SciPy as the form of a Toeplitz or other symmetric matrix, whose least eigenvalue must
be negative too. Random positive mixtures, which S. Bochner's theorem (1932) makes covariance functions, must be accepted.
Prints a line for each kind; exits with 1 where one fails. Needs numpy, scipy and mpmath.
"""

import json
import random
import subprocess
import sys
import tempfile
from pathlib import Path

import mpmath as mp
import numpy as np
from scipy.linalg import eigvalsh

mp.mp.dps = 50
EACH = 25


def three(value):
    """A number to three digits, as it is written into the model: the same decimal here and there."""
    return f"{value:.2e}"


def invalid_kernels():
    """Name, text in the language and function of (lag, length, a, b), with the ranges of a and b."""
    return [
        ("a power above 2", "exp(-(tau / {l} s)^{a})", lambda t, l, a, b: mp.exp(-((t / l) ** a)), (2.05, 6), (0, 1)),
        ("a power cut off at its zero", "max(1 - (tau / {l} s)^{a}, 0)",
         lambda t, l, a, b: max(1 - (t / l) ** a, mp.mpf(0)), (1.2, 5), (0, 1)),
        ("a box beside a Gaussian", "{a} * step({l} s - tau) + (1 - {a}) * exp(-(tau / {l} s)^2)",
         lambda t, l, a, b: a * (1 if t <= l else 0) + (1 - a) * mp.exp(-((t / l) ** 2)), (0.1, 1), (0, 1)),
        ("a difference of Gaussians", "(1 + {a}) * exp(-(tau / {l} s)^2 / 2) - {a} * exp(-(tau / ({b} * {l} s))^2 / 2)",
         lambda t, l, a, b: (1 + a) * mp.exp(-((t / l) ** 2) / 2) - a * mp.exp(-((t / (b * l)) ** 2) / 2),
         (0.03, 1), (0.2, 0.8)),
        ("a negative line", "(1 + {a}) * exp(-(tau / {l} s)^2 / 2) - {a} * cos({b} rad * (tau / {l} s))",
         lambda t, l, a, b: (1 + a) * mp.exp(-((t / l) ** 2) / 2) - a * mp.cos(b * t / l), (0.02, 0.3), (3, 9)),
        ("a flat rational function", "1 / (1 + (tau / {l} s)^{a})", lambda t, l, a, b: 1 / (1 + (t / l) ** a), (2.5, 6), (0, 1)),
        ("a wave that fades too slowly",
         "exp(-{a} * tau / {l} s) * (cos(3 rad * (tau / {l} s)) - 0.5 * sin(3 rad * (tau / {l} s)))",
         lambda t, l, a, b: mp.exp(-a * t / l) * (mp.cos(3 * t / l) - mp.sin(3 * t / l) / 2), (0.1, 1.3), (0, 1)),
        ("half a wave", "cos(pi / 2 * 1 rad * min(tau / {l} s, 1))",
         lambda t, l, a, b: mp.cos(mp.pi / 2 * min(t / l, mp.mpf(1))), (0, 1), (0, 1)),
    ]


def valid_members():
    return [
        ("exp(-(tau / {l} s)^{a})", (0.5, 2)),
        ("cos({a} rad * (tau / {l} s))", (0.5, 9)),
        ("1 / (1 + (tau / {l} s)^2)", (0, 1)),
        ("max(1 - tau / {l} s, 0)", (0, 1)),
        ("(1 + tau / {l} s) * exp(-tau / {l} s)", (0, 1)),
        ("1 / cosh(tau / {l} s)", (0, 1)),
    ]


class Program:
    def __init__(self, binary, folder):
        self.binary, self.folder = binary, Path(folder)

    def findings(self, model):
        path = self.folder / "model.limit"
        path.write_text(model)
        found = subprocess.run([self.binary, "check", "--json", str(path)], capture_output=True, text=True, check=False)
        return json.loads(found.stdout)["diagnostics"]


def proof(finding):
    """The instants and weights that a finding shows, as the decimals it shows them with."""
    for label in finding["labels"]:
        text = label["text"]
        if text.startswith("at the instants "):
            times, rest = text.removeprefix("at the instants ").split(" the weights ")
            weights, rest = rest.split(" give the weighted sum a variance of ")
            share, rest = rest.split(" times ")
            _, _, rounding = rest.partition(", with rounding by ")
            rounding = mp.mpf(rounding.split(" ")[0] or 0)
            times = [mp.mpf(one.removesuffix(" s")) for one in times.split(", ")]
            return times, [int(weight) for weight in weights.split(", ")], mp.mpf(share), rounding
    return None


def refuted(program, model, rho):
    """None where the model is refused with a proof that holds, else what is wrong."""
    findings = program.findings(model)
    if len(findings) != 1 or findings[0]["code"] not in ("kernel/negative-spectrum", "kernel/bound", "kernel/jump"):
        return f"not refused: {findings}"
    shown = proof(findings[0])
    if shown is None:
        return f"no proof: {findings}"
    times, weights, share, doubt = shown
    if len(times) != len(weights):
        return f"{len(times)} instants, {len(weights)} weights"
    lags = [[rho(abs(t - u)) for u in times] for t in times]
    form = mp.fsum(w * v * lags[i][j] for i, w in enumerate(weights) for j, v in enumerate(weights))
    against = mp.fsum(abs(w * v) for i, w in enumerate(weights) for j, v in enumerate(weights) if i != j) * doubt
    least = eigvalsh(np.array([[float(value) for value in row] for row in lags]))[0]
    if not (form < 0 and least < 0):
        return f"{form}, least eigenvalue {least}"
    if not form - 2 * against - abs(share) / 100 <= share <= form + 2 * against + abs(share) / 100:
        return f"{share} is shown, {form} computed"
    return None


def written(program, rng):
    for name, text, function, a_range, b_range in invalid_kernels():
        failures = []
        for _ in range(EACH):
            l, a, b = three(10 ** rng.uniform(-2, 3)), three(rng.uniform(*a_range)), three(rng.uniform(*b_range))
            body = text.format(l=l, a=a, b=b)
            model = f"kernel k(tau) = {body}\nprocess x = gaussian(standard_deviation: 1, correlation: k())\n"
            exact = [mp.mpf(value) for value in (l, a, b)]
            failure = refuted(program, model, lambda t: function(t, *exact))
            if failure:
                failures.append(f"{body}: {failure}")
        yield f"refused, with a proof that holds: {name}", EACH, failures


def tables(program, rng):
    kinds = [kernel for kernel in invalid_kernels() if kernel[0] in ("a power above 2", "a power cut off at its zero")]
    for name, _, function, _, _ in kinds:
        failures = []
        for _ in range(EACH):
            a, rows = mp.mpf(three(rng.uniform(3, 6))), rng.randint(5, 20)
            table = {k: mp.mpf(mp.nstr(mp.nint(function(mp.mpf(k), mp.mpf(rows), a, 0) * 10**4) / 10**4, 12)) for k in range(40)}
            (program.folder / "table.csv").write_text(
                "lag [s],correlation\n" + "".join(f"{k},{mp.nstr(value, 6)}\n" for k, value in table.items())
            )
            model = 'process x = gaussian(standard_deviation: 1, correlation: tabulated("table.csv", beyond: zero))\n'
            failure = refuted(program, model, lambda t: table.get(int(t), mp.mpf(0)))
            if failure:
                failures.append(f"{a} over {rows} rows: {failure}")
        yield f"refused as a table: {name}", EACH, failures


def mixtures(program, rng):
    failures = []
    for _ in range(8 * EACH):
        terms = []
        for _ in range(rng.randint(1, 3)):
            factors = []
            for _ in range(rng.randint(1, 2)):
                text, a_range = rng.choice(valid_members())
                factors.append(text.format(l=three(10 ** rng.uniform(-2, 3)), a=three(rng.uniform(*a_range))))
            terms.append(" * ".join(factors))
        weights = [1 / len(terms)] * len(terms)
        body = " + ".join(f"{weight!r} * {term}" for weight, term in zip(weights, terms))
        model = f"kernel k(tau) = {body}\nprocess x = gaussian(standard_deviation: 1, correlation: k())\n"
        findings = program.findings(model)
        if findings:
            failures.append(f"{body}: {findings}")
    yield "accepted: positive mixtures", 8 * EACH, failures


def main():
    binary = sys.argv[1]
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else 20
    sound = True
    with tempfile.TemporaryDirectory() as folder:
        program = Program(binary, folder)
        for checks in (written, tables, mixtures):
            for name, count, failures in checks(program, random.Random(f"{seed} {checks.__name__}")):
                print(f"{name:<70} {count - len(failures):4d} of {count}")
                for failure in failures[:3]:
                    print(f"    {failure}")
                sound = sound and not failures
    if not sound:
        sys.exit(1)


if __name__ == "__main__":
    main()
