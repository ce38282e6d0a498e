package existence

import (
	"context"
	"fmt"
	"math/big"

	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
	"wellposed/parser/model"
)

// Closed-form blocks. A probability whose rows and prior make a Beta kernel, a
// rate that makes a Gamma kernel, or a Weibull scale, is integrated out; the
// exponents depend on what is left, and the integral over the block is a Beta or
// Gamma function of them (literature 1.5).

// powers is the log kernel of a block variable at given values of the rest:
// a·log v + b·log(1 − v) − c·v for a Beta (c = 0) or Gamma (b = 0) kernel; the
// integral needs a + 1 > 0, and b + 1 > 0 or c > 0.
type powers struct {
	a, b, c order.Value
	rest    order.Value // what does not depend on the block variable
}

func zeroPowers() powers {
	return powers{order.Number(0), order.Number(0), order.Number(0), order.Number(0)}
}

func (p *powers) add(q powers, times int64) {
	r := big.NewRat(times, 1)
	p.a = order.Add(p.a, order.Times(q.a, r))
	p.b = order.Add(p.b, order.Times(q.b, r))
	p.c = order.Add(p.c, order.Times(q.c, r))
	p.rest = order.Add(p.rest, order.Times(q.rest, r))
}

// block is one unknown that can be integrated out.
type block struct {
	g     *group
	v     variable
	kind  string // "beta", "gamma" or "weibull"
	rows  []rowFactor
	prior []priorFactor
}

// whenBlock integrates one block out of two unknowns and studies the other.
func whenBlock(g *group, ctx context.Context) *Verdict {
	if len(g.vars) < 2 || len(g.vars) > 12 || len(g.pops) > 0 {
		return nil
	}
	rows := g.merged(rowLimit)
	if rows == nil {
		return nil
	}
	// Every variable but one must be a block; each is integrated out alone, so no
	// factor may hold two of them.
	for keep := range g.vars {
		if r := g.keeping(ctx, keep, rows); r != nil {
			return r
		}
	}
	return nil
}

func (g *group) keeping(ctx context.Context, keep int, rows []rowFactor) *Verdict {
	rest := g.vars[keep]
	var blocks []*block
	usedRow := map[int]bool{}
	usedPrior := map[int]bool{}
	for i, v := range g.vars {
		if i == keep {
			continue
		}
		b := &block{g: g, v: v}
		for k, f := range rows {
			if !g.rowHolds(f, v) {
				continue
			}
			if usedRow[k] {
				return nil
			}
			usedRow[k] = true
			b.rows = append(b.rows, f)
		}
		for k, f := range g.priors {
			if !priorHolds(f, v) {
				continue
			}
			if usedPrior[k] {
				return nil
			}
			usedPrior[k] = true
			b.prior = append(b.prior, f)
		}
		if !b.recognise() {
			return nil
		}
		blocks = append(blocks, b)
	}
	var otherRows []rowFactor
	for k, f := range rows {
		if !usedRow[k] {
			otherRows = append(otherRows, f)
		}
	}
	h := group{analysis: g.analysis}
	for k, f := range g.priors {
		if !usedPrior[k] {
			h.priors = append(h.priors, f)
		}
	}
	lo, hi := g.support(rest)
	discrete := rest.Unknown.Kind != nil && rest.Unknown.Kind.Discrete
	l := line{lo: lo, hi: hi, discrete: discrete}
	l.kernel = func(x order.Value) order.Value {
		env := kernel.NewEnv(func(w variable) order.Value {
			if w == rest {
				return x
			}
			panic(&order.Unknown{Reason: "a block enters another factor"})
		})
		total := order.Number(0)
		for _, b := range blocks {
			total = order.Add(total, b.integral(env))
		}
		return order.Add(total, h.logKernel(env, otherRows))
	}
	if discrete && lo != nil {
		l.lo = new(big.Rat).Sub(lo, big.NewRat(1, 2))
		if ok, _ := l.finiteTerms(lo); !ok {
			return nil
		}
	}
	o := l.study(ctx)
	if o.undecided != "" && len(o.bad) == 0 {
		return nil
	}
	r := g.fromLine(o, rest)
	if r.Status == NotDecided || r.Code == NoSupport {
		return nil
	}
	names := ""
	for i, b := range blocks {
		if i > 0 {
			names += ", "
		}
		names += b.v.Name()
	}
	r.Claim = fmt.Sprintf("with %s integrated out in closed form, %s", names, r.Claim)
	r.Theorem = "closed-form integration, then the order of the kernel at its ends"
	if discrete {
		r.Code = PopulationSize
	}
	if blocks[0].kind == "weibull" && r.Status == DoesNotExist {
		r.Code = Failures
		r.Repairs = []string{"more failures, at different times", "a proper prior on " + rest.Name()}
	}
	return r
}

