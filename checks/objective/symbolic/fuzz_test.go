package symbolic

import (
	"math"
	"math/big"
	"testing"
)

// expressionFrom reads an expression over p, s and x from bytes; always one.
func expressionFrom(data []byte) Expr {
	p, s, x := share("p"), positive("s"), real("x")
	stack := []Expr{p, s, x}
	push := func(e Expr) { stack = append(stack, e) }
	pop := func() Expr {
		if len(stack) == 0 {
			return s
		}
		e := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		return e
	}
	if len(data) > 24 {
		data = data[:24]
	}
	for _, b := range data {
		switch b % 14 {
		case 0:
			push(p)
		case 1:
			push(s)
		case 2:
			push(x)
		case 3:
			push(Frac(int64(b/14)-8, 3))
		case 4:
			push(Add(pop(), pop()))
		case 5:
			push(Mul(pop(), pop()))
		case 6:
			push(Sub(pop(), pop()))
		case 7:
			if d := pop(); !isZero(d) {
				push(Div(pop(), d))
			}
		case 8:
			push(Square(pop()))
		case 9:
			push(Sqrt(Square(pop())))
		case 10:
			if e := pop(); !hasExp(e) { // towers overflow
				push(Exp(e))
			}
		case 11:
			push(Log(Add(One, Square(pop()))))
		case 12:
			push(Pow(Add(One, Square(pop())), big.NewRat(int64(b/14)-8, 2)))
		case 13:
			if e := pop(); !hasExp(e) {
				push(Expit(e))
			}
		}
	}
	return Add(stack...)
}

func hasExp(e Expr) bool {
	for _, f := range Calls(e) {
		if f == expFunction {
			return true
		}
	}
	return false
}

var fuzzSymbols = []*Symbol{
	{Name: "p", Low: new(big.Rat), High: big.NewRat(1, 1)},
	{Name: "s", Low: new(big.Rat)},
	{Name: "x"},
}

// FuzzFactored: factoring, squaring under a root and printing keep the value;
// the derivative agrees with differences of the factored form.
func FuzzFactored(f *testing.F) {
	for _, seed := range []string{"", "abcdefgh", "\x08\x04\x05\x0a", "\x00\x01\x07\x08\x09", "\x0d\x0d\x06\x08", "\x0c\x1a\x28\x36", "\x01\x0a\x0b\x07\x09"} {
		f.Add([]byte(seed))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		e := expressionFrom(data)
		checkValues(t, e)
	})
}

func checkValues(t *testing.T, e Expr) {
	t.Helper()
	if Text(e) == "" {
		t.Fatal("no text")
	}
	g, err := Factored(e)
	if err != nil || Size(g) > 60 { // long sums cancel in floating point
		return
	}
	root := Sqrt(Square(e))
	a, err := Compile(e, fuzzSymbols)
	if err != nil {
		t.Fatal(err)
	}
	b, err := Compile(g, fuzzSymbols)
	if err != nil {
		t.Fatal(err)
	}
	c, err := Compile(root, fuzzSymbols)
	if err != nil {
		t.Fatal(err)
	}
	for _, at := range [][]float64{{0.3, 1.7, -0.4}, {0.9, 0.2, 1.3}} {
		v, w, r := a.Value(at), b.Value(at), c.Value(at)
		if math.IsNaN(v) || math.Abs(v) > 1e8 || math.Abs(v) < 1e-8 {
			continue
		}
		size := magnitude(e, at)
		if !(math.Abs(v-w) <= 1e-9*size) && size < 1e6 {
			t.Errorf("Factored(%s) = %s: %v becomes %v", Text(e), Text(g), v, w)
		}
		if !(math.Abs(math.Abs(v)-r) <= 1e-9*size) && size < 1e6 {
			t.Errorf("the root of the square of %s: %v becomes %v", Text(e), v, r)
		}
		if l, sign := a.LogAbs(at); !(math.Abs(float64(sign)*math.Exp(l)-v) <= 1e-9*size) && size < 1e6 {
			t.Errorf("log of %s: %v, %d for %v", Text(e), l, sign, v)
		}
	}
}

// magnitude bounds the size of the terms, to judge cancellation by.
func magnitude(e Expr, at []float64) float64 {
	v := Look(e)
	total := 1.0
	for i, r := range v.Rests {
		c, err := Compile(Mul(Rat(v.Coefs[i]), r), fuzzSymbols)
		if err == nil {
			total += math.Abs(c.Value(at))
		}
	}
	if math.IsNaN(total) {
		return math.Inf(1)
	}
	return total
}
