package existence

import (
	"context"
	"fmt"
	"math"
	"math/big"
	"strings"

	"wellposed/checks/existence/certificate"
	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/order"
	"wellposed/parser/diag"
	"wellposed/parser/model"
)

// Slices prove that a posterior does not exist. Let one unknown, the driver, run
// to an end of its support and write every other one as a fixed function of the
// driver and of its own z: x = z (held fixed), x = z ± t, x = z·t, x = z/t, or
// x = mean + spread·z for a varying effect. If for every z in a box of positive
// volume the integral over the driver of kernel · Jacobian diverges, so does the
// whole integral, by Tonelli's theorem: the integrand is not negative and the
// map is one to one. The z are kept as intervals, so one expansion speaks for
// the whole box. This contains the positive-limit principle (literature 1.2).

// move is a way to tie an unknown to the driver.
type move int

const (
	hold      move = iota // x = z
	standard              // x = mean + spread · z of its population
	shiftUp               // x = z + t
	shiftDown             // x = z − t
	grow                  // x = z · t
	fall                  // x = −z · t
	shrink                // x = z / t
	approach              // x = 1 − z / t
	centre                // x = c + z / t, c from the data
)

// way is one assignment of moves.
type way struct {
	driver int
	end    end
	moves  []move // by unknown
	base   int    // which set of generic values
	c      *big.Rat
}

// sliceRows bounds the rows and maxSlices the ways that are tried.
const (
	sliceRows = 60
	maxSlices = 360
)

// whenSlice looks for a divergent slice.
func whenSlice(g *group, ctx context.Context) *Verdict {
	rows := g.merged(sliceRows)
	if rows == nil && len(g.rows) > 0 || len(g.vars) > 40 || len(g.vars) < 2 {
		return nil
	}
	us := g.unknowns()
	for _, u := range us {
		if u.Size > 0 {
			return nil
		}
	}
	centres := g.centres(rows)
	tried := 0
	attempt := func(w way) *Verdict {
		if tried++; tried > maxSlices || ctx.Err() != nil {
			return nil
		}
		return g.slice(us, rows, w)
	}
	for level := range 4 {
		for d, v := range g.vars {
			for _, e := range g.endsOf(v) {
				for _, w := range g.ways(us, d, e, level, centres) {
					if r := attempt(w); r != nil {
						return r
					}
				}
			}
		}
	}
	return nil
}

// endsOf lists the ends of a variable's support as ends of a line.
func (g *group) endsOf(v variable) []end {
	lo, hi := g.support(v)
	if v.Unknown.Kind != nil && v.Unknown.Kind.Discrete {
		if hi == nil {
			return []end{{side: -1}}
		}
		return nil
	}
	return []end{{at: hi, side: -1}, {at: lo, side: 1}}
}

// ways lists assignments of moves: level 0 holds everything fixed, 1
// standardises varying effects, 2 ties one more unknown to the driver, 3 ties
// two or all.
func (g *group) ways(us []*model.Unknown, d int, e end, level int, centres []*big.Rat) []way {
	driver := g.vars[d].Unknown
	base := make([]move, len(us))
	hasPop := false
	for i, u := range us {
		if u.Population != nil && u != driver {
			hasPop = true
			if level > 0 {
				base[i] = standard
			}
		}
	}
	var out []way
	both := func(m []move, c *big.Rat) {
		for b := range 4 {
			out = append(out, way{driver: d, end: e, moves: append([]move(nil), m...), base: b, c: c})
		}
	}
	switch level {
	case 0:
		both(base, nil)
	case 1:
		if hasPop {
			both(base, nil)
		}
	case 2, 3:
		options := func(u *model.Unknown) []move {
			lo, hi := u.Support.Low, u.Support.High
			switch {
			case u == driver || u.Kind != nil && u.Kind.Discrete:
				return nil
			case lo == nil && hi == nil:
				return []move{shiftDown, shiftUp, grow, fall, shrink, centre}
			case lo != nil && lo.Sign() == 0 && hi == nil:
				return []move{shrink, grow}
			case lo != nil && hi != nil && lo.Sign() == 0 && hi.Cmp(big.NewRat(1, 1)) == 0:
				return []move{shrink, approach}
			}
			return nil
		}
		if level == 2 {
			for i, u := range us {
				for _, o := range options(u) {
					m := append([]move(nil), base...)
					m[i] = o
					if o == centre {
						for _, c := range centres {
							both(m, c)
						}
						continue
					}
					both(m, nil)
				}
			}
			break
		}
		if len(us) < 3 {
			return nil
		}
		for _, pair := range [][2]move{{grow, grow}, {shiftDown, shrink}, {grow, shrink}, {shrink, grow}, {centre, shrink}, {shiftUp, shiftUp}, {shiftDown, shiftDown}} {
			// All reals move one way, all positive ones the other.
			m := append([]move(nil), base...)
			for i, u := range us {
				for _, o := range options(u) {
					if u.Support.Low == nil && o == pair[0] || u.Support.Low != nil && o == pair[1] {
						m[i] = o
					}
				}
			}
			if pair[0] == centre {
				for _, c := range centres {
					both(m, c)
				}
				continue
			}
			both(m, nil)
		}
	}
	return out
}

