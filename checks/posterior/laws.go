package posterior

import (
	"math"

	"wellposed/checks/family"
	"wellposed/checks/posterior/special"
	"wellposed/parser/model"
)

// val is a value with the logarithms of it and of one minus it.
type val struct{ v, log, log1m float64 }

func number(v float64) val { return val{v, math.Log(v), math.Log1p(-v)} }

func (t term) at(s *state) val { return val{t.value(s), t.log(s), t.log1m(s)} }

// law is a compiled distribution of one number.
type law struct {
	// density is the normalised log-density or log-probability.
	density func(s *state, y val) float64
	// tails are the logarithms of P(Y ≤ y) and P(Y > y); nil when not computed.
	tails    func(s *state, y val) (lower, upper float64)
	discrete bool
}

const logTwoPi = 1.8378770664093454836

var inf = math.Inf(1)

// law compiles a distribution at a row.
func (c *compiler) law(d *model.Dist, row int) law {
	if len(d.Parts) > 0 {
		return c.mixture(d, row)
	}
	arg := func(label string) term {
		e := d.Arg(label)
		if e == nil {
			refuse("%s without its %s", d.Spec.Name, label)
		}
		return c.compile(e, row)
	}
	has := func(label string) bool { return d.Arg(label) != nil }
	// shifted moves the origin.
	shifted := func(l law) law {
		if !has("origin") {
			return l
		}
		o := arg("origin")
		move := func(s *state, y val) val { return number(y.v - o.value(s)) }
		out := law{density: func(s *state, y val) float64 { return l.density(s, move(s, y)) }}
		if l.tails != nil {
			out.tails = func(s *state, y val) (float64, float64) { return l.tails(s, move(s, y)) }
		}
		return out
	}
	switch name := d.Spec.Name; name {
	case "Bernoulli", "Binomial", "geometric", "negative-Binomial", "Poisson", "beta-Binomial", "discrete-Uniform", "hypergeometric":
		return counts(name, arg, has)
	case "Normal", "half-Normal", "log-Normal":
		var logSD fn
		switch {
		case has("sd"):
			logSD = arg("sd").log
		case has("log sd"):
			logSD = arg("log sd").log
		case has("variance"):
			v := arg("variance").log
			logSD = func(s *state) float64 { return v(s) / 2 }
		default:
			v := arg("precision").log
			logSD = func(s *state) float64 { return -v(s) / 2 }
		}
		switch name {
		case "half-Normal":
			return half(located(constant(0).value, logSD, standardNormal))
		case "log-Normal":
			var centre fn
			if has("median") {
				centre = arg("median").log
			} else {
				centre = arg("log mean").value
			}
			return shifted(logarithmic(located(centre, logSD, standardNormal)))
		}
		return located(arg("mean").value, logSD, standardNormal)
	case "Student-t", "half-Student-t":
		nu := arg("degrees").value
		norm := remember1(func(nu float64) float64 { return special.LogStudent(nu, 0) })
		base := shape{
			density: func(s *state, z float64) float64 {
				v := nu(s)
				if math.IsInf(v, 1) {
					return norm(v) - z*z/2
				}
				return norm(v) - (v+1)/2*math.Log1p(z*z/v)
			},
			tails: func(s *state, z float64) (float64, float64) { return special.StudentTails(nu(s), z) },
		}
		if name == "half-Student-t" {
			return half(located(constant(0).value, arg("scale").log, base))
		}
		return located(arg("location").value, arg("scale").log, base)
	case "Cauchy":
		return located(arg("location").value, arg("scale").log, standardCauchy)
	case "half-Cauchy":
		return half(located(constant(0).value, arg("scale").log, standardCauchy))
	case "Laplace":
		return located(arg("location").value, arg("scale").log, standardLaplace)
	case "logistic":
		return located(arg("location").value, arg("scale").log, standardLogistic)
	case "Gumbel":
		return located(arg("location").value, arg("scale").log, standardGumbel)
	case "skew-Normal":
		a := arg("shape").value
		return located(arg("location").value, arg("scale").log, shape{
			density: func(s *state, z float64) float64 {
				return math.Ln2 - z*z/2 - logTwoPi/2 + special.LogPhi(a(s)*z)
			},
		})
	case "generalized-extreme-value":
		return located(arg("location").value, arg("scale").log, extreme(arg("shape").value))
	case "generalized-Pareto":
		return shifted(located(constant(0).value, arg("scale").log, excess(arg("shape").value)))
	case "Exponential", "Weibull", "Gamma", "inverse-Gamma", "chi-square", "Pareto", "inverse-Gaussian":
		return shifted(positives(name, arg, has))
	case "Beta":
		a, b := pairOf(arg, has)
		logBeta := remember2(special.LogBeta)
		return law{
			density: func(s *state, y val) float64 {
				av, bv := a(s), b(s)
				return product(av-1, y.log) + product(bv-1, y.log1m) - finite(logBeta(av, bv))
			},
			tails: func(s *state, y val) (float64, float64) {
				d, err := family.NewBeta(a(s), b(s))
				if err != nil {
					return math.NaN(), math.NaN()
				}
				return d.LogTails(y.v)
			},
		}
	case "Uniform", "triangular":
		return bounded(name, arg)
	case "von-Mises":
		dir, k := arg("direction").value, arg("concentration").value
		return law{density: func(s *state, y val) float64 {
			kv := k(s)
			return kv*(math.Cos(y.v-dir(s))-1) - logTwoPi - logBesselScaled(kv)
		}}
	case "Point":
		refuse("a Point has no density")
	}
	refuse("the law %s is not computed here", d.Spec.Name)
	return law{}
}

