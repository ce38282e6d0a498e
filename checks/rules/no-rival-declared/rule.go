// Package norivaldeclared reports files without an alternative prior.
package norivaldeclared

import (
	_ "embed"
	"fmt"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

//go:embed doc.md
var page string

// Rule asks for at least one rival in the file.
var Rule = &rule.Rule{
	Name: "no-rival-declared", Severity: diag.Note, Group: rule.Reporting, Phase: rule.Exact,
	Brief:   "No alternative prior is declared.",
	Doc:     page,
	Sources: []string{"Kruschke 2021", "Seven items for reporting a Bayesian analysis, Journal of Clinical Epidemiology 2005"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if len(m.Rivals) > 0 || len(m.Standard) > 0 || len(m.Priors) == 0 || !wording.Tidy(m) {
		return nil
	}
	p := m.Priors[0]
	if len(p.About) == 0 {
		return nil
	}
	name := p.About[0].Name
	d := diag.Finding{
		Rule: "no-rival-declared", Severity: diag.Note, Path: m.File.Path, Span: wording.PriorPlace(p),
		Headline: fmt.Sprintf("No rival is declared for any of %d %s, so nothing shows whether the answer hangs on the choice.", len(m.Priors), plural(len(m.Priors))),
	}
	end := source.Span{Start: p.Span.End, End: p.Span.End}
	d.Fixes = []diag.Fix{{Title: "Add the standard rivals for " + name, Grade: diag.Same, Consequence: "the declared prior stays in force",
		Edits: []diag.Edit{{Path: m.File.Path, Span: end, Text: "\nrivals for " + name + ": standard"}}}}
	return []diag.Finding{d}
}

func plural(n int) string {
	if n == 1 {
		return "prior"
	}
	return "priors"
}
