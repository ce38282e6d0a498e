package posterior

import (
	"math"
	"slices"

	"wellposed/checks/posterior/special"
	"wellposed/parser/model"
)

// prior compiles a prior statement, factor by factor.
func (c *compiler) prior(p *model.Prior) []factor {
	list := c.priorFactors(p)
	for i := range list {
		for _, s := range list[i].slots {
			if slices.Contains(p.About, c.unknowns[s]) {
				list[i].owners = append(list[i].owners, s)
			}
		}
	}
	return list
}

func (c *compiler) priorFactors(p *model.Prior) []factor {
	if p.Form == model.ByRule {
		if p.Rule == nil || p.Rule.LogKernel == nil {
			panic(refusal{&UnresolvedError{p}})
		}
		return []factor{c.byRule(p)}
	}
	if p.Form == model.ByKernel {
		return []factor{c.touching(func() fn {
			for _, u := range p.About {
				if !u.Scalar() && u.Size == 0 {
					refuse("a kernel on the components of %s", u.Name)
				}
			}
			k := c.compile(p.Kernel, 0)
			return k.log
		})}
	}
	// A law on a whole unknown speaks of each component.
	if ref, ok := p.Target.(*model.UnknownRef); ok && ref.Which == model.Whole && !ref.Unknown.Scalar() {
		u := ref.Unknown
		if p.Form == model.ByDist && p.Dist.Spec.Name == "Dirichlet" {
			return []factor{c.dirichlet(p.Dist, u)}
		}
		if u.Kind.Name == "proportions" || u.Kind.Name == "cutpoints" {
			if p.Form == model.ByFlat {
				f := c.touching(func() fn {
					for k := range u.Components() {
						c.component(u, k)
					}
					return func(*state) float64 { return 0 }
				})
				f.flat = true
				return []factor{f}
			}
			if u.Kind.Name == "proportions" {
				refuse("%s on shares of a whole", model.DistText(p.Dist))
			}
		}
		if p.Form == model.ByDist && (p.Dist.Spec.Name == "multivariate-Normal" || p.Dist.Spec.Name == "g-prior") {
			refuse("the law %s is not computed here", p.Dist.Spec.Name)
		}
		var out []factor
		for k := range u.Components() {
			if u.Relative == k {
				continue
			}
			out = append(out, c.priorOn(p, &model.UnknownRef{Unknown: u, Which: model.Fixed, Component: k}))
		}
		return out
	}
	if p.Joint {
		v, ok := p.Target.(*model.Vector)
		if ok && p.Form == model.ByFlat {
			var out []factor
			for _, item := range v.Items {
				out = append(out, c.priorOn(p, item))
			}
			return out
		}
		refuse("a law on several unknowns together")
	}
	return []factor{c.priorOn(p, p.Target)}
}

// priorOn is a law or flatness on one expression.
func (c *compiler) priorOn(p *model.Prior, target model.Expr) factor {
	ref, isRef := target.(*model.UnknownRef)
	f := c.touching(func() fn {
		t := c.compile(target, 0)
		slope := c.logSlope(target, p)
		if p.Form == model.ByFlat {
			if p.Truncated != nil {
				refuse("a flat prior with limits")
			}
			return slope
		}
		l := c.law(p.Dist, 0)
		var inside fn
		if p.Truncated != nil {
			return c.truncatedPrior(l, p, t, slope)
		}
		_ = inside
		if isRef {
			return func(s *state) float64 { return l.density(s, t.at(s)) }
		}
		return func(s *state) float64 { return l.density(s, t.at(s)) + slope(s) }
	})
	f.flat = isRef && p.Form == model.ByFlat
	if isRef && p.Form == model.ByDist && p.Dist.Spec.Name == "Normal" && p.Truncated == nil {
		f.gauss = c.normal(p.Dist, 0)
		f.gauss.slot = c.slots[variable{ref.Unknown, c.components(ref, 0)[0]}]
	}
	return f
}

func (c *compiler) truncatedPrior(l law, p *model.Prior, t term, slope fn) fn {
	if l.tails == nil {
		refuse("the distribution function of %s is not computed here", p.Dist.Spec.Name)
	}
	inside := c.truncation(l, p.Truncated, 0)
	var low, high fn
	if p.Truncated.Low != nil {
		low = c.compile(p.Truncated.Low, 0).value
	}
	if p.Truncated.High != nil {
		high = c.compile(p.Truncated.High, 0).value
	}
	return func(s *state) float64 {
		y := t.at(s)
		if low != nil && y.v < low(s) || high != nil && y.v > high(s) {
			return -inf
		}
		return l.density(s, y) - inside(s) + slope(s)
	}
}

