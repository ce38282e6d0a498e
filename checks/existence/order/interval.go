package order

import "math"

// Interval is a closed interval of real numbers, possibly unbounded. Results
// are rounded outwards, so an interval always contains the true value.
type Interval struct{ Lo, Hi float64 }

var whole = Interval{math.Inf(-1), math.Inf(1)}

func down(x float64) float64 { return math.Nextafter(x, math.Inf(-1)) }
func up(x float64) float64   { return math.Nextafter(x, math.Inf(1)) }

// widen moves both ends outwards by n units in the last place, relatively and
// by a denormal's worth absolutely; used after library functions, whose error
// stays below that (the Go library documents errors under one unit for these).
func widen(lo, hi float64, n float64) Interval {
	const ulp = 2.3e-16
	if !math.IsInf(lo, 0) {
		lo = down(lo - math.Abs(lo)*n*ulp)
	}
	if !math.IsInf(hi, 0) {
		hi = up(hi + math.Abs(hi)*n*ulp)
	}
	return Interval{lo, hi}
}

func (a Interval) valid() bool { return !(math.IsNaN(a.Lo) || math.IsNaN(a.Hi)) }

func (a Interval) add(b Interval) Interval {
	r := Interval{down(a.Lo + b.Lo), up(a.Hi + b.Hi)}
	if math.IsNaN(r.Lo) {
		r.Lo = math.Inf(-1)
	}
	if math.IsNaN(r.Hi) {
		r.Hi = math.Inf(1)
	}
	return r
}

func (a Interval) neg() Interval { return Interval{-a.Hi, -a.Lo} }

// mulEnd is a product in which 0 · ∞ is 0: an infinite end is not attained.
func mulEnd(x, y float64) float64 {
	if x == 0 || y == 0 {
		return 0
	}
	return x * y
}

func (a Interval) mul(b Interval) Interval {
	p := [4]float64{mulEnd(a.Lo, b.Lo), mulEnd(a.Lo, b.Hi), mulEnd(a.Hi, b.Lo), mulEnd(a.Hi, b.Hi)}
	lo, hi := p[0], p[0]
	for _, v := range p[1:] {
		lo, hi = math.Min(lo, v), math.Max(hi, v)
	}
	// A product that underflows to 0 from two finite ends is not exact; one
	// with a factor 0 is, and moving it by a denormal would lose a sign.
	r := Interval{down(lo), up(hi)}
	if lo == 0 && (a.Lo >= 0 && b.Lo >= 0 || a.Hi <= 0 && b.Hi <= 0) {
		r.Lo = 0
	}
	if hi == 0 && (a.Lo >= 0 && b.Hi <= 0 || a.Hi <= 0 && b.Lo >= 0) {
		r.Hi = 0
	}
	return r
}

// inv is 1/a for an interval that excludes 0 in its interior; ok is false
// otherwise.
func (a Interval) inv() (Interval, bool) {
	if a.Lo < 0 && a.Hi > 0 || a.Lo == 0 && a.Hi == 0 {
		return whole, false
	}
	lo, hi := math.Inf(-1), math.Inf(1)
	if a.Hi != 0 {
		lo = down(1 / a.Hi)
		if a.Lo >= 0 && lo < 0 {
			lo = 0
		}
	}
	if a.Lo != 0 {
		hi = up(1 / a.Lo)
		if a.Hi <= 0 && hi > 0 {
			hi = 0
		}
	}
	return Interval{lo, hi}, true
}

func (a Interval) sign() (int, bool) {
	switch {
	case a.Lo > 0:
		return 1, true
	case a.Hi < 0:
		return -1, true
	case a.Lo == 0 && a.Hi == 0:
		return 0, true
	}
	return 0, false
}

func (a Interval) exp() Interval {
	r := widen(math.Exp(a.Lo), math.Exp(a.Hi), 4)
	if r.Lo < 0 {
		r.Lo = 0
	}
	return r
}

// log of a positive interval; a low end of 0 gives −∞.
func (a Interval) log() Interval {
	lo := math.Inf(-1)
	if a.Lo > 0 {
		lo = math.Log(a.Lo)
	}
	r := widen(lo, math.Log(a.Hi), 4)
	// Near 1 the relative widening of a value near 0 still covers the error:
	// the library is accurate relative to the result there.
	return r
}

func (a Interval) atan() Interval { return widen(math.Atan(a.Lo), math.Atan(a.Hi), 4) }

// phi is the standard normal distribution function.
func (a Interval) phi() Interval {
	f := func(x float64) float64 { return 0.5 * math.Erfc(-x/math.Sqrt2) }
	n := 8 + 4*math.Max(a.Lo*a.Lo, a.Hi*a.Hi)
	if math.IsInf(n, 0) {
		return Interval{math.Max(0, f(a.Lo)*(1-1e-9)), math.Min(1, f(a.Hi)*(1+1e-9))}
	}
	r := widen(f(a.Lo), f(a.Hi), n)
	return Interval{math.Max(0, r.Lo), math.Min(1, r.Hi)}
}

// gammaMin is where log-gamma has its least value on the positive half-line.
const gammaMin = 1.4616321449683623

// lgamma on positive numbers: decreasing up to gammaMin, increasing after it.
// The error of the library is small in absolute terms near its zeros 1 and 2.
func (a Interval) lgamma() Interval {
	g := func(x float64) float64 {
		if x == 0 {
			return math.Inf(1)
		}
		if math.IsInf(x, 1) {
			return x
		}
		v, _ := math.Lgamma(x)
		return v
	}
	l, h := g(a.Lo), g(a.Hi)
	lo, hi := math.Min(l, h), math.Max(l, h)
	if a.Lo <= gammaMin*(1+1e-12) && a.Hi >= gammaMin*(1-1e-12) {
		lo = math.Min(lo, -0.12148629053584961)
	}
	r := widen(lo, hi, 64)
	if !math.IsInf(r.Lo, 0) {
		r.Lo -= 1e-14
	}
	if !math.IsInf(r.Hi, 0) {
		r.Hi += 1e-14
	}
	return r
}
