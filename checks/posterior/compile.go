package posterior

import (
	"math"
	"math/big"
	"strings"

	"wellposed/checks/posterior/special"
	"wellposed/parser/model"
)

// variable is one free component of an unknown.
type variable struct {
	unknown   *model.Unknown
	component int
}

// state is a point: the value of each variable, and the logarithms of its
// distances from the ends of its support, which stay finite where the value
// rounds to an end.
type state struct {
	x, low, high []float64
	// rest is what the shares of a whole so far left, in logarithms.
	rest []float64
}

func newState(n int) *state {
	return &state{make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)}
}

func (s *state) clone() *state {
	return &state{append([]float64(nil), s.x...), append([]float64(nil), s.low...), append([]float64(nil), s.high...), append([]float64(nil), s.rest...)}
}

// fn evaluates at a point.
type fn func(s *state) float64

// term is a compiled expression with the logarithms of its value and of one
// minus its value.
type term struct {
	known    bool
	constant float64
	positive bool // never negative
	unit     bool // between 0 and 1
	value    fn
	log      fn
	log1m    fn // log(1 − value)
	logit    fn // log odds, when they come first; nil otherwise
}

func constant(c float64) term {
	l, l1 := math.Log(c), math.Log1p(-c)
	return term{
		known: true, constant: c, positive: c >= 0,
		value: func(*state) float64 { return c }, log: func(*state) float64 { return l }, log1m: func(*state) float64 { return l1 },
	}
}

func plain(v fn) term {
	return term{
		value: v,
		log:   func(s *state) float64 { return math.Log(v(s)) },
		log1m: func(s *state) float64 { return math.Log1p(-v(s)) },
	}
}

// compiler turns expressions into closures over the variables of an analysis.
type compiler struct {
	slots    map[variable]int
	unknowns []*model.Unknown // by slot
	// touched collects the slots that a compilation used, when it is not nil.
	touched map[int]bool
	index   map[*model.Unknown]map[string]int
}

func newCompiler(vars []variable) *compiler {
	c := &compiler{slots: map[variable]int{}, index: map[*model.Unknown]map[string]int{}}
	for i, v := range vars {
		c.slots[v] = i
		c.unknowns = append(c.unknowns, v.unknown)
	}
	return c
}

func (c *compiler) touch(slot int) {
	if c.touched != nil {
		c.touched[slot] = true
	}
}

func (c *compiler) componentOf(u *model.Unknown, by []*model.Column, row int) int {
	m := c.index[u]
	if m == nil {
		m = map[string]int{}
		for i, l := range u.Levels {
			m[l] = i
		}
		c.index[u] = m
	}
	parts := make([]string, len(by))
	for i, col := range by {
		parts[i] = col.Texts[row]
	}
	k, ok := m[strings.Join(parts, " / ")]
	if !ok {
		refuse("a level of %s has no component", u.Name)
	}
	return k
}

// components are those that a reference means at a row.
func (c *compiler) components(r *model.UnknownRef, row int) []int {
	switch r.Which {
	case model.Fixed:
		return []int{r.Component}
	case model.ByRow:
		return []int{c.componentOf(r.Unknown, r.By, row)}
	}
	all := make([]int, r.Unknown.Components())
	for i := range all {
		all[i] = i
	}
	return all
}

func (c *compiler) component(u *model.Unknown, k int) term {
	if u.Relative >= 0 && k == u.Relative && !u.Scalar() {
		return constant(0)
	}
	i, ok := c.slots[variable{u, k}]
	if !ok {
		refuse("%s is not among the unknowns integrated", u.Name)
	}
	c.touch(i)
	t := plain(func(s *state) float64 { return s.x[i] })
	if u.Kind.Name == "proportions" {
		t.positive, t.unit = true, true
		t.log = func(s *state) float64 { return s.low[i] }
		t.log1m = func(s *state) float64 { return s.high[i] }
		return t
	}
	if b := u.Support; b.Low != nil {
		t.positive = b.Low.Sign() >= 0
		if b.Low.Sign() == 0 {
			t.log = func(s *state) float64 { return s.low[i] }
		}
	}
	if b := u.Support; b.High != nil && isOne(b.High) {
		t.log1m = func(s *state) float64 { return s.high[i] }
		t.unit = t.positive
	}
	return t
}

