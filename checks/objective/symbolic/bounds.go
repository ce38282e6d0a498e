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
	nonneg := func(x *big.Rat) bool { return x != nil && x.Sign() >= 0 }
	nonpos := func(x *big.Rat) bool { return x != nil && x.Sign() <= 0 }
	switch {
	case nonneg(a) && nonneg(c):
		low = mulRat(a, c)
		if b != nil && d != nil {
			high = mulRat(b, d)
		}
		return low, high
	case nonpos(b) && nonneg(c):
		x, y := mulBounds(negEnd(b), negEnd(a), c, d)
		return negEnd(y), negEnd(x)
	case nonneg(a) && nonpos(d):
		x, y := mulBounds(a, b, negEnd(d), negEnd(c))
		return negEnd(y), negEnd(x)
	case nonpos(b) && nonpos(d):
		return mulBounds(negEnd(b), negEnd(a), negEnd(d), negEnd(c))
	}
	if a == nil || b == nil || c == nil || d == nil {
		return nil, nil
	}
	for i, p := range []*big.Rat{mulRat(a, c), mulRat(a, d), mulRat(b, c), mulRat(b, d)} {
		if i == 0 || p.Cmp(low) < 0 {
			low = p
		}
		if i == 0 || p.Cmp(high) > 0 {
			high = p
		}
	}
	return low, high
}

func negEnd(x *big.Rat) *big.Rat {
	if x == nil {
		return nil
	}
	return new(big.Rat).Neg(x)
}
