package law

import (
	"math/big"

	"wellposed/checks/existence/order"
)

// Tails are the distribution function and its complement at x. At an end
// where one tends to 1 the other keeps its own small terms.
func Tails(name string, a Args, x V) (below, above V) {
	f := tails[name]
	if f == nil {
		Refuse("the distribution function of " + name + " has no expansion here")
	}
	return f(a, x)
}

func fromAbove(s V) (V, V) { return order.Sub(n1, s), s }
func fromBelow(f V) (V, V) { return f, order.Sub(n1, f) }

func standard(a Args, location, scale string, x V) V {
	s := a(scale)
	valid(s)
	return order.Div(order.Sub(x, a(location)), s)
}

var tails = map[string]func(a Args, x V) (V, V){
	"Normal": func(a Args, x V) (V, V) {
		z := order.Div(order.Sub(x, a("mean")), Spread(a))
		return order.Phi(z), order.Phi(order.Neg(z))
	},
	"log-Normal": func(a Args, x V) (V, V) {
		x = fromOrigin(a, x)
		if order.Sign(x) <= 0 {
			return n0, n1
		}
		z := order.Div(order.Sub(order.Log(x), logMean(a)), a("log sd"))
		return order.Phi(z), order.Phi(order.Neg(z))
	},
	"logistic": func(a Args, x V) (V, V) {
		z := standard(a, "location", "scale", x)
		return order.Expit(z), order.Expit(order.Neg(z))
	},
	"Cauchy": func(a Args, x V) (V, V) {
		z := standard(a, "location", "scale", x)
		t := order.Div(order.Atan(z), order.Pi())
		h := order.Const(half)
		return order.Add(h, t), order.Sub(h, t)
	},
	"Student-t": func(a Args, x V) (V, V) {
		z := standard(a, "location", "scale", x)
		return studentTails(a("degrees"), z)
	},
	"Laplace": func(a Args, x V) (V, V) {
		z := standard(a, "location", "scale", x)
		if order.Sign(z) < 0 {
			return fromBelow(order.Times(order.Exp(z), half))
		}
		return fromAbove(order.Times(order.Exp(order.Neg(z)), half))
	},
	"Gumbel": func(a Args, x V) (V, V) {
		z := standard(a, "location", "scale", x)
		return fromBelow(order.Exp(order.Neg(order.Exp(order.Neg(z)))))
	},
	"Exponential": func(a Args, x V) (V, V) {
		x = fromOrigin(a, x)
		if order.Sign(x) <= 0 {
			return n0, n1
		}
		return fromAbove(order.Exp(order.Neg(order.Mul(gammaRate(a), x))))
	},
	"Weibull": func(a Args, x V) (V, V) {
		x = fromOrigin(a, x)
		if order.Sign(x) <= 0 {
			return n0, n1
		}
		k, s := a("shape"), a("scale")
		valid(k)
		valid(s)
		l := order.Sub(order.Log(x), order.Log(s))
		return fromAbove(order.Exp(order.Neg(order.Exp(order.Mul(k, l)))))
	},
	"Pareto": func(a Args, x V) (V, V) {
		m, k := a("minimum"), a("shape")
		if order.Sign(order.Sub(x, m)) <= 0 {
			return n0, n1
		}
		return fromAbove(order.Exp(order.Mul(k, order.Sub(order.Log(m), order.Log(x)))))
	},
	"generalized-Pareto": func(a Args, x V) (V, V) {
		x = fromOrigin(a, x)
		if order.Sign(x) <= 0 {
			return n0, n1
		}
		z, k := order.Div(x, a("scale")), a("shape")
		if r := order.Exact(k); r != nil && r.Sign() == 0 {
			return fromAbove(order.Exp(order.Neg(z)))
		}
		t := order.Add(n1, order.Mul(k, z))
		if order.Sign(t) <= 0 {
			return n1, n0
		}
		return fromAbove(order.Exp(order.Neg(order.Div(order.Log(t), k))))
	},
	"generalized-extreme-value": func(a Args, x V) (V, V) {
		z, k := standard(a, "location", "scale", x), a("shape")
		u := z
		if r := order.Exact(k); r == nil || r.Sign() != 0 {
			t := order.Add(n1, order.Mul(k, z))
			if order.Sign(t) <= 0 {
				if order.Sign(k) > 0 {
					return n0, n1
				}
				return n1, n0
			}
			u = order.Div(order.Log(t), k)
		}
		return fromBelow(order.Exp(order.Neg(order.Exp(order.Neg(u)))))
	},
	"Uniform": func(a Args, x V) (V, V) {
		lo, hi := a("low"), a("high")
		if order.Sign(order.Sub(x, lo)) <= 0 {
			return n0, n1
		}
		if order.Sign(order.Sub(hi, x)) <= 0 {
			return n1, n0
		}
		w := order.Sub(hi, lo)
		return order.Div(order.Sub(x, lo), w), order.Div(order.Sub(hi, x), w)
	},
	"half-Normal": func(a Args, x V) (V, V) {
		if order.Sign(x) <= 0 {
			return n0, n1
		}
		z := order.Div(x, Spread(a))
		return fromAbove(order.Times(order.Phi(order.Neg(z)), big.NewRat(2, 1)))
	},
	"half-Cauchy": func(a Args, x V) (V, V) {
		if order.Sign(x) <= 0 {
			return n0, n1
		}
		return fromBelow(order.Div(order.Atan(order.Div(x, a("scale"))), order.Times(order.Pi(), half)))
	},
	"Gamma": func(a Args, x V) (V, V) {
		x = fromOrigin(a, x)
		if order.Sign(x) <= 0 {
			return n0, n1
		}
		return gammaTails(a("shape"), order.Mul(gammaRate(a), x))
	},
	"Bernoulli": func(a Args, x V) (V, V) { return counts("Bernoulli", a, x) },
	"Binomial":  func(a Args, x V) (V, V) { return counts("Binomial", a, x) },
	"Poisson":   func(a Args, x V) (V, V) { return counts("Poisson", a, x) },
	"negative-Binomial": func(a Args, x V) (V, V) {
		return counts("negative-Binomial", a, x)
	},
	"geometric": func(a Args, x V) (V, V) { return counts("geometric", a, x) },
}

