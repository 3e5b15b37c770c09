"""Times scipy's curve_fit with its Jacobian on the recoveries it is given as JSON on standard input; prints seconds and the sum of T1 per round."""
import json
import sys
import time

import numpy as np
from scipy.optimize import curve_fit

given = json.load(sys.stdin)
x = np.array(given["x"])
signals = [np.array(y) for y in given["signals"]]


def model(ti, a, b, t1):
    return a + b * np.exp(-ti / t1)


def jacobian(ti, a, b, t1):
    decay = np.exp(-ti / t1)
    return np.stack([np.ones_like(ti), decay, b * decay * ti / t1**2], axis=1)


rounds = []
for _ in range(given["rounds"]):
    begin = time.process_time()
    total = sum(curve_fit(model, x, y, p0=[1000, -1900, 0.5], jac=jacobian, maxfev=500)[0][2] for y in signals)
    rounds.append({"seconds": time.process_time() - begin, "sum": total})
print(json.dumps(rounds))
