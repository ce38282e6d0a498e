// Package toofewfailuresforshape reports life data with too few failures for an open prior on the shape.
package toofewfailuresforshape

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

// Rule tells the story of a shape without failures.
var Rule = &rule.Rule{
	Name: "too-few-failures-for-shape", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "Too few failures, or failures only at the last recorded time, for an open prior on the shape.",
	Doc:     page,
	Sources: []string{"derivation", "Sun 1997"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.Failures) {
		found = append(found, wording.Story(f, "too-few-failures-for-shape", v, fmt.Sprintf(
			"With %s the failures do not hold the shape: mass escapes to %s.",
			wording.Data(wording.Seen(f.Model.Declared(), v)), wording.Escapes(v))))
	}
	return found
}
