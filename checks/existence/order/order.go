// Package order is a calculus of orders: it expands an expression of one
// variable x → 0+ into leading terms
//
//	c · x^a · L^b · LL^c · exp(P),  L = log(1/x), LL = log L,
//
// where P is itself a sum of such terms that tend to infinity, and tells from
// the expansion whether the expression has an integral up to that end. Every
// end of a support is mapped to x → 0+: x = θ − e at a finite end from above,
// e − θ from below, 1/|θ| at an infinite one.
//
// Exponents and coefficients are exact as long as they are rational (or sums
// of logarithms of rationals); otherwise they are intervals rounded outwards,
// and an operation whose outcome the interval leaves open answers Unknown. An
// expansion carries several terms and an explicit remainder, so cancellation
// of leading terms is followed as far as the terms reach and refused beyond.
// Expansions of this kind form a Hardy field; see Bourbaki, Functions of a
// Real Variable, chapter V (from memory). All rules used are the elementary
// ones: geometric, binomial, exponential and logarithmic series of a term that
// tends to 0, Stirling's series, and Mills' ratio for the normal tail.
//
// The same operations also work on values over an interval (Boxed), which
// shows where an expression is continuous.
package order

import (
	"math"
	"math/big"
)

var inf = math.Inf(1)

// Value is an expansion (*Series) or a value over an interval (*Boxed).
type Value interface{ isValue() }

func (*Series) isValue() {}
func (*Boxed) isValue()  {}

// Const is an exact constant.
func Const(r *big.Rat) Value { return constant(Rat(r)) }

// Number is a small exact constant.
func Number(n int64) Value { return constant(Int(n)) }

// Some is a constant that lies in [lo, hi].
func Some(lo, hi float64) Value { return constant(Within(lo, hi)) }

// X is the variable that tends to 0+.
func X() Value { return &Series{Terms: []Term{{one, Mono{A: one, B: zero, C: zero}}}} }

// L is log(1/x).
func L() Value { return &Series{Terms: []Term{{one, monoL}}} }

// Exact returns the rational that a value equals, nil when it isn't a constant
// or not known exactly.
func Exact(v Value) *big.Rat {
	switch v := v.(type) {
	case *Series:
		if c, ok := v.isConst(); ok {
			return c.Exact()
		}
	case *Boxed:
		if v.a != nil && v.b.Sign() == 0 {
			return v.a
		}
	}
	return nil
}

// Enclosure bounds a constant; ok is false for anything else.
func Enclosure(v Value) (lo, hi float64, ok bool) {
	s, isSeries := v.(*Series)
	if !isSeries {
		return 0, 0, false
	}
	c, ok := s.isConst()
	finite := !math.IsInf(c.iv.Lo, 0) && !math.IsInf(c.iv.Hi, 0)
	return c.iv.Lo, c.iv.Hi, ok && finite
}

// binary brings two values to the same kind.
func binary(a, b Value, s func(a, b *Series) *Series, x func(a, b *Boxed) *Boxed) Value {
	p, okp := a.(*Series)
	q, okq := b.(*Series)
	if okp && okq {
		return s(p, q)
	}
	box := &Box{}
	if v, ok := a.(*Boxed); ok {
		box = v.box
	} else if v, ok := b.(*Boxed); ok {
		box = v.box
	}
	return x(lift(box, a), lift(box, b))
}

func unary(a Value, s func(*Series) *Series, x func(*Boxed) *Boxed) Value {
	switch a := a.(type) {
	case *Series:
		return s(a)
	case *Boxed:
		return x(a)
	}
	panic("order: no value")
}

// Add is a + b.
func Add(a, b Value) Value { return binary(a, b, addSeries, addBoxed) }

// Mul is a · b.
func Mul(a, b Value) Value { return binary(a, b, mulSeries, mulBoxed) }

// Neg is −a.
func Neg(a Value) Value { return Times(a, big.NewRat(-1, 1)) }

// Times is r · a.
func Times(a Value, r *big.Rat) Value { return Mul(Const(r), a) }

// Sub is a − b.
func Sub(a, b Value) Value {
	if s, ok := a.(*Series); ok {
		if t, ok := b.(*Series); ok {
			if c, ok := s.isConst(); ok {
				if d, ok := t.isConst(); ok {
					return constant(subCoef(c, d))
				}
			}
		}
	}
	q, bBoxed := b.(*Boxed)
	if bBoxed {
		if r := Exact(a); r != nil && r.Cmp(ratOne) == 0 {
			return oneMinus(q)
		}
		return difference(lift(q.box, a), q)
	}
	if p, ok := a.(*Boxed); ok {
		return difference(p, lift(p.box, b))
	}
	return Add(a, Neg(b))
}

// Div is a / b.
func Div(a, b Value) Value { return Mul(a, Recip(b)) }

// Recip is 1 / a.
func Recip(a Value) Value { return unary(a, recip, recipBoxed) }

// Log is log a; it panics with Vanishes when a is exactly 0.
func Log(a Value) Value { return unary(a, logSeries, logBoxed) }

// Exp is e^a.
func Exp(a Value) Value { return unary(a, expSeries, expBoxed) }

// Power is a^q.
func Power(a Value, q *big.Rat) Value {
	return unary(a, func(s *Series) *Series { return powSeries(s, q) },
		func(b *Boxed) *Boxed { return powBoxed(b, q) })
}

// Pow is a^b.
func Pow(a, b Value) Value {
	if q := Exact(b); q != nil {
		return Power(a, q)
	}
	if r := Exact(a); r != nil && r.Sign() == 0 {
		if Sign(b) > 0 {
			return Number(0)
		}
		unknown("0 to a power that is not positive")
	}
	return Exp(Mul(b, Log(a)))
}

// Sqrt is the square root.
func Sqrt(a Value) Value { return Power(a, big.NewRat(1, 2)) }

// Square is a².
func Square(a Value) Value { return Power(a, big.NewRat(2, 1)) }

// Abs is |a|.
func Abs(a Value) Value {
	return unary(a, func(s *Series) *Series {
		if Sign(s) < 0 {
			return scale(s, Int(-1))
		}
		return s
	}, absBoxed)
}

// Sign is the sign of a near the end, or throughout the interval.
func Sign(a Value) int {
	switch a := a.(type) {
	case *Series:
		if a.isExactZero() {
			return 0
		}
		s, ok := a.lead().C.Sign()
		if !ok {
			unknown("a sign can't be told")
		}
		return s
	case *Boxed:
		return a.definite()
	}
	panic("order: no value")
}

// Tends says where a goes: −∞ (−2), a negative or positive constant (−1, 1),
// 0 (0; also when it is 0 throughout), +∞ (2).
func Tends(a Value) int {
	s, ok := a.(*Series)
	if !ok {
		unknown("a limit is asked of an interval")
	}
	if len(s.Terms) == 0 {
		if s.Rem == nil || compareMono(*s.Rem, monoOne) < 0 {
			return 0
		}
		unknown("a limit can't be told")
	}
	t := s.Terms[0]
	sign, _ := t.C.Sign()
	switch compareMono(t.M, monoOne) {
	case 1:
		return 2 * sign
	case 0:
		return sign
	}
	return 0
}

// Try runs f and returns why it could not finish, nil when it could. A Split
// passes through.
func Try(f func()) (err *Unknown) {
	defer func() {
		switch p := recover().(type) {
		case nil:
		case *Unknown:
			err = p
		default:
			panic(p)
		}
	}()
	f()
	return nil
}
