"""Independent values for the catalogue of derived priors.

Run: python3 catalogue.py > catalogue.json   (seven minutes; SymPy 1.11, mpmath 1.2, 24 digits)

For each entry the expected information is found from the log density alone:
SymPy differentiates it, mpmath integrates (or sums) the products of the scores.
The rule is then applied to the numbers at a few points. Written to the file are
log kernels relative to the first point. Nothing here is shared with the engine.
"""
import itertools
import json
import sys

import mpmath as mp
import sympy as sp

mp.mp.dps = 24
y, y2, n = sp.symbols("y y2 n", real=True)
R, P = sp.Rational, sp.pi


def normal(m, s):
    return -sp.log(s) - (y - m) ** 2 / (2 * s**2) - sp.log(2 * P) / 2, "real", (m, s)


def lognormal(m, s):
    return -sp.log(s) - sp.log(y) - (sp.log(y) - m) ** 2 / (2 * s**2) - sp.log(2 * P) / 2, "positive", (sp.exp(m), s)


def student(v, m, s):
    z = (y - m) / s
    return (sp.loggamma((v + 1) / 2) - sp.loggamma(v / 2) - sp.log(v * P) / 2 - sp.log(s)
            - (v + 1) / 2 * sp.log(1 + z**2 / v)), "real", (m, s)


def cauchy(m, s):
    return -sp.log(P) - sp.log(s) - sp.log(1 + ((y - m) / s) ** 2), "real", (m, s)


def laplace(m, s):
    # The derivative of |y - m| is taken as sign(y - m).
    return -sp.log(2 * s) - sp.sqrt((y - m) ** 2) / s, "real", (m, s)


def logistic(m, s):
    z = (y - m) / s
    return -z - sp.log(s) - 2 * sp.log(1 + sp.exp(-z)), "real", (m, s)


def gumbel(m, s):
    z = (y - m) / s
    return -sp.log(s) - z - sp.exp(-z), "real", (m, s)


def exponential(rate):
    return sp.log(rate) - rate * y, "positive", (1 / rate, 1)


def gamma(a, b):
    return a * sp.log(b) - sp.loggamma(a) + (a - 1) * sp.log(y) - b * y, "positive", (a / b, 1)


def inversegamma(a, b):
    return a * sp.log(b) - sp.loggamma(a) - (a + 1) * sp.log(y) - b / y, "positive", (b / a, 1)


def weibull(k, s):
    return sp.log(k) - sp.log(s) + (k - 1) * (sp.log(y) - sp.log(s)) - (y / s) ** k, "positive", (s, 1)


def pareto(a, m):
    return sp.log(a) + a * sp.log(m) - (a + 1) * sp.log(y), ("above", m), (m, 1)


def gpareto(s, x):
    return -sp.log(s) - (1 / x + 1) * sp.log(1 + x * y / s), "positive", (s, 1)


def invgauss(m, k):
    return sp.log(k) / 2 - sp.log(2 * P) / 2 - R(3, 2) * sp.log(y) - k * (y - m) ** 2 / (2 * m**2 * y), "positive", (m, 1)


def beta(a, b):
    return (sp.loggamma(a + b) - sp.loggamma(a) - sp.loggamma(b) + (a - 1) * sp.log(y) + (b - 1) * sp.log(1 - y)), "unit", (0, 1)


def vonmises(m, k):
    return k * sp.cos(y - m) - sp.log(2 * P * sp.besseli(0, k)), "angle", (0, 1)


def halfnormal(s):
    return sp.log(2) - sp.log(s) - y**2 / (2 * s**2) - sp.log(2 * P) / 2, "positive", (s, 1)


def halfcauchy(s):
    return sp.log(2 / P) - sp.log(s) - sp.log(1 + (y / s) ** 2), "positive", (s, 1)


def bernoulli(p):
    return y * sp.log(p) + (1 - y) * sp.log(1 - p), ("finite", 1), (0, 1)


def binomial(k, p):
    return sp.log(sp.binomial(k, y)) + y * sp.log(p) + (k - y) * sp.log(1 - p), ("finite", k), (0, 1)


