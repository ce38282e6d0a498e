// Package quad integrates a density of one real coordinate that is known up to
// a constant, and answers for its normaliser, distribution function, quantiles
// and expectations, each with an error estimate.
//
// The coordinate should be one in which both ends are infinite and the density
// falls at least exponentially: log x on (0, ∞), the log odds on an interval,
// asinh((x − centre)/scale) on the real line. The method is Gauss–Legendre
// quadrature on panels that are halved until the last Legendre coefficients
// vanish; the same coefficients give the distribution function between nodes.
package quad

import (
	"errors"
	"math"
	"sort"
)

// ErrNotIntegrable says that the density does not fall off at an end.
var ErrNotIntegrable = errors.New("the density does not fall off at an end of its range")

// ErrEmpty says that the density is zero wherever it was looked at.
var ErrEmpty = errors.New("the density is zero wherever it was looked at")

// ErrUnresolved says that the density varies too fast to be integrated.
var ErrUnresolved = errors.New("the density varies too fast to be integrated")

// LogDensity is the logarithm of a density up to a constant; −Inf for zero.
type LogDensity func(u float64) float64

// Hint is where a mode is thought to be and how wide it is.
type Hint struct{ Mode, Width float64 }

// depth is how far below the top, in logarithms, the density still counts.
const depth = 42

// Line is an integrated density.
type Line struct {
	panels []panel
	// Top is the largest logarithm of the density met; Modes the local maxima.
	Top   float64
	Modes []Hint
	// Total is the integral of exp(log density − Top), Error bounds the error of
	// Total, relative to it, as far as the last coefficients tell.
	Total, Error float64
	// Depth is how far below the top, in logarithms, the density still counts; 42
	// when 0. Moments of heavy tails need more.
	Depth float64
}

type panel struct {
	a, b        float64
	mass, start float64 // start: the mass left of a
	f           [order]float64
	c           [order]float64
	known       bool // whether c is set
	depth       int8
	err         float64
}

// maxPanels bounds the work on one line.
const maxPanels = 4000

// Integrate integrates a density. Without hints the whole range is scanned. The
// error aimed at is relative to the total.
func Integrate(log LogDensity, tolerance float64, hints ...Hint) (*Line, error) {
	l := &Line{}
	return l, l.integrate(log, tolerance, hints)
}

func (l *Line) integrate(log LogDensity, tolerance float64, hints []Hint) error {
	clean := func(u float64) float64 {
		v := log(u)
		if v != v {
			return math.Inf(-1)
		}
		return v
	}
	breaks, tails, err := l.locate(clean, hints)
	if err != nil {
		return err
	}
	// The density can't be known better than the rounding of its logarithm.
	tolerance = math.Max(tolerance, 1e-15*math.Abs(l.Top))
	// A stack of panels to do, leftmost on top, so that results come out sorted.
	var stack []panel
	for i := len(breaks) - 2; i >= 0; i-- {
		p := panel{a: breaks[i], b: breaks[i+1]}
		l.fill(clean, &p)
		stack = append(stack, p)
		l.Total += p.mass
	}
	l.panels = l.panels[:0]
	worst := 0.0
	for n := 0; len(stack) > 0; n++ {
		p := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		if p.err > tolerance*l.Total && p.depth < 48 && p.b-p.a > 1e-14*math.Max(math.Abs(p.a), math.Abs(p.b)) {
			if n > maxPanels {
				return ErrUnresolved
			}
			mid := p.a + (p.b-p.a)/2
			left, right := panel{a: p.a, b: mid, depth: p.depth + 1}, panel{a: mid, b: p.b, depth: p.depth + 1}
			l.fill(clean, &left)
			l.fill(clean, &right)
			l.Total += left.mass + right.mass - p.mass
			stack = append(stack, right, left)
			continue
		}
		worst += p.err
		l.panels = append(l.panels, p)
	}
	// Sum again, small tails first, so that both tails are accurate.
	l.Total = 0
	for i := range l.panels {
		l.panels[i].start = l.Total
		l.Total += l.panels[i].mass
	}
	if !(l.Total > 0) || math.IsInf(l.Total, 0) {
		return ErrEmpty
	}
	l.Error = (worst+tails)/l.Total + 4e-16 + 2e-16*math.Abs(l.Top)
	for _, m := range l.Modes {
		l.Error += 2e-16 * math.Abs(m.Mode) / m.Width
	}
	return nil
}

