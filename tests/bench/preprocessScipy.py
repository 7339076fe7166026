"""The default recipe's steps in numpy and scipy, timed: reads {"x", "scans", "grid", "runs"} as JSON, prints median ms and the first result."""
import json
import sys
import time

import numpy as np
from scipy.linalg import solveh_banded
from scipy.signal import savgol_filter

LAMBDA, P, WINDOW, ORDER = 1e5, 0.01, 15, 2
given = json.load(sys.stdin)
x, scans, grid = (np.array(given[key]) for key in ("x", "scans", "grid"))
n = grid.size
# The penalty's bands are made once, outside the clock.
diagonal = np.full(n, 6.0)
diagonal[[0, -1]], diagonal[[1, -2]] = 1, 5
beside = np.full(n - 1, -4.0)
beside[[0, -1]] = -2
bands = np.zeros((3, n))
bands[0, 2:], bands[1, 1:], bands[2] = LAMBDA, LAMBDA * beside, LAMBDA * diagonal


def despike(values):
    d = np.diff(values)
    deviation = np.abs(d - np.median(d))
    leaps = deviation * 0.6745 / np.median(deviation) > 7
    spikes = np.flatnonzero(leaps[:-1] & leaps[1:] & (d[:-1] * d[1:] < 0)) + 1
    filled = values.copy()
    for i in spikes:
        outside = max(abs(d[i - 2]) if i > 1 else 0, abs(d[i + 1]) if i + 1 < d.size else 0)
        if min(abs(d[i - 1]), abs(d[i])) >= 3 * outside:
            filled[i] = np.delete(values[i - 5 : i + 6], 5).mean()
    return filled


def baseline(values):
    weights = np.ones(n)
    while True:
        system = bands.copy()
        system[2] += weights
        z = solveh_banded(system, weights * values, overwrite_ab=True, overwrite_b=True, check_finite=False)
        new = np.where(values > z, P, 1 - P)
        if np.array_equal(new, weights):
            return z
        weights = new


def preprocess(y):
    values = np.interp(grid, x, despike(y))
    values = savgol_filter(values - baseline(values), WINDOW, ORDER, deriv=1)
    return (values - values.mean()) / values.std(ddof=1)


times = []
for run in range(given["runs"] + 3):
    start = time.perf_counter()
    preprocess(scans[run % len(scans)])
    if run >= 3:
        times.append(1e3 * (time.perf_counter() - start))
print(json.dumps({"medianMs": float(np.median(times)), "result": preprocess(scans[0]).tolist()}))