def geometric(p):
    return sp.log(p) + y * sp.log(1 - p), "count", (0, 1)


def negbin(m, k):
    return (sp.loggamma(y + k) - sp.loggamma(k) - sp.loggamma(y + 1) + k * sp.log(k / (k + m)) + y * sp.log(m / (k + m))), "count", (0, 1)


def poisson(m):
    return y * sp.log(m) - m - sp.loggamma(y + 1), "count", (0, 1)


def cells(*ps):
    """One draw among cells; y is the index."""
    return [sp.log(p) for p in ps], "cells", (0, 1)


def bivariate(m1, m2, s1, s2, r):
    z1, z2 = (y - m1) / s1, (y2 - m2) / s2
    q = (z1**2 - 2 * r * z1 * z2 + z2**2) / (1 - r**2)
    return -sp.log(s1) - sp.log(s2) - sp.log(1 - r**2) / 2 - q / 2, "gauss2", (m1, m2, s1, s2, r)


def chisquare(v):
    return gamma(v / 2, R(1, 2))


def information(law, theta, at):
    """E[score score'] of one observation at numbers."""
    logp, support, frame = law
    sub = dict(zip(theta, at))
    k = len(theta)
    if support == "cells":
        m = mp.matrix(k, k)
        for lp in logp:
            p = mp.mpf(sp.N(sp.exp(lp).subs(sub), 40))
            s = [mp.mpf(sp.N(sp.diff(lp, t).subs(sub), 40)) for t in theta]
            for i in range(k):
                for j in range(k):
                    m[i, j] += p * s[i] * s[j]
        return m
    if support == "gauss2":
        # The log density is a quadratic in (y, y2): second derivatives have
        # expectations from the first two moments.
        m1, m2, s1, s2, r = frame
        m = mp.matrix(k, k)
        for i in range(k):
            for j in range(k):
                d = sp.Poly(sp.expand(-sp.diff(logp, theta[i], theta[j])), y, y2)
                e = 0
                for (a, b), c in d.terms():
                    moment = {(0, 0): 1, (1, 0): m1, (0, 1): m2, (2, 0): s1**2 + m1**2, (0, 2): s2**2 + m2**2,
                              (1, 1): r * s1 * s2 + m1 * m2}[(a, b)]
                    e += c * moment
                m[i, j] = mp.mpf(sp.N(sp.sympify(e).subs(sub), 40))
        return m
    fs = [sp.diff(logp, t).subs(sub) for t in theta]
    args = [y]
    density = sp.lambdify(args, logp.subs(sub), "mpmath")
    scores = [sp.lambdify(args, f, "mpmath") for f in fs]
    a, b = (mp.mpf(sp.N(sp.sympify(v).subs(sub), 40)) for v in frame[:2])
    m = mp.matrix(k, k)
    for i in range(k):
        for j in range(i, k):
            def g(t):
                try:
                    d = density(t)
                    if d < -4000:
                        return mp.mpf(0)
                    return mp.exp(d) * scores[i](t) * scores[j](t)
                except OverflowError:  # exp of something huge: the density is 0
                    return mp.mpf(0)

            if support == "count":
                v = mp.mpf(0)
                t = 0
                while True:
                    term = g(mp.mpf(t))
                    v += term
                    t += 1
                    if t > 60 and mp.exp(density(mp.mpf(t))) < mp.mpf(10) ** -36:
                        break
            elif isinstance(support, tuple) and support[0] == "finite":
                v = sum(g(mp.mpf(t)) for t in range(int(support[1]) + 1))
            elif support == "real":
                # y = a + b sinh(u): both tails become double exponential enough.
                h = lambda u: g(a + b * mp.sinh(u)) * b * mp.cosh(u)
                v = mp.quad(h, [-48, -12, -5, -2, 0, 2, 5, 12, 48])
            elif support == "angle":
                v = mp.quad(g, mp.linspace(-mp.pi, mp.pi, 9))
            elif support == "unit":
                # 1 - y must keep its digits near 1.
                with mp.workdps(100):
                    h = lambda u: g(1 / (1 + mp.exp(-u))) * mp.exp(-u) / (1 + mp.exp(-u)) ** 2
                    v = mp.quad(h, [-210, -60, -15, 0, 15, 60, 210], maxdegree=5)
            else:
                low = mp.mpf(0)
                if isinstance(support, tuple):
                    low = mp.mpf(sp.N(sp.sympify(support[1]).subs(sub), 40))
                h = lambda u: g(low + a * mp.exp(u)) * a * mp.exp(u)
                if isinstance(support, tuple):
                    v = mp.quad(h, [-90, -30, -10, -3, 0, 3, 10, 30, 80, 200, 500, 1400])
                else:
                    v = mp.quad(h, [-1400, -500, -200, -90, -30, -10, -3, 0, 1.5, 3, 6, 12, 30, 60, 150, 400])
            m[i, j] = m[j, i] = v
    return m


