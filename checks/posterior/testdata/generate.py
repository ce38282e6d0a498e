"""Reference values for the tests of checks/posterior, by mpmath with 30 digits.

    python3 generate.py > references.csv

Each row: model text, point t, P(quantity <= t), P(quantity > t). One unknown is
integrated by tanh-sinh quadrature in a coordinate with infinite ends; the second
unknown of a pair by the trapezoid rule, which converges geometrically there.
"""
import csv
import sys

from mpmath import mp, mpf, exp, log, log1p, quad, sqrt, sinh, cosh, pi, erfc

mp.dps = 30

log1pexp = lambda u: log1p(exp(u)) if u < 0 else u + log1p(exp(-u))
out = csv.writer(sys.stdout)
out.writerow(["model", "t", "lower", "upper"])


def one(model, logf, coordinate, points, low=-200, high=200, pieces=200):
    """logf includes the slope of the coordinate."""
    grid = [mpf(low) + (high - low) * mpf(k) / pieces for k in range(pieces + 1)]
    top = max(logf(u) for u in grid)
    f = lambda u: exp(logf(u) - top)
    parts = [quad(f, [a, b], maxdegree=8) for a, b in zip(grid, grid[1:])]
    total = sum(parts)
    for t in points:
        u = coordinate(mpf(t))
        k = max(i for i in range(pieces) if grid[i] <= u)
        left = sum(parts[:k]) + quad(f, [grid[k], u], maxdegree=8)
        right = sum(parts[k + 1:]) + quad(f, [u, grid[k + 1]], maxdegree=8)
        out.writerow([model, t, mp.nstr(left / total, 20), mp.nstr(right / total, 20)])


logit = lambda p: log(p) - log1p(-p)

# A logit-normal prior: no closed form.
for y, n, sd in [(1, 20, "1.5"), (0, 40, "10"), (30, 400, "3"), (7, 7, "0.5")]:
    one(f"unknown x : probability\nobserve {y} of {n} with probability x\nprior logit(x) as Normal(0, sd = {sd})\nreport x\n",
        lambda u: y * u - n * log1pexp(u) - u * u / (2 * mpf(sd) ** 2), logit,
        ["0.0001", "0.01", "0.05", "0.1", "0.5", "0.9", "0.99"], -100, 100)
# A half-Cauchy prior on a rate.
one("unknown x : rate\nobserve 3 in 7 at rate x\nprior x as half-Cauchy(scale = 25)\nreport x\n",
    lambda u: 4 * u - 7 * exp(u) - log1p(exp(2 * u) / 625), log, ["0.01", "0.1", "0.4", "1", "3"], -60, 8)
# A spread under known mean, half-Cauchy and inverse-Gamma priors on the variance.
one("unknown x : scale\nobserve summary(n = 5, mean = 0.3, sd = 2) as Normal(0, sd = x)\nprior x as half-Cauchy(scale = 1)\nreport x\n",
    lambda u: -4 * u - (4 * mpf(4) + 5 * mpf("0.09")) / 2 * exp(-2 * u) - log1p(exp(2 * u)), log, ["0.6", "1", "2", "5", "40"], -6, 60)
one("unknown x : scale\nobserve 0.4 as Normal(0, sd = x)\nprior x^2 as inverse-Gamma(shape = 0.001, scale = 0.001)\nreport x\n",
    lambda u: -mpf("1.002") * u - (mpf("0.16") + mpf("0.002")) / 2 * exp(-2 * u), log, ["0.1", "0.4", "2", "100", "1e30"], -6, 300)
# A location with a heavy-tailed reading and prior.
one("unknown x : location\nobserve 3 as Student-t(degrees = 4, location = x, scale = 1)\nobserve 12 as Student-t(degrees = 4, location = x, scale = 1)\nprior x as Cauchy(0, 2)\nreport x\n",
    lambda u: sum(-mpf(5) / 2 * log1p((y - sinh(u)) ** 2 / 4) for y in (3, 12)) - log1p(sinh(u) ** 2 / 4) + log(cosh(u)), mp.asinh,
    ["-20", "0", "3", "7", "11", "30"], -30, 30, 400)
# A Weibull shape with censoring, scale known.
one("unknown x : shape\ngiven t = [640, 910, 1000, 1000], cut = [0, 0, 1, 1]\nobserve t as Weibull(shape = x, scale = 1500), right-censored where cut == 1\nprior x as Gamma(shape = 2, rate = 1)\nreport x\n",
    lambda u: (lambda k: 2 * u + sum(k * log(mpf(t) / 1500) for t in (640, 910)) - sum((mpf(t) / 1500) ** k for t in (640, 910, 1000, 1000)) + 2 * u - k)(exp(u)),
    log, ["0.05", "0.5", "1", "2", "6"], -30, 6)


def two(model, logf, points, outer, inner, h):
    """logf(a, b) with a the reported location; b summed by the trapezoid rule."""
    b0, b1 = inner
    n = int((b1 - b0) / h)
    grid = [b0 + h * k for k in range(n + 1)]
    marginal = lambda a: h * sum(exp(logf(a, b)) for b in grid)
    edges = [mpf(x) for x in outer]
    parts = [quad(marginal, [x, y], maxdegree=5) for x, y in zip(edges, edges[1:])]
    total = sum(parts)
    for t in points:
        k = max(i for i in range(len(edges) - 1) if edges[i] <= mpf(t))
        left = sum(parts[:k]) + quad(marginal, [edges[k], mpf(t)], maxdegree=5)
        right = total - left
        if right < total / 100:
            right = sum(parts[k + 1:]) + quad(marginal, [mpf(t), edges[k + 1]], maxdegree=5)
        out.writerow([model, t, mp.nstr(left / total, 15), mp.nstr(right / total, 15)])


DATA = [("-0.86", 0), ("-0.30", 1), ("-0.05", 3), ("0.73", 5)]
TABLE = "table assay\n| dose | n | deaths |\n" + "".join(f"| {d} | 5 | {y} |\n" for d, y in DATA)
mp.dps = 18
two(TABLE + "unknown alpha, slope : effect\nobserve deaths as Binomial(n, expit(alpha + slope * dose))\nprior alpha as Normal(0, sd = 5)\nprior slope as Normal(0, sd = 5)\nreport slope\n",
    lambda b, a: sum(y * (a + b * mpf(d)) - 5 * log1pexp(a + b * mpf(d)) for d, y in DATA) - (a * a + b * b) / 50,
    ["0", "2", "6", "12", "18"], list(range(-20, 44, 4)), (mpf(-12), mpf(14)), mpf("0.25"))
two("unknown m : location\nunknown s : scale\nobserve summary(n = 6, mean = 1, sd = 2) as Normal(m, sd = s)\nprior m as Cauchy(0, 1)\nprior s as half-Cauchy(scale = 1)\nreport m\n",
    lambda m, v: -6 * v - (5 * mpf(4) + 6 * (1 - m) ** 2) / 2 * exp(-2 * v) - log1p(m * m) - log1p(exp(2 * v)) + v,
    ["-2", "-0.5", "0.5", "1.5", "4"], [-4000, -1000, -300, -100, -40, -20, -10, -6, -4, -2, -1, 0, 1, 2, 3, 4, 6, 10, 20, 40, 100, 300, 1000, 4000],
    (mpf(-3), mpf(16)), mpf("0.125"))
