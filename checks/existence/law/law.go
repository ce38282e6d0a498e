// Package law writes the distributions of the language as log densities over
// order values: expansions at an end, or values over an interval. Constants
// that depend on nothing unknown may be left out, except inside a mixture.
// Definitions are those of the grammar's reference page.
package law

import (
	"math/big"

	"wellposed/checks/existence/order"
)

// V is an order value.
type V = order.Value

// Args gives the value of an argument by its label, nil when it was left out.
type Args func(label string) V

var (
	n0, n1, n2 = order.Number(0), order.Number(1), order.Number(2)
	half       = big.NewRat(1, 2)
	minusHalf  = big.NewRat(-1, 2)
)

func vanish() { panic(order.Vanishes) }

// Refuse reports something that has no expansion here.
func Refuse(reason string) { panic(&order.Unknown{Reason: reason}) }

// xlog is c · log v, and 0 when c is exactly 0, whatever v.
func xlog(c, v V) V {
	if r := order.Exact(c); r != nil && r.Sign() == 0 {
		return n0
	}
	return order.Mul(c, order.Log(v))
}

func sum(vs ...V) V {
	t := vs[0]
	for _, v := range vs[1:] {
		t = order.Add(t, v)
	}
	return t
}

func halfSquare(z V) V { return order.Times(order.Square(z), minusHalf) }

// positive makes the density vanish unless v > 0.
func positive(v V) {
	if order.Sign(v) <= 0 {
		vanish()
	}
}

// valid refuses parameters outside their range.
func valid(v V) {
	if order.Sign(v) <= 0 {
		Refuse("a parameter that must be positive is not")
	}
}

func beta(a, b V) V {
	return sum(order.LogGamma(a), order.LogGamma(b), order.Neg(order.LogGamma(order.Add(a, b))))
}

func choose(n, k V) V {
	rest := order.Sub(n, k)
	if order.Sign(rest) < 0 {
		vanish()
	}
	if order.Exact(n) != nil && order.Exact(k) != nil {
		return n0
	}
	return sum(order.LogGamma(order.Add(n, n1)), order.Neg(order.LogGamma(order.Add(k, n1))),
		order.Neg(order.LogGamma(order.Add(rest, n1))))
}

// Spread reads sd, variance or precision as the sd.
func Spread(a Args) V {
	if v := a("sd"); v != nil {
		valid(v)
		return v
	}
	if v := a("variance"); v != nil {
		valid(v)
		return order.Sqrt(v)
	}
	v := a("precision")
	valid(v)
	return order.Power(v, minusHalf)
}

// gammaRate reads rate, scale or mean as the rate.
func gammaRate(a Args) V {
	if v := a("rate"); v != nil {
		valid(v)
		return v
	}
	if v := a("scale"); v != nil {
		valid(v)
		return order.Recip(v)
	}
	v := a("mean")
	valid(v)
	if s := a("shape"); s != nil {
		return order.Div(s, v)
	}
	return order.Recip(v)
}

// betaWeights reads a and b, or mean and total.
func betaWeights(a Args) (V, V) {
	if t := a("total"); t != nil {
		m := a("mean")
		return order.Mul(m, t), order.Mul(order.Sub(n1, m), t)
	}
	return a("a"), a("b")
}

func fromOrigin(a Args, x V) V {
	if o := a("origin"); o != nil {
		return order.Sub(x, o)
	}
	return x
}

// Density is the log density (or log probability) of a law at x. It panics
// with order.Vanishes where that is 0 and with *order.Unknown where it has no
// expansion.
func Density(name string, a Args, x V) V {
	f := densities[name]
	if f == nil {
		Refuse("the density of " + name + " has no expansion here")
	}
	return f(a, x)
}

