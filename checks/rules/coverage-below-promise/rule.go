// Package coveragebelowpromise reports broken promises of long-run coverage.
package coveragebelowpromise

import (
	_ "embed"

	"wellposed/checks/design"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule stands at the promise.
var Rule = &rule.Rule{
	Name: "coverage-below-promise", Severity: diag.Stop, Group: rule.Design, Phase: rule.Numeric,
	Brief:   "The long-run coverage of an interval is below what the file promises.",
	Doc:     page,
	Sources: []string{"Brown, Cai and DasGupta 2001"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	for _, r := range f.Promises() {
		if r.Promise.Kind != model.LongRunCoverage || r.Outcome != design.Broken {
			continue
		}
		d := diag.Finding{
			Rule: "coverage-below-promise", Severity: diag.Stop, Path: f.Model.File.Path, Span: r.Promise.Span, Target: r.Promise.Report.Name,
			Headline: "Long-run coverage of " + r.Promise.Report.Name + " falls short: " + r.Distance + ".",
			Evidence: r.Numbers,
			Notes:    []string{"On counts the coverage jumps, so its lowest value lies below the stated level for every prior; a promise says whether it means lowest or average.", "It goes away with another promise, another prior, or more data."},
		}
		if r.Why != "" {
			d.Notes = append([]string{wording.Sentence(wording.Capital(r.Why))}, d.Notes...)
		}
		found = append(found, d)
	}
	return found
}