func (g *group) rowHolds(f rowFactor, v variable) bool {
	found := false
	for _, x := range observationExprs(f.obs) {
		walk(x, func(x model.Expr) {
			r, ok := x.(*model.UnknownRef)
			if !ok || r.Unknown != v.Unknown {
				return
			}
			switch r.Which {
			case model.Fixed:
				found = found || r.Component == v.Component
			case model.ByRow:
				found = found || g.env.ComponentOf(r.Unknown, r.By, f.row) == v.Component
			default:
				found = true
			}
		})
	}
	return found
}

func priorHolds(f priorFactor, v variable) bool {
	if len(f.prior.About) == 1 && f.prior.About[0] == v.Unknown && !v.Unknown.Scalar() {
		return f.component == v.Component
	}
	for _, u := range f.prior.About {
		if u == v.Unknown {
			return true
		}
	}
	for _, x := range append(distExprs(f.prior.Dist), f.prior.Kernel) {
		if unknownsIn(x)[v.Unknown] {
			return true
		}
	}
	return false
}

// recognise finds out which kernel the block has.
func (b *block) recognise() bool {
	u := b.v.Unknown
	if u.Size > 0 || u.Kind != nil && u.Kind.Discrete {
		return false
	}
	lo, hi := b.g.support(b.v)
	switch {
	case lo != nil && lo.Sign() == 0 && hi != nil && hi.Cmp(big.NewRat(1, 1)) == 0:
		b.kind = "beta"
	case lo != nil && lo.Sign() == 0 && hi == nil:
		b.kind = "gamma"
		for _, f := range b.rows {
			if f.obs.Dist.Spec.Name == "Weibull" {
				b.kind = "weibull"
			}
		}
	default:
		return false
	}
	return true
}

// integral is the log of the integral over the block.
func (b *block) integral(env *kernel.Env) order.Value {
	total := zeroPowers()
	for _, f := range b.rows {
		total.add(b.rowPowers(env, f), f.times)
	}
	for _, f := range b.prior {
		total.add(b.priorPowers(env, f), 1)
	}
	a := order.Add(total.a, order.Number(1))
	if order.Sign(a) <= 0 {
		// The block itself has no integral at 0.
		panic(&order.Unknown{Reason: b.v.Name() + " has no integral at 0"})
	}
	if b.kind == "beta" {
		c := order.Add(total.b, order.Number(1))
		if order.Sign(c) <= 0 {
			panic(&order.Unknown{Reason: b.v.Name() + " has no integral at 1"})
		}
		return order.Add(total.rest, order.Sub(order.Add(order.LogGamma(a), order.LogGamma(c)), order.LogGamma(order.Add(a, c))))
	}
	if order.Sign(total.c) <= 0 {
		panic(&order.Unknown{Reason: b.v.Name() + " has no integral at infinity"})
	}
	return order.Add(total.rest, order.Sub(order.LogGamma(a), order.Mul(a, order.Log(total.c))))
}

func (b *block) refuse() { panic(&order.Unknown{Reason: "no closed form"}) }

// hold reports that an expression does not contain the block's unknown.
func (b *block) free(xs ...model.Expr) bool {
	for _, x := range xs {
		if unknownsIn(x)[b.v.Unknown] {
			return false
		}
	}
	return true
}

// factorOf reads an expression as factor · v, or v / factor... and returns the
// factor; power is 1 for factor·v and −1 for factor/v.
func (b *block) factorOf(env *kernel.Env, x model.Expr, row int) (factor order.Value, power int) {
	x = unlet(x)
	if r, ok := x.(*model.UnknownRef); ok && r.Unknown == b.v.Unknown {
		return order.Number(1), 1
	}
	if o, ok := x.(*model.Op); ok && len(o.Args) == 2 {
		l, r := b.free(o.Args[0]), b.free(o.Args[1])
		switch {
		case o.Op == "*" && l != r:
			inner, other := o.Args[0], o.Args[1]
			if l {
				inner, other = other, inner
			}
			f, p := b.factorOf(env, inner, row)
			return order.Mul(f, env.Eval(other, row)), p
		case o.Op == "/" && r && !l:
			f, p := b.factorOf(env, o.Args[0], row)
			return order.Div(f, env.Eval(o.Args[1], row)), p
		case o.Op == "/" && l && !r:
			f, p := b.factorOf(env, o.Args[1], row)
			return order.Div(env.Eval(o.Args[0], row), f), -p
		}
	}
	b.refuse()
	return nil, 0
}