var densities = map[string]func(a Args, x V) V{
	"Bernoulli": func(a Args, x V) V { return binomial(n1, a("probability"), x) },
	"Binomial":  func(a Args, x V) V { return binomial(a("trials"), a("probability"), x) },
	"beta-Binomial": func(a Args, x V) V {
		p, q := betaWeights(a)
		n := a("trials")
		if short(n) && short(x) && order.Sign(order.Sub(n, x)) >= 0 {
			t := a("total")
			if t == nil {
				t = order.Add(p, q)
			}
			return sum(rising(p, x), rising(q, order.Sub(n, x)), order.Neg(rising(t, n)))
		}
		return sum(choose(n, x), beta(order.Add(x, p), order.Add(order.Sub(n, x), q)), order.Neg(beta(p, q)))
	},
	"geometric": func(a Args, x V) V {
		p := a("probability")
		fails := order.Sub(x, a("first"))
		return order.Add(order.Log(p), xlog(fails, order.Sub(n1, p)))
	},
	"negative-Binomial": func(a Args, x V) V {
		k := a("size")
		valid(k)
		var p, q V
		if m := a("mean"); m != nil {
			t := order.Add(m, k)
			p, q = order.Div(k, t), order.Div(m, t)
		} else {
			p = a("probability")
			q = order.Sub(n1, p)
		}
		c := n0
		if order.Exact(k) == nil || order.Exact(x) == nil {
			c = rising(k, x)
		}
		return sum(c, xlog(k, p), xlog(x, q))
	},
	"hypergeometric": func(a Args, x V) V {
		pop, marked, drawn := a("population"), a("marked"), a("drawn")
		return sum(choose(marked, x), choose(order.Sub(pop, marked), order.Sub(drawn, x)), order.Neg(choose(pop, drawn)))
	},
	"Poisson": func(a Args, x V) V {
		m := a("mean")
		if order.Exact(x) != nil {
			return order.Sub(xlog(x, m), m)
		}
		return sum(xlog(x, m), order.Neg(m), order.Neg(order.LogGamma(order.Add(x, n1))))
	},
	"discrete-Uniform": func(a Args, x V) V {
		lo, hi := a("low"), a("high")
		if order.Sign(order.Sub(x, lo)) < 0 || order.Sign(order.Sub(hi, x)) < 0 {
			vanish()
		}
		return order.Neg(order.Log(order.Add(order.Sub(hi, lo), n1)))
	},
	"Normal": func(a Args, x V) V {
		s := Spread(a)
		z := order.Div(order.Sub(x, a("mean")), s)
		return order.Sub(halfSquare(z), order.Log(s))
	},
	"log-Normal": func(a Args, x V) V {
		x = fromOrigin(a, x)
		positive(x)
		s := a("log sd")
		valid(s)
		l := order.Log(x)
		z := order.Div(order.Sub(l, logMean(a)), s)
		return sum(halfSquare(z), order.Neg(order.Log(s)), order.Neg(l))
	},
	"Student-t": func(a Args, x V) V {
		return studentT(a("degrees"), a("location"), a("scale"), x)
	},
	"Cauchy": func(a Args, x V) V {
		s := a("scale")
		valid(s)
		z := order.Div(order.Sub(x, a("location")), s)
		return order.Neg(order.Add(order.Log(s), order.Log(order.Add(n1, order.Square(z)))))
	},
	"Laplace": func(a Args, x V) V {
		s := a("scale")
		valid(s)
		return order.Neg(order.Add(order.Log(s), order.Div(order.Abs(order.Sub(x, a("location"))), s)))
	},
	"logistic": func(a Args, x V) V {
		s := a("scale")
		valid(s)
		z := order.Abs(order.Div(order.Sub(x, a("location")), s))
		return sum(order.Neg(z), order.Neg(order.Log(s)),
			order.Times(order.Log(order.Add(n1, order.Exp(order.Neg(z)))), big.NewRat(-2, 1)))
	},
	"skew-Normal": func(a Args, x V) V {
		s := a("scale")
		valid(s)
		z := order.Div(order.Sub(x, a("location")), s)
		return sum(halfSquare(z), order.Neg(order.Log(s)), order.Log(order.Phi(order.Mul(a("shape"), z))))
	},
	"Exponential": func(a Args, x V) V {
		r := gammaRate(a)
		x = fromOrigin(a, x)
		if order.Sign(x) < 0 {
			vanish()
		}
		return order.Sub(order.Log(r), order.Mul(r, x))
	},
	"Gamma": func(a Args, x V) V {
		x = fromOrigin(a, x)
		positive(x)
		k := a("shape")
		if r := a("rate"); r != nil && order.Exact(k) != nil && order.Exact(r) != nil {
			// The kernel alone; with 0 it is the improper limit that people write.
			return order.Sub(xlog(order.Sub(k, n1), x), order.Mul(r, x))
		}
		r := gammaRate(a)
		valid(k)
		return sum(order.Mul(k, order.Log(r)), xlog(order.Sub(k, n1), x), order.Neg(order.Mul(r, x)), order.Neg(order.LogGamma(k)))
	},
	"inverse-Gamma": func(a Args, x V) V {
		positive(x)
		k, s := a("shape"), a("scale")
		if order.Exact(k) != nil && order.Exact(s) != nil {
			return order.Neg(order.Add(xlog(order.Add(k, n1), x), order.Div(s, x)))
		}
		valid(k)
		valid(s)
		return sum(order.Mul(k, order.Log(s)), order.Neg(xlog(order.Add(k, n1), x)), order.Neg(order.Div(s, x)), order.Neg(order.LogGamma(k)))
	},
	"chi-square": func(a Args, x V) V {
		positive(x)
		k := order.Times(a("degrees"), half)
		valid(k)
		return sum(xlog(order.Sub(k, n1), x), order.Times(x, minusHalf), order.Neg(order.LogGamma(k)),
			order.Neg(order.Mul(k, order.Log(n2))))
	},
	"Weibull": func(a Args, x V) V {
		x = fromOrigin(a, x)
		positive(x)
		k, s := a("shape"), a("scale")
		valid(k)
		valid(s)
		l := order.Sub(order.Log(x), order.Log(s))
		return sum(order.Log(k), order.Mul(k, l), order.Neg(order.Log(x)), order.Neg(order.Exp(order.Mul(k, l))))
	},
	"Gumbel": func(a Args, x V) V {
		s := a("scale")
		valid(s)
		z := order.Div(order.Sub(x, a("location")), s)
		return sum(order.Neg(order.Log(s)), order.Neg(z), order.Neg(order.Exp(order.Neg(z))))
	},
	"generalized-extreme-value": func(a Args, x V) V {
		s, k := a("scale"), a("shape")
		valid(s)
		z := order.Div(order.Sub(x, a("location")), s)
		if r := order.Exact(k); r != nil && r.Sign() == 0 {
			return sum(order.Neg(order.Log(s)), order.Neg(z), order.Neg(order.Exp(order.Neg(z))))
		}
		t := order.Add(n1, order.Mul(k, z))
		positive(t)
		u := order.Div(order.Log(t), k)
		return sum(order.Neg(order.Log(s)), order.Neg(order.Log(t)), order.Neg(u), order.Neg(order.Exp(order.Neg(u))))
	},
	"generalized-Pareto": func(a Args, x V) V {
		x = fromOrigin(a, x)
		if order.Sign(x) < 0 {
			vanish()
		}
		s, k := a("scale"), a("shape")
		valid(s)
		z := order.Div(x, s)
		if r := order.Exact(k); r != nil && r.Sign() == 0 {
			return order.Neg(order.Add(order.Log(s), z))
		}
		t := order.Add(n1, order.Mul(k, z))
		positive(t)
		l := order.Log(t)
		return sum(order.Neg(order.Log(s)), order.Neg(l), order.Neg(order.Div(l, k)))
	},
	"Pareto": func(a Args, x V) V {
		m, k := a("minimum"), a("shape")
		valid(m)
		valid(k)
		if order.Sign(order.Sub(x, m)) < 0 {
			vanish()
		}
		return sum(order.Log(k), order.Mul(k, order.Log(m)), order.Neg(xlog(order.Add(k, n1), x)))
	},
	"inverse-Gaussian": func(a Args, x V) V {
		positive(x)
		m, k := a("mean"), a("shape")
		valid(m)
		valid(k)
		d := order.Sub(order.Div(x, m), n1)
		return sum(order.Times(order.Log(k), half), order.Times(order.Log(x), big.NewRat(-3, 2)),
			order.Times(order.Div(order.Mul(k, order.Square(d)), x), minusHalf))
	},
	"Beta": func(a Args, x V) V {
		p, q := betaWeights(a)
		return sum(betaKernel(p, q, x), order.Neg(normaliser(p, q)))
	},
	"Uniform": func(a Args, x V) V {
		lo, hi := a("low"), a("high")
		positive(order.Sub(hi, lo))
		if order.Sign(order.Sub(x, lo)) < 0 || order.Sign(order.Sub(hi, x)) < 0 {
			vanish()
		}
		return order.Neg(order.Log(order.Sub(hi, lo)))
	},
	"triangular": func(a Args, x V) V {
		lo, mode, hi := a("low"), a("mode"), a("high")
		positive(order.Sub(x, lo))
		positive(order.Sub(hi, x))
		if order.Sign(order.Sub(x, mode)) <= 0 {
			return sum(order.Log(order.Sub(x, lo)), order.Neg(order.Log(order.Sub(hi, lo))), order.Neg(order.Log(order.Sub(mode, lo))))
		}
		return sum(order.Log(order.Sub(hi, x)), order.Neg(order.Log(order.Sub(hi, lo))), order.Neg(order.Log(order.Sub(hi, mode))))
	},
	"half-Normal": func(a Args, x V) V {
		if order.Sign(x) < 0 {
			vanish()
		}
		s := Spread(a)
		return order.Sub(halfSquare(order.Div(x, s)), order.Log(s))
	},
	"half-Cauchy": func(a Args, x V) V {
		if order.Sign(x) < 0 {
			vanish()
		}
		s := a("scale")
		valid(s)
		return order.Neg(order.Add(order.Log(s), order.Log(order.Add(n1, order.Square(order.Div(x, s))))))
	},
	"half-Student-t": func(a Args, x V) V {
		if order.Sign(x) < 0 {
			vanish()
		}
		return studentT(a("degrees"), n0, a("scale"), x)
	},
	"Point": func(a Args, x V) V {
		d := order.Sub(x, a("value"))
		if r := order.Exact(d); r != nil {
			if r.Sign() == 0 {
				return n0
			}
			vanish()
		}
		if order.Sign(d) != 0 {
			vanish()
		}
		return n0
	},
}

