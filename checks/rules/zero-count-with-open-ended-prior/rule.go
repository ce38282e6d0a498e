// Package zerocountwithopenendedprior tells the counting side of a posterior that
// a zero count leaves out.
package zerocountwithopenendedprior

import (
	_ "embed"
	"fmt"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
)

//go:embed doc.md
var page string

// Rule stands at the data; posterior-does-not-exist stands at the prior.
var Rule = &rule.Rule{
	Name: "zero-count-with-open-ended-prior", Severity: diag.Note, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "All or none of the trials succeeded, and the prior is open at that end.",
	Doc:     page,
	Sources: []string{"derivation", "Tuyl, Gerlach and Mengersen 2008"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	a := f.Model.Declared()
	for _, v := range wording.Failing(f, existence.ZeroCount) {
		o := wording.Seen(a, v)
		if o == nil || len(v.Escape) == 0 {
			continue
		}
		end := wording.End(v.Escape[0])
		finding := diag.Finding{
			Rule: "zero-count-with-open-ended-prior", Severity: diag.Note, Path: f.Model.File.Path, Span: o.Span, Target: wording.Target(a, v),
			Headline: fmt.Sprintf("%s is most likely at %s and rules out nothing near it; only the prior could, and it is open there.", wording.Capital(wording.Data(o)), end),
			Evidence: []diag.Evidence{wording.Established(v)},
		}
		if p := wording.Blamed(a, v); p != nil {
			finding.Related = []diag.Related{{Span: wording.PriorPlace(p), Message: "the prior that is open at " + end}}
		}
		for _, c := range v.Conditions {
			finding.Notes = append(finding.Notes, wording.Sentence("outcomes with a posterior: those with "+c.Text))
		}
		found = append(found, finding)
	}
	return found
}
