// Package existencenotdecided says aloud where no verdict was reached.
package existencenotdecided

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

// Rule reports each group of unknowns whose posterior is neither proved nor
// refuted.
var Rule = &rule.Rule{
	Name: "existence-not-decided", Severity: diag.Warn, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "Whether the posterior exists was neither proved nor refuted.",
	Doc:     page,
	Sources: []string{"Hobert and Casella 1996", "Tak, Ghosh and Ellis 2018"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	a := f.Model.Declared()
	var found []diag.Finding
	for _, v := range f.Existence(a).Verdicts {
		if v.Status != existence.NotDecided || awaits(a, v) {
			continue
		}
		var names []string
		for _, u := range v.Unknowns {
			names = append(names, u.Name)
		}
		found = append(found, diag.Finding{
			Rule: "existence-not-decided", Severity: diag.Warn, Path: f.Model.File.Path, Span: wording.Place(a, v), Target: wording.Target(a, v),
			Headline: fmt.Sprintf("Whether %s with these priors leave a posterior for %s is not decided.", wording.Data(wording.Seen(a, v)), wording.List(names)),
			Notes:    wording.Reasons(v), Related: wording.Rows(v, "the data"), Evidence: []diag.Evidence{wording.Established(v)},
		})
	}
	return found
}

// awaits reports whether the group hangs on data that are not there yet: its
// outcomes are examined one by one elsewhere.
func awaits(a *model.Analysis, v *existence.Verdict) bool {
	inGroup := map[*model.Unknown]bool{}
	for _, u := range v.Unknowns {
		inGroup[u] = true
	}
	for _, o := range a.Observations {
		if o.Awaited && wording.Touches(o, func(u *model.Unknown) bool { return inGroup[u] }) {
			return true
		}
	}
	return false
}
