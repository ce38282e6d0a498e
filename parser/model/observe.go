package model

import (
	"errors"

	"wellposed/grammar"
	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// vary resolves the population model of a varying effect.
func (b *builder) vary(s *grammar.Vary) {
	u := b.declaredUnknown(s.Name)
	if u == nil {
		return
	}
	r := b.resolver()
	u.Population.Dist = r.dist(s.Dist)
	for _, m := range s.Mods {
		if m.Truncated != nil {
			u.Population.Truncated = r.interval(m.Truncated)
		} else {
			b.stop(DoesNotFit, b.span(m.Pos, m.EndPos), "Only `truncated to (a, b)` can follow a population model.")
		}
	}
	if u.Population.Dist == nil {
		return
	}
	r.rows(b.statementSpan())
	b.m.Populations = append(b.m.Populations, u.Population)
	if r.failed {
		return
	}
	b.wholes(u.Population.Dist, nil, u.Per)
	b.steady(u.Population, r.columns)
	b.parameters(u.Population.Dist, []int{0})
}

// interval resolves the ends of a truncation.
func (r *resolver) interval(in *grammar.Interval) *Range {
	out := &Range{Span: r.b.span(in.Pos, in.EndPos), LowOpen: in.Open == "(", HighOpen: in.Close == ")"}
	for i, e := range []grammar.Expr{in.Low, in.High} {
		x := r.expr(e)
		if c, ok := x.(*Constant); ok && (c.Name == "inf" || c.Name == "-inf") {
			x = nil
		}
		if i == 0 {
			out.Low = x
		} else {
			out.High = x
		}
	}
	if out.Low != nil && out.High != nil && Known(out.Low) && Known(out.High) && len(columnsOf(out.Low))+len(columnsOf(out.High)) == 0 {
		low, err1 := EvalExact(out.Low, 0)
		high, err2 := EvalExact(out.High, 0)
		if err1 == nil && err2 == nil && low.Cmp(high) > 0 {
			r.b.stop(ParameterOutside, out.Span, "Nothing lies between %s and %s.", decimalText(low), decimalText(high))
			r.failed = true
		}
	}
	return out
}

// observe resolves a likelihood statement.
func (b *builder) observe(s *grammar.Observe) {
	o := &Observation{Span: b.statementSpan(), WhatSpan: b.spanOf(s.What)}
	r := b.resolver()
	r.observing = true
	what := r.expr(s.What)
	r.observing = false
	switch {
	case s.Dist != nil:
		o.Dist = r.dist(s.Dist)
	case s.Of != nil:
		o.Dist = r.sentence("Binomial", "trials", s.Of, "probability", s.Prob)
	case s.In != nil:
		exposure, rate := r.expr(s.In), r.expr(s.Rate)
		if exposure != nil && rate != nil {
			span := exposure.Place().Cover(rate.Place())
			o.Dist = &Dist{Span: span, Spec: grammar.FindDistribution("Poisson"), Args: map[string]Expr{"mean": &Op{span, "*", []Expr{rate, exposure}}}}
		}
	}
	only := r.modifiers(o, s.Mods)
	if what == nil || o.Dist == nil || r.failed {
		return
	}
	if !b.whatFits(o, what) {
		return
	}
	rows := r.rows(o.Span)
	if r.failed {
		return
	}
	o.Table = rows.table
	b.rowsOfObservation(o, rows, only, r)
	if touched := UnknownsIn(o.What...); len(touched) > 0 {
		b.stop(DoesNotFit, o.WhatSpan, "%s is an unknown; what is observed must be data.", touched[0].Name)
		return
	}
	b.m.Observations = append(b.m.Observations, o)
	if len(o.Rows) > 0 && b.fits(o) {
		b.parameters(o.Dist, o.Rows)
		if !o.Awaited {
			b.support(o)
		}
	}
}

// sentence makes the distribution of a sentence.
func (r *resolver) sentence(name, label1 string, e1 grammar.Expr, label2 string, e2 grammar.Expr) *Dist {
	x, y := r.expr(e1), r.expr(e2)
	if x == nil || y == nil {
		return nil
	}
	return &Dist{Span: x.Place().Cover(y.Place()), Spec: grammar.FindDistribution(name), Args: map[string]Expr{label1: x, label2: y}}
}

// modifiers resolves what follows an observation and returns the condition of
// `only where`.
func (r *resolver) modifiers(o *Observation, mods []*grammar.Modifier) (only Expr) {
	seen := map[string]bool{}
	for _, m := range mods {
		kind := ""
		switch {
		case m.Right != nil:
			kind, o.Right = "right-censored", r.expr(m.Right)
		case m.Left != nil:
			kind, o.Left = "left-censored", r.expr(m.Left)
		case m.Truncated != nil:
			kind, o.Truncated = "truncated", r.interval(m.Truncated)
		case m.Weighted != nil:
			kind, o.Weight = "weighted", r.expr(m.Weighted)
		case m.Only != nil:
			kind, only = "only", r.expr(m.Only)
		}
		if seen[kind] {
			r.b.stop(DoesNotFit, r.b.span(m.Pos, m.EndPos), "`%s` stands twice.", kind)
			r.failed = true
		}
		seen[kind] = true
	}
	return only
}

// whatFits splits what is observed into values, limits or a summary.
func (b *builder) whatFits(o *Observation, what Expr) bool {
	if call, ok := what.(*Call); ok {
		switch call.Func {
		case "between":
			o.Reading, o.Low, o.High = Between, call.Args[0], call.Args[1]
			o.What = nil
			return true
		case "summary":
			o.Reading, o.N, o.Mean, o.SD = Summary, call.Args[0], call.Args[1], call.Args[2]
			return true
		}
	}
	if v, ok := what.(*Vector); ok {
		o.What = v.Items
		return true
	}
	o.What = []Expr{what}
	return true
}

// rowsOfObservation lists the rows used: those that `only where` keeps and that
// have all the values that the statement uses.
func (b *builder) rowsOfObservation(o *Observation, rows rowsOf, only Expr, r *resolver) {
	previous := false
	for _, e := range o.Dist.expressions() {
		Walk(e, func(e Expr) {
			if c, ok := e.(*Call); ok && c.Func == "previous" {
				previous = true
			}
		})
	}
	o.Awaited = waits(append(append([]Expr{}, o.What...), o.Low, o.High, o.N, o.Mean, o.SD)...)
	if only != nil {
		if touched := UnknownsIn(only); len(touched) > 0 {
			b.stop(DoesNotFit, only.Place(), "%s is an unknown; which rows are used must be decided by data.", touched[0].Name)
			return
		}
	}
	var missing []missingCell
	for _, c := range r.gathered {
		for row := range c.Rows() {
			if !c.Awaited && c.missing(row) {
				missing = append(missing, missingCell{c, row})
			}
		}
	}
	lost := 0
	for row := range rows.count {
		if row%4096 == 0 && b.ctx.Err() != nil {
			return
		}
		if only != nil {
			keep, err := Condition(only, row)
			var gone *MissingError
			switch {
			case errors.As(err, &gone):
				missing, lost = append(missing, missingCell{gone.Column, gone.Row}), lost+1
				continue
			case err != nil && waits(only):
				keep = true
			case err != nil:
				b.stop(DoesNotFit, only.Place(), "The condition can't be decided in row %d: %v.", row+1, err)
				return
			}
			if !keep {
				continue
			}
		}
		if previous && row == 0 {
			continue // the first value has no predecessor; the likelihood conditions on it
		}
		complete := true
		for _, c := range r.columns {
			if !c.Awaited && row < len(c.Texts) && c.missing(row) {
				missing = append(missing, missingCell{c, row})
				complete = false
			}
		}
		if complete {
			o.Rows = append(o.Rows, row)
		} else {
			lost++
		}
	}
	b.missing(o, missing, lost)
}

type missingCell struct {
	column *Column
	row    int
}

// missing reports the values that a statement uses and that are not there.
func (b *builder) missing(o *Observation, cells []missingCell, rows int) {
	if len(cells) == 0 {
		return
	}
	verb := "are"
	if len(cells) == 1 {
		verb = "is"
	}
	f := b.stop(ValueMissing, o.Span, "%s that this statement uses %s missing, in %s of its %s.", counted(len(cells), "value"), verb, counted(rows, "row"), counted(rows+len(o.Rows), "row"))
	if rows > 0 {
		f.Notes = append(f.Notes, "Say which rows are meant with `only where …`, or complete the data: leaving rows out is a choice that belongs in the model. What follows is about the complete rows.")
	}
	for i, c := range cells {
		if i == 3 {
			break
		}
		f.Related = append(f.Related, cell(c.column, c.row, b.m.File.Path, "missing here"))
	}
}

// cell points at a cell of a column.
func cell(c *Column, row int, model, message string) diag.Related {
	if c.Spans != nil && row < len(c.Spans) {
		return diag.Related{Path: model, Span: c.Spans[row], Message: message}
	}
	if c.Lines != nil && c.Table != nil && row < len(c.Lines) {
		return diag.Related{Path: c.Table.FilePath, Row: int(c.Lines[row]), Column: c.Index + 1, Message: message}
	}
	return diag.Related{Path: model, Span: c.Span, Message: message}
}

// place is the span of an expression, or of the statement when it has none.
func place(e Expr, otherwise source.Span) source.Span {
	if e == nil || e.Place().Empty() {
		return otherwise
	}
	return e.Place()
}
