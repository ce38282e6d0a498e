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

// sortRowLimit is how many different rows the calculus of orders works through.
const rowLimit = 400

// logKernel is the log posterior kernel of a group under a binding, up to a
// constant.
func (g *group) logKernel(env *kernel.Env, rows []rowFactor) order.Value {
	// Rows come first: where one is impossible nothing else matters, not even a
	// prior that is infinite there.
	total := order.Number(0)
	for _, f := range rows {
		total = order.Add(total, order.Times(env.Row(f.obs, f.row), big.NewRat(f.times, 1)))
	}
	for _, f := range g.pops {
		total = order.Add(total, env.Population(f.pop, f.component, f.row))
	}
	for _, f := range g.priors {
		total = order.Add(total, env.Prior(f.prior, f.component))
	}
	return total
}

// line is a log kernel of one variable on a support, given as a function of an
// order value.
type line struct {
	kernel   func(x order.Value) order.Value
	lo, hi   *big.Rat // nil is infinite
	discrete bool
}

// end is one end of an interval on which a kernel is positive and continuous.
type end struct {
	at    *big.Rat // nil is infinite
	side  int      // +1: approached from above (or −∞), −1: from below (or +∞)
	order order.Order
}

// name is the end as text: "0", "inf", "-inf".
func (e end) name() string {
	if e.at != nil {
		return ratText(e.at)
	}
	if e.side > 0 {
		return "-inf"
	}
	return "inf"
}

func ratText(r *big.Rat) string {
	if r.IsInt() {
		return r.Num().String()
	}
	if d, exact := decimalPlaces(r); exact {
		return r.FloatString(d)
	}
	return r.RatString()
}

// decimalPlaces tells whether a rational is a decimal of at most 12 places.
func decimalPlaces(r *big.Rat) (int, bool) {
	for d := range 13 {
		f, _ := new(big.Rat).SetString(r.FloatString(d))
		if f.Cmp(r) == 0 {
			return d, true
		}
	}
	return 0, false
}

// outcome is what the analysis of a line found.
type outcome struct {
	ends      []end
	bad       []end // ends at which the integral diverges
	anywhere  bool  // the kernel is positive somewhere
	undecided string
}

// study finds where the kernel is positive and continuous and decides every
// end. A kernel that is continuous and positive on an open interval has a
// finite integral over it exactly when it has one at both ends.
func (l line) study(ctx context.Context) outcome {
	var out outcome
	pieces, why := l.pieces(ctx)
	if why != "" {
		out.undecided = why
		return out
	}
	if l.discrete {
		// A sum also has the terms at the borders of the pieces.
		for _, p := range pieces {
			for _, at := range []*big.Rat{p.Lo, p.Hi} {
				if at == nil || !at.IsInt() {
					continue
				}
				if ok, why := l.finiteTerms(at); !ok {
					out.undecided = why
					return out
				}
			}
		}
	}
	for _, p := range pieces {
		out.anywhere = true
		for _, e := range []end{{at: p.Lo, side: 1}, {at: p.Hi, side: -1}} {
			if ctx.Err() != nil {
				out.undecided = "interrupted"
				return out
			}
			if l.discrete && e.at != nil {
				continue // finite sums of finite terms
			}
			err := order.Try(func() { e.order = l.at(e) })
			if err != nil {
				if out.undecided == "" {
					out.undecided = fmt.Sprintf("at %s: %s", e.name(), err.Reason)
				}
				continue
			}
			out.ends = append(out.ends, e)
			if !e.order.Finite {
				out.bad = append(out.bad, e)
			}
		}
	}
	return out
}

// at expands the kernel at an end and decides it.
func (l line) at(e end) order.Order {
	x := order.X()
	if e.at == nil {
		v := order.Recip(x)
		if e.side > 0 {
			v = order.Neg(v)
		}
		// dθ = x^(−2) dx
		return order.Integrable(order.Add(l.kernel(v), order.Times(order.L(), big.NewRat(2, 1))))
	}
	if e.side > 0 {
		return order.Integrable(l.kernel(order.Add(order.Const(e.at), x)))
	}
	return order.Integrable(l.kernel(order.Sub(order.Const(e.at), x)))
}

