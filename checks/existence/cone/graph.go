package cone

import (
	"context"
	"math/big"
)

// graph decides the systems in which every row compares two unknowns, or one
// with 0: paired comparisons, Rasch models, single factors. With the ground
// standing for 0, a row c·(x_v − x_u) ≥ 0, c > 0, is an arc from u to v, and an
// equation is two arcs. The rank is p when every unknown is joined to the ground;
// then x = 0 is the only solution exactly when every node can be reached from
// the ground and can reach it (for paired comparisons: Ford 1957).
//
// Columns may be turned (x_j for −x_j) first, so that sums serve as well as
// differences, if all rows agree on that.
type graph struct {
	pr     *Problem
	turn   []int8
	arcs   []arc
	out    [][]int32 // arcs by tail
	in     [][]int32 // arcs by head
	ground int32
}

type arc struct {
	tail, head int32
	row        int32
	backward   bool // an equation taken against its sign
	size       int64
}

// newGraph gives nil when the system is of another kind.
func newGraph(ctx context.Context, pr *Problem) *graph {
	if pr.wide || pr.n == 0 {
		return nil
	}
	for j := range pr.columns {
		if pr.columns[j].scale.Cmp(pr.columns[0].scale) != 0 {
			return nil
		}
	}
	// Most other systems show themselves in a few rows.
	x := make([]int64, pr.p)
	for _, list := range [][]int32{pr.open, pr.equal} {
		for _, row := range sample(list, 20) {
			pr.row64(row, x)
			entries := 0
			for _, v := range x {
				if v != 0 {
					entries++
				}
			}
			if entries > 2 {
				return nil
			}
		}
	}
	type pair struct {
		a, b int32
		x, y int64
	}
	pairs := make([]pair, pr.n)
	for i := range pairs {
		pairs[i].a, pairs[i].b = -1, -1
	}
	for j := range pr.columns {
		if ctx.Err() != nil {
			return nil
		}
		c := &pr.columns[j]
		for k, v := range c.small {
			if v == 0 {
				continue
			}
			row := k
			if c.rows != nil {
				row = int(c.rows[k])
			}
			if pr.senses[row] == AtMost {
				v = -v
			}
			switch q := &pairs[row]; {
			case q.a < 0:
				q.a, q.x = int32(j), v
			case q.b < 0 && (v == q.x || v == -q.x):
				q.b, q.y = int32(j), v
			default:
				return nil
			}
		}
	}
	g := &graph{pr: pr, ground: int32(pr.p), turn: make([]int8, pr.p)}
	// Two-colouring: a row with equal signs wants exactly one column turned.
	near := make([][]int32, pr.p)
	for i, q := range pairs {
		if q.b >= 0 {
			near[q.a] = append(near[q.a], int32(i))
			near[q.b] = append(near[q.b], int32(i))
		}
	}
	var queue []int32
	for j := range g.turn {
		if g.turn[j] != 0 {
			continue
		}
		g.turn[j] = 1
		queue = append(queue[:0], int32(j))
		for len(queue) > 0 {
			u := queue[0]
			queue = queue[1:]
			for _, i := range near[u] {
				q := pairs[i]
				v := q.a + q.b - u
				want := g.turn[u]
				if q.x == q.y {
					want = -want
				}
				switch g.turn[v] {
				case 0:
					g.turn[v] = want
					queue = append(queue, v)
				case want:
				default:
					return nil
				}
			}
		}
	}
	g.out, g.in = make([][]int32, pr.p+1), make([][]int32, pr.p+1)
	for i, q := range pairs {
		if q.a < 0 {
			continue
		}
		// The row is x·(turned x_a) + ..., so it rises with its positive end.
		up, down := q.a, g.ground
		if q.b >= 0 {
			down = q.b
		}
		v := q.x * int64(g.turn[q.a])
		if v < 0 {
			up, down, v = down, up, -v
		}
		g.add(arc{tail: down, head: up, row: int32(i), size: v})
		if pr.senses[i] == Equal {
			g.add(arc{tail: up, head: down, row: int32(i), size: v, backward: true})
		}
	}
	return g
}

