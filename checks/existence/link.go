package existence

import (
	"math/big"

	"wellposed/checks/existence/cone"
	"wellposed/checks/existence/kernel"
	"wellposed/parser/model"
)

// linked is an observation whose log likelihood is concave in linear forms;
// see lists what a row says about directions, false when the row can't be read.
type linked struct {
	name string
	see  func(row int) ([]sight, bool)
}

func anyUnknown(*model.Unknown) bool { return true }

// constantPositive reports an argument that is a known positive number at every
// row that is asked for.
func constantPositive(x model.Expr, row int) bool {
	r := kernel.Constant(x, row)
	return r != nil && r.Sign() > 0
}

// link recognises the laws of literature section 1.1.
func (g *group) link(o *model.Observation) *linked {
	if o.Reading == model.Summary || o.Truncated != nil || len(o.What) > 1 || len(o.Dist.Parts) > 0 {
		return nil
	}
	if mentions(o.Weight) || o.Weight != nil && rowDependent(o.Weight) || o.Weight != nil && !constantPositive(o.Weight, 0) {
		return nil
	}
	for _, x := range o.What {
		if mentions(x) {
			return nil
		}
	}
	d := o.Dist
	switch d.Spec.Name {
	case "Bernoulli", "Binomial", "geometric":
		return g.linkBinary(o)
	case "Poisson", "negative-Binomial":
		return g.linkCount(o)
	case "Exponential", "Weibull", "Gamma":
		return g.linkHazard(o)
	case "Normal", "log-Normal", "logistic", "Laplace", "Gumbel":
		return g.linkLocation(o)
	case "cumulative-logit", "cumulative-probit":
		return g.linkOrdinal(o)
	case "multinomial-logit":
		return g.linkMultinomial(o)
	}
	return nil
}

func unlet(x model.Expr) model.Expr {
	for {
		l, ok := x.(*model.LetRef)
		if !ok {
			return x
		}
		x = l.Let.Value
	}
}

func isOne(x model.Expr) bool {
	n, ok := unlet(x).(*model.Number)
	return ok && n.Value.Cmp(big.NewRat(1, 1)) == 0
}

func negated(x model.Expr) (model.Expr, bool) {
	o, ok := unlet(x).(*model.Op)
	if ok && len(o.Args) == 1 && (o.Op == "neg" || o.Op == "-") {
		return o.Args[0], true
	}
	return nil, false
}

func call(x model.Expr, name string) (model.Expr, bool) {
	c, ok := unlet(x).(*model.Call)
	if ok && c.Func == name && len(c.Args) == 1 {
		return c.Args[0], true
	}
	return nil, false
}

// inverseLink reads a probability as F(η) with log F and log(1 − F) concave; up
// tells whether it rises with η.
func inverseLink(x model.Expr) (eta model.Expr, up, ok bool) {
	x = unlet(x)
	if a, ok := call(x, "expit"); ok {
		return a, true, true
	}
	if a, ok := call(x, "Phi"); ok {
		return a, true, true
	}
	if a, ok := call(x, "exp"); ok { // exp(−exp(η))
		if b, ok := negated(a); ok {
			if eta, ok := call(b, "exp"); ok {
				return eta, false, true
			}
		}
	}
	o, isOp := x.(*model.Op)
	if !isOp || len(o.Args) != 2 {
		return nil, false, false
	}
	if o.Op == "-" && isOne(o.Args[0]) {
		eta, up, ok := inverseLink(o.Args[1])
		return eta, !up, ok
	}
	if o.Op == "/" && isOne(o.Args[0]) { // 1/(1 + exp(z))
		if s, ok := unlet(o.Args[1]).(*model.Op); ok && s.Op == "+" && len(s.Args) == 2 {
			for i := range 2 {
				if isOne(s.Args[i]) {
					if z, ok := call(s.Args[1-i], "exp"); ok {
						return z, false, true
					}
				}
			}
		}
	}
	return nil, false, false
}

// logOf reads a positive expression as constant · exp(η).
func logOf(x model.Expr) (eta model.Expr, factors []model.Expr, ok bool) {
	x = unlet(x)
	if a, ok := call(x, "exp"); ok {
		return a, nil, true
	}
	o, isOp := x.(*model.Op)
	if !isOp || len(o.Args) != 2 {
		return nil, nil, false
	}
	switch o.Op {
	case "*":
		a, b := mentions(o.Args[0]), mentions(o.Args[1])
		switch {
		case a && b:
			e1, f1, ok1 := logOf(o.Args[0])
			e2, f2, ok2 := logOf(o.Args[1])
			return &model.Op{Op: "+", Args: []model.Expr{e1, e2}}, append(f1, f2...), ok1 && ok2
		case b:
			e, f, ok := logOf(o.Args[1])
			return e, append(f, o.Args[0]), ok
		case a:
			e, f, ok := logOf(o.Args[0])
			return e, append(f, o.Args[1]), ok
		}
	case "/":
		if mentions(o.Args[0]) && !mentions(o.Args[1]) {
			e, f, ok := logOf(o.Args[0])
			return e, append(f, o.Args[1]), ok
		}
	}
	return nil, nil, false
}