// fill evaluates the density at the nodes of a panel. The error of a panel is
// taken from its last two coefficients, which decay geometrically when the
// density is resolved.
func (l *Line) fill(log LogDensity, p *panel) {
	half, mid := (p.b-p.a)/2, p.a+(p.b-p.a)/2
	sum, c1, c2 := 0.0, 0.0, 0.0
	for i := range order {
		f := math.Exp(log(mid+half*nodes[i]) - l.Top)
		p.f[i] = f
		sum += weights[i] * f
		c1 += legendre[order-2][i] * f
		c2 += legendre[order-1][i] * f
	}
	p.mass = half * sum
	p.err = half * (math.Abs(c1) + math.Abs(c2)) / order
	if math.IsNaN(p.mass) || math.IsInf(p.mass, 0) {
		p.mass, p.err = 0, math.Inf(1)
	}
}

func (p *panel) coefficients() *[order]float64 {
	if !p.known {
		for k := range order {
			s := 0.0
			for i := range order {
				s += legendre[k][i] * p.f[i]
			}
			p.c[k] = s
		}
		p.known = true
	}
	return &p.c
}

// LogTotal is the logarithm of the integral of the density.
func (l *Line) LogTotal() float64 { return l.Top + math.Log(l.Total) }

// Ends are the ends of the range outside of which nothing was counted.
func (l *Line) Ends() (low, high float64) { return l.panels[0].a, l.panels[len(l.panels)-1].b }

// CDF is the share below u; Survival the share above it, both accurate when
// small.
func (l *Line) CDF(u float64) float64      { return clip(l.below(u) / l.Total) }
func (l *Line) Survival(u float64) float64 { return clip(l.above(u) / l.Total) }

func clip(x float64) float64 { return math.Max(0, math.Min(1, x)) }

func (l *Line) find(u float64) int {
	return sort.Search(len(l.panels), func(i int) bool { return l.panels[i].b > u })
}

func (l *Line) below(u float64) float64 {
	i := l.find(u)
	if i == len(l.panels) {
		return l.Total
	}
	p := &l.panels[i]
	if u <= p.a {
		return p.start
	}
	half := (p.b - p.a) / 2
	part, _ := antiderivative(p.coefficients(), (u-p.a)/half-1)
	return p.start + half*part
}

func (l *Line) above(u float64) float64 {
	i := l.find(u)
	if i == len(l.panels) {
		return 0
	}
	p := &l.panels[i]
	rest := 0.0
	for j := len(l.panels) - 1; j > i; j-- {
		rest += l.panels[j].mass
	}
	if u <= p.a {
		return rest + p.mass
	}
	half := (p.b - p.a) / 2
	part, _ := antiderivative(p.coefficients(), (u-p.a)/half-1)
	return rest + (p.mass - half*part)
}

// Quantile is the coordinate with the share p below it; UpperQuantile that with
// the share q above it, 0 < p, q < 1.
func (l *Line) Quantile(p float64) float64 {
	if p > 0.5 {
		return l.UpperQuantile(1 - p)
	}
	target := p * l.Total
	i := sort.Search(len(l.panels), func(i int) bool { return l.panels[i].start+l.panels[i].mass > target })
	if i == len(l.panels) {
		i--
	}
	return l.inside(i, target-l.panels[i].start)
}

// UpperQuantile is described at Quantile.
func (l *Line) UpperQuantile(q float64) float64 {
	if q > 0.5 {
		return l.Quantile(1 - q)
	}
	target, rest := q*l.Total, 0.0
	for i := len(l.panels) - 1; i >= 0; i-- {
		m := l.panels[i].mass
		if rest+m > target || i == 0 {
			return l.inside(i, m-(target-rest))
		}
		rest += m
	}
	return l.panels[0].a
}

