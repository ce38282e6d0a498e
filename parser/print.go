package parser

import (
	"strings"

	"wellposed/grammar"
)

// Print spells an expression or a distribution as the formatter does, with the
// brackets of the tree and those that its shape needs. Reading the result gives
// the same tree, apart from brackets that were added.
func Print(e interface {
	Span() (grammar.Mark, grammar.Mark)
}) string {
	var p printer
	switch e := e.(type) {
	case nil:
	case *grammar.Dist:
		p.dist(e)
	case grammar.Expr:
		p.expr(e, 0)
	}
	return p.String()
}

type printer struct{ strings.Builder }

func (p *printer) put(parts ...string) {
	for _, s := range parts {
		p.WriteString(s)
	}
}

// binds is how tight an expression holds together.
func binds(e grammar.Expr) int {
	switch e := e.(type) {
	case *grammar.Unary:
		if e.Op == "not" {
			return strengthNot
		}
		return strengthMinus
	case *grammar.Binary:
		switch e.Op {
		case "or":
			return strengthOr
		case "and":
			if e.Chained {
				return strengthCompare
			}
			return strengthAnd
		case "+", "-":
			return strengthSum
		case "*", "/":
			return strengthProduct
		case "^":
			return strengthPower
		}
		return strengthCompare
	}
	return strengthPower + 1
}

// expr prints an expression where one that binds less than `least` needs
// brackets.
func (p *printer) expr(e grammar.Expr, least int) {
	if e == nil {
		return
	}
	if binds(e) < least {
		p.put("(")
		defer p.put(")")
	}
	switch e := e.(type) {
	case *grammar.Number:
		p.put(e.Text)
	case *grammar.Quote:
		p.put(e.Quoted)
	case *grammar.Ident:
		if e.Table != "" {
			p.put(e.Table, ".")
		}
		p.put(e.Text)
	case *grammar.Index:
		p.expr(e.Of, 0)
		p.list("[", e.By, "]")
	case *grammar.Call:
		p.put(e.Name)
		p.args(e.Args)
	case *grammar.Unary:
		if e.Op == "not" {
			p.put("not ")
			p.expr(e.X, strengthNot)
		} else {
			p.put(e.Op)
			p.expr(e.X, strengthMinus)
		}
	case *grammar.Binary:
		p.binary(e)
	case *grammar.Paren:
		p.put("(")
		p.expr(e.X, 0)
		p.put(")")
	case *grammar.Tuple:
		p.list("(", e.Items, ")")
	case *grammar.List:
		p.list("[", e.Items, "]")
	}
}

func (p *printer) binary(e *grammar.Binary) {
	if e.Chained {
		if next, ok := e.Y.(*grammar.Binary); ok {
			p.expr(e.X, strengthCompare)
			p.put(" ", next.Op, " ")
			p.expr(next.Y, strengthSum)
			return
		}
	}
	s := binds(e)
	left, right := s, s+1
	switch s {
	case strengthPower: // associates to the right, takes a signed exponent
		left, right = strengthPower+1, strengthMinus
	case strengthCompare:
		left = strengthSum
	}
	p.expr(e.X, left)
	switch {
	case e.Op == "^", e.Op == "/" && isFraction(e):
		p.put(e.Op)
	default:
		p.put(" ", e.Op, " ")
	}
	p.expr(e.Y, right)
}

// isFraction reports whether a quotient is written without blanks, as 1/2,
// −5/2 and 1/sigma are.
func isFraction(e *grammar.Binary) bool {
	x := e.X
	if u, ok := x.(*grammar.Unary); ok {
		x = u.X
	}
	if _, ok := x.(*grammar.Number); !ok || e.Op != "/" {
		return false
	}
	switch e.Y.(type) {
	case *grammar.Number, *grammar.Ident:
		return true
	}
	return false
}

func (p *printer) list(open string, items []grammar.Expr, close string) {
	p.put(open)
	for i, x := range items {
		if i > 0 {
			p.put(", ")
		}
		p.expr(x, 0)
	}
	p.put(close)
}

func (p *printer) args(args []*grammar.Arg) {
	p.put("(")
	for i, a := range args {
		if i > 0 {
			p.put(", ")
		}
		if a.Label != "" {
			p.put(a.Label, " = ")
		}
		if a.Dist != nil {
			if a.Weight != nil {
				p.expr(a.Weight, 0)
				p.put(": ")
			}
			p.dist(a.Dist)
			continue
		}
		p.expr(a.Value, 0)
	}
	p.put(")")
}

func (p *printer) dist(d *grammar.Dist) {
	name := d.Name
	if spec := grammar.FindDistribution(name); spec != nil {
		name = spec.Name
	}
	p.put(name)
	p.args(d.Args)
}
