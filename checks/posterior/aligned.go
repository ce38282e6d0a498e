package posterior

import (
	"math"

	"wellposed/checks/posterior/quad"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// costly is the number of factors from which a density is evaluated on a small
// grid along its principal directions instead of adaptively.
const costly = 1500

const (
	gridStep = 1.05
	gridHalf = 6 // nodes −6 … 6
)

// byGrid integrates a density that is close to normal, as many readings make it:
// the trapezoid rule in coordinates aligned with the mode and its curvature. Along
// the last one the deviation from the normal shape is interpolated. It returns nil
// when the density is not close enough to normal for that.
func (p *problem) byGrid(order []int, logf fn, e model.Expr, slots []int) (*quantity, error) {
	d := len(order)
	order = p.outermost(order, slots)
	if len(slots) == 1 { // the one asked for goes innermost here
		order = append(append([]int(nil), order[1:]...), order[0])
	}
	s := newState(len(p.vars))
	u := make([]float64, d)
	target := func(v []float64) float64 {
		t := 0.0
		for k, i := range order {
			t += p.coords[i].set(s, v[k])
		}
		return logf(s) + t
	}
	chol, ok := ascend(target, u)
	if !ok {
		return nil, nil
	}
	g := p.compiler.compile(e, 0)
	top := target(u)
	v := make([]float64, d)
	at := func(z []float64) float64 {
		for i := range v {
			v[i] = u[i]
			for j := 0; j <= i; j++ {
				v[i] += chol[i*d+j] * z[j]
			}
		}
		return target(v) - top
	}
	q := &quantity{how: diag.Bounded, method: "quadrature", mix: &mixture{grid: true}}
	z := make([]float64, d)
	const n = 2*gridHalf + 1
	worst := 0.0
	var failed error
	var walk func(k int)
	walk = func(k int) {
		if failed != nil {
			return
		}
		if k < d-1 {
			for i := -gridHalf; i <= gridHalf; i++ {
				z[k] = float64(i) * gridStep
				walk(k + 1)
			}
			return
		}
		if failed = p.ctx.Err(); failed != nil {
			return
		}
		var rest [n]float64
		highest := -inf
		for i := range n {
			z[k] = float64(i-gridHalf) * gridStep
			rest[i] = at(z) + z[k]*z[k]/2
			highest = math.Max(highest, rest[i]-z[k]*z[k]/2)
			if math.IsInf(rest[i], 0) || rest[i] != rest[i] {
				failed = errWork
				return
			}
		}
		if highest < -30 {
			return
		}
		shape := func(t float64) float64 {
			if math.Abs(t) > gridHalf*gridStep {
				return -inf
			}
			return local(&rest, t/gridStep+gridHalf) - t*t/2
		}
		if highest > -3 { // check between the nodes where the mass is
			for _, t := range []float64{-1.5, 0.5} {
				z[k] = t * gridStep
				worst = math.Max(worst, math.Abs(at(z)-shape(z[k])))
			}
		}
		l, err := quad.Integrate(shape, 1e-10, quad.Hint{Mode: 0, Width: 1})
		if err != nil {
			failed = errWork
			return
		}
		c := p.coords[order[k]]
		z[k] = 0
		at(z)
		base, slope, point := v[k], chol[k*d+k], s.clone()
		q.mix.pieces = append(q.mix.pieces, along(math.Exp(l.LogTotal()), false, l, func(t float64) float64 {
			c.set(point, base+slope*t)
			return g.value(point)
		}))
	}
	walk(0)
	if failed == errWork || worst > 1e-3 {
		return nil, nil
	}
	if failed != nil {
		return nil, failed
	}
	q.mix.normalise()
	q.mix.error = 10*worst + 1e-7
	return q, nil
}

// local interpolates values at 0, 1, 2, … by the sixth-degree polynomial through
// the seven nearest.
func local(values *[2*gridHalf + 1]float64, x float64) float64 {
	first := max(0, min(len(values)-7, int(math.Round(x))-3))
	sum := 0.0
	for i := range 7 {
		w := values[first+i]
		for j := range 7 {
			if j != i {
				w *= (x - float64(first+j)) / float64(i-j)
			}
		}
		sum += w
	}
	return sum
}
