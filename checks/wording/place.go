// Package wording holds what several rules share: which statement a verdict is
// about, and how data, ends and directions read.
package wording

import (
	"strconv"
	"strings"

	"wellposed/checks/existence"
	"wellposed/parser/diag"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Blamed returns the prior that a verdict is about: that of the unknown whose
// mass escapes, else the first prior of the group that is no distribution, else
// the group's first. It is nil when the group has none.
func Blamed(a *model.Analysis, v *existence.Verdict) *model.Prior {
	for _, e := range v.Escape {
		if e.Unknown != nil {
			if p := a.PriorOf(e.Unknown); p != nil {
				return p
			}
		}
	}
	var any *model.Prior
	for _, u := range v.Unknowns {
		p := a.PriorOf(u)
		switch {
		case p == nil:
		case p.Form != model.ByDist:
			return p
		case any == nil:
			any = p
		}
	}
	return any
}

// Target is the unknown that a verdict is about, as `accept … for` names it.
func Target(a *model.Analysis, v *existence.Verdict) string {
	for _, e := range v.Escape {
		if e.Unknown != nil {
			return e.Unknown.Name
		}
	}
	if p := Blamed(a, v); p != nil && len(p.About) > 0 {
		return p.About[0].Name
	}
	if len(v.Unknowns) > 0 {
		return v.Unknowns[0].Name
	}
	return ""
}

// Place is the span that a finding about a verdict marks: what the prior says,
// the population model, or the declaration.
func Place(a *model.Analysis, v *existence.Verdict) source.Span {
	if p := Blamed(a, v); p != nil {
		return PriorPlace(p)
	}
	for _, u := range v.Unknowns {
		if u.Population != nil {
			return u.Population.Span
		}
	}
	if len(v.Unknowns) > 0 {
		return v.Unknowns[0].Span
	}
	return source.Span{}
}

// PriorPlace is what a prior says of its target: "Beta(0, 0)", "flat".
func PriorPlace(p *model.Prior) source.Span {
	if !p.FormSpan.Empty() {
		return p.FormSpan
	}
	return p.Span
}

// Seen returns the observation that a verdict names, or the first one that any
// of the group's unknowns enters.
func Seen(a *model.Analysis, v *existence.Verdict) *model.Observation {
	if v.Observation != nil {
		return v.Observation
	}
	inGroup := map[*model.Unknown]bool{}
	for _, u := range v.Unknowns {
		inGroup[u] = true
	}
	for _, o := range a.Observations {
		if Touches(o, func(u *model.Unknown) bool { return inGroup[u] }) {
			return o
		}
	}
	return nil
}

// Touches reports whether an observation's law has an unknown for which ok is
// true, through definitions too.
func Touches(o *model.Observation, ok func(*model.Unknown) bool) bool {
	found := false
	look := func(u *model.Unknown) { found = found || ok(u) }
	walkDist(o.Dist, look)
	return found
}

// walkDist visits the unknowns of a law, those of definitions included.
func walkDist(d *model.Dist, visit func(*model.Unknown)) {
	if d == nil {
		return
	}
	for _, e := range d.Args {
		for _, u := range model.UnknownsIn(e) {
			visit(u)
		}
	}
	for _, p := range d.Parts {
		for _, u := range model.UnknownsIn(p.Weight) {
			visit(u)
		}
		walkDist(p.Dist, visit)
	}
}

// Name is an unknown or one of its components: "gamma", "gamma[north]".
func Name(u *model.Unknown, component int) string {
	if u == nil {
		return "?"
	}
	if u.Scalar() || component < 0 || component >= len(u.Levels) {
		return u.Name
	}
	return u.Name + "[" + u.Levels[component] + "]"
}

// Escapes says where the mass goes: "p = 0", "sigma → ∞", or a direction such as
// "slope : alpha = 20 : 3, without end".
func Escapes(v *existence.Verdict) string {
	if len(v.Escape) == 0 {
		return ""
	}
	if v.Escape[0].Step == "" {
		var ends []string
		for i, e := range v.Escape {
			if i == 3 && len(v.Escape) > 4 {
				ends = append(ends, strconv.Itoa(len(v.Escape)-3)+" more ends")
				break
			}
			ends = append(ends, End(e))
		}
		return List(ends)
	}
	var names, steps []string
	for _, e := range v.Escape {
		if e.Step == "0" {
			continue
		}
		names, steps = append(names, Name(e.Unknown, e.Component)), append(steps, minus(e.Step))
		if len(names) == 6 && len(v.Escape) > 7 {
			names, steps = append(names, "…"), append(steps, "…")
			break
		}
	}
	if len(names) == 1 {
		if strings.HasPrefix(steps[0], "−") {
			return names[0] + " → −∞"
		}
		return names[0] + " → ∞"
	}
	return "(" + strings.Join(names, ", ") + ") along (" + strings.Join(steps, ", ") + ")"
}

// End is one end of a support in words.
func End(e existence.Escape) string {
	name := Name(e.Unknown, e.Component)
	switch e.Toward {
	case "inf", "+inf":
		return name + " → ∞"
	case "-inf":
		return name + " → −∞"
	}
	return name + " = " + minus(e.Toward)
}

func minus(s string) string { return strings.Replace(s, "-", "−", 1) }

// Rows points at the data that decide a verdict: at most three rows, with the
// place in the data file or in the model.
func Rows(v *existence.Verdict, message string) []diag.Related {
	o := v.Observation
	if o == nil {
		return nil
	}
	related := []diag.Related{{Span: o.Span, Message: message}}
	if o.Table == nil || len(v.Rows) == 0 || len(o.Table.Columns) == 0 {
		return related
	}
	column := o.Table.Columns[0]
	if len(o.What) > 0 {
		if c, ok := o.What[0].(*model.ColumnRef); ok && c.Column.Table == o.Table {
			column = c.Column
		}
	}
	for i, row := range v.Rows {
		if i == 3 {
			related[len(related)-1].Message += "; " + strconv.Itoa(len(v.Rows)-3) + " more rows like these"
			break
		}
		if row < 0 || row >= len(column.Texts) {
			continue
		}
		r := diag.Related{Message: "row " + strconv.Itoa(row+1) + " of " + o.Table.Name + ": " + column.Name + " = " + column.Texts[row]}
		switch {
		case row < len(column.Spans):
			r.Span = column.Spans[row]
		case o.Table.FilePath != "":
			r.Path, r.Row, r.Column = o.Table.FilePath, row+2, column.Index+1
			if row < len(column.Lines) {
				r.Row = int(column.Lines[row])
			}
		default:
			continue
		}
		related = append(related, r)
	}
	return related
}

// Established is the evidence that a verdict itself is.
func Established(v *existence.Verdict) diag.Evidence {
	method := v.Theorem
	if v.Source != "" && v.Source != v.Theorem {
		if method != "" {
			method += ", "
		}
		method += v.Source
	}
	return diag.Evidence{Name: "posterior", Text: string(v.Status), Value: Undefined, How: v.How, Method: method}
}

// Reasons are the notes of a verdict: its claim, the conditions with the numbers
// put in, and what would make it go away.
func Reasons(v *existence.Verdict) []string {
	var notes []string
	if v.Claim != "" {
		notes = append(notes, Sentence(v.Claim))
	}
	for _, c := range v.Conditions {
		if !c.Holds {
			notes = append(notes, Sentence("needed: "+c.Text+"; here: "+c.Filled))
		}
	}
	if len(v.Repairs) > 0 {
		notes = append(notes, Sentence("it goes away with "+strings.Join(v.Repairs, "; or ")))
	}
	return notes
}

// Under is the analysis in which a rival's priors stand.
func Under(a *model.Analysis, r *model.Rival) *model.Analysis {
	return a.With("rival "+strconv.Quote(r.Name), r.Priors...)
}
