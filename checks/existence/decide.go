// Package existence decides whether the posterior exists.
package existence

import (
	"context"

	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Decide gives a verdict for each group of unknowns that hang together. It
// returns early with NotDecided when ctx ends.
func Decide(ctx context.Context, a *model.Analysis) *Result {
	r := &Result{Analysis: a}
	for _, u := range a.Unknowns {
		r.Verdicts = append(r.Verdicts, &Verdict{Status: NotDecided, How: diag.NotDecided, Unknowns: []*model.Unknown{u}, Code: OutOfReach})
	}
	return r
}
