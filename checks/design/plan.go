package design

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"strings"

	"wellposed/checks/posterior/longrun"
	"wellposed/parser/model"
)

// Cell is one count of the plan.
type Cell struct {
	// Name as people read it: "y", or "deaths in row 2".
	Name        string
	Observation *model.Observation
	Row         int
	Awaited     *model.Awaited
	// Trials is 0 for a Poisson count.
	Trials int
}

// Setting fixes an unknown with one component.
type Setting struct {
	Unknown *model.Unknown
	Value   float64
}

// Planned is one planning value, or one tuple of them.
type Planned struct {
	Text     string
	Settings []Setting
}

// ErrNoPlan: the model has no counts to enumerate.
var ErrNoPlan = errors.New("there is no count whose plan could be examined")

// Prospective is the model as it stood before its counts were seen: itself when it
// awaits data, otherwise a copy in which the counts are awaited.
func Prospective(m *model.Model) *model.Model {
	if len(m.Awaited) > 0 {
		return m
	}
	dup := *m
	dup.Observations = make([]*model.Observation, len(m.Observations))
	for i, o := range m.Observations {
		dup.Observations[i] = o
		if !counted(o) || len(o.What) != 1 {
			continue
		}
		n := *o
		switch e := o.What[0].(type) {
		case *model.GivenRef:
			if e.Given.Vector != nil {
				continue
			}
			g := *e.Given
			g.Awaited = true
			n.What = []model.Expr{&model.GivenRef{Span: e.Span, Given: &g}}
			dup.Awaited = append(dup.Awaited, &model.Awaited{Name: g.Name, Span: o.WhatSpan, Given: &g})
		case *model.Number:
			g := &model.Given{Name: fmt.Sprintf("count %d", i+1), Span: e.Span, Awaited: true}
			n.What = []model.Expr{&model.GivenRef{Span: e.Span, Given: g}}
			dup.Awaited = append(dup.Awaited, &model.Awaited{Name: g.Name, Span: e.Span, Given: g})
		case *model.ColumnRef:
			c := *e.Column
			c.Awaited = true
			n.What = []model.Expr{&model.ColumnRef{Span: e.Span, Column: &c}}
			dup.Awaited = append(dup.Awaited, &model.Awaited{Name: c.Name, Span: e.Span, Column: &c})
		default:
			continue
		}
		n.Awaited = true
		dup.Observations[i] = &n
	}
	return &dup
}

func counted(o *model.Observation) bool {
	if o.Dist == nil || o.Dist.Spec == nil || o.Reading != model.Values || o.Truncated != nil || o.Weight != nil || o.Right != nil || o.Left != nil {
		return false
	}
	switch o.Dist.Spec.Name {
	case "Binomial", "Bernoulli", "Poisson":
		return true
	}
	return false
}

// Cells lists the counts of a prospective model, in the order of the file.
func Cells(m *model.Model) ([]Cell, error) {
	var out []Cell
	for _, a := range m.Awaited {
		found := false
		for _, o := range m.Observations {
			if len(o.What) == 0 || !means(o.What[0], a) {
				continue
			}
			if !counted(o) || len(o.What) != 1 {
				return nil, fmt.Errorf("%s is not a single count, so its outcomes are not enumerated", a.Name)
			}
			if found {
				return nil, fmt.Errorf("%s occurs in two statements", a.Name)
			}
			found = true
			for _, row := range o.Rows {
				c := Cell{Name: a.Name, Observation: o, Row: row, Awaited: a}
				if len(o.Rows) > 1 {
					c.Name = fmt.Sprintf("%s in row %d", a.Name, row+1)
				}
				switch o.Dist.Spec.Name {
				case "Binomial":
					n, err := model.EvalExact(o.Dist.Arg("trials"), row)
					if err != nil || !n.IsInt() || !n.Num().IsInt64() || n.Sign() <= 0 || n.Num().Int64() > 1e7 {
						return nil, fmt.Errorf("the number of trials of %s is not known", c.Name)
					}
					c.Trials = int(n.Num().Int64())
				case "Bernoulli":
					c.Trials = 1
				}
				out = append(out, c)
			}
		}
		if !found {
			return nil, fmt.Errorf("%s is awaited, but is not a count that stands alone in a likelihood", a.Name)
		}
	}
	if len(out) == 0 {
		return nil, ErrNoPlan
	}
	return out, nil
}

func means(e model.Expr, a *model.Awaited) bool {
	switch e := e.(type) {
	case *model.GivenRef:
		return a.Given != nil && e.Given == a.Given
	case *model.ColumnRef:
		return a.Column != nil && e.Column == a.Column || a.Given != nil && a.Given.Vector != nil && e.Column == a.Given.Vector
	}
	return false
}

