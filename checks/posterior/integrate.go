package posterior

import (
	"errors"
	"math"

	"wellposed/checks/posterior/quad"
)

// nest integrates a density one coordinate inside the other, each by adaptive
// quadrature around its own modes, so that curved ridges and funnels are followed.
type nest struct {
	p      *problem
	s      *state
	logf   fn
	order  []int // slots, outermost first
	hints  [][]quad.Hint
	tol    []float64
	error  float64 // the largest relative error met inside
	calls  int
	panels int // counted by walk
	err    error
}

// work bounds the factors evaluated in one integration; beyond it sampling takes
// over.
const work = 60_000_000

// errWork says that an integration would take too long.
var errWork = errors.New("the integration takes too many evaluations")

func (p *problem) nest(order []int, logf fn) *nest {
	most := work / (p.cost + 4)
	n := &nest{p: p, s: newState(len(p.vars)), order: order, hints: make([][]quad.Hint, len(order)), tol: make([]float64, len(order))}
	n.logf = func(s *state) float64 {
		n.calls++
		if n.calls&1023 == 0 && n.err == nil && p.ctx.Err() != nil {
			n.err = p.ctx.Err()
		}
		if n.calls > most && n.err == nil {
			n.err = errWork
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
	l := &quad.Line{Depth: n.p.depth}
	err := l.Integrate(f, n.tol[k], n.hints[k]...)
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
func (n *nest) walk(k int, outer *quad.Line, share float64, edge bool, depth int, visit func(share float64, edge bool, panel, node int, l *quad.Line)) error {
	c := &n.p.coords[n.order[k]]
	type node struct {
		u, share float64
		edge     bool
		index    int
	}
	var nodes []node
	index := -1
	first := n.panels
	n.panels += outer.Nodes() / quad.Order
	outer.EachEdge(func(u, w float64, e bool) {
		index++
		if share*w > smallest || n.p.depth > 0 && share*w > 1e-140 {
			nodes = append(nodes, node{u, w, e, index})
		}
	})
	for _, v := range nodes {
		c.set(n.s, v.u)
		if k == depth-1 {
			visit(share*v.share, edge || v.edge, first+v.index/quad.Order, v.index%quad.Order, nil)
			continue
		}
		l, err := n.line(k + 1)
		if err != nil {
			return err
		}
		if k+1 == len(n.order)-1 && depth == len(n.order)-1 {
			visit(share*v.share, edge || v.edge, first+v.index/quad.Order, v.index%quad.Order, l)
			continue
		}
		c.set(n.s, v.u)
		if err := n.walk(k+1, l, share*v.share, edge || v.edge, depth, visit); err != nil {
			return err
		}
	}
	return nil
}

// widest is the place in the order of the variable that moves a quantity most
// within its conditional width, among several that it contains; −1 to leave the
// order. Shares below a value are smooth in the others when it is innermost.
func (n *nest) widest(g term, slots []int) int {
	if len(slots) < 2 {
		return -1
	}
	best, most := -1, 0.0
	for k, i := range n.order {
		c := &n.p.coords[i]
		if c.kind == stick || c.kind == increasing {
			return -1
		}
		if len(n.hints[k]) == 0 {
			continue
		}
		h := n.hints[k][0]
		c.set(n.s, h.Mode+2*h.Width)
		up := g.value(n.s)
		c.set(n.s, h.Mode-2*h.Width)
		down := g.value(n.s)
		c.set(n.s, h.Mode)
		if d := math.Abs(up - down); d > most && !math.IsInf(d, 0) {
			best, most = k, d
		}
	}
	return best
}

// splitter halves panels of an outer line whose inner lines are pieces.
func (n *nest) splitter(outer *quad.Line, part func(l *quad.Line) *piece) func(panel int) ([]*piece, error) {
	ends := map[int][2]float64{}
	places := outer.Panels()
	for k := range len(places) - 1 {
		ends[k] = [2]float64{places[k], places[k+1]}
	}
	c := &n.p.coords[n.order[0]]
	return func(panel int) ([]*piece, error) {
		e := ends[panel]
		mid := e[0] + (e[1]-e[0])/2
		if !(mid > e[0] && mid < e[1]) || e[1]-e[0] < 1e-9*math.Max(1, math.Abs(mid)) {
			return nil, nil
		}
		var out []*piece
		for _, h := range [][2]float64{{e[0], mid}, {mid, e[1]}} {
			id := n.panels
			n.panels++
			ends[id] = h
			u, w := quad.PanelNodes(h[0], h[1])
			for k := range u {
				j := c.set(n.s, u[k])
				l, err := n.line(1)
				if err != nil {
					if n.err != nil {
						return nil, n.err
					}
					continue
				}
				c.set(n.s, u[k])
				p := part(l)
				p.weight = w[k] * math.Exp(l.LogTotal()+j-outer.Top) / outer.Total
				p.panel, p.node = id, k
				out = append(out, p)
			}
		}
		return out, nil
	}
}
