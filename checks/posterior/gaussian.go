package posterior

import (
	"math"
	"slices"

	"wellposed/parser/model"
)

// gaussian is a block of variables with a normal law given all the others: they
// enter normal readings and normal priors linearly. It is integrated exactly.
type gaussian struct {
	slots []int
	at    map[int]int // slot → place in the block
	rows  []gaussRow
	// reference is a point near which the block lies: numbers are taken as
	// differences from it, so that nothing cancels.
	reference []float64
	rest      fn // the other factors

	// The normal law at the last point.
	q      []float64 // lower Cholesky factor, row by row
	mean   []float64
	work   []float64
	ok     bool
	logDet float64

	// A variable with a normal prior of its own is written as its mean plus its
	// spread times a standard normal number: then nothing cancels when the spread
	// is small. own is its row, −1 for a flat one; order has parents first.
	own    []int
	order  []int
	spread []float64
	dense  []float64
}

// gaussRow is one normal factor: residual − Σ coefficient × deviation.
type gaussRow struct {
	places            []int
	coefficients      []fn
	fixed             []float64 // set when all coefficients are known
	residual          fn        // y − mean at the reference
	static            bool      // the residual does not depend on the point
	value             float64
	count, squares    float64
	logSD             fn
	group             int // rows with the same logSD at every point
	coefficientsFixed bool
	// closure are the places that the row reaches through means, children first.
	closure []int
	a       []float64 // the coefficients at the last point
	slot    int       // place of the variable that the row is the prior of, or −1
}

// eliminate finds the block of a group of variables; nil when there is none.
func (p *problem) eliminate(members []int, factors []factor) (*gaussian, []int) {
	in := map[int]bool{}
	for _, i := range members {
		c := p.coords[i]
		if c.kind == wholeLine && p.vars[i].unknown.Kind.Name != "cutpoints" {
			in[i] = true
		}
	}
	for changed := true; changed; {
		changed = false
		drop := func(i int) {
			if in[i] {
				delete(in, i)
				changed = true
			}
		}
		for _, f := range factors {
			if f.gauss == nil {
				if !f.flat {
					for _, s := range f.slots {
						drop(s)
					}
				}
				continue
			}
			for _, s := range f.gauss.sdSlots {
				drop(s)
			}
			for _, s := range p.notLinear(f.gauss, in) {
				drop(s)
			}
		}
	}
	if len(in) == 0 || len(in) > 400 {
		return nil, members
	}
	g := &gaussian{at: map[int]int{}}
	var outer []int
	for _, i := range members {
		if in[i] {
			g.at[i] = len(g.slots)
			g.slots = append(g.slots, i)
		} else {
			outer = append(outer, i)
		}
	}
	n := len(g.slots)
	g.reference, g.mean, g.work, g.q = make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n*n)
	var others []factor
	groups := map[any]int{}
	for _, f := range factors {
		if f.gauss == nil || !touches(f, in) {
			if !f.flat {
				others = append(others, f)
			}
			continue
		}
		r := p.gaussRow(f.gauss, g, in)
		r.slot = -1
		if f.gauss.slot >= 0 && in[f.gauss.slot] {
			r.slot = g.at[f.gauss.slot]
		}
		r.group = len(g.rows)
		if f.gauss.alike != nil {
			if k, ok := groups[f.gauss.alike]; ok {
				r.group = k
			} else {
				groups[f.gauss.alike] = r.group
			}
		}
		g.rows = append(g.rows, r)
	}
	g.rest = density(others)
	g.arrange()
	return g, outer
}

// arrange finds the order of the block, parents first, and what rows reach.
func (g *gaussian) arrange() {
	n := len(g.slots)
	g.own, g.spread, g.dense = make([]int, n), make([]float64, n), make([]float64, n)
	for i := range g.own {
		g.own[i] = -1
	}
	for i := range g.rows {
		if t := g.rows[i].slot; t >= 0 && g.own[t] < 0 {
			g.own[t] = i
		}
	}
	done := make([]int, n) // 1 under way, 2 done
	var visit func(t int)
	visit = func(t int) {
		if done[t] != 0 {
			if done[t] == 1 {
				refuse("normal priors that refer to each other in a circle")
			}
			return
		}
		done[t] = 1
		if i := g.own[t]; i >= 0 {
			for _, q := range g.rows[i].places {
				if q != t {
					visit(q)
				}
			}
		}
		done[t] = 2
		g.order = append(g.order, t)
	}
	for t := range n {
		visit(t)
	}
	rank := make([]int, n)
	for k, t := range g.order {
		rank[t] = k
	}
	for i := range g.rows {
		r := &g.rows[i]
		reached := map[int]bool{}
		var reach func(t int)
		reach = func(t int) {
			if reached[t] {
				return
			}
			reached[t] = true
			if k := g.own[t]; k >= 0 && k != i {
				for _, q := range g.rows[k].places {
					if q != t {
						reach(q)
					}
				}
			}
		}
		for _, t := range r.places {
			reach(t)
		}
		for t := range reached {
			r.closure = append(r.closure, t)
		}
		slices.SortFunc(r.closure, func(a, b int) int { return rank[b] - rank[a] })
	}
}

