package order

import (
	"math"
	"math/big"
)

var (
	half       = big.NewRat(1, 2)
	halfLog2Pi = Within(0.91893853320467266, 0.91893853320467289)
	invSqrt2Pi = Within(0.39894228040143262, 0.39894228040143276)
	sqrt2Pi    = Within(2.5066282746310002, 2.5066282746310011)
	halfPi     = Within(1.5707963267948963, 1.5707963267948968)
	logFourPi  = Within(2.5310242469692903, 2.5310242469692913)
	ratTwo     = big.NewRat(2, 1)
	ratMinus   = big.NewRat(-1, 1)
)

// Pi is the number π.
func Pi() Value { return Times(constant(halfPi), ratTwo) }

// HalfLog2Pi is log(2π)/2.
func HalfLog2Pi() Value { return constant(halfLog2Pi) }

// Expit is 1/(1 + e^−a).
func Expit(a Value) Value {
	if b, ok := a.(*Boxed); ok {
		minus := mulBoxed(b, linear(b.box, ratMinus, ratZero))
		f := func(v, at *Boxed) *Boxed {
			r := recipBoxed(addBoxed(linear(b.box, ratOne, ratZero), expBoxed(v)))
			return rising(boxed(b.box, r.iv, 1), "expit", at)
		}
		p, q := f(minus, b), f(b, minus)
		p.complement, q.complement = q, p
		return p
	}
	return Recip(Add(Number(1), Exp(Neg(a))))
}

// Logit is log(a/(1 − a)).
func Logit(a Value) Value { return Sub(Log(a), Log(Sub(Number(1), a))) }

// Odds is a/(1 − a).
func Odds(a Value) Value { return Div(a, Sub(Number(1), a)) }

// Cloglog is log(−log(1 − a)).
func Cloglog(a Value) Value { return Log(Neg(Log(Sub(Number(1), a)))) }

// Tanh is the hyperbolic tangent.
func Tanh(a Value) Value {
	e := Exp(Times(a, big.NewRat(-2, 1)))
	return Sub(Times(Recip(Add(Number(1), e)), ratTwo), Number(1))
}

// Atanh is Fisher's z.
func Atanh(a Value) Value {
	return Times(Sub(Log(Add(Number(1), a)), Log(Sub(Number(1), a))), half)
}

// Atan is the arc tangent.
func Atan(a Value) Value {
	return unary(a, func(s *Series) *Series {
		switch t := Tends(s); t {
		case 2, -2:
			if t < 0 {
				return scale(Atan(scale(s, Int(-1))).(*Series), Int(-1))
			}
			r := recip(s)
			return addSeries(constant(halfPi), scale(oddAtan(r), Int(-1)))
		case 0:
			return oddAtan(s)
		default:
			c, d := aroundConstant(s)
			slope := Within(1/(1+up(math.Max(c.iv.Lo*c.iv.Lo, c.iv.Hi*c.iv.Hi)))*(1-1e-12), 1)
			return firstOrder(opaque(c.iv.atan()), slope, d)
		}
	}, func(b *Boxed) *Boxed { return boxed(b.box, b.iv.atan(), b.sign) })
}

func oddAtan(r *Series) *Series {
	return taylor(r, func(k int) Coef {
		switch {
		case k%2 == 0:
			return zero
		case k%4 == 1:
			return Rat(big.NewRat(1, int64(k)))
		}
		return Rat(big.NewRat(-1, int64(k)))
	})
}

// aroundConstant splits s = c + δ with δ → 0.
func aroundConstant(s *Series) (Coef, *Series) {
	c := s.lead().C
	return c, &Series{Terms: s.Terms[1:], Rem: s.Rem}
}

// firstOrder is value + slope·δ with a remainder of order δ when the slope is
// only enclosed: the mean value theorem puts the slope into its interval.
func firstOrder(value, slope Coef, d *Series) *Series {
	if d.isExactZero() {
		return constant(value)
	}
	if len(d.Terms) == 0 {
		return addSeries(constant(value), d)
	}
	t := d.Terms[0]
	m := t.M
	// Only the order of the next term is kept: its coefficient is a mean value.
	_ = slope
	return addSeries(constant(value), &Series{Rem: &m})
}

// Phi is the standard normal distribution function. At −∞ Mills' ratio gives
// φ(t)/t · (1 − 1/t² + 3/t⁴ − 15/t⁶ + O(t⁻⁸)).
func Phi(a Value) Value {
	return unary(a, func(s *Series) *Series {
		switch t := Tends(s); t {
		case 2:
			return addSeries(constant(one), scale(Phi(scale(s, Int(-1))).(*Series), Int(-1)))
		case -2:
			t := scale(s, Int(-1))
			r := recip(t)
			r2 := mulSeries(r, r)
			density := scale(expSeries(scale(mulSeries(t, t), Rat(big.NewRat(-1, 2)))), invSqrt2Pi)
			k := taylor(r2, func(k int) Coef {
				return []Coef{one, Int(-1), Int(3), Int(-15), Int(105), Int(-945), Int(10395)}[k]
			})
			return mulSeries(mulSeries(density, r), k)
		case 0:
			return addSeries(constant(Rat(half)), taylorOdd(s))
		default:
			c, d := aroundConstant(s)
			return firstOrder(positiveIf(opaque(c.iv.phi()), true), one, d)
		}
	}, func(b *Boxed) *Boxed {
		minus := mulBoxed(b, linear(b.box, ratMinus, ratZero))
		p := rising(boxed(b.box, b.iv.phi(), 1), "Phi", b)
		q := rising(boxed(b.box, minus.iv.phi(), 1), "Phi", minus)
		p.complement, q.complement = q, p
		return p
	})
}

