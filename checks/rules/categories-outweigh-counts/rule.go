// Package categoriesoutweighcounts reports Dirichlet priors whose weight, spread over
// many categories, exceeds the counts.
package categoriesoutweighcounts

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

// Rule compares the sum of the weights with the sum of the counts.
var Rule = &rule.Rule{
	Name: "categories-outweigh-counts", Severity: diag.Warn, Group: rule.Influence, Phase: rule.Exact,
	Brief:   "The weights of a prior over many categories add up to more than the counts.",
	Doc:     page,
	Sources: []string{"Berger, Bernardo and Sun 2015", "derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if !wording.Whole(m) {
		return nil
	}
	var found []diag.Finding
	for _, p := range m.Priors {
		if p.Form != model.ByDist || p.Dist == nil || p.Dist.Spec == nil || p.Dist.Spec.Name != "Dirichlet" || p.Joint || len(p.About) != 1 {
			continue
		}
		u := p.About[0]
		weights := weightsOf(p.Dist.Arg("weights"), u.Components())
		counts, at := countsOf(m, u)
		if weights == nil || counts == nil || len(weights) != len(counts) || !f.Sound(m.Declared(), u) {
			continue
		}
		prior, seen, empty := new(big.Rat), new(big.Rat), new(big.Rat)
		cells := 0
		for i := range weights {
			prior.Add(prior, weights[i])
			seen.Add(seen, counts[i])
			if counts[i].Sign() == 0 {
				cells++
				empty.Add(empty, weights[i])
			}
		}
		if prior.Cmp(seen) <= 0 {
			continue
		}
		v, _ := new(big.Rat).Quo(empty, new(big.Rat).Add(prior, seen)).Float64()
		s, _ := new(big.Rat).Quo(prior, new(big.Rat).Add(prior, seen)).Float64()
		found = append(found, diag.Finding{
			Rule: "categories-outweigh-counts", Severity: diag.Warn, Path: m.File.Path, Span: wording.PriorPlace(p), Target: u.Name,
			Headline: fmt.Sprintf("The weights over %d categories add up to %s beside %s counted, so the posterior expects %s in the %d empty ones.",
				len(weights), wording.Decimal(prior), wording.Decimal(seen), diag.Percent(v, 0, 3), cells),
			Notes:   []string{"It goes away with more counts, with a total weight that does not grow with the number of categories, or with fewer categories."},
			Related: []diag.Related{{Span: at.Span, Message: "the counts"}},
			Evidence: []diag.Evidence{
				{Name: "posterior mean of the empty categories together", Text: diag.Figure(v, 0, 4), Value: v, How: diag.Proved, Method: "conjugate weights"},
				{Name: "share of the prior", Text: diag.Figure(s, 0, 4), Value: s, How: diag.Proved, Method: "conjugate weights"},
			},
		})
	}
	return found
}

// weightsOf are the exact weights, one number standing for all.
func weightsOf(e model.Expr, n int) []*big.Rat {
	items := []model.Expr{e}
	if v, ok := e.(*model.Vector); ok {
		items = v.Items
	}
	var list []*big.Rat
	for _, item := range items {
		x, err := model.EvalExact(item, 0)
		if err != nil || x.Sign() <= 0 {
			return nil
		}
		list = append(list, x)
	}
	for len(list) < n && len(items) == 1 {
		list = append(list, list[0])
	}
	return list
}

// countsOf adds up Multinomial counts of an unknown; nil when something else bears on
// it.
func countsOf(m *model.Model, u *model.Unknown) (counts []*big.Rat, at *model.Observation) {
	for _, o := range m.Observations {
		if !wording.Touches(o, func(v *model.Unknown) bool { return v == u }) {
			continue
		}
		ref, ok := o.Dist.Arg("proportions").(*model.UnknownRef)
		if !ok || o.Dist.Spec.Name != "Multinomial" || ref.Unknown != u || ref.Which != model.Whole || o.Awaited || o.Weight != nil || o.Reading != model.Values {
			return nil, nil
		}
		for _, row := range o.Rows {
			var values []*big.Rat
			for _, e := range o.What {
				if v, ok := e.(*model.ColumnRef); ok && len(o.What) == 1 {
					for i := range v.Column.Texts {
						values = append(values, v.Column.Exact(i))
					}
					continue
				}
				x, err := model.EvalExact(e, row)
				if err != nil {
					return nil, nil
				}
				values = append(values, x)
			}
			for i, x := range values {
				if x == nil {
					return nil, nil
				}
				if i == len(counts) {
					counts = append(counts, new(big.Rat))
				}
				counts[i].Add(counts[i], x)
			}
		}
		at = o
	}
	return counts, at
}