// product is a·l with 0·(−Inf) = 0.
func product(a, l float64) float64 {
	if a == 0 {
		return 0
	}
	return a * l
}

// finite drops a normaliser that is infinite, as at the improper ends of a family.
func finite(x float64) float64 {
	if math.IsInf(x, 0) || x != x {
		return 0
	}
	return x
}

// pairOf reads the two parametrisations of a Beta.
func pairOf(arg func(string) term, has func(string) bool) (a, b fn) {
	if has("mean") {
		m, t := arg("mean"), arg("total").value
		return func(s *state) float64 { return m.value(s) * t(s) }, func(s *state) float64 { return math.Exp(m.log1m(s)) * t(s) }
	}
	return arg("a").value, arg("b").value
}

// mixture adds the parts. A Point contributes where a discrete law is expected.
func (c *compiler) mixture(d *model.Dist, row int) law {
	type part struct {
		weight term
		law    law
		point  term
		atom   bool
	}
	parts := make([]part, len(d.Parts))
	out := law{}
	for i, p := range d.Parts {
		parts[i].weight = c.compile(p.Weight, row)
		if p.Dist.Spec.Name == "Point" {
			parts[i].atom, parts[i].point = true, c.compile(p.Dist.Arg("value"), row)
			continue
		}
		parts[i].law = c.law(p.Dist, row)
		out.discrete = out.discrete || parts[i].law.discrete
	}
	for _, p := range parts {
		if p.atom && !out.discrete {
			refuse("a Point beside a law with a density")
		}
	}
	out.density = func(s *state, y val) float64 {
		total := -inf
		for i := range parts {
			p := &parts[i]
			w := p.weight.log(s)
			switch {
			case !p.atom:
				total = special.LogSum(total, w+p.law.density(s, y))
			case p.point.value(s) == y.v:
				total = special.LogSum(total, w)
			}
		}
		return total
	}
	for _, p := range parts {
		if p.atom || p.law.tails == nil {
			return out
		}
	}
	out.tails = func(s *state, y val) (float64, float64) {
		lower, upper := -inf, -inf
		for i := range parts {
			w := parts[i].weight.log(s)
			l, u := parts[i].law.tails(s, y)
			lower, upper = special.LogSum(lower, w+l), special.LogSum(upper, w+u)
		}
		return lower, upper
	}
	return out
}

// shape is a law with location 0 and scale 1.
type shape struct {
	density func(s *state, z float64) float64
	tails   func(s *state, z float64) (lower, upper float64)
}

var (
	standardNormal = shape{
		func(_ *state, z float64) float64 { return -z*z/2 - logTwoPi/2 },
		func(_ *state, z float64) (float64, float64) { return special.LogPhi(z), special.LogPhi(-z) },
	}
	standardCauchy = shape{
		func(_ *state, z float64) float64 {
			if math.Abs(z) > 1e100 {
				return -2*math.Log(math.Abs(z)) - math.Log(math.Pi)
			}
			return -math.Log1p(z*z) - math.Log(math.Pi)
		},
		func(_ *state, z float64) (float64, float64) {
			if z < 0 {
				l := math.Log(math.Atan2(1, -z) / math.Pi)
				return l, special.Log1mExp(l)
			}
			u := math.Log(math.Atan2(1, z) / math.Pi)
			return special.Log1mExp(u), u
		},
	}
	standardLaplace = shape{
		func(_ *state, z float64) float64 { return -math.Abs(z) - math.Ln2 },
		func(_ *state, z float64) (float64, float64) {
			t := -math.Abs(z) - math.Ln2
			if z < 0 {
				return t, special.Log1mExp(t)
			}
			return special.Log1mExp(t), t
		},
	}
	standardLogistic = shape{
		func(_ *state, z float64) float64 { return -math.Abs(z) - 2*math.Log1p(math.Exp(-math.Abs(z))) },
		func(_ *state, z float64) (float64, float64) { return -special.Log1pExp(-z), -special.Log1pExp(z) },
	}
	standardGumbel = shape{
		func(_ *state, z float64) float64 { return -z - math.Exp(-z) },
		func(_ *state, z float64) (float64, float64) { l := -math.Exp(-z); return l, special.Log1mExp(l) },
	}
)

