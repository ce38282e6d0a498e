// Package logflatspreadbetweengroups reports spreads between groups whose prior
// is not integrable at zero.
package logflatspreadbetweengroups

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

// Rule tells the story of a spread that runs to zero.
var Rule = &rule.Rule{
	Name: "log-flat-spread-between-groups", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "The prior of a spread between groups has infinite mass at zero, which the data do not exclude.",
	Doc:     page,
	Sources: []string{"Gelman 2006", "Hobert and Casella 1996"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.SpreadAtZero) {
		seen := wording.Data(wording.Seen(f.Model.Declared(), v))
		where := wording.Escapes(v)
		if where == "" {
			where = "a spread of zero"
		}
		headline := fmt.Sprintf("With %s, as with any number of groups, this prior leaves no posterior: mass escapes to %s.", seen, where)
		found = append(found, wording.Story(f, "log-flat-spread-between-groups", v, headline))
	}
	return found
}
