package symbolic

import (
	"fmt"
	"math"
)

// Compiled evaluates an expression at values of the symbols it was compiled for.
type Compiled struct{ node node }

// node evaluates plainly and as sign and logarithm of the absolute value, the
// latter without overflow or underflow of products and exponentials.
type node interface {
	value(x []float64) float64
	log(x []float64) (logAbs float64, sign int)
}

// Compile prepares an expression; every symbol must be listed.
func Compile(e Expr, symbols []*Symbol) (*Compiled, error) {
	at := map[string]int{}
	for i, s := range symbols {
		at[s.Name] = i
	}
	n, err := compile(e, at)
	if err != nil {
		return nil, err
	}
	return &Compiled{n}, nil
}

// Value is the value.
func (c *Compiled) Value(x []float64) float64 {
	v := c.node.value(x)
	if math.IsInf(v, 0) || math.IsNaN(v) || v == 0 {
		if l, s := c.node.log(x); !math.IsNaN(l) {
			return float64(s) * math.Exp(l)
		}
	}
	return v
}

// LogAbs is the logarithm of the absolute value, and the sign.
func (c *Compiled) LogAbs(x []float64) (float64, int) { return c.node.log(x) }

func compile(e Expr, at map[string]int) (node, error) {
	switch e := e.(type) {
	case *number:
		v, _ := e.v.Float64()
		return constantNode(v), nil
	case *symbol:
		i, ok := at[e.s.Name]
		if !ok {
			return nil, fmt.Errorf("no value for %s", e.s.Name)
		}
		return symbolNode(i), nil
	case *sum:
		v, _ := e.constant.Float64()
		n := &sumNode{constant: v}
		for _, t := range e.terms {
			child, err := compile(t.rest, at)
			if err != nil {
				return nil, err
			}
			c, _ := t.coef.Float64()
			n.coef, n.terms = append(n.coef, c), append(n.terms, child)
		}
		return n, nil
	case *product:
		v, _ := e.coef.Float64()
		n := &productNode{coef: v}
		for _, f := range e.factors {
			child, err := compile(f.base, at)
			if err != nil {
				return nil, err
			}
			q, _ := f.exp.Float64()
			n.exp, n.bases = append(n.exp, q), append(n.bases, child)
			n.odd = append(n.odd, f.exp.IsInt() && !isEven(f.exp))
			n.whole = append(n.whole, f.exp.IsInt())
		}
		return n, nil
	case *call:
		n := &callNode{f: e.f, exp: e.f == expFunction}
		for _, a := range e.args {
			child, err := compile(a, at)
			if err != nil {
				return nil, err
			}
			n.args = append(n.args, child)
		}
		return n, nil
	}
	return nil, fmt.Errorf("no value of %T", e)
}

type constantNode float64

func (n constantNode) value([]float64) float64      { return float64(n) }
func (n constantNode) log([]float64) (float64, int) { return signedLog(float64(n)) }

type symbolNode int

func (n symbolNode) value(x []float64) float64      { return x[n] }
func (n symbolNode) log(x []float64) (float64, int) { return signedLog(x[n]) }

func signedLog(v float64) (float64, int) {
	switch {
	case v > 0:
		return math.Log(v), 1
	case v < 0:
		return math.Log(-v), -1
	case v == 0:
		return math.Inf(-1), 0
	}
	return math.NaN(), 0
}

type sumNode struct {
	constant float64
	coef     []float64
	terms    []node
}

func (n *sumNode) value(x []float64) float64 {
	s := n.constant
	for i, t := range n.terms {
		s += n.coef[i] * t.value(x)
	}
	return s
}

func (n *sumNode) log(x []float64) (float64, int) {
	if v := n.value(x); v != 0 && !math.IsInf(v, 0) && !math.IsNaN(v) {
		return signedLog(v)
	}
	logs, signs := make([]float64, 0, len(n.terms)+1), make([]int, 0, len(n.terms)+1)
	put := func(l float64, s int) {
		if s != 0 {
			logs, signs = append(logs, l), append(signs, s)
		}
	}
	put(signedLog(n.constant))
	most := math.Inf(-1)
	for i, t := range n.terms {
		l, s := t.log(x)
		if math.IsNaN(l) {
			return l, 0
		}
		c, sc := signedLog(n.coef[i])
		put(l+c, s*sc)
	}
	for _, l := range logs {
		most = math.Max(most, l)
	}
	if math.IsInf(most, 0) {
		return most, 1
	}
	total := 0.0
	for i, l := range logs {
		total += float64(signs[i]) * math.Exp(l-most)
	}
	l, s := signedLog(total)
	return l + most, s
}

type productNode struct {
	coef       float64
	exp        []float64
	odd, whole []bool
	bases      []node
}

func (n *productNode) value(x []float64) float64 {
	v := n.coef
	for i, b := range n.bases {
		switch base := b.value(x); n.exp[i] {
		case 1:
			v *= base
		case -1:
			v /= base
		case 2:
			v *= base * base
		case 0.5:
			v *= math.Sqrt(base)
		case -0.5:
			v /= math.Sqrt(base)
		default:
			v *= math.Pow(base, n.exp[i])
		}
	}
	return v
}

func (n *productNode) log(x []float64) (float64, int) {
	l, s := signedLog(n.coef)
	for i, b := range n.bases {
		bl, bs := b.log(x)
		if bs < 0 && !n.whole[i] {
			return math.NaN(), 0
		}
		if bs == 0 {
			if n.exp[i] < 0 {
				l = math.Inf(1)
				continue
			}
			return bl, 0
		}
		l += n.exp[i] * bl
		if n.odd[i] {
			s *= bs
		}
	}
	return l, s
}

type callNode struct {
	f    *Function
	exp  bool
	args []node
}

func (n *callNode) value(x []float64) float64 {
	var room [4]float64
	v := room[:0]
	for _, a := range n.args {
		v = append(v, a.value(x))
	}
	return n.f.Eval(v)
}

func (n *callNode) log(x []float64) (float64, int) {
	if n.exp {
		return n.args[0].value(x), 1
	}
	return signedLog(n.value(x))
}
