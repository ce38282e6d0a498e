package posterior

import (
	"errors"
	"math"

	"wellposed/checks/posterior/quad"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// quantity is the posterior law of an expression.
type quantity struct {
	mix    *mixture
	how    diag.How
	method string
	// A closed form of one variable, and the expression as a function of its
	// coordinate; rising says which way it goes.
	closed *closed
	g      func(u float64) float64
	rising bool
	plain  bool // the expression is the variable
	sample *sample
}

// lawOf finds the law of an expression.
func (p *problem) lawOf(e model.Expr) (*quantity, error) {
	slots := p.slotsOf(e)
	if len(slots) == 0 {
		return nil, reach("%s depends on no unknown", model.Text(e))
	}
	members, factors := p.group(slots)
	p.place(members, factors)
	if len(members) == 1 {
		if c := p.closedForm(members[0], len(factors)); c != nil {
			if q := p.fromClosed(c, members[0], e); q != nil {
				return q, nil
			}
		}
	}
	p.cost = len(factors)
	for _, f := range factors {
		p.cost += f.weight
	}
	var q *quantity
	var err error
	if block, outer := p.eliminate(members, factors); block != nil {
		q, err = p.throughBlock(block, outer, members, factors, e, slots)
	} else {
		order := p.free(members)
		if p.cost > costly && len(order) >= 2 && len(order) <= 3 {
			if q, err = p.byGrid(order, density(factors), e, slots); q != nil || err != nil {
				return q, err
			}
		}
		q, err = p.byQuadrature(order, factors, e, slots)
	}
	if errors.Is(err, errWork) {
		for _, i := range members { // the coordinates start afresh
			p.coords[i] = coordinateOf(p.vars[i], i, p.narrowed(p.vars[i]))
		}
		return p.bySampling(p.free(members), density(factors), e)
	}
	return q, err
}

// fromClosed uses a closed form when the expression is monotone.
func (p *problem) fromClosed(c *closed, slot int, e model.Expr) *quantity {
	t := p.compiler.compile(e, 0)
	s := newState(len(p.vars))
	coord := p.coords[slot]
	q := &quantity{closed: c, how: diag.Proved, method: "closed form", rising: true}
	q.g = func(u float64) float64 { coord.set(s, u); return t.value(s) }
	if r, ok := e.(*model.UnknownRef); ok && r.Unknown == p.vars[slot].unknown {
		q.plain = true
		return q
	}
	low, high := c.quantile(1e-6), c.upper(1e-6)
	up, down := true, true
	last := math.NaN()
	for i := range 60 {
		v := q.g(low + (high-low)*float64(i)/59)
		if v != v {
			return nil
		}
		if i > 0 {
			up, down = up && v >= last, down && v <= last
		}
		last = v
	}
	if !up && !down {
		return nil
	}
	q.rising = up
	return q
}

// byQuadrature integrates over all variables.
func (p *problem) byQuadrature(order []int, factors []factor, e model.Expr, slots []int) (*quantity, error) {
	if len(order) > 4 {
		return p.bySampling(order, density(factors), e)
	}
	order = p.outermost(order, slots)
	n := p.nest(order, density(factors))
	if n.err != nil {
		return nil, n.err
	}
	g := p.compiler.compile(e, 0)
	if k := n.widest(g, slots); k >= 0 {
		last := len(order) - 1
		order[k], order[last] = order[last], order[k]
		n.hints[k], n.hints[last] = n.hints[last], n.hints[k]
	}
	outer, err := n.line(0)
	if err != nil {
		return nil, translated(err)
	}
	q := &quantity{how: diag.Bounded, method: "quadrature"}
	q.mix = &mixture{}
	along0 := func(s *state, c *coordinate) func(u float64) float64 {
		return func(u float64) float64 { c.set(s, u); return g.value(s) }
	}
	if len(order) == 1 || len(slots) == 1 && slots[0] == order[0] {
		c := p.coords[order[0]]
		q.mix.pieces = []*piece{along(1, false, outer, along0(n.s.clone(), &c))}
	} else {
		if len(order) > 3 {
			return p.bySampling(order, density(factors), e)
		}
		c := p.coords[order[len(order)-1]]
		err := n.walk(0, outer, 1, false, len(order)-1, func(share float64, edge bool, panel, node int, l *quad.Line) {
			if l == nil {
				l, err = n.line(len(order) - 1)
				if err != nil {
					return
				}
			}
			piece := along(share, edge, l, along0(n.s.clone(), &c))
			piece.panel, piece.node = panel, node
			q.mix.pieces = append(q.mix.pieces, piece)
		})
		if err != nil {
			return nil, translated(err)
		}
		if len(order) == 2 {
			q.mix.split = n.splitter(outer, func(l *quad.Line) *piece { return along(0, false, l, along0(n.s.clone(), &c)) })
		}
		q.mix.normalise()
	}
	if n.err != nil {
		return nil, translated(n.err)
	}
	q.mix.error = 4*n.error + 4*n.tol[0]*boolean(len(order) > 1)
	return q, nil
}

func boolean(b bool) float64 {
	if b {
		return 1
	}
	return 0
}

// outermost orders the variables: the one asked for comes first when it is the
// only one, last when it is one of several.
func (p *problem) outermost(order, slots []int) []int {
	asked := map[int]bool{}
	for _, s := range slots {
		asked[s] = true
	}
	sticks := false
	for _, i := range order {
		sticks = sticks || p.coords[i].kind == stick || p.coords[i].kind == increasing
	}
	if sticks {
		return order
	}
	var first, rest []int
	for _, i := range order {
		if asked[i] {
			first = append(first, i)
		} else {
			rest = append(rest, i)
		}
	}
	if len(slots) == 1 {
		return append(first, rest...)
	}
	return append(rest, first...)
}

// throughBlock integrates the normal block exactly and the rest by quadrature.
func (p *problem) throughBlock(b *gaussian, outer, members []int, factors []factor, e model.Expr, slots []int) (*quantity, error) {
	s := newState(len(p.vars))
	bad := map[int]bool{}
	in := map[int]bool{}
	for _, i := range b.slots {
		in[i] = true
	}
	inside := p.linearity(e, 0, in, bad)
	if len(outer) > 4 {
		return p.bySampling(p.free(members), density(factors), e)
	}
	if len(bad) > 0 {
		return p.byQuadrature(p.free(members), factors, e, slots)
	}
	marginal := func(s *state) float64 { return b.solve(s) }
	q := &quantity{how: diag.Bounded, method: "normal part in closed form, quadrature over the rest", mix: &mixture{}}
	order := outer
	if len(inside) == 0 {
		order = p.outermost(outer, slots)
	}
	for _, i := range order {
		p.coords[i].set(s, 0)
	}
	b.freeze(s)
	if b.solve(s); b.ok {
		b.recentre(s)
	}
	g := p.compiler.compile(e, 0)
	coefficients := make([]float64, len(b.slots))
	linear := func(s *state) (mean, sd float64) {
		for _, i := range b.slots {
			s.x[i] = 0
		}
		base := g.value(s)
		for k, i := range b.slots {
			s.x[i] = 1
			coefficients[k] = g.value(s) - base
			s.x[i] = 0
		}
		m, v := b.along(coefficients)
		return base + m, math.Sqrt(v)
	}
	if len(order) == 0 {
		if b.solve(s); !b.ok {
			return nil, translated(quad.ErrNotIntegrable)
		}
		q.how, q.method = diag.Proved, "closed form"
		m, sd := linear(s)
		q.mix.pieces = []*piece{{weight: 1, mean: m, sd: sd}}
		q.mix.error = 1e-14
		return q, nil
	}
	n := p.nest(order, marginal)
	if n.err != nil {
		return nil, n.err
	}
	if b.solve(n.s); b.ok {
		b.recentre(n.s)
	}
	line, err := n.line(0)
	if err != nil {
		return nil, translated(err)
	}
	switch {
	case len(inside) > 0:
		err = n.walk(0, line, 1, false, len(order), func(share float64, edge bool, panel, node int, _ *quad.Line) {
			if b.solve(n.s); b.ok {
				m, sd := linear(n.s)
				q.mix.pieces = append(q.mix.pieces, &piece{weight: share, edge: edge, panel: panel, node: node, mean: m, sd: sd})
			}
		})
	case len(order) == 1 || len(slots) == 1 && slots[0] == order[0]:
		c, at := p.coords[order[0]], n.s.clone()
		q.mix.pieces = []*piece{along(1, false, line, func(u float64) float64 { c.set(at, u); return g.value(at) })}
	default:
		c := p.coords[order[len(order)-1]]
		err = n.walk(0, line, 1, false, len(order)-1, func(share float64, edge bool, panel, node int, l *quad.Line) {
			if l == nil {
				if l, err = n.line(len(order) - 1); err != nil {
					return
				}
			}
			at := n.s.clone()
			piece := along(share, edge, l, func(u float64) float64 { c.set(at, u); return g.value(at) })
			piece.panel, piece.node = panel, node
			q.mix.pieces = append(q.mix.pieces, piece)
		})
	}
	if err != nil {
		return nil, translated(err)
	}
	if n.err != nil {
		return nil, translated(n.err)
	}
	if len(q.mix.pieces) == 0 {
		return nil, translated(quad.ErrEmpty)
	}
	q.mix.normalise()
	q.mix.error = 4*n.error + 4*n.tol[0]*boolean(len(order) > 1)
	return q, nil
}

// recentre moves the reference to the mean of the block at a point.
func (g *gaussian) recentre(s *state) {
	for k := range g.reference {
		if g.own[k] < 0 {
			g.reference[k] += g.mean[k]
		}
	}
	g.freeze(s)
	g.solve(s)
}

// quantile is the p-quantile with q = 1 − p and its error.
func (q *quantity) quantile(p, r float64) Number {
	n := Number{How: q.how, Method: q.method}
	switch {
	case q.sample != nil:
		n.Value, n.Error = q.sample.quantile(p)
	case q.closed != nil:
		if !q.rising {
			p, r = r, p
		}
		u := 0.0
		if p <= r {
			u = q.closed.quantile(p)
		} else {
			u = q.closed.upper(r)
		}
		n.Value = q.g(u)
		n.Error = 1e-12 * math.Abs(n.Value)
	default:
		n.Value = q.mix.quantile(p, r)
		if q.mix.split != nil && q.mix.errorAt(n.Value) > 3e-7 {
			q.mix.refine(n.Value)
			n.Value = q.mix.quantile(p, r)
		}
		n.Error = q.mix.quantileError(n.Value)
	}
	if n.Value != n.Value {
		n.How = diag.NotDecided
	}
	return n
}

// quantileError is the error of a probability over the density at a value.
func (m *mixture) quantileError(t float64) float64 {
	bound := m.errorAt(t)
	h := 1e-4 * math.Abs(t)
	if h == 0 {
		h = 1e-12
	}
	for range 40 {
		a, au := m.below(t - h)
		b, bu := m.below(t + h)
		d := math.Max(b-a, au-bu)
		if d > 1e2*bound && d > 1e-10 {
			return 2*h*bound/d + 1e-14*math.Abs(t)
		}
		h *= 4
	}
	return math.Inf(1)
}

// below is P(expression ≤ t).
func (q *quantity) below(t float64) (lower, upper, bound float64) {
	switch {
	case q.sample != nil:
		return q.sample.below(t)
	case q.closed != nil:
		lower, upper = q.closedBelow(t)
		return lower, upper, 1e-12 * math.Max(math.Min(lower, upper), 1e-300)
	}
	if q.mix.split != nil && q.mix.errorAt(t) > 3e-7 {
		q.mix.refine(t)
	}
	lower, upper = q.mix.below(t)
	return lower, upper, q.mix.errorAt(t)
}

// closedBelow finds the coordinate at which the expression passes t.
func (q *quantity) closedBelow(t float64) (lower, upper float64) {
	low, high := q.closed.quantile(1e-300), q.closed.upper(1e-15)
	fl, fh := q.g(low)-t, q.g(high)-t
	var u float64
	switch {
	case (fl > 0) == (fh > 0):
		// All of the mass that counts lies on one side.
		if q.rising == (fl > 0) {
			lower, upper = 0, 1
		} else {
			lower, upper = 1, 0
		}
		return lower, upper
	default:
		u = quad.Root(func(u float64) float64 { return q.g(u) - t }, low, high, fl, fh)
	}
	x := math.Exp(u)
	if q.closed.beta != nil {
		x = 1 / (1 + math.Exp(-u))
	}
	if q.plain {
		x = t
	}
	lower, upper = q.closed.tails(x)
	if !q.rising {
		lower, upper = upper, lower
	}
	return lower, upper
}

// summarise answers what a report asks for.
func (q *quantity) summarise(a *model.Analysis, r *model.Report) (*Summary, error) {
	s := &Summary{Analysis: a.Name, Report: r}
	if q.closed != nil && q.plain {
		s.Law = q.closed.name()
	}
	s.Median = q.quantile(0.5, 0.5)
	for _, ask := range r.Intervals {
		level, _ := ask.Level.Float64()
		miss := 1 - level
		in := Interval{Asked: ask}
		switch ask.Kind {
		case model.Upper:
			in.Low, in.High = q.limit(false), q.quantile(level, miss)
		case model.Lower:
			in.Low, in.High = q.quantile(miss, level), q.limit(true)
		case model.Shortest:
			in.Low, in.High = q.shortest(level)
		default:
			in.Low, in.High = q.quantile(miss/2, 1-miss/2), q.quantile(1-miss/2, miss/2)
		}
		s.Intervals = append(s.Intervals, in)
	}
	s.Mean, s.SD = q.moments()
	for _, in := range s.Intervals {
		if in.Low.Value != in.Low.Value && ask(in, model.Lower) || in.High.Value != in.High.Value && ask(in, model.Upper) {
			return nil, reach("a quantile of %s was not found", r.Name)
		}
	}
	return s, nil
}

func ask(in Interval, kind model.IntervalKind) bool {
	return in.Kind == kind || in.Kind == model.Central
}

// limit is the end of the range that a one-sided interval reaches to.
func (q *quantity) limit(high bool) Number {
	n := Number{How: q.how, Method: q.method}
	u := -700.0
	if high == q.rising {
		u = 700
	}
	switch {
	case q.closed != nil:
		n.Value = q.g(u)
		if n.Value > 0 && n.Value < 1e-290 {
			n.Value = 0
		}
	case q.sample == nil:
		n.Value = q.mix.limit(high)
	default:
		n.Value = math.Inf(int(2*boolean(high) - 1))
	}
	return n
}

// limit is the largest or smallest value that the quantity comes near.
func (m *mixture) limit(high bool) float64 {
	sign := -1.0
	if high {
		sign = 1
	}
	best := -inf
	for _, p := range m.pieces {
		if p.line == nil {
			if p.sd > 0 {
				return sign * inf
			}
			best = math.Max(best, sign*p.mean)
			continue
		}
		for i, v := range p.at {
			if i == 0 || i == len(p.at)-1 {
				v = p.g(700 * float64(2*min(i, 1)-1)) // the end of the range
			}
			if sign*v > best {
				best = sign * v
			}
		}
	}
	switch {
	case best > 1e290:
		return sign * inf
	case math.Abs(best) < 1e-290:
		return 0
	}
	return sign * best
}

// shortest finds the shortest interval of a level by golden section over the
// share below it.
func (q *quantity) shortest(level float64) (low, high Number) {
	miss := 1 - level
	width := func(p float64) float64 {
		if q.mix != nil {
			return q.mix.quantile(p+level, miss-p) - q.mix.quantile(p, 1-p)
		}
		return q.quantile(p+level, miss-p).Value - q.quantile(p, 1-p).Value
	}
	const g = 0.6180339887498949
	a, b := 1e-13, miss*(1-1e-12)
	x, y := b-g*(b-a), a+g*(b-a)
	fx, fy := width(x), width(y)
	for range 45 {
		if fx < fy {
			b, y, fy = y, x, fx
			x = b - g*(b-a)
			fx = width(x)
		} else {
			a, x, fx = x, y, fy
			y = a + g*(b-a)
			fy = width(y)
		}
	}
	p := (a + b) / 2
	low, high = q.quantile(p, 1-p), q.quantile(p+level, miss-p)
	if p < 1e-7*miss {
		low, high = q.limit(false), q.quantile(level, miss)
	} else if miss-p < 1e-7*miss {
		low, high = q.quantile(miss, level), q.limit(true)
	}
	e := 2e-7 * (high.Value - low.Value)
	low.Error += e
	high.Error += e
	return low, high
}

func (q *quantity) moments() (mean, sd Number) {
	mean, sd = Number{How: q.how, Method: q.method}, Number{How: q.how, Method: q.method}
	switch {
	case q.sample != nil:
		mean.Value, mean.Error, sd.Value, sd.Error = q.sample.moments()
	case q.closed != nil && q.plain:
		mean.Value, sd.Value = q.closed.moments()
		mean.Error, sd.Error = 1e-14*mean.Value, 1e-14*sd.Value
	case q.closed != nil:
		return nan(), nan()
	default:
		mean.Value, sd.Value, mean.Error, sd.Error = q.mix.moments()
	}
	if mean.Value != mean.Value {
		mean = nan()
	}
	if sd.Value != sd.Value {
		sd = nan()
	}
	return mean, sd
}