// Plans are the planning values of the file. Several `suppose` statements are
// combined; a range gives eleven points.
func Plans(m *model.Model) []Planned {
	all := []Planned{{}}
	for _, s := range m.Supposed {
		var these []Planned
		for _, point := range s.Points {
			p := Planned{}
			for i, u := range s.Unknowns {
				if i < len(point) {
					p = p.and(u, point[i])
				}
			}
			these = append(these, p)
		}
		if s.From != nil && s.To != nil && len(s.Unknowns) == 1 {
			step := new(big.Rat).Quo(new(big.Rat).Sub(s.To, s.From), big.NewRat(10, 1))
			for i := range int64(11) {
				x := new(big.Rat).Add(s.From, new(big.Rat).Mul(step, big.NewRat(i, 1)))
				these = append(these, Planned{}.and(s.Unknowns[0], x))
			}
		}
		if len(these) == 0 {
			continue
		}
		var next []Planned
		for _, a := range all {
			for _, b := range these {
				text := strings.TrimPrefix(a.Text+", "+b.Text, ", ")
				next = append(next, Planned{text, append(append([]Setting(nil), a.Settings...), b.Settings...)})
			}
		}
		if len(next) > 400 {
			break
		}
		all = next
	}
	if len(all) == 1 && all[0].Text == "" {
		return nil
	}
	return all
}

func (p Planned) and(u *model.Unknown, v *big.Rat) Planned {
	x, _ := v.Float64()
	text := fmt.Sprintf("%s = %s", u.Name, model.Text(&model.Number{Value: v}))
	if p.Text != "" {
		text = p.Text + ", " + text
	}
	return Planned{text, append(append([]Setting(nil), p.Settings...), Setting{u, x})}
}

// Settled is the planning value that a promise fixes.
func Settled(at []model.Setting) Planned {
	p := Planned{}
	for _, s := range at {
		p = p.and(s.Unknown, s.Value)
	}
	return p
}

// arm is a cell with its probability or rate under a planning value.
func (c Cell) arm(p Planned) (longrun.Arm, error) {
	o := c.Observation
	if o.Dist.Spec.Name == "Poisson" {
		mean, err := Evaluate(o.Dist.Arg("mean"), c.Row, p)
		if err == nil && !(mean >= 0 && !math.IsInf(mean, 1)) {
			err = fmt.Errorf("the mean of %s would be %g", c.Name, mean)
		}
		return longrun.Arm{Count: longrun.Count{Exposure: 1}, Value: mean}, err
	}
	x, err := Evaluate(o.Dist.Arg("probability"), c.Row, p)
	if err == nil && !(x >= 0 && x <= 1) {
		err = fmt.Errorf("the probability of %s would be %g", c.Name, x)
	}
	return longrun.Arm{Count: longrun.Count{Trials: c.Trials}, Value: x}, err
}

// Evaluate is the value of an expression when the unknowns have planning values.
func Evaluate(e model.Expr, row int, p Planned) (float64, error) {
	if model.Known(e) {
		return model.EvalFloat(e, row)
	}
	switch e := e.(type) {
	case *model.UnknownRef:
		if !e.Unknown.Scalar() {
			return 0, fmt.Errorf("%s has several components; planning values are for single numbers", e.Unknown.Name)
		}
		for _, s := range p.Settings {
			if s.Unknown == e.Unknown {
				return s.Value, nil
			}
		}
		return 0, fmt.Errorf("%s has no planning value", e.Unknown.Name)
	case *model.LetRef:
		return Evaluate(e.Let.Value, row, p)
	case *model.Vector:
		if len(e.Items) == 1 {
			return Evaluate(e.Items[0], row, p)
		}
	case *model.Op:
		return operate(e, row, p)
	case *model.Call:
		if len(e.Args) == 1 {
			x, err := Evaluate(e.Args[0], row, p)
			if err != nil {
				return 0, err
			}
			if f := functions[e.Func]; f != nil {
				return f(x), nil
			}
		}
		return 0, fmt.Errorf("%s is not evaluated at planning values", e.Func)
	}
	return 0, errors.New("an expression of this form is not evaluated at planning values")
}

func operate(e *model.Op, row int, p Planned) (float64, error) {
	var v [2]float64
	for i, a := range e.Args {
		x, err := Evaluate(a, row, p)
		if err != nil {
			return 0, err
		}
		if i < 2 {
			v[i] = x
		}
	}
	switch e.Op {
	case "neg":
		return -v[0], nil
	case "+":
		return v[0] + v[1], nil
	case "-":
		if len(e.Args) == 1 {
			return -v[0], nil
		}
		return v[0] - v[1], nil
	case "*":
		return v[0] * v[1], nil
	case "/":
		return v[0] / v[1], nil
	case "^":
		return math.Pow(v[0], v[1]), nil
	}
	return 0, fmt.Errorf("the operator %s gives no number", e.Op)
}

var functions = map[string]func(float64) float64{
	"exp": math.Exp, "log": math.Log, "sqrt": math.Sqrt, "abs": math.Abs, "tanh": math.Tanh, "atan": math.Atan, "atanh": math.Atanh,
	"expit": func(x float64) float64 { return 1 / (1 + math.Exp(-x)) },
	"logit": func(x float64) float64 { return math.Log(x) - math.Log1p(-x) },
	"odds":  func(x float64) float64 { return x / (1 - x) },
	"Phi":   func(x float64) float64 { return math.Erfc(-x/math.Sqrt2) / 2 },
}
