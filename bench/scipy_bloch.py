"""The same spectra and the same global fit by scipy: matrix exponentials in a loop and in one batched call, least_squares with its own differences over them. JSON on standard input."""
import json
import sys
import time

import numpy as np
from scipy.linalg import expm
from scipy.optimize import least_squares

given = json.load(sys.stdin)
GAMMA = given["gamma_rad_per_s_uT"]


def matrices(system, b1_uT, offsets):
    """Augmented matrices of all offsets at once: only the rotations differ."""
    per_ppm, w1 = GAMMA * system["field_T"], GAMMA * b1_uT
    pools = [{"shift_ppm": 0.0, "ratio": 1.0, "exchange_per_s": 0.0, **system["water"]}, *system["solutes"]]
    n = 3 * len(pools)
    a = np.zeros((n + 1, n + 1))
    for p, q in enumerate(pools):
        x, y, z = 3 * p, 3 * p + 1, 3 * p + 2
        out = sum(r["exchange_per_s"] * r["ratio"] for r in pools) if p == 0 else q["exchange_per_s"]
        a[x, x] = a[y, y] = -(q["rate2_per_s"] + out)
        a[z, z] = -(q["rate1_per_s"] + out)
        a[y, z], a[z, y] = -w1, w1
        a[z, n] = q["rate1_per_s"] * q["ratio"]
        if p > 0:
            for axis in range(3):
                a[axis, x + axis] += q["exchange_per_s"]
                a[x + axis, axis] += q["exchange_per_s"] * q["ratio"]
    every = np.repeat(a[None], len(offsets), axis=0)
    for p, q in enumerate(pools):
        d = (q["shift_ppm"] - offsets) * per_ppm
        every[:, 3 * p, 3 * p + 1], every[:, 3 * p + 1, 3 * p] = -d, d
    start = np.zeros(n + 1)
    start[2:n:3] = [q["ratio"] for q in pools]
    start[n] = 1
    return every, start


def loop(system, block, offsets):
    a, start = matrices(system, block["b1_uT"], offsets)
    return np.array([(expm(one * block["duration_s"]) @ start)[2] for one in a])


def batched(system, block, offsets):
    a, start = matrices(system, block["b1_uT"], offsets)
    return (expm(a * block["duration_s"]) @ start)[:, 2]


def timed(work, rounds):
    work()
    seconds = []
    for _ in range(rounds):
        begin = time.process_time()
        answer = work()
        seconds.append(time.process_time() - begin)
    return seconds, answer


def spectra():
    out = {}
    for name, one in given["spectra"].items():
        offsets = np.array(one["offsets_ppm"])
        for way, forward in (("loop", loop), ("batched", batched)):
            seconds, z = timed(lambda: forward(one["system"], one["block"], offsets), 9)
            out[f"{name} {way}"] = {"seconds": seconds, "answer": float(np.sum(z))}
    return out


def fit():
    """Seven parameters: R2 of water, then shift, logarithm of k and logarithm of the ratio of two pools."""
    series = given["fit"]
    offsets = np.array(series["offsets_ppm"])
    measured = np.array(series["z"])

    def system_of(p):
        water = {**series["system"]["water"], "rate2_per_s": np.exp(p[0])}
        return {**series["system"], "water": water, "solutes": [
            {**q, "shift_ppm": p[1 + 3 * s], "exchange_per_s": np.exp(p[2 + 3 * s]), "ratio": np.exp(p[3 + 3 * s])} for s, q in enumerate(series["system"]["solutes"])]}

    out = {}
    for way, forward in (("loop", loop), ("batched", batched)):
        def residual(p):
            one = system_of(p)
            return np.concatenate([forward(one, {"b1_uT": b1, "duration_s": series["duration_s"]}, offsets) - z for b1, z in zip(series["b1_uT"], measured)])
        seconds, found = timed(lambda: least_squares(residual, series["start"], x_scale="jac"), 2)
        out[way] = {"seconds": seconds, "answer": float(np.exp(found.x[2])), "cost": float(2 * found.cost), "evaluations": int(found.nfev)}
    return out


print(json.dumps({"spectra": spectra(), "fit": fit()}))
