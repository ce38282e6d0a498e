// Package kernel evaluates the expressions and factors of a model as order
// values: it turns "the posterior density up to a constant" into an expansion
// at an end of the support, or into a value over an interval.
package kernel

import (
	"math/big"
	"strings"

	"wellposed/checks/existence/law"
	"wellposed/checks/existence/order"
	"wellposed/parser/model"
)

// Variable is one component of an unknown.
type Variable struct {
	Unknown   *model.Unknown
	Component int
}

// Env evaluates expressions of one analysis. Bind gives the value of each
// component that is not fixed at zero.
type Env struct {
	Bind func(Variable) order.Value

	index map[*model.Unknown]map[string]int
}

// NewEnv makes an environment.
func NewEnv(bind func(Variable) order.Value) *Env {
	return &Env{Bind: bind, index: map[*model.Unknown]map[string]int{}}
}

func refuse(reason string) { law.Refuse(reason) }

func (e *Env) value(u *model.Unknown, component int) order.Value {
	if component == u.Relative && u.Relative >= 0 && !u.Scalar() {
		return order.Number(0)
	}
	return e.Bind(Variable{u, component})
}

// ComponentOf finds the component of a row through columns.
func (e *Env) ComponentOf(u *model.Unknown, by []*model.Column, row int) int {
	m := e.index[u]
	if m == nil {
		m = map[string]int{}
		for i, l := range u.Levels {
			m[l] = i
		}
		e.index[u] = m
	}
	var label string
	if len(by) == 1 {
		label = by[0].Texts[row]
	} else {
		parts := make([]string, len(by))
		for i, c := range by {
			parts[i] = c.Texts[row]
		}
		label = strings.Join(parts, " / ")
	}
	if i, ok := m[label]; ok {
		return i
	}
	refuse("a level has no component")
	return 0
}

// refComponent is the single component that a reference means at a row; −1 for
// a whole vector.
func (e *Env) refComponent(r *model.UnknownRef, row int) int {
	switch r.Which {
	case model.Fixed:
		return r.Component
	case model.ByRow:
		return e.ComponentOf(r.Unknown, r.By, row)
	}
	if len(r.Unknown.Levels) <= 1 && r.Unknown.Size == 0 {
		return 0
	}
	return -1
}

// Eval is the value of an expression at a row.
func (e *Env) Eval(x model.Expr, row int) order.Value {
	switch x := x.(type) {
	case *model.Number:
		return order.Const(x.Value)
	case *model.Constant:
		if x.Name == "pi" {
			return order.Pi()
		}
		refuse("an infinite constant in an expression")
	case *model.GivenRef:
		if x.Given.Value == nil {
			refuse("a value that is not there yet")
		}
		return order.Const(x.Given.Value)
	case *model.ColumnRef:
		r := x.Column.Exact(row)
		if r == nil {
			refuse("a cell that is no number")
		}
		return order.Const(r)
	case *model.UnknownRef:
		c := e.refComponent(x, row)
		if c < 0 {
			refuse("a vector where a number is expected")
		}
		return e.value(x.Unknown, c)
	case *model.LetRef:
		return e.Eval(x.Let.Value, row)
	case *model.Op:
		return e.op(x, row)
	case *model.Call:
		return e.call(x, row)
	}
	refuse("an expression of this form")
	return nil
}

func (e *Env) op(x *model.Op, row int) order.Value {
	a := e.Eval(x.Args[0], row)
	if x.Op == "neg" || len(x.Args) == 1 && x.Op == "-" {
		return order.Neg(a)
	}
	b := e.Eval(x.Args[1], row)
	switch x.Op {
	case "+":
		return order.Add(a, b)
	case "-":
		return order.Sub(a, b)
	case "*":
		return order.Mul(a, b)
	case "/":
		return order.Div(a, b)
	case "^":
		return order.Pow(a, b)
	}
	refuse("a condition where a number is expected")
	return nil
}

func (e *Env) call(x *model.Call, row int) order.Value {
	switch x.Func {
	case "linear":
		return e.linear(x, row)
	case "sum", "mean":
		return e.sum(x, row)
	case "previous":
		if row == 0 {
			refuse("the first row has no row before it")
		}
		return e.Eval(x.Args[0], row-1)
	case "min", "max":
		if len(x.Args) > 1 {
			v := e.Eval(x.Args[0], row)
			for _, a := range x.Args[1:] {
				w := e.Eval(a, row)
				less := order.Sign(order.Sub(w, v)) < 0
				if less == (x.Func == "min") {
					v = w
				}
			}
			return v
		}
	}
	f := functions[x.Func]
	if f == nil || len(x.Args) != 1 {
		refuse("the function " + x.Func + " has no expansion here")
	}
	return f(e.Eval(x.Args[0], row))
}