// reduce rewrites coefficients of the variables, in dense, as coefficients of
// the flat variables and the standard normal numbers.
func (g *gaussian) reduce(closure []int) {
	v := g.dense
	for _, t := range closure {
		i := g.own[t]
		if i < 0 || v[t] == 0 {
			continue
		}
		r := &g.rows[i]
		for j, q := range r.places {
			if q != t {
				v[q] += v[t] * r.a[j]
			}
		}
		v[t] *= g.spread[t]
	}
}

func touches(f factor, in map[int]bool) bool {
	return slices.ContainsFunc(f.slots, func(s int) bool { return in[s] })
}

// notLinear are slots of the block that a mean does not contain linearly.
func (p *problem) notLinear(f *gaussFactor, in map[int]bool) []int {
	bad := map[int]bool{}
	p.linearity(f.mean, f.row, in, bad)
	var out []int
	for s := range bad {
		out = append(out, s)
	}
	slices.Sort(out)
	return out
}

// linearity returns the slots of the block in an expression, and marks in bad
// those that enter it in another way than linearly.
func (p *problem) linearity(e model.Expr, row int, in, bad map[int]bool) []int {
	all := func() []int {
		var out []int
		for _, s := range p.compiler.touching(func() fn { p.compiler.vector(e, row); return nil }).slots {
			if in[s] {
				out = append(out, s)
			}
		}
		return out
	}
	spoil := func(list []int) {
		for _, s := range list {
			bad[s] = true
		}
	}
	if model.Known(e) {
		return nil
	}
	switch x := e.(type) {
	case *model.UnknownRef:
		return all()
	case *model.LetRef:
		return p.linearity(x.Let.Value, row, in, bad)
	case *model.Call:
		switch x.Func {
		case "linear", "sum", "mean":
			return all()
		case "previous":
			return p.linearity(x.Args[0], row-1, in, bad)
		}
	case *model.Op:
		if len(x.Args) == 1 {
			return p.linearity(x.Args[0], row, in, bad)
		}
		a, b := p.linearity(x.Args[0], row, in, bad), p.linearity(x.Args[1], row, in, bad)
		switch x.Op {
		case "+", "-":
			return append(a, b...)
		case "*":
			if len(a) > 0 && len(b) > 0 {
				spoil(b) // keep one side
			}
			return append(a, b...)
		case "/":
			spoil(b)
			return append(a, b...)
		}
	}
	list := all()
	spoil(list)
	return list
}

// gaussRow prepares a factor: the mean is linear in the block, so differences of
// its values are the coefficients.
func (p *problem) gaussRow(f *gaussFactor, g *gaussian, in map[int]bool) gaussRow {
	r := gaussRow{count: f.count, squares: f.squares, logSD: f.logSD}
	var mean term
	touched := p.compiler.touching(func() fn { mean = p.compiler.compile(f.mean, f.row); return nil }).slots
	var slots []int
	pure := true
	for _, s := range touched {
		if in[s] {
			slots = append(slots, s)
		} else {
			pure = false
		}
	}
	if f.slot >= 0 && in[f.slot] && !slices.Contains(slots, f.slot) {
		slots = append(slots, f.slot)
	}
	for _, s := range slots {
		r.places = append(r.places, g.at[s])
	}
	// zeroed evaluates the mean with the block at given values.
	evaluate := func(s *state, values func(k int) float64) float64 {
		for _, t := range slots {
			s.x[t] = values(t)
		}
		return mean.value(s)
	}
	none := func(int) float64 { return 0 }
	for _, t := range slots {
		unit := func(k int) float64 {
			if k == t {
				return 1
			}
			return 0
		}
		own := 0.0
		if t == f.slot {
			own = 1
		}
		r.coefficients = append(r.coefficients, func(s *state) float64 { return evaluate(s, unit) - evaluate(s, none) - own })
	}
	atReference := func(k int) float64 { return g.reference[g.at[k]] }
	r.residual = func(s *state) float64 {
		m := evaluate(s, atReference)
		switch {
		case f.slot >= 0 && in[f.slot]:
			return g.reference[g.at[f.slot]] - m
		case f.slot >= 0:
			return s.x[f.slot] - m
		}
		return f.y - m
	}
	r.coefficientsFixed = pure
	r.static = pure && (f.slot < 0 || in[f.slot])
	return r
}

