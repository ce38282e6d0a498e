package order

import (
	"math"
	"math/big"
)

// Boxed is the value of an expression of one variable over an open interval:
// an enclosure of its range, its sign where it is the same throughout, and its
// exact linear form where it has one. Working with it shows where an
// expression is continuous: an operation that is not continuous everywhere
// (division, logarithm, root) asks for the sign of its argument, and asks for
// a split of the interval when it is not known.
type Boxed struct {
	iv   Interval
	sign int // 1, −1, or 0 when it may change or vanish
	zero bool
	box  *Box
	a, b *big.Rat // a + b·θ, nil when not linear
	// fn and arg remember an increasing function's argument, complement the
	// value 1 − v: they keep signs that interval subtraction would lose.
	fn         string
	arg        *Boxed
	complement *Boxed
}

// rising marks v as an increasing function of arg.
func rising(v *Boxed, fn string, arg *Boxed) *Boxed {
	v.fn, v.arg = fn, arg
	return v
}

// oneMinus is 1 − v.
func oneMinus(v *Boxed) *Boxed {
	if v.complement != nil {
		return v.complement
	}
	c := addBoxed(linear(v.box, ratOne, ratZero), mulBoxed(v, linear(v.box, ratMinus, ratZero)))
	if c.sign == 0 && v.fn == "exp" && v.arg.sign != 0 {
		c = boxed(v.box, c.iv, -v.arg.sign)
	}
	out := *c
	out.complement = v
	return &out
}

// difference is a − b.
func difference(a, b *Boxed) *Boxed {
	if a.complement != nil && b.complement != nil {
		return difference(b.complement, a.complement)
	}
	c := addBoxed(a, mulBoxed(b, linear(b.box, ratMinus, ratZero)))
	if c.sign == 0 && !c.zero && a.fn != "" && a.fn == b.fn {
		d := difference(a.arg, b.arg)
		if d.sign != 0 {
			return boxed(c.box, c.iv, d.sign)
		}
	}
	return c
}

// Box is an open interval; a nil end is infinite.
type Box struct{ Lo, Hi *big.Rat }

// Split is what an operation panics with when the sign of its argument changes
// or may change inside the box. At is the exact root, nil when it isn't known.
type Split struct{ At *big.Rat }

// Over is the variable itself over a box.
func Over(box *Box) *Boxed { return linear(box, new(big.Rat), ratOne) }

func linear(box *Box, a, b *big.Rat) *Boxed {
	v := &Boxed{box: box, a: a, b: b}
	if b.Sign() == 0 {
		v.iv, v.sign, v.zero = ratInterval(a), a.Sign(), a.Sign() == 0
		return v
	}
	at := func(end *big.Rat, infinite float64) (float64, float64, int) {
		if end == nil {
			s := infinite * float64(b.Sign())
			return s, s, int(math.Copysign(1, s))
		}
		r := new(big.Rat).Mul(b, end)
		r.Add(r, a)
		iv := ratInterval(r)
		return iv.Lo, iv.Hi, r.Sign()
	}
	l1, h1, s1 := at(box.Lo, math.Inf(-1))
	l2, h2, s2 := at(box.Hi, math.Inf(1))
	v.iv = Interval{math.Min(l1, l2), math.Max(h1, h2)}
	if s1 >= 0 && s2 >= 0 {
		v.sign = 1
	} else if s1 <= 0 && s2 <= 0 {
		v.sign = -1
	}
	return v
}

func boxed(box *Box, iv Interval, sign int) *Boxed {
	if !iv.valid() {
		iv = whole
	}
	if sign == 0 {
		if s, ok := iv.sign(); ok {
			sign = s
		}
	} else if sign > 0 && iv.Lo < 0 {
		iv.Lo = 0
	} else if sign < 0 && iv.Hi > 0 {
		iv.Hi = 0
	}
	return &Boxed{iv: iv, sign: sign, box: box, zero: iv.Lo == 0 && iv.Hi == 0}
}

// lift turns a constant series into a value over the box.
func lift(box *Box, v Value) *Boxed {
	switch v := v.(type) {
	case *Boxed:
		return v
	case *Series:
		c, ok := v.isConst()
		if !ok {
			unknown("an expansion meets an interval")
		}
		if r := c.Exact(); r != nil {
			return linear(box, r, ratZero)
		}
		s, _ := c.Sign()
		return boxed(box, c.iv, s)
	}
	panic("order: no value")
}

// definite returns the sign, or asks for a split.
func (v *Boxed) definite() int {
	if v.sign != 0 || v.zero {
		return v.sign
	}
	if v.a != nil && v.b.Sign() != 0 {
		root := new(big.Rat).Quo(v.a, v.b)
		panic(&Split{root.Neg(root)})
	}
	panic(&Split{})
}

