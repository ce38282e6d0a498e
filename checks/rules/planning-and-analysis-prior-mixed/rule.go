// Package planningandanalysispriormixed reports a planning prior that is also the
// prior of the analysis.
package planningandanalysispriormixed

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

// Rule stands at the planning prior.
var Rule = &rule.Rule{
	Name: "planning-and-analysis-prior-mixed", Severity: diag.Note, Group: rule.Design, Phase: rule.Exact,
	Brief:   "The planning prior and the prior of the analysis are the same.",
	Doc:     page,
	Sources: []string{"common practice"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, s := range f.Model.Supposed {
		if s.Dist == nil || len(s.Unknowns) != 1 {
			continue
		}
		p := f.Model.Declared().PriorOf(s.Unknowns[0])
		if p == nil || p.Form != model.ByDist || p.Truncated != nil || len(p.About) != 1 || model.Text(p.Target) != s.Unknowns[0].Name || model.DistText(p.Dist) != model.DistText(s.Dist) {
			continue
		}
		found = append(found, diag.Finding{
			Rule: "planning-and-analysis-prior-mixed", Severity: diag.Note, Path: f.Model.File.Path, Span: s.Span, Target: s.Unknowns[0].Name,
			Headline: fmt.Sprintf("%s of %s is both what is supposed for planning and the prior of the analysis, so the plan is judged by the belief that it is to test.", model.DistText(s.Dist), s.Unknowns[0].Name),
			Notes:    []string{"It goes away with a planning prior of its own, or with an acceptance that says that both are meant to be the same."},
			Related:  []diag.Related{{Span: wording.PriorPlace(p), Message: "the prior of the analysis"}},
		})
	}
	return found
}
