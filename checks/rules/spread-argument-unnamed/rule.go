// Package spreadargumentunnamed reports spreads that do not say what they are.
package spreadargumentunnamed

import (
	_ "embed"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/parser/diag"
)

//go:embed doc.md
var page string

// Rule passes on what was found while the model was read.
var Rule = &rule.Rule{
	Name: "spread-argument-unnamed", Severity: diag.Stop, Group: rule.Scale, Phase: rule.Exact,
	Brief:   "A spread is given without saying whether it is a standard deviation, a variance or a precision.",
	Doc:     page,
	Sources: []string{"Gelman 2006", "derivation"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, d := range f.Model.Problems {
		if d.Rule == "spread-argument-unnamed" {
			found = append(found, d)
		}
	}
	return found
}
