package order

import (
	"math/big"
	"testing"
)

func r(a, b int64) *big.Rat { return big.NewRat(a, b) }

func TestIntegrable(t *testing.T) {
	x := X()
	inv := Recip(x)
	logx := Log(x)
	cases := []struct {
		name   string
		log    func() Value
		finite bool
	}{
		{"x^-1", func() Value { return Neg(logx) }, false},
		{"x^-1 (log)^-1", func() Value { return Sub(Neg(logx), Log(L())) }, false},
		{"x^-1 (log)^-11/10", func() Value { return Sub(Neg(logx), Times(Log(L()), r(11, 10))) }, true},
		{"x^-9/10", func() Value { return Times(logx, r(-9, 10)) }, true},
		{"exp(-1/x)/x^5", func() Value { return Sub(Times(logx, r(-5, 1)), inv) }, true},
		{"exp(1/x)", func() Value { return inv }, false},
		{"expit tail t^2", func() Value { return Add(Times(logx, r(-2, 1)), Log(Expit(Neg(inv)))) }, true},
		{"1-expit(-1/x): plateau, measure x^-2", func() Value {
			return Add(Times(logx, r(-2, 1)), Log(Sub(Number(1), Expit(Neg(inv)))))
		}, false},
		{"Phi(-1/x)", func() Value { return Add(Times(logx, r(-2, 1)), Log(Phi(Neg(inv)))) }, true},
		{"1-Phi(1/x)", func() Value { return Add(Times(logx, r(-2, 1)), Log(Sub(Number(1), Phi(inv)))) }, true},
		{"gamma ratio N^-1", func() Value {
			return Add(Times(logx, r(-2, 1)), Sub(LogGamma(Add(inv, Number(1))), LogGamma(Add(inv, Number(2)))))
		}, false},
		{"gamma ratio N^-7/2", func() Value {
			return Add(Times(logx, r(-2, 1)), Sub(LogGamma(Add(inv, Number(1))), LogGamma(Add(inv, Const(r(9, 2))))))
		}, true},
		{"double exponential", func() Value { return Sub(Times(logx, r(-2, 1)), Exp(inv)) }, true},
		{"probit(x)^2", func() Value { return Sub(Neg(logx), HalfProbitSquare(x)) }, true},
		{"exp(+probit^2/2) ~ 1/(x sqrt L)", func() Value { return HalfProbitSquare(x) }, false},
		{"exp(+probit^2/2)/L^(0.51)", func() Value { return Sub(HalfProbitSquare(x), Times(Log(L()), r(51, 100))) }, true},
	}
	for _, c := range cases {
		var o Order
		if err := Try(func() { o = Integrable(c.log()) }); err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		if o.Finite != c.finite {
			t.Errorf("%s: finite = %v (%s)", c.name, o.Finite, o.Text)
		}
	}
}

func BenchmarkExpand(b *testing.B) {
	for b.Loop() {
		x := X()
		Integrable(Add(Times(Log(x), r(-2, 1)), Log(Expit(Neg(Recip(x))))))
	}
}
