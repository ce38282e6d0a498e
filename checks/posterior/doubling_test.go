package posterior

import (
	"context"
	"math"
	"testing"
)

// With 0 of 40 and Beta(0, 0) the integral toward 0 grows by the same amount
// with each halving; with one event it settles.
func TestDoubling(t *testing.T) {
	grow := func(text, end string) (last, before float64) {
		m := build(t, text)
		s, err := Doubling(context.Background(), m.Declared(), m.Unknowns[0], end)
		if err != nil {
			t.Fatal(err)
		}
		n := len(s)
		return s[n-1].Integral - s[n-2].Integral, s[n-2].Integral - s[n-3].Integral
	}
	a, b := grow("unknown p : probability\nobserve 0 of 40 with probability p\nprior p as Beta(0, 0)\n", "0")
	if !(a > 0) || math.Abs(a/b-1) > 0.01 {
		t.Errorf("no event: steps %g then %g", b, a)
	}
	a, b = grow("unknown p : probability\nobserve 1 of 40 with probability p\nprior p as Beta(0, 0)\n", "0")
	if !(a < 0.6*b) {
		t.Errorf("one event: steps %g then %g", b, a)
	}
	a, b = grow("unknown tau : scale\nunknown mu : location\nobserve 1 as Normal(mu, sd = tau)\nobserve 3 as Normal(mu, sd = tau)\nprior mu flat\nprior tau flat\n", "inf")
	if !(a > 0) || math.Abs(a/b-1) > 0.01 {
		t.Errorf("two readings, flat: steps %g then %g", b, a)
	}
}
