"""The same balances by scipy.optimize.root (hybr) with an analytic Jacobian, in log space, each point started from the one before."""
import json
import sys
import time

import numpy as np
from scipy.optimize import root

given = json.load(sys.stdin)
names = [c["name"] for c in given["components"]]
n = len(names)
totals = np.array([c["total_M"] for c in given["components"]])
a = np.vstack([np.eye(n), [[s["stoichiometry"].get(k, 0) for k in names] for s in given["species"]]])
protons = np.array([0] * n + [s["stoichiometry"].get("H", 0) for s in given["species"]], float)
beta = np.array([0] * n + [s["logBeta"] for s in given["species"]], float) * np.log(10)
used = np.any(a != 0, axis=1)
a, protons, beta = a[used], protons[used], beta[used]


def residual(u, lnb):
    c = np.exp(lnb + a @ u)
    s = a.T @ c
    return np.log(s) - np.log(totals), ((a.T * c) @ a) / s[:, None]


def sweep():
    u, worst, failed, total = np.log(totals) - 12.0, 0.0, 0, 0.0
    for pcH in given["pcH"]:
        got = root(residual, u, args=(beta - protons * pcH * np.log(10),), jac=True, method="hybr", options={"xtol": 1e-13})
        u = got.x
        size = float(np.max(np.abs(got.fun)))
        failed += size > 1e-10
        worst = max(worst, size)
        total += u[0] / np.log(10)
    return worst, failed, total


seconds = []
for _ in range(given["rounds"]):
    begin = time.process_time()
    worst, failed, total = sweep()
    seconds.append(time.process_time() - begin)
print(json.dumps({"seconds": seconds, "residual": worst, "failed": failed, "sum": total}))