func (b *block) rowPowers(env *kernel.Env, f rowFactor) powers {
	o, row := f.obs, f.row
	if o.Reading != model.Values || o.Truncated != nil || o.Weight != nil || len(o.What) != 1 || o.Left != nil || !b.free(o.What...) {
		b.refuse()
	}
	y := env.Eval(o.What[0], row)
	one := order.Number(1)
	p := zeroPowers()
	censored := false
	if o.Right != nil {
		holds, ok := kernel.Condition(o.Right, row)
		if !ok {
			b.refuse()
		}
		censored = holds
	}
	d := o.Dist
	eval := func(label string) order.Value {
		x := d.Arg(label)
		if x == nil || !b.free(x) {
			b.refuse()
		}
		return env.Eval(x, row)
	}
	lgamma := order.LogGamma
	switch d.Spec.Name {
	case "Bernoulli", "Binomial":
		if b.kind != "beta" || censored || !isSelf(d.Arg("probability"), b.v) {
			b.refuse()
		}
		n := one
		if d.Spec.Name == "Binomial" {
			n = eval("trials")
		}
		miss := order.Sub(n, y)
		if order.Sign(miss) < 0 {
			panic(order.Vanishes)
		}
		p.a, p.b = y, miss
		if order.Exact(n) == nil {
			p.rest = order.Sub(lgamma(order.Add(n, one)), lgamma(order.Add(miss, one)))
		}
	case "geometric":
		if b.kind != "beta" || !isSelf(d.Arg("probability"), b.v) {
			b.refuse()
		}
		p.a, p.b = one, order.Sub(y, eval("first"))
	case "negative-Binomial":
		if b.kind == "beta" && isSelf(d.Arg("probability"), b.v) {
			k := eval("size")
			p.a, p.b = k, y
			p.rest = order.Sub(lgamma(order.Add(k, y)), lgamma(k))
			break
		}
		b.refuse()
	case "Poisson":
		if b.kind != "gamma" || censored {
			b.refuse()
		}
		c, power := b.factorOf(env, d.Arg("mean"), row)
		if power != 1 {
			b.refuse()
		}
		p.a, p.c = y, c
		p.rest = order.Mul(y, order.Log(c))
	case "Exponential", "Gamma":
		if b.kind != "gamma" || d.Arg("origin") != nil || d.Arg("mean") != nil && d.Spec.Name == "Gamma" {
			b.refuse()
		}
		shape := one
		if d.Spec.Name == "Gamma" {
			shape = eval("shape")
			if censored {
				b.refuse()
			}
		}
		x, want := d.Arg("rate"), 1
		if x == nil {
			if x, want = d.Arg("scale"), -1; x == nil {
				x = d.Arg("mean")
			}
		}
		// Only the rate itself makes a Gamma kernel in v; a scale would need the
		// coordinate 1/v.
		c, power := b.factorOf(env, x, row)
		if power*want != 1 {
			b.refuse()
		}
		if want == -1 {
			c = order.Recip(c)
		}
		p.c = order.Mul(c, y)
		if !censored {
			p.a = shape
			p.rest = order.Mul(shape, order.Log(c))
			if d.Spec.Name == "Gamma" {
				p.rest = order.Add(p.rest, order.Sub(order.Mul(order.Sub(shape, one), order.Log(y)), lgamma(shape)))
			}
		}
	case "Weibull":
		// In u = scale^(−shape): failures give shape · t^(shape−1) · u e^(−u t^shape).
		if b.kind != "weibull" || d.Arg("origin") != nil || !isSelf(d.Arg("scale"), b.v) {
			b.refuse()
		}
		k := eval("shape")
		p.c = order.Exp(order.Mul(k, order.Log(y)))
		if !censored {
			p.a = one
			p.rest = order.Add(order.Log(k), order.Mul(order.Sub(k, one), order.Log(y)))
		}
	default:
		b.refuse()
	}
	return p
}

// priorPowers reads the prior of the block as powers.
func (b *block) priorPowers(env *kernel.Env, f priorFactor) powers {
	pr := f.prior
	p := zeroPowers()
	one := order.Number(1)
	if len(pr.About) != 1 || pr.Truncated != nil {
		b.refuse()
	}
	var exponent order.Value = order.Number(0) // v^exponent
	switch {
	case pr.Form == model.ByDist:
		if _, plain := pr.Target.(*model.UnknownRef); !plain {
			b.refuse()
		}
		eval := func(label string) order.Value {
			if x := pr.Dist.Arg(label); x != nil {
				return env.Eval(x, 0)
			}
			return nil
		}
		switch name := pr.Dist.Spec.Name; {
		case name == "Beta" && b.kind == "beta" && eval("a") != nil:
			p.a, p.b = order.Sub(eval("a"), one), order.Sub(eval("b"), one)
			if order.Exact(p.a) == nil || order.Exact(p.b) == nil {
				p.rest = order.Sub(order.LogGamma(order.Add(eval("a"), eval("b"))), order.Add(order.LogGamma(eval("a")), order.LogGamma(eval("b"))))
			}
			return p
		case name == "Uniform" && b.kind == "beta" && isUnit(pr.Dist):
			return p
		case name == "Gamma" && b.kind == "gamma" && eval("rate") != nil:
			a, r := eval("shape"), eval("rate")
			p.a, p.c = order.Sub(a, one), r
			p.rest = order.Sub(order.Mul(a, order.Log(r)), order.LogGamma(a))
			return p
		case name == "Exponential" && b.kind == "gamma" && eval("rate") != nil:
			p.c = eval("rate")
			p.rest = order.Log(p.c)
			return p
		}
		b.refuse()
	default:
		// A flat or kernel prior that is a pure product of powers of v and 1 − v.
		a, c, ok := b.purePowers(f)
		if !ok {
			b.refuse()
		}
		exponent = order.Const(a)
		if c != nil {
			p.b = order.Const(c)
		}
	}
	if b.kind == "weibull" {
		// v^e dv = u^(−(e+1)/k − 1) du / k
		k := b.weibullShape(env)
		q := order.Div(order.Add(exponent, one), k)
		p.a = order.Neg(order.Add(q, one))
		p.rest = order.Neg(order.Log(k))
		return p
	}
	p.a = exponent
	return p
}

