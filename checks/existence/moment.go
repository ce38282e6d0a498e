package existence

import (
	"context"
	"fmt"
	"math/big"

	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Moment decides whether the k-th absolute moment of a reported quantity exists:
// k = 1 for a mean, 2 for an sd or a variance. Where the posterior itself does
// not exist, neither does any moment.
func Moment(ctx context.Context, a *model.Analysis, report *model.Report, k int) *Verdict {
	m := &momentCase{ctx: ctx, value: report.Value, k: k}
	us := unknownsIn(report.Value)
	for _, g := range split(a) {
		for _, v := range g.vars {
			if us[v.Unknown] {
				m.groups = append(m.groups, g)
				break
			}
		}
	}
	var v *Verdict
	if err := order.Try(func() { v = m.decide() }); err != nil {
		v = m.undecided(err.Reason)
	}
	return v
}

type momentCase struct {
	ctx    context.Context
	value  model.Expr
	k      int
	groups []*group
}

func (m *momentCase) undecided(why string) *Verdict {
	var us []*model.Unknown
	for _, g := range m.groups {
		us = append(us, g.unknowns()...)
	}
	return &Verdict{Status: NotDecided, How: diag.NotDecided, Unknowns: us, Code: OutOfReach, Claim: why}
}

func (m *momentCase) exists(base *Verdict, why string) *Verdict {
	r := *base
	r.Claim = why
	r.Conditions, r.Escape, r.Repairs = nil, nil, nil
	return &r
}

func (m *momentCase) decide() *Verdict {
	if len(m.groups) == 0 {
		return &Verdict{Status: Exists, How: diag.Proved, Code: ProperPrior, Claim: "the quantity is a known number"}
	}
	verdicts := make([]*Verdict, len(m.groups))
	for i, g := range m.groups {
		verdicts[i] = g.decide(m.ctx)
		if verdicts[i].Status != Exists {
			return verdicts[i]
		}
	}
	if m.bounded() {
		return m.exists(verdicts[0], "the quantity is bounded, so every moment exists")
	}
	if len(m.groups) > 1 {
		return m.undecided("the quantity combines unknowns that are not connected by data")
	}
	g, base := m.groups[0], verdicts[0]
	if len(g.vars) == 1 {
		return m.line(g, g.vars[0], m.oneKernel(g))
	}
	if base.Code == Overlap {
		if m.polynomial(g) {
			return m.exists(base, "the posterior is log-concave, so its tails fall exponentially and every power has a moment")
		}
		return m.undecided("an exponential of a coefficient")
	}
	if base.Code == ProperPrior {
		return m.byPrior(g, base)
	}
	if b := g.gaussian(m.ctx); b != nil && len(b.rest) == 1 {
		return m.gaussian(g, b, base)
	}
	return m.undecided("no theorem here covers the moments of this model")
}

// bounded evaluates the quantity over the supports.
func (m *momentCase) bounded() (ok bool) {
	defer func() {
		switch p := recover().(type) {
		case nil, *order.Split, *order.Unknown:
		default:
			panic(p)
		}
	}()
	env := kernel.NewEnv(func(v variable) order.Value {
		for _, g := range m.groups {
			for _, w := range g.vars {
				if w == v {
					return order.Range(g.support(v))
				}
			}
		}
		return order.Range(nil, nil)
	})
	switch v := env.Eval(m.value, 0).(type) {
	case *order.Boxed:
		lo, hi := v.Bounds()
		return lo > -1e300 && hi < 1e300
	default:
		_, _, ok := order.Enclosure(v)
		return ok
	}
}

func (m *momentCase) oneKernel(g *group) func(order.Value) order.Value {
	rows := g.merged(rowLimit)
	if rows == nil && len(g.rows) > 0 {
		panic(&order.Unknown{Reason: "too many different rows"})
	}
	return func(x order.Value) order.Value {
		return g.logKernel(kernel.NewEnv(only(g.vars[0], x)), rows)
	}
}

// line studies kernel · |quantity|^k in one unknown.
func (m *momentCase) line(g *group, v variable, k func(order.Value) order.Value) *Verdict {
	lo, hi := g.support(v)
	l := line{lo: lo, hi: hi, discrete: v.Unknown.Kind != nil && v.Unknown.Kind.Discrete}
	if l.discrete && lo != nil {
		l.lo = new(big.Rat).Sub(lo, big.NewRat(1, 2))
	}
	l.kernel = func(x order.Value) order.Value {
		total := k(x)
		q := kernel.NewEnv(only(v, x)).Eval(m.value, 0)
		if order.Sign(q) == 0 {
			return total
		}
		return order.Add(total, order.Times(order.Log(order.Abs(q)), big.NewRat(int64(m.k), 1)))
	}
	r := g.fromLine(l.study(m.ctx), v)
	m.word(r, v.Name())
	return r
}

func (m *momentCase) word(r *Verdict, name string) {
	what := "the mean"
	if m.k == 2 {
		what = "the variance"
	} else if m.k > 2 {
		what = fmt.Sprintf("the moment of order %d", m.k)
	}
	if r.Status == DoesNotExist {
		r.Claim = fmt.Sprintf("%s does not exist: the kernel times the quantity's power %d %s", what, m.k, r.Claim)
	}
}

// polynomial reports sums and products of unknowns, whose moments a log-concave
// posterior has.
func (m *momentCase) polynomial(*group) bool {
	ok := true
	walk(m.value, func(x model.Expr) {
		switch x := x.(type) {
		case *model.Op:
			switch x.Op {
			case "+", "-", "*", "neg":
			case "/":
				ok = ok && !mentions(x.Args[1])
			case "^":
				q := kernel.Constant(x.Args[1], 0)
				ok = ok && q != nil && q.IsInt() && q.Sign() > 0
			default:
				ok = false
			}
		case *model.Call:
			ok = ok && (x.Func == "expit" || x.Func == "Phi" || x.Func == "abs" || x.Func == "linear" || x.Func == "sum" || x.Func == "mean")
		}
	})
	return ok
}

// byPrior: with a bounded likelihood a moment that exists under the prior
// exists under the posterior.
func (m *momentCase) byPrior(g *group, base *Verdict) *Verdict {
	us := unknownsIn(m.value)
	if len(us) != 1 {
		return m.undecided("the quantity combines several unknowns")
	}
	for _, v := range g.vars {
		if !us[v.Unknown] || v.Unknown.Population != nil || !v.Unknown.Scalar() {
			continue
		}
		h := &group{analysis: g.analysis, env: g.env, vars: []variable{v}}
		for _, f := range g.priors {
			if priorHolds(f, v) {
				if len(f.prior.About) != 1 {
					return m.undecided("a joint prior")
				}
				h.priors = append(h.priors, f)
			}
		}
		if r := m.line(h, v, m.oneKernel(h)); r.Status == Exists {
			return m.exists(base, "the moment exists under the prior, and the likelihood is bounded")
		}
	}
	return m.undecided("the moment does not follow from that of the prior")
}

// gaussian: given the spread s, a coefficient of the block is normal with a mean
// that stays bounded and a variance of order s² at infinity, so its k-th moment
// adds the factor s^k there; a function of the spread is studied directly.
func (m *momentCase) gaussian(g *group, b *gaussBlock, base *Verdict) *Verdict {
	e := newEchelon(len(b.beta))
	for _, t := range b.terms {
		e.add(t)
	}
	marginal := b.marginal(e)
	if marginal == nil {
		return m.undecided("too many different spreads")
	}
	v := b.rest[0]
	us := unknownsIn(m.value)
	inner := func(x order.Value) order.Value {
		env := kernel.NewEnv(only(v, x))
		return order.Add(b.others(env), marginal(env))
	}
	if len(us) == 1 && us[v.Unknown] {
		return m.line(g, v, inner)
	}
	if us[v.Unknown] {
		return m.undecided("the quantity combines the spread and a coefficient")
	}
	// A linear form of flat coefficients whose variance grows with the spread.
	form, ok := g.linearize(m.value, func(u *model.Unknown) bool {
		for _, w := range b.beta {
			if w.Unknown == u {
				return true
			}
		}
		return false
	})
	if !ok {
		return m.undecided("the quantity is not linear in the coefficients")
	}
	for u := range us {
		if u.Population != nil {
			return m.undecided("the moments of a varying effect")
		}
	}
	r, ok := g.at(form, 0, b.index)
	if !ok || len(r.coef) == 0 {
		return m.undecided("the quantity is not linear in the coefficients")
	}
	for _, t := range b.terms {
		if _, known := knownWeight(t.class); known && !b.hier {
			return m.undecided("a known spread beside the unknown one")
		}
		if t.fresh && b.classes[t.class] == nil {
			// A normal prior on a coefficient, or known standard errors under
			// varying effects; the latter leave the growth as it is.
			for j := range t.coef {
				if b.beta[j].Unknown.Population == nil {
					return m.undecided("a proper prior on a coefficient")
				}
			}
		}
	}
	lo, hi := g.support(v)
	if hi != nil || lo == nil || lo.Sign() < 0 {
		return m.undecided("a bounded spread")
	}
	l := line{lo: lo, hi: hi}
	l.kernel = func(x order.Value) order.Value {
		// (1 + s)^k is of order 1 at 0 and s^k at infinity.
		return order.Add(inner(x), order.Times(order.Log(order.Add(order.Number(1), x)), big.NewRat(int64(m.k), 1)))
	}
	if !spreadIsSD(b, v) {
		return m.undecided("the unknown is not an sd")
	}
	out := g.fromLine(l.study(m.ctx), v)
	m.word(out, v.Name())
	return out
}

// spreadIsSD reports that every unknown spread grows in proportion to v.
func spreadIsSD(b *gaussBlock, v variable) bool {
	ok := true
	err := order.Try(func() {
		env := kernel.NewEnv(func(variable) order.Value { return order.Recip(order.X()) })
		for _, key := range b.order {
			c := b.classes[key]
			if c.known != nil {
				continue
			}
			s, found := args(env, c)("sd"), true
			if s == nil {
				if q := c.dist.Arg("variance"); q != nil {
					s = order.Sqrt(env.Eval(q, c.row))
				} else {
					found = false
				}
			}
			ok = ok && found && order.Tends(order.Mul(s, order.X())) == 1
		}
	})
	return ok && err == nil
}
