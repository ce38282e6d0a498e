package existence

import (
	"context"
	"fmt"

	"wellposed/checks/existence/order"
	"wellposed/parser/model"
)

// Decide gives a verdict for each group of unknowns that hang together. It
// returns early with NotDecided when ctx ends.
func Decide(ctx context.Context, a *model.Analysis) *Result {
	r := &Result{Analysis: a}
	var all []*Verdict
	for _, g := range split(a) {
		all = append(all, g.decide(ctx))
	}
	r.Verdicts = join(all)
	return r
}

// decide tries the methods in turn; the first that reaches a verdict wins.
func (g *group) decide(ctx context.Context) (v *Verdict) {
	defer func() {
		// A method that meets a form it was not made for must not end the
		// program; the honest answer is that nothing was decided.
		if p := recover(); p != nil {
			if u, ok := p.(*order.Unknown); ok {
				v = g.undecided(u.Reason)
				return
			}
			if strict {
				panic(p)
			}
			v = g.undecided(fmt.Sprintf("internal: %v", p))
		}
	}()
	if g.unready != "" {
		return g.undecided(g.unready)
	}
	var fallback *Verdict
	for _, method := range methods {
		if ctx.Err() != nil {
			return g.undecided("interrupted")
		}
		v := g.attempt(ctx, method)
		if v == nil {
			continue
		}
		if v.Status != NotDecided {
			return v
		}
		if fallback == nil || fallback.Claim == "" {
			fallback = v
		}
	}
	if fallback == nil {
		fallback = g.undecided("no theorem here covers this model")
	}
	return fallback
}

// strict makes a broken invariant panic; tests set it.
var strict bool

func (g *group) attempt(ctx context.Context, method func(*group, context.Context) *Verdict) (v *Verdict) {
	if err := order.Try(func() { v = method(g, ctx) }); err != nil {
		return g.undecided(err.Reason)
	}
	return v
}

// methods in the order in which they are tried.
var methods = []func(*group, context.Context) *Verdict{
	whenOne, whenProportions, whenJeffreysBinary, whenFree, whenGaussian, whenVariance, whenLocationScale, whenBetaBinomial, whenIntercepts, whenCovariance, whenBlock, whenProper, whenSlice,
}

func whenOne(g *group, ctx context.Context) *Verdict {
	if len(g.vars) != 1 {
		return nil
	}
	r := g.decideOne(ctx)
	if r != nil {
		g.annotate(r)
	}
	return r
}

// join makes one verdict of those that share an unknown: components that stand
// alone are told together. The first bad one speaks for all.
func join(all []*Verdict) []*Verdict {
	var out []*Verdict
	at := map[*model.Unknown]int{}
	for _, v := range all {
		i, ok := at[v.Unknowns[0]]
		if !ok || len(v.Unknowns) != 1 || len(out[i].Unknowns) != 1 {
			for _, u := range v.Unknowns {
				if _, ok := at[u]; !ok {
					at[u] = len(out)
				}
			}
			out = append(out, v)
			continue
		}
		old := out[i]
		worse := rank(v.Status) > rank(old.Status)
		if worse {
			out[i] = v
		}
		if v.Status == DoesNotExist && old.Status == DoesNotExist {
			old.Escape = append(old.Escape, v.Escape...)
		}
	}
	return out
}

func rank(s Status) int {
	switch s {
	case DoesNotExist:
		return 2
	case NotDecided:
		return 1
	}
	return 0
}
