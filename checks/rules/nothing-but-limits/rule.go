// Package nothingbutlimits reports data that are limits in one direction only.
package nothingbutlimits

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

// Rule tells the story of one-sided limits.
var Rule = &rule.Rule{
	Name: "nothing-but-limits", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "Every reading is a limit in the same direction, and the location is flat.",
	Doc:     page,
	Sources: []string{"derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.OneSidedLimits) {
		found = append(found, wording.Story(f, "nothing-but-limits", v, fmt.Sprintf(
			"%s are limits in one direction only, and the prior is flat there: mass escapes to %s.",
			wording.Capital(wording.Data(wording.Seen(f.Model.Declared(), v))), wording.Escapes(v))))
	}
	return found
}
