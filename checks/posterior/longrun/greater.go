package longrun

import "math"

// Greater is P(X > Y) for independent X ~ Beta(a, b) and Y ~ Beta(c, d) when a − c
// and b − d are whole numbers; ok is false otherwise, or when a parameter is not
// positive.
//
// Both laws alike give 1/2. From there one parameter moves by one at a time:
//
//	h(a+1, b, c, d) = h(a, b, c, d) + g/a,  h(a, b+1, c, d) = h(a, b, c, d) − g/b,
//	g = B(a+c, b+d) / (B(a, b) B(c, d)),
//
// which follows from integrating by parts (derivation; also Cook 2005, Exact
// calculation of beta inequalities, from memory).
func Greater(a, b, c, d float64) (value, bound float64, ok bool) {
	if !(a > 0 && b > 0 && c > 0 && d > 0) || !whole(a-c) || !whole(b-d) || math.Abs(a-c)+math.Abs(b-d) > 1e6 {
		return math.NaN(), math.NaN(), false
	}
	h, x, y := 0.5, c, d
	step := func() float64 {
		return math.Exp(logBeta(x+c, y+d) - logBeta(x, y) - logBeta(c, d))
	}
	for x < a-0.5 {
		h += step() / x
		x++
	}
	for x > a+0.5 {
		x--
		h -= step() / x
	}
	for y < b-0.5 {
		h -= step() / y
		y++
	}
	for y > b+0.5 {
		y--
		h += step() / y
	}
	return math.Min(1, math.Max(0, h)), 1e-12 * (1 + math.Abs(a-c) + math.Abs(b-d)) * math.Max(1, math.Log(a+b+c+d)), true
}

func whole(x float64) bool { return math.Abs(x-math.Round(x)) < 1e-12 }

func logBeta(a, b float64) float64 { return lgamma(a) + lgamma(b) - lgamma(a+b) }
