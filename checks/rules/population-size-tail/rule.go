// Package populationsizetail reports unknown numbers whose posterior cannot be summed.
package populationsizetail

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

// Rule tells the story of an unknown number.
var Rule = &rule.Rule{
	Name: "population-size-tail", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "The posterior of an unknown number falls off too slowly to be summed.",
	Doc:     page,
	Sources: []string{"Kahn 1987", "Raftery 1988", "derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.PopulationSize) {
		found = append(found, wording.Story(f, "population-size-tail", v, fmt.Sprintf(
			"With %s the terms of the posterior fall off too slowly to be summed: mass escapes to %s.",
			wording.Data(wording.Seen(f.Model.Declared(), v)), wording.Escapes(v))))
	}
	return found
}
