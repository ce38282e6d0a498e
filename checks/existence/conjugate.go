package existence

import (
	"context"
	"fmt"
	"math/big"

	"wellposed/checks/existence/certificate"
	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// tally counts what one unknown has seen when every row is a conjugate law of
// the unknown itself.
type tally struct {
	kind        string // "trials" or "events"
	yes, no     *big.Rat
	exposure    *big.Rat
	observation *model.Observation
}

func isSelf(x model.Expr, v variable) bool {
	r, ok := unlet(x).(*model.UnknownRef)
	return ok && r.Unknown == v.Unknown
}

// tallyOf adds up the rows of a group with one unknown; nil when some row is
// of another law.
func (g *group) tallyOf() *tally {
	v := g.vars[0]
	t := &tally{yes: new(big.Rat), no: new(big.Rat), exposure: new(big.Rat)}
	for _, f := range g.rows {
		o := f.obs
		if o.Reading != model.Values || o.Weight != nil || o.Truncated != nil || len(o.What) != 1 {
			return nil
		}
		y := kernel.Constant(o.What[0], f.row)
		if y == nil {
			return nil
		}
		t.observation = o
		times := big.NewRat(f.times, 1)
		switch o.Dist.Spec.Name {
		case "Binomial", "Bernoulli":
			if !isSelf(o.Dist.Arg("probability"), v) || t.kind == "events" {
				return nil
			}
			t.kind = "trials"
			n := big.NewRat(1, 1)
			if x := o.Dist.Arg("trials"); x != nil {
				n = kernel.Constant(x, f.row)
			}
			if n == nil {
				return nil
			}
			t.yes.Add(t.yes, new(big.Rat).Mul(times, y))
			t.no.Add(t.no, new(big.Rat).Mul(times, new(big.Rat).Sub(n, y)))
		case "Poisson", "Exponential":
			x := o.Dist.Arg("mean")
			if o.Dist.Spec.Name == "Exponential" {
				x = o.Dist.Arg("rate")
			}
			if x == nil || !onlyScaled(x, v) || t.kind == "trials" {
				return nil
			}
			t.kind = "events"
			if o.Dist.Spec.Name == "Poisson" {
				t.yes.Add(t.yes, new(big.Rat).Mul(times, y))
				break
			}
			if o.Right != nil {
				holds, ok := kernel.Condition(o.Right, f.row)
				if !ok {
					return nil
				}
				if holds {
					continue
				}
			}
			if o.Left != nil {
				return nil
			}
			t.yes.Add(t.yes, times)
		default:
			return nil
		}
	}
	if t.kind == "" {
		return nil
	}
	return t
}

// onlyScaled reports constant · unknown.
func onlyScaled(x model.Expr, v variable) bool {
	l := linearizer{in: func(u *model.Unknown) bool { return u == v.Unknown }}
	l.add(x, product{scale: big.NewRat(1, 1), component: -1})
	return !l.failed && len(l.out) == 1 && l.out[0].ref != nil
}

// annotate words a verdict about one unknown in terms of counts, where the
// model is conjugate: a + y > 0 with the exponents of the prior put in.
func (g *group) annotate(r *Verdict) {
	t := g.tallyOf()
	if t == nil || r.Status == NotDecided || r.Code == NoSupport {
		return
	}
	v := g.vars[0]
	name := v.Name()
	r.Observation = t.observation
	exponent := func(e end) *big.Rat {
		h := group{analysis: g.analysis, env: g.env, vars: g.vars, priors: g.priors, pops: g.pops}
		l := line{kernel: func(x order.Value) order.Value {
			return h.logKernel(kernel.NewEnv(only(v, x)), nil)
		}}
		var o order.Order
		if order.Try(func() { o = l.at(e) }) != nil || o.Rapid != 0 || !o.Exact || o.LogPower != nil && o.LogPower.Sign() != 0 {
			return nil
		}
		return new(big.Rat).Add(o.Power, big.NewRat(1, 1))
	}
	var conditions []Condition
	add := func(label, data string, e end, seen *big.Rat) {
		a := exponent(e)
		if a == nil {
			return
		}
		total := new(big.Rat).Add(a, seen)
		conditions = append(conditions, Condition{Text: label + " + " + data + " > 0",
			Filled: fmt.Sprintf("%s + %s > 0", ratText(a), ratText(seen)), Holds: total.Sign() > 0})
	}
	zero := end{at: new(big.Rat), side: 1}
	lo, hi := g.support(v)
	if lo != nil && lo.Sign() == 0 {
		if t.kind == "trials" {
			add("a", "successes", zero, t.yes)
		} else {
			add("a", "events", zero, t.yes)
		}
	}
	if t.kind == "trials" && hi != nil && hi.Cmp(big.NewRat(1, 1)) == 0 {
		add("b", "failures", end{at: big.NewRat(1, 1), side: -1}, t.no)
	}
	if len(conditions) == 0 {
		return
	}
	r.Theorem, r.Source = "conjugate kernel", "Diaconis & Ylvisaker 1979; derivation"
	r.Conditions = conditions
	r.Code = Conjugate
	if r.Status == Exists {
		r.Claim = "the posterior kernel of " + name + " has positive exponents"
		return
	}
	for _, c := range conditions {
		if !c.Holds {
			r.Claim = fmt.Sprintf("%s is not positive, since %s fails: %s", c.Text[:len(c.Text)-4], c.Filled, r.Claim)
		}
	}
	for _, e := range r.Escape {
		if e.Toward == "0" && t.yes.Sign() == 0 || e.Toward == "1" && t.no.Sign() == 0 {
			r.Code = ZeroCount
			what, other := "event", "0"
			if t.kind == "trials" {
				what = "success"
				if e.Toward == "1" {
					what, other = "failure", "1"
				}
			}
			r.Repairs = []string{"one " + what, "a prior on " + name + " that is integrable at " + other}
		}
	}
}

// whenProportions decides shares with a Dirichlet prior of any weights and
// multinomial counts: every posterior weight must be positive.
func whenProportions(g *group, ctx context.Context) *Verdict {
	u := g.vars[0].Unknown
	if u.Kind == nil || u.Kind.Name != "proportions" || len(g.unknowns()) != 1 || len(g.priors) != 1 || len(g.pops) > 0 {
		return nil
	}
	k := u.Components()
	p := g.priors[0].prior
	if _, plain := p.Target.(*model.UnknownRef); !plain {
		return nil
	}
	weights := make([]*big.Rat, k)
	switch {
	case p.Form == model.ByFlat:
		for i := range weights {
			weights[i] = big.NewRat(1, 1)
		}
	case p.Form == model.ByDist && p.Dist.Spec.Name == "Dirichlet":
		if !dirichletWeights(p.Dist.Arg("weights"), weights) {
			return nil
		}
	default:
		return nil
	}
	seen := make([]*big.Rat, k)
	for i := range seen {
		seen[i] = new(big.Rat)
	}
	var obs *model.Observation
	for _, f := range g.rows {
		o := f.obs
		if !isSelf(o.Dist.Arg("proportions"), g.vars[0]) || o.Weight != nil || o.Reading != model.Values {
			return nil
		}
		obs = o
		switch o.Dist.Spec.Name {
		case "Multinomial":
			if len(o.What) != k {
				return nil
			}
			for i, x := range o.What {
				y := kernel.Constant(x, f.row)
				if y == nil || y.Sign() < 0 {
					return nil
				}
				seen[i].Add(seen[i], y)
			}
		case "categorical":
			y := kernel.Constant(o.What[0], f.row)
			if y == nil || !y.IsInt() || y.Sign() <= 0 || y.Num().Int64() > int64(k) {
				return nil
			}
			seen[y.Num().Int64()-1].Add(seen[y.Num().Int64()-1], big.NewRat(1, 1))
		default:
			return nil
		}
	}
	r := &Verdict{Status: Exists, How: diag.Proved, Unknowns: g.unknowns(), Code: Conjugate, Observation: obs,
		Theorem: "Dirichlet kernel", Source: "derivation", Claim: "every posterior weight is positive"}
	c := &certificate.Conditions{Theorem: r.Theorem, Finite: true}
	for i := range k {
		total := new(big.Rat).Add(weights[i], seen[i])
		holds := total.Sign() > 0
		text := fmt.Sprintf("weight + count > 0 for %s", g.vars[i].Name())
		r.Conditions = append(r.Conditions, Condition{Text: text, Filled: fmt.Sprintf("%s + %s > 0", ratText(weights[i]), ratText(seen[i])), Holds: holds})
		c.List = append(c.List, certificate.Condition{Text: text, Terms: []string{weights[i].RatString(), seen[i].RatString()}, Holds: holds})
		if holds {
			continue
		}
		if r.Status == Exists {
			r.Status, r.Code = DoesNotExist, ZeroCount
			c.Finite = false
			r.Claim = fmt.Sprintf("the weight %s of %s and its count %s do not make a positive exponent", ratText(weights[i]), g.vars[i].Name(), ratText(seen[i]))
		}
		r.Escape = append(r.Escape, Escape{Unknown: u, Component: i, Toward: "0"})
		r.Repairs = append(r.Repairs, "a positive weight for "+g.vars[i].Name())
	}
	r.Certificate = &certificate.Certificate{Kind: certificate.KindConditions, Conditions: c}
	return r
}

func dirichletWeights(x model.Expr, out []*big.Rat) bool {
	if v, ok := x.(*model.Vector); ok && len(v.Items) == len(out) {
		for i, item := range v.Items {
			if out[i] = kernel.Constant(item, 0); out[i] == nil {
				return false
			}
		}
		return true
	} else if ok && len(v.Items) == 1 {
		x = v.Items[0]
	} else if ok {
		return false
	}
	c := kernel.Constant(x, 0)
	for i := range out {
		out[i] = c
	}
	return c != nil
}
