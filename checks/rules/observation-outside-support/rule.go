// Package observationoutsidesupport reports data that the likelihood cannot produce.
package observationoutsidesupport

import (
	_ "embed"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/parser/diag"
)

//go:embed doc.md
var page string

// Rule passes on what was found while the data were read.
var Rule = &rule.Rule{
	Name: "observation-outside-support", Severity: diag.Stop, Group: rule.Mismatch, Phase: rule.Exact,
	Brief:   "The data hold a value that the likelihood cannot produce.",
	Doc:     page,
	Sources: []string{"definition of the likelihood", "common practice"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, d := range f.Model.Problems {
		if d.Rule == "observation-outside-support" {
			found = append(found, d)
		}
	}
	return found
}