// logSlope is log |d target / d unknown| of a target that is a function of one
// component; a function of several changes the first of them (the others stay).
func (c *compiler) logSlope(target model.Expr, p *model.Prior) fn {
	zero := func(*state) float64 { return 0 }
	switch e := target.(type) {
	case *model.UnknownRef:
		return zero
	case *model.LetRef:
		return c.logSlope(e.Let.Value, p)
	case *model.Call:
		if len(e.Args) == 1 {
			x := c.compile(e.Args[0], 0)
			inner := c.logSlope(e.Args[0], p)
			var outer fn
			switch e.Func {
			case "log", "cloglog":
				outer = func(s *state) float64 { return -x.log(s) }
				if e.Func == "cloglog" {
					outer = func(s *state) float64 { l := x.log1m(s); return -l - math.Log(-l) }
				}
			case "exp":
				outer = x.value
			case "sqrt":
				outer = func(s *state) float64 { return -x.log(s)/2 - math.Ln2 }
			case "logit":
				outer = func(s *state) float64 { return -x.log(s) - x.log1m(s) }
			case "expit":
				outer = func(s *state) float64 {
					v := math.Abs(x.value(s))
					return -v - 2*math.Log1p(math.Exp(-v))
				}
			case "odds":
				outer = func(s *state) float64 { return -2 * x.log1m(s) }
			case "probit":
				t := apply("probit", x)
				outer = func(s *state) float64 { z := t.value(s); return z*z/2 + logTwoPi/2 }
			case "Phi":
				outer = func(s *state) float64 { z := x.value(s); return -z*z/2 - logTwoPi/2 }
			case "atan":
				outer = func(s *state) float64 { z := x.value(s); return -math.Log1p(z * z) }
			case "tanh":
				outer = func(s *state) float64 {
					v := math.Abs(2 * x.value(s))
					return 2*math.Ln2 - v - 2*math.Log1p(math.Exp(-v))
				}
			case "atanh":
				outer = func(s *state) float64 {
					v := x.value(s)
					return -math.Log1p(v) - math.Log1p(-v)
				}
			}
			if outer != nil {
				return func(s *state) float64 { return outer(s) + inner(s) }
			}
		}
	case *model.Op:
		if len(e.Args) == 1 {
			return c.logSlope(e.Args[0], p)
		}
		a, b := e.Args[0], e.Args[1]
		switch {
		case (e.Op == "+" || e.Op == "-") && model.Known(b):
			return c.logSlope(a, p)
		case (e.Op == "+" || e.Op == "-") && model.Known(a):
			return c.logSlope(b, p)
		case e.Op == "*" && model.Known(a):
			k, inner := math.Log(math.Abs(float(a, 0))), c.logSlope(b, p)
			return func(s *state) float64 { return k + inner(s) }
		case e.Op == "*" && model.Known(b):
			k, inner := math.Log(math.Abs(float(b, 0))), c.logSlope(a, p)
			return func(s *state) float64 { return k + inner(s) }
		case e.Op == "/" && model.Known(b):
			k, inner := -math.Log(math.Abs(float(b, 0))), c.logSlope(a, p)
			return func(s *state) float64 { return k + inner(s) }
		case e.Op == "/" && model.Known(a):
			k, x, inner := math.Log(math.Abs(float(a, 0))), c.compile(b, 0), c.logSlope(b, p)
			return func(s *state) float64 { return k - 2*logAbs(x, s) + inner(s) }
		case e.Op == "/" && oddsOf(a, b):
			x := c.compile(a, 0)
			return func(s *state) float64 { return -2 * x.log1m(s) }
		case e.Op == "^" && model.Known(b):
			k, x, inner := float(b, 0), c.compile(a, 0), c.logSlope(a, p)
			return func(s *state) float64 { return math.Log(math.Abs(k)) + (k-1)*logAbs(x, s) + inner(s) }
		}
	}
	refuse("a prior on %s, whose slope is not taken here", model.Text(target))
	return zero
}

func logAbs(x term, s *state) float64 {
	if x.positive {
		return x.log(s)
	}
	return math.Log(math.Abs(x.value(s)))
}

// oddsOf recognises p/(1 − p).
func oddsOf(a, b model.Expr) bool {
	r, ok := a.(*model.UnknownRef)
	d, isOp := b.(*model.Op)
	if !ok || !isOp || d.Op != "-" || len(d.Args) != 2 || !model.Known(d.Args[0]) {
		return false
	}
	q, ok := d.Args[1].(*model.UnknownRef)
	return ok && q.Unknown == r.Unknown && q.Component == r.Component && float(d.Args[0], 0) == 1
}

func (c *compiler) dirichlet(d *model.Dist, u *model.Unknown) factor {
	return c.touching(func() fn {
		items := make([]term, u.Components())
		for k := range items {
			items[k] = c.component(u, k)
		}
		weights := c.weights(d, u)
		return func(s *state) float64 {
			t, total := 0.0, 0.0
			for i := range items {
				w := weights[i].value(s)
				t += product(w-1, items[i].log(s)) - special.Lgamma(w)
				total += w
			}
			if l := special.Lgamma(total); !math.IsInf(l, 0) && !math.IsInf(t, 0) {
				return t + l
			}
			return t
		}
	})
}

func (c *compiler) weights(d *model.Dist, u *model.Unknown) []term {
	w := c.vector(d.Arg("weights"), 0)
	if len(w) == 1 {
		for len(w) < u.Components() {
			w = append(w, w[0])
		}
	}
	if len(w) != u.Components() {
		refuse("%d weights for %d shares", len(w), u.Components())
	}
	return w
}

// byRule uses the derived kernel. Its arguments are the components in order.
func (c *compiler) byRule(p *model.Prior) factor {
	return c.touching(func() fn {
		var items []term
		for _, v := range variablesOf(p.About) {
			items = append(items, c.component(v.unknown, v.component))
		}
		x := make([]float64, len(items))
		kernel := p.Rule.LogKernel
		return func(s *state) float64 {
			for i := range items {
				x[i] = items[i].value(s)
			}
			return kernel(x)
		}
	})
}

// population compiles the law of a varying effect.
func (c *compiler) population(p *model.Population) []factor {
	u := p.Unknown
	prior := &model.Prior{
		About: []*model.Unknown{u}, Target: &model.UnknownRef{Unknown: u}, Form: model.ByDist, Dist: p.Dist, Truncated: p.Truncated,
	}
	return c.prior(prior)
}
