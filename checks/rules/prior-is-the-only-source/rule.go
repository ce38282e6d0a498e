// Package prioristheonlysource reports unknowns on which no data bear.
package prioristheonlysource

import (
	_ "embed"
	"fmt"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule looks for unknowns that no observation reaches.
var Rule = &rule.Rule{
	Name: "prior-is-the-only-source", Severity: diag.Note, Group: rule.Identification, Phase: rule.Exact,
	Brief:   "Nothing in the data bears on an unknown; what is reported of it is its prior.",
	Doc:     page,
	Sources: []string{"derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if len(f.Model.Observations) == 0 || len(f.Model.Awaited) > 0 || !wording.Whole(f.Model) {
		return nil
	}
	touched := touched(f.Model)
	var found []diag.Finding
	for _, u := range f.Model.Unknowns {
		if touched[u] {
			continue
		}
		d := diag.Finding{
			Rule: "prior-is-the-only-source", Severity: diag.Note, Path: f.Model.File.Path, Span: u.Span, Target: u.Name,
			Headline: fmt.Sprintf("No observation bears on %s: its posterior is its prior.", u.Name),
			Notes:    []string{"Let data arise from it, or say in the report that nothing was learnt about it."},
		}
		for _, r := range f.Model.Reports {
			for _, v := range model.UnknownsIn(r.Value) {
				if v == u {
					d.Severity = diag.Warn
					d.Related = append(d.Related, diag.Related{Path: f.Model.File.Path, Span: r.Span, Message: "it is reported here"})
				}
			}
		}
		found = append(found, d)
	}
	return found
}

// touched are the unknowns that data bear on, directly or through the laws of
// other unknowns.
func touched(m *model.Model) map[*model.Unknown]bool {
	out := map[*model.Unknown]bool{}
	for _, o := range m.Observations {
		for _, u := range inDist(o.Dist) {
			out[u] = true
		}
	}
	for again := true; again; {
		again = false
		link := func(about []*model.Unknown, d *model.Dist, kernel model.Expr) {
			hyper := append(inDist(d), model.UnknownsIn(kernel)...)
			any := false
			for _, u := range about {
				any = any || out[u]
			}
			for _, u := range append(hyper, about...) {
				if any && !out[u] {
					out[u], again = true, true
				}
			}
		}
		for _, p := range m.Populations {
			link([]*model.Unknown{p.Unknown}, p.Dist, nil)
		}
		for _, p := range m.Priors {
			link(p.About, p.Dist, p.Kernel)
		}
	}
	return out
}

func inDist(d *model.Dist) []*model.Unknown {
	if d == nil {
		return nil
	}
	var list []*model.Unknown
	for _, form := range d.Spec.Forms[d.Form] {
		list = append(list, model.UnknownsIn(d.Args[form.Label])...)
	}
	for _, p := range d.Parts {
		list = append(append(list, model.UnknownsIn(p.Weight)...), inDist(p.Dist)...)
	}
	return list
}
