package objective

import (
	"errors"
	"fmt"
	"strings"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/grammar"
	"wellposed/parser/model"
)

// Transform is a scale that an unknown may be quoted on.
type Transform struct {
	Name string
	// Of is the transform, Back its inverse.
	Of, Back func(sy.Expr) sy.Expr
	// Low and High are the ends of the unknown's support that it needs: "0", "1",
	// "-1", "inf", "-inf".
	Low, High string
	// To are the ends that it maps to.
	ToLow, ToHigh string
}

// Transforms are the scales by name.
var Transforms = []Transform{
	{"odds", sy.Odds, func(x sy.Expr) sy.Expr { return sy.Div(x, sy.Add(sy.One, x)) }, "0", "1", "0", "inf"},
	{"logit", sy.Logit, sy.Expit, "0", "1", "-inf", "inf"},
	{"probit", sy.Probit, sy.Phi, "0", "1", "-inf", "inf"},
	{"cloglog", sy.Cloglog, func(x sy.Expr) sy.Expr { return sy.Sub(sy.One, sy.Exp(sy.Neg(sy.Exp(x)))) }, "0", "1", "-inf", "inf"},
	{"log", sy.Log, sy.Exp, "0", "inf", "-inf", "inf"},
	{"square", sy.Square, sy.Sqrt, "0", "inf", "0", "inf"},
	{"variance", sy.Square, sy.Sqrt, "0", "inf", "0", "inf"},
	{"precision", func(x sy.Expr) sy.Expr { return sy.Inv(sy.Square(x)) }, func(x sy.Expr) sy.Expr { return sy.Inv(sy.Sqrt(x)) }, "0", "inf", "0", "inf"},
	{"sqrt", sy.Sqrt, sy.Square, "0", "inf", "0", "inf"},
	{"sd", sy.Sqrt, sy.Square, "0", "inf", "0", "inf"},
	{"reciprocal", sy.Inv, sy.Inv, "0", "inf", "0", "inf"},
	{"mean", sy.Inv, sy.Inv, "0", "inf", "0", "inf"},
	{"rate", sy.Inv, sy.Inv, "0", "inf", "0", "inf"},
	{"atanh", sy.Atanh, sy.Tanh, "-1", "1", "-inf", "inf"},
	{"exp", sy.Exp, sy.Log, "-inf", "inf", "0", "inf"},
	{"expit", sy.Expit, sy.Logit, "-inf", "inf", "0", "1"},
}

// FindTransform looks a scale up, nil when there is none.
func FindTransform(name string) *Transform {
	for i := range Transforms {
		if strings.EqualFold(Transforms[i].Name, name) {
			return &Transforms[i]
		}
	}
	return nil
}

// TransformNames lists the scales.
func TransformNames() []string {
	out := make([]string, len(Transforms))
	for i, t := range Transforms {
		out[i] = t.Name
	}
	return out
}

// OnScale is a kernel on another scale.
type OnScale struct {
	// Symbol is the quantity on that scale, Kernel its density up to a constant.
	Symbol *sy.Symbol
	Kernel sy.Expr
	// Name is the recognised law or the kernel's text.
	Name string
}

// On gives the kernel of one unknown on another scale.
func (d *Derived) On(name string) (*OnScale, error) {
	t := FindTransform(name)
	if t == nil {
		return nil, fmt.Errorf("no scale %q; there are %s", name, strings.Join(TransformNames(), ", "))
	}
	if len(d.Parameters) != 1 {
		return nil, errors.New("another scale is given for one unknown at a time")
	}
	if d.Kernel == nil {
		return nil, errors.New("the kernel is numeric only, so it is not written on another scale")
	}
	return Rescale(d.Kernel, d.Parameters[0].Symbol, t)
}

// Rescale is the change of variable: k(back(y)) |d back / dy|.
func Rescale(k sy.Expr, x *sy.Symbol, t *Transform) (*OnScale, error) {
	if endText(x, false) != t.Low || endText(x, true) != t.High {
		return nil, fmt.Errorf("%s is not on (%s, %s), where %s is a scale", x.Name, t.Low, t.High, t.Name)
	}
	y := &sy.Symbol{Name: t.Name + "_" + x.Name}
	switch t.ToLow {
	case "0":
		y.Low = rat(0, 1)
	case "-1":
		y.Low = rat(-1, 1)
	}
	if t.ToHigh == "1" {
		y.High = rat(1, 1)
	}
	back := t.Back(sy.Sym(y))
	slope, err := sy.Diff(back, y)
	if err != nil {
		return nil, err
	}
	moved := sy.Mul(sy.Substitute(k, map[string]sy.Expr{x.Name: back}), sy.Abs(simplified(slope)))
	kernel, _ := sy.Kernel(simplified(moved), []*sy.Symbol{y})
	return &OnScale{Symbol: y, Kernel: kernel, Name: recogniseOn(kernel, y)}, nil
}

func endText(s *sy.Symbol, high bool) string {
	end := s.Low
	if high {
		end = s.High
	}
	switch {
	case end == nil && high:
		return "inf"
	case end == nil:
		return "-inf"
	}
	return end.RatString()
}

func recogniseOn(k sy.Expr, y *sy.Symbol) string {
	return recognise(k, []*Parameter{{Symbol: y, Unknown: plainUnknown}})
}

// plainUnknown stands for a quantity that is no unknown of a model.
var plainUnknown = &model.Unknown{Kind: grammar.FindKind("real"), Levels: []string{""}, Relative: -1}
