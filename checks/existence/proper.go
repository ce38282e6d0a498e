package existence

import (
	"context"
	"math/big"

	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Proper priors and a bounded likelihood: the integral is at most the supremum
// of the likelihood times the mass of the prior, which is 1. The likelihood must
// also be positive on a set of positive prior mass.

func whenProper(g *group, ctx context.Context) *Verdict {
	for _, f := range g.priors {
		if !g.properPrior(ctx, f) {
			return nil
		}
	}
	for _, v := range g.vars {
		if v.Unknown.Population == nil && g.analysis.PriorOf(v.Unknown) == nil {
			return nil
		}
	}
	for _, f := range g.pops {
		if !properLaw(f.pop.Dist) {
			return nil
		}
	}
	if why := g.unbounded(ctx); why != "" {
		return g.undecided("all priors are proper, but the likelihood could not be shown to be bounded: " + why)
	}
	if !g.positiveSomewhere() {
		return g.undecided("all priors are proper, but the likelihood could not be shown to be positive somewhere")
	}
	return &Verdict{Status: Exists, How: diag.Proved, Unknowns: g.unknowns(), Code: ProperPrior, Source: "derivation",
		Theorem: "a proper prior and a bounded likelihood", Claim: "every prior is proper and the likelihood is bounded",
		Conditions: []Condition{{Text: "the prior integrates to 1", Filled: "named laws with valid parameters", Holds: true},
			{Text: "the likelihood is bounded", Filled: "each row is", Holds: true}},
		Certificate: properCertificate(g)}
}

// improperAt lists named laws whose parameters may make them improper.
func properLaw(d *model.Dist) bool {
	if d == nil || d.Spec.Name == "g-prior" {
		return false
	}
	for _, p := range d.Parts {
		if !properLaw(p.Dist) {
			return false
		}
	}
	return true
}

// positiveParams are labels of parameters that must be positive.
var positiveParams = map[string]bool{"sd": true, "variance": true, "precision": true, "scale": true, "rate": true, "shape": true,
	"degrees": true, "log sd": true, "a": true, "b": true, "total": true, "size": true, "minimum": true}

func (g *group) properPrior(ctx context.Context, f priorFactor) bool {
	p := f.prior
	_, plain := p.Target.(*model.UnknownRef)
	// A law of one unknown, of a transform of one unknown, or of a tuple; a law
	// stated on a function of several unknowns says nothing along its level sets.
	if p.Form == model.ByDist && properLaw(p.Dist) && (plain || len(p.About) == 1 && p.About[0].Scalar() || isVectorOfRefs(p.Target)) {
		for label, x := range p.Dist.Args {
			if mentions(x) {
				continue // a conditional law, proper for every valid value
			}
			if v, ok := x.(*model.Vector); ok {
				for _, i := range v.Items {
					if c := kernel.Constant(i, 0); c == nil || label == "weights" && c.Sign() <= 0 {
						return false
					}
				}
				continue
			}
			c := kernel.Constant(x, 0)
			if label == "weights" || positiveParams[label] && !(p.Dist.Spec.Name == "generalized-Pareto" && label == "shape") && p.Dist.Spec.Name != "skew-Normal" && p.Dist.Spec.Name != "generalized-extreme-value" {
				if c == nil || c.Sign() <= 0 {
					return false
				}
			}
		}
		return true
	}
	if len(p.About) != 1 || p.About[0].Size > 0 || p.Form == model.ByRule {
		return false
	}
	for _, x := range append(distExprs(p.Dist), p.Kernel) {
		for u := range unknownsIn(x) {
			if u != p.About[0] {
				return false
			}
		}
	}
	v := variable{Unknown: p.About[0], Component: f.component}
	h := group{analysis: g.analysis, vars: []variable{v}, priors: []priorFactor{f}}
	r := h.decideOne(ctx)
	return r != nil && r.Status == Exists
}

// boundedLaws are laws on whole numbers and levels, whose probabilities are at
// most 1.
func countLaw(d *model.Dist) bool {
	switch d.Spec.On {
	case "counts 0, 1, 2, …", "0 or 1", "levels", "vectors of counts":
		return true
	}
	return d.Spec.Name == "Point"
}

// unbounded says why the likelihood could not be bounded, "" when it is.
func (g *group) unbounded(ctx context.Context) string {
	seen := map[*model.Observation]bool{}
	gaussian := false
	for _, f := range g.rows {
		o := f.obs
		if holdsExponential(o.Dist) && o.Reading == model.Values && len(o.What) == 1 {
			// r·exp(−r·0) is unbounded in r.
			if y := kernel.Constant(o.What[0], f.row); y == nil || y.Sign() <= 0 {
				return "a waiting time of 0"
			}
		}
		if seen[o] && o.Right == nil && o.Left == nil {
			continue
		}
		seen[o] = true
		if o.Weight != nil && !constantPositive(o.Weight, f.row) {
			return "a weight is not a positive number"
		}
		if o.Truncated != nil {
			return "a truncated law"
		}
		if o.Reading == model.Between || countLaw(o.Dist) {
			continue
		}
		if o.Dist.Spec.Name == "Cox" {
			continue
		}
		ok, gauss := g.boundedDensity(o, o.Dist, f.row)
		if !ok && !gauss {
			return "a density of " + o.Dist.Spec.Name + " with an unknown spread or shape"
		}
		gaussian = gaussian || gauss
	}
	if gaussian {
		return g.gaussianBounded(ctx)
	}
	return ""
}

func holdsExponential(d *model.Dist) bool {
	for _, p := range d.Parts {
		if holdsExponential(p.Dist) {
			return true
		}
	}
	return d.Spec.Name == "Exponential"
}

// boundedDensity reports whether a density at its fixed reading is bounded over
// all parameter values; gauss asks for the argument by sums of squares.
func (g *group) boundedDensity(o *model.Observation, d *model.Dist, row int) (ok, gauss bool) {
	known := func(labels ...string) bool {
		for _, l := range labels {
			if x := d.Arg(l); x != nil {
				return !mentions(x) || g.awayFromZero(x, row, l)
			}
		}
		return false
	}
	switch d.Spec.Name {
	case "Normal":
		return known("sd", "variance"), true
	case "log-Normal":
		return known("log sd"), true
	case "Laplace", "logistic", "Cauchy", "Gumbel", "Student-t", "skew-Normal":
		return known("scale"), false
	case "Exponential":
		return d.Arg("origin") == nil, false
	case "Gamma", "Weibull", "inverse-Gamma":
		return d.Arg("origin") == nil && !mentions(d.Arg("shape")), false
	case "Mixture":
		for _, p := range d.Parts {
			if countLaw(p.Dist) {
				continue
			}
			if ok, _ := g.boundedDensity(o, p.Dist, row); !ok {
				return false, false
			}
		}
		return true, false
	}
	for _, x := range distExprs(d) {
		if mentions(x) {
			return false, false
		}
	}
	return true, false
}

// awayFromZero reports a spread that stays above a positive constant on the
// supports.
func (g *group) awayFromZero(x model.Expr, row int, label string) bool {
	if label == "precision" || label == "rate" {
		return false
	}
	env := kernel.NewEnv(func(v variable) order.Value {
		lo, hi := g.support(v)
		return order.Range(lo, hi)
	})
	low := -1.0
	defer func() {
		if p := recover(); p != nil {
			if _, ok := p.(*order.Split); !ok {
				if _, ok := p.(*order.Unknown); !ok {
					panic(p)
				}
			}
		}
	}()
	if v, ok := env.Eval(x, row).(*order.Boxed); ok {
		low, _ = v.Bounds()
	}
	return low > 0
}

// gaussianBounded: with readings that no value of the coefficients fits exactly,
// the likelihood in the coefficients and a spread s is at most s^(−n) exp(−RSS/2s²)
// times a constant, which is bounded. Each unknown spread needs that for its own
// readings.
func (g *group) gaussianBounded(ctx context.Context) string {
	b := g.allMeans()
	if b == nil {
		return "the normal readings are not linear in the unknowns"
	}
	by := map[string]*echelon{}
	for k, t := range b.terms {
		if k%256 == 0 && ctx.Err() != nil {
			return "interrupted"
		}
		if _, known := knownWeight(t.class); known {
			continue
		}
		e := by[t.class]
		if e == nil {
			e = newEchelon(len(b.beta))
			by[t.class] = e
		}
		if !e.inconsistent {
			e.add(t)
		}
	}
	for _, key := range b.order {
		c := b.classes[key]
		if c.known != nil {
			continue
		}
		if e := by[key]; e != nil && !e.inconsistent {
			label := ""
			for _, l := range []string{"sd", "variance", "log sd"} {
				if c.dist.Arg(l) != nil {
					label = l
				}
			}
			if label != "" && g.awayFromZero(c.dist.Arg(label), c.row, label) {
				continue
			}
			return "some readings can be fitted exactly"
		}
	}
	return ""
}

// allMeans collects the readings alone, with every unknown of their means as a
// coefficient.
func (g *group) allMeans() *gaussBlock {
	means := map[*model.Unknown]bool{}
	obs := map[*model.Observation]bool{}
	var rows []rowFactor
	for _, f := range g.rows {
		o := f.obs
		if isNormal(o.Dist) && (plainReading(o) || o.Reading == model.Summary) {
			obs[o] = true
			rows = append(rows, f)
			for u := range unknownsIn(append(o.What, normalMean(o.Dist))...) {
				means[u] = true
			}
		}
	}
	b := &gaussBlock{index: map[variable]int{}, classes: map[string]*gaussClass{}}
	b.g = &group{analysis: g.analysis, env: g.env, vars: g.vars, rows: rows}
	for _, v := range g.vars {
		if means[v.Unknown] {
			b.index[v] = len(b.beta)
			b.beta = append(b.beta, v)
		}
	}
	if !b.collect(context.Background(), func(u *model.Unknown) bool { return means[u] }, obs) {
		return nil
	}
	return b
}

// positiveSomewhere evaluates the kernel on a small box inside the supports.
func (g *group) positiveSomewhere() bool {
	rows := g.merged(2000)
	if rows == nil && len(g.rows) > 0 {
		rows = g.rows[:2000]
	}
	simple := true
	for _, f := range g.rows {
		switch f.obs.Dist.Spec.Name {
		case "Normal", "Student-t", "Cauchy", "Laplace", "logistic", "Gumbel", "Poisson", "negative-Binomial":
		default:
			simple = false
		}
	}
	if simple && len(g.pops) == 0 {
		return true // positive for all readings and all parameter values
	}
	scale, middle := g.dataScale(rows)
	for set := range 3 {
		z := map[variable]order.Value{}
		for k, v := range g.vars {
			lo, hi := g.support(v)
			if v.Unknown.Kind != nil && v.Unknown.Kind.Discrete {
				z[v] = order.Const(big.NewRat(int64(scale)+3, 1))
				continue
			}
			z[v] = generic(lo, hi, k, set, scale, middle)
		}
		env := kernel.NewEnv(func(v variable) order.Value { return z[v] })
		if order.Try(func() { g.logKernel(env, rows) }) == nil {
			return true
		}
	}
	return false
}
