package existence

import (
	"context"
	"fmt"

	"wellposed/checks/existence/cone"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Jeffreys' rule for a binary regression. With W = diag(n p′²/(p(1 − p))) the
// kernel is |X'WX|^(1/2). By the Cauchy–Binet formula |X'WX| is a sum over p rows of
// |X_S|² Π w_i, and the root of a sum is at most the sum of the roots, so the
// kernel is at most Σ |X_S| Π w_i^(1/2). For a set S with |X_S| ≠ 0 change variables to
// the linear predictors η_i, i in S: the integral becomes Π ∫ w(η)^(1/2) dη, which is
// finite for the logistic link (w^(1/2) = e^(η/2)/(1 + e^η)) and the probit link
// (w^(1/2) falls like exp(−η²/4)). The likelihood is at most 1. So with full rank the
// posterior exists for any data; without it the kernel is 0 everywhere. Ibrahim
// & Laud (1991).
func whenJeffreysBinary(g *group, ctx context.Context) *Verdict {
	if len(g.priors) == 0 || len(g.pops) > 0 || len(g.rows) == 0 {
		return nil
	}
	p := g.priors[0].prior
	for _, f := range g.priors {
		if f.prior != p {
			return nil
		}
	}
	if p.Form != model.ByRule || p.Rule == nil || p.Rule.Name != model.Jeffreys && p.Rule.Name != model.JeffreysJointly {
		return nil
	}
	about := map[*model.Unknown]bool{}
	for _, u := range p.About {
		about[u] = true
	}
	for _, v := range g.vars {
		if lo, hi := g.support(v); !about[v.Unknown] || lo != nil || hi != nil {
			return nil
		}
	}
	d := &directions{g: g, index: g.index()}
	classified := map[*model.Observation]*linked{}
	for k, f := range g.rows {
		if k%4096 == 0 && ctx.Err() != nil {
			return g.undecided("interrupted")
		}
		o := f.obs
		l, ok := classified[o]
		if !ok {
			if n := o.Dist.Spec.Name; (n == "Bernoulli" || n == "Binomial") && logitOrProbit(o.Dist.Arg("probability")) && o.Weight == nil {
				l = g.link(o)
			}
			classified[o] = l
		}
		if l == nil || !d.row(l, f) {
			return nil
		}
	}
	for i := range d.senses {
		d.senses[i] = cone.Equal // only the rank matters
	}
	pr, err := d.problem()
	if err != nil {
		return nil
	}
	r, err := cone.Decide(ctx, pr)
	if err != nil || r.Verdict != cone.Overlapped {
		return nil
	}
	return &Verdict{Status: Exists, How: diag.Proved, Unknowns: g.unknowns(), Code: DerivedPrior, Source: "Ibrahim & Laud 1991; derivation",
		Theorem:     "Jeffreys' rule for a binary regression of full rank is proper",
		Claim:       fmt.Sprintf("the design has rank %d, the number of coefficients, and the likelihood is at most 1", len(g.vars)),
		Conditions:  []Condition{{Text: "rank of the design = number of coefficients", Filled: fmt.Sprintf("%d = %d", len(g.vars), len(g.vars)), Holds: true}},
		Observation: g.rows[0].obs, Certificate: d.certificate(r)}
}

func logitOrProbit(x model.Expr) bool {
	x = unlet(x)
	if _, ok := call(x, "expit"); ok {
		return true
	}
	_, ok := call(x, "Phi")
	return ok
}
