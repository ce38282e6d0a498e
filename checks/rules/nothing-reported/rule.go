// Package nothingreported reports files that report and conclude nothing.
package nothingreported

import (
	_ "embed"
	"fmt"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

//go:embed doc.md
var page string

// Rule asks for a reported quantity or a conclusion.
var Rule = &rule.Rule{
	Name: "nothing-reported", Severity: diag.Note, Group: rule.Reporting, Phase: rule.Exact,
	Brief:   "No quantity is reported and no conclusion is stated.",
	Doc:     page,
	Sources: []string{"Kruschke 2021", "common practice"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if len(m.Reports) > 0 || len(m.Conclusions) > 0 || len(m.Unknowns) == 0 || !wording.Tidy(m) {
		return nil
	}
	u := m.Unknowns[0]
	d := diag.Finding{
		Rule: "nothing-reported", Severity: diag.Note, Path: m.File.Path, Span: u.Span,
		Headline: fmt.Sprintf("Nothing is reported of %s, so no scale and no conclusion can be judged.", names(m)),
		Fixes:    []diag.Fix{{Title: "Report " + u.Name, Grade: diag.Same, Edits: []diag.Edit{{Path: m.File.Path, Span: end(m), Text: "report " + u.Name + ", central 95%\n"}}}},
	}
	if text := m.File.Text; text != "" && text[len(text)-1] != '\n' {
		d.Fixes[0].Edits[0].Text = "\n" + d.Fixes[0].Edits[0].Text
	}
	return []diag.Finding{d}
}

func end(m *model.Model) source.Span {
	n := len(m.File.Text)
	return source.Span{Start: n, End: n}
}

func names(m *model.Model) string {
	if len(m.Unknowns) == 1 {
		return m.Unknowns[0].Name
	}
	return fmt.Sprintf("%d unknowns", len(m.Unknowns))
}