// studentTails for whole-number degrees 1 and 2, which have closed forms.
func studentTails(nu, z V) (V, V) {
	r := order.Exact(nu)
	switch {
	case r != nil && r.Cmp(big.NewRat(1, 1)) == 0:
		t := order.Div(order.Atan(z), order.Pi())
		h := order.Const(half)
		return order.Add(h, t), order.Sub(h, t)
	case r != nil && r.Cmp(big.NewRat(2, 1)) == 0:
		t := order.Times(order.Div(z, order.Sqrt(order.Add(n2, order.Square(z)))), half)
		h := order.Const(half)
		return order.Add(h, t), order.Sub(h, t)
	}
	Refuse("the distribution function of Student-t has no expansion here")
	return nil, nil
}

// gammaTails for a whole shape up to 12: e^−u Σ_{j<k} u^j/j! is the upper
// tail. For other known shapes only the ends have closed leading terms:
// u^k/Γ(k+1) below as u → 0 and u^(k−1) e^−u/Γ(k) above as u → ∞.
func gammaTails(k, u V) (V, V) {
	r := order.Exact(k)
	if r == nil || r.Sign() <= 0 || r.Cmp(big.NewRat(12, 1)) > 0 || !r.IsInt() {
		Refuse("the distribution function of Gamma has no expansion here")
	}
	term, total := V(n1), V(n1)
	for j := int64(1); j < r.Num().Int64(); j++ {
		term = order.Times(order.Mul(term, u), big.NewRat(1, j))
		total = order.Add(total, term)
	}
	return fromAbove(order.Mul(order.Exp(order.Neg(u)), total))
}

// counts sums probabilities up to a whole x of at most 20; for a binomial with
// a known number of trials the upper tail is summed too.
func counts(name string, a Args, x V) (V, V) {
	r := order.Exact(x)
	if r == nil || !r.IsInt() || r.Cmp(big.NewRat(20, 1)) > 0 {
		Refuse("a tail probability of " + name + " has no expansion here")
	}
	total := V(n0)
	for i := int64(0); i <= r.Num().Int64(); i++ {
		p := withConstants(name, a, i)
		if p != nil {
			total = order.Add(total, p)
		}
	}
	return fromBelow(total)
}

func withConstants(name string, a Args, i int64) (p V) {
	err := order.Try(func() {
		x := order.Number(i)
		l := Density(name, a, x)
		switch name {
		case "Poisson":
			l = order.Sub(l, order.LogGamma(order.Number(i+1)))
		case "Binomial", "negative-Binomial":
			if name == "Binomial" {
				if n := order.Exact(a("trials")); n != nil {
					l = sum(l, order.LogGamma(order.Add(a("trials"), n1)), order.Neg(order.LogGamma(order.Number(i+1))),
						order.Neg(order.LogGamma(order.Sub(order.Add(a("trials"), n1), x))))
				}
			} else if order.Exact(a("size")) != nil {
				l = sum(l, order.LogGamma(order.Add(a("size"), x)), order.Neg(order.LogGamma(a("size"))), order.Neg(order.LogGamma(order.Number(i+1))))
			}
		}
		p = order.Exp(l)
	})
	if err == order.Vanishes {
		return nil
	}
	if err != nil {
		panic(err)
	}
	return p
}
