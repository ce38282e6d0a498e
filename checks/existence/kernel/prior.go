package kernel

import (
	"math/big"

	"wellposed/checks/existence/order"
	"wellposed/parser/model"
)

// Prior is the log kernel of a prior for one component of its unknown, or for
// a joint prior of scalars as a whole (component 0). A law stated on a
// transform carries the Jacobian.
func (e *Env) Prior(p *model.Prior, component int) order.Value {
	at := func(x model.Expr) model.Expr { return x }
	env := e
	if len(p.About) == 1 && !p.About[0].Scalar() {
		// The statement speaks of each component.
		u := p.About[0]
		env = &Env{index: e.index, Bind: func(v Variable) order.Value { return e.Bind(v) }}
		at = func(x model.Expr) model.Expr { return focus(x, u, component) }
	}
	switch p.Form {
	case model.ByRule:
		refuse("a prior that its rule has yet to derive")
	case model.ByKernel:
		return order.Add(order.Log(env.Eval(at(p.Kernel), 0)), env.logSlope(p, at))
	case model.ByFlat:
		return env.logSlope(p, at)
	}
	if v, ok := p.Target.(*model.Vector); ok {
		total := order.Number(0)
		for _, item := range v.Items {
			total = order.Add(total, env.Density(p.Dist, env.Eval(at(item), 0), 0))
		}
		return total
	}
	v := order.Add(env.Density(p.Dist, env.Eval(at(p.Target), 0), 0), env.logSlope(p, at))
	if p.Truncated != nil && parametric(p.Dist) {
		v = order.Sub(v, order.Log(env.inside(p.Dist, p.Truncated, 0)))
	}
	return v
}

// parametric reports a law whose parameters hold unknowns, so that the mass
// inside a truncation is not a constant.
func parametric(d *model.Dist) bool {
	for _, x := range d.Args {
		if holds(x) {
			return true
		}
	}
	for _, p := range d.Parts {
		if holds(p.Weight) || parametric(p.Dist) {
			return true
		}
	}
	return false
}

// focus replaces references to the whole of an unknown by one component.
func focus(x model.Expr, u *model.Unknown, component int) model.Expr {
	all := func(xs []model.Expr) []model.Expr {
		out := make([]model.Expr, len(xs))
		for i, a := range xs {
			out[i] = focus(a, u, component)
		}
		return out
	}
	switch x := x.(type) {
	case *model.UnknownRef:
		if x.Unknown == u && x.Which == model.Whole {
			return &model.UnknownRef{Span: x.Span, Unknown: u, Which: model.Fixed, Component: component}
		}
	case *model.Op:
		return &model.Op{Span: x.Span, Op: x.Op, Args: all(x.Args)}
	case *model.Call:
		return &model.Call{Span: x.Span, Func: x.Func, Args: all(x.Args)}
	case *model.Vector:
		return &model.Vector{Span: x.Span, Items: all(x.Items)}
	case *model.LetRef:
		return focus(x.Let.Value, u, component)
	}
	return x
}

// logSlope is log |d target / d unknown|; 0 for a target that is the unknown.
func (e *Env) logSlope(p *model.Prior, at func(model.Expr) model.Expr) order.Value {
	if _, ok := p.Target.(*model.Vector); ok {
		return order.Number(0)
	}
	t := at(p.Target)
	if _, ok := t.(*model.UnknownRef); ok {
		return order.Number(0)
	}
	if len(p.About) != 1 {
		refuse("a prior on a function of several unknowns")
	}
	return e.LogDerivative(t)
}

// holds reports whether an expression mentions an unknown.
func holds(x model.Expr) bool {
	switch x := x.(type) {
	case *model.UnknownRef:
		return true
	case *model.Op:
		for _, a := range x.Args {
			if holds(a) {
				return true
			}
		}
	case *model.Call:
		for _, a := range x.Args {
			if holds(a) {
				return true
			}
		}
	case *model.LetRef:
		return holds(x.Let.Value)
	}
	return false
}

