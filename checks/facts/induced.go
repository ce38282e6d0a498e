package facts

import (
	"math/big"
	"strings"

	"wellposed/checks/objective"
	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// Induced is what a prior that is flat on its target means on the scale of an
// expression of the same unknown, as a named law or a kernel: flat on p is
// "1/(1 + odds(p))^2" on the odds. It is empty where one of the scales has no
// closed form here.
func (f *Facts) Induced(p *model.Prior, value model.Expr) string {
	if p.Joint || len(p.About) != 1 || !p.About[0].Scalar() {
		return ""
	}
	u := p.About[0]
	from, to := scaleOf(p.Target, u), scaleOf(value, u)
	if from == nil || to == nil {
		return ""
	}
	x := &sy.Symbol{Name: u.Name, Low: u.Support.Low, High: u.Support.High}
	kernel := sy.One
	if from != &identity {
		slope, err := sy.Diff(from.Of(sy.Sym(x)), x)
		if err != nil {
			return ""
		}
		kernel = sy.Abs(slope)
	}
	scale := *to
	if to == &identity {
		scale.Low, scale.High = end(u.Support.Low, "-inf"), end(u.Support.High, "inf")
		scale.ToLow, scale.ToHigh = scale.Low, scale.High
	}
	moved, err := objective.Rescale(kernel, x, &scale)
	if err != nil {
		return ""
	}
	if from.Name == "odds" && to == &identity {
		return "Beta(1, −1)" // (1 − p)^(−2), the improper end of the family
	}
	text := model.Text(value)
	if _, operation := value.(*model.Op); operation {
		text = "(" + text + ")"
	}
	return strings.ReplaceAll(moved.Name, moved.Symbol.Name, text)
}

func end(r *big.Rat, infinite string) string {
	if r == nil {
		return infinite
	}
	return r.RatString()
}

// identity is the unknown's own scale.
var identity = objective.Transform{
	Name: "itself", Of: func(x sy.Expr) sy.Expr { return x }, Back: func(x sy.Expr) sy.Expr { return x },
}

// scaleOf recognises an expression as a scale of an unknown, nil when it is none
// that has a name.
func scaleOf(e model.Expr, u *model.Unknown) *objective.Transform {
	itself := func(e model.Expr) bool {
		ref, ok := e.(*model.UnknownRef)
		return ok && ref.Unknown == u
	}
	switch e := e.(type) {
	case *model.UnknownRef:
		if e.Unknown == u {
			return &identity
		}
	case *model.LetRef:
		if e.Let != nil {
			return scaleOf(e.Let.Value, u)
		}
	case *model.Call:
		if len(e.Args) == 1 && itself(e.Args[0]) {
			return objective.FindTransform(e.Func)
		}
	case *model.Op:
		if len(e.Args) != 2 {
			return nil
		}
		a, b := e.Args[0], e.Args[1]
		switch {
		case e.Op == "^" && itself(a) && isNumber(b, 2):
			return objective.FindTransform("square")
		case e.Op == "^" && itself(a) && isNumber(b, -2):
			return objective.FindTransform("precision")
		case e.Op == "/" && isNumber(a, 1) && itself(b):
			return objective.FindTransform("reciprocal")
		case e.Op == "/" && itself(a):
			if d, ok := b.(*model.Op); ok && d.Op == "-" && len(d.Args) == 2 && isNumber(d.Args[0], 1) && itself(d.Args[1]) {
				return objective.FindTransform("odds")
			}
		}
	}
	return nil
}

func isNumber(e model.Expr, n int64) bool {
	x, err := model.EvalExact(e, 0)
	return err == nil && x.Cmp(big.NewRat(n, 1)) == 0
}
