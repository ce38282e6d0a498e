package existence

import (
	"context"
	"fmt"
	"math/big"

	"wellposed/checks/existence/cone"
	"wellposed/checks/existence/kernel"
	"wellposed/parser/model"
)

// Varying intercepts in a log-concave model: groups u_j ~ Normal(mu, sd = tau),
// mu flat, each row seeing its group's intercept alone. A group whose rows leave
// no free direction is pinned: its likelihood f_j(u) is bounded and falls
// exponentially on both sides. Then
//
//	∫ f_j(mu + tau η) φ(η) dη ≤ C (1 + tau)^(−1), falling in |mu|/(1 + tau),
//
// so with P ≥ 1 pinned groups the integral over mu is at most
// C (1 + tau)^(1−P); and it is at least c tau^(1−P) for large tau, because on
// |mu| ≤ tau a pinned group contributes c/tau and every other one a positive
// constant, and at least a positive constant near tau = 0. For a prior of order
// tau^(−c0) at 0 and tau^(−c) at infinity the posterior exists iff c0 < 1 and
// P + c > 2. (Literature 1.6; Natarajan & McCulloch 1995 for c0 = 1.)
func whenIntercepts(g *group, ctx context.Context) *Verdict {
	if len(g.pops) == 0 || len(g.rows) == 0 {
		return nil
	}
	pop := g.pops[0].pop
	for _, f := range g.pops {
		if f.pop != pop {
			return nil
		}
	}
	if pop.Dist.Spec.Name != "Normal" || pop.Truncated != nil || pop.Dist.Arg("sd") == nil {
		return nil
	}
	effect := pop.Unknown
	var mu, tau variable
	for _, v := range g.vars {
		switch {
		case v.Unknown == effect:
		case isSelf(pop.Dist.Arg("sd"), v) && v.Unknown.Scalar():
			tau = v
		case mu.Unknown == nil && v.Unknown.Scalar():
			mu = v
		default:
			return nil
		}
	}
	if tau.Unknown == nil || mu.Unknown == nil {
		return nil
	}
	if lo, hi := g.support(mu); lo != nil || hi != nil {
		return nil
	}
	centred := isSelf(pop.Dist.Arg("mean"), mu)
	if !centred {
		if c := kernel.Constant(pop.Dist.Arg("mean"), 0); c == nil {
			return nil
		}
	}
	for _, f := range g.priors {
		if !priorHolds(f, mu) {
			continue
		}
		_, plain := f.prior.Target.(*model.UnknownRef)
		if len(f.prior.About) != 1 || !plain || f.prior.Form != model.ByFlat && !constantKernel(f.prior) {
			return nil
		}
	}
	up, down, seen, ok := g.sidesOf(ctx, effect, mu, centred)
	if !ok {
		return nil
	}
	t, ok := g.tails(tau)
	if !ok {
		return nil
	}
	pinned := int64(0)
	for j := range up {
		if up[j] && down[j] {
			pinned++
		}
	}
	if pinned == 0 || seen == 0 {
		return nil
	}
	var j judge
	if t.at0 != nil {
		j.need(fmt.Sprintf("1 − power of %s at 0 > 0", tau.Name()), whole64(1), negRat(t.at0))
	}
	j.need(fmt.Sprintf("groups that pin their level + power of %s − 2 > 0", tau.Name()), whole64(pinned), t.atInf, whole64(-2))
	r := j.verdict(g, SpreadAtInfinity, "varying intercepts with a flat mean", "Natarajan & McCulloch 1995; derivation")
	r.Observation = g.rows[0].obs
	if len(j.fails) > 0 {
		if t.at0 != nil && j.fails[0] == 0 {
			r.Code = SpreadAtZero
			r.Escape = []Escape{{Unknown: tau.Unknown, Toward: "0"}}
			r.Repairs = []string{"a prior on " + tau.Name() + " that is integrable at 0"}
		} else {
			r.Escape = []Escape{{Unknown: tau.Unknown, Toward: "inf"}}
			r.Repairs = []string{"more groups with both outcomes", "a proper prior on " + tau.Name()}
		}
	}
	return r
}

// sidesOf tells for each group whether its rows stop it from rising and from
// falling; false when a row sees anything else.
func (g *group) sidesOf(ctx context.Context, effect *model.Unknown, mu variable, centred bool) (up, down []bool, seen int, ok bool) {
	index := g.index()
	up, down = make([]bool, effect.Components()), make([]bool, effect.Components())
	links := map[*model.Observation]*linked{}
	for k, f := range g.rows {
		if k%1024 == 0 && ctx.Err() != nil {
			return nil, nil, 0, false
		}
		l, known := links[f.obs]
		if !known {
			l = g.link(f.obs)
			links[f.obs] = l
		}
		if l == nil {
			return nil, nil, 0, false
		}
		sights, good := l.see(f.row)
		if !good {
			return nil, nil, 0, false
		}
		for _, s := range sights {
			if s.free {
				continue
			}
			r, good := g.at(s.form, f.row, index)
			if !good {
				return nil, nil, 0, false
			}
			which := -1
			for i, c := range r.coef {
				one := c.Cmp(big.NewRat(1, 1)) == 0
				switch v := g.vars[i]; {
				case v.Unknown == effect && one && which < 0:
					which = v.Component
				case v == mu && one && !centred:
				default:
					return nil, nil, 0, false
				}
			}
			if which < 0 || !centred && r.coef[index[mu]] == nil {
				return nil, nil, 0, false
			}
			seen++
			// A sense says which direction is free.
			if s.sense != cone.AtLeast {
				up[which] = true
			}
			if s.sense != cone.AtMost {
				down[which] = true
			}
		}
	}
	return up, down, seen, true
}
