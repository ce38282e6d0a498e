// Package prioralreadyclaims reports conclusions that the prior draws by itself.
package prioralreadyclaims

import (
	_ "embed"
	"fmt"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
)

//go:embed doc.md
var page string

// Rule stands at the conclusion. An improper prior gives no event a probability,
// so the rule is silent there.
var Rule = &rule.Rule{
	Name: "prior-already-claims", Severity: diag.Warn, Group: rule.Design, Phase: rule.Numeric,
	Brief:   "The prior alone would draw the conclusion.",
	Doc:     page,
	Sources: []string{"derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	a := f.Model.Declared()
	for _, c := range f.Model.Conclusions {
		if len(c.More) > 0 || c.Op != ">=" && c.Op != ">" {
			continue
		}
		p := f.PriorProbability(a, c.Event)
		threshold, _ := c.Threshold.Float64()
		if p.Err != nil || !(p.Value-p.Error >= threshold) {
			continue
		}
		found = append(found, diag.Finding{
			Rule: "prior-already-claims", Severity: diag.Warn, Path: f.Model.File.Path, Span: c.Span, Target: c.Name,
			Headline: fmt.Sprintf("Without any data the prior draws “%s”: it gives the claim probability %s, and %s is asked for.", c.Name, p.Text(), diag.Figure(threshold, 0, 3)),
			Evidence: []diag.Evidence{{Name: "prior probability", About: c.Name, Text: p.Text(), Value: p.Value, Error: p.Error, How: p.How, Method: p.Method}},
			Notes:    []string{"It goes away with a prior that leaves the claim open, or with a source for the prior that the reader of the conclusion accepts."},
		})
	}
	return found
}
