package special

import (
	"math"
	"testing"
)

// With one degree of freedom Student's t is the Cauchy law, with two its
// distribution function is 1/2 + t/(2 √(2 + t²)).
func TestStudentTails(t *testing.T) {
	for _, x := range []float64{-1e6, -30, -1, -1e-3, 0, 0.2, 3, 1e4} {
		lower, upper := StudentTails(1, x)
		want := math.Atan2(1, x) / math.Pi // above
		if e := math.Abs(upper - math.Log(want)); e > 1e-10 {
			t.Errorf("one degree, above %g: log %g, want %g", x, upper, math.Log(want))
		}
		if e := math.Abs(math.Exp(lower) + math.Exp(upper) - 1); e > 1e-12 {
			t.Errorf("tails at %g miss 1 by %g", x, e)
		}
		s := math.Sqrt(2 + x*x)
		want = 1 / (s * (s + x)) // (1 − x/s)/2 without cancellation
		if x < 0 {
			want = (1 - x/s) / 2
		}
		if _, upper = StudentTails(2, x); math.Abs(upper-math.Log(want)) > 1e-10 {
			t.Errorf("two degrees, above %g: log %g, want %g", x, upper, math.Log(want))
		}
	}
}

func TestLogBeta(t *testing.T) {
	// B(a, 1) = 1/a and B(a, 2) = 1/(a (a + 1)).
	for _, a := range []float64{1e-6, 0.3, 7, 1e5, 1e7, 1e12} {
		if e := math.Abs(LogBeta(a, 1) + math.Log(a)); e > 1e-9 {
			t.Errorf("log B(%g, 1) is off by %g", a, e)
		}
		if e := math.Abs(LogBeta(2, a) + math.Log(a) + math.Log1p(a)); e > 1e-9 {
			t.Errorf("log B(2, %g) is off by %g", a, e)
		}
	}
}

func TestDifferencesOfLogarithms(t *testing.T) {
	for _, u := range []float64{-1e-12, -0.1, -0.7, -5, -800} {
		if got := LogSum(u, Log1mExp(u)); math.Abs(got) > 1e-14 {
			t.Errorf("exp(%g) and its complement sum to exp(%g)", u, got)
		}
	}
	if got := LogDiff(3, 2); math.Abs(got-math.Log(math.Exp(3)-math.Exp(2))) > 1e-14 {
		t.Errorf("log difference %g", got)
	}
}
