package family

import (
	"math"
	"testing"
)

func TestExtremeParameters(t *testing.T) {
	sizes := []float64{1e-8, 1e-3, 1, 1e3, 1e6}
	legal := func(what string, lower, upper float64, at ...float64) {
		t.Helper()
		if !(lower <= 0 && upper <= 0) {
			t.Errorf("%s tails at %v: %g, %g", what, at, lower, upper)
		} else if e := math.Abs(math.Exp(lower) + math.Exp(upper) - 1); e > 1e-12 {
			t.Errorf("%s tails at %v sum to 1 within %g", what, at, e)
		}
	}
	for _, a := range sizes {
		last := math.Inf(-1)
		for u := -1000.0; u <= 800; u += 12.5 {
			lower, upper := logGammaTails(a, u)
			legal("gamma", lower, upper, a, u)
			if lower < last-1e-7*math.Abs(last) {
				t.Errorf("gamma lower tail falls at %g, %g", a, u)
			}
			last = lower
		}
		for _, b := range sizes {
			for v := -1000.0; v <= 1000; v += 62.5 {
				lower, upper := logBetaTails(a, b, v)
				legal("beta", lower, upper, a, b, v)
			}
		}
	}
}

func TestQuantileBelowTheDoubles(t *testing.T) {
	// There P(x) is its leading term x^a / Γ(a + 1).
	got := Gamma{1e-3, 1e-3}.LogQuantile(0.01)
	near(t, "log quantile", got, (math.Log(0.01)+lgamma(1.001))/1e-3+math.Log(1e3), 1e-12)
	if !(got < -2000) {
		t.Errorf("log quantile %g is not far below the doubles", got)
	}
}
