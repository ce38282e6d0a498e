// Package special holds the few special functions that densities need, accurate
// in both tails and in logarithms.
package special

import (
	"math"

	"wellposed/checks/family"
)

// Lgamma is log Γ(x) for x > 0.
func Lgamma(x float64) float64 { v, _ := math.Lgamma(x); return v }

// LogBeta is log B(a, b).
func LogBeta(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	if a > 1e6 && b < 1e-3*a { // the difference of two large logarithms by its series
		// log Γ(a) − log Γ(a+b) by Stirling's series, DLMF 5.11.1.
		d := (a-0.5)*-math.Log1p(b/a) - b*math.Log(a+b) + b + (1/a-1/(a+b))/12
		return Lgamma(b) + d
	}
	return Lgamma(a) + Lgamma(b) - Lgamma(a+b)
}

// Log1pExp is log(1 + exp(u)).
func Log1pExp(u float64) float64 {
	if u > 0 {
		return u + math.Log1p(math.Exp(-u))
	}
	return math.Log1p(math.Exp(u))
}

// Log1mExp is log(1 − exp(u)) for u ≤ 0.
func Log1mExp(u float64) float64 {
	if u > -math.Ln2 {
		return math.Log(-math.Expm1(u))
	}
	return math.Log1p(-math.Exp(u))
}

// LogDiff is log(exp(a) − exp(b)) for a ≥ b.
func LogDiff(a, b float64) float64 {
	if b >= a {
		return math.Inf(-1)
	}
	return a + Log1mExp(b-a)
}

// LogSum is log(exp(a) + exp(b)).
func LogSum(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	if math.IsInf(b, -1) || math.IsInf(a, 1) {
		return a
	}
	return a + math.Log1p(math.Exp(b-a))
}

// LogPhi is the logarithm of the standard normal distribution function.
func LogPhi(z float64) float64 {
	lower, _ := family.Normal{SD: 1}.LogTails(z)
	return lower
}

// Phi is the standard normal distribution function, PhiUpper its complement.
func Phi(z float64) float64      { return math.Erfc(-z/math.Sqrt2) / 2 }
func PhiUpper(z float64) float64 { return math.Erfc(z/math.Sqrt2) / 2 }

// StudentTails are the logarithms of the lower and upper tail of Student's t:
// the upper is half the incomplete beta function I(ν/2, 1/2) at ν/(ν+t²),
// DLMF 8.17 and Abramowitz & Stegun 26.7.1.
func StudentTails(degrees, t float64) (lower, upper float64) {
	if math.IsInf(degrees, 1) {
		return LogPhi(t), LogPhi(-t)
	}
	b, err := family.NewBeta(0.5, degrees/2)
	if err != nil {
		return math.NaN(), math.NaN()
	}
	x := t * t / (degrees + t*t)
	_, tail := b.LogTails(x)
	if t == 0 {
		tail = 0
	} else if x > 0.5 {
		c, _ := family.NewBeta(degrees/2, 0.5)
		tail, _ = c.LogTails(degrees / (degrees + t*t))
	}
	half := tail - math.Ln2
	rest := Log1mExp(half)
	if t > 0 {
		return rest, half
	}
	return half, rest
}

// LogStudent is the log-density of Student's t.
func LogStudent(degrees, t float64) float64 {
	if math.IsInf(degrees, 1) {
		return -t*t/2 - math.Log(2*math.Pi)/2
	}
	return -(degrees+1)/2*math.Log1p(t*t/degrees) - LogBeta(degrees/2, 0.5) - math.Log(degrees)/2
}