// LogDerivative is log |dx/du| of an expression of one unknown component,
// following a chain of functions exactly, up to constants.
func (e *Env) LogDerivative(x model.Expr) order.Value {
	switch x := x.(type) {
	case *model.UnknownRef:
		return order.Number(0)
	case *model.LetRef:
		return e.LogDerivative(x.Let.Value)
	case *model.Call:
		if len(x.Args) == 1 {
			if slope := logSlopes[x.Func]; slope != nil {
				return order.Add(slope(e.Eval(x.Args[0], 0)), e.LogDerivative(x.Args[0]))
			}
		}
	case *model.Op:
		if len(x.Args) == 1 {
			return e.LogDerivative(x.Args[0])
		}
		a, b := holds(x.Args[0]), holds(x.Args[1])
		if a != b {
			inner, other := x.Args[0], x.Args[1]
			if b {
				inner, other = other, inner
			}
			v := func() order.Value { return order.Log(order.Abs(e.Eval(inner, 0))) }
			switch {
			case x.Op == "+" || x.Op == "-":
				return e.LogDerivative(inner)
			case x.Op == "*" || x.Op == "/" && a:
				return e.LogDerivative(inner)
			case x.Op == "/":
				return order.Add(order.Times(v(), big.NewRat(-2, 1)), e.LogDerivative(inner))
			case x.Op == "^" && a:
				if q := order.Exact(e.Eval(other, 0)); q != nil && q.Sign() != 0 {
					return order.Add(order.Times(v(), new(big.Rat).Sub(q, big.NewRat(1, 1))), e.LogDerivative(inner))
				}
			case x.Op == "^" && b:
				return order.Add(order.Mul(e.Eval(inner, 0), order.Log(e.Eval(other, 0))), e.LogDerivative(inner))
			}
		}
		// odds written out, and other quotients: the derivative itself.
		return order.Log(order.Abs(e.derivative(x)))
	}
	refuse("the derivative of this expression")
	return nil
}

// derivative of sums, products and quotients.
func (e *Env) derivative(x model.Expr) order.Value {
	if !holds(x) {
		return order.Number(0)
	}
	switch x := x.(type) {
	case *model.UnknownRef:
		return order.Number(1)
	case *model.LetRef:
		return e.derivative(x.Let.Value)
	case *model.Op:
		if len(x.Args) == 1 {
			return order.Neg(e.derivative(x.Args[0]))
		}
		da, db := e.derivative(x.Args[0]), e.derivative(x.Args[1])
		a, b := e.Eval(x.Args[0], 0), e.Eval(x.Args[1], 0)
		switch x.Op {
		case "+":
			return order.Add(da, db)
		case "-":
			return order.Sub(da, db)
		case "*":
			return order.Add(order.Mul(da, b), order.Mul(a, db))
		case "/":
			return order.Div(order.Sub(order.Mul(da, b), order.Mul(a, db)), order.Square(b))
		case "^":
			if q := order.Exact(b); q != nil {
				return order.Mul(order.Times(order.Power(a, new(big.Rat).Sub(q, big.NewRat(1, 1))), q), da)
			}
		}
	case *model.Call:
		if slope := slopes[x.Func]; slope != nil && len(x.Args) == 1 {
			return order.Mul(slope(e.Eval(x.Args[0], 0)), e.derivative(x.Args[0]))
		}
	}
	refuse("the derivative of this expression")
	return nil
}

var one = order.Number(1)

// logSlopes are logarithms of |f′|, up to constants.
var logSlopes = map[string]func(order.Value) order.Value{
	"log":  func(v order.Value) order.Value { return order.Neg(order.Log(v)) },
	"exp":  func(v order.Value) order.Value { return v },
	"sqrt": func(v order.Value) order.Value { return order.Times(order.Log(v), big.NewRat(-1, 2)) },
	"abs":  func(order.Value) order.Value { return order.Number(0) },
	"logit": func(v order.Value) order.Value {
		return order.Neg(order.Add(order.Log(v), order.Log(order.Sub(one, v))))
	},
	"expit": func(v order.Value) order.Value {
		return order.Add(order.Log(order.Expit(v)), order.Log(order.Expit(order.Neg(v))))
	},
	"probit": order.HalfProbitSquare,
	"Phi":    func(v order.Value) order.Value { return order.Times(order.Square(v), big.NewRat(-1, 2)) },
	"odds":   func(v order.Value) order.Value { return order.Times(order.Log(order.Sub(one, v)), big.NewRat(-2, 1)) },
	"cloglog": func(v order.Value) order.Value {
		q := order.Log(order.Sub(one, v))
		return order.Neg(order.Add(q, order.Log(order.Neg(q))))
	},
	"atan": func(v order.Value) order.Value { return order.Neg(order.Log(order.Add(one, order.Square(v)))) },
	"atanh": func(v order.Value) order.Value {
		return order.Neg(order.Add(order.Log(order.Sub(one, v)), order.Log(order.Add(one, v))))
	},
	"tanh": func(v order.Value) order.Value {
		t := order.Tanh(v)
		return order.Add(order.Log(order.Sub(one, t)), order.Log(order.Add(one, t)))
	},
}

var slopes = map[string]func(order.Value) order.Value{
	"log": order.Recip,
	"exp": order.Exp,
	"sqrt": func(v order.Value) order.Value {
		return order.Times(order.Power(v, big.NewRat(-1, 2)), big.NewRat(1, 2))
	},
}
