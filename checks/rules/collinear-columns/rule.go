// Package collinearcolumns reports regressions whose columns depend on each other.
package collinearcolumns

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

// Rule tells the story of a design without full rank.
var Rule = &rule.Rule{
	Name: "collinear-columns", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "Some combination of the coefficients is seen by no row, and the prior is flat along it.",
	Doc:     page,
	Sources: []string{"derivation", "Box and Tiao 1973"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.Rank) {
		seen := wording.Data(wording.Seen(f.Model.Declared(), v))
		where := wording.Escapes(v)
		if where == "" {
			where = "infinity"
		}
		headline := fmt.Sprintf("No row among %s sees one combination of the coefficients: mass escapes to %s.", seen, where)
		found = append(found, wording.Story(f, "collinear-columns", v, headline))
	}
	return found
}
