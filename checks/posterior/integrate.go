package posterior

import (
	"math"

	"wellposed/checks/posterior/quad"
)

// nest integrates a density one coordinate inside the other, each by adaptive
// quadrature around its own modes, so that curved ridges and funnels are followed.
type nest struct {
	p     *problem
	s     *state
	logf  fn
	order []int // slots, outermost first
	hints [][]quad.Hint
	tol   []float64
	error float64 // the largest relative error met inside
	calls int
	err   error
}

// maxCalls bounds the evaluations of one integration.
const maxCalls = 40_000_000

func (p *problem) nest(order []int, logf fn) *nest {
	n := &nest{p: p, s: newState(len(p.vars)), order: order, hints: make([][]quad.Hint, len(order)), tol: make([]float64, len(order))}
	n.logf = func(s *state) float64 {
		n.calls++
		if n.calls&1023 == 0 && n.err == nil && p.ctx.Err() != nil {
			n.err = p.ctx.Err()
		}
		if n.calls > maxCalls && n.err == nil {
			n.err = reach("%d unknowns need more than %d evaluations", len(order), maxCalls)
		}
		if n.err != nil {
			return -inf
		}
		return logf(s)
	}
	goals := [][]float64{{}, {1e-12}, {1e-11, 1e-12}, {1e-8, 1e-9, 1e-9}, {1e-7, 1e-7, 1e-8, 1e-8}}[min(len(order), 4)]
	copy(n.tol, goals)
	n.calibrate()
	return n
}

// calibrate goes to a mode by one coordinate at a time, and gives the coordinates
// of the whole line their centre and scale there.
func (n *nest) calibrate() {
	u := make([]float64, len(n.order))
	for k, i := range n.order {
		n.p.coords[i].set(n.s, u[k])
	}
	sweeps := 4
	if len(n.order) == 1 {
		sweeps = 1
	}
	for sweep := range sweeps {
		for k, i := range n.order {
			c := &n.p.coords[i]
			var hints []quad.Hint
			if sweep > 0 {
				hints = n.hints[k]
			}
			modes, err := quad.Modes(func(v float64) float64 { j := c.set(n.s, v); return n.logf(n.s) + j }, hints...)
			if err != nil || len(modes) == 0 {
				c.set(n.s, u[k])
				continue
			}
			best, top := modes[0], -inf
			for _, m := range modes {
				if j := c.set(n.s, m.Mode); n.logf(n.s)+j > top {
					best, top = m, n.logf(n.s)+j
				}
			}
			n.hints[k] = modes
			if c.kind == wholeLine && c.a == 0 && c.b == 1 && len(modes) == 1 && sweep == 0 {
				x := c.value(best.Mode)
				width := math.Min(math.Abs(c.value(best.Mode+best.Width)-x), math.Abs(x-c.value(best.Mode-best.Width)))
				if width > 0 && !math.IsInf(x, 0) {
					c.a, c.b, c.logb = x, width, math.Log(width)
					best = quad.Hint{Mode: 0, Width: 1}
					n.hints[k] = []quad.Hint{best}
				}
			}
			u[k] = best.Mode
			c.set(n.s, best.Mode)
		}
	}
}

// line integrates over the coordinates from the k-th on, and returns the density
// of the k-th.
func (n *nest) line(k int) (*quad.Line, error) {
	c := &n.p.coords[n.order[k]]
	f := func(u float64) float64 {
		j := c.set(n.s, u)
		if k == len(n.order)-1 {
			return n.logf(n.s) + j
		}
		return n.inner(k+1) + j
	}
	l, err := quad.Integrate(f, n.tol[k], n.hints[k]...)
	if n.err != nil {
		return nil, n.err
	}
	if err != nil {
		return nil, err
	}
	n.hints[k] = l.Modes
	n.error = math.Max(n.error, l.Error)
	return l, nil
}

// inner is the logarithm of the integral over the coordinates from the k-th on.
func (n *nest) inner(k int) float64 {
	l, err := n.line(k)
	if err != nil {
		if err == quad.ErrNotIntegrable && n.err == nil {
			n.err = err
		}
		return -inf
	}
	return l.LogTotal()
}

// smallest share of the total for which a piece is kept.
const smallest = 1e-17

// walk integrates again at the nodes of the outer coordinates and hands over,
// for each, its share and the innermost line. With all set the innermost nodes
// are visited too, and the line is nil. Edge says that a node lies in a panel at
// the end of a range.
func (n *nest) walk(k int, outer *quad.Line, share float64, edge bool, depth int, visit func(share float64, edge bool, l *quad.Line)) error {
	c := &n.p.coords[n.order[k]]
	type node struct {
		u, share float64
		edge     bool
	}
	var nodes []node
	outer.EachEdge(func(u, w float64, e bool) {
		if share*w > smallest {
			nodes = append(nodes, node{u, w, e})
		}
	})
	for _, v := range nodes {
		c.set(n.s, v.u)
		if k == depth-1 {
			visit(share*v.share, edge || v.edge, nil)
			continue
		}
		l, err := n.line(k + 1)
		if err != nil {
			return err
		}
		if k+1 == len(n.order)-1 && depth == len(n.order)-1 {
			visit(share*v.share, edge || v.edge, l)
			continue
		}
		c.set(n.s, v.u)
		if err := n.walk(k+1, l, share*v.share, edge || v.edge, depth, visit); err != nil {
			return err
		}
	}
	return nil
}
