#!/usr/bin/env python3
"""Oscillators on a filtered white ground motion, by the Lyapunov equation of the whole system in SciPy: responses.py [--check]

Writes responses.csv beside it, or compares with it. The ground is white noise of a one-sided density `level` through an
oscillator whose absolute acceleration shakes the structures (Kanai and Tajimi), and, where `low_frequency` is not 0, through a
second one whose relative acceleration takes the low frequencies away (Clough and Penzien). Needs numpy and scipy.
"""

import csv
import itertools
import math
import sys
from pathlib import Path

import numpy as np
from scipy.linalg import solve_continuous_lyapunov

FILE = Path(__file__).with_suffix(".csv")
COLUMNS = ["level", "frequency", "damping", "low_frequency", "low_damping", "one_frequency", "one_damping", "other_frequency",
           "other_damping", "variance", "velocity_variance", "covariance", "covariance_with_velocity"]


def row(level, ground, low, one, other):
    stages = [ground] + ([low] if low[0] else []) + [one, other]
    size = 2 * len(stages)
    a, b = np.zeros((size, size)), np.zeros(size)
    for k, (w, z) in enumerate(stages):
        a[2 * k, 2 * k + 1] = 1
        a[2 * k + 1, 2 * k : 2 * k + 2] = [-w * w, -2 * z * w]
    b[1] = 1
    shake = np.zeros(size)
    shake[0:2] = [ground[0] ** 2, 2 * ground[1] * ground[0]]
    first = 1
    if low[0]:
        a[3] += shake
        # x'' = shake - 2 z w x' - w² x
        shake = shake.copy()
        shake[2:4] -= [low[0] ** 2, 2 * low[1] * low[0]]
        first = 2
    a[2 * first + 1] += shake
    a[2 * first + 3] += shake
    p = solve_continuous_lyapunov(a, -math.pi * level * np.outer(b, b))
    x, y = 2 * first, 2 * first + 2
    return [level, *ground, *low, *one, *other, p[x, x], p[x + 1, x + 1], p[x, y], p[x, y + 1]]


def rows():
    grounds = [(15.0, 0.6), (5.0, 0.2)]
    lows = [(0.0, 0.0), (1.5, 0.6)]
    ones = [(2.0, 0.05), (14.0, 0.01), (60.0, 0.002)]
    others = [(2.1, 0.05), (15.0, 0.6001), (30.0, 0.1)]
    for ground, low, one, other in itertools.product(grounds, lows, ones, others):
        yield row(0.04, ground, low, one, other)


def main():
    if "--check" in sys.argv:
        with open(FILE, encoding="utf-8") as file:
            stored = [[float(x) for x in line] for line in list(csv.reader(file))[1:]]
        worst = 0.0
        for old, new in zip(stored, rows(), strict=True):
            scale = [abs(x) for x in new]
            scale[-1] = math.sqrt(new[9] * new[10])
            worst = max(worst, *(abs(a - b) / (s or 1) for a, b, s in zip(old, new, scale)))
        print(f"{FILE.name}: {len(stored)} rows, at most {worst:.1e} away")
        sys.exit(worst > 1e-9)
    with open(FILE, "w", encoding="utf-8", newline="") as file:
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(COLUMNS)
        writer.writerows([repr(float(x)) for x in line] for line in rows())


if __name__ == "__main__":
    main()