// centres are a few observed values, to approach them from nearby.
func (g *group) centres(rows []rowFactor) []*big.Rat {
	var out []*big.Rat
	for _, f := range rows {
		if f.obs.Reading != model.Values || len(f.obs.What) != 1 {
			continue
		}
		c := kernel.Constant(f.obs.What[0], f.row)
		if c == nil {
			continue
		}
		known := false
		for _, o := range out {
			known = known || o.Cmp(c) == 0
		}
		if !known && len(out) < 4 {
			out = append(out, c)
		}
	}
	return out
}

// generic gives a box for a held value inside a support.
func generic(lo, hi *big.Rat, k, set int, scale, middle float64) order.Value {
	f := func(v, w float64) order.Value { return order.Some(v, v+w) }
	shift := float64(k%17)*0.0137 + 0.00211*float64(k/17)
	at := func(r *big.Rat) float64 { v, _ := r.Float64(); return v }
	switch {
	case set >= 2 && lo == nil && hi == nil:
		return f(middle+1e-3*shift, 1e-7)
	case set == 1:
		shift = (0.31 + shift) * scale
	default:
		shift += 0.31
	}
	switch {
	case lo == nil && hi == nil:
		return f(shift, 1e-7)
	case hi == nil:
		if set == 3 {
			return f(at(lo)+0.05+0.01*shift, 1e-7)
		}
		if set == 1 {
			shift += scale
		}
		return f(at(lo)+0.9+shift, 1e-7)
	case lo == nil:
		return f(at(hi)-0.9-shift, 1e-7)
	}
	w := at(hi) - at(lo)
	return f(at(lo)+w*(0.37+0.004*float64(k%61)), w*1e-7)
}

// slice expands one way and returns a verdict when it diverges.
func (g *group) slice(us []*model.Unknown, rows []rowFactor, w way) *Verdict {
	moves := map[*model.Unknown]move{}
	for i, u := range us {
		moves[u] = w.moves[i]
	}
	x := order.X()
	t := order.Recip(x)
	scale, middle := g.dataScale(rows)
	z := map[variable]order.Value{}
	for k, v := range g.vars {
		lo, hi := g.support(v)
		if m := moves[v.Unknown]; m != hold && m != standard {
			lo, hi = new(big.Rat), nil // z of a tied unknown: around 1
			if m == shiftUp || m == shiftDown || m == centre {
				lo = nil
			}
		}
		if v.Unknown.Kind != nil && v.Unknown.Kind.Discrete {
			n := big.NewRat(int64(scale)+3, 1)
			if lo != nil && lo.Cmp(n) > 0 {
				n = lo
			}
			if hi != nil && hi.Cmp(n) < 0 {
				n = hi
			}
			z[v] = order.Const(n)
			continue
		}
		z[v] = generic(lo, hi, k, w.base, scale, middle)
	}
	driver := g.vars[w.driver]
	values := map[variable]order.Value{}
	jacobian := order.Number(0)
	logT := order.L()
	var env *kernel.Env
	bind := func(v variable) order.Value {
		if y, ok := values[v]; ok {
			return y
		}
		var y order.Value
		switch moves[v.Unknown] {
		case hold:
			y = z[v]
		case standard:
			y = g.standardised(env, v, z[v], &jacobian)
		case shiftUp:
			y = order.Add(z[v], t)
		case shiftDown:
			y = order.Sub(z[v], t)
		case grow:
			y = order.Mul(z[v], t)
			jacobian = order.Add(jacobian, logT)
		case fall:
			y = order.Neg(order.Mul(z[v], t))
			jacobian = order.Add(jacobian, logT)
		case shrink:
			y = order.Mul(z[v], x)
			jacobian = order.Sub(jacobian, logT)
		case approach:
			y = order.Sub(order.Number(1), order.Mul(z[v], x))
			jacobian = order.Sub(jacobian, logT)
		case centre:
			y = order.Add(order.Const(w.c), order.Mul(z[v], x))
			jacobian = order.Sub(jacobian, logT)
		}
		values[v] = y
		return y
	}
	env = kernel.NewEnv(bind)
	var o order.Order
	err := order.Try(func() {
		measure := order.Number(0)
		switch {
		case w.end.at == nil:
			y := t
			if w.end.side > 0 {
				y = order.Neg(y)
			}
			values[driver] = y
			measure = order.Times(logT, big.NewRat(2, 1))
		case w.end.side > 0:
			values[driver] = order.Add(order.Const(w.end.at), x)
		default:
			values[driver] = order.Sub(order.Const(w.end.at), x)
		}
		for _, v := range g.vars {
			bind(v)
		}
		k := g.logKernel(env, rows)
		o = order.Integrable(order.Add(order.Add(k, jacobian), measure))
	})
	if err != nil || o.Finite {
		return nil
	}
	e := w.end
	e.order = o
	return g.sliceVerdict(us, w, e)
}

