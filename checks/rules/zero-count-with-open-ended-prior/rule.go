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
	"wellposed/parser/model"
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
	for _, v := range wording.Failing(f, existence.ZeroCount, existence.TailOrder, existence.Conjugate) {
		o := wording.Seen(a, v)
		if o == nil || len(v.Unknowns) != 1 {
			continue
		}
		for _, e := range v.Escape {
			outcomes := outcomes(o, e.Toward)
			if outcomes == "" {
				continue
			}
			end := wording.End(e)
			finding := diag.Finding{
				Rule: "zero-count-with-open-ended-prior", Severity: diag.Note, Path: f.Model.File.Path, Span: o.Span, Target: v.Unknowns[0].Name,
				Headline: fmt.Sprintf("%s is most likely at %s and rules out nothing near it; only the prior could, and it is open there.", wording.Capital(wording.Data(o)), end),
				Notes:    []string{outcomes},
				Evidence: []diag.Evidence{wording.Established(v)},
			}
			if p := wording.Blamed(a, v); p != nil {
				finding.Related = []diag.Related{{Span: wording.PriorPlace(p), Message: "the prior that is open at " + end}}
			}
			found = append(found, finding)
		}
	}
	return found
}

// outcomes says which outcomes hold the mass at the end that is open; empty when
// the data are no zero count at that end.
func outcomes(o *model.Observation, toward string) string {
	y, n, trials := wording.Count(o)
	switch {
	case y == nil:
		return ""
	case toward == "0" && y.Sign() == 0 && trials:
		return "One success or more would hold the mass away from there; `require a posterior for every outcome` asks the design about it before the data are in."
	case toward == "0" && y.Sign() == 0:
		return "One event or more would hold the mass away from there; `require a posterior for every outcome` asks the design about it before the data are in."
	case toward == "1" && trials && n != nil && y.Cmp(n) == 0:
		return "One failure or more would hold the mass away from there; `require a posterior for every outcome` asks the design about it before the data are in."
	}
	return ""
}