def total(laws, theta, at):
    m = mp.matrix(len(theta), len(theta))
    for times, law in laws:
        m += times * information(law, theta, at)
    return m


def logdet(m):
    return mp.log(mp.det(m)) if m.rows else mp.mpf(0)


def sub(m, idx):
    r = mp.matrix(len(idx), len(idx))
    for a, i in enumerate(idx):
        for b, j in enumerate(idx):
            r[a, b] = m[i, j]
    return r


def relative(rule, groups, laws, theta, points):
    """Log kernel at each point, relative to the first."""
    first = points[0]
    out = []
    cache = {}

    def info(at):
        key = tuple(at)
        if key not in cache:
            cache[key] = total(laws, theta, [sp.Rational(str(v)) for v in at])
        return cache[key]

    for at in points:
        if rule == "jointly":
            v = (logdet(info(at)) - logdet(info(first))) / 2
        else:
            # Own factors: move one group at a time from the first point.
            v = mp.mpf(0)
            for g, idx in enumerate(groups):
                mixed = list(first)
                for i in idx:
                    mixed[i] = at[i]
                if rule == "separately":
                    v += (logdet(sub(info(mixed), idx)) - logdet(sub(info(first), idx))) / 2
                else:
                    tail = [i for h in groups[g:] for i in h]
                    rest = [i for h in groups[g + 1:] for i in h]
                    for m, sign in ((info(mixed), 1), (info(first), -1)):
                        v += sign * (logdet(sub(m, tail)) - logdet(sub(m, rest))) / 2
        out.append(v)
    return out


t, u, v, w, z = sp.symbols("t u v w z", positive=True)
a, b = sp.symbols("a b", real=True)

pos = [["0.7"], ["0.05"], ["3"], ["20"]]
mild = [["0.7"], ["0.3"], ["3"], ["6"]]
mild_inverse = [["0.7"], ["0.2"], ["3"], ["2"]]
prob = [["0.3"], ["0.01"], ["0.6"], ["0.97"]]
real = [["0.4"], ["-2"], ["0"], ["1.5"]]
pos2 = [["0.7", "1.3"], ["0.2", "4"], ["3", "0.5"], ["1.5", "2.5"]]
loc = [["0.4", "1.3"], ["-2", "4"], ["1", "0.5"], ["0", "2.5"]]

E = {}


def entry(name, rule, theta, points, *laws, groups=None):
    laws = [(1, l) if not isinstance(l[0], int) else l for l in laws]
    E[name] = (rule, theta, points, laws, groups or [[i] for i in range(len(theta))])


def J(name, theta, points, *laws):
    entry(name, "jointly", theta, points, *laws)