// pieces cuts the support into open intervals on which the kernel is positive
// and continuous.
func (l line) pieces(ctx context.Context) (found []order.Box, why string) {
	budget := 600
	var visit func(b order.Box, depth int)
	visit = func(b order.Box, depth int) {
		if why != "" {
			return
		}
		if budget--; budget < 0 || depth > 40 {
			why = "the kernel could not be shown to be continuous inside the support"
			return
		}
		if ctx.Err() != nil {
			why = "interrupted"
			return
		}
		split, err := l.tryBox(b)
		switch {
		case split != nil:
			at := split.At
			if at == nil || b.Lo != nil && at.Cmp(b.Lo) <= 0 || b.Hi != nil && at.Cmp(b.Hi) >= 0 {
				at = inside(b, depth)
			}
			visit(order.Box{Lo: b.Lo, Hi: at}, depth+1)
			visit(order.Box{Lo: at, Hi: b.Hi}, depth+1)
		case err == order.Vanishes:
		case err != nil:
			why = err.Reason
		default:
			found = append(found, b)
		}
	}
	visit(order.Box{Lo: l.lo, Hi: l.hi}, 0)
	return found, why
}

// tryBox evaluates the kernel over a box.
func (l line) tryBox(b order.Box) (split *order.Split, err *order.Unknown) {
	defer func() {
		switch p := recover().(type) {
		case nil:
		case *order.Split:
			split = p
		default:
			panic(p)
		}
	}()
	err = order.Try(func() { l.kernel(order.Over(&b)) })
	return split, err
}

// inside picks a rational inside a box.
func inside(b order.Box, depth int) *big.Rat {
	step := new(big.Rat).SetInt64(int64(1) << min(depth, 30))
	switch {
	case b.Lo == nil && b.Hi == nil:
		return new(big.Rat)
	case b.Lo == nil:
		return new(big.Rat).Sub(b.Hi, step)
	case b.Hi == nil:
		return new(big.Rat).Add(b.Lo, step)
	}
	m := new(big.Rat).Add(b.Lo, b.Hi)
	return m.Quo(m, big.NewRat(2, 1))
}

// decideOne decides a group with one unknown.
func (g *group) decideOne(ctx context.Context) *Verdict {
	v := g.vars[0]
	rows := g.merged(rowLimit)
	if rows == nil && len(g.rows) > 0 {
		return nil
	}
	lo, hi := g.support(v)
	l := line{lo: lo, hi: hi, discrete: v.Unknown.Kind != nil && v.Unknown.Kind.Discrete}
	l.kernel = func(x order.Value) order.Value {
		return g.logKernel(kernel.NewEnv(only(v, x)), rows)
	}
	if l.discrete && lo != nil {
		// Whole numbers only: the open interval starts below the lowest.
		l.lo = new(big.Rat).Sub(lo, big.NewRat(1, 2))
		if ok, why := l.finiteTerms(lo); !ok {
			return g.undecided(why)
		}
	}
	o := l.study(ctx)
	r := g.fromLine(o, v)
	if r.Certificate != nil && r.Certificate.Ends != nil {
		g.parts(r.Certificate.Ends, o, rows, lo, hi)
		if r.Status == DoesNotExist {
			r.Code = g.lineCode(r.Certificate.Ends)
		}
	}
	return r
}

// finiteTerms checks that a term of a sum is finite: a prior such as 1/N has
// none at N = 0.
func (l line) finiteTerms(lo *big.Rat) (bool, string) {
	err := order.Try(func() { l.kernel(order.Const(lo)) })
	if err != nil && err != order.Vanishes {
		return false, "a term of the sum: " + err.Reason
	}
	return true, ""
}

func (g *group) undecided(why string) *Verdict {
	return &Verdict{Status: NotDecided, How: diag.NotDecided, Unknowns: g.unknowns(), Code: OutOfReach, Claim: why}
}

