package existence

import (
	"math"
	"math/big"
	"strings"

	"wellposed/checks/existence/kernel"
	"wellposed/checks/existence/law"
	"wellposed/checks/existence/order"
)

// echelon is an exact row echelon form of the rows [x | constant].
type echelon struct {
	p            int
	pivot        []exactRow // by pivot column, coef nil when there is none
	scaleErr     []float64
	count        int
	inconsistent bool // no β fits the rows exactly
	unsure       bool // a residual is 0 within rounding of a logarithm
	seen         map[string]bool
}

func (t gaussTerm) key(p int) string {
	var b strings.Builder
	b.WriteString(t.constant.RatString())
	for j := range p {
		b.WriteByte(' ')
		if c := t.coef[j]; c != nil {
			b.WriteString(c.RatString())
		}
	}
	return b.String()
}

func newEchelon(p int) *echelon { return &echelon{p: p, pivot: make([]exactRow, p)} }

func (e *echelon) full() bool { return e.count == e.p }
func (e *echelon) rank() int  { return e.count }

// add reduces a row by those before it.
func (e *echelon) add(t gaussTerm) {
	if t.times == 0 { // a sum of squares that nothing can fit
		e.inconsistent = true
		return
	}
	if t.error > 0 {
		// The same reading with the same coefficients is the same row exactly,
		// whatever the rounding of its logarithm.
		key := t.key(e.p)
		if e.seen[key] {
			return
		}
		if e.seen == nil {
			e.seen = map[string]bool{}
		}
		e.seen[key] = true
	}
	coef := make(map[int]*big.Rat, len(t.coef))
	for j, c := range t.coef {
		coef[j] = c
	}
	constant := t.constant
	err := t.error
	for j := 0; j < e.p; j++ {
		c := coef[j]
		if c == nil {
			continue
		}
		p := e.pivot[j]
		if p.coef == nil {
			inv := new(big.Rat).Inv(c)
			for k, v := range coef {
				coef[k] = new(big.Rat).Mul(v, inv)
			}
			e.pivot[j] = exactRow{constant: new(big.Rat).Mul(constant, inv), coef: coef}
			if err > 0 {
				f, _ := inv.Float64()
				e.errors()[j] = err * math.Abs(f)
			}
			e.count++
			return
		}
		for k, v := range p.coef {
			q := new(big.Rat).Mul(v, c)
			if old := coef[k]; old != nil {
				q.Sub(old, q)
			} else {
				q.Neg(q)
			}
			if q.Sign() == 0 {
				delete(coef, k)
			} else {
				coef[k] = q
			}
		}
		constant = new(big.Rat).Sub(constant, new(big.Rat).Mul(p.constant, c))
		if e.scaleErr != nil {
			f, _ := c.Float64()
			err += math.Abs(f) * e.scaleErr[j] * 1.0000001
		}
	}
	if err > 0 {
		f, _ := constant.Float64()
		if math.Abs(f) > 4*err {
			e.inconsistent = true
		} else if !e.inconsistent {
			e.unsure = true
		}
		return
	}
	if constant.Sign() != 0 {
		e.inconsistent = true
	}
}

func (e *echelon) errors() []float64 {
	if e.scaleErr == nil {
		e.scaleErr = make([]float64, e.p)
	}
	return e.scaleErr
}

// null is a direction that every row maps to 0.
func (e *echelon) null() []*big.Rat {
	d := make([]*big.Rat, e.p)
	free := -1
	for j := e.p - 1; j >= 0; j-- {
		if e.pivot[j].coef == nil && free < 0 {
			free = j
		}
	}
	for j := range d {
		d[j] = new(big.Rat)
	}
	d[free].SetInt64(1)
	for j := free - 1; j >= 0; j-- {
		p := e.pivot[j]
		if p.coef == nil {
			continue
		}
		s := new(big.Rat)
		for k := j + 1; k < e.p; k++ {
			if c := p.coef[k]; c != nil {
				s.Sub(s, new(big.Rat).Mul(c, d[k]))
			}
		}
		d[j] = s
	}
	return d
}