// vector are the items of a vector expression at a row.
func (c *compiler) vector(e model.Expr, row int) []term {
	switch e := e.(type) {
	case *model.Vector:
		var out []term
		for _, item := range e.Items {
			out = append(out, c.vector(item, row)...)
		}
		return out
	case *model.UnknownRef:
		var out []term
		for _, k := range c.components(e, row) {
			out = append(out, c.component(e.Unknown, k))
		}
		return out
	case *model.LetRef:
		return c.vector(e.Let.Value, row)
	}
	return []term{c.compile(e, row)}
}

// compile compiles an expression at a row.
func (c *compiler) compile(e model.Expr, row int) term {
	if model.Known(e) {
		v, err := model.EvalFloat(e, row)
		if err != nil {
			refuse("%v", err)
		}
		return constant(v)
	}
	switch e := e.(type) {
	case *model.UnknownRef:
		k := c.components(e, row)
		if len(k) != 1 {
			refuse("%s has several components where a number is expected", e.Unknown.Name)
		}
		return c.component(e.Unknown, k[0])
	case *model.LetRef:
		return c.compile(e.Let.Value, row)
	case *model.Vector:
		if len(e.Items) == 1 {
			return c.compile(e.Items[0], row)
		}
	case *model.Op:
		args := make([]term, len(e.Args))
		for i, a := range e.Args {
			args[i] = c.compile(a, row)
		}
		return operate(e.Op, args)
	case *model.Call:
		return c.call(e, row)
	}
	refuse("an expression of this form has no number")
	return term{}
}

func operate(op string, a []term) term {
	x := a[0]
	if op == "neg" || len(a) == 1 {
		return plain(func(s *state) float64 { return -x.value(s) })
	}
	y := a[1]
	switch op {
	case "+":
		t := plain(func(s *state) float64 { return x.value(s) + y.value(s) })
		if x.positive && y.positive {
			t.positive = true
			t.log = func(s *state) float64 { return special.LogSum(x.log(s), y.log(s)) }
		}
		return t
	case "-":
		t := plain(func(s *state) float64 { return x.value(s) - y.value(s) })
		if x.known && x.constant == 1 {
			t.log, t.log1m = y.log1m, y.log
			t.positive, t.unit = y.unit, y.unit
		}
		return t
	case "*":
		t := plain(func(s *state) float64 { return x.value(s) * y.value(s) })
		if x.positive && y.positive {
			t.positive = true
			t.log = func(s *state) float64 { return x.log(s) + y.log(s) }
			t.value = func(s *state) float64 {
				v := x.value(s) * y.value(s)
				if v != v || v == 0 {
					return math.Exp(x.log(s) + y.log(s))
				}
				return v
			}
		}
		return t
	case "/":
		t := plain(func(s *state) float64 { return x.value(s) / y.value(s) })
		if x.positive && y.positive {
			t.positive = true
			t.log = func(s *state) float64 { return x.log(s) - y.log(s) }
			t.value = func(s *state) float64 {
				v := x.value(s) / y.value(s)
				if v != v || v == 0 || math.IsInf(v, 0) {
					return math.Exp(x.log(s) - y.log(s))
				}
				return v
			}
		}
		return t
	case "^":
		t := plain(func(s *state) float64 { return math.Pow(x.value(s), y.value(s)) })
		if y.known && y.constant == 2 {
			t.value = func(s *state) float64 { v := x.value(s); return v * v }
			t.positive = true
		}
		if x.positive {
			t.positive = true
			t.log = func(s *state) float64 { return y.value(s) * x.log(s) }
		} else {
			t.log = func(s *state) float64 { return math.Log(t.value(s)) }
		}
		return t
	}
	refuse("a condition where a number is expected")
	return term{}
}

