package model

import (
	"errors"

	"wellposed/parser/diag"
	"wellposed/parser/source"
)

// This file checks that the expressions of a statement fit its rows: that
// indices are levels, columns hold numbers, conditions can be decided, and an
// unknown with components is not taken for one number.

// expressions lists everything that an observation is made of but its law.
func (o *Observation) expressions() []Expr {
	list := append([]Expr{}, o.What...)
	for _, e := range []Expr{o.Low, o.High, o.N, o.Mean, o.SD, o.Right, o.Left, o.Weight} {
		if e != nil {
			list = append(list, e)
		}
	}
	if o.Truncated != nil {
		list = append(list, o.Truncated.expressions()...)
	}
	return list
}

func (r *Range) expressions() []Expr {
	var list []Expr
	for _, e := range []Expr{r.Low, r.High} {
		if e != nil {
			list = append(list, e)
		}
	}
	return list
}

// expressions lists the arguments of a law and its parts, in the order of the
// parametrisation.
func (d *Dist) expressions() []Expr {
	if d == nil {
		return nil
	}
	var list []Expr
	if d.Form < len(d.Spec.Forms) {
		for _, p := range d.Spec.Forms[d.Form] {
			if e := d.Args[p.Label]; e != nil {
				list = append(list, e)
			}
		}
	}
	for _, p := range d.Parts {
		list = append(list, p.Weight)
		list = append(list, p.Dist.expressions()...)
	}
	return list
}

// fits checks an observation against its rows; false when something does not fit.
func (b *builder) fits(o *Observation) bool {
	before := len(b.m.Problems)
	b.wholes(o.Dist, o.Table, nil)
	for _, e := range o.expressions() {
		b.whole(e, o.Table, nil)
	}
	asNumbers := append(o.Dist.expressions(), o.Low, o.High, o.N, o.Mean, o.SD, o.Weight)
	if o.numeric() {
		asNumbers = append(asNumbers, o.What...)
	}
	if o.Truncated != nil {
		asNumbers = append(asNumbers, o.Truncated.expressions()...)
	}
	b.numbers(asNumbers, o.Rows)
	b.indices(append(o.expressions(), o.Dist.expressions()...), o.Rows)
	for _, e := range []Expr{o.Right, o.Left} {
		b.decidable(e, o.Rows)
	}
	b.weights(o)
	return len(b.m.Problems) == before
}

// wholes reports unknowns with components that stand where one number must.
// like holds the columns for whose combinations an unknown may be whole: the
// population model of one varying effect may use another of the same groups.
func (b *builder) wholes(d *Dist, table *Table, like []*Column) {
	if d == nil {
		return
	}
	if vectorLaw(d.Spec) {
		return
	}
	for _, e := range (&Dist{Spec: d.Spec, Form: d.Form, Args: d.Args}).expressions() {
		b.whole(e, table, like)
	}
	for _, p := range d.Parts {
		b.whole(p.Weight, table, like)
		b.wholes(p.Dist, table, like)
	}
}

func (b *builder) whole(e Expr, table *Table, like []*Column) {
	switch e := e.(type) {
	case *UnknownRef:
		u := e.Unknown
		if e.Which != Whole || u.Scalar() || u.lost || sameColumns(u.Per, like) {
			return
		}
		b.notWhole(e, table)
	case *LetRef:
		b.whole(e.Let.Value, table, like)
	case *Op:
		for _, a := range e.Args {
			b.whole(a, table, like)
		}
	case *Vector:
		for _, a := range e.Items {
			b.whole(a, table, like)
		}
	case *Call:
		if gathers(e.Func, len(e.Args)) || e.Func == "linear" || e.Func == "det" {
			return
		}
		for _, a := range e.Args {
			b.whole(a, table, like)
		}
	}
}

func sameColumns(a, b []*Column) bool {
	if len(a) == 0 || len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i] != b[i] {
			return false
		}
	}
	return true
}

