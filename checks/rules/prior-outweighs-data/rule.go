// Package prioroutweighsdata reports priors that weigh more than the data.
package prioroutweighsdata

import (
	_ "embed"
	"fmt"
	"math/big"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule compares the weight of a prior with that of the data.
var Rule = &rule.Rule{
	Name: "prior-outweighs-data", Severity: diag.Warn, Group: rule.Influence, Phase: rule.Numeric,
	Brief:   "A prior weighs more than the data that bear on its unknown.",
	Doc:     page,
	Sources: []string{"Diaconis and Ylvisaker 1979", "FDA 2010", "derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if !wording.Whole(m) {
		return nil
	}
	declared := m.Declared()
	var found []diag.Finding
	for _, p := range m.Priors {
		if f.Context().Err() != nil {
			break
		}
		if p.Form != model.ByDist || p.Dist == nil || p.Dist.Spec == nil || p.Truncated != nil || !wording.OnItself(p) || !f.Sound(declared, p.About[0]) {
			continue
		}
		u := p.About[0]
		d := diag.Finding{Rule: "prior-outweighs-data", Severity: diag.Warn, Path: m.File.Path, Span: wording.PriorPlace(p), Target: u.Name}
		if !counted(m, p, u, &d) && !measured(f, p, u, &d) {
			continue
		}
		if p.Reason.From != "" {
			d.Severity = diag.Note
			d.Notes = append(d.Notes, "The prior names its source, so this is a note.")
		}
		d.Notes = append(d.Notes, "It goes away with more data, or with a prior that is discounted.")
		found = append(found, d)
	}
	return found
}

// counted handles a Beta or Gamma prior beside counts, exactly.
func counted(m *model.Model, p *model.Prior, u *model.Unknown, d *diag.Finding) bool {
	t, ok := wording.TallyOf(m, u)
	if !ok {
		return false
	}
	var weight *big.Rat
	what := "trials"
	switch {
	case p.Dist.Spec.Name == "Beta" && !t.Rate:
		ab, ok := wording.Arguments(p.Dist, "a", "b")
		if !ok {
			return false
		}
		weight = new(big.Rat).Add(ab[0], ab[1])
	case p.Dist.Spec.Name == "Gamma" && t.Rate:
		b, ok := wording.Arguments(p.Dist, "rate")
		if !ok {
			return false
		}
		weight, what = b[0], "units of exposure"
	default:
		return false
	}
	if weight.Cmp(t.N) <= 0 {
		return false
	}
	share := new(big.Rat).Quo(weight, new(big.Rat).Add(weight, t.N))
	v, _ := share.Float64()
	d.Headline = fmt.Sprintf("The prior of %s counts like %s %s beside the %s that were seen: %s of the posterior's weight is the prior's.", u.Name, wording.Decimal(weight), what, wording.Decimal(t.N), diag.Percent(v, 0, 2))
	d.Evidence = []diag.Evidence{{Name: "share of the prior", Text: diag.Percent(v, 0, 3), Value: v, How: diag.Proved, Method: "conjugate weights"}}
	d.Related = []diag.Related{{Span: t.Last.Span, Message: "the data"}}
	return true
}

// measured handles a Normal prior by the variance that the data leave of it.
func measured(f *facts.Facts, p *model.Prior, u *model.Unknown, d *diag.Finding) bool {
	if p.Dist.Spec.Name != "Normal" {
		return false
	}
	ref := &model.UnknownRef{Unknown: u, Which: model.Whole}
	prior, post := f.PriorLaw(f.Model.Declared(), ref), f.PosteriorLaw(f.Model.Declared(), ref)
	if prior.Err != nil || post.Err != nil {
		return false
	}
	_, before := prior.Moments()
	_, after := post.Moments()
	share := (after.Value / before.Value) * (after.Value / before.Value)
	bound := 2 * share * (after.Error/after.Value + before.Error/before.Value)
	if !(share-bound > 0.5) {
		return false
	}
	d.Headline = fmt.Sprintf("The data leave %s of the prior variance of %s: most of what the posterior knows is the prior.", diag.Percent(share, bound, 2), u.Name)
	d.Evidence = []diag.Evidence{{Name: "share of the prior", Text: diag.Percent(share, bound, 3), Value: share, Error: bound, How: after.How, Method: "posterior variance / prior variance"}}
	return true
}
