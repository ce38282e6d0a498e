package posterior

import (
	"context"
	"math"

	"wellposed/checks/posterior/quad"
	"wellposed/parser/model"
)

// Step is the integral of the unnormalised density up to a limit.
type Step struct {
	// Limit is the value that the unknown may reach: 2, 4, 8, … or 1/2, 1/4, …
	Limit float64
	// Integral is relative to that of the first step.
	Integral float64
}

// Doubling integrates the density over ever larger ranges of one unknown, the
// others over all of theirs, toward an end: the picture of a posterior that does
// not exist. The end is "inf", "-inf" or the finite end of the support. Where the
// numbers go on rising by the same amount the integral grows like a logarithm.
// They are evidence for the eye and decide nothing.
func Doubling(ctx context.Context, a *model.Analysis, u *model.Unknown, end string) (steps []Step, err error) {
	defer catch(&err)
	p := assemble(ctx, a, false)
	slot, ok := p.compiler.slots[variable{u, 0}]
	if !ok || !u.Scalar() {
		return nil, reach("%s has several components", u.Name)
	}
	members, factors := p.group([]int{slot})
	p.place(members, factors)
	order := p.free(members)
	logf := density(factors)
	if block, outer := p.eliminate(members, factors); block != nil {
		inOuter := false
		for _, i := range outer {
			inOuter = inOuter || i == slot
		}
		if inOuter {
			s := newState(len(p.vars))
			for _, i := range outer {
				p.coords[i].set(s, 0)
			}
			block.freeze(s)
			order, logf = outer, block.solve
		}
	}
	if len(order) > 3 {
		return nil, reach("%d unknowns hang together", len(order))
	}
	others := make([]int, 0, len(order))
	for _, i := range order {
		if i != slot {
			others = append(others, i)
		}
	}
	c := p.coords[slot]
	s := newState(len(p.vars))
	var inner *nest
	// The density along the coordinate, everything else integrated.
	along := func(v float64) float64 {
		if len(others) == 0 {
			j := c.set(s, v)
			return logf(s) + j
		}
		if inner == nil {
			inner = &nest{p: p, s: s, order: others, hints: make([][]quad.Hint, len(others)), tol: []float64{1e-8, 1e-8, 1e-8}, logf: logf}
		}
		j := c.set(s, v)
		l, err := inner.line(0)
		if err != nil {
			return -inf
		}
		return l.LogTotal() + j
	}
	side := 1.0
	if end == "-inf" || c.kind != wholeLine && end != "inf" && end == lowText(u) {
		side = -1
	}
	// Doubling the value, or halving the distance from a finite end, is a step of
	// log 2 in the coordinate; on the whole line asinh does the same far out.
	const count = 16
	sum, at := 0.0, 0.0
	base := math.Inf(-1)
	for k := range count {
		next := at + side*math.Ln2
		lo, hi := math.Min(at, next), math.Max(at, next)
		from, to := lo, hi
		if k == 0 { // everything on the other side of the start, as far as it counts
			if side > 0 {
				from = -60
			} else {
				to = 60
			}
		}
		pieces := 1
		if k == 0 {
			pieces = 64
		}
		for i := range pieces {
			a := from + (to-from)*float64(i)/float64(pieces)
			b := from + (to-from)*float64(i+1)/float64(pieces)
			x, w := quad.PanelNodes(a, b)
			for n := range x {
				if ctx.Err() != nil {
					return nil, ctx.Err()
				}
				v := along(x[n])
				if v > base {
					sum *= math.Exp(base - v)
					base = v
				}
				if !math.IsInf(v, -1) {
					sum += w[n] * math.Exp(v-base)
				}
			}
		}
		if sum == 0 {
			return nil, reach("the density is zero where the ranges start")
		}
		steps = append(steps, Step{c.value(next), base + math.Log(sum)})
		at = next
	}
	first := steps[0].Integral
	for i := range steps {
		steps[i].Integral = math.Exp(steps[i].Integral - first)
	}
	return steps, nil
}

func lowText(u *model.Unknown) string {
	if u.Support.Low == nil {
		return "-inf"
	}
	return u.Support.Low.RatString()
}