// taylorOdd is Phi(δ) − 1/2 = (δ − δ³/6 + O(δ⁵))/√(2π).
func taylorOdd(d *Series) *Series {
	if d.isExactZero() {
		return d
	}
	r := taylor(d, func(k int) Coef {
		switch k {
		case 1:
			return invSqrt2Pi
		case 3:
			return mulCoef(invSqrt2Pi, Rat(big.NewRat(-1, 6)))
		case 5:
			return mulCoef(invSqrt2Pi, Rat(big.NewRat(1, 40)))
		}
		return zero
	})
	return r
}

// Probit is the inverse of Phi. With ℓ = −log a, as a → 0:
// probit(a)² = 2ℓ − log(4πℓ) + O(log ℓ / ℓ), from Mills' ratio.
func Probit(a Value) Value {
	return unary(a, func(s *Series) *Series {
		upper := addSeries(constant(one), scale(s, Int(-1)))
		if Tends(upper) == 0 {
			return scale(Probit(upper).(*Series), Int(-1))
		}
		if Tends(s) != 0 {
			c, d := aroundConstant(s)
			if r := c.Exact(); r != nil && r.Cmp(half) == 0 {
				if d.isExactZero() {
					return d
				}
				m := powMono(biggest(d), Int(3))
				return addSeries(scale(d, sqrt2Pi), &Series{Rem: &m})
			}
			v := math.Sqrt2 * math.Erfinv(2*(c.iv.Lo+c.iv.Hi)/2-1)
			if math.IsNaN(v) || math.IsInf(v, 0) {
				unknown("probit of a constant outside 0 to 1")
			}
			// Enclose by checking Phi at both sides of the guess.
			for w := 1e-9; w < 8; w *= 4 {
				lo, hi := Interval{v - w, v - w}.phi(), Interval{v + w, v + w}.phi()
				if lo.Hi <= c.iv.Lo && hi.Lo >= c.iv.Hi {
					return firstOrder(Within(v-w, v+w), one, d)
				}
			}
			unknown("probit of a constant near 0 or 1")
		}
		if Sign(s) <= 0 {
			unknown("probit of something that is not positive")
		}
		l := scale(logSeries(s), Int(-1))
		inner := addSeries(scale(l, Int(2)), scale(addSeries(logSeries(l), constant(logFourPi)), Int(-1)))
		rem := mulMono(biggest(logSeries(l)), powMono(biggest(l), Int(-1)))
		z := powSeries(addSeries(inner, &Series{Rem: &rem}), half)
		return scale(z, Int(-1))
	}, func(b *Boxed) *Boxed {
		one := linear(b.box, ratOne, ratZero)
		if b.definite() <= 0 || addBoxed(one, mulBoxed(b, linear(b.box, ratMinus, ratZero))).definite() <= 0 {
			unknown("probit of something outside 0 to 1")
		}
		return boxed(b.box, whole, 0)
	})
}

// HalfProbitSquare is probit(a)²/2: minus the log density of the standard
// normal law at probit(a), up to a constant. It keeps exact coefficients where
// squaring Probit would not.
func HalfProbitSquare(a Value) Value {
	s, ok := a.(*Series)
	if !ok {
		return Times(Square(Probit(a)), half)
	}
	if upper := addSeries(constant(one), scale(s, Int(-1))); Tends(upper) == 0 {
		s = upper
	}
	if Tends(s) != 0 {
		return Times(Square(Probit(s)), half)
	}
	l := scale(logSeries(s), Int(-1))
	inner := addSeries(scale(l, Int(2)), scale(addSeries(logSeries(l), constant(logFourPi)), Int(-1)))
	rem := mulMono(biggest(logSeries(l)), powMono(biggest(l), Int(-1)))
	return scale(addSeries(inner, &Series{Rem: &rem}), Rat(half))
}

// LogGamma is log Γ(a) for a positive a: Stirling's series at infinity,
// −log a + log Γ(1 + a) at 0.
func LogGamma(a Value) Value {
	return unary(a, func(s *Series) *Series {
		switch Tends(s) {
		case 2:
			r := recip(s)
			lead := mulSeries(addSeries(s, constant(Rat(big.NewRat(-1, 2)))), logSeries(s))
			lead = addSeries(lead, scale(s, Int(-1)))
			lead = addSeries(lead, constant(halfLog2Pi))
			corr := addSeries(scale(r, Rat(big.NewRat(1, 12))), scale(powSeries(r, big.NewRat(3, 1)), Rat(big.NewRat(-1, 360))))
			m := powMono(biggest(r), Int(5))
			return addSeries(addSeries(lead, corr), &Series{Rem: &m})
		case 0:
			if s.isExactZero() || Sign(s) <= 0 {
				unknown("log-gamma of something that is not positive")
			}
			m := biggest(s)
			return addSeries(scale(logSeries(s), Int(-1)), &Series{Rem: &m})
		case 1:
			c, d := aroundConstant(s)
			return firstOrder(gammaCoef(c), one, d)
		}
		unknown("log-gamma of something negative")
		return nil
	}, func(b *Boxed) *Boxed {
		if b.definite() <= 0 {
			unknown("log-gamma of something that is not positive")
		}
		return boxed(b.box, Interval{math.Max(0, b.iv.Lo), b.iv.Hi}.lgamma(), 0)
	})
}

// gammaCoef is log Γ of a positive constant, exact for small whole numbers.
func gammaCoef(c Coef) Coef {
	if r := c.Exact(); r != nil && r.IsInt() && r.Num().IsInt64() && r.Num().Int64() <= 20 {
		f := big.NewInt(1)
		for i := int64(2); i < r.Num().Int64(); i++ {
			f.Mul(f, big.NewInt(i))
		}
		return logCoef(Rat(new(big.Rat).SetInt(f)))
	}
	return opaque(c.iv.lgamma())
}