# One unknown, each in two parametrisations.
J("bernoulli/p", [t], prob, bernoulli(t)); J("bernoulli/odds", [t], pos, bernoulli(t / (1 + t)))
J("binomial/p", [t], prob, binomial(7, t)); J("binomial/logit", [a], real, binomial(7, 1 / (1 + sp.exp(-a))))
J("geometric/p", [t], prob, geometric(t)); J("geometric/odds", [t], pos, geometric(t / (1 + t)))
J("negbin/p", [t], prob, negbin(5 * (1 - t) / t, sp.Integer(5))); J("negbin/mean", [t], pos, negbin(t, sp.Integer(5)))
J("poisson/mean", [t], pos, poisson(t)); J("poisson/log", [a], real, poisson(sp.exp(a)))
J("poisson-exposed/rate", [t], pos, poisson(t * 3), poisson(t * R(1, 2))); J("poisson-exposed/gap", [t], pos, poisson(3 / t), poisson(R(1, 2) / t))
J("exponential/rate", [t], pos, exponential(t)); J("exponential/mean", [t], pos, exponential(1 / t))
J("normal-mean/mean", [a], real, normal(a, sp.Integer(2))); J("normal-mean/exp", [t], pos, normal(sp.log(t), sp.Integer(2)))
J("normal-sd/sd", [t], pos, normal(sp.Integer(1), t)); J("normal-sd/variance", [t], pos, normal(sp.Integer(1), sp.sqrt(t)))
J("normal-precision/precision", [t], pos, normal(sp.Integer(1), 1 / sp.sqrt(t))); J("normal-precision/log", [a], real, normal(sp.Integer(1), sp.exp(-a / 2)))
J("lognormal-location/log", [a], real, lognormal(a, sp.Integer(2))); J("lognormal-location/median", [t], pos, lognormal(sp.log(t), sp.Integer(2)))
J("lognormal-spread/sd", [t], mild, lognormal(sp.Integer(1), t)); J("lognormal-spread/square", [t], mild, lognormal(sp.Integer(1), sp.sqrt(t)))
J("gamma-rate/rate", [t], pos, gamma(R(5, 2), t)); J("gamma-rate/scale", [t], pos, gamma(R(5, 2), 1 / t))
J("gamma-shape/shape", [t], mild, gamma(t, sp.Integer(2))); J("gamma-shape/square", [t], mild, gamma(t**2, sp.Integer(2)))
J("inversegamma-scale/scale", [t], pos, inversegamma(R(5, 2), t)); J("inversegamma-scale/reciprocal", [t], pos, inversegamma(R(5, 2), 1 / t))
J("inversegamma-shape/shape", [t], mild, inversegamma(t, sp.Integer(2))); J("inversegamma-shape/square", [t], mild, inversegamma(t**2, sp.Integer(2)))
J("chisquare/degrees", [t], mild, chisquare(t)); J("chisquare/half", [t], mild, chisquare(2 * t))
J("weibull-scale/scale", [t], pos, weibull(R(3, 2), t)); J("weibull-scale/log", [a], real, weibull(R(3, 2), sp.exp(a)))
J("weibull-shape/shape", [t], mild, weibull(t, sp.Integer(2))); J("weibull-shape/reciprocal", [t], mild_inverse, weibull(1 / t, sp.Integer(2)))
J("gumbel-location/location", [a], real, gumbel(a, sp.Integer(2))); J("gumbel-location/exp", [t], pos, gumbel(sp.log(t), sp.Integer(2)))
J("gumbel-scale/scale", [t], pos, gumbel(sp.Integer(1), t)); J("gumbel-scale/reciprocal", [t], pos, gumbel(sp.Integer(1), 1 / t))
J("laplace-location/location", [a], real, laplace(a, sp.Integer(2))); J("laplace-location/exp", [t], pos, laplace(sp.log(t), sp.Integer(2)))
J("laplace-scale/scale", [t], pos, laplace(sp.Integer(1), t)); J("laplace-scale/rate", [t], pos, laplace(sp.Integer(1), 1 / t))
J("cauchy-location/location", [a], real, cauchy(a, sp.Integer(2))); J("cauchy-location/exp", [t], pos, cauchy(sp.log(t), sp.Integer(2)))
J("cauchy-scale/scale", [t], pos, cauchy(sp.Integer(1), t)); J("cauchy-scale/log", [a], real, cauchy(sp.Integer(1), sp.exp(a)))
J("logistic-location/location", [a], real, logistic(a, sp.Integer(2))); J("logistic-location/exp", [t], pos, logistic(sp.log(t), sp.Integer(2)))
J("logistic-scale/scale", [t], pos, logistic(sp.Integer(1), t)); J("logistic-scale/reciprocal", [t], pos, logistic(sp.Integer(1), 1 / t))
J("student-location/location", [a], real, student(sp.Integer(5), a, sp.Integer(2))); J("student-location/exp", [t], pos, student(sp.Integer(5), sp.log(t), sp.Integer(2)))
J("student-scale/scale", [t], pos, student(sp.Integer(5), sp.Integer(1), t)); J("student-scale/square", [t], pos, student(sp.Integer(5), sp.Integer(1), sp.sqrt(t)))
pd = [["3"], ["0.7"], ["8"], ["20"]]
J("student-degrees/degrees", [t], pd, student(t, sp.Integer(1), sp.Integer(2))); J("student-degrees/reciprocal", [t], [["0.3"], ["0.05"], ["1.5"], ["0.7"]], student(1 / t, sp.Integer(1), sp.Integer(2)))
J("pareto-shape/shape", [t], pos, pareto(t, sp.Integer(2))); J("pareto-shape/reciprocal", [t], [["0.7"], ["0.2"], ["3"], ["2"]], pareto(1 / t, sp.Integer(2)))
J("invgauss-mean/mean", [t], pos, invgauss(t, sp.Integer(2))); J("invgauss-mean/reciprocal", [t], pos, invgauss(1 / t, sp.Integer(2)))
J("invgauss-shape/shape", [t], pos, invgauss(sp.Integer(1), t)); J("invgauss-shape/reciprocal", [t], pos, invgauss(sp.Integer(1), 1 / t))
J("halfnormal/sd", [t], pos, halfnormal(t)); J("halfnormal/variance", [t], pos, halfnormal(sp.sqrt(t)))
J("halfcauchy/scale", [t], pos, halfcauchy(t)); J("halfcauchy/square", [t], pos, halfcauchy(sp.sqrt(t)))
J("gpareto-scale/scale", [t], pos, gpareto(t, R(1, 4))); J("gpareto-scale/reciprocal", [t], pos, gpareto(1 / t, R(1, 4)))
gx = [["0.7"], ["0.05"], ["3"], ["1.5"]]
J("gpareto-shape/shape", [t], gx, gpareto(sp.Integer(2), t)); J("gpareto-shape/square", [t], gx, gpareto(sp.Integer(2), t**2))
J("beta-power/a", [t], mild, beta(t, sp.Integer(1))); J("beta-power/reciprocal", [t], mild_inverse, beta(1 / t, sp.Integer(1)))
J("beta-symmetric/a", [t], [["0.7"], ["0.2"], ["3"], ["20"]], beta(t, t)); J("beta-symmetric/square", [t], [["0.7"], ["0.5"], ["3"], ["4"]], beta(t**2, t**2))
J("vonmises/concentration", [t], pos, vonmises(sp.Integer(0), t)); J("vonmises/square", [t], [["0.7"], ["0.2"], ["3"], ["4"]], vonmises(sp.Integer(0), t**2))
rho = [["0.3"], ["-0.9"], ["0"], ["0.99"]]
J("correlation/rho", [a], rho, bivariate(0, 0, 1, 1, a)); J("correlation/atanh", [a], real, bivariate(0, 0, 1, 1, sp.tanh(a)))
J("normal-mean-equals-sd/theta", [t], pos, normal(t, t)); J("normal-mean-equals-sd/square", [t], pos, normal(sp.sqrt(t), sp.sqrt(t)))
J("normal-mean-equals-variance/theta", [t], pos, normal(t, sp.sqrt(t))); J("normal-mean-equals-variance/reciprocal", [t], pos, normal(1 / t, 1 / sp.sqrt(t)))
J("dilution/density", [t], pos, bernoulli(1 - sp.exp(-t * R(1, 2))), bernoulli(1 - sp.exp(-t * 2))); J("dilution/log", [a], real, bernoulli(1 - sp.exp(-sp.exp(a) / 2)), bernoulli(1 - sp.exp(-sp.exp(a) * 2)))
J("gene/p", [t], prob, cells(t**2, 2 * t * (1 - t), (1 - t) ** 2)); J("gene/logit", [a], real, cells(*(lambda p: (p**2, 2 * p * (1 - p), (1 - p) ** 2))(1 / (1 + sp.exp(-a)))))
# Several unknowns jointly.
J("normal/sd", [a, t], loc, normal(a, t)); J("normal/precision", [a, t], loc, normal(a, 1 / sp.sqrt(t)))
J("lognormal/sd", [a, t], loc, lognormal(a, t)); J("lognormal/median", [t, u], pos2, lognormal(sp.log(t), u))
J("gamma/rate", [t, u], pos2, gamma(t, u)); J("gamma/mean", [t, u], pos2, gamma(t, t / u))
J("weibull/scale", [t, u], pos2, weibull(t, u)); J("weibull/log", [t, a], [["0.7", "1.3"], ["0.2", "-1"], ["3", "0.5"], ["1.5", "0"]], weibull(1 / t, sp.exp(a)))
J("gumbel/scale", [a, t], loc, gumbel(a, t)); J("gumbel/log", [a, b], [["0.4", "1.3"], ["-2", "-1"], ["1", "0.5"], ["0", "0"]], gumbel(a, sp.exp(b)))
J("logistic/scale", [a, t], loc, logistic(a, t)); J("logistic/reciprocal", [a, t], loc, logistic(a, 1 / t))
J("cauchy/scale", [a, t], loc, cauchy(a, t)); J("cauchy/square", [a, t], loc, cauchy(a, sp.sqrt(t)))
J("laplace/scale", [a, t], loc, laplace(a, t)); J("laplace/rate", [a, t], loc, laplace(a, 1 / t))
J("student/scale", [a, t], loc, student(sp.Integer(5), a, t)); J("student/square", [a, t], loc, student(sp.Integer(5), a, sp.sqrt(t)))
J("beta/ab", [t, u], pos2, beta(t, u)); J("beta/mean", [t, u], [["0.7", "1.3"], ["0.2", "4"], ["0.5", "0.5"], ["0.9", "2.5"]], beta(t * u, (1 - t) * u))
J("invgauss/mean", [t, u], pos2, invgauss(t, u)); J("invgauss/reciprocal", [t, u], pos2, invgauss(1 / t, u))
gp2 = [["0.7", "1.3"], ["0.2", "0.1"], ["3", "0.5"], ["1.5", "2.5"]]
J("gpareto/shape", [t, u], gp2, gpareto(t, u)); J("gpareto/square", [t, u], gp2, gpareto(t, u**2))
J("negbin-both/size", [t, u], pos2, negbin(t, u)); J("negbin-both/reciprocal", [t, u], [["0.7", "1.3"], ["0.4", "2"], ["3", "0.5"], ["1.5", "2.5"]], negbin(t, 1 / u))
tri = [["0.3", "0.5"], ["0.1", "0.2"], ["0.6", "0.3"], ["0.05", "0.05"]]
J("trinomial/cells", [t, u], tri, cells(t, u, 1 - t - u)); J("trinomial/sticks", [t, u], [["0.3", "0.5"], ["0.1", "0.2"], ["0.6", "0.9"], ["0.05", "0.05"]], cells(t, (1 - t) * u, (1 - t) * (1 - u)))
reg = [["0.4", "1.3", "0.7"], ["-2", "4", "2"], ["1", "-0.5", "0.3"]]
xs = [R(-1), R(0), R(2), R(3)]
J("regression/sd", [a, b, t], reg, *[normal(a + b * x, t) for x in xs]); J("regression/precision", [a, b, t], reg, *[normal(a + b * x, 1 / sp.sqrt(t)) for x in xs])
ab = [["0.4", "1.3"], ["-2", "1"], ["1", "-0.5"], ["0", "0"]]
J("logit-regression/slope", [a, b], ab, *[bernoulli(1 / (1 + sp.exp(-a - b * x))) for x in xs]); J("logit-regression/centred", [a, b], ab, *[bernoulli(1 / (1 + sp.exp(-a - b * (x - 1)))) for x in xs])
J("poisson-regression/slope", [a, b], ab, *[poisson(sp.exp(a + b * x)) for x in (R(0), R(1), R(2))]); J("poisson-regression/base", [t, b], [["0.4", "0.3"], ["2", "0.8"], ["1", "-0.5"]], *[poisson(t * sp.exp(b * x)) for x in (R(0), R(1), R(2))])
bn = [["0.4", "1.3", "0.7", "2", "0.3"], ["-2", "0", "2", "0.5", "-0.9"], ["1", "-0.5", "0.3", "3", "0.95"]]
J("bivariate/sd", [a, b, t, u, z], bn, bivariate(a, b, t, u, z)); J("bivariate/variance", [a, b, t, u, z], bn[:2], bivariate(a, b, sp.sqrt(t), sp.sqrt(u), z))