// fromLine turns the study of one unknown's kernel into a verdict.
func (g *group) fromLine(o outcome, v variable) *Verdict {
	name := v.Name()
	switch {
	case len(o.bad) > 0:
		e := o.bad[0]
		r := &Verdict{Status: DoesNotExist, How: diag.Proved, Unknowns: g.unknowns(), Code: TailOrder,
			Theorem: "order of the kernel at the ends of its support", Source: "derivation"}
		for _, e := range o.bad {
			r.Escape = append(r.Escape, Escape{Unknown: v.Unknown, Component: v.Component, Toward: e.name()})
		}
		r.Claim = fmt.Sprintf("the kernel %s, so it has no integral there", orderText(name, e))
		r.Conditions = endConditions(name, o.ends)
		r.Repairs = []string{"a proper prior on " + v.Unknown.Name}
		r.Certificate = endsCertificate(name, o, false)
		return r
	case o.undecided != "":
		return g.undecided(o.undecided)
	case !o.anywhere:
		return &Verdict{Status: DoesNotExist, How: diag.Proved, Unknowns: g.unknowns(), Code: NoSupport,
			Claim:   "the likelihood is 0 for every value of " + name + " that the prior allows",
			Theorem: "a posterior needs a likelihood that is positive somewhere", Source: "derivation",
			Repairs:     []string{"a prior on " + v.Unknown.Name + " that reaches the values the data need"},
			Certificate: nowhereCertificate(name)}
	}
	r := &Verdict{Status: Exists, How: diag.Proved, Unknowns: g.unknowns(), Code: TailOrder,
		Theorem: "order of the kernel at the ends of its support", Source: "derivation"}
	r.Claim = "the kernel has a finite integral at every end of the support of " + name
	r.Conditions = endConditions(name, o.ends)
	r.Certificate = endsCertificate(name, o, true)
	return r
}

func (g *group) unknowns() []*model.Unknown {
	var us []*model.Unknown
	seen := map[*model.Unknown]bool{}
	for _, v := range g.vars {
		if !seen[v.Unknown] {
			seen[v.Unknown] = true
			us = append(us, v.Unknown)
		}
	}
	return us
}

// orderText says how a kernel behaves at an end, in the unknown's own name.
func orderText(name string, e end) string {
	o := e.order
	if o.Rapid != 0 {
		return fmt.Sprintf("%s as %s → %s", o.Text, name, e.pretty())
	}
	exponent := o.Text
	if o.Exact {
		p := new(big.Rat).Set(o.Power)
		base := name
		switch {
		case e.at == nil:
			p.Add(p, big.NewRat(2, 1)).Neg(p)
			if e.side > 0 {
				base = "|" + name + "|"
			}
		case e.at.Sign() != 0 && e.side > 0:
			base = "(" + name + " − " + ratText(e.at) + ")"
		case e.at.Sign() != 0:
			base = "(" + ratText(e.at) + " − " + name + ")"
		case e.side < 0:
			base = "|" + name + "|"
		}
		exponent = base + "^" + exponentText(p)
		if p.Sign() == 0 {
			return fmt.Sprintf("tends to a positive constant as %s → %s", name, e.pretty())
		}
		if o.LogPower != nil && o.LogPower.Sign() != 0 {
			exponent += " times the logarithm's power " + exponentText(o.LogPower)
		}
	}
	return fmt.Sprintf("is of order %s as %s → %s", exponent, name, e.pretty())
}

func (e end) pretty() string {
	switch n := e.name(); n {
	case "inf":
		return "∞"
	case "-inf":
		return "−∞"
	default:
		return n
	}
}

func exponentText(p *big.Rat) string {
	s := ratText(p)
	if p.Sign() < 0 || !p.IsInt() {
		return "(" + s + ")"
	}
	return s
}

// endConditions lists the condition at each outer end with its numbers.
func endConditions(name string, ends []end) []Condition {
	var out []Condition
	for _, e := range ends {
		c := Condition{Text: "finite integral at " + name + " = " + e.pretty(), Holds: e.order.Finite}
		switch o := e.order; {
		case o.Rapid != 0:
			c.Filled = o.Text
		case o.Exact && e.at == nil:
			p := new(big.Rat).Add(o.Power, big.NewRat(2, 1))
			c.Filled = fmt.Sprintf("exponent %s < −1", ratText(p.Neg(p)))
		case o.Exact:
			c.Filled = fmt.Sprintf("exponent %s > −1", ratText(o.Power))
		default:
			c.Filled = o.Text
		}
		if e.order.Finite && e.at != nil && e.order.Exact && e.order.Power.Sign() == 0 && e.order.LogPower == nil {
			continue // an ordinary point
		}
		out = append(out, c)
	}
	return out
}
