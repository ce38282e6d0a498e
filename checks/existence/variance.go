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

// The one-way layout. K groups, N readings, group effects Normal(X b, sd = tau)
// with p flat coefficients, readings Normal(effect, sd = sigma). With S > 0 the
// sum of squares within groups, the effects and coefficients integrate out to
// a kernel between two constant multiples of
//
//	sigma^(−(N−K)) exp(−S/2sigma²) (tau² + sigma²)^(−(K−p)/2) exp(−Q/2)
//
// with 0 ≤ Q ≤ const/(tau² + sigma²). For priors of order tau^(−c0) at 0,
// tau^(−c) at infinity and sigma^(−e) at infinity the double integral is finite
// iff c0 < 1 (tau → 0), K − p + c > 1 (tau → ∞ with sigma fixed), and
// N − p + min(c, 1) + e > 2 (sigma → ∞). For pure powers these are the
// conditions of Hobert & Casella (1996), Theorem 1, with a = (c−1)/2 and
// b = (e−1)/2. With S = 0 and the prior of order sigma^(−e0) at 0 the kernel is
// sigma^(−(N−K)−e0) at 0 for every fixed tau.

// tail is the order of a prior of a positive unknown: v^(−at0) at 0 and
// v^(−atInf) at infinity; nil where it falls faster than any power.
type tail struct{ at0, atInf *big.Rat }

// tails finds the order of the priors of one variable at both ends; ok is false
// when one can't be found or the prior grows rapidly.
func (g *group) tails(v variable) (t tail, ok bool) {
	lo, hi := g.support(v)
	if lo == nil || lo.Sign() != 0 {
		return t, false
	}
	h := group{analysis: g.analysis, env: g.env, vars: []variable{v}}
	for _, f := range g.priors {
		if priorHolds(f, v) {
			if len(f.prior.About) != 1 {
				return t, false
			}
			for _, x := range append(distExprs(f.prior.Dist), f.prior.Kernel) {
				for u := range unknownsIn(x) {
					if u != v.Unknown {
						return t, false
					}
				}
			}
			h.priors = append(h.priors, f)
		}
	}
	l := line{lo: lo, hi: hi, kernel: func(x order.Value) order.Value {
		return h.logKernel(kernel.NewEnv(only(v, x)), nil)
	}}
	pieces, why := l.pieces(context.Background())
	if why != "" || len(pieces) == 0 || pieces[0].Lo == nil || pieces[0].Lo.Sign() != 0 {
		return t, false
	}
	for i, p := range pieces {
		if i > 0 && pieces[i-1].Hi.Cmp(p.Lo) != 0 {
			return t, false
		}
		if i > 0 {
			// An inner border must be an ordinary point.
			for _, e := range []end{{at: p.Lo, side: 1}, {at: p.Lo, side: -1}} {
				o, ok := l.tryEnd(e)
				if !ok || o.Rapid > 0 || o.Rapid == 0 && (!o.Exact || o.Power.Sign() < 0) {
					return t, false
				}
			}
		}
	}
	read := func(e end) (*big.Rat, bool) {
		o, ok := l.tryEnd(e)
		switch {
		case !ok || o.Rapid > 0:
			return nil, false
		case o.Rapid < 0:
			return nil, true
		case !o.Exact || o.LogPower != nil && o.LogPower.Sign() != 0:
			return nil, false
		}
		if e.at == nil {
			return new(big.Rat).Add(o.Power, big.NewRat(2, 1)), true
		}
		return new(big.Rat).Neg(o.Power), true
	}
	if t.at0, ok = read(end{at: new(big.Rat), side: 1}); !ok {
		return t, false
	}
	last := pieces[len(pieces)-1].Hi
	if last != nil {
		o, ok := l.tryEnd(end{at: last, side: -1})
		return t, ok && o.Finite && (o.Rapid < 0 || o.Exact && o.Power.Sign() >= 0)
	}
	t.atInf, ok = read(end{side: -1})
	return t, ok
}