def S(name, theta, points, *laws):
    entry(name, "separately", theta, points, *laws)


def Ref(name, theta, points, *laws, groups=None):
    entry(name, "reference", theta, points, *laws, groups=groups)


S("normal-separately/sd", [a, t], loc, normal(a, t)); S("normal-separately/precision", [a, t], loc, normal(a, 1 / sp.sqrt(t)))
S("weibull-separately/scale", [t, u], pos2, weibull(t, u)); S("weibull-separately/reciprocal", [t, u], pos2, weibull(1 / t, u))
S("gamma-separately/rate", [t, u], pos2, gamma(t, u)); S("gamma-separately/scale", [t, u], pos2, gamma(t, 1 / u))
S("student-df-separately/scale", [a, t, u], [["0.4", "1.3", "3"], ["-2", "4", "1"], ["1", "0.5", "12"]], student(u, a, t)); S("student-df-separately/square", [a, t, u], [["0.4", "1.3", "3"], ["-2", "4", "1"]], student(u, a, sp.sqrt(t)))
# Reference priors, the first unknown of most interest.
Ref("ref-normal-mean/sd", [a, t], loc, normal(a, t)); Ref("ref-normal-mean/variance", [a, t], loc, normal(a, sp.sqrt(t)))
Ref("ref-normal-sd/sd", [t, a], [[q, p] for p, q in loc], normal(a, t)); Ref("ref-normal-sd/precision", [t, a], [[q, p] for p, q in loc], normal(a, 1 / sp.sqrt(t)))
Ref("ref-standardised-mean/sd", [a, t], loc, normal(a * t, t)); Ref("ref-standardised-mean/precision", [a, t], loc, normal(a / sp.sqrt(t), 1 / sp.sqrt(t)))
Ref("ref-variation/mean", [t, u], pos2, normal(u, t * u)); Ref("ref-variation/reciprocal", [t, u], pos2, normal(1 / u, t / u))
Ref("ref-gamma-shape/rate", [t, u], pos2, gamma(t, u)); Ref("ref-gamma-shape/mean", [t, u], pos2, gamma(t, t / u))
Ref("ref-weibull-shape/scale", [t, u], pos2, weibull(t, u)); Ref("ref-weibull-shape/reciprocal", [t, u], pos2, weibull(1 / t, u))
Ref("ref-weibull-scale/scale", [u, t], pos2, weibull(t, u)); Ref("ref-weibull-scale/log", [a, t], loc, weibull(t, sp.exp(a)))
Ref("ref-invgauss-mean/mean", [t, u], pos2, invgauss(t, u)); Ref("ref-invgauss-mean/reciprocal", [t, u], pos2, invgauss(1 / t, u))
Ref("ref-poisson-ratio/ratio", [t, u], pos2, poisson(t * u), poisson(u)); Ref("ref-poisson-ratio/share", [t, u], [["0.7", "1.3"], ["0.2", "4"], ["0.5", "0.5"], ["0.9", "2.5"]], poisson(t * u / (1 - t)), poisson(u))
Ref("ref-exponential-ratio/mean", [t, u], pos2, exponential(1 / (t * u)), exponential(1 / u)); Ref("ref-exponential-ratio/rate", [t, u], pos2, exponential(u / t), exponential(u))
Ref("ref-trinomial/sticks", [t, u], [["0.3", "0.5"], ["0.1", "0.2"], ["0.6", "0.9"]], cells(t, (1 - t) * u, (1 - t) * (1 - u))); Ref("ref-trinomial/odds", [t, u], pos2, cells(t / (1 + t), 1 / (1 + t) * u / (1 + u), 1 / (1 + t) / (1 + u)))
c5 = [["0.3", "0.4", "1.3", "0.7", "2"], ["-0.9", "-2", "0", "2", "0.5"], ["0.95", "1", "-0.5", "0.3", "3"]]
Ref("ref-correlation/rho", [z, a, b, t, u], c5, bivariate(a, b, t, u, z)); Ref("ref-correlation/variance", [z, a, b, t, u], c5[:2], bivariate(a, b, sp.sqrt(t), sp.sqrt(u), z))
Ref("ref-two-normals/sd", [a, b, t, u], [["0.4", "1.3", "0.7", "2"], ["-2", "0", "2", "0.5"]], normal(a, t), normal(b, u)); Ref("ref-two-normals/variance", [a, b, t, u], [["0.4", "1.3", "0.7", "2"], ["-2", "0", "2", "0.5"]], normal(a, sp.sqrt(t)), normal(b, sp.sqrt(u)))
Ref("ref-sd-ratio/sd", [v, a, b, t], [["0.7", "0.4", "1.3", "2"], ["2", "-2", "0", "0.5"]], normal(a, v * t), normal(b, t)); Ref("ref-sd-ratio/precision", [v, a, b, t], [["0.7", "0.4", "1.3", "2"], ["2", "-2", "0", "0.5"]], normal(a, sp.sqrt(v / t)), normal(b, 1 / sp.sqrt(t)))
Ref("ref-gpareto-shape/scale", [u, t], [[q, p] for p, q in gp2], gpareto(t, u)); Ref("ref-gpareto-shape/reciprocal", [u, t], [[q, p] for p, q in gp2], gpareto(1 / t, u))
Ref("ref-gpareto-scale/scale", [t, u], gp2, gpareto(t, u)); Ref("ref-gpareto-scale/log", [a, u], [["0.7", "1.3"], ["-0.2", "0.1"], ["1", "0.5"]], gpareto(sp.exp(a), u))
Ref("ref-regression/slope", [b, a, t], [[q, p, s] for p, q, s in reg], *[normal(a + b * x, t) for x in xs]); Ref("ref-regression/precision", [b, a, t], [[q, p, s] for p, q, s in reg], *[normal(a + b * x, 1 / sp.sqrt(t)) for x in xs])
# Balanced groups: n = 3 readings of each of k groups; the sufficient pair is the
# group mean, variance s(1/3 + r), and 2 degrees of freedom about s.


