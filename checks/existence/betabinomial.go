package existence

import (
	"context"
	"math/big"

	"wellposed/checks/existence/kernel"
	"wellposed/parser/model"
)

// The beta-binomial with unknown weights a, b, in m = a/(a+b) and k = a + b, with
// da db = k dk dm. As k → ∞ the likelihood tends to the binomial one, positive;
// as k → 0 a group with 0 < y < n contributes a factor between two multiples of
// k m (1 − m), a group with y = 0 or y = n a factor 1 − m or m. So with I interior
// groups, m uniform and the prior of order k^(−c0) at 0 and k^(−c) at infinity
// (in k, Jacobian included), the integral is finite iff c > 1 and I − c0 + 1 > 0
// (Tak & Morris 2017; derivation: for k ≤ 1 the bounds hold uniformly in m because
// a Γ(a) and b Γ(b) lie between positive constants).
func whenBetaBinomial(g *group, ctx context.Context) *Verdict {
	if len(g.vars) != 2 || len(g.rows) == 0 || len(g.pops) > 0 {
		return nil
	}
	d := g.rows[0].obs.Dist
	if d.Spec.Name != "beta-Binomial" {
		return nil
	}
	interior := int64(0)
	for _, f := range g.rows {
		o := f.obs
		if o.Dist != d || !plainReading(o) {
			return nil
		}
		y, n := kernel.Constant(o.What[0], f.row), kernel.Constant(d.Arg("trials"), f.row)
		if y == nil || n == nil || y.Sign() < 0 || y.Cmp(n) > 0 {
			return nil
		}
		if y.Sign() > 0 && y.Cmp(n) < 0 {
			interior++
		}
	}
	var j judge
	source := "Tak & Morris 2017; derivation"
	check := func(name string, c0, c *big.Rat) *Verdict {
		j.need("power of "+name+" at infinity − 1 > 0", c, whole64(-1))
		if c0 != nil {
			j.need("groups with 0 < y < n − power of "+name+" at 0 + 1 > 0", whole64(interior), negRat(c0), whole64(1))
		}
		r := j.verdict(g, Plateau, "beta-binomial with unknown weights", source)
		return r
	}
	if d.Arg("total") != nil {
		var m, k variable
		for _, v := range g.vars {
			if isSelf(d.Arg("mean"), v) {
				m = v
			}
			if isSelf(d.Arg("total"), v) {
				k = v
			}
		}
		if m.Unknown == nil || k.Unknown == nil {
			return nil
		}
		for _, f := range g.priors {
			if priorHolds(f, m) && !(len(f.prior.About) == 1 && g.properPrior(ctx, f)) {
				return nil
			}
		}
		t, ok := g.tails(k)
		if !ok {
			return nil
		}
		r := check(k.Name(), t.at0, t.atInf)
		if r.Status == DoesNotExist {
			toward := "inf"
			if len(j.fails) > 0 && j.fails[0] == 1 {
				toward = "0"
			}
			r.Escape = []Escape{{Unknown: k.Unknown, Toward: toward}}
			r.Repairs = []string{"a proper prior on " + k.Name()}
		}
		return r
	}
	// prior (a, b) ∝ (a + b)^(−q): k^(1−q) in k.
	if len(g.priors) != 1 || g.priors[0].prior.Form != model.ByKernel {
		return nil
	}
	for _, l := range []string{"a", "b"} {
		r, ok := unlet(d.Arg(l)).(*model.UnknownRef)
		if !ok || !r.Unknown.Scalar() || r.Unknown.Support.Low == nil || r.Unknown.Support.Low.Sign() != 0 || r.Unknown.Support.High != nil {
			return nil
		}
	}
	if unlet(d.Arg("a")).(*model.UnknownRef).Unknown == unlet(d.Arg("b")).(*model.UnknownRef).Unknown {
		return nil
	}
	o, ok := unlet(g.priors[0].prior.Kernel).(*model.Op)
	if !ok {
		return nil
	}
	q := big.NewRat(-1, 1)
	base := model.Expr(nil)
	switch {
	case o.Op == "^":
		base = o.Args[0]
		q = kernel.Constant(o.Args[1], 0)
	case o.Op == "/" && isOne(o.Args[0]):
		base = o.Args[1]
	}
	s, ok := unlet(base).(*model.Op)
	if q == nil || !ok || s.Op != "+" || len(s.Args) != 2 {
		return nil
	}
	isA := func(x model.Expr, l string) bool {
		r, ok := unlet(x).(*model.UnknownRef)
		return ok && r.Unknown == unlet(d.Arg(l)).(*model.UnknownRef).Unknown
	}
	if !(isA(s.Args[0], "a") && isA(s.Args[1], "b") || isA(s.Args[0], "b") && isA(s.Args[1], "a")) {
		return nil
	}
	c := new(big.Rat).Neg(new(big.Rat).Add(q, big.NewRat(1, 1)))
	r := check("a + b", c, c)
	if r.Status == DoesNotExist {
		toward := "inf"
		if j.fails[0] == 1 {
			toward = "0"
		}
		for _, v := range g.vars {
			r.Escape = append(r.Escape, Escape{Unknown: v.Unknown, Toward: toward, Step: "1"})
		}
		r.Repairs = []string{"a group with both outcomes", "a proper prior on the weights"}
	}
	return r
}
