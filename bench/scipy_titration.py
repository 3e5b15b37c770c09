"""The same refinement by scipy.optimize.least_squares over the same Newton solver in numpy: point by point, and on all points of a curve at once."""
import json
import sys
import time

import numpy as np
from scipy.optimize import least_squares

given = json.load(open(sys.argv[1]))
OFF = float(sys.argv[2])
NAMES = ["HL", "H2L", "H3L", "ML"]
LN10 = np.log(10)


def curve_parts(curve):
    names = ["H", "L"] + (["M"] if "M" in curve["initial_mmol"] else [])
    rows = [[1 if i == k else 0 for i in range(len(names))] for k in range(len(names))]
    rows += [[-1] + [0] * (len(names) - 1)] + [[j, 1] + [0] * (len(names) - 2) for j in (1, 2, 3)] + ([[0, 1, 1]] if len(names) == 3 else [])
    v = np.array(curve["volumes_mL"])
    volume = curve["vessel_mL"] + v
    totals = np.array([(curve["initial_mmol"].get(k, 0) + curve["titrant_M"].get(k, 0) * v) / volume for k in names]).T
    slope = (np.array([curve["titrant_M"].get(k, 0) for k in names]) - totals) / volume[:, None]
    return {"a": np.array(rows, float), "totals": totals, "slope": slope, "y": np.array(curve["readings"]), "s": curve["sigma_reading"], "sv": curve["sigma_mL"], "u": None}


def solve(part, beta):
    """Newton in log space on every point together; the start is the solution of the evaluation before."""
    a, t = part["a"], part["totals"]
    lnb = np.concatenate([np.zeros(t.shape[1]), beta[:len(a) - t.shape[1]]]) * LN10
    u = part["u"].copy() if part["u"] is not None else np.column_stack([-part["y"] * LN10] + [np.log(t[:, k]) - 12 for k in range(1, t.shape[1])])
    for _ in range(200):
        c = np.exp(lnb + u @ a.T)
        gap = t - c @ a
        h = np.einsum("pj,jk,jl->pkl", c, a, a)
        if np.max(np.abs(gap) / (np.abs(t) + c @ np.abs(a))) < 1e-12:
            break
        step = np.linalg.solve(h, gap[:, :, None])[:, :, 0]
        top = np.max(np.abs(step), axis=1, keepdims=True)
        u = u + step * np.where(top > 1, (1 + np.log(np.maximum(top, 1))) / np.maximum(top, 1), 1)
    part["u"] = u
    per_ml = np.linalg.solve(h, part["slope"][:, :, None])[:, 0, 0]
    return -u[:, 0] / LN10, -per_ml / LN10


def solve_singly(part, beta):
    """The same Newton iteration point by point, as the solver of a speciation is usually written; the start is the solution of the evaluation before."""
    a, n = part["a"], part["totals"].shape[1]
    lnb = np.concatenate([np.zeros(n), beta[:len(a) - n]]) * LN10
    if part["u"] is None:
        part["u"] = np.column_stack([-part["y"] * LN10] + [np.log(part["totals"][:, k]) - 12 for k in range(1, n)])
    per_ml = np.empty(len(part["y"]))
    size = np.abs(a)
    for i, t in enumerate(part["totals"]):
        u = part["u"][i]
        for _ in range(200):
            c = np.exp(lnb + a @ u)
            gap = t - c @ a
            h = (a.T * c) @ a
            if np.max(np.abs(gap) / (np.abs(t) + c @ size)) < 1e-12:
                break
            step = np.linalg.solve(h, gap)
            top = np.max(np.abs(step))
            u = u + step * ((1 + np.log(top)) / top if top > 1 else 1)
        part["u"][i] = u
        per_ml[i] = np.linalg.solve(h, part["slope"][i])[0]
    return -part["u"][:, 0] / LN10, -per_ml / LN10


def full(p):
    return np.concatenate([[-given["pKw"]], p])


def refine(parts, solve):
    p = np.array([given["true"][k] + OFF for k in NAMES])
    weights = [np.hypot(q["s"], solve(q, full(p))[1] * q["sv"]) for q in parts]
    for _ in range(12):
        p = least_squares(lambda x: np.concatenate([(solve(q, full(x))[0] - q["y"]) / w for q, w in zip(parts, weights)]), p, method="lm", xtol=1e-10, ftol=1e-10).x
        fresh = [np.hypot(q["s"], solve(q, full(p))[1] * q["sv"]) for q in parts]
        moved = max(np.max(np.abs(f / w - 1)) for f, w in zip(fresh, weights))
        weights = fresh
        if moved < 1e-7:
            break
    return p


def timed(solver, rounds):
    seconds = []
    for _ in range(rounds):
        parts = [curve_parts(one) for one in given["curves"]]
        begin = time.process_time()
        p = refine(parts, solver)
        seconds.append(time.process_time() - begin)
    return {"seconds": seconds, "logBeta": list(p)}


print(json.dumps({"together": timed(solve, 5), "singly": timed(solve_singly, 3)}))
