// Package falseclaimrateabovepromise reports conclusions that are drawn more often
// than the file promises.
package falseclaimrateabovepromise

import (
	_ "embed"
	"fmt"

	"wellposed/checks/design"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule stands at the promise.
var Rule = &rule.Rule{
	Name: "false-claim-rate-above-promise", Severity: diag.Stop, Group: rule.Design, Phase: rule.Numeric,
	Brief:   "A conclusion is drawn more often than the file promises.",
	Doc:     page,
	Sources: []string{"derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	for _, r := range f.Promises() {
		if r.Promise.Kind != model.ConclusionChance || r.Promise.Op != "<=" || r.Outcome != design.Broken {
			continue
		}
		found = append(found, diag.Finding{
			Rule: "false-claim-rate-above-promise", Severity: diag.Stop, Path: f.Model.File.Path, Span: r.Promise.Span, Target: r.Promise.Conclusion.Name,
			Headline: fmt.Sprintf("“%s” is drawn with probability %s when %s: %s.", r.Promise.Conclusion.Name, r.Numbers[0].Text, design.Settled(r.Promise.At).Text, r.Distance),
			Evidence: r.Numbers,
			Notes:    []string{"It goes away with a stricter threshold of the conclusion, more data, or another prior."},
			Related:  []diag.Related{{Span: r.Promise.Conclusion.Span, Message: "the conclusion"}},
		})
	}
	return found
}
