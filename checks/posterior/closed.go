package posterior

import (
	"fmt"
	"math"
	"math/big"
	"strings"

	"wellposed/checks/family"
	"wellposed/parser/model"
)

// closed is a posterior of one variable that is a Beta or a Gamma law.
type closed struct {
	beta  *family.Beta
	gamma *family.Gamma
}

func (c *closed) name() string {
	show := func(x float64) string { return strings.TrimSuffix(fmt.Sprintf("%.10g", x), ".0") }
	if c.beta != nil {
		return fmt.Sprintf("Beta(%s, %s)", show(c.beta.A), show(c.beta.B))
	}
	return fmt.Sprintf("Gamma(shape = %s, rate = %s)", show(c.gamma.Shape), show(c.gamma.Rate))
}

// quantile is the coordinate (log odds or logarithm) with share p below.
func (c *closed) quantile(p float64) float64 {
	if c.beta != nil {
		return c.beta.LogitQuantile(p)
	}
	return c.gamma.LogQuantile(p)
}

// upper is the coordinate with share q above.
func (c *closed) upper(q float64) float64 {
	if q > 1e-8 || c.gamma != nil && q > 1e-15 {
		return c.quantile(1 - q)
	}
	if c.beta != nil {
		return -family.Beta{A: c.beta.B, B: c.beta.A}.LogitQuantile(q)
	}
	return c.quantile(1 - q)
}

// tails at a value of the variable.
func (c *closed) tails(x float64) (lower, upper float64) {
	var l, u float64
	if c.beta != nil {
		l, u = c.beta.LogTails(x)
	} else {
		l, u = c.gamma.LogTails(x)
	}
	return math.Exp(l), math.Exp(u)
}

// moments of the variable itself.
func (c *closed) moments() (mean, sd float64) {
	if b := c.beta; b != nil {
		n := b.A + b.B
		return b.A / n, math.Sqrt(b.A*b.B/(n+1)) / n
	}
	return c.gamma.Shape / c.gamma.Rate, math.Sqrt(c.gamma.Shape) / c.gamma.Rate
}

// closedForm recognises binomial readings under a Beta and Poisson or
// exponential readings under a Gamma, with any exponents (Diaconis & Ylvisaker
// 1979). It returns nil for everything else.
func (p *problem) closedForm(slot int, factors int) *closed {
	v := p.vars[slot]
	if !v.unknown.Scalar() || v.unknown.Limit != nil || v.unknown.Kind.Discrete {
		return nil
	}
	q := p.analysis.PriorOf(v.unknown)
	if q == nil || q.Truncated != nil || len(q.About) != 1 {
		return nil
	}
	if ref, ok := q.Target.(*model.UnknownRef); !ok || ref.Unknown != v.unknown {
		return nil
	}
	support := v.unknown.Support
	unit := support.Low != nil && support.Low.Sign() == 0 && support.High != nil && support.High.Cmp(one) == 0
	half := support.Low != nil && support.Low.Sign() == 0 && support.High == nil
	a, b := new(big.Rat), new(big.Rat)
	switch {
	case q.Form == model.ByFlat && unit:
		a.SetInt64(1)
		b.SetInt64(1)
	case q.Form == model.ByFlat && half:
		a.SetInt64(1)
	case q.Form == model.ByDist && unit && q.Dist.Spec.Name == "Beta" && q.Dist.Arg("a") != nil:
		if !exactly(a, q.Dist.Arg("a")) || !exactly(b, q.Dist.Arg("b")) {
			return nil
		}
	case q.Form == model.ByDist && half && q.Dist.Spec.Name == "Gamma" && q.Dist.Arg("rate") != nil && q.Dist.Arg("origin") == nil:
		if !exactly(a, q.Dist.Arg("shape")) || !exactly(b, q.Dist.Arg("rate")) {
			return nil
		}
	default:
		return nil
	}
	used := 1
	if !p.priorOnly {
		for _, o := range p.analysis.Observations {
			touches := false
			for _, u := range model.UnknownsIn(lawExprs(o.Dist)...) {
				touches = touches || u == v.unknown
			}
			if !touches {
				continue
			}
			if o.Reading != model.Values || o.Right != nil || o.Left != nil || o.Truncated != nil || o.Weight != nil || len(o.What) != 1 {
				return nil
			}
			for _, row := range o.Rows {
				if !p.update(a, b, o, row, v.unknown, unit, half) {
					return nil
				}
			}
		}
	}
	_ = used
	x, _ := a.Float64()
	y, _ := b.Float64()
	if !(x > 0 && y > 0) {
		panic(refusal{ErrNoPosterior})
	}
	if unit {
		return &closed{beta: &family.Beta{A: x, B: y}}
	}
	return &closed{gamma: &family.Gamma{Shape: x, Rate: y}}
}

