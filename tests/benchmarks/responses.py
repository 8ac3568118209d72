#!/usr/bin/env python3
"""A thousand responses of oscillators, whole processes side by side: responses.py OUTCROSS

The same oscillators on a source with a rational density and on one without, once by the program from text to JSON, once by a
Python process with SciPy's adaptive quadrature that is told where the resonance is (lambda_0, lambda_1 and lambda_2 to 1e-8).
Prints both times and the largest difference.
"""

import json
import math
import subprocess
import sys
import tempfile
import time
from pathlib import Path

SOURCES = {
    "damped_cosine(length: 0.4 s, frequency: 15 rad/s)": "a / pi * (1 / (a*a + (w - 15)**2) + 1 / (a*a + (w + 15)**2))",
    "squared_exponential(length: 0.08 s)": "sqrt(2 / pi) * 0.08 * exp(-0.5 * (0.08 * w)**2)",
}

BY_SCIPY = """
import json, sys
from math import exp, pi, sqrt
from scipy.integrate import quad
a = 1 / 0.4
density = lambda w: {density}
out = []
for w0, z in json.load(sys.stdin):
    square = lambda w: density(w) * w0**4 / ((w0 * w0 - w * w)**2 + (2 * z * w0 * w)**2)
    steps = [0] + sorted([w0 - z * w0 * 8**k for k in range(8) if z * 8**k < 1] + [w0 + z * w0 * 8**k for k in range(8) if z * 8**k < 1])
    row = []
    for n in (0, 1, 2):
        f = lambda w: w**n * square(w)
        row.append(sum(quad(f, lo, hi, epsabs=0, epsrel=1e-8)[0] for lo, hi in zip(steps, steps[1:]))
                   + quad(f, steps[-1], float("inf"), epsabs=0, epsrel=1e-8)[0])
    out.append(row)
print(json.dumps(out))
"""


def timed(command, **options):
    start = time.perf_counter()
    done = subprocess.run(command, capture_output=True, text=True, check=False, **options)
    return time.perf_counter() - start, done


def main():
    program = Path(sys.argv[1]).resolve()
    oscillators = [(10 * (0.5 + 0.0045 * k), 0.001 * 100 ** ((k % 37) / 36)) for k in range(1000)]
    with tempfile.TemporaryDirectory() as folder:
        model = Path(folder) / "model.limit"
        for kernel, density in SOURCES.items():
            lines = [f"process x = gaussian(standard_deviation: 1, correlation: {kernel})"]
            lines += [f"process y{k} = respond(x, through: oscillator(frequency: {w!r} rad/s, damping: {z!r}, gain: 1))"
                      for k, (w, z) in enumerate(oscillators)]
            model.write_text("\n".join(lines))
            ours, done = timed([program, "evaluate", "--json", model])
            theirs, reference = timed([sys.executable, "-W", "ignore", "-c", BY_SCIPY.format(density=density)],
                                      input=json.dumps(oscillators))
            found = [one["spectral_moments"][:3] for one in json.loads(done.stdout)["processes"] if one["name"] != "x"]
            worst = max(abs(a / b - 1) for one, two in zip(found, json.loads(reference.stdout)) for a, b in zip(one, two)
                        if not isinstance(a, str))
            print(f"{kernel}: {ours:.3f} s against {theirs:.2f} s in SciPy, {theirs / ours:.0f} times faster; "
                  f"at most {worst:.1e} apart")


if __name__ == "__main__":
    main()
