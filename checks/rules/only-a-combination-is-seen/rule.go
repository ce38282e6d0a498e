// Package onlyacombinationisseen reports unknowns of which the data see only a combination.
package onlyacombinationisseen

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

// Rule tells the story of what is not identified.
var Rule = &rule.Rule{
	Name: "only-a-combination-is-seen", Severity: diag.Stop, Group: rule.Identification, Phase: rule.Exact,
	Brief:   "The data see only a combination of unknowns; along the rest the prior is open.",
	Doc:     page,
	Sources: []string{"derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.NotIdentified) {
		found = append(found, wording.Story(f, "only-a-combination-is-seen", v, fmt.Sprintf(
			"%s see only a combination of %s; along the rest nothing is seen and the prior is open: mass escapes to %s.",
			wording.Capital(wording.Data(wording.Seen(f.Model.Declared(), v))), names(v), wording.Escapes(v))))
	}
	return found
}

func names(v *existence.Verdict) string {
	var list []string
	for _, u := range v.Unknowns {
		list = append(list, u.Name)
	}
	return wording.List(list)
}