def chi_scaled(df, s2):
    return gamma(R(df, 2), 1 / (2 * s2))


Ref("ref-variance-ratio/ratio", [u, t, a], [["0.7", "1.3", "0.4"], ["2", "0.4", "-1"], ["0.1", "3", "0"]], normal(a, sp.sqrt(t * (R(1, 3) + u))), chi_scaled(2, t))
Ref("ref-variance-ratio/sd", [u, t, a], [["0.7", "1.3", "0.4"], ["2", "0.4", "-1"], ["0.1", "3", "0"]], normal(a, t * sp.sqrt(R(1, 3) + u**2)), chi_scaled(2, t**2))
Ref("ref-gumbel/scale", [a, t], loc, gumbel(a, t)); Ref("ref-gumbel/reciprocal", [a, t], loc, gumbel(a, 1 / t))
Ref("ref-student/scale", [a, t], loc, student(sp.Integer(5), a, t)); Ref("ref-student/square", [a, t], loc, student(sp.Integer(5), a, sp.sqrt(t)))

# Entries named on the command line are computed alone and put into the list that
# standard input holds.
only = sys.argv[1:]
out = []
for name, (rule, theta, points, laws, groups) in E.items():
    if only and not any(name.startswith(o) for o in only):
        continue
    try:
        logs = relative(rule, groups, laws, theta, points)
    except Exception as e:  # say which entry
        print(name, e, file=sys.stderr)
        raise
    out.append({"id": name, "points": points, "log": [mp.nstr(x, 20) for x in logs]})
    print(name, [mp.nstr(x, 8) for x in logs], file=sys.stderr)
if only:
    fresh = {e["id"]: e for e in out}
    out = [fresh.get(e["id"], e) for e in json.load(sys.stdin)]
json.dump(out, sys.stdout, indent=0)