func exactly(to *big.Rat, e model.Expr) bool {
	x, err := model.EvalExact(e, 0)
	if err == nil {
		to.Set(x)
	}
	return err == nil
}

// update adds one reading to the exponents.
func (p *problem) update(a, b *big.Rat, o *model.Observation, row int, u *model.Unknown, unit, half bool) bool {
	is := func(e model.Expr) bool {
		for {
			l, ok := e.(*model.LetRef)
			if !ok {
				break
			}
			e = l.Let.Value
		}
		r, ok := e.(*model.UnknownRef)
		return ok && r.Unknown == u
	}
	y, err := model.EvalExact(o.What[0], row)
	if err != nil {
		return false
	}
	d := o.Dist
	switch d.Spec.Name {
	case "Binomial", "Bernoulli":
		n := new(big.Rat).Set(one)
		if d.Spec.Name == "Binomial" && !exactlyAt(n, d.Arg("trials"), row) || !unit || !is(d.Arg("probability")) {
			return false
		}
		a.Add(a, y)
		b.Add(b, n.Sub(n, y))
		return true
	case "geometric":
		first := new(big.Rat)
		if !unit || !is(d.Arg("probability")) || !exactlyAt(first, d.Arg("first"), row) {
			return false
		}
		a.Add(a, one)
		b.Add(b, first.Sub(y, first))
		return true
	case "negative-Binomial":
		size := new(big.Rat)
		if !unit || d.Arg("probability") == nil || !is(d.Arg("probability")) || !exactlyAt(size, d.Arg("size"), row) {
			return false
		}
		a.Add(a, size)
		b.Add(b, y)
		return true
	case "Poisson":
		t, ok := multiple(d.Arg("mean"), row, is)
		if !half || !ok {
			return false
		}
		a.Add(a, y)
		b.Add(b, t)
		return true
	case "Exponential":
		if d.Arg("rate") == nil || d.Arg("origin") != nil {
			return false
		}
		t, ok := multiple(d.Arg("rate"), row, is)
		if !half || !ok {
			return false
		}
		a.Add(a, one)
		b.Add(b, t.Mul(t, y))
		return true
	}
	return false
}

func exactlyAt(to *big.Rat, e model.Expr, row int) bool {
	x, err := model.EvalExact(e, row)
	if err == nil {
		to.Set(x)
	}
	return err == nil
}

// multiple takes an expression apart into known number × unknown.
func multiple(e model.Expr, row int, is func(model.Expr) bool) (*big.Rat, bool) {
	if is(e) {
		return new(big.Rat).Set(one), true
	}
	switch x := e.(type) {
	case *model.LetRef:
		return multiple(x.Let.Value, row, is)
	case *model.Op:
		if len(x.Args) != 2 || x.Op != "*" && x.Op != "/" {
			return nil, false
		}
		for i := range 2 {
			if x.Op == "/" && i == 1 {
				break
			}
			k := new(big.Rat)
			if !exactlyAt(k, x.Args[1-i], row) {
				continue
			}
			t, ok := multiple(x.Args[i], row, is)
			if !ok || k.Sign() <= 0 {
				continue
			}
			if x.Op == "/" {
				return t.Quo(t, k), true
			}
			return t.Mul(t, k), true
		}
	}
	return nil, false
}
