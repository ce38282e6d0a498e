package posterior

import (
	"math"

	"wellposed/checks/family"
	"wellposed/checks/posterior/special"
)

// logChoose is the logarithm of a binomial coefficient.
func logChoose(n, k float64) float64 {
	return -math.Log(n+1) - special.LogBeta(k+1, n-k+1)
}

func whole(y float64) bool { return y >= 0 && y == math.Floor(y) }

// counts compiles the laws of whole numbers.
func counts(name string, arg func(string) term, has func(string) bool) law {
	l := law{discrete: true}
	switch name {
	case "Bernoulli":
		p := arg("probability")
		l.density = func(s *state, y val) float64 {
			if y.v == 1 {
				return p.log(s)
			}
			return p.log1m(s)
		}
		l.tails = func(s *state, y val) (float64, float64) {
			switch {
			case y.v < 0:
				return -inf, 0
			case y.v < 1:
				return p.log1m(s), p.log(s)
			}
			return 0, -inf
		}
	case "Binomial":
		n, p := arg("trials").value, arg("probability")
		choose := remember2(logChoose)
		l.density = func(s *state, y val) float64 {
			t := n(s)
			if y.v > t || y.v < 0 {
				return -inf
			}
			if p.logit != nil {
				u := p.logit(s)
				return choose(t, y.v) + y.v*u - t*special.Log1pExp(u)
			}
			return choose(t, y.v) + product(y.v, p.log(s)) + product(t-y.v, p.log1m(s))
		}
		l.tails = func(s *state, y val) (float64, float64) {
			t, k := n(s), math.Floor(y.v)
			switch {
			case k < 0:
				return -inf, 0
			case k >= t:
				return 0, -inf
			}
			lower, upper := family.Beta{A: k + 1, B: t - k}.LogTails(p.value(s))
			return upper, lower
		}
	case "geometric":
		p, first := arg("probability"), arg("first").value
		l.density = func(s *state, y val) float64 { return p.log(s) + product(y.v-first(s), p.log1m(s)) }
		l.tails = func(s *state, y val) (float64, float64) {
			u := (math.Floor(y.v-first(s)) + 1) * p.log1m(s)
			return special.Log1mExp(u), u
		}
	case "negative-Binomial":
		// With failures y: Γ(y+r)/(Γ(r) y!) p^r (1−p)^y; p = r/(r + mean).
		size := arg("size")
		var logp, logq fn
		if has("mean") {
			m := arg("mean")
			logp = func(s *state) float64 { return -math.Log1p(math.Exp(m.log(s) - size.log(s))) }
			logq = func(s *state) float64 { return -math.Log1p(math.Exp(size.log(s) - m.log(s))) }
		} else {
			p := arg("probability")
			logp, logq = p.log, p.log1m
		}
		l.density = func(s *state, y val) float64 {
			r := size.value(s)
			if y.v == 0 {
				return r * logp(s)
			}
			return -special.LogBeta(r, y.v) - math.Log(y.v) + r*logp(s) + y.v*logq(s)
		}
		l.tails = func(s *state, y val) (float64, float64) {
			if y.v < 0 {
				return -inf, 0
			}
			return family.Beta{A: size.value(s), B: math.Floor(y.v) + 1}.LogTails(math.Exp(logp(s)))
		}
	case "Poisson":
		m, factorial := arg("mean"), remember1(func(y float64) float64 { return special.Lgamma(y + 1) })
		l.density = func(s *state, y val) float64 {
			return product(y.v, m.log(s)) - m.value(s) - factorial(y.v)
		}
		l.tails = func(s *state, y val) (float64, float64) {
			if y.v < 0 {
				return -inf, 0
			}
			k := math.Floor(y.v) + 1
			if mean := m.value(s); mean > 1e-12*k {
				lower, upper := family.Gamma{Shape: k, Rate: 1}.LogTails(mean)
				return upper, lower
			}
			// The leading term m^k / k!, which also holds where m underflows.
			upper := k*m.log(s) - special.Lgamma(k+1)
			return special.Log1mExp(upper), upper
		}
	case "beta-Binomial":
		n := arg("trials").value
		a, b := pairOf(arg, has)
		l.density = func(s *state, y val) float64 {
			t, av, bv := n(s), a(s), b(s)
			if y.v > t || y.v < 0 {
				return -inf
			}
			return logChoose(t, y.v) + special.LogBeta(av+y.v, bv+t-y.v) - special.LogBeta(av, bv)
		}
	case "discrete-Uniform":
		a, b := arg("low").value, arg("high").value
		l.density = func(s *state, y val) float64 {
			if y.v < a(s) || y.v > b(s) {
				return -inf
			}
			return -math.Log(b(s) - a(s) + 1)
		}
	case "hypergeometric":
		population, marked, drawn := arg("population").value, arg("marked").value, arg("drawn").value
		l.density = func(s *state, y val) float64 {
			n, k, d := population(s), marked(s), drawn(s)
			if y.v < 0 || y.v > k || d-y.v > n-k || y.v > d {
				return -inf
			}
			return logChoose(k, y.v) + logChoose(n-k, d-y.v) - logChoose(n, d)
		}
	}
	inner := l.density
	l.density = func(s *state, y val) float64 {
		if !whole(y.v) {
			return -inf
		}
		return inner(s, y)
	}
	return l
}