// whole reads the observed value as a non-negative whole number.
func whole(o *model.Observation, row int) (*big.Rat, bool) {
	y := kernel.Constant(o.What[0], row)
	return y, y != nil && y.IsInt() && y.Sign() >= 0
}

func (g *group) linkBinary(o *model.Observation) *linked {
	p := o.Dist.Arg("probability")
	if p == nil || o.Right != nil || o.Left != nil || o.Reading != model.Values {
		return nil
	}
	eta, up, ok := inverseLink(p)
	if !ok {
		return nil
	}
	form, ok := g.linearize(eta, anyUnknown)
	if !ok || mentions(o.Dist.Arg("trials")) || mentions(o.Dist.Arg("first")) {
		return nil
	}
	more, less := cone.AtLeast, cone.AtMost
	if !up {
		more, less = less, more
	}
	both, ones, zeros, none := []sight{{form: form, sense: cone.Equal}}, []sight{{form: form, sense: more}},
		[]sight{{form: form, sense: less}}, []sight{{free: true}}
	see := func(successes, failures bool) ([]sight, bool) {
		switch {
		case successes && failures:
			return both, true
		case successes:
			return ones, true
		case failures:
			return zeros, true
		}
		return none, true
	}
	return &linked{"binary", func(row int) ([]sight, bool) {
		y, ok := whole(o, row)
		if !ok {
			return nil, false
		}
		switch o.Dist.Spec.Name {
		case "geometric":
			first := kernel.Constant(o.Dist.Arg("first"), row)
			if first == nil || y.Cmp(first) < 0 {
				return nil, false
			}
			return see(true, y.Cmp(first) > 0)
		case "Binomial":
			n := kernel.Constant(o.Dist.Arg("trials"), row)
			if n == nil || n.Cmp(y) < 0 || !n.IsInt() {
				return nil, false
			}
			return see(y.Sign() > 0, y.Cmp(n) < 0)
		}
		if y.Cmp(big.NewRat(1, 1)) > 0 {
			return nil, false
		}
		return see(y.Sign() > 0, y.Sign() == 0)
	}}
}

// positiveForm reads a mean, rate or scale as constant · exp(linear form).
func (g *group) positiveForm(x model.Expr) (linearForm, []model.Expr, bool) {
	if x == nil {
		return nil, nil, false
	}
	eta, factors, ok := logOf(x)
	if !ok {
		return nil, nil, false
	}
	form, ok := g.linearize(eta, anyUnknown)
	return form, factors, ok
}

func allPositive(xs []model.Expr, row int) bool {
	for _, x := range xs {
		if !constantPositive(x, row) {
			return false
		}
	}
	return true
}

func (g *group) linkCount(o *model.Observation) *linked {
	form, factors, ok := g.positiveForm(o.Dist.Arg("mean"))
	size := o.Dist.Arg("size")
	if !ok || mentions(size) || o.Right != nil || o.Left != nil || o.Reading != model.Values {
		return nil
	}
	return &linked{"count", func(row int) ([]sight, bool) {
		y, ok := whole(o, row)
		if !ok || !allPositive(factors, row) || size != nil && !constantPositive(size, row) {
			return nil, false
		}
		if y.Sign() == 0 {
			return []sight{{form: form, sense: cone.AtMost}}, true
		}
		return []sight{{form: form, sense: cone.Equal}}, true
	}}
}

func (g *group) linkHazard(o *model.Observation) *linked {
	d := o.Dist
	if mentions(d.Arg("shape")) || d.Arg("origin") != nil || o.Reading != model.Values || o.Left != nil {
		return nil
	}
	if d.Spec.Name == "Gamma" && o.Right != nil {
		return nil
	}
	x, up := d.Arg("rate"), false
	if x == nil {
		up = true
		if x = d.Arg("scale"); x == nil {
			x = d.Arg("mean")
		}
	}
	form, factors, ok := g.positiveForm(x)
	if !ok {
		return nil
	}
	censored := cone.AtMost
	if up {
		censored = cone.AtLeast
	}
	shape := d.Arg("shape")
	return &linked{"hazard", func(row int) ([]sight, bool) {
		t := kernel.Constant(o.What[0], row)
		if t == nil || t.Sign() <= 0 || !allPositive(factors, row) || shape != nil && !constantPositive(shape, row) {
			return nil, false
		}
		if o.Right != nil {
			holds, ok := kernel.Condition(o.Right, row)
			if !ok {
				return nil, false
			}
			if holds {
				return []sight{{form: form, sense: censored}}, true
			}
		}
		return []sight{{form: form, sense: cone.Equal}}, true
	}}
}

