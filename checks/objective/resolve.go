package objective

import (
	"context"
	"errors"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// DerivePrior derives a prior statement by rule. A target that is a transform of
// one unknown changes nothing for the rules that commute with transforms; the
// maximal-data-information prior is taken on the target's scale and moved back.
func DerivePrior(ctx context.Context, a *model.Analysis, p *model.Prior) (*Derived, error) {
	if p.Form != model.ByRule || p.Rule == nil {
		return nil, errors.New("the prior is not given by a rule")
	}
	plain := true
	switch t := p.Target.(type) {
	case nil, *model.UnknownRef:
	case *model.Vector:
		for _, item := range t.Items {
			if _, ok := item.(*model.UnknownRef); !ok {
				plain = false
			}
		}
	default:
		plain = false
	}
	if plain || p.Rule.Name != model.MaximalData && p.Rule.Name != model.ConstrainedMean {
		return Derive(ctx, a, p.Rule, p.About)
	}
	if p.Rule.Name == model.ConstrainedMean || len(p.About) != 1 || !p.About[0].Scalar() {
		return nil, errors.New("this rule depends on the scale; state it on the unknown itself")
	}
	w := &work{ctx: ctx, s: newSpace(a), rule: p.Rule, about: p.About, d: &Derived{Rule: p.Rule, About: p.About}}
	if err := w.maximalData(); err != nil {
		return nil, err
	}
	target, err := w.s.lower(p.Target, 0)
	if err != nil {
		return nil, err
	}
	slope, err := sy.Diff(target, w.s.free(p.About[0])[0].Symbol)
	if err != nil {
		return nil, err
	}
	w.step("stated on %s, so the kernel of %s has the factor |d %s / d %s|", sy.Text(target), p.About[0].Name, sy.Text(target), p.About[0].Name)
	w.kernel = sy.Mul(w.kernel, sy.Abs(simplified(slope)))
	return w.finish(nil)
}

// Resolve is the analysis in which every prior by rule is replaced by the prior
// that it derives. One that cannot be derived stays as it is.
func Resolve(ctx context.Context, a *model.Analysis) *model.Analysis {
	use := append([]*model.Prior(nil), a.Use...)
	changed := false
	for i, p := range use {
		if p.Form != model.ByRule || ctx.Err() != nil {
			continue
		}
		d, err := DerivePrior(ctx, a, p)
		if err != nil {
			continue
		}
		q := *d.Prior
		q.Span, q.TargetSpan, q.FormSpan, q.Reason = p.Span, p.TargetSpan, p.FormSpan, p.Reason
		if q.Form == model.ByRule {
			rule := *p.Rule
			rule.LogKernel = d.LogKernel
			q.Rule = &rule
		}
		use[i] = &q
		changed = true
	}
	if !changed {
		return a
	}
	return &model.Analysis{Model: a.Model, Name: a.Name, Use: use}
}