func logMean(a Args) V {
	if m := a("median"); m != nil {
		return order.Log(m)
	}
	return a("log mean")
}

func binomial(n, p, x V) V {
	return sum(choose(n, x), xlog(x, p), xlog(order.Sub(n, x), order.Sub(n1, p)))
}

// short reports a whole number small enough to write a rising factorial out.
func short(v V) bool {
	r := order.Exact(v)
	return r != nil && r.IsInt() && r.Sign() >= 0 && r.Num().IsInt64() && r.Num().Int64() <= maxRising
}

const maxRising = 60

// rising is log Γ(k + x) − log Γ(k) − log x!; for a whole x it is a sum of
// logarithms, which is exact where k is.
func rising(k, x V) V {
	if short(x) {
		t := n0
		for i := int64(0); i < order.Exact(x).Num().Int64(); i++ {
			t = order.Add(t, order.Log(order.Add(k, order.Number(i))))
		}
		return t
	}
	return sum(order.LogGamma(order.Add(k, x)), order.Neg(order.LogGamma(k)), order.Neg(order.LogGamma(order.Add(x, n1))))
}

func betaKernel(p, q, x V) V {
	return order.Add(xlog(order.Sub(p, n1), x), xlog(order.Sub(q, n1), order.Sub(n1, x)))
}

// normaliser is log B(p, q), left out when it is a constant or when the kernel
// has none: Beta(0, 0) is the kernel alone.
func normaliser(p, q V) V {
	if order.Exact(p) != nil && order.Exact(q) != nil {
		return n0
	}
	return beta(p, q)
}

func studentT(nu, m, s, x V) V {
	valid(s)
	valid(nu)
	z := order.Div(order.Sub(x, m), s)
	k := order.Times(order.Add(nu, n1), half)
	c := n0
	if order.Exact(nu) == nil {
		c = sum(order.LogGamma(k), order.Neg(order.LogGamma(order.Times(nu, half))), order.Times(order.Log(nu), minusHalf))
	}
	return sum(c, order.Neg(order.Log(s)), order.Neg(order.Mul(k, order.Log(order.Add(n1, order.Div(order.Square(z), nu))))))
}