// marginal is the log of the integral over the block as a function of what is
// left; nil when it is too large to write down.
func (b *gaussBlock) marginal(e *echelon) func(env *kernel.Env) order.Value {
	if len(b.order) == 1 && b.classes[b.order[0]].known == nil {
		return b.marginalOne(e)
	}
	p := len(b.beta)
	if p > 60 || len(b.terms) > 4000 || len(b.order) > 200 {
		return nil
	}
	type gram struct {
		class *gaussClass
		n     int64
		m     [][]*big.Rat // (p+1) × (p+1), upper triangle; nil is 0
	}
	grams := map[string]*gram{}
	for _, key := range b.order {
		m := make([][]*big.Rat, p+1)
		for i := range m {
			m[i] = make([]*big.Rat, p+1)
		}
		grams[key] = &gram{class: b.classes[key], m: m}
	}
	accumulate := func(at **big.Rat, v *big.Rat) {
		if *at == nil {
			*at = new(big.Rat)
		}
		(*at).Add(*at, v)
	}
	for _, t := range b.terms {
		key, w := t.class, big.NewRat(1, 1)
		if known, ok := knownWeight(t.class); ok {
			key, w = "known", known
		}
		g := grams[key]
		if t.times == 0 {
			accumulate(&g.m[p][p], new(big.Rat).Mul(w, t.constant))
			continue
		}
		g.n += t.times
		w = new(big.Rat).Mul(w, big.NewRat(t.times, 1))
		at := func(i int) *big.Rat {
			if i == p {
				return t.constant
			}
			return t.coef[i]
		}
		var used []int
		for i := range p {
			if t.coef[i] != nil {
				used = append(used, i)
			}
		}
		used = append(used, p)
		for a, i := range used {
			x := new(big.Rat).Mul(w, at(i))
			for _, j := range used[a:] {
				accumulate(&g.m[i][j], new(big.Rat).Mul(x, at(j)))
			}
		}
	}
	if e.unsure {
		return nil
	}
	return func(env *kernel.Env) order.Value {
		total := order.Number(0)
		inBox := false
		m := make([][]order.Value, p+1)
		for i := range m {
			m[i] = make([]order.Value, p+1)
		}
		for _, key := range b.order {
			g := grams[key]
			w := order.Number(1)
			if g.class.known == nil {
				s := law.Spread(args(env, g.class))
				if _, ok := s.(*order.Boxed); ok {
					inBox = true
				}
				w = order.Power(s, big.NewRat(-2, 1))
				total = order.Sub(total, order.Times(order.Log(s), big.NewRat(g.n, 1)))
			}
			if inBox {
				continue
			}
			for i := range m {
				for j, v := range g.m[i] {
					if v == nil || v.Sign() == 0 {
						continue
					}
					x := order.Times(w, v)
					if m[i][j] != nil {
						x = order.Add(m[i][j], x)
					}
					m[i][j] = x
				}
			}
		}
		if inBox {
			// A is positive definite throughout, so the integral is a continuous
			// positive function of the spread: nothing else to check.
			return total
		}
		half := big.NewRat(-1, 2)
		// Eliminate, fewest entries first, to keep the sums short.
		left := make([]bool, p)
		get := func(i, j int) order.Value {
			if i > j {
				i, j = j, i
			}
			return m[i][j]
		}
		set := func(i, j int, v order.Value) {
			if i > j {
				i, j = j, i
			}
			m[i][j] = v
		}
		for range p {
			best, fewest := -1, p+2
			for i := range p {
				if left[i] {
					continue
				}
				n := 0
				for j := range p + 1 {
					if j != i && (j == p || !left[j]) && get(i, j) != nil {
						n++
					}
				}
				if n < fewest {
					best, fewest = i, n
				}
			}
			left[best] = true
			pivot := m[best][best]
			total = order.Add(total, order.Times(order.Log(pivot), half))
			inv := order.Recip(pivot)
			var js []int
			for j := range p + 1 {
				if (j == p || !left[j]) && get(best, j) != nil {
					js = append(js, j)
				}
			}
			for a, i := range js {
				f := order.Mul(get(best, i), inv)
				for _, j := range js[a:] {
					x := order.Neg(order.Mul(f, get(best, j)))
					if old := get(i, j); old != nil {
						x = order.Add(old, x)
					}
					set(i, j, x)
				}
			}
		}
		if q := m[p][p]; q != nil {
			total = order.Add(total, order.Times(q, half))
		}
		return total
	}
}

func args(env *kernel.Env, c *gaussClass) law.Args {
	return func(label string) order.Value {
		if label == "sd" && c.dist.Arg("sd") == nil && c.dist.Arg("log sd") != nil {
			label = "log sd"
		}
		x := c.dist.Arg(label)
		if x == nil {
			return nil
		}
		return env.Eval(x, c.row)
	}
}

// marginalOne is the closed form for a single spread s: s^(−(n−p)) exp(−RSS/2s²),
// where only RSS > 0 or RSS = 0 matters for the orders.
func (b *gaussBlock) marginalOne(e *echelon) func(env *kernel.Env) order.Value {
	if e.unsure && !e.inconsistent {
		return nil
	}
	n := int64(0)
	for _, t := range b.terms {
		n += t.times
	}
	class := b.classes[b.order[0]]
	return func(env *kernel.Env) order.Value {
		s := law.Spread(args(env, class))
		v := order.Times(order.Log(s), big.NewRat(int64(len(b.beta))-n, 1))
		if e.inconsistent {
			v = order.Sub(v, order.Power(s, big.NewRat(-2, 1)))
		}
		return v
	}
}