// notWhole says how the components of an unknown are meant to be named.
func (b *builder) notWhole(e *UnknownRef, table *Table) {
	u := e.Unknown
	insert := ""
	var way string
	switch {
	case len(u.For) > 0:
		way = "`linear(" + u.Name + ")` is the sum of its coefficients times their columns"
	case u.Either || len(u.Per) == 0:
		way = "say which, as in `" + u.Name + "[" + label(u, 0) + "]`"
		if u.Either {
			way = "say which, as in `" + u.Name + "[" + u.Per[0].Name + "]`"
		}
	default:
		names := ""
		for i, c := range u.Per {
			if i > 0 {
				names += ", "
			}
			names += columnText(c)
		}
		insert = "[" + names + "]"
		way = "say which, as in `" + u.Name + insert + "`"
	}
	f := b.stop(DoesNotFit, e.Span, "%s has %s, and one number must stand here; %s.", u.Name, counted(u.Components(), "component"), way)
	f.Target = u.Name
	f.Related = append(f.Related, diag.Related{Path: b.m.File.Path, Span: u.Span, Message: "declared here"})
	if insert != "" && u.Per[0].Table == table {
		f.Fixes = append(f.Fixes, diag.Fix{Title: "Write " + u.Name + insert, Grade: diag.ChangesPosterior, Edits: []diag.Edit{{
			Path: b.m.File.Path, Span: source.Span{Start: e.Span.End, End: e.Span.End}, Text: insert}}})
	}
}

// numbers reports columns that stand for a number and do not hold numbers in
// the rows used.
func (b *builder) numbers(list []Expr, rows []int) {
	seen := map[*Column]bool{}
	var visit func(e Expr)
	visit = func(e Expr) {
		switch e := e.(type) {
		case *ColumnRef:
			c := e.Column
			if c.Numeric || seen[c] || c.Awaited {
				return
			}
			seen[c] = true
			b.notNumbers(e, rows)
		case *LetRef:
			visit(e.Let.Value)
		case *Vector:
			for _, a := range e.Items {
				visit(a)
			}
		case *Call:
			if e.Func == "length" {
				return
			}
			for _, a := range e.Args {
				visit(a)
			}
		case *Op:
			switch e.Op {
			case "==", "!=":
				if asLevels(e.Args[0], e.Args[1]) {
					return
				}
			}
			for _, a := range e.Args {
				visit(a)
			}
		}
	}
	for _, e := range list {
		if e != nil {
			visit(e)
		}
	}
}

func (b *builder) notNumbers(e *ColumnRef, rows []int) {
	c := e.Column
	var bad []int
	total := 0
	for _, row := range rows {
		if row < c.Rows() && !c.missing(row) && c.Exact(row) == nil {
			if total++; len(bad) < 3 {
				bad = append(bad, row)
			}
		}
	}
	if total == 0 {
		return
	}
	f := b.stop(DoesNotFit, e.Span, "%s must hold numbers here; %s not, the first of them %q.", c.Name, held(total), clip(c.Texts[bad[0]]))
	f.Notes = append(f.Notes, "An unknown with one component for each level is declared `unknown gamma per "+c.Name+" : effect`.")
	for i, row := range bad {
		message := "and here"
		if i == 0 {
			message = "the first that is no number"
		}
		f.Related = append(f.Related, cell(c, row, b.m.File.Path, message))
	}
}

func held(n int) string {
	if n == 1 {
		return "1 cell does"
	}
	return counted(n, "cell") + " do"
}

// indices reports rows whose levels are none of the unknown's.
func (b *builder) indices(list []Expr, rows []int) {
	type place struct {
		u  *Unknown
		at source.Span
	}
	seen := map[place]bool{}
	for _, e := range list {
		Walk(e, func(e Expr) {
			ref, ok := e.(*UnknownRef)
			if !ok || ref.Which != ByRow || seen[place{ref.Unknown, ref.Span}] {
				return
			}
			seen[place{ref.Unknown, ref.Span}] = true
			for _, row := range rows {
				text, ok := rowLabel(ref.By, row)
				if !ok || ref.Unknown.ComponentOf(ref.By, row) >= 0 {
					continue
				}
				f := b.stop(NotALevel, ref.Span, "%s has no component for %q, which row %d of %s holds.", ref.Unknown.Name, clip(text), row+1, ref.By[0].Name)
				f.Notes = append(f.Notes, "It has "+listed(ref.Unknown.Levels)+".")
				f.Related = append(f.Related, cell(ref.By[0], row, b.m.File.Path, "this level"))
				return
			}
		})
	}
}

