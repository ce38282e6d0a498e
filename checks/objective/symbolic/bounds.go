package symbolic

import "math/big"

// Positive reports whether an expression is known to be positive inside the
// supports of its symbols.
func Positive(e Expr) bool {
	low, _ := bounds(e)
	return low != nil && low.Sign() >= 0 && !isZero(e)
}

// bounds are rational ends that an expression does not pass; nil is infinite.
// An end may be attained only where a symbol is at an end of its support.
func bounds(e Expr) (low, high *big.Rat) {
	switch e := e.(type) {
	case *number:
		return e.v, e.v
	case *symbol:
		return e.s.Low, e.s.High
	case *call:
		if e.f.Bounds != nil {
			return e.f.Bounds(e.args)
		}
	case *sum:
		low, high = e.constant, e.constant
		for _, t := range e.terms {
			a, b := timesBounds(t.coef, t.coef, t.rest)
			low, high = addEnd(low, a), addEnd(high, b)
		}
		return low, high
	case *product:
		low, high = e.coef, e.coef
		for _, f := range e.factors {
			a, b := powerBounds(f)
			low, high = mulBounds(low, high, a, b)
		}
		return low, high
	}
	return nil, nil
}

func timesBounds(low, high *big.Rat, e Expr) (*big.Rat, *big.Rat) {
	a, b := bounds(e)
	return mulBounds(low, high, a, b)
}

func addEnd(a, b *big.Rat) *big.Rat {
	if a == nil || b == nil {
		return nil
	}
	return new(big.Rat).Add(a, b)
}

// powerBounds bounds base^exp where whole powers or positive bases allow.
func powerBounds(f factor) (*big.Rat, *big.Rat) {
	low, high := bounds(f.base)
	if f.exp.Cmp(ratOne) == 0 {
		return low, high
	}
	positive := low != nil && low.Sign() >= 0
	if !positive {
		if isEven(f.exp) {
			if f.exp.Sign() > 0 && f.exp.IsInt() && low != nil && high != nil {
				a, b := ratPower(low, f.exp.Num()), ratPower(high, f.exp.Num())
				if a.Cmp(b) < 0 {
					a = b
				}
				return ratZero, a
			}
			return ratZero, nil
		}
		if !f.exp.IsInt() {
			return ratZero, nil // defined only where the base is not negative
		}
		return nil, nil
	}
	if !f.exp.IsInt() {
		// A root lies between 0 (or 1) and 1 (or the base).
		if high != nil && high.Cmp(ratOne) <= 0 && f.exp.Sign() > 0 {
			return ratZero, ratOne
		}
		return ratZero, nil
	}
	if f.exp.Sign() > 0 {
		low = ratPower(low, f.exp.Num())
		if high != nil {
			high = ratPower(high, f.exp.Num())
		}
		return low, high
	}
	a := ratZero
	if high != nil && high.Sign() > 0 {
		a = ratPower(high, f.exp.Num())
	}
	if low.Sign() == 0 {
		return a, nil
	}
	return a, ratPower(low, f.exp.Num())
}

// mulBounds multiplies two intervals whose nil ends are infinite.
func mulBounds(a, b, c, d *big.Rat) (low, high *big.Rat) {
	lowInf, highInf := false, false
	for _, x := range []end{{a, -1}, {b, 1}} {
		for _, y := range []end{{c, -1}, {d, 1}} {
			p, inf := x.times(y)
			switch {
			case inf < 0:
				lowInf = true
			case inf > 0:
				highInf = true
			default:
				if low == nil || p.Cmp(low) < 0 {
					low = p
				}
				if high == nil || p.Cmp(high) > 0 {
					high = p
				}
			}
		}
	}
	if lowInf {
		low = nil
	}
	if highInf {
		high = nil
	}
	return low, high
}

// end is an end of an interval; without a value it is infinite with that sign.
type end struct {
	v    *big.Rat
	sign int
}

// times is the product, or the sign of an infinite one. Zero times infinite is
// zero, which is right for bounds of products.
func (x end) times(y end) (*big.Rat, int) {
	switch {
	case x.v != nil && y.v != nil:
		return mulRat(x.v, y.v), 0
	case x.v != nil && x.v.Sign() == 0 || y.v != nil && y.v.Sign() == 0:
		return ratZero, 0
	}
	return nil, x.direction() * y.direction()
}

func (x end) direction() int {
	if x.v != nil {
		return x.v.Sign()
	}
	return x.sign
}