func isUnit(d *model.Dist) bool {
	lo, hi := kernel.Constant(d.Arg("low"), 0), kernel.Constant(d.Arg("high"), 0)
	return lo != nil && hi != nil && lo.Sign() == 0 && hi.Cmp(big.NewRat(1, 1)) == 0
}

func (b *block) weibullShape(env *kernel.Env) order.Value {
	for _, f := range b.rows {
		if x := f.obs.Dist.Arg("shape"); x != nil {
			for _, g := range b.rows {
				if g.obs != f.obs {
					b.refuse()
				}
			}
			return env.Eval(x, f.row)
		}
	}
	b.refuse()
	return nil
}

// purePowers recognises a prior that is exactly v^a (1 − v)^c: the forms people
// write, by structure.
func (b *block) purePowers(f priorFactor) (a, c *big.Rat, ok bool) {
	a, c = new(big.Rat), new(big.Rat)
	pr := f.prior
	self := func(x model.Expr) bool { return isSelf(x, b.v) }
	if pr.Form == model.ByKernel {
		if _, plain := pr.Target.(*model.UnknownRef); !plain {
			return nil, nil, false
		}
		if !b.productOf(pr.Kernel, big.NewRat(1, 1), a, c) {
			return nil, nil, false
		}
		return a, c, b.kind == "beta" || c.Sign() == 0
	}
	switch t := unlet(pr.Target).(type) {
	case *model.UnknownRef:
		return a, c, true
	case *model.Call:
		if len(t.Args) != 1 || !self(t.Args[0]) {
			return nil, nil, false
		}
		switch t.Func {
		case "log":
			a.SetInt64(-1)
		case "sqrt":
			a.SetFrac64(-1, 2)
		case "logit":
			a.SetInt64(-1)
			c.SetInt64(-1)
		case "odds":
			c.SetInt64(-2)
		default:
			return nil, nil, false
		}
		return a, c, true
	case *model.Op:
		if t.Op == "^" && self(t.Args[0]) {
			if q := kernel.Constant(t.Args[1], 0); q != nil && q.Sign() != 0 {
				a.Sub(q, big.NewRat(1, 1))
				return a, c, true
			}
		}
		if t.Op == "/" && isOne(t.Args[0]) && self(t.Args[1]) {
			a.SetInt64(-2)
			return a, c, true
		}
	}
	return nil, nil, false
}

// productOf adds the exponents of v and 1 − v in a product.
func (b *block) productOf(x model.Expr, times, a, c *big.Rat) bool {
	x = unlet(x)
	if !mentions(x) {
		return true
	}
	if isSelf(x, b.v) {
		a.Add(a, times)
		return true
	}
	switch x := x.(type) {
	case *model.Call:
		if x.Func == "sqrt" {
			return b.productOf(x.Args[0], new(big.Rat).Mul(times, big.NewRat(1, 2)), a, c)
		}
	case *model.Op:
		if len(x.Args) != 2 {
			return false
		}
		switch x.Op {
		case "*":
			return b.productOf(x.Args[0], times, a, c) && b.productOf(x.Args[1], times, a, c)
		case "/":
			return b.productOf(x.Args[0], times, a, c) && b.productOf(x.Args[1], new(big.Rat).Neg(times), a, c)
		case "^":
			if q := kernel.Constant(x.Args[1], 0); q != nil && !mentions(x.Args[1]) {
				return b.productOf(x.Args[0], new(big.Rat).Mul(times, q), a, c)
			}
		case "-":
			if isOne(x.Args[0]) && isSelf(x.Args[1], b.v) {
				c.Add(c, times)
				return true
			}
		}
	}
	return false
}