// standardised writes a component as mean + spread·z of its population law.
func (g *group) standardised(env *kernel.Env, v variable, z order.Value, jacobian *order.Value) order.Value {
	p := v.Unknown.Population
	row := 0
	for _, f := range g.pops {
		if f.pop == p && f.component == v.Component {
			row = f.row
		}
	}
	arg := func(label string) order.Value {
		if x := p.Dist.Arg(label); x != nil {
			return env.Eval(x, row)
		}
		return nil
	}
	place, spread := arg("mean"), arg("sd")
	if p.Dist.Spec.Name != "Normal" {
		place, spread = arg("location"), arg("scale")
	}
	if spread == nil {
		if q := arg("variance"); q != nil {
			spread = order.Sqrt(q)
		} else if q := arg("precision"); q != nil {
			spread = order.Power(q, big.NewRat(-1, 2))
		}
	}
	if p.Dist.Spec.Name == "half-Cauchy" || p.Dist.Spec.Name == "half-Normal" {
		place = order.Number(0)
	}
	if p.Truncated != nil || place == nil || spread == nil {
		return z
	}
	*jacobian = order.Add(*jacobian, order.Log(spread))
	return order.Add(place, order.Mul(spread, z))
}

// dataScale is the size of the largest observed value, and the middle of the
// range of the values.
func (g *group) dataScale(rows []rowFactor) (largest, middle float64) {
	largest = 1
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, f := range rows {
		for _, x := range append(append([]model.Expr(nil), f.obs.What...), f.obs.Low, f.obs.High) {
			if x == nil {
				continue
			}
			if c := kernel.Constant(x, f.row); c != nil {
				v, _ := c.Float64()
				largest = max(largest, v, -v)
				lo, hi = min(lo, v), max(hi, v)
			}
		}
	}
	if lo <= hi {
		middle = lo + 0.41*(hi-lo) // off the centre, where tails would tie
	}
	return largest, middle
}

func (g *group) sliceVerdict(us []*model.Unknown, w way, e end) *Verdict {
	v := g.vars[w.driver]
	name := v.Name()
	r := &Verdict{Status: DoesNotExist, How: diag.Proved, Unknowns: us, Source: "derivation",
		Theorem: "positive-limit principle along a curve (Tonelli)"}
	r.Escape = []Escape{{Unknown: v.Unknown, Component: v.Component, Toward: e.name()}}
	var tied []string
	for i, u := range us {
		if w.moves[i] == hold || u == v.Unknown {
			continue
		}
		toward := ""
		switch w.moves[i] {
		case shiftUp, grow:
			toward = "inf"
		case shiftDown, fall:
			toward = "-inf"
		case shrink:
			toward = "0"
		case approach:
			toward = "1"
		case centre:
			toward = ratText(w.c)
		}
		if toward != "" {
			tied = append(tied, u.Name+" → "+strings.ReplaceAll(toward, "inf", "∞"))
			r.Escape = append(r.Escape, Escape{Unknown: u, Toward: toward})
		}
	}
	r.Code = g.sliceCode(w, e, len(tied))
	held := "with the other unknowns held fixed"
	if len(tied) > 0 {
		held = "with " + strings.Join(tied, ", ") + " in step"
	}
	r.Claim = fmt.Sprintf("%s the kernel %s, so it has no integral there", held, orderText(name, e))
	r.Conditions = endConditions(name, []end{e})
	r.Repairs = []string{"a proper prior on " + v.Unknown.Name}
	for i, u := range us {
		if m := w.moves[i]; m != hold && m != standard && u != v.Unknown {
			r.Repairs = append(r.Repairs, "or on "+u.Name)
		}
	}
	c := endsCertificate(name, outcome{ends: []end{e}}, false)
	c.Ends.Slice = true
	r.Certificate = c
	return r
}

func (g *group) sliceCode(w way, e end, tied int) Code {
	v := g.vars[w.driver]
	mixture := false
	for _, f := range g.rows {
		mixture = mixture || len(f.obs.Dist.Parts) > 0
	}
	switch {
	case v.Unknown.Kind != nil && v.Unknown.Kind.Discrete:
		return PopulationSize
	case mixture && tied == 0 && e.at == nil:
		return EmptyComponent
	case tied > 0:
		return NotIdentified
	}
	for _, f := range g.pops {
		if unknownsIn(normalSpread(f.pop.Dist))[v.Unknown] {
			if e.at != nil {
				return SpreadAtZero
			}
			return SpreadAtInfinity
		}
	}
	return Plateau
}

var _ = certificate.KindEnds
