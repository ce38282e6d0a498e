package objective

import (
	"math/big"
	"strings"

	"wellposed/grammar"

	sy "wellposed/checks/objective/symbolic"
	"wellposed/parser/model"
)

// named is a law that a kernel is proportional to.
type named struct {
	text string
	dist *model.Dist
	// flat is set for a constant kernel on an unbounded support.
	flat bool
}

// recognise names a kernel of one unknown exactly, or of proportions.
func recogniseLaw(k sy.Expr, ps []*Parameter) *named {
	if len(ps) > 1 && ps[0].Unknown.Kind.Name == "proportions" && ps[len(ps)-1].Unknown == ps[0].Unknown {
		return dirichlet(k, ps)
	}
	if len(ps) != 1 {
		if sy.Number(k) != nil {
			return &named{text: "flat", flat: true}
		}
		return nil
	}
	p := ps[0]
	x := sy.Sym(p.Symbol)
	low, high := p.Symbol.Low, p.Symbol.High
	switch {
	case isRat(low, 0, 1) && isRat(high, 1, 1):
		return beta(k, x)
	case isRat(low, 0, 1) && high == nil:
		return positiveLaw(k, x)
	case sy.Number(k) != nil:
		if low != nil && high != nil {
			return law1("Uniform", 0, sy.Rat(low), sy.Rat(high))
		}
		return &named{text: "flat", flat: true}
	case low == nil && high == nil:
		return realLaw(k, x)
	}
	return nil
}

func isRat(r *big.Rat, p, q int64) bool { return r != nil && r.Cmp(big.NewRat(p, q)) == 0 }

// powers reads a kernel as a product of powers of the given bases and one
// exponential; ok is false when something else occurs.
func powers(k sy.Expr, bases ...sy.Expr) (exponents []*big.Rat, argument sy.Expr, ok bool) {
	exponents = make([]*big.Rat, len(bases))
	for i := range exponents {
		exponents[i] = new(big.Rat)
	}
	argument = sy.Zero
	found, qs := sy.Factors(k)
next:
	for i, b := range found {
		if a := sy.IsExp(b); a != nil {
			argument = sy.Add(argument, sy.Mul(sy.Rat(qs[i]), a))
			continue
		}
		for j, want := range bases {
			if sy.Equal(b, want) {
				exponents[j] = qs[i]
				continue next
			}
		}
		return nil, nil, false
	}
	return exponents, argument, true
}

func plus(r *big.Rat, n int64) *big.Rat { return new(big.Rat).Add(r, big.NewRat(n, 1)) }

func beta(k, x sy.Expr) *named {
	e, argument, ok := powers(k, x, sy.Sub(sy.One, x))
	if !ok || !isZero(argument) {
		return nil
	}
	a, b := plus(e[0], 1), plus(e[1], 1)
	if a.Sign() < 0 || b.Sign() < 0 {
		return nil
	}
	return law1("Beta", 0, sy.Rat(a), sy.Rat(b))
}

func positiveLaw(k, x sy.Expr) *named {
	if sy.Number(k) != nil {
		return &named{text: "flat", flat: true}
	}
	if e, argument, ok := powers(k, x); ok {
		constant, coefs, rests := sy.Terms(argument)
		shape := plus(e[0], 1)
		if constant.Sign() == 0 && len(coefs) == 1 && coefs[0].Sign() < 0 {
			rate := sy.Rat(new(big.Rat).Neg(coefs[0]))
			switch {
			case sy.Equal(rests[0], x) && shape.Sign() > 0:
				return law1("Gamma", 0, sy.Rat(shape), rate)
			case sy.Equal(rests[0], sy.Inv(x)) && shape.Sign() < 0:
				return law1("inverse-Gamma", 0, sy.Rat(new(big.Rat).Neg(shape)), rate)
			}
		}
		return nil
	}
	if s := cauchyScale(k, x); s != nil {
		return law1("half-Cauchy", 0, s)
	}
	return nil
}

// cauchyScale is s when the kernel is 1/(s² + x²) with a rational s.
func cauchyScale(k, x sy.Expr) sy.Expr {
	bases, qs := sy.Factors(k)
	if len(bases) != 1 || qs[0].Cmp(big.NewRat(-1, 1)) != 0 {
		return nil
	}
	constant, coefs, rests := sy.Terms(bases[0])
	if len(coefs) != 1 || !sy.Equal(rests[0], sy.Square(x)) || constant.Sign() <= 0 || coefs[0].Sign() <= 0 {
		return nil
	}
	s := sy.Sqrt(sy.Rat(new(big.Rat).Quo(constant, coefs[0])))
	if sy.Number(s) == nil {
		return nil
	}
	return s
}

func realLaw(k, x sy.Expr) *named {
	if s := cauchyScale(k, x); s != nil {
		return law1("Cauchy", 0, sy.Zero, s)
	}
	e := sy.Exp(x)
	if sy.Equal(k, sy.Div(e, sy.Square(sy.Add(sy.One, e)))) {
		return law1("logistic", 0, sy.Zero, sy.One)
	}
	return nil
}

