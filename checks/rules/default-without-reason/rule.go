// Package defaultwithoutreason reports priors that carry no reason.
package defaultwithoutreason

import (
	_ "embed"
	"fmt"
	"strings"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

//go:embed doc.md
var page string

// Rule asks for a reason or a source beside each prior.
var Rule = &rule.Rule{
	Name: "default-without-reason", Severity: diag.Note, Group: rule.Reporting, Phase: rule.Exact,
	Brief:   "A prior is stated without a reason and without a source.",
	Doc:     page,
	Sources: []string{"Kruschke 2021", "Guidance for the Use of Bayesian Statistics in Medical Device Clinical Trials, 2010"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	add := func(r model.Reason, at source.Span, target, what string) {
		if strings.TrimSpace(r.Because) != "" || strings.TrimSpace(r.From) != "" {
			return
		}
		d := diag.Finding{
			Rule: "default-without-reason", Severity: diag.Note, Path: f.Model.File.Path, Span: at, Target: target,
			Headline: fmt.Sprintf("%s is stated without a reason.", what),
		}
		if r.Span.Empty() {
			end := source.Span{Start: at.End, End: at.End}
			d.Fixes = []diag.Fix{{Title: "Add places for the reason and its source", Grade: diag.Same, Consequence: "the texts are yours to write",
				Edits: []diag.Edit{{Path: f.Model.File.Path, Span: end, Text: ` because "" from ""`}}}}
		}
		found = append(found, d)
	}
	for _, p := range f.Model.Priors {
		if len(p.About) == 0 || p.Rule != nil && p.Rule.Name == model.Unreadable {
			continue
		}
		add(p.Reason, wording.PriorPlace(p), p.About[0].Name, "The prior "+p.Text)
	}
	return found
}
