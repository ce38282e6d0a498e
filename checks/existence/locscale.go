package existence

import (
	"context"
	"fmt"
	"math/big"

	"wellposed/checks/existence/kernel"
	"wellposed/parser/model"
)

// Location–scale samples. n readings with density f((y − mu)/s)/s, mu flat, prior
// of s of order s^(−c0) at 0 and s^(−c) at infinity.
//
// s → ∞: the integral over mu of Π f is at most sup f^(n−1) · s and at least a
// constant times s, so the kernel is s^(−n−c+1): finite iff n + c > 2.
//
// s → 0, f bounded and falling like |z|^(−(ν+1)): the mass sits within s of a
// reading; at a value taken by m readings it is s^(1−n−c0) · s^((n−m)(ν+1)),
// finite iff (n − m) ν − m − c0 + 2 > 0, for the value with the largest m
// (Fernández & Steel 1998 for c0 = 1). Where f falls exponentially or faster the
// same power is multiplied by exp(−d/s) unless all readings agree.
func whenLocationScale(g *group, ctx context.Context) *Verdict {
	if len(g.vars) != 2 || len(g.rows) == 0 || len(g.pops) > 0 || len(g.rows) > 100000 {
		return nil
	}
	first := g.rows[0].obs
	d := first.Dist
	var nu *big.Rat
	switch d.Spec.Name {
	case "Cauchy":
		nu = big.NewRat(1, 1)
	case "Student-t":
		if mentions(d.Arg("degrees")) || rowDependent(d.Arg("degrees")) {
			return nil
		}
		if nu = kernel.Constant(d.Arg("degrees"), 0); nu == nil || nu.Sign() <= 0 {
			return nil
		}
	case "Laplace", "logistic", "Gumbel":
	default:
		return nil
	}
	var mu, s variable
	for _, v := range g.vars {
		if isSelf(d.Arg("location"), v) {
			mu = v
		}
		if isSelf(d.Arg("scale"), v) {
			s = v
		}
	}
	if mu.Unknown == nil || s.Unknown == nil || mu.Unknown == s.Unknown || !mu.Unknown.Scalar() || !s.Unknown.Scalar() {
		return nil
	}
	if lo, hi := g.support(mu); lo != nil || hi != nil {
		return nil
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
	t, ok := g.tails(s)
	if !ok {
		return nil
	}
	count := map[string]int64{}
	n, most := int64(0), int64(0)
	for _, f := range g.rows {
		o := f.obs
		if o != first || !plainReading(o) {
			return nil
		}
		y := kernel.Constant(o.What[0], f.row)
		if y == nil {
			return nil
		}
		k := y.RatString()
		count[k]++
		n++
		most = max(most, count[k])
	}
	var j judge
	j.need(fmt.Sprintf("n + power of %s − 2 > 0", s.Name()), whole64(n), t.atInf, whole64(-2))
	failInf := len(j.fails) > 0
	switch {
	case t.at0 == nil:
	case nu == nil && most == n:
		j.need(fmt.Sprintf("2 − n − power of %s at 0 > 0, since all readings agree", s.Name()), whole64(2-n), negRat(t.at0))
	case nu != nil:
		j.need(fmt.Sprintf("(n − m)·degrees − m − power of %s at 0 + 2 > 0", s.Name()),
			new(big.Rat).Mul(whole64(n-most), nu), whole64(2-most), negRat(t.at0))
	}
	r := j.verdict(g, ScaleReadings, "location–scale sample", "Fernández & Steel 1998, 1999; derivation")
	r.Observation = first
	if r.Status == DoesNotExist {
		toward := "inf"
		if !failInf {
			toward = "0"
			if most > 1 {
				r.Code = EqualReadings
			}
		}
		r.Escape = []Escape{{Unknown: s.Unknown, Toward: toward}}
		r.Repairs = []string{"more readings that differ", "a proper prior on " + s.Name()}
	}
	return r
}
