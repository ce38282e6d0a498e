// Package defaultpriorsdisagree reports answers that move between the declared
// prior and its rivals.
package defaultpriorsdisagree

import (
	_ "embed"
	"fmt"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule compares every report under every rival with the declared one.
var Rule = &rule.Rule{
	Name: "default-priors-disagree", Severity: diag.Warn, Group: rule.Influence, Phase: rule.Numeric,
	Brief:   "An end of a reported interval moves between the declared prior and a rival by more than what matters.",
	Doc:     page,
	Sources: []string{"Seven items for reporting a Bayesian analysis, Journal of Clinical Epidemiology 2005", "Kruschke 2021"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	rivals := wording.Alternatives(f)
	if len(rivals) == 0 {
		return nil
	}
	var found []diag.Finding
	for _, r := range f.Model.Reports {
		if f.Context().Err() != nil {
			break
		}
		if d, ok := compare(f, r, rivals); ok {
			found = append(found, d)
		}
	}
	return found
}

// compare finds the rival under which a report moves most.
func compare(f *facts.Facts, r *model.Report, rivals []wording.Alternative) (diag.Finding, bool) {
	m := f.Model
	declared := m.Declared()
	s := f.Posterior(declared, r)
	if s.Err != nil || len(s.Intervals) == 0 {
		return diag.Finding{}, false
	}
	var worst wording.Shift
	var by *wording.Alternative
	for i, alt := range rivals {
		if shift, ok := wording.ShiftOf(f, declared, alt.Analysis, r); ok && wording.Matters(m, shift) && (by == nil || shift.Sure > worst.Sure) {
			worst, by = shift, &rivals[i]
		}
	}
	if by == nil {
		return diag.Finding{}, false
	}
	asked := s.Intervals[worst.Interval].Asked
	d := diag.Finding{
		Rule: "default-priors-disagree", Severity: diag.Warn, Path: m.File.Path, Span: r.Span, Target: r.Name,
		Headline: fmt.Sprintf("%s goes from %s to %s under %s: %s.", wording.Capital(wording.EndText(worst, asked, r.Name)), worst.From.Text(), worst.To.Text(), wording.Called(*by), wording.Moved(worst)),
		Notes:    []string{"The table of all rivals belongs in the report; more data, or a prior with a source, would bring them together."},
	}
	for _, p := range by.Priors {
		if q := declared.PriorOf(p.About[0]); q != nil {
			d.Related = append(d.Related, diag.Related{Span: q.Span, Message: "the declared prior"})
		}
	}
	d.Sketch = table(f, r, rivals)
	name := r.Name + " " + wording.AskedText(asked) + ", " + worst.End
	d.Evidence = []diag.Evidence{wording.Measured(name, "as declared", worst.From), wording.Measured(name, by.Name, worst.To)}
	return d, true
}

// table lists the intervals of a report under the declared prior and its rivals.
func table(f *facts.Facts, r *model.Report, rivals []wording.Alternative) string {
	head := []string{"prior"}
	for _, in := range r.Intervals {
		head = append(head, wording.AskedText(in))
	}
	rows := [][]string{head}
	list := append([]wording.Alternative{{Name: "as declared", Analysis: f.Model.Declared()}}, rivals...)
	for _, alt := range list {
		s := f.Posterior(alt.Analysis, r)
		row := []string{alt.Name}
		for i := range r.Intervals {
			if s.Err != nil {
				row = append(row, without(f, alt.Analysis, r))
				continue
			}
			row = append(row, wording.IntervalText(s.Intervals[i]))
		}
		rows = append(rows, row)
	}
	return wording.Columns(rows)
}

// without says why a rival has no numbers.
func without(f *facts.Facts, a *model.Analysis, r *model.Report) string {
	for _, u := range model.UnknownsIn(r.Value) {
		if v := f.Existence(a).Of(u); v != nil && v.Status == existence.DoesNotExist {
			return "no posterior"
		}
	}
	return "not computed"
}
