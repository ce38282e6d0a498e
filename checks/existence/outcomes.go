package existence

import (
	"context"
	"fmt"
	"math/big"
	"strings"

	"wellposed/checks/existence/kernel"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Outcomes are the values of one awaited count that leave no posterior.
type Outcomes struct {
	Given *model.Given
	How   diag.How
	// None is set when every outcome leaves a posterior, All when none does.
	None, All bool
	// Bad lists the outcomes; when Open is set every outcome from the last one on
	// is bad as well.
	Bad  []int64
	Open bool
	// Trials is the largest possible outcome, -1 when there is none.
	Trials int64
	// Text is the set in words: "y = 0 or y = 40".
	Text string
	// Reasons is the verdict for each bad outcome.
	Reasons []*Verdict
}

// maxOutcomes bounds the enumeration. Beyond it only both ends are looked at: for
// one binomial or Poisson count and a fixed prior the conditions at the two ends
// of the support are monotone in the count, so the good outcomes are an interval.
const maxOutcomes = 60

// Breaking finds, for every awaited count, the exact set of outcomes that leave
// no posterior. It answers nil for an awaited value that is a column, that more
// than one statement uses, or whose law is not a binomial or Poisson count; a
// verdict that is not decided makes How say so.
func Breaking(ctx context.Context, a *model.Analysis) []*Outcomes {
	var out []*Outcomes
	for _, w := range a.Awaited {
		if w.Given == nil || w.Given.Vector != nil {
			continue
		}
		if o := breaking(ctx, a, w.Given); o != nil {
			out = append(out, o)
		}
	}
	return out
}

func breaking(ctx context.Context, a *model.Analysis, y *model.Given) *Outcomes {
	var law *model.Observation
	for _, o := range a.Observations {
		for _, x := range observationExprs(o) {
			uses := false
			walk(x, func(x model.Expr) {
				if g, ok := x.(*model.GivenRef); ok && g.Given == y {
					uses = true
				}
			})
			if uses && law != nil && law != o {
				return nil
			}
			if uses {
				law = o
			}
		}
	}
	if law == nil || len(law.What) != 1 || law.Reading != model.Values || law.Weight != nil {
		return nil
	}
	if g, ok := law.What[0].(*model.GivenRef); !ok || g.Given != y {
		return nil
	}
	r := &Outcomes{Given: y, How: diag.Proved, Trials: -1}
	switch law.Dist.Spec.Name {
	case "Binomial":
		n := kernel.Constant(law.Dist.Arg("trials"), 0)
		if n == nil || !n.IsInt() || !n.Num().IsInt64() {
			return nil
		}
		r.Trials = n.Num().Int64()
	case "Bernoulli":
		r.Trials = 1
	case "Poisson":
	default:
		return nil
	}
	// The group that the count belongs to, without the other awaited values.
	good := func(v int64) (*Verdict, bool) {
		res := Decide(ctx, with(a, y, big.NewRat(v, 1)))
		for u := range unknownsIn(observationExprs(law)...) {
			if w := res.Of(u); w != nil && w.Status != Exists {
				return w, w.Status == DoesNotExist
			}
		}
		return nil, false
	}
	var try []int64
	switch {
	case r.Trials >= 0 && r.Trials <= maxOutcomes:
		for v := range r.Trials + 1 {
			try = append(try, v)
		}
	case r.Trials >= 0:
		for v := range int64(10) {
			try = append(try, v)
		}
		for v := r.Trials - 9; v <= r.Trials; v++ {
			try = append(try, v)
		}
	default:
		for v := range int64(20) {
			try = append(try, v)
		}
	}
	for _, v := range try {
		if ctx.Err() != nil {
			return nil
		}
		w, bad := good(v)
		if w != nil && !bad {
			r.How = diag.NotDecided
			continue
		}
		if bad {
			r.Bad = append(r.Bad, v)
			r.Reasons = append(r.Reasons, w)
		}
	}
	middle := int64(len(try))
	switch {
	case len(r.Bad) == 0 && r.How == diag.Proved:
		r.None, r.Text = true, "none"
	case int64(len(r.Bad)) == middle:
		r.All, r.Text = true, "every outcome"
		if r.Trials < 0 || r.Trials > maxOutcomes {
			r.Open = true
		}
	default:
		r.Text = inWords(y.Name, r.Bad)
	}
	return r
}

// inWords writes a set of outcomes: "y = 0", "y = 0 or y = 40", "y from 0 to 3".
func inWords(name string, bad []int64) string {
	var parts []string
	for i := 0; i < len(bad); {
		j := i
		for j+1 < len(bad) && bad[j+1] == bad[j]+1 {
			j++
		}
		if j > i+1 {
			parts = append(parts, fmt.Sprintf("%s from %d to %d", name, bad[i], bad[j]))
		} else {
			for k := i; k <= j; k++ {
				parts = append(parts, fmt.Sprintf("%s = %d", name, bad[k]))
			}
		}
		i = j + 1
	}
	return strings.Join(parts, " or ")
}

// with is the analysis in which an awaited number has a value.
func with(a *model.Analysis, y *model.Given, value *big.Rat) *model.Analysis {
	known := *y
	known.Value, known.Awaited = value, false
	swap := func(x model.Expr) model.Expr { return replaceGiven(x, y, &known) }
	m := *a.Model
	m.Observations = make([]*model.Observation, len(a.Observations))
	for i, o := range a.Observations {
		c := *o
		c.What = make([]model.Expr, len(o.What))
		uses := false
		for j, x := range o.What {
			c.What[j] = swap(x)
			uses = uses || c.What[j] != x
		}
		if uses {
			c.Awaited = false
		}
		m.Observations[i] = &c
	}
	return &model.Analysis{Model: &m, Name: a.Name, Use: a.Use}
}

func replaceGiven(x model.Expr, old, by *model.Given) model.Expr {
	if g, ok := x.(*model.GivenRef); ok && g.Given == old {
		return &model.GivenRef{Span: g.Span, Given: by}
	}
	return x
}
