// Package momentdoesnotexist reports means and standard deviations that do not exist.
package momentdoesnotexist

import (
	_ "embed"
	"fmt"
	"math"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule looks at the first two moments of every report.
var Rule = &rule.Rule{
	Name: "moment-does-not-exist", Severity: diag.Warn, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "A mean or a standard deviation of a reported quantity does not exist.",
	Doc:     page,
	Sources: []string{"derivation"},
	Check:   check,
}

// asked are the orders of the moments behind the point summaries.
var asked = map[string]int{"mean": 1, "sd": 2, "variance": 2}

func check(f *facts.Facts) []diag.Finding {
	a := f.Resolved(f.Model.Declared())
	if status, _ := f.Existence(f.Model.Declared()).Overall(); status != existence.Exists || !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	for _, r := range f.Model.Reports {
		if d, ok := moment(f, a, r); ok {
			found = append(found, d)
		}
	}
	return found
}

// moment looks for the lowest of the first two moments that does not exist.
func moment(f *facts.Facts, a *model.Analysis, r *model.Report) (diag.Finding, bool) {
	for k := 1; k <= 2; k++ {
		v := existence.Moment(f.Context(), a, r, k)
		if v == nil || v.Status != existence.DoesNotExist {
			continue
		}
		what := [...]string{"mean", "standard deviation"}[k-1]
		d := diag.Finding{
			Rule: "moment-does-not-exist", Severity: diag.Note, Path: f.Model.File.Path, Span: r.ValueSpan, Target: r.Name,
			Headline: fmt.Sprintf("The posterior of %s exists, but its %s does not: the tail is too heavy.", r.Name, what),
			Notes:    []string{v.Claim + ".", "A median and an interval exist; more data or a prior with a lighter tail would bring the " + what + "."},
			Evidence: []diag.Evidence{{Name: "moment", About: r.Name, Text: "of order " + fmt.Sprint(k) + " does not exist", Value: math.NaN(), How: v.How, Method: v.Theorem}},
		}
		for _, p := range r.Points {
			if asked[p] >= k {
				d.Severity = diag.Stop
				d.Headline = fmt.Sprintf("The reported %s of %s does not exist: the tail of its posterior is too heavy.", p, r.Name)
			}
		}
		return d, true
	}
	return diag.Finding{}, false
}
