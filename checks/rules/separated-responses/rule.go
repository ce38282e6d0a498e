// Package separatedresponses reports regressions whose responses a combination of
// the columns splits.
package separatedresponses

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

// Rule tells the story of separation.
var Rule = &rule.Rule{
	Name: "separated-responses", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "The columns split the responses without overlap, and the prior is flat along the split.",
	Doc:     page,
	Sources: []string{"Albert and Anderson 1984", "Silvapulle 1981", "Chen and Shao 2001", "Ibrahim and Laud 1991"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.Separation) {
		seen := wording.Data(wording.Seen(f.Model.Declared(), v))
		where := wording.Escapes(v)
		if where == "" {
			where = "infinity"
		}
		headline := fmt.Sprintf("In %s the responses are split without overlap, and nothing holds the coefficients: mass escapes to %s.", seen, where)
		found = append(found, wording.Story(f, "separated-responses", v, headline))
	}
	return found
}