var functions = map[string]func(order.Value) order.Value{
	"log": order.Log, "exp": order.Exp, "sqrt": order.Sqrt, "abs": order.Abs,
	"logit": order.Logit, "expit": order.Expit, "probit": order.Probit, "Phi": order.Phi,
	"cloglog": order.Cloglog, "odds": order.Odds, "atan": order.Atan, "tanh": order.Tanh,
	"atanh": order.Atanh, "log-gamma": order.LogGamma,
}

func (e *Env) linear(x *model.Call, row int) order.Value {
	r, ok := x.Args[0].(*model.UnknownRef)
	if !ok {
		refuse("linear() of something that is no unknown")
	}
	total := order.Number(0)
	for c, col := range r.Unknown.For {
		cell := col.Exact(row)
		if cell == nil {
			refuse("a cell that is no number")
		}
		if cell.Sign() != 0 {
			total = order.Add(total, order.Times(e.value(r.Unknown, c), cell))
		}
	}
	return total
}

func (e *Env) sum(x *model.Call, row int) order.Value {
	total, n := order.Number(0), int64(0)
	add := func(v order.Value) { total, n = order.Add(total, v), n+1 }
	switch a := x.Args[0].(type) {
	case *model.UnknownRef:
		if c := e.refComponent(a, row); c >= 0 {
			refuse("a sum over rows of an unknown")
		}
		for c := range a.Unknown.Levels {
			add(e.value(a.Unknown, c))
		}
	case *model.Vector:
		for _, i := range a.Items {
			add(e.Eval(i, row))
		}
	case *model.ColumnRef:
		for i := 0; i < a.Column.Rows(); i++ {
			add(e.Eval(a, i))
		}
	default:
		refuse("a sum of this form")
	}
	if x.Func == "mean" && n > 0 {
		return order.Times(total, big.NewRat(1, n))
	}
	return total
}

// Constant is the exact value of an expression without unknowns, nil when it
// has none.
func Constant(x model.Expr, row int) *big.Rat {
	switch x := x.(type) {
	case nil:
		return nil
	case *model.Number:
		return x.Value
	case *model.GivenRef:
		return x.Given.Value
	case *model.ColumnRef:
		switch x.Column.Texts[row] {
		case "0":
			return ratZero
		case "1":
			return ratOne
		}
		return x.Column.Exact(row)
	}
	var r *big.Rat
	e := NewEnv(func(Variable) order.Value { refuse("an unknown"); return nil })
	if order.Try(func() { r = order.Exact(e.Eval(x, row)) }) != nil {
		return nil
	}
	return r
}

var ratZero, ratOne = new(big.Rat), big.NewRat(1, 1)

// Enclose bounds the value of an expression without unknowns.
func Enclose(x model.Expr, row int) (lo, hi float64, ok bool) {
	e := NewEnv(func(Variable) order.Value { refuse("an unknown"); return nil })
	err := order.Try(func() { lo, hi, ok = order.Enclosure(e.Eval(x, row)) })
	return lo, hi, ok && err == nil
}

// Condition evaluates a condition on known values; ok is false when it can't.
func Condition(x model.Expr, row int) (holds, ok bool) {
	o, isOp := x.(*model.Op)
	if !isOp {
		return false, false
	}
	switch o.Op {
	case "and", "or":
		a, oka := Condition(o.Args[0], row)
		b, okb := Condition(o.Args[1], row)
		if !oka || !okb {
			return false, false
		}
		if o.Op == "and" {
			return a && b, true
		}
		return a || b, true
	case "not":
		a, oka := Condition(o.Args[0], row)
		return !a, oka
	}
	if len(o.Args) != 2 {
		return false, false
	}
	if s, t, isText := levels(o.Args[0], o.Args[1], row); isText {
		switch o.Op {
		case "==":
			return s == t, true
		case "!=":
			return s != t, true
		}
		return false, false
	}
	a, b := Constant(o.Args[0], row), Constant(o.Args[1], row)
	if a == nil || b == nil {
		return false, false
	}
	c := a.Cmp(b)
	switch o.Op {
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

// levels reads both sides of a comparison as texts when one is a quoted level.
func levels(a, b model.Expr, row int) (string, string, bool) {
	text := func(x model.Expr) (string, bool, bool) {
		switch x := x.(type) {
		case *model.Level:
			return x.Text, true, true
		case *model.ColumnRef:
			return x.Column.Texts[row], false, true
		}
		return "", false, false
	}
	s, q, ok := text(a)
	t, r, ok2 := text(b)
	return s, t, ok && ok2 && (q || r)
}

// Name is the component in the model's own words: "p", "p[north]".
func (v Variable) Name() string {
	if v.Unknown.Scalar() || v.Component >= len(v.Unknown.Levels) {
		return v.Unknown.Name
	}
	return v.Unknown.Name + "[" + v.Unknown.Levels[v.Component] + "]"
}
