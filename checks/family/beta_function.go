package family

import "math"

// logBetaTails returns log I(a, b) and log(1 − I(a, b)) of the regularised
// incomplete beta function at x = expit(v), by the continued fraction of DLMF
// 8.17.22, used on the side of the mean where it converges.
func logBetaTails(a, b, v float64) (lower, upper float64) {
	logx, logy := -log1pexp(-v), -log1pexp(v)
	x := math.Exp(logx)
	if math.Exp(logy) == 0 || x == 0 || x < (a+1)/(a+b+2) {
		if math.Exp(logy) == 0 { // mirrored leading term
			upper = math.Min(0, b*logy-math.Log(b)-logBeta(a, b))
			return log1mexp(upper), upper
		}
		lower = math.Min(0, a*logx+b*logy-math.Log(a)-logBeta(a, b)+math.Log(betaFraction(a, b, x)))
		return lower, log1mexp(lower)
	}
	upper = math.Min(0, a*logx+b*logy-math.Log(b)-logBeta(a, b)+math.Log(betaFraction(b, a, math.Exp(logy))))
	return log1mexp(upper), upper
}

func log1pexp(u float64) float64 {
	if u > 0 {
		return u + math.Log1p(math.Exp(-u))
	}
	return math.Log1p(math.Exp(u))
}

func logBeta(a, b float64) float64 { return lgamma(a) + lgamma(b) - lgamma(a+b) }

// betaFraction evaluates the continued fraction by the modified Lentz method.
func betaFraction(a, b, x float64) float64 {
	const tiny = 1e-300
	guard := func(v float64) float64 {
		if math.Abs(v) < tiny {
			return tiny
		}
		return v
	}
	c, d := 1.0, 1/guard(1-(a+b)*x/(a+1))
	h := d
	for m := 1.0; m < 1e6; m++ {
		even := m * (b - m) * x / ((a + 2*m - 1) * (a + 2*m))
		d = 1 / guard(1+even*d)
		c = guard(1 + even/c)
		h *= d * c
		odd := -(a + m) * (a + b + m) * x / ((a + 2*m) * (a + 2*m + 1))
		d = 1 / guard(1+odd*d)
		c = guard(1 + odd/c)
		h *= d * c
		if math.Abs(d*c-1) < 3e-16 {
			break
		}
	}
	return h
}

// Beta is the Beta law, density x^(a−1) (1−x)^(b−1) / B(a, b) on (0, 1).
type Beta struct{ A, B float64 }

// NewBeta checks the parameters. Zero in either place is improper.
func NewBeta(a, b float64) (Beta, error) { return Beta{a, b}, positive("Beta", a, b) }

// LogTails returns the logarithms of the distribution and survival functions.
func (d Beta) LogTails(x float64) (lower, upper float64) {
	switch {
	case x <= 0:
		return math.Inf(-1), 0
	case x >= 1:
		return 0, math.Inf(-1)
	}
	return logBetaTails(d.A, d.B, math.Log(x)-math.Log1p(-x))
}

// LogitQuantile is the log odds of the p-quantile, 0 < p < 1; it stays finite
// where the quantile rounds to 0 or 1. NaN for other p.
func (d Beta) LogitQuantile(p float64) float64 {
	tails := func(v float64) (float64, float64) { return logBetaTails(d.A, d.B, v) }
	high := 1.0
	for high < 1e300 {
		lower, upper := tails(high)
		if p <= 0.5 && lower >= math.Log(p) || p > 0.5 && upper <= math.Log1p(-p) {
			break
		}
		high *= 2
	}
	return solve(p, tails, high)
}

// Quantile is the p-quantile.
func (d Beta) Quantile(p float64) float64 { return math.Exp(-log1pexp(-d.LogitQuantile(p))) }