// inside finds the place in a panel with a mass left of it in the panel.
func (l *Line) inside(i int, mass float64) float64 {
	p := &l.panels[i]
	c := p.coefficients()
	half := (p.b - p.a) / 2
	low, high := -1.0, 1.0
	t := math.Max(-1, math.Min(1, 2*mass/p.mass-1))
	for range 60 {
		g, slope := antiderivative(c, t)
		g = half*g - mass
		if g > 0 {
			high = t
		} else {
			low = t
		}
		next := t - g/(half*slope)
		if !(next > low && next < high) {
			next = (low + high) / 2
		}
		if math.Abs(next-t) < 1e-15 {
			t = next
			break
		}
		t = next
	}
	return p.a + half*(t+1)
}

// Density is the normalised density at u.
func (l *Line) Density(u float64) float64 {
	i := l.find(u)
	if i == len(l.panels) || u < l.panels[i].a {
		return 0
	}
	p := &l.panels[i]
	_, v := antiderivative(p.coefficients(), 2*(u-p.a)/(p.b-p.a)-1)
	return math.Max(0, v) / l.Total
}

// Each visits the nodes in increasing order with their shares of the total.
func (l *Line) Each(visit func(u, share float64)) {
	for i := range l.panels {
		p := &l.panels[i]
		half, mid := (p.b-p.a)/2, p.a+(p.b-p.a)/2
		for k := range order {
			visit(mid+half*nodes[k], half*weights[k]*p.f[k]/l.Total)
		}
	}
}

// Expect is the expectation of g. It says nothing about whether the expectation
// exists: the range ends where the density itself no longer counts.
func (l *Line) Expect(g func(u float64) float64) float64 {
	s := 0.0
	l.Each(func(u, share float64) {
		if share > 0 {
			s += share * g(u)
		}
	})
	return s
}

// EachEdge visits the nodes like Each, and says where the density lies so far
// below its top that the end of the range is near.
func (l *Line) EachEdge(visit func(u, share float64, edge bool)) {
	far := math.Exp(-0.75 * l.depth())
	for i := range l.panels {
		p := &l.panels[i]
		half, mid := (p.b-p.a)/2, p.a+(p.b-p.a)/2
		for k := range order {
			visit(mid+half*nodes[k], half*weights[k]*p.f[k]/l.Total, p.f[k] < far)
		}
	}
}

func (l *Line) depth() float64 {
	if l.Depth > 0 {
		return l.Depth
	}
	return depth
}

// Integrate integrates into a line that may have been used before.
func (l *Line) Integrate(log LogDensity, tolerance float64, hints ...Hint) error {
	l.Total, l.Error = 0, 0
	return l.integrate(log, tolerance, hints)
}

// Order is the number of nodes of a panel.
const Order = order

// Nodes is the number of nodes.
func (l *Line) Nodes() int { return order * len(l.panels) }

// Panels are the ends of the panels, in order.
func (l *Line) Panels() []float64 {
	out := []float64{l.panels[0].a}
	for i := range l.panels {
		out = append(out, l.panels[i].b)
	}
	return out
}

// PanelNodes are the nodes and weights on a panel from a to b.
func PanelNodes(a, b float64) (u, w [Order]float64) {
	half, mid := (b-a)/2, a+(b-a)/2
	for k := range order {
		u[k], w[k] = mid+half*nodes[k], half*weights[k]
	}
	return u, w
}

// Unresolved is the size of the last two coefficients of a function on a panel,
// given as weight × value at its nodes: about the error of the quadrature.
func Unresolved(weighted *[Order]float64) float64 {
	c1, c2 := 0.0, 0.0
	for i := range order {
		c1 += legendre[order-2][i] / weights[i] * weighted[i]
		c2 += legendre[order-1][i] / weights[i] * weighted[i]
	}
	return (math.Abs(c1) + math.Abs(c2)) / 8
}
