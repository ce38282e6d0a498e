// Package checks runs the rules over a model. The command line and the language
// server call the same Run, so they can't disagree.
package checks

import (
	"context"
	"fmt"
	"runtime/debug"
	"sort"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Options choose what is run.
type Options struct {
	// ExactOnly leaves the numeric rules out.
	ExactOnly bool
	// Strict treats what is not decided as a stop and a missing reason as a
	// warning.
	Strict bool
	// Today (2027-06-30) is the day on which acceptances are judged; when it is
	// empty none has run out.
	Today string
}

// InternalFault is the finding of a rule that failed.
const InternalFault = "internal-fault"

// Run checks a model and returns the findings in source order, those of reading
// included. A panic in a rule becomes one finding of internal-fault.
func Run(f *facts.Facts, o Options) []diag.Finding {
	var found []diag.Finding
	for _, d := range f.Model.Problems {
		if Find(d.Rule) == nil { // a rule of that name passes it on
			found = append(found, d)
		}
	}
	for _, r := range Rules() {
		if f.Context().Err() != nil {
			break
		}
		if o.ExactOnly && r.Phase == rule.Numeric {
			continue
		}
		found = append(found, contained(r, f)...)
	}
	if o.Strict {
		strict(found)
	}
	found = accepted(f.Model, found, o.Today)
	Sort(found)
	return found
}

// strict raises what a strict run does not let pass.
func strict(found []diag.Finding) {
	for i := range found {
		switch found[i].Rule {
		case "existence-not-decided":
			found[i].Severity = diag.Stop
		case "default-without-reason":
			found[i].Severity = max(found[i].Severity, diag.Warn)
		}
	}
}

// Check builds the facts of a model and runs the rules.
func Check(ctx context.Context, m *model.Model, o Options) []diag.Finding {
	return Run(facts.New(ctx, m), o)
}

// contained runs one rule and turns a panic into a finding.
func contained(r *rule.Rule, f *facts.Facts) (found []diag.Finding) {
	defer func() {
		if p := recover(); p != nil {
			found = []diag.Finding{{
				Rule: InternalFault, Severity: diag.Warn, Path: f.Model.File.Path,
				Headline: fmt.Sprintf("The rule %s failed on this model; its result is missing.", r.Name),
				Notes:    []string{fmt.Sprintf("Please report it with the model, if you may: %v", p), string(debug.Stack())},
			}}
		}
	}()
	return r.Check(f)
}

// Sort orders findings by place, gravest first at one place, then by rule.
func Sort(found []diag.Finding) {
	sort.SliceStable(found, func(i, j int) bool {
		a, b := found[i], found[j]
		switch {
		case a.Path != b.Path:
			return a.Path < b.Path
		case a.Span.Start != b.Span.Start:
			return a.Span.Start < b.Span.Start
		case a.Severity != b.Severity:
			return a.Severity > b.Severity
		}
		return a.Rule < b.Rule
	})
}
