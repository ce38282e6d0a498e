"""The work of BenchmarkOneUnknown and BenchmarkThreeStudiesSpread, by SciPy's
adaptive quadrature and root finding, timed: normaliser and three quantiles.

    python3 scipy_quad.py
    go test wellposed/checks/posterior -run XXX -bench 'OneUnknown|ThreeStudies'
"""
import time

import numpy as np
from scipy import integrate, optimize


def one_unknown():
    f = lambda u: np.exp(1 * u - 20 * np.logaddexp(0, u) - u * u / 4.5)
    total = integrate.quad(f, -40, 40, epsabs=0, epsrel=1e-10, limit=200)[0]
    cdf = lambda t: integrate.quad(f, -40, t, epsabs=0, epsrel=1e-10, limit=200)[0] / total
    return [1 / (1 + np.exp(-optimize.brentq(lambda t: cdf(t) - p, -15, 5, xtol=1e-12))) for p in (0.025, 0.5, 0.975)]


Y, S = np.array([0.28, 0.51, -0.05]), np.array([0.20, 0.25, 0.30])


def three_studies():
    def f(u):
        t = np.exp(u)
        v = S * S + t * t
        w = 1 / v
        m = (w * Y).sum() / w.sum()
        return np.exp(-0.5 * np.log(v).sum() - 0.5 * np.log(w.sum()) - 0.5 * ((Y - m) ** 2 / v).sum() - np.log1p((t / 25) ** 2) + u)

    total = integrate.quad(f, -30, 30, epsabs=0, epsrel=1e-10, limit=200)[0]
    cdf = lambda t: integrate.quad(f, -30, t, epsabs=0, epsrel=1e-10, limit=200)[0] / total
    return [np.exp(optimize.brentq(lambda t: cdf(t) - p, -10, 8, xtol=1e-12)) for p in (0.5, 0.95)]


for work in (one_unknown, three_studies):
    work()
    start, n = time.perf_counter(), 0
    while time.perf_counter() - start < 1:
        answer = work()
        n += 1
    print(f"{work.__name__}: {1e6 * (time.perf_counter() - start) / n:.0f} µs", *(f"{x:.10g}" for x in answer))