func (l line) tryEnd(e end) (o order.Order, ok bool) {
	err := order.Try(func() { o = l.at(e) })
	return o, err == nil
}

// judge collects strict inequalities with their numbers.
type judge struct {
	conditions []Condition
	cert       certificate.Conditions
	fails      []int
}

// need adds Σ terms > 0; a nil term is +∞.
func (j *judge) need(text string, terms ...*big.Rat) {
	sum := new(big.Rat)
	filled, infinite := "", false
	c := certificate.Condition{Text: text}
	for _, t := range terms {
		if t == nil {
			infinite = true
			continue
		}
		sum.Add(sum, t)
		switch {
		case filled == "":
			filled = ratText(t)
		case t.Sign() < 0:
			filled += " − " + ratText(new(big.Rat).Neg(t))
		default:
			filled += " + " + ratText(t)
		}
		c.Terms = append(c.Terms, t.RatString())
	}
	holds := infinite || sum.Sign() > 0
	if infinite {
		filled = "the prior falls faster than any power"
		c.Terms = []string{"1"}
	} else {
		filled += " > 0"
	}
	c.Holds = holds
	if !holds {
		j.fails = append(j.fails, len(j.conditions))
	}
	j.conditions = append(j.conditions, Condition{Text: text, Filled: filled, Holds: holds})
	j.cert.List = append(j.cert.List, c)
}

// verdict makes the verdict: all conditions must hold.
func (j *judge) verdict(g *group, code Code, theorem, source string) *Verdict {
	r := &Verdict{Status: Exists, How: diag.Proved, Unknowns: g.unknowns(), Code: code, Theorem: theorem, Source: source, Conditions: j.conditions}
	j.cert.Theorem, j.cert.Finite = theorem, len(j.fails) == 0
	r.Certificate = &certificate.Certificate{Kind: certificate.KindConditions, Conditions: &j.cert}
	r.Claim = "all conditions hold: "
	for i, c := range j.conditions {
		if i > 0 {
			r.Claim += "; "
		}
		r.Claim += c.Filled
	}
	if len(j.fails) > 0 {
		c := j.conditions[j.fails[0]]
		r.Status = DoesNotExist
		r.Claim = fmt.Sprintf("%s fails: %s", c.Text, c.Filled)
	}
	return r
}

func whole64(n int64) *big.Rat { return big.NewRat(n, 1) }

func negRat(r *big.Rat) *big.Rat {
	if r == nil {
		return nil
	}
	return new(big.Rat).Neg(r)
}

