package wording

import (
	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/parser/diag"
)

// Story is the finding that a verdict makes, with everything but its headline:
// place, reasons, the data that decide, how it was established, and the ways
// out.
func Story(f *facts.Facts, rule string, v *existence.Verdict, headline string) diag.Finding {
	a := f.Model.Declared()
	d := diag.Finding{
		Rule: rule, Severity: diag.Stop, Path: f.Model.File.Path, Span: Place(a, v), Target: Target(a, v),
		Headline: headline, Notes: Reasons(v), Related: Rows(v, "the data that decide"),
		Evidence: []diag.Evidence{Established(v)},
	}
	d.Fixes = Fixes(f, a, v)
	return d
}
