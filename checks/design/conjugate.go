package design

import (
	"math/big"

	"wellposed/checks/posterior/longrun"
	"wellposed/parser/model"
)

// Conjugate is a plan with one count whose parameter is an unknown itself (times
// a known exposure).
type Conjugate struct {
	Cell    Cell
	Unknown *model.Unknown
	Plan    longrun.Count
	// Kernel is meaningful when Known is set: the prior is such a kernel.
	Kernel longrun.Kernel
	Known  bool
}

// Conjugacy recognises such a plan with a Beta or Gamma kernel as prior; nil when
// it is none.
func Conjugacy(a *model.Analysis) *Conjugate {
	if c := Direct(a); c != nil && c.Known {
		return c
	}
	return nil
}

// Direct recognises a plan whose one count has an unknown as its parameter.
func Direct(a *model.Analysis) *Conjugate {
	cells, err := Cells(a.Model)
	if err != nil || len(cells) != 1 {
		return nil
	}
	return directly(a, cells[0])
}

// directly recognises a count whose parameter is an unknown of its own.
func directly(a *model.Analysis, cell Cell) *Conjugate {
	c := &Conjugate{Cell: cell}
	rate := cell.Trials == 0
	if rate {
		var exposure *big.Rat
		c.Unknown, exposure = timesUnknown(cell.Observation.Dist.Arg("mean"), cell.Row)
		if exposure == nil || exposure.Sign() <= 0 {
			return nil
		}
		c.Plan.Exposure, _ = exposure.Float64()
	} else {
		r, ok := plain(cell.Observation.Dist.Arg("probability")).(*model.UnknownRef)
		if !ok {
			return nil
		}
		c.Unknown, c.Plan.Trials = r.Unknown, cell.Trials
	}
	u := c.Unknown
	if u == nil || !u.Scalar() || u.Limit != nil || u.Population != nil || u.Support.Low == nil || u.Support.Low.Sign() != 0 {
		return nil
	}
	if rate != (u.Support.High == nil) || !rate && u.Support.High.Cmp(big.NewRat(1, 1)) != 0 {
		return nil
	}
	for _, o := range a.Observations {
		if o == cell.Observation {
			continue
		}
		for _, v := range model.UnknownsIn(arguments(o.Dist)...) {
			if v == u {
				return nil
			}
		}
	}
	if prior := a.PriorOf(u); prior != nil && prior.Truncated == nil && len(prior.About) == 1 {
		c.Kernel, c.Known = kernelOf(prior, u, rate)
	}
	return c
}

// arguments are all expressions of a law.
func arguments(d *model.Dist) []model.Expr {
	var out []model.Expr
	for _, e := range d.Args {
		out = append(out, e)
	}
	for _, p := range d.Parts {
		out = append(append(out, p.Weight), arguments(p.Dist)...)
	}
	return out
}

// plain follows names and one-item brackets.
func plain(e model.Expr) model.Expr {
	for {
		switch x := e.(type) {
		case *model.LetRef:
			e = x.Let.Value
		case *model.Vector:
			if len(x.Items) != 1 {
				return e
			}
			e = x.Items[0]
		default:
			return e
		}
	}
}

// timesUnknown reads "rate", "rate * T" and "T * rate".
func timesUnknown(e model.Expr, row int) (*model.Unknown, *big.Rat) {
	switch e := plain(e).(type) {
	case *model.UnknownRef:
		return e.Unknown, big.NewRat(1, 1)
	case *model.Op:
		if e.Op != "*" || len(e.Args) != 2 {
			return nil, nil
		}
		for i, x := range e.Args {
			if u, ok := plain(x).(*model.UnknownRef); ok {
				if t, err := model.EvalExact(e.Args[1-i], row); err == nil {
					return u.Unknown, t
				}
			}
		}
	}
	return nil, nil
}

// kernelOf reads a prior as a Beta or Gamma kernel.
func kernelOf(p *model.Prior, u *model.Unknown, rate bool) (longrun.Kernel, bool) {
	none := longrun.Kernel{}
	on := func(e model.Expr) bool {
		r, ok := plain(e).(*model.UnknownRef)
		return ok && r.Unknown == u
	}
	switch p.Form {
	case model.ByDist:
		if !on(p.Target) {
			return none, false
		}
		arg := func(label string) (float64, bool) {
			e := p.Dist.Arg(label)
			if e == nil || !model.Known(e) {
				return 0, false
			}
			x, err := model.EvalFloat(e, 0)
			return x, err == nil
		}
		switch p.Dist.Spec.Name {
		case "Beta":
			if rate {
				return none, false
			}
			a, okA := arg("a")
			b, okB := arg("b")
			return longrun.Kernel{A: a, B: b}, okA && okB
		case "Uniform":
			low, okLow := arg("low")
			high, okHigh := arg("high")
			return longrun.Kernel{A: 1, B: 1}, !rate && okLow && okHigh && low == 0 && high == 1
		case "Gamma":
			shape, okShape := arg("shape")
			by, okRate := arg("rate")
			if !okRate {
				var scale float64
				if scale, okRate = arg("scale"); okRate {
					by = 1 / scale
				}
			}
			return longrun.Kernel{A: shape, B: by}, rate && okShape && okRate
		}
	case model.ByFlat:
		if on(p.Target) {
			if rate {
				return longrun.Kernel{A: 1, B: 0}, true
			}
			return longrun.Kernel{A: 1, B: 1}, true
		}
		if c, ok := p.Target.(*model.Call); ok && len(c.Args) == 1 && on(c.Args[0]) {
			if c.Func == "logit" && !rate || c.Func == "log" && rate {
				return none, true
			}
		}
	case model.ByKernel:
		if k, ok := power(p.Kernel, u); ok && rate && on(p.Target) {
			return longrun.Kernel{A: k + 1, B: 0}, true
		}
	}
	return none, false
}

// power reads λ^c and 1/λ^c.
func power(e model.Expr, u *model.Unknown) (float64, bool) {
	switch e := plain(e).(type) {
	case *model.UnknownRef:
		return 1, e.Unknown == u
	case *model.Op:
		switch {
		case e.Op == "^" && len(e.Args) == 2 && model.Known(e.Args[1]):
			k, ok := power(e.Args[0], u)
			c, err := model.EvalFloat(e.Args[1], 0)
			return k * c, ok && err == nil
		case e.Op == "/" && len(e.Args) == 2 && model.Known(e.Args[0]):
			k, ok := power(e.Args[1], u)
			return -k, ok
		case e.Op == "*" && len(e.Args) == 2:
			a, okA := power(e.Args[0], u)
			b, okB := power(e.Args[1], u)
			return a + b, okA && okB
		}
	case *model.Call:
		if e.Func == "sqrt" && len(e.Args) == 1 {
			k, ok := power(e.Args[0], u)
			return k / 2, ok
		}
	}
	if model.Known(e) {
		return 0, true
	}
	return 0, false
}
