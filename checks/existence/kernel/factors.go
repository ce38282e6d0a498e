package kernel

import (
	"math/big"

	"wellposed/checks/existence/law"
	"wellposed/checks/existence/order"
	"wellposed/parser/model"
)

// args reads a distribution's arguments at a row.
func (e *Env) args(d *model.Dist, row int) law.Args {
	return func(label string) order.Value {
		x := d.Args[label]
		if x == nil {
			return nil
		}
		return e.Eval(x, row)
	}
}

// Density is the log density of a distribution at x.
func (e *Env) Density(d *model.Dist, x order.Value, row int) order.Value {
	if len(d.Parts) == 0 {
		return law.Density(d.Spec.Name, e.args(d, row), x)
	}
	return order.Log(e.mixture(d, row, func(part *model.Dist) order.Value { return order.Exp(e.Density(part, x, row)) }))
}

// mixture sums weight · f(part) over the parts where f does not vanish.
func (e *Env) mixture(d *model.Dist, row int, f func(*model.Dist) order.Value) order.Value {
	total := order.Number(0)
	for _, p := range d.Parts {
		var t order.Value
		err := order.Try(func() { t = order.Mul(e.Eval(p.Weight, row), f(p.Dist)) })
		if err == order.Vanishes {
			continue
		}
		if err != nil {
			panic(err)
		}
		total = order.Add(total, t)
	}
	return total
}

// tails are the distribution function and its complement.
func (e *Env) tails(d *model.Dist, x order.Value, row int) (below, above order.Value) {
	if len(d.Parts) == 0 {
		return law.Tails(d.Spec.Name, e.args(d, row), x)
	}
	below, above = order.Number(0), order.Number(0)
	for _, p := range d.Parts {
		w := e.Eval(p.Weight, row)
		b, a := e.tails(p.Dist, x, row)
		below, above = order.Add(below, order.Mul(w, b)), order.Add(above, order.Mul(w, a))
	}
	return below, above
}

// discrete reports laws on whole numbers.
func discrete(d *model.Dist) bool {
	switch d.Spec.On {
	case "counts 0, 1, 2, …", "0 or 1", "levels", "vectors of counts":
		return true
	}
	return false
}

// Row is the log likelihood of one row of an observation.
func (e *Env) Row(o *model.Observation, row int) order.Value {
	v := e.row(o, row)
	if o.Truncated != nil {
		v = order.Sub(v, order.Log(e.inside(o.Dist, o.Truncated, row)))
	}
	if o.Weight != nil {
		v = order.Mul(e.Eval(o.Weight, row), v)
	}
	return v
}

// inside is the probability of a range.
func (e *Env) inside(d *model.Dist, t *model.Range, row int) order.Value {
	end := func(x model.Expr) order.Value {
		if c, ok := x.(*model.Constant); ok && c.Name != "pi" {
			return nil
		}
		if x == nil {
			return nil
		}
		return e.Eval(x, row)
	}
	lo, hi := end(t.Low), end(t.High)
	if lo != nil && discrete(d) {
		// The lower end of a truncated count belongs to the range.
		lo = order.Sub(lo, order.Number(1))
		if r := order.Exact(lo); r != nil && r.Sign() < 0 {
			lo = nil
		}
	}
	switch {
	case lo == nil && hi == nil:
		return order.Number(1)
	case lo == nil:
		below, _ := e.tails(d, hi, row)
		return below
	case hi == nil:
		_, above := e.tails(d, lo, row)
		return above
	}
	return e.between(d, lo, hi, row)
}

// between is P(lo < y ≤ hi), from whichever pair of tails keeps the smaller
// numbers.
func (e *Env) between(d *model.Dist, lo, hi order.Value, row int) order.Value {
	b1, a1 := e.tails(d, lo, row)
	b2, a2 := e.tails(d, hi, row)
	var v order.Value
	if order.Try(func() {
		v = order.Sub(b2, b1)
		order.Sign(v)
	}) == nil {
		return v
	}
	return order.Sub(a1, a2)
}

func (e *Env) row(o *model.Observation, row int) order.Value {
	switch o.Reading {
	case model.Between:
		return order.Log(e.between(o.Dist, e.Eval(o.Low, row), e.Eval(o.High, row), row))
	case model.Summary:
		return e.summary(o, row)
	}
	if len(o.What) != 1 {
		refuse("several values observed together")
	}
	x := e.Eval(o.What[0], row)
	for _, c := range []struct {
		when  model.Expr
		right bool
	}{{o.Right, true}, {o.Left, false}} {
		if c.when == nil {
			continue
		}
		holds, ok := Condition(c.when, row)
		if !ok {
			refuse("a condition of censoring that can't be evaluated")
		}
		if holds {
			below, above := e.tails(o.Dist, x, row)
			if c.right {
				return order.Log(above)
			}
			return order.Log(below)
		}
	}
	return e.Density(o.Dist, x, row)
}

// summary is the log likelihood of n normal readings with a mean and an sd:
// −n log s − ((n − 1) sd² + n (mean − m)²) / (2 s²).
func (e *Env) summary(o *model.Observation, row int) order.Value {
	if o.Dist.Spec.Name != "Normal" {
		refuse("a summary of a law other than Normal")
	}
	n, mean, sd := e.Eval(o.N, row), e.Eval(o.Mean, row), e.Eval(o.SD, row)
	a := e.args(o.Dist, row)
	s := law.Spread(a)
	d := order.Sub(mean, a("mean"))
	ss := order.Add(order.Mul(order.Sub(n, order.Number(1)), order.Square(sd)), order.Mul(n, order.Square(d)))
	return order.Sub(order.Times(order.Div(ss, order.Square(s)), big.NewRat(-1, 2)), order.Mul(n, order.Log(s)))
}

// Population is the log density of a varying effect's component; row is a row
// of that component, for population models with predictors.
func (e *Env) Population(p *model.Population, component, row int) order.Value {
	v := e.Density(p.Dist, e.value(p.Unknown, component), row)
	if p.Truncated != nil {
		v = order.Sub(v, order.Log(e.inside(p.Dist, p.Truncated, row)))
	}
	return v
}
