"""Times scipy's curve_fit on five Lorentzian pools, signals as JSON on standard input; prints CPU seconds and a sum of the answers per round and way."""
import json
import sys
import time
import warnings

import numpy as np
from scipy.optimize import curve_fit

warnings.filterwarnings("ignore")
given = json.load(sys.stdin)
x = np.array(given["x"])
signals = [np.array(z) for z in given["signals"]]
start = np.array(given["start"])
bounds = (np.array(given["lower"]), np.array(given["upper"]))


def pools(at, *p):
    p = np.asarray(p)
    square = 0.25 * p[2::3, None] ** 2
    return p[0] - (p[1::3, None] * square / (square + (at - p[3::3, None]) ** 2)).sum(0)


def jacobian(at, *p):
    p = np.asarray(p)
    depth, width, d = p[1::3, None], p[2::3, None], at - p[3::3, None]
    square = 0.25 * width**2
    down = square + d * d
    rows = np.empty((p.size, at.size))
    rows[0] = 1
    rows[1::3] = -square / down
    rows[2::3] = -0.5 * depth * width * d * d / down**2
    rows[3::3] = -2 * depth * square * d / down**2
    return rows.T


WAYS = {
    "curve_fit within bounds": dict(bounds=bounds),
    "curve_fit within bounds, Jacobian given": dict(bounds=bounds, jac=jacobian),
    "curve_fit without bounds": dict(maxfev=5000),
    "curve_fit without bounds, Jacobian given": dict(jac=jacobian, maxfev=5000),
}


def answer(z, options):
    p, covariance = curve_fit(pools, x, z, p0=start, **options)
    return abs(p[7]) + 1e-6 * covariance[7, 7] ** 0.5


rows = []
for name, options in WAYS.items():
    for z in signals[:5]:
        answer(z, options)
    seconds = []
    for _ in range(given["rounds"]):
        begin = time.process_time()
        total = sum(answer(z, options) for z in signals)
        seconds.append(time.process_time() - begin)
    rows.append({"name": name, "seconds": seconds, "answer": total})
print(json.dumps(rows))
