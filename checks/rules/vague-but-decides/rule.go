// Package vaguebutdecides reports conclusions that depend on which of the priors
// is taken.
package vaguebutdecides

import (
	_ "embed"
	"fmt"
	"math"
	"strconv"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule draws every conclusion under every prior.
var Rule = &rule.Rule{
	Name: "vague-but-decides", Severity: diag.Stop, Group: rule.Influence, Phase: rule.Numeric,
	Brief:   "A stated conclusion is drawn under one of the priors and not under another.",
	Doc:     page,
	Sources: []string{"ICH E9 1998", "Seven items for reporting a Bayesian analysis, Journal of Clinical Epidemiology 2005"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	for _, c := range f.Model.Conclusions {
		if f.Context().Err() != nil {
			break
		}
		if d, ok := examine(f, c); ok {
			found = append(found, d)
		}
	}
	return found
}

func examine(f *facts.Facts, c *model.Conclusion) (diag.Finding, bool) {
	m := f.Model
	declared := f.Probability(m.Declared(), c)
	if declared.Err != nil || unclear(c, declared) {
		return diag.Finding{}, false
	}
	rivals, severity := wording.Alternatives(f), diag.Stop
	if len(rivals) == 0 {
		rivals, severity = interchangeable(f, c), diag.Warn
	}
	d := diag.Finding{
		Rule: "vague-but-decides", Severity: severity, Path: m.File.Path, Span: c.Span, Target: c.Name,
		Evidence: []diag.Evidence{wording.Measured("P("+model.Text(c.Event)+")", "as declared", declared.Number)},
	}
	rows := [][]string{{"prior", "P(" + model.Text(c.Event) + ")", "conclusion"}, {"as declared", declared.Text(), drawn(declared.Drawn)}}
	for i := range rivals {
		p := f.Probability(rivals[i].Analysis, c)
		if p.Err != nil {
			continue
		}
		word := drawn(p.Drawn)
		if unclear(c, p) {
			word = "too close to say"
		} else if p.Drawn != declared.Drawn && d.Headline == "" {
			t, _ := c.Threshold.Float64()
			d.Headline = fmt.Sprintf("The prior decides \"%s\": it is %s as declared (%s) and %s under %s (%s; the threshold is %s).",
				c.Name, drawn(declared.Drawn), declared.Text(), drawn(p.Drawn), wording.Called(rivals[i]), p.Text(), strconv.FormatFloat(t, 'g', 6, 64))
		}
		rows = append(rows, []string{rivals[i].Name, p.Text(), word})
		d.Evidence = append(d.Evidence, wording.Measured("P("+model.Text(c.Event)+")", rivals[i].Name, p.Number))
	}
	if d.Headline == "" {
		return d, false
	}
	if severity == diag.Warn {
		d.Notes = append(d.Notes, "The declared prior is one of the standard choices, and another of them decides otherwise.")
	}
	d.Notes = append(d.Notes, "It goes away with more data, with a prior whose source rules the other choices out, or with a claim that holds under all of them.")
	d.Sketch = wording.Columns(rows)
	return d, true
}

// interchangeable are the other standard choices where the declared prior is one.
func interchangeable(f *facts.Facts, c *model.Conclusion) []wording.Alternative {
	declared := f.Model.Declared()
	for _, u := range model.UnknownsIn(c.Event) {
		p := declared.PriorOf(u)
		if p == nil || p.Joint || !u.Scalar() {
			continue
		}
		for _, choice := range f.Standard(u) {
			if choice.Prior.Text == p.Text {
				return wording.Choices(f, u)
			}
		}
	}
	return nil
}

// unclear reports whether the error of a probability reaches over the threshold.
func unclear(c *model.Conclusion, p facts.Chance) bool {
	t, _ := c.Threshold.Float64()
	return math.IsNaN(p.Value) || math.Abs(p.Value-t) <= p.Error
}

func drawn(yes bool) string {
	if yes {
		return "drawn"
	}
	return "not drawn"
}
