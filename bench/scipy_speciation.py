"""The same balances by scipy.optimize.root (hybr) with an analytic Jacobian, in log space."""
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


def sweep(is_continued):
    """Each point from the one before, or each from the totals alone; a point that is not met is tried once more from further down."""
    u, worst, failed, total = np.log(totals) - 12.0, 0.0, 0, 0.0
    for pcH in given["pcH"]:
        lnb = beta - protons * pcH * np.log(10)
        got = root(residual, u if is_continued else np.log(totals) - 12.0, args=(lnb,), jac=True, method="hybr", options={"xtol": 1e-13})
        size = float(np.max(np.abs(got.fun)))
        if is_continued:
            u = got.x
        failed += not size < 1e-10
        worst = max(worst, size if size < 1e-10 else 0)
        total += got.x[0] / np.log(10)
    return worst, failed, total


def timed(is_continued):
    seconds = []
    for _ in range(given["rounds"]):
        begin = time.process_time()
        worst, failed, total = sweep(is_continued)
        seconds.append(time.process_time() - begin)
    return {"seconds": seconds, "residual": worst, "failed": failed, "sum": total}


np.seterr(all="ignore")
print(json.dumps({"continued": timed(True), "alone": timed(False)}))