func dirichlet(k sy.Expr, ps []*Parameter) *named {
	bases := make([]sy.Expr, len(ps))
	for i, p := range ps {
		bases[i] = sy.Sym(p.Symbol)
	}
	e, argument, ok := powers(k, bases...)
	if !ok || !isZero(argument) {
		return nil
	}
	weights := &model.Vector{}
	texts := make([]string, len(e))
	alike := true
	for i, q := range e {
		w := plus(q, 1)
		if w.Sign() < 0 {
			return nil
		}
		alike = alike && q.Cmp(e[0]) == 0
		texts[i] = w.RatString()
		weights.Items = append(weights.Items, &model.Number{Value: w})
	}
	text := "Dirichlet(" + strings.Join(texts, ", ") + ")"
	if alike {
		text = "Dirichlet(" + texts[0] + ")"
	}
	spec := grammar.FindDistribution("Dirichlet")
	return &named{text: text, dist: &model.Dist{Spec: spec, Args: map[string]model.Expr{spec.Forms[0][0].Label: weights}}}
}

// law1 is a named law with numeric arguments in the order of its form.
func law1(name string, form int, args ...sy.Expr) *named {
	spec := grammar.FindDistribution(name)
	d := &model.Dist{Spec: spec, Form: form, Args: map[string]model.Expr{}}
	texts := make([]string, len(args))
	for i, a := range args {
		p := spec.Forms[form][i]
		d.Args[p.Label] = &model.Number{Value: sy.Number(a)}
		texts[i] = sy.Number(a).RatString()
		if p.Named {
			texts[i] = p.Label + " = " + texts[i]
		}
	}
	return &named{text: spec.Name + "(" + strings.Join(texts, ", ") + ")", dist: d}
}

// recognise is the name of a law or the kernel as people write it.
func recognise(k sy.Expr, ps []*Parameter) string {
	if n := recogniseLaw(k, ps); n != nil {
		return n.text
	}
	return sy.Text(paired(k))
}

// paired writes equal powers of 1 − x and 1 + x as one of 1 − x².
func paired(k sy.Expr) sy.Expr {
	bases, qs := sy.Factors(k)
	out := sy.One
	used := make([]bool, len(bases))
	for i, b := range bases {
		if used[i] {
			continue
		}
		base := b
		for j := i + 1; j < len(bases); j++ {
			if used[j] || qs[i].Cmp(qs[j]) != 0 {
				continue
			}
			for _, s := range sy.Symbols(b) {
				x := sy.Sym(s)
				minus, plus := sy.Sub(sy.One, x), sy.Add(sy.One, x)
				if sy.Equal(b, minus) && sy.Equal(bases[j], plus) || sy.Equal(b, plus) && sy.Equal(bases[j], minus) {
					base, used[j] = sy.Sub(sy.One, sy.Square(x)), true
				}
			}
		}
		out = sy.Mul(out, sy.Pow(base, qs[i]))
	}
	return out
}

// prior is the derived prior as a statement of the language.
func (w *work) prior() *model.Prior {
	d := w.d
	p := &model.Prior{About: append([]*model.Unknown(nil), w.about...), Rule: d.Rule}
	target := names(w.about)
	if len(w.about) == 1 {
		p.Target = &model.UnknownRef{Unknown: w.about[0]}
	} else {
		v := &model.Vector{}
		for _, u := range w.about {
			v.Items = append(v.Items, &model.UnknownRef{Unknown: u})
		}
		p.Target, p.Joint = v, true
		target = "(" + target + ")"
	}
	var n *named
	if d.Kernel != nil {
		n = recogniseLaw(d.Kernel, d.Parameters)
	}
	switch {
	case n != nil && n.flat:
		p.Form, p.Text = model.ByFlat, target+" flat"
	case n != nil:
		p.Form, p.Dist, p.Text = model.ByDist, n.dist, target+" as "+n.text
	case d.Expr != nil:
		p.Form, p.Kernel, p.Text = model.ByKernel, d.Expr, target+" ∝ "+d.Name
		if w.long {
			p.Text = target + " " + ruleText(d.Rule)
		}
		if len(w.about) == 1 && len(d.Parameters) > 1 {
			// One law for all components, not one for each.
			v := &model.Vector{}
			for _, q := range d.Parameters {
				v.Items = append(v.Items, &model.UnknownRef{Unknown: q.Unknown, Which: model.Fixed, Component: q.Component})
			}
			p.Target, p.Joint = v, true
		}
		if len(d.Parameters) == 1 {
			// The information may exist on a part of the support only.
			u, x := w.about[0], d.Parameters[0].Symbol
			if x.Low != nil && (u.Support.Low == nil || u.Support.Low.Cmp(x.Low) < 0) {
				p.Truncated = &model.Range{Low: number(x.Low), LowOpen: true}
			}
		}
	default:
		p.Form, p.Text = model.ByRule, target+" "+ruleText(d.Rule)
	}
	return p
}

// ruleText is a rule as the language writes it.
func ruleText(r *model.RulePrior) string {
	switch r.Name {
	case model.ReferencePrior:
		return string(r.Name) + " " + orderText(r.Order)
	case model.ConstrainedMean:
		if v, ok := exactIn(r.Mean, 0); ok {
			return string(r.Name) + " " + v.RatString()
		}
	}
	return string(r.Name)
}