// extreme is the generalized extreme value law: with w = log(1 + shape·z)/shape
// the density is exp(−(1 + shape) w − exp(−w)).
func extreme(xi fn) shape {
	w := func(s *state, z float64) (w, k float64) {
		k = xi(s)
		return boxed(k, z), k
	}
	return shape{
		func(s *state, z float64) float64 {
			v, k := w(s, z)
			if v != v {
				return -inf
			}
			return -(1+k)*v - math.Exp(-v)
		},
		func(s *state, z float64) (float64, float64) {
			v, k := w(s, z)
			if v != v {
				if k > 0 {
					return -inf, 0
				}
				return 0, -inf
			}
			l := -math.Exp(-v)
			return l, special.Log1mExp(l)
		},
	}
}

// excess is the generalized Pareto law on (0, ∞).
func excess(xi fn) shape {
	return shape{
		func(s *state, z float64) float64 {
			k := xi(s)
			v := boxed(k, z)
			if z < 0 || v != v {
				return -inf
			}
			return -(1 + k) * v
		},
		func(s *state, z float64) (float64, float64) {
			if z <= 0 {
				return -inf, 0
			}
			v := boxed(xi(s), z)
			if v != v {
				return 0, -inf
			}
			return special.Log1mExp(-v), -v
		},
	}
}

// boxed is log(1 + k z)/k, z at k = 0, NaN outside the support.
func boxed(k, z float64) float64 {
	if k*z <= -1 {
		return math.NaN()
	}
	if math.Abs(k*z) < 1e-8 {
		return z * (1 - k*z/2)
	}
	return math.Log1p(k*z) / k
}

// located puts a shape at a location and a scale.
func located(centre, logScale fn, h shape) law {
	l := law{density: func(s *state, y val) float64 {
		ls := logScale(s)
		return h.density(s, (y.v-centre(s))*math.Exp(-ls)) - ls
	}}
	if h.tails != nil {
		l.tails = func(s *state, y val) (float64, float64) {
			return h.tails(s, (y.v-centre(s))*math.Exp(-logScale(s)))
		}
	}
	return l
}

// half folds a law that is symmetric about 0.
func half(l law) law {
	return law{
		density: func(s *state, y val) float64 {
			if y.v < 0 {
				return -inf
			}
			return math.Ln2 + l.density(s, y)
		},
		tails: func(s *state, y val) (float64, float64) {
			if y.v <= 0 {
				return -inf, 0
			}
			_, u := l.tails(s, y)
			return special.Log1mExp(math.Min(0, math.Ln2+u)), math.Ln2 + u
		},
	}
}

// logarithmic is the law of exp(Z).
func logarithmic(l law) law {
	return law{
		density: func(s *state, y val) float64 {
			if y.v < 0 || math.IsInf(y.log, -1) {
				return -inf
			}
			return l.density(s, val{v: y.log}) - y.log
		},
		tails: func(s *state, y val) (float64, float64) {
			if y.v <= 0 {
				return -inf, 0
			}
			return l.tails(s, val{v: y.log})
		},
	}
}

func bounded(name string, arg func(string) term) law {
	a, b := arg("low").value, arg("high").value
	if name == "Uniform" {
		return law{
			density: func(s *state, y val) float64 {
				if y.v < a(s) || y.v > b(s) {
					return -inf
				}
				return -math.Log(b(s) - a(s))
			},
			tails: func(s *state, y val) (float64, float64) {
				u := math.Max(0, math.Min(1, (y.v-a(s))/(b(s)-a(s))))
				return math.Log(u), math.Log1p(-u)
			},
		}
	}
	m := arg("mode").value
	return law{density: func(s *state, y val) float64 {
		low, top, high := a(s), m(s), b(s)
		switch {
		case y.v < low || y.v > high:
			return -inf
		case y.v < top:
			return math.Log(2 * (y.v - low) / ((high - low) * (top - low)))
		case high == top:
			return math.Log(2 / (high - low))
		}
		return math.Log(2 * (high - y.v) / ((high - low) * (high - top)))
	}}
}

// logBesselScaled is log(I_0(k) exp(−k)), Abramowitz & Stegun 9.6.12 and 9.7.1.
func logBesselScaled(k float64) float64 {
	if k < 30 {
		sum, t := 1.0, 1.0
		for n := 1.0; t > 1e-17*sum; n++ {
			t *= k * k / (4 * n * n)
			sum += t
		}
		return math.Log(sum) - k
	}
	sum, t := 1.0, 1.0
	for n := 1.0; n < 25; n++ {
		t *= (2*n - 1) * (2*n - 1) / (8 * k * n)
		if t < 1e-17 {
			break
		}
		sum += t
	}
	return math.Log(sum) - (logTwoPi+math.Log(k))/2
}