// decidable evaluates a condition in all rows.
func (b *builder) decidable(e Expr, rows []int) {
	if e == nil {
		return
	}
	if touched := UnknownsIn(e); len(touched) > 0 {
		b.stop(DoesNotFit, e.Place(), "%s is an unknown; a condition on rows must be on data.", touched[0].Name)
		return
	}
	for _, row := range rows {
		_, err := Condition(e, row)
		if err == nil {
			continue
		}
		if waits(e) {
			return
		}
		b.stop(DoesNotFit, e.Place(), "The condition can't be decided in row %d: %v.", row+1, err)
		return
	}
}

// waits reports whether an expression uses something that is awaited.
func waits(list ...Expr) bool {
	found := false
	for _, e := range list {
		Walk(e, func(e Expr) {
			switch e := e.(type) {
			case *GivenRef:
				found = found || e.Given.Awaited
			case *ColumnRef:
				found = found || e.Column.Awaited
			}
		})
	}
	return found
}

// weights reports weights below zero and weights that are unknown.
func (b *builder) weights(o *Observation) {
	if o.Weight == nil {
		return
	}
	if touched := UnknownsIn(o.Weight); len(touched) > 0 {
		b.stop(DoesNotFit, o.Weight.Place(), "%s is an unknown; the weight of a row must be known.", touched[0].Name)
		return
	}
	for _, row := range o.Rows {
		x, err := EvalFloat(o.Weight, row)
		var gone *MissingError
		if err != nil && (errors.As(err, &gone) || waits(o.Weight)) {
			continue
		}
		if err != nil {
			b.stop(DoesNotFit, o.Weight.Place(), "The weight has no value in row %d: %v.", row+1, err)
			return
		}
		if !(x >= 0) {
			f := b.stop(ParameterOutside, o.Weight.Place(), "The weight of row %d is below 0; a weight says how many times a row counts.", row+1)
			if c, ok := o.Weight.(*ColumnRef); ok {
				f.Related = append(f.Related, cell(c.Column, row, b.m.File.Path, "this weight"))
			}
			return
		}
	}
}

// steady checks that what a population model uses has one value in each group.
func (b *builder) steady(p *Population, columns []*Column) {
	u := p.Unknown
	if len(u.Per) == 0 {
		return
	}
	first := make([]int, u.Components())
	for i := range first {
		first[i] = -1
	}
	for _, c := range columns {
		if c.Table != u.Per[0].Table || c.Rows() != u.Per[0].Rows() {
			b.stop(TwoTables, p.Dist.Span, "%s varies across %s, whose rows have nothing to do with those of %s.", u.Name, perText(u), c.Name)
			return
		}
	}
	for row := range u.Per[0].Rows() {
		k := u.ComponentOf(u.Per, row)
		if k < 0 {
			continue
		}
		if first[k] < 0 {
			first[k] = row
		}
		for _, c := range columns {
			if c.missing(row) {
				f := b.stop(ValueMissing, p.Dist.Span, "The population model of %s uses a value of %s that is missing.", u.Name, c.Name)
				f.Related = append(f.Related, cell(c, row, b.m.File.Path, "missing here"))
				return
			}
			if c.Texts[row] == c.Texts[first[k]] {
				continue
			}
			x, y := c.Exact(row), c.Exact(first[k])
			if x != nil && y != nil && x.Cmp(y) == 0 {
				continue
			}
			f := b.stop(DoesNotFit, p.Dist.Span, "%s has one value for each %s, but %s differs between the rows of %q.", u.Name, perText(u), c.Name, clip(u.Levels[k]))
			f.Related = append(f.Related, cell(c, first[k], b.m.File.Path, "one value"), cell(c, row, b.m.File.Path, "another one"))
			return
		}
	}
}
