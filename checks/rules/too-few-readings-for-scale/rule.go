// Package toofewreadingsforscale reports scales that too few distinct readings
// hold.
package toofewreadingsforscale

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

// Rule counts readings against the power of the scale.
var Rule = &rule.Rule{
	Name: "too-few-readings-for-scale", Severity: diag.Stop, Group: rule.Existence, Phase: rule.Exact,
	Brief:   "There are too few distinct readings for an unknown scale under this prior.",
	Doc:     page,
	Sources: []string{"derivation", "Box and Tiao 1973", "Fernández and Steel 1998"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	var found []diag.Finding
	for _, v := range wording.Failing(f, existence.ScaleReadings, existence.EqualReadings) {
		seen := wording.Data(wording.Seen(f.Model.Declared(), v))
		where := wording.Escapes(v)
		if where != "" {
			where = ": mass escapes to " + where
		}
		headline := fmt.Sprintf("%s leave no posterior under this prior of the scale%s.", wording.Capital(seen), where)
		if v.Code == existence.EqualReadings {
			headline = fmt.Sprintf("%s lie exactly on the mean's values, so nothing keeps the scale from zero%s.", wording.Capital(seen), where)
		}
		finding := wording.Story(f, "too-few-readings-for-scale", v, headline)
		if v.Code == existence.EqualReadings {
			finding.Notes = append(finding.Notes, "Readings that are alike often come from an instrument that rounds; `observe between(low, high)` says so.")
		}
		found = append(found, finding)
	}
	return found
}