// positives compiles laws on (0, ∞).
func positives(name string, arg func(string) term, has func(string) bool) law {
	var density func(s *state, y val) float64
	var tails func(s *state, y val) (float64, float64)
	switch name {
	case "Exponential":
		var logRate fn
		if has("rate") {
			logRate = arg("rate").log
		} else {
			m := arg("mean").log
			logRate = func(s *state) float64 { return -m(s) }
		}
		density = func(s *state, y val) float64 { r := logRate(s); return r - math.Exp(r+y.log) }
		tails = func(s *state, y val) (float64, float64) {
			u := -math.Exp(logRate(s) + y.log)
			return special.Log1mExp(u), u
		}
	case "Weibull":
		k, scale := arg("shape"), arg("scale").log
		density = func(s *state, y val) float64 {
			z := y.log - scale(s)
			kv := k.value(s)
			return k.log(s) + kv*z - y.log - math.Exp(kv*z)
		}
		tails = func(s *state, y val) (float64, float64) {
			u := -math.Exp(k.value(s) * (y.log - scale(s)))
			return special.Log1mExp(u), u
		}
	case "Gamma", "chi-square":
		var a, logRate fn
		switch {
		case name == "chi-square":
			d := arg("degrees").value
			a, logRate = func(s *state) float64 { return d(s) / 2 }, func(*state) float64 { return -math.Ln2 }
		case has("rate"):
			a, logRate = arg("shape").value, arg("rate").log
		case has("scale"):
			sc := arg("scale").log
			a, logRate = arg("shape").value, func(s *state) float64 { return -sc(s) }
		default:
			sh, m := arg("shape"), arg("mean").log
			a, logRate = sh.value, func(s *state) float64 { return sh.log(s) - m(s) }
		}
		lgamma := remember1(special.Lgamma)
		density = func(s *state, y val) float64 {
			av, r := a(s), logRate(s)
			if math.IsInf(r, -1) {
				return (av - 1) * y.log // rate 0: an improper end of the family
			}
			u := r + y.log
			return av*u - math.Exp(u) - finite(lgamma(av)) - y.log
		}
		tails = func(s *state, y val) (float64, float64) {
			return family.Gamma{Shape: a(s), Rate: 1}.LogTails(math.Exp(logRate(s) + y.log))
		}
	case "inverse-Gamma":
		a, logScale := arg("shape").value, arg("scale").log
		lgamma := remember1(special.Lgamma)
		density = func(s *state, y val) float64 {
			av, r := a(s), logScale(s)
			if math.IsInf(r, -1) {
				return -(av + 1) * y.log
			}
			u := r - y.log
			return av*u - math.Exp(u) - finite(lgamma(av)) - y.log
		}
		tails = func(s *state, y val) (float64, float64) {
			l, u := family.Gamma{Shape: a(s), Rate: 1}.LogTails(math.Exp(logScale(s) - y.log))
			return u, l
		}
	case "Pareto":
		least, a := arg("minimum").log, arg("shape")
		density = func(s *state, y val) float64 {
			m := least(s)
			if y.log < m {
				return -inf
			}
			return a.log(s) - a.value(s)*(y.log-m) - y.log
		}
		tails = func(s *state, y val) (float64, float64) {
			u := math.Min(0, -a.value(s)*(y.log-least(s)))
			return special.Log1mExp(u), u
		}
	case "inverse-Gaussian":
		m, k := arg("mean"), arg("shape")
		density = func(s *state, y val) float64 {
			d := (y.v - m.value(s)) / m.value(s)
			return (k.log(s)-logTwoPi-3*y.log)/2 - k.value(s)*d*d/(2*y.v)
		}
	}
	l := law{density: func(s *state, y val) float64 {
		if y.v < 0 || math.IsInf(y.log, -1) {
			if y.v == 0 && name == "Exponential" {
				return density(s, y)
			}
			return -inf
		}
		return density(s, y)
	}}
	if tails != nil {
		l.tails = func(s *state, y val) (float64, float64) {
			if y.v <= 0 && math.IsInf(y.log, -1) || y.v < 0 {
				return -inf, 0
			}
			return tails(s, y)
		}
	}
	return l
}