// whenVariance decides the one-way layout.
func whenVariance(g *group, ctx context.Context) *Verdict {
	b := g.gaussian(ctx)
	if b == nil || len(b.rest) != 2 || len(b.order) != 2 {
		return nil
	}
	// One unknown spread for the effects and one for the readings.
	var tau, sigma variable
	var effect *model.Unknown
	for _, f := range g.pops {
		if effect != nil && effect != f.pop.Unknown {
			return nil
		}
		effect = f.pop.Unknown
	}
	if effect == nil {
		return nil
	}
	found := 0
	for _, v := range b.rest {
		for _, key := range b.order {
			c := b.classes[key]
			if c.known != nil || !isSelf(normalSpread(c.dist), v) || c.dist.Arg("precision") != nil || c.dist.Arg("variance") != nil {
				continue
			}
			if c.dist == g.pops[0].pop.Dist {
				tau = v
			} else {
				sigma = v
			}
			found++
		}
	}
	if found != 2 || tau.Unknown == nil || sigma.Unknown == nil {
		return nil
	}
	// Readings see one effect each, with coefficient −1 and nothing else; the
	// population means are linear in flat coefficients.
	within := map[int]*echelon{}
	x := newEchelon(len(b.beta))
	n, k := int64(0), int64(0)
	for _, t := range b.terms {
		if t.fresh {
			if b.classes[t.class] == nil || b.classes[t.class].dist != g.pops[0].pop.Dist {
				return nil // a proper prior on a coefficient
			}
			k++
			row := gaussTerm{exactRow: exactRow{constant: new(big.Rat), coef: map[int]*big.Rat{}}, times: 1}
			for j, c := range t.coef {
				if b.beta[j].Unknown != effect {
					row.coef[j] = c
				}
			}
			x.add(row)
			continue
		}
		if len(t.coef) != 1 || t.error > 0 {
			return nil
		}
		for j, c := range t.coef {
			if b.beta[j].Unknown != effect || c.Cmp(big.NewRat(-1, 1)) != 0 {
				return nil
			}
			if within[j] == nil {
				within[j] = newEchelon(len(b.beta))
			}
			within[j].add(t)
		}
		n += t.times
	}
	if int64(len(within)) != k {
		return nil // a group without a reading
	}
	p := int64(len(b.beta)) - k
	if int64(x.rank()) != p || len(otherFactors(b)) > 0 {
		return nil
	}
	st, ok1 := g.tails(tau)
	ss, ok2 := g.tails(sigma)
	if !ok1 || !ok2 {
		return nil
	}
	positive := false
	for _, e := range within {
		positive = positive || e.inconsistent
	}
	var j judge
	source := "Hobert & Casella 1996; derivation"
	if !positive {
		// S = 0.
		if ss.at0 == nil {
			return nil
		}
		j.need(fmt.Sprintf("1 − (N − K) − power of %s at 0 > 0", sigma.Name()), whole64(1), whole64(k-n), negRat(ss.at0))
		if len(j.fails) == 0 {
			return nil
		}
		r := j.verdict(g, EqualReadings, "one-way layout", source)
		if n == k {
			r.Code = ScaleReadings
		}
		r.Escape = []Escape{{Unknown: sigma.Unknown, Toward: "0"}}
		r.Repairs = []string{"two different readings in a group", "a prior on " + sigma.Name() + " that vanishes at 0"}
		return r
	}
	if st.at0 != nil {
		j.need(fmt.Sprintf("1 − power of %s at 0 > 0", tau.Name()), whole64(1), negRat(st.at0))
	}
	j.need(fmt.Sprintf("K − p + power of %s − 1 > 0", tau.Name()), whole64(k), whole64(-p), st.atInf, whole64(-1))
	c := st.atInf
	if c == nil || c.Cmp(big.NewRat(1, 1)) > 0 {
		c = whole64(1)
	}
	j.need(fmt.Sprintf("N − p + power of %s (at most 1) + power of %s − 2 > 0", tau.Name(), sigma.Name()), whole64(n), whole64(-p), c, ss.atInf, whole64(-2))
	r := j.verdict(g, SpreadAtInfinity, "one-way layout", source)
	if len(j.fails) > 0 {
		switch {
		case st.at0 != nil && j.fails[0] == 0:
			r.Code = SpreadAtZero
			r.Escape = []Escape{{Unknown: tau.Unknown, Toward: "0"}}
			r.Repairs = []string{"a prior on " + tau.Name() + " that is integrable at 0"}
		case j.fails[0] == len(j.conditions)-1:
			r.Code = ScaleReadings
			r.Escape = []Escape{{Unknown: sigma.Unknown, Toward: "inf"}}
			r.Repairs = []string{"more readings", "a proper prior on " + sigma.Name()}
		default:
			r.Escape = []Escape{{Unknown: tau.Unknown, Toward: "inf"}}
			r.Repairs = []string{"more groups", "a proper prior on " + tau.Name()}
		}
	}
	return r
}

// otherFactors lists the observations that are not part of the block.
func otherFactors(b *gaussBlock) []rowFactor {
	var out []rowFactor
	for _, f := range b.g.rows {
		o := f.obs
		if !isNormal(o.Dist) || o.Dist.Spec.Name != "Normal" || !plainReading(o) {
			out = append(out, f)
		}
	}
	return out
}