func (c *compiler) call(e *model.Call, row int) term {
	switch e.Func {
	case "linear":
		return c.linear(e, row)
	case "sum", "mean", "length":
		items := c.vector(e.Args[0], row)
		n := float64(len(items))
		scale := 1.0
		if e.Func == "mean" {
			scale = 1 / n
		}
		t := plain(func(s *state) float64 {
			total := 0.0
			for i := range items {
				total += items[i].value(s)
			}
			return total * scale
		})
		t.positive = true
		for i := range items {
			t.positive = t.positive && items[i].positive
		}
		return t
	case "previous":
		return c.compile(e.Args[0], row-1)
	case "min", "max":
		items := c.vector(&model.Vector{Items: e.Args}, row)
		largest := e.Func == "max"
		return plain(func(s *state) float64 {
			best := items[0].value(s)
			for _, t := range items[1:] {
				if v := t.value(s); (v > best) == largest {
					best = v
				}
			}
			return best
		})
	}
	if len(e.Args) != 1 {
		refuse("the function %s is not computed here", e.Func)
	}
	return apply(e.Func, c.compile(e.Args[0], row))
}

func apply(name string, x term) term {
	of := func(f func(float64) float64) fn { return func(s *state) float64 { return f(x.value(s)) } }
	switch name {
	case "log":
		return plain(x.log)
	case "exp":
		t := plain(of(math.Exp))
		t.positive, t.log = true, x.value
		t.log1m = of(special.Log1mExp)
		return t
	case "sqrt":
		t := plain(of(math.Sqrt))
		t.positive = true
		t.log = func(s *state) float64 { return x.log(s) / 2 }
		return t
	case "expit":
		return term{
			positive: true, unit: true, logit: x.value, value: of(func(v float64) float64 { return 1 / (1 + math.Exp(-v)) }),
			log: of(func(v float64) float64 { return -special.Log1pExp(-v) }), log1m: of(func(v float64) float64 { return -special.Log1pExp(v) }),
		}
	case "logit":
		return plain(func(s *state) float64 { return x.log(s) - x.log1m(s) })
	case "odds":
		t := plain(func(s *state) float64 { return math.Exp(x.log(s) - x.log1m(s)) })
		t.positive, t.log = true, func(s *state) float64 { return x.log(s) - x.log1m(s) }
		return t
	case "Phi":
		return term{
			positive: true, unit: true, value: of(special.Phi),
			log: of(special.LogPhi), log1m: of(func(v float64) float64 { return special.LogPhi(-v) }),
		}
	case "probit":
		return plain(func(s *state) float64 {
			v := x.value(s)
			if v > 0.5 {
				return math.Sqrt2 * math.Erfcinv(2*math.Exp(x.log1m(s)))
			}
			return -math.Sqrt2 * math.Erfcinv(2*v)
		})
	case "cloglog":
		return plain(func(s *state) float64 { return math.Log(-x.log1m(s)) })
	case "abs":
		t := plain(of(math.Abs))
		t.positive = true
		return t
	case "atan":
		return plain(of(math.Atan))
	case "tanh":
		return plain(of(math.Tanh))
	case "atanh":
		return plain(of(math.Atanh))
	case "log-gamma":
		return plain(of(special.Lgamma))
	}
	refuse("the function %s is not computed here", name)
	return term{}
}

func (c *compiler) linear(e *model.Call, row int) term {
	r, ok := e.Args[0].(*model.UnknownRef)
	if !ok {
		refuse("linear() of something that is no unknown")
	}
	var slots []int
	var cells []float64
	for k, col := range r.Unknown.For {
		i, ok := c.slots[variable{r.Unknown, k}]
		if !ok || col.Floats[row] == 0 {
			continue
		}
		c.touch(i)
		slots, cells = append(slots, i), append(cells, col.Floats[row])
	}
	return plain(func(s *state) float64 {
		total := 0.0
		for j, i := range slots {
			total += cells[j] * s.x[i]
		}
		return total
	})
}

var one = big.NewRat(1, 1)

func isOne(x *big.Rat) bool { return x.Cmp(one) == 0 }
