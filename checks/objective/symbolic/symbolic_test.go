package symbolic

import (
	"math"
	"math/big"
	"testing"
)

func positive(name string) Expr { return Sym(&Symbol{Name: name, Low: new(big.Rat)}) }
func real(name string) Expr     { return Sym(&Symbol{Name: name}) }
func share(name string) Expr {
	return Sym(&Symbol{Name: name, Low: new(big.Rat), High: big.NewRat(1, 1)})
}
func correlation(name string) Expr {
	return Sym(&Symbol{Name: name, Low: big.NewRat(-1, 1), High: big.NewRat(1, 1)})
}

func TestFactored(t *testing.T) {
	p, s, tau, r, x, k := share("p"), positive("s"), positive("t"), correlation("r"), real("x"), positive("k")
	e := Exp(x)
	for _, c := range []struct {
		in   Expr
		want string
	}{
		{Add(Inv(p), Inv(Sub(One, p))), "1/(p * (1 - p))"},
		{Sub(One, Square(r)), "(1 - r) * (1 + r)"},
		{Sub(Div(Int(2), Mul(Square(s), Add(One, k), Square(Add(One, Mul(Int(2), k))))), Inv(Mul(Square(s), Square(Add(One, k)), Square(Add(One, Mul(Int(2), k)))))),
			"1/(s^2 * (1 + k)^2 * (1 + 2 * k))"},
		{Mul(Expit(x), Sub(One, Expit(x))), "exp(x) / (1 + exp(x))^2"},
		{Div(Square(e), Square(Add(Square(e), e))), "1/(1 + exp(x))^2"},
		{Sub(Square(Add(s, tau)), Add(Square(s), Square(tau))), "2 * s * t"},
		{Add(Square(s), Mul(Int(2), s, tau), Square(tau)), "(s + t)^2"},
		{Sub(Square(s), Square(tau)), "(s - t) * (s + t)"},
		{Sqrt(Square(s)), "s"},
		{Sqrt(Square(x)), "abs(x)"},
		{Mul(Sqrt(s), Sqrt(s)), "s"},
		{Pow(Mul(Int(4), Square(s), tau), big.NewRat(-1, 2)), "1/(2 * s * sqrt(t))"},
		{Exp(Mul(Int(-3), Log(s))), "1/s^3"},
		{Exp(Mul(k, Log(s))), "s^k"},
		{Sub(Mul(Add(x, One), Sub(x, One)), Square(x)), "-1"},
		{Add(Square(Sub(s, Int(1))), Mul(Int(4), s)), "(1 + s)^2"},
	} {
		got, err := Factored(c.in)
		if err != nil {
			t.Errorf("%s: %v", Text(c.in), err)
			continue
		}
		if Text(got) != c.want {
			t.Errorf("Factored(%s) = %s, want %s", Text(c.in), Text(got), c.want)
		}
	}
}

func TestKernelText(t *testing.T) {
	p, s := share("p"), positive("s")
	ps, ss := IsSymbol(p), IsSymbol(s)
	for _, c := range []struct {
		in   Expr
		want string
	}{
		{Sqrt(Div(Int(40), Mul(p, Sub(One, p)))), "p^(-1/2) * (1 - p)^(-1/2)"},
		{Sqrt(Div(Int(6), s)), "1/sqrt(s)"},
		{Sqrt(Div(Int(2), Square(s))), "1/s"},
		{Exp(Add(Int(3), Mul(Int(-2), s))), "exp(-2 * s)"},
	} {
		got, _ := Kernel(c.in, []*Symbol{ps, ss})
		if Text(got) != c.want {
			t.Errorf("Kernel(%s) = %s, want %s", Text(c.in), Text(got), c.want)
		}
	}
}

func TestDiffAgainstDifferences(t *testing.T) {
	p, s, x := share("p"), positive("s"), real("x")
	symbols := []*Symbol{IsSymbol(p), IsSymbol(s), IsSymbol(x)}
	at := []float64{0.3, 1.7, -0.4}
	for _, e := range []Expr{
		Logit(p), Cloglog(p), Expit(Mul(s, x)), Tanh(x), Atanh(x), Phi(Mul(x, s)), Probit(p), Atan(Mul(x, p)),
		LogGamma(Add(s, p)), Mul(Pow(s, big.NewRat(3, 2)), Exp(Mul(x, Log(s)))), Sqrt(Add(One, Square(x))),
		Abs(x), Div(Add(p, s), Sub(s, x)), Odds(p),
	} {
		for i, by := range symbols {
			d, err := Diff(e, by)
			if err != nil {
				t.Fatal(err)
			}
			c, err := Compile(e, symbols)
			if err != nil {
				t.Fatal(err)
			}
			cd, err := Compile(d, symbols)
			if err != nil {
				t.Fatal(err)
			}
			h := 1e-5
			up, down := append([]float64(nil), at...), append([]float64(nil), at...)
			up[i] += h
			down[i] -= h
			want := (c.Value(up) - c.Value(down)) / (2 * h)
			if got := cd.Value(at); math.Abs(got-want) > 1e-7*(1+math.Abs(want)) {
				t.Errorf("d %s / d %s = %v, want %v (%s)", Text(e), by.Name, got, want, Text(d))
			}
			// The factored form has the same value.
			if f, err := Factored(d); err == nil {
				cf, _ := Compile(f, symbols)
				if got := cf.Value(at); math.Abs(got-cd.Value(at)) > 1e-12*(1+math.Abs(got)) {
					t.Errorf("Factored(%s) = %s changes the value: %v, %v", Text(d), Text(f), got, cd.Value(at))
				}
			}
		}
	}
}

func TestLogAbsReachesFar(t *testing.T) {
	x := real("x")
	k := Mul(Sqrt(Exp(x)), Inv(Add(One, Exp(x))))
	c, err := Compile(k, []*Symbol{IsSymbol(x)})
	if err != nil {
		t.Fatal(err)
	}
	for _, v := range []float64{-5000, -700, 0, 700, 5000} {
		l, s := c.LogAbs([]float64{v})
		want := -math.Abs(v)/2 - math.Log1p(math.Exp(-math.Abs(v)))
		if s != 1 || math.Abs(l-want) > 1e-12*(1+math.Abs(want)) {
			t.Errorf("log at %v = %v, want %v", v, l, want)
		}
	}
}