func addBoxed(a, b *Boxed) *Boxed {
	if a.a != nil && b.a != nil {
		return linear(a.box, new(big.Rat).Add(a.a, b.a), new(big.Rat).Add(a.b, b.b))
	}
	if a.zero {
		return b
	}
	if b.zero {
		return a
	}
	sign := 0
	if a.sign == b.sign {
		sign = a.sign
	}
	return boxed(a.box, a.iv.add(b.iv), sign)
}

func mulBoxed(a, b *Boxed) *Boxed {
	if a.a != nil && b.a != nil {
		if a.b.Sign() == 0 {
			return linear(a.box, new(big.Rat).Mul(a.a, b.a), new(big.Rat).Mul(a.a, b.b))
		}
		if b.b.Sign() == 0 {
			return linear(a.box, new(big.Rat).Mul(a.a, b.a), new(big.Rat).Mul(b.a, a.b))
		}
	}
	return boxed(a.box, a.iv.mul(b.iv), a.sign*b.sign)
}

func recipBoxed(a *Boxed) *Boxed {
	s := a.definite()
	if s == 0 {
		unknown("division by 0")
	}
	if a.a != nil && a.b.Sign() == 0 {
		return linear(a.box, new(big.Rat).Inv(a.a), ratZero)
	}
	iv := a.iv
	if s > 0 && iv.Lo < 0 {
		iv.Lo = 0
	}
	if s < 0 && iv.Hi > 0 {
		iv.Hi = 0
	}
	r, ok := iv.inv()
	if !ok {
		r = whole
	}
	return boxed(a.box, r, s)
}

func powBoxed(a *Boxed, q *big.Rat) *Boxed {
	switch {
	case q.Sign() == 0:
		return linear(a.box, ratOne, ratZero)
	case q.Cmp(ratOne) == 0:
		return a
	}
	if q.IsInt() && q.Sign() > 0 {
		lo, hi := math.Abs(a.iv.Lo), math.Abs(a.iv.Hi)
		big, small := math.Max(lo, hi), math.Min(lo, hi)
		if a.iv.Lo < 0 && a.iv.Hi > 0 {
			small = 0
		}
		n, _ := q.Float64()
		iv := widen(math.Pow(small, n), math.Pow(big, n), 16)
		if q.Num().Bit(0) == 0 {
			sign := 0
			if a.sign != 0 {
				sign = 1
			}
			if iv.Lo < 0 {
				iv.Lo = 0
			}
			return boxed(a.box, iv, sign)
		}
		switch a.sign {
		case 1:
			return boxed(a.box, iv, 1)
		case -1:
			return boxed(a.box, iv.neg(), -1)
		}
		return boxed(a.box, Interval{-iv.Hi, iv.Hi}, 0)
	}
	if q.IsInt() {
		return recipBoxed(powBoxed(a, new(big.Rat).Neg(q)))
	}
	if s := a.definite(); s < 0 {
		unknown("fractional power of something negative")
	} else if s == 0 {
		if q.Sign() > 0 {
			return a
		}
		unknown("division by 0")
	}
	return expBoxed(mulBoxed(logBoxed(a), linear(a.box, q, ratZero)))
}

func logBoxed(a *Boxed) *Boxed {
	switch s := a.definite(); {
	case s == 0:
		panic(Vanishes)
	case s < 0:
		unknown("logarithm of something negative")
	}
	if a.fn == "exp" {
		return a.arg
	}
	if a.a != nil && a.b.Sign() == 0 {
		c := logCoef(Rat(a.a))
		s, _ := c.Sign()
		return boxed(a.box, c.iv, s)
	}
	sign := 0
	strict := a.a != nil // a linear function does not attain its ends
	switch {
	case a.iv.Hi < 1 || strict && a.iv.Hi == 1:
		sign = -1
	case a.iv.Lo > 1 || strict && a.iv.Lo == 1:
		sign = 1
	}
	return boxed(a.box, Interval{math.Max(0, a.iv.Lo), a.iv.Hi}.log(), sign)
}

func expBoxed(a *Boxed) *Boxed { return rising(boxed(a.box, a.iv.exp(), 1), "exp", a) }

func absBoxed(a *Boxed) *Boxed {
	switch {
	case a.sign > 0 || a.zero:
		return a
	case a.sign < 0:
		return mulBoxed(a, linear(a.box, big.NewRat(-1, 1), ratZero))
	}
	return boxed(a.box, Interval{0, math.Max(math.Abs(a.iv.Lo), math.Abs(a.iv.Hi))}, 0)
}

// Range is some number between two ends; a nil end is infinite.
func Range(lo, hi *big.Rat) Value {
	iv := whole
	sign := 0
	if lo != nil {
		iv.Lo = ratInterval(lo).Lo
		if lo.Sign() >= 0 {
			sign = 1
		}
	}
	if hi != nil {
		iv.Hi = ratInterval(hi).Hi
		if hi.Sign() <= 0 {
			sign = -1
		}
	}
	return boxed(&Box{}, iv, sign)
}

// Bounds encloses the values over the box.
func (v *Boxed) Bounds() (lo, hi float64) { return v.iv.Lo, v.iv.Hi }
