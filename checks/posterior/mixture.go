package posterior

import (
	"cmp"
	"math"
	"slices"

	"wellposed/checks/posterior/quad"
	"wellposed/checks/posterior/special"
)

// piece is a part of the law of a quantity: given the outer variables it is
// either normal or a function along the line of one variable.
type piece struct {
	weight float64
	edge   bool
	// panel and node say where in a panel of the next outer line the piece stands.
	panel, node int

	// Normal with this mean and sd; sd 0 is a single value.
	mean, sd float64

	// The quantity g along a line.
	line *quad.Line
	g    func(u float64) float64
	u    []float64
	at   []float64 // g at u
	mass []float64 // share of each node
	cdf  []float64
	up   []float64
	ends []bool
}

// along makes a piece from a line.
func along(weight float64, edge bool, l *quad.Line, g func(u float64) float64) *piece {
	p := &piece{weight: weight, edge: edge, line: l, g: g}
	n := l.Nodes()
	p.u, p.mass, p.at, p.ends = make([]float64, 0, n), make([]float64, 0, n), make([]float64, 0, n), make([]bool, 0, n)
	l.EachEdge(func(u, share float64, e bool) {
		p.u = append(p.u, u)
		p.mass = append(p.mass, share)
		p.ends = append(p.ends, e)
		p.at = append(p.at, g(u))
	})
	p.turns()
	p.cdf, p.up = make([]float64, len(p.u)), make([]float64, len(p.u))
	for i, u := range p.u {
		p.cdf[i], p.up[i] = l.CDF(u), l.Survival(u)
	}
	return p
}

// turns adds the places between nodes where g turns, so that no stretch above or
// below a value is missed.
func (p *piece) turns() {
	for i := 1; i+1 < len(p.u); i++ {
		a, b, c := p.at[i-1], p.at[i], p.at[i+1]
		if (b-a)*(c-b) >= 0 || b != b || math.IsInf(a, 0) || math.IsInf(b, 0) || math.IsInf(c, 0) {
			continue
		}
		sign := 1.0
		if b < a {
			sign = -1
		}
		const gold = 0.6180339887498949
		left, right := p.u[i-1], p.u[i+1]
		x, y := right-gold*(right-left), left+gold*(right-left)
		fx, fy := sign*p.g(x), sign*p.g(y)
		for range 60 {
			if fx > fy {
				right, y, fy = y, x, fx
				x = right - gold*(right-left)
				fx = sign * p.g(x)
			} else {
				left, x, fx = x, y, fy
				y = left + gold*(right-left)
				fy = sign * p.g(y)
			}
		}
		at := i
		if x > p.u[i] {
			at = i + 1
		}
		if x == p.u[i] || math.IsInf(fx, 0) || math.Abs(fx) > 1e6*(math.Abs(a)+math.Abs(b)+math.Abs(c)) {
			continue // a pole is found by its change of sign
		}
		p.u = slices.Insert(p.u, at, x)
		p.at = slices.Insert(p.at, at, sign*fx)
		p.mass = slices.Insert(p.mass, at, 0)
		p.ends = slices.Insert(p.ends, at, false)
		i++
	}
}

// below are the shares where g ≤ t and where g > t.
func (p *piece) below(t float64) (lower, upper float64) {
	if p.line == nil {
		if p.sd == 0 {
			if p.mean <= t {
				return 1, 0
			}
			return 0, 1
		}
		z := (t - p.mean) / p.sd
		return special.Phi(z), special.PhiUpper(z)
	}
	in := func(v float64) bool { return v <= t }
	return p.where(func(i int) bool { return in(p.at[i]) }, func(u float64) bool { return in(p.g(u)) }, func(u float64) float64 { return p.g(u) - t })
}

// where adds up the mass of the stretches on which a condition holds, given at
// the nodes and anywhere; distance, when known, is zero where it changes.
func (p *piece) where(atNode func(i int) bool, anywhere func(u float64) bool, distance func(u float64) float64) (yes, no float64) {
	n := len(p.u)
	add := func(holds bool, a, b cut) {
		m := math.Min(b.lower-a.lower, math.Inf(1))
		if a.lower > 0.5 {
			m = a.upper - b.upper
		}
		if holds {
			yes += math.Max(0, m)
		} else {
			no += math.Max(0, m)
		}
	}
	start := cut{0, 1}
	state := atNode(0)
	for i := 1; i < n; i++ {
		next := atNode(i)
		if next == state {
			continue
		}
		var u float64
		a, b := p.u[i-1], p.u[i]
		if distance != nil {
			u = quad.Root(distance, a, b, distance(a), distance(b))
		} else {
			for range 60 {
				m := a + (b-a)/2
				if anywhere(m) == state {
					a = m
				} else {
					b = m
				}
			}
			u = a
		}
		c := cut{p.line.CDF(u), p.line.Survival(u)}
		add(state, start, c)
		start, state = c, next
	}
	add(state, start, cut{1, 0})
	return yes, no
}

