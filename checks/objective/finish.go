package objective

import (
	"fmt"
	"math"
	"math/big"
	"strings"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// finish puts the kernel in form and names it.
func (w *work) finish(err error) (*Derived, error) {
	if err != nil {
		return nil, err
	}
	if err := w.ctx.Err(); err != nil {
		return nil, err
	}
	d := w.d
	for _, u := range w.about {
		for _, p := range w.s.parameters[u] {
			if p != nil {
				d.Parameters = append(d.Parameters, p)
			}
		}
	}
	if d.LogKernel == nil { // covariances bring their own
		if err := w.form(); err != nil {
			return nil, err
		}
	}
	d.Prior = w.prior()
	return d, nil
}

// form sets Kernel, LogKernel, Expr and Name from the work's kernel.
func (w *work) form() error {
	d := w.d
	all := symbolsOf(d.Parameters)
	var log func([]float64) float64
	if w.kernel != nil {
		k, _ := sy.Kernel(w.kernel, all)
		for _, x := range sy.Symbols(k) {
			if !contains(all, x) {
				if x.Data {
					return fmt.Errorf("the prior depends on %s, which is not known yet", x.Name)
				}
				return fmt.Errorf("the prior of %s would depend on %s: %s; derive them together", names(w.about), x.Name, sy.Text(k))
			}
		}
		k = w.lastShares(k)
		d.Kernel = k
		for _, f := range sy.Calls(k) {
			d.Error = math.Max(d.Error, f.Error)
		}
		c, err := sy.Compile(k, all)
		if err != nil {
			return err
		}
		log = func(x []float64) float64 {
			l, sign := c.LogAbs(x)
			if sign < 0 {
				return math.NaN()
			}
			return l
		}
		if w.log != nil { // the determinant was expanded, which cancels
			log = w.log
		}
		if sy.Language(k) {
			d.Expr = w.s.raise(k)
		}
		d.Name = recognise(k, d.Parameters)
		switch {
		case d.Error > 0 || !d.exactRows(k):
			d.Name = "numeric kernel"
		case len(d.Name) > mostName:
			d.Name = "sqrt(det I), which has no short form"
			w.long = true
		}
	} else {
		log = w.log
		d.Name = "numeric kernel"
		d.Error = math.Max(d.Error, 1e-9)
	}
	d.LogKernel = inside(d.Parameters, log)
	w.haar()
	return nil
}

// locationScales are the laws that shift with the first label and stretch with
// the second.
var locationScales = map[string][2]string{
	"Normal": {"mean", "sd"}, "Student-t": {"location", "scale"}, "Cauchy": {"location", "scale"}, "Laplace": {"location", "scale"},
	"logistic": {"location", "scale"}, "Gumbel": {"location", "scale"}, "log-Normal": {"log mean", "log sd"},
}

// haar says when the prior derived is also the right-Haar measure of a location
// and a scale.
func (w *work) haar() {
	if len(w.about) != 2 || w.d.Kernel == nil {
		return
	}
	for _, o := range w.s.a.Observations {
		labels, ok := locationScales[o.Dist.Spec.Name]
		if !ok {
			continue
		}
		location, ok := o.Dist.Args[labels[0]].(*model.UnknownRef)
		if !ok || location.Which != model.Whole {
			continue
		}
		scale, ok := o.Dist.Args[labels[1]].(*model.UnknownRef)
		if !ok || scale.Which != model.Whole || !location.Unknown.Scalar() || !scale.Unknown.Scalar() {
			continue
		}
		about := w.about[0] == location.Unknown && w.about[1] == scale.Unknown || w.about[1] == location.Unknown && w.about[0] == scale.Unknown
		if about && sy.Equal(w.d.Kernel, sy.Inv(sy.Sym(w.s.parameters[scale.Unknown][0].Symbol))) {
			w.step("it is also the right-Haar measure of the location–scale group (Hartigan 1964; from memory)")
			return
		}
	}
}

// mostName is the longest kernel that is written out, in bytes.
const mostName = 300

// exactRows reports whether every function in a kernel has a name of its own.
func (d *Derived) exactRows(k sy.Expr) bool {
	for _, f := range sy.Calls(k) {
		if strings.Contains(f.Name, " ") {
			return false
		}
	}
	return true
}

func contains(list []*sy.Symbol, s *sy.Symbol) bool {
	for _, x := range list {
		if x.Name == s.Name {
			return true
		}
	}
	return false
}

// lastShares writes 1 minus the other proportions as the last one.
func (w *work) lastShares(k sy.Expr) sy.Expr {
	for _, u := range w.about {
		if u.Kind.Name != "proportions" {
			continue
		}
		ps := w.s.parameters[u]
		rest, err := w.s.component(u, len(ps)-1)
		if err != nil {
			continue
		}
		out := sy.One
		bases, exponents := sy.Factors(k)
		for i, b := range bases {
			if sy.Equal(b, rest) {
				b = sy.Sym(ps[len(ps)-1].Symbol)
			}
			out = sy.Mul(out, sy.Pow(b, exponents[i]))
		}
		k = out
	}
	return k
}

// inside guards a log kernel by the supports.
func inside(ps []*Parameter, log func([]float64) float64) func([]float64) float64 {
	type ends struct{ low, high float64 }
	support := make([]ends, len(ps))
	for i, p := range ps {
		support[i] = ends{math.Inf(-1), math.Inf(1)}
		if p.Symbol.Low != nil {
			support[i].low, _ = p.Symbol.Low.Float64()
		}
		if p.Symbol.High != nil {
			support[i].high, _ = p.Symbol.High.Float64()
		}
	}
	return func(x []float64) float64 {
		for i, e := range support {
			if x[i] < e.low || x[i] > e.high {
				return math.Inf(-1)
			}
		}
		return log(x)
	}
}

// raise writes a symbolic expression in the model language.
func (s *space) raise(e sy.Expr) model.Expr {
	v := sy.Look(e)
	switch {
	case v.Number != nil:
		return number(v.Number)
	case v.Symbol != nil:
		for _, u := range s.a.Unknowns {
			for i, p := range s.parameters[u] {
				if p != nil && p.Symbol.Name == v.Symbol.Name {
					if u.Scalar() {
						return &model.UnknownRef{Unknown: u}
					}
					return &model.UnknownRef{Unknown: u, Which: model.Fixed, Component: i}
				}
			}
		}
		return nil
	case v.Function != nil:
		if len(v.Args) == 0 {
			return &model.Constant{Name: v.Function.Name}
		}
		c := &model.Call{Func: v.Function.Name}
		for _, a := range v.Args {
			c.Args = append(c.Args, s.raise(a))
		}
		return c
	case v.Constant != nil:
		op := &model.Op{Op: "+"}
		var out model.Expr
		if v.Constant.Sign() != 0 {
			out = number(v.Constant)
		}
		for i, rest := range v.Rests {
			coef, sign := v.Coefs[i], "+"
			if coef.Sign() < 0 && out != nil {
				coef, sign = new(big.Rat).Neg(coef), "-"
			}
			x := s.raise(sy.Mul(sy.Rat(coef), rest))
			if out == nil {
				out = x
				continue
			}
			op = &model.Op{Op: sign, Args: []model.Expr{out, x}}
			out = op
		}
		return out
	}
	var out model.Expr
	if v.Coef.Cmp(big.NewRat(1, 1)) != 0 {
		out = number(v.Coef)
	}
	for i, b := range v.Bases {
		x := s.raise(b)
		if v.Exponents[i].Cmp(big.NewRat(1, 1)) != 0 {
			x = &model.Op{Op: "^", Args: []model.Expr{x, number(v.Exponents[i])}}
		}
		if out == nil {
			out = x
		} else {
			out = &model.Op{Op: "*", Args: []model.Expr{out, x}}
		}
	}
	return out
}

// number is an exact literal, a negative one as its negation.
func number(r *big.Rat) model.Expr { return &model.Number{Value: r} }
