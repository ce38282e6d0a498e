package checks

import (
	"strings"

	"wellposed/checks/existence"
	"wellposed/checks/facts"
	"wellposed/checks/render"
	"wellposed/checks/rule"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Describe puts what was found in a model into the form that is rendered.
func Describe(f *facts.Facts, found []diag.Finding) *render.File {
	m := f.Model
	out := &render.File{Path: m.File.Path, Source: m.File, Findings: found}
	if m.Tree != nil {
		for _, l := range m.Tree.Lines {
			out.Statements = append(out.Statements, source.Span{Start: l.Start, End: l.Start + len(l.Text)})
		}
	}
	if len(m.Unknowns) > 0 {
		out.Verdicts = Verdicts(f.Existence(m.Declared()))
	}
	for _, r := range f.Promises() {
		distance := r.Distance
		if r.Why != "" {
			distance = strings.TrimPrefix(distance+"; "+r.Why, "; ")
		}
		out.Promises = append(out.Promises, render.Promise{Text: r.Text, Span: r.Promise.Span, Outcome: r.Outcome, Distance: distance})
	}
	return out
}

// Verdicts are the engine's verdicts as plain data.
func Verdicts(r *existence.Result) []render.Verdict {
	var list []render.Verdict
	for _, v := range r.Verdicts {
		out := render.Verdict{
			Analysis: r.Analysis.Name, Unknowns: []string{}, Status: string(v.Status), How: string(v.How), Reason: string(v.Code),
			Claim: v.Claim, Theorem: v.Theorem, Source: v.Source, Rows: v.Rows, Repairs: v.Repairs,
		}
		for _, u := range v.Unknowns {
			out.Unknowns = append(out.Unknowns, u.Name)
		}
		for _, c := range v.Conditions {
			out.Conditions = append(out.Conditions, render.Condition{Text: c.Text, Filled: c.Filled, Holds: c.Holds})
		}
		for _, e := range v.Escape {
			out.Escape = append(out.Escape, render.Escape{Unknown: unknownName(e.Unknown), Component: level(e), Toward: e.Toward, Step: e.Step})
		}
		if v.Certificate != nil {
			out.Certificate = v.Certificate
		}
		list = append(list, out)
	}
	return list
}

func unknownName(u *model.Unknown) string {
	if u == nil {
		return ""
	}
	return u.Name
}

func level(e existence.Escape) string {
	if e.Unknown == nil || e.Component < 0 || e.Component >= len(e.Unknown.Levels) {
		return ""
	}
	return e.Unknown.Levels[e.Component]
}

// Known lists the rules and the problems of reading for the formats that
// describe them.
func Known() []render.Rule {
	var list []render.Rule
	add := func(r *rule.Rule, reading bool) {
		list = append(list, render.Rule{Name: r.Name, Severity: r.Severity, Group: string(r.Group), Brief: r.Brief, Page: r.Doc, Sources: r.Sources, Reading: reading})
	}
	for _, r := range Rules() {
		add(r, false)
	}
	for _, p := range Problems() {
		add(p, true)
	}
	return list
}
