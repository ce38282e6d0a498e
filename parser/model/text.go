package model

import (
	"strconv"
	"strings"
)

// Binding strengths, as in the grammar.
var strength = map[string]int{
	"or": 1, "and": 2, "not": 3, "==": 4, "!=": 4, "<": 4, "<=": 4, ">": 4, ">=": 4,
	"+": 5, "-": 5, "*": 6, "/": 6, "neg": 7, "^": 8,
}

// write writes an expression; it is put in brackets when it binds less strongly
// than its surroundings.
func write(b *strings.Builder, e Expr, around int) {
	switch e := e.(type) {
	case nil:
		b.WriteByte('?')
	case *Number:
		text := decimalText(e.Value)
		// A fraction or a sign binds as the operator it is written with.
		own := 9
		if strings.Contains(text, "/") {
			own = strength["/"]
		}
		if strings.HasPrefix(text, "-") {
			own = min(own, strength["neg"])
		}
		if own < around {
			b.WriteString("(" + text + ")")
			return
		}
		b.WriteString(text)
	case *Constant:
		b.WriteString(e.Name)
	case *Level:
		b.WriteString(strconv.Quote(e.Text))
	case *GivenRef:
		b.WriteString(e.Given.Name)
	case *ColumnRef:
		b.WriteString(columnText(e.Column))
	case *LetRef:
		b.WriteString(e.Let.Name)
	case *UnknownRef:
		b.WriteString(e.Unknown.Name)
		switch e.Which {
		case Fixed:
			b.WriteString("[" + label(e.Unknown, e.Component) + "]")
		case ByRow:
			b.WriteByte('[')
			for i, c := range e.By {
				if i > 0 {
					b.WriteString(", ")
				}
				b.WriteString(c.Name)
			}
			b.WriteByte(']')
		}
	case *Call:
		b.WriteString(e.Func)
		writeList(b, e.Args, '(', ')')
	case *Vector:
		writeList(b, e.Items, '(', ')')
	case *Op:
		writeOp(b, e, around)
	}
}

// columnText is a column as the model must write it: with its table where the
// bare name could mean something else.
func columnText(c *Column) string {
	if c.shared && c.Table != nil {
		return c.Table.Name + "." + c.Name
	}
	return c.Name
}

// label is a component's label as an index is written.
func label(u *Unknown, component int) string {
	if component < 0 || component >= len(u.Levels) {
		return "?"
	}
	text := u.Levels[component]
	if isDecimal(text) {
		return text
	}
	return strconv.Quote(text)
}

func writeList(b *strings.Builder, list []Expr, open, close byte) {
	b.WriteByte(open)
	for i, e := range list {
		if i > 0 {
			b.WriteString(", ")
		}
		write(b, e, 0)
	}
	b.WriteByte(close)
}

func writeOp(b *strings.Builder, e *Op, around int) {
	own := strength[e.Op]
	if own < around {
		b.WriteByte('(')
		defer b.WriteByte(')')
	}
	switch {
	case e.Op == "neg" && len(e.Args) == 1:
		b.WriteByte('-')
		write(b, e.Args[0], own)
	case e.Op == "not" && len(e.Args) == 1:
		b.WriteString("not ")
		write(b, e.Args[0], own)
	case len(e.Args) == 2:
		left, right := own, own+1
		if e.Op == "^" { // groups to the right
			left, right = own+1, own
		}
		write(b, e.Args[0], left)
		if e.Op == "^" {
			b.WriteByte('^')
		} else {
			b.WriteString(spaced(e))
		}
		write(b, e.Args[1], right)
	}
}

// DistText writes a distribution in its canonical form.
func DistText(d *Dist) string {
	if d == nil || d.Spec == nil {
		return "?"
	}
	var b strings.Builder
	b.WriteString(d.Spec.Name + "(")
	if d.Spec.Name == "Mixture" {
		for i, p := range d.Parts {
			if i > 0 {
				b.WriteString(", ")
			}
			write(&b, p.Weight, 0)
			b.WriteString(": " + DistText(p.Dist))
		}
		return b.String() + ")"
	}
	some := false
	for _, p := range d.Spec.Forms[d.Form] {
		e := d.Args[p.Label]
		if e == nil {
			continue
		}
		if some {
			b.WriteString(", ")
		}
		some = true
		if p.Named {
			b.WriteString(p.Label + " = ")
		}
		if v, ok := e.(*Vector); ok && p.Variadic {
			for i, item := range v.Items {
				if i > 0 {
					b.WriteString(", ")
				}
				write(&b, item, 0)
			}
			continue
		}
		write(&b, e, 0)
	}
	return b.String() + ")"
}

// rangeText writes the ends of a truncation.
func rangeText(r *Range) string {
	low, high := "-inf", "inf"
	if r.Low != nil {
		low = Text(r.Low)
	}
	if r.High != nil {
		high = Text(r.High)
	}
	return "(" + low + ", " + high + ")"
}

// text writes a prior without its keyword and reasons.
func (p *Prior) text() string {
	target := Text(p.Target)
	switch p.Form {
	case ByDist:
		out := target + " as " + DistText(p.Dist)
		if p.Truncated != nil {
			out += ", truncated to " + rangeText(p.Truncated)
		}
		return out
	case ByFlat:
		return target + " flat"
	case ByKernel:
		return target + " ∝ " + Text(p.Kernel)
	}
	return target + " " + p.Rule.text()
}

func (r *RulePrior) text() string {
	switch r.Name {
	case ReferencePrior:
		var groups []string
		for _, g := range r.Order {
			var names []string
			for _, u := range g {
				names = append(names, u.Name)
			}
			group := strings.Join(names, ", ")
			if len(names) > 1 {
				group = "(" + group + ")"
			}
			groups = append(groups, group)
		}
		return "reference " + strings.Join(groups, " before ")
	case ConstrainedMean:
		return "constrained to mean " + Text(r.Mean)
	}
	return string(r.Name)
}

// spaced is a binary operator with the blanks of the canonical form: none in a
// fraction of two numbers.
func spaced(e *Op) string {
	if e.Op == "/" && isNumber(e.Args[0]) && isNumber(e.Args[1]) {
		return "/"
	}
	return " " + e.Op + " "
}

func isNumber(e Expr) bool {
	if op, ok := e.(*Op); ok && op.Op == "neg" && len(op.Args) == 1 {
		e = op.Args[0]
	}
	_, ok := e.(*Number)
	return ok
}