type cut struct{ lower, upper float64 }

// mixture is the law of a quantity.
type mixture struct {
	pieces []*piece
	// error bounds the error of a probability.
	error float64
	// grid says that the outer rule is the trapezoid rule, whose error is in error.
	grid bool
	// split replaces a panel of the outer line by its halves; nil where the pieces
	// come from several lines.
	split func(panel int) ([]*piece, error)
	atoms []atom // a coarse picture of the law, sorted
	mass  float64
}

func (m *mixture) normalise() {
	total := 0.0
	for _, p := range m.pieces {
		total += p.weight
	}
	for _, p := range m.pieces {
		p.weight /= total
	}
}

func (m *mixture) below(t float64) (lower, upper float64) {
	for _, p := range m.pieces {
		l, u := p.below(t)
		lower += p.weight * l
		upper += p.weight * u
	}
	return lower, upper
}

// errorAt is the error of P(≤ t): that of the density and that of the quadrature of
// the shares below t over the outer variables, by their last coefficients.
func (m *mixture) errorAt(t float64) float64 {
	total, panel := m.error, -1
	var values [quad.Order]float64
	flush := func() {
		if panel >= 0 {
			total += quad.Unresolved(&values)
		}
		clear(values[:])
	}
	if len(m.pieces) < 2 || m.grid {
		return total
	}
	for _, p := range m.pieces {
		if p.panel != panel {
			flush()
			panel = p.panel
		}
		l, _ := p.below(t)
		values[p.node] = p.weight * l
	}
	flush()
	return total
}

// refine halves the panels of the outer line that do not resolve P(≤ t).
func (m *mixture) refine(t float64) {
	const goal, most = 1e-7, 40
	if m.split == nil {
		return
	}
	type part struct {
		panel int
		err   float64
	}
	measure := func(pieces []*piece) (parts []part) {
		var values [quad.Order]float64
		for i, p := range pieces {
			l, _ := p.below(t)
			values[p.node] = p.weight * l
			if i == len(pieces)-1 || pieces[i+1].panel != p.panel {
				parts = append(parts, part{p.panel, quad.Unresolved(&values)})
				clear(values[:])
			}
		}
		return parts
	}
	parts := measure(m.pieces)
	for range most {
		worst, total := 0, 0.0
		for i, p := range parts {
			total += p.err
			if p.err > parts[worst].err {
				worst = i
			}
		}
		if total < goal {
			return
		}
		panel := parts[worst].panel
		finer, err := m.split(panel)
		if err != nil || len(finer) == 0 {
			return
		}
		at := slices.IndexFunc(m.pieces, func(p *piece) bool { return p.panel == panel })
		end := at
		for end < len(m.pieces) && m.pieces[end].panel == panel {
			end++
		}
		m.pieces = slices.Replace(m.pieces, at, end, finer...)
		parts = slices.Replace(parts, worst, worst+1, measure(finer)...)
	}
}

// quantile is the p-quantile, q = 1 − p.
func (m *mixture) quantile(p, q float64) float64 {
	if len(m.pieces) == 1 && m.pieces[0].line != nil {
		if up, down := m.pieces[0].monotone(); up || down {
			l := m.pieces[0]
			if down {
				p, q = q, p
			}
			if p < q {
				return l.g(l.line.Quantile(p))
			}
			return l.g(l.line.UpperQuantile(q))
		}
	}
	f := func(t float64) float64 {
		l, u := m.below(t)
		if p <= q {
			return l - p*(l+u)
		}
		return q*(l+u) - u
	}
	low, high := m.bracket(p)
	fl, fh := f(low), f(high)
	for range 200 {
		if fl <= 0 || math.IsInf(low, 0) {
			break
		}
		low -= (high - low) + 1e-9*math.Abs(low) + 1e-300
		fl = f(low)
	}
	for range 200 {
		if fh >= 0 || math.IsInf(high, 0) {
			break
		}
		high += (high - low) + 1e-9*math.Abs(high) + 1e-300
		fh = f(high)
	}
	if math.IsInf(low, 0) || math.IsInf(high, 0) || fl > 0 || fh < 0 {
		return math.NaN()
	}
	// Where a range spans many magnitudes its logarithm is halved.
	if low > 0 && high/low > 8 {
		g := func(v float64) float64 { return f(math.Exp(v)) }
		return math.Exp(quad.Root(g, math.Log(low), math.Log(high), fl, fh))
	}
	return quad.Root(f, low, high, fl, fh)
}

