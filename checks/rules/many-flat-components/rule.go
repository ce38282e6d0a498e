// Package manyflatcomponents reports combinations of flat unknowns that the posterior
// pulls away from the data.
package manyflatcomponents

import (
	_ "embed"
	"fmt"
	"math"
	"math/big"

	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule compares a combination's posterior median with the combination of medians.
var Rule = &rule.Rule{
	Name: "many-flat-components", Severity: diag.Warn, Group: rule.Scale, Phase: rule.Numeric,
	Brief:   "Each component is flat, and the reported combination of them is pulled away from where the components lie.",
	Doc:     page,
	Sources: []string{"Stein 1959", "JCGM 101:2008, 9.4"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	m := f.Model
	if !wording.Whole(m) {
		return nil
	}
	var found []diag.Finding
	for _, r := range m.Reports {
		if f.Context().Err() != nil {
			break
		}
		about := model.UnknownsIn(r.Value)
		if len(about) < 2 || len(r.Intervals) == 0 || linear(m, r.Value) || !allFlat(m, about) {
			continue
		}
		if d, ok := examine(f, r, about); ok {
			found = append(found, d)
		}
	}
	return found
}

func linear(m *model.Model, e model.Expr) bool {
	for {
		let, ok := e.(*model.LetRef)
		if !ok || let.Let == nil {
			break
		}
		e = let.Let.Value
	}
	op, ok := e.(*model.Op)
	switch {
	case !ok:
		_, ref := e.(*model.UnknownRef)
		return ref || model.Known(e)
	case op.Op == "neg":
		return linear(m, op.Args[0])
	case len(op.Args) != 2:
		return false
	case op.Op == "+" || op.Op == "-":
		return linear(m, op.Args[0]) && linear(m, op.Args[1])
	case op.Op == "*":
		return model.Known(op.Args[0]) && linear(m, op.Args[1]) || model.Known(op.Args[1]) && linear(m, op.Args[0])
	case op.Op == "/":
		return model.Known(op.Args[1]) && linear(m, op.Args[0])
	}
	return false
}

// allFlat reports whether every unknown is one unbounded number that is flat itself.
func allFlat(m *model.Model, about []*model.Unknown) bool {
	for _, u := range about {
		p := m.Declared().PriorOf(u)
		if p == nil || !wording.Flat(p) || !wording.Unbounded(p) || !wording.OnItself(p) {
			return false
		}
	}
	return true
}

func examine(f *facts.Facts, r *model.Report, about []*model.Unknown) (diag.Finding, bool) {
	m := f.Model
	declared := m.Declared()
	s := f.Posterior(declared, r)
	if s.Err != nil || len(s.Widths) == 0 {
		return diag.Finding{}, false
	}
	at := map[*model.Unknown]*model.Number{}
	for _, u := range about {
		law := f.PosteriorLaw(declared, &model.UnknownRef{Unknown: u, Which: model.Whole})
		if law.Err != nil {
			return diag.Finding{}, false
		}
		median, err := law.Quantile(0.5)
		value := new(big.Rat).SetFloat64(median.Value)
		if err != nil || value == nil {
			return diag.Finding{}, false
		}
		at[u] = &model.Number{Value: value}
	}
	plugged, err := model.EvalFloat(put(r.Value, at), 0)
	if err != nil || math.IsNaN(plugged) || math.IsInf(plugged, 0) {
		return diag.Finding{}, false
	}
	share, _ := m.Matters.Float64()
	width := s.Widths[0]
	off := math.Abs(s.Median.Value-plugged) / width.Value
	if !(math.Abs(s.Median.Value-plugged)-s.Median.Error > share*(width.Value+width.Error)) {
		return diag.Finding{}, false
	}
	d := diag.Finding{
		Rule: "many-flat-components", Severity: diag.Warn, Path: m.File.Path, Span: r.Span, Target: r.Name,
		Headline: fmt.Sprintf("Flat on each of %d components is not flat on %s: its median is %s, and at the components' medians it is %s (%s widths of the interval).",
			len(about), model.Text(r.Value), s.Median.Text(), diag.Figure(plugged, 1e-6*(math.Abs(plugged)+width.Value), 3), diag.Figure(off, 0, 2)),
		Notes:    []string{"It goes away with a prior on the combination itself, or with data that hold the components far from where it bends."},
		Evidence: []diag.Evidence{wording.Measured("median of "+r.Name, "as declared", s.Median)},
	}
	for _, u := range about {
		d.Related = append(d.Related, diag.Related{Span: declared.PriorOf(u).Span, Message: "flat on " + u.Name})
	}
	return d, true
}

// put replaces unknowns by numbers.
func put(e model.Expr, at map[*model.Unknown]*model.Number) model.Expr {
	list := func(args []model.Expr) []model.Expr {
		var out []model.Expr
		for _, a := range args {
			out = append(out, put(a, at))
		}
		return out
	}
	switch e := e.(type) {
	case *model.UnknownRef:
		return at[e.Unknown]
	case *model.LetRef:
		if e.Let != nil {
			return put(e.Let.Value, at)
		}
	case *model.Op:
		return &model.Op{Span: e.Span, Op: e.Op, Args: list(e.Args)}
	case *model.Call:
		return &model.Call{Span: e.Span, Func: e.Func, Args: list(e.Args)}
	}
	return e
}
