"""Independent information matrices for laws without an entry in the catalogue.

Run: python3 laws.py > laws.json   (SymPy 1.11, mpmath 1.2, 24 digits)
"""
import json
import sys

import mpmath as mp
import sympy as sp

mp.mp.dps = 24
y = sp.symbols("y", real=True)
out = []


def put(name, args, m):
    out.append({"law": name, "args": [str(a) for a in args], "info": [[mp.nstr(m[i, j], 17) for j in range(m.cols)] for i in range(m.rows)]})


def scores(logp, theta, at):
    s = dict(zip(theta, [sp.Rational(str(a)) for a in at]))
    return sp.lambdify([y], logp.subs(s), "mpmath"), [sp.lambdify([y], sp.diff(logp, t).subs(s), "mpmath") for t in theta]


def integrate(logp, theta, at, change, nodes):
    d, ss = scores(logp, theta, at)
    k = len(theta)
    m = mp.matrix(k, k)
    for i in range(k):
        for j in range(i, k):
            def h(u):
                try:
                    t, w = change(u)
                    l = d(t)
                    if mp.re(l) < -300 or mp.im(l) != 0:
                        return mp.mpf(0)
                    return mp.exp(l) * ss[i](t) * ss[j](t) * w
                except (OverflowError, ZeroDivisionError, ValueError):
                    return mp.mpf(0)
            m[i, j] = m[j, i] = mp.quad(h, nodes)
    return m


a, b, c = sp.symbols("a b c", real=True)
p, q = sp.symbols("p q", positive=True)
# Generalized extreme value: y = a + p ((-log F)^(-c) - 1)/c with w = -log F.
for at in [("0", "1", "0.2"), ("1", "2", "-0.3"), ("0", "1", "0.001"), ("0.5", "3", "1.5")]:
    z = 1 + c * (y - a) / p
    logp = -sp.log(p) - (1 + 1 / c) * sp.log(z) - z ** (-1 / c)
    A, B, C = (mp.mpf(v) for v in at)

    def change(u):  # w = exp(u)
        w = mp.exp(u)
        return A + B * (w ** (-C) - 1) / C, B * w ** (-C - 1) * w

    put("generalized-extreme-value", at, integrate(logp, [a, p, c], at, change, [-110, -40, -10, -3, 0, 1, 2, 3, 6]))
for at in [("0", "1", "0.5"), ("1", "2", "-3"), ("0", "1", "8")]:
    z = (y - a) / p
    logp = sp.log(2) - sp.log(p) - z**2 / 2 - sp.log(2 * sp.pi) / 2 + sp.log(sp.erfc(-c * z / sp.sqrt(2)) / 2)
    A, B = mp.mpf(at[0]), mp.mpf(at[1])
    put("skew-Normal", at, integrate(logp, [a, p, c], at, lambda u: (A + B * u, B), [-16, -8, -4, -2, -1, -0.5, 0, 0.5, 1, 2, 4, 8, 16]))
for at in [("2", "3", "10"), ("0.4", "0.7", "25")]:
    N = int(at[2])
    g = sp.loggamma
    logp = (sp.log(sp.binomial(N, y)) + g(y + p) + g(N - y + q) - g(N + p + q) + g(p + q) - g(p) - g(q))
    d, ss = scores(logp, [p, q], at[:2])
    m = mp.matrix(2, 2)
    for t in range(N + 1):
        for i in range(2):
            for j in range(2):
                m[i, j] += mp.exp(d(mp.mpf(t))) * ss[i](mp.mpf(t)) * ss[j](mp.mpf(t))
    put("beta-Binomial", at, m)
for at in [("1.5", "2", "1"), ("0.7", "1", "3"), ("3", "5", "4")]:
    logp = sp.log(p) - sp.log(q) + (p - 1) * sp.log(y / q) - (y / q) ** p
    L = mp.mpf(at[2])
    m = integrate(logp, [p, q], at[:2], lambda u: (L / (1 + mp.exp(-u)), L * mp.exp(-u) / (1 + mp.exp(-u)) ** 2), [-100, -40, -10, -3, 0, 3, 10, 40, 60])
    s = dict(zip([p, q], [sp.Rational(v) for v in at[:2]]))
    dead = -((y / q) ** p)
    ds = [mp.mpf(sp.N(sp.diff(dead, t).subs(s).subs(y, sp.Rational(at[2])), 30)) for t in (p, q)]
    S = mp.exp(mp.mpf(sp.N(dead.subs(s).subs(y, sp.Rational(at[2])), 30)))
    for i in range(2):
        for j in range(2):
            m[i, j] += S * ds[i] * ds[j]
    put("Weibull, censored", at, m)
# A stationary first-order autoregression of n values: the Gaussian formula.
mu, r, s = sp.symbols("mu r s")
for n, at in [(5, ("1", "0.6", "2")), (4, ("0", "-0.9", "1"))]:
    V = sp.Matrix(n, n, lambda i, j: s**2 * r ** abs(i - j) / (1 - r**2))
    sub = dict(zip([mu, r, s], [sp.Rational(v) for v in at]))
    W = V.subs(sub).inv()
    one = sp.ones(n, 1)
    D = {r: sp.diff(V, r).subs(sub), s: sp.diff(V, s).subs(sub)}
    m = mp.matrix(3, 3)
    m[0, 0] = mp.mpf(sp.N((one.T * W * one)[0], 30))
    for i, x in enumerate([r, s]):
        for j, z in enumerate([r, s]):
            m[1 + i, 1 + j] = mp.mpf(sp.N((W * D[x] * W * D[z]).trace() / 2, 30))
    put("AR1", at + (str(n),), m)
json.dump(out, sys.stdout, indent=0)