func (g *group) linkLocation(o *model.Observation) *linked {
	d := o.Dist
	place, spread := d.Arg("mean"), []model.Expr{d.Arg("sd"), d.Arg("variance"), d.Arg("precision")}
	switch d.Spec.Name {
	case "log-Normal":
		place, spread = d.Arg("log mean"), []model.Expr{d.Arg("log sd")}
		if place == nil || d.Arg("origin") != nil {
			return nil
		}
	case "logistic", "Laplace", "Gumbel":
		place, spread = d.Arg("location"), []model.Expr{d.Arg("scale")}
	}
	var s model.Expr
	for _, x := range spread {
		if x != nil {
			s = x
		}
	}
	form, ok := g.linearize(place, anyUnknown)
	if !ok || s == nil || mentions(s) {
		return nil
	}
	return &linked{"location", func(row int) ([]sight, bool) {
		if !constantPositive(s, row) {
			return nil, false
		}
		if o.Reading == model.Between {
			lo, hi := kernel.Constant(o.Low, row), kernel.Constant(o.High, row)
			if lo == nil || hi == nil || lo.Cmp(hi) >= 0 || d.Spec.Name == "log-Normal" && lo.Sign() <= 0 {
				return nil, false
			}
			return []sight{{form: form, sense: cone.Equal}}, true
		}
		y := kernel.Constant(o.What[0], row)
		if y == nil || d.Spec.Name == "log-Normal" && y.Sign() <= 0 {
			return nil, false
		}
		for _, c := range []struct {
			when  model.Expr
			sense cone.Sense
		}{{o.Right, cone.AtLeast}, {o.Left, cone.AtMost}} {
			if c.when == nil {
				continue
			}
			holds, ok := kernel.Condition(c.when, row)
			if !ok {
				return nil, false
			}
			if holds {
				return []sight{{form: form, sense: c.sense}}, true
			}
		}
		return []sight{{form: form, sense: cone.Equal}}, true
	}}
}

func (g *group) linkOrdinal(o *model.Observation) *linked {
	cuts, ok := o.Dist.Arg("cutpoints").(*model.UnknownRef)
	if !ok || cuts.Which != model.Whole || o.Reading != model.Values || o.Right != nil || o.Left != nil {
		return nil
	}
	n := cuts.Unknown.Components()
	// c_k − η for every cutpoint k.
	forms := make([]linearForm, n)
	for k := range n {
		x := &model.Op{Op: "-", Args: []model.Expr{
			&model.UnknownRef{Unknown: cuts.Unknown, Which: model.Fixed, Component: k}, o.Dist.Arg("predictor")}}
		form, ok := g.linearize(x, anyUnknown)
		if !ok {
			return nil
		}
		forms[k] = form
	}
	return &linked{"ordinal", func(row int) ([]sight, bool) {
		y, ok := whole(o, row)
		if !ok || y.Sign() == 0 || y.Num().Int64() > int64(n+1) {
			return nil, false
		}
		k := int(y.Num().Int64())
		var out []sight
		if k <= n {
			out = append(out, sight{form: forms[k-1], sense: cone.AtLeast})
		}
		if k > 1 {
			out = append(out, sight{form: forms[k-2], sense: cone.AtMost})
		}
		return out, true
	}}
}

func (g *group) linkMultinomial(o *model.Observation) *linked {
	if o.Reading != model.Values || o.Right != nil || o.Left != nil {
		return nil
	}
	v, ok := o.Dist.Arg("predictors").(*model.Vector)
	if !ok {
		return nil
	}
	n := len(v.Items)
	forms := make([][]linearForm, n)
	for k := range n {
		for j := range n {
			if j == k {
				continue
			}
			form, ok := g.linearize(&model.Op{Op: "-", Args: []model.Expr{v.Items[k], v.Items[j]}}, anyUnknown)
			if !ok {
				return nil
			}
			forms[k] = append(forms[k], form)
		}
	}
	return &linked{"multinomial", func(row int) ([]sight, bool) {
		y, ok := whole(o, row)
		if !ok || y.Sign() == 0 || y.Num().Int64() > int64(n) {
			return nil, false
		}
		var out []sight
		for _, f := range forms[y.Num().Int64()-1] {
			out = append(out, sight{form: f, sense: cone.AtLeast})
		}
		return out, true
	}}
}
