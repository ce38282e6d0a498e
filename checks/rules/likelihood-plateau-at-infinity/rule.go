// Package likelihoodplateauatinfinity reports likelihoods that level off where the prior does not.
package likelihoodplateauatinfinity

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

// Rule tells the story of a plateau.
var Rule = &rule.Rule{
	Name: "likelihood-plateau-at-infinity", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "The likelihood levels off at a positive constant while an unknown grows without bound, and the prior does not fall off there.",
	Doc:     page,
	Sources: []string{"derivation", "Berger, De Oliveira and Sanso 2001"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.Plateau) {
		found = append(found, wording.Story(f, "likelihood-plateau-at-infinity", v, fmt.Sprintf(
			"With %s the likelihood levels off as %s, and this prior does not fall off there: there is no posterior.",
			wording.Data(wording.Seen(f.Model.Declared(), v)), wording.Escapes(v))))
	}
	return found
}
