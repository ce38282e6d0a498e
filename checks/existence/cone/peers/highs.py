"""Time scipy.optimize.linprog (HiGHS) on the tables that peers/main.go writes.

Reads one JSON object per line, answers with one JSON object per line.
"""

import json
import sys
import time

import numpy as np
from scipy.optimize import linprog

limit = float(sys.argv[1])


def call(**problem):
    start = time.perf_counter()
    r = linprog(method="highs", options={"time_limit": limit}, **problem)
    return time.perf_counter() - start, r


for line in sys.stdin:
    ask = json.loads(line)
    n, p = ask["n"], ask["p"]
    raw = np.fromfile(ask["path"], dtype="<i8")
    senses = raw[:n]
    x = raw[n:].reshape(p, n).T * 10.0 ** np.array(ask["exponents"])
    c = np.ascontiguousarray(x * senses[:, None])
    a = c.sum(axis=0)

    upper = np.vstack([-c, a[None, :]])
    right = np.zeros(n + 1)
    right[n] = 1
    stated, r = call(c=-a, A_ub=upper, b_ub=right, bounds=(None, None))
    if r.status == 0:
        says = "sep" if r.fun < -0.5 else "over"
    else:
        says = f"(status {r.status})"

    dual, r = call(c=np.zeros(n), A_eq=np.ascontiguousarray(c.T), b_eq=-a, bounds=(0, None))
    dual_is = {0: "over", 2: "sep"}.get(r.status, f"(status {r.status})")

    print(json.dumps({"Stated": stated, "Dual": dual, "StatedSays": says, "DualIs": dual_is}), flush=True)