// monotone says whether g goes up, or down, along a line.
func (p *piece) monotone() (up, down bool) {
	up, down = true, true
	for i := 1; i < len(p.at); i++ {
		if p.at[i] != p.at[i] {
			return false, false
		}
		up = up && p.at[i] >= p.at[i-1]
		down = down && p.at[i] <= p.at[i-1]
	}
	return up, down
}

// bracket are values of the quantity around its p-quantile.
func (m *mixture) bracket(p float64) (low, high float64) {
	if m.atoms == nil {
		m.picture()
	}
	atoms, total := m.atoms, m.mass
	sum := 0.0
	low, high = atoms[0].t, atoms[len(atoms)-1].t
	for i, a := range atoms {
		sum += a.w
		if sum < p*total*0.98-1e-6 {
			low = a.t
		}
		if sum > p*total*1.02+1e-6 || i == len(atoms)-1 {
			high = a.t
			break
		}
	}
	if low == high {
		d := 1e-9*(atoms[len(atoms)-1].t-atoms[0].t) + 1e-12*math.Abs(low) + 1e-300
		low, high = low-d, high+d
	}
	return low, high
}

type atom struct{ t, w float64 }

// picture collects values of the quantity with their shares.
func (m *mixture) picture() {
	var atoms []atom
	for _, c := range m.pieces {
		if c.line == nil {
			for _, z := range []float64{-3, -1.5, -0.7, 0, 0.7, 1.5, 3} {
				atoms = append(atoms, atom{c.mean + z*c.sd, c.weight / 7})
			}
			continue
		}
		step := 1 + len(c.at)*len(m.pieces)/20000
		for i := 0; i < len(c.at); i += step {
			if v := c.at[i]; v == v && !math.IsInf(v, 0) {
				atoms = append(atoms, atom{v, c.weight * c.mass[i] * float64(step)})
			}
		}
	}
	slices.SortFunc(atoms, func(a, b atom) int { return cmp.Compare(a.t, b.t) })
	for _, a := range atoms {
		m.mass += a.w
	}
	m.atoms = atoms
}

// moments are mean and sd with their errors relative to the sd; NaN where the
// ends of the range carry so much that the moment may not exist.
func (m *mixture) moments() (mean, sd, meanError, sdError float64) {
	var first, firstEnd, scale float64
	each := func(visit func(w, v, variance float64, edge bool)) {
		for _, p := range m.pieces {
			if p.line == nil {
				visit(p.weight, p.mean, p.sd*p.sd, p.edge)
				continue
			}
			for i, v := range p.at {
				if p.mass[i] > 0 {
					visit(p.weight*p.mass[i], v, 0, p.edge || p.ends[i])
				}
			}
		}
	}
	median := m.quantile(0.5, 0.5)
	each(func(w, v, variance float64, edge bool) {
		d := v - median
		first += w * d
		scale += w * (math.Abs(d) + math.Sqrt(variance))
		if edge {
			firstEnd += w * (math.Abs(d) + math.Sqrt(variance))
		}
	})
	nan := math.NaN()
	if !(firstEnd <= 1e-7*scale) || math.IsInf(first, 0) {
		return nan, nan, nan, nan
	}
	mean = median + first
	var second, secondEnd float64
	each(func(w, v, variance float64, edge bool) {
		d := v - mean
		second += w * (d*d + variance)
		if edge {
			secondEnd += w * (d*d + variance)
		}
	})
	meanError = 2*firstEnd + m.error*scale*10
	if !(secondEnd <= 1e-7*second) || math.IsInf(second, 0) {
		return mean, nan, meanError, nan
	}
	sd = math.Sqrt(second)
	return mean, sd, meanError, sd * (secondEnd/second + 20*m.error)
}
