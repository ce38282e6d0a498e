package objective

import (
	"math/big"

	"wellposed/parser/model"
)

// exactIn is the exact value of a known expression in a row.
func exactIn(e model.Expr, row int) (*big.Rat, bool) {
	switch e := e.(type) {
	case *model.Number:
		return e.Value, true
	case *model.GivenRef:
		return e.Given.Value, e.Given.Value != nil
	case *model.ColumnRef:
		x := e.Column.Exact(row)
		return x, x != nil
	case *model.LetRef:
		return exactIn(e.Let.Value, row)
	case *model.Op:
		args := make([]*big.Rat, len(e.Args))
		for i, a := range e.Args {
			x, ok := exactIn(a, row)
			if !ok {
				return nil, false
			}
			args[i] = x
		}
		r := new(big.Rat)
		switch {
		case e.Op == "neg":
			return r.Neg(args[0]), true
		case len(args) != 2:
			return nil, false
		case e.Op == "+":
			return r.Add(args[0], args[1]), true
		case e.Op == "-":
			return r.Sub(args[0], args[1]), true
		case e.Op == "*":
			return r.Mul(args[0], args[1]), true
		case e.Op == "/" && args[1].Sign() != 0:
			return r.Quo(args[0], args[1]), true
		}
	}
	return nil, false
}

// conditionIn is the truth of a condition on known values in a row.
func conditionIn(e model.Expr, row int) (truth, known bool) {
	op, ok := e.(*model.Op)
	if !ok {
		if l, isLet := e.(*model.LetRef); isLet {
			return conditionIn(l.Let.Value, row)
		}
		return false, false
	}
	switch op.Op {
	case "and", "or":
		for _, a := range op.Args {
			t, ok := conditionIn(a, row)
			if !ok {
				return false, false
			}
			if t == (op.Op == "or") {
				return t, true
			}
		}
		return op.Op == "and", true
	case "not":
		t, ok := conditionIn(op.Args[0], row)
		return !t, ok
	}
	if len(op.Args) != 2 {
		return false, false
	}
	if a, ok := textIn(op.Args[0], row); ok {
		if b, ok := textIn(op.Args[1], row); ok && (op.Op == "==" || op.Op == "!=") {
			_, isLevelA := op.Args[0].(*model.Level)
			_, isLevelB := op.Args[1].(*model.Level)
			if isLevelA || isLevelB {
				return (a == b) == (op.Op == "=="), true
			}
		}
	}
	a, ok := exactIn(op.Args[0], row)
	if !ok {
		return false, false
	}
	b, ok := exactIn(op.Args[1], row)
	if !ok {
		return false, false
	}
	c := a.Cmp(b)
	switch op.Op {
	case "==":
		return c == 0, true
	case "!=":
		return c != 0, true
	case "<":
		return c < 0, true
	case "<=":
		return c <= 0, true
	case ">":
		return c > 0, true
	case ">=":
		return c >= 0, true
	}
	return false, false
}

func textIn(e model.Expr, row int) (string, bool) {
	switch e := e.(type) {
	case *model.Level:
		return e.Text, true
	case *model.ColumnRef:
		if row >= 0 && row < len(e.Column.Texts) {
			return e.Column.Texts[row], true
		}
	}
	return "", false
}
