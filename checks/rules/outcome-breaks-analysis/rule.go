// Package outcomebreaksanalysis reports outcomes of data not yet seen that would
// leave no posterior.
package outcomebreaksanalysis

import (
	_ "embed"
	"fmt"

	"wellposed/checks/design"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule speaks only while data are awaited.
var Rule = &rule.Rule{
	Name: "outcome-breaks-analysis", Severity: diag.Warn, Group: rule.Design, Phase: rule.Numeric,
	Brief:   "Some outcomes of the awaited data would leave no posterior.",
	Doc:     page,
	Sources: []string{"derivation", "Albert and Anderson 1984"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if len(m.Awaited) == 0 || len(m.Unknowns) == 0 || !wording.Whole(m) {
		return nil
	}
	b, err := f.Breaks(m.Declared())
	if err != nil || b.Bad == 0 {
		return nil
	}
	d := diag.Finding{
		Rule: "outcome-breaks-analysis", Severity: diag.Warn, Path: m.File.Path, Span: b.Cells[0].Awaited.Span, Target: b.Cells[0].Awaited.Name,
		Headline: fmt.Sprintf("No posterior under the declared priors with %s.", b.Text),
	}
	if b.Text == "every outcome" {
		d.Headline = "No outcome of the awaited data leaves a posterior under the declared priors."
	}
	var worst *design.Chance
	for i := range b.Chances {
		c := &b.Chances[i]
		if c.Err != nil {
			continue
		}
		d.Evidence = append(d.Evidence, diag.Evidence{
			Name: "chance of no posterior", About: c.Plan.Text, Value: c.Value, Error: c.Error + c.Undecided,
			Text: diag.Figure(c.Value, c.Error+c.Undecided, 3), How: b.How, Method: "outcomes enumerated",
		})
		if worst == nil || c.Value > worst.Value {
			worst = c
		}
	}
	if worst != nil && b.Text != "every outcome" {
		d.Headline = fmt.Sprintf("No posterior under the declared priors with %s: probability %s when %s.", b.Text, diag.Figure(worst.Value, worst.Error+worst.Undecided, 3), worst.Plan.Text)
	}
	if worst == nil {
		d.Notes = append(d.Notes, "`suppose` with planning values says how likely that is.")
	}
	if v := b.Reason; v != nil {
		d.Notes = append(d.Notes, wording.Sentence("for one of them: "+v.Claim))
		if p := wording.Blamed(m.Declared(), v); p != nil {
			d.Related = []diag.Related{{Span: wording.PriorPlace(p), Message: "the prior that these outcomes leave open"}}
		}
	}
	d.Notes = append(d.Notes, "It goes away with a proper prior, with a design in which these outcomes can't occur, or with a rule for them written into the plan.")
	for _, p := range f.Promises() {
		if p.Outcome == design.Broken && (p.Promise.Kind == model.EveryOutcome || p.Promise.Kind == model.PosteriorChance) {
			d.Severity = diag.Stop
			d.Related = append(d.Related, diag.Related{Span: p.Promise.Span, Message: "the promise that this breaks"})
		}
	}
	return []diag.Finding{d}
}