// freeze stores what does not depend on the point, after the reference is set.
func (g *gaussian) freeze(s *state) {
	g.settle(s)
	for i := range g.rows {
		r := &g.rows[i]
		if r.coefficientsFixed && r.fixed == nil {
			r.fixed = make([]float64, len(r.coefficients))
			for j, c := range r.coefficients {
				r.fixed[j] = c(s)
			}
		}
		if r.static {
			r.value = r.residual(s)
		}
	}
}

// settle puts the variables with a prior of their own at their means, given the
// reference of the flat ones.
func (g *gaussian) settle(s *state) {
	for _, t := range g.order {
		if i := g.own[t]; i >= 0 {
			r := &g.rows[i]
			g.reference[t] = 0
			g.reference[t] = -r.residual(s)
		}
	}
}

// solve finds the normal law of the block at a point and returns the logarithm
// of the integral over it, −Inf when the block is not held.
func (g *gaussian) solve(s *state) float64 {
	n := len(g.slots)
	q, b := g.q, g.work
	clear(q)
	clear(b)
	moving := false
	for _, t := range g.order {
		i := g.own[t]
		if i < 0 {
			continue
		}
		r := &g.rows[i]
		g.spread[t] = math.Exp(r.logSD(s))
		q[t*n+t] = 1
		if r.a = r.fixed; r.a == nil {
			moving = true
			r.a = make([]float64, len(r.coefficients))
			for j, f := range r.coefficients {
				r.a[j] = f(s)
			}
		}
		if !r.static {
			moving = true
		}
	}
	if moving {
		g.settle(s)
	}
	c := 0.0
	var buffer [64]float64
	last, ls, w := -1, 0.0, 0.0
	for i := range g.rows {
		r := &g.rows[i]
		if r.slot >= 0 && g.own[r.slot] == i {
			continue
		}
		if r.group != last || r.group == i {
			ls = r.logSD(s)
			w = math.Exp(-2 * ls)
			last = r.group
		}
		a := r.fixed
		if a == nil {
			a = buffer[:0]
			for _, f := range r.coefficients {
				a = append(a, f(s))
			}
		}
		e := r.value
		if !r.static || moving {
			e = r.residual(s)
		}
		k := w * r.count
		c += k*e*e + w*r.squares + 2*r.count*ls
		v := g.dense
		for j, t := range r.places {
			v[t] = a[j]
		}
		g.reduce(r.closure)
		for j, pj := range r.closure {
			b[pj] += k * v[pj] * e
			for _, pl := range r.closure[:j+1] {
				hi, lo := max(pj, pl), min(pj, pl)
				q[hi*n+lo] += k * v[pj] * v[pl]
			}
		}
		for _, t := range r.closure {
			v[t] = 0
		}
	}
	g.ok = false
	// Cholesky in place.
	logDet := 0.0
	for i := range n {
		for j := 0; j <= i; j++ {
			t := q[i*n+j]
			for k := range j {
				t -= q[i*n+k] * q[j*n+k]
			}
			if i == j {
				if !(t > 1e-13*q[i*n+i]) || math.IsInf(t, 1) {
					return -inf
				}
				q[i*n+i] = math.Sqrt(t)
				logDet += math.Log(q[i*n+i])
			} else {
				q[i*n+j] = t / q[j*n+j]
			}
		}
	}
	// z = L⁻¹ b, mean = L⁻ᵀ z.
	quad := 0.0
	for i := range n {
		t := b[i]
		for k := range i {
			t -= q[i*n+k] * b[k]
		}
		b[i] = t / q[i*n+i]
		quad += b[i] * b[i]
	}
	for i := n - 1; i >= 0; i-- {
		t := b[i]
		for k := i + 1; k < n; k++ {
			t -= q[k*n+i] * g.mean[k]
		}
		g.mean[i] = t / q[i*n+i]
	}
	g.ok, g.logDet = true, logDet
	return -logDet - (c-quad)/2 + float64(n)*logTwoPi/2 + g.rest(s)
}

// along is the mean and variance of Σ a_k × block_k, k by place, after solve.
func (g *gaussian) along(a []float64) (mean, variance float64) {
	n := len(g.slots)
	v := g.dense
	for k := range a {
		v[k] = a[k]
		mean += a[k] * g.reference[k]
	}
	for k := n - 1; k >= 0; k-- { // children first
		t := g.order[k]
		g.reduce([]int{t})
	}
	z := g.work
	for i := range n {
		t := v[i]
		mean += v[i] * g.mean[i]
		for k := range i {
			t -= g.q[i*n+k] * z[k]
		}
		z[i] = t / g.q[i*n+i]
		variance += z[i] * z[i]
	}
	clear(v)
	return mean, variance
}
