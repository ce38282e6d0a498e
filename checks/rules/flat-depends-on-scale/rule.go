// Package flatdependsonscale reports flat priors that are not flat on a scale that
// is reported, where that decides whether a posterior exists.
package flatdependsonscale

import (
	_ "embed"
	"fmt"
	"math"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/rule"
	"wellposed/checks/wording"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

//go:embed doc.md
var page string

// Rule compares flat on the stated scale with flat on each reported one.
var Rule = &rule.Rule{
	Name: "flat-depends-on-scale", Severity: diag.Warn, Group: rule.Scale, Phase: rule.Numeric,
	Brief:   "A prior that is flat on one scale is not flat on a scale that is reported, and flat there would move the report or leave no posterior.",
	Doc:     page,
	Sources: []string{"derivation", "Kass and Wasserman 1996"},
	Check:   check,
}

func check(f *facts.Facts) []diag.Finding {
	if !wording.Whole(f.Model) {
		return nil
	}
	var found []diag.Finding
	for _, p := range f.Model.Priors {
		if !wording.Flat(p) || p.Joint || len(p.About) != 1 || !p.About[0].Scalar() || wording.Lost(f, p.About[0]) {
			continue
		}
		u := p.About[0]
		for _, r := range f.Model.Reports {
			if about := model.UnknownsIn(r.Value); len(about) != 1 || about[0] != u || sameScale(p.Target, r.Value) {
				continue
			}
			if d, ok := compare(f, p, u, r); ok {
				found = append(found, d)
			}
		}
	}
	return found
}

// compare states the prior flat on the reported scale and looks at what becomes
// of the report.
func compare(f *facts.Facts, p *model.Prior, u *model.Unknown, r *model.Report) (diag.Finding, bool) {
	scale := model.Text(r.Value)
	other, err := model.PriorFromText(f.Model, scale+" flat")
	if err != nil {
		return diag.Finding{}, false
	}
	a := f.Model.Declared().With(other.Text, other)
	d := diag.Finding{
		Rule: "flat-depends-on-scale", Severity: diag.Warn, Path: f.Model.File.Path, Span: wording.PriorPlace(p), Target: u.Name,
		Related: []diag.Related{{Span: r.ValueSpan, Message: "the scale that is reported"}},
	}
	if law := f.Induced(p, r.Value); law != "" {
		d.Evidence = append(d.Evidence, diag.Evidence{Name: "prior on " + scale, Text: law, Value: wording.Undefined, How: diag.Proved, Method: "change of variable"})
	}
	if law := f.Induced(other, &model.UnknownRef{Unknown: u, Which: model.Whole}); law != "" {
		d.Evidence = append(d.Evidence, diag.Evidence{Name: "flat on " + scale + " as a prior on " + u.Name, Text: law, Value: wording.Undefined, How: diag.Proved, Method: "change of variable"})
	}
	v := f.Existence(a).Of(u)
	if v != nil && v.Status == existence.DoesNotExist {
		d.Headline = fmt.Sprintf("Flat on %s is not flat on %s: flat there, %s would leave no posterior.", target(p, u), scale, wording.Data(wording.Seen(a, v)))
		d.Notes = wording.Reasons(v)
		d.Evidence = append(d.Evidence, wording.Established(v))
		return d, true
	}
	if !f.Sound(a, u) {
		return d, false
	}
	shift, ok := wording.ShiftOf(f, f.Model.Declared(), a, r)
	if !ok || !wording.Matters(f.Model, shift) {
		return d, false
	}
	end := wording.EndText(shift, r.Intervals[shift.Interval], r.Name)
	d.Headline = fmt.Sprintf("Flat on %s is not flat on %s: flat there, %s goes from %s to %s (%s).", target(p, u), scale, end, shift.From.Text(), shift.To.Text(), wording.Moved(shift))
	d.Evidence = append(d.Evidence, wording.Measured(end, "as declared", shift.From), wording.Measured(end, other.Text, shift.To))
	whole := &model.UnknownRef{Unknown: u, Which: model.Whole}
	for _, x := range []struct {
		name string
		a    *model.Analysis
	}{{"as declared", f.Model.Declared()}, {other.Text, a}} {
		if law := f.PosteriorLaw(x.a, whole); law.Err == nil {
			if mean, _ := law.Moments(); !math.IsNaN(mean.Value) {
				d.Evidence = append(d.Evidence, wording.Measured("mean of "+u.Name, x.name, mean))
			}
		}
	}
	d.Notes = append(d.Notes, "It goes away with more data, with a prior said on the scale that is reported, or with one that does not depend on the scale.")
	return d, true
}

// target is the scale that the prior is flat on, as text.
func target(p *model.Prior, u *model.Unknown) string {
	if p.Target == nil {
		return u.Name
	}
	return model.Text(p.Target)
}

// sameScale reports whether one expression is a linear function of the other, so
// that flat on one is flat on the other.
func sameScale(a, b model.Expr) bool { return model.Text(core(a)) == model.Text(core(b)) }

// core strips known summands and factors.
func core(e model.Expr) model.Expr {
	switch x := e.(type) {
	case *model.LetRef:
		if x.Let != nil {
			return core(x.Let.Value)
		}
	case *model.Op:
		switch {
		case x.Op == "neg":
			return core(x.Args[0])
		case len(x.Args) != 2:
		case (x.Op == "+" || x.Op == "-" || x.Op == "*") && model.Known(x.Args[0]):
			return core(x.Args[1])
		case (x.Op == "+" || x.Op == "-" || x.Op == "*" || x.Op == "/") && model.Known(x.Args[1]):
			return core(x.Args[0])
		}
	}
	return e
}