func (g *graph) add(a arc) {
	k := int32(len(g.arcs))
	g.arcs = append(g.arcs, a)
	g.out[a.tail] = append(g.out[a.tail], k)
	g.in[a.head] = append(g.in[a.head], k)
}

// tree walks from a node along out-arcs, in-arcs or both: the nodes in order of
// arrival, and the arc by which each was reached (−1 for none).
func (g *graph) tree(from int32, forth, back bool) (order []int32, by []int32, seen []bool) {
	by, seen = make([]int32, g.pr.p+1), make([]bool, g.pr.p+1)
	for i := range by {
		by[i] = -1
	}
	seen[from] = true
	order = append(order, from)
	for k := 0; k < len(order); k++ {
		u := order[k]
		visit := func(v, a int32) {
			if !seen[v] {
				seen[v], by[v] = true, a
				order = append(order, v)
			}
		}
		if forth {
			for _, a := range g.out[u] {
				visit(g.arcs[a].head, a)
			}
		}
		if back {
			for _, a := range g.in[u] {
				visit(g.arcs[a].tail, a)
			}
		}
	}
	return order, by, seen
}

func (g *graph) solve(ctx context.Context) (*Result, error) {
	pr := g.pr
	// Rank: an unknown that is not joined to the ground moves freely with all
	// that it is joined to.
	if order, _, seen := g.tree(g.ground, true, true); len(order) <= pr.p {
		for j := range pr.p {
			if seen[j] {
				continue
			}
			d := integers(pr.p)
			group, _, _ := g.tree(int32(j), true, true)
			for _, v := range group {
				d[v].SetInt64(int64(g.turn[v]))
			}
			zero := true
			err := pr.each(ctx, pr.ray(d), func(lo int, size []int64, sign []int8) bool {
				for _, v := range sign {
					zero = zero && v == 0
				}
				return zero
			})
			if err != nil || !zero {
				return nil, err
			}
			return pr.direction(RankDeficient, d, "graph of comparisons"), nil
		}
	}
	from, reached, seen := g.tree(g.ground, true, false)
	if d := g.side(seen, -1); d != nil {
		return pr.separated(ctx, d, "graph of comparisons")
	}
	to, returns, seen := g.tree(g.ground, false, true)
	if d := g.side(seen, 1); d != nil {
		return pr.separated(ctx, d, "graph of comparisons")
	}
	// A round trip from the ground through each arc of both trees sums to 0.
	use := map[int32]int64{}
	starts, ends := make([]int64, pr.p+1), make([]int64, pr.p+1)
	for _, by := range [][]int32{reached, returns} {
		for _, a := range by {
			if a >= 0 && use[a] == 0 {
				use[a] = 1
				starts[g.arcs[a].tail]++
				ends[g.arcs[a].head]++
			}
		}
	}
	for k := len(from) - 1; k > 0; k-- {
		v := from[k]
		a := reached[v]
		use[a] += starts[v]
		starts[g.arcs[a].tail] += starts[v]
	}
	for k := len(to) - 1; k > 0; k-- {
		v := to[k]
		a := returns[v]
		use[a] += ends[v]
		ends[g.arcs[a].head] += ends[v]
	}
	weights := map[int32]*big.Rat{}
	for a, n := range use {
		c := g.arcs[a]
		w := big.NewRat(n, c.size)
		if c.backward {
			w.Neg(w)
		}
		if old := weights[c.row]; old != nil {
			w.Add(w, old)
		}
		weights[c.row] = w
	}
	basis := make([]int32, 0, pr.p) // the rows of a spanning tree
	for _, a := range reached {
		if a >= 0 {
			basis = append(basis, g.arcs[a].row)
		}
	}
	return &Result{Verdict: Overlapped, Way: "graph of comparisons", Certificate: newCertificate(weights, basis)}, nil
}

// side moves the nodes not seen up or down; nil when all were seen.
func (g *graph) side(seen []bool, by int64) []*big.Int {
	d := integers(g.pr.p)
	any := false
	for j := range d {
		if !seen[j] {
			any = true
			d[j].SetInt64(by * int64(g.turn[j]))
		}
	}
	if !any {
		return nil
	}
	return d
}
