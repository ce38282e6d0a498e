package longrun

import (
	"context"
	"math"

	"wellposed/checks/family"
)

// Kernel is a prior kernel p^(A−1) (1−p)^(B−1) of a probability, or
// λ^(A−1) exp(−Bλ) of a rate. It need not be integrable.
type Kernel struct{ A, B float64 }

// posterior gives the tails and the quantiles after y; ok is false when there is
// no posterior.
func (k Kernel) posterior(c Count, y int) (tails func(float64) (float64, float64), quantile func(float64) float64, ok bool) {
	if c.Trials > 0 {
		d := family.Beta{A: k.A + float64(y), B: k.B + float64(c.Trials-y)}
		return d.LogTails, d.Quantile, d.A > 0 && d.B > 0
	}
	d := family.Gamma{Shape: k.A + float64(y), Rate: k.B + c.Exposure}
	return d.LogTails, d.Quantile, d.Shape > 0 && d.Rate > 0
}

// Below is the posterior probability that the unknown is below x after y, and
// whether there is a posterior.
func (k Kernel) Below(c Count, y int, x float64) (float64, bool) {
	tails, _, ok := k.posterior(c, y)
	if !ok {
		return math.NaN(), false
	}
	lower, _ := tails(x)
	return math.Exp(lower), true
}

// Quantile is the posterior quantile after y, and whether there is a posterior.
func (k Kernel) Quantile(c Count, y int, q float64) (float64, bool) {
	_, quantile, ok := k.posterior(c, y)
	if !ok {
		return math.NaN(), false
	}
	return quantile(q), true
}

// Tails are the probabilities left out below and above an interval: a central 95 %
// interval leaves 0.025 on both sides, an upper 95 % bound 0 and 0.05.
type Tails struct{ Below, Above float64 }

// Intervals are the intervals after each outcome up to outcomes−1.
func (k Kernel) Intervals(c Count, t Tails, outcomes int) []Limits {
	out := make([]Limits, outcomes)
	top := math.Inf(1)
	if c.Trials > 0 {
		top = 1
	}
	for y := range out {
		_, quantile, ok := k.posterior(c, y)
		if !ok {
			out[y].None = true
			continue
		}
		out[y].High = top
		if t.Below > 0 {
			out[y].Low = quantile(t.Below)
		}
		if t.Above > 0 {
			out[y].High = quantile(1 - t.Above)
		}
	}
	return out
}

// MostFailures is the greatest number of events, up to most, after which the
// posterior probability of "below x" is at least level; −1 when none is. More
// events make the posterior larger in the likelihood-ratio order, so the outcomes
// that pass are the first ones; an outcome without a posterior does not pass.
func (k Kernel) MostFailures(c Count, x, level float64, most int) int {
	first := 0
	for first <= most {
		if _, ok := k.Below(c, first, x); ok {
			break
		}
		first++
	}
	pass := func(y int) bool { v, ok := k.Below(c, y, x); return ok && v >= level }
	if first > most || !pass(first) {
		return -1
	}
	low, step := first, 1
	high := first + step
	for high <= most && pass(high) {
		low, step = high, step*2
		high = low + step
	}
	high = min(high, most+1)
	for high-low > 1 {
		if mid := (low + high) / 2; pass(mid) {
			low = mid
		} else {
			high = mid
		}
	}
	return low
}

// SuccessRun is the smallest number of trials, all without failure, after which
// the posterior probability that the failure probability is below x is at least
// level; 0 when no size up to most does.
func (k Kernel) SuccessRun(ctx context.Context, x, level float64, most int) int {
	for n := 1; n <= most; n++ {
		if n%1024 == 0 && ctx.Err() != nil {
			return 0
		}
		if v, ok := k.Below(Count{Trials: n}, 0, x); ok && v >= level {
			return n
		}
	}
	return 0
}

// ClassicalRun is the smallest n with (1−x)^n ≤ 1−level: the success run of the
// classical demonstration, which the kernel Beta(1, 0) gives as well.
func ClassicalRun(x, level float64) int {
	n := int(math.Ceil(math.Log1p(-level) / math.Log1p(-x)))
	for n > 1 && float64(n-1)*math.Log1p(-x) <= math.Log1p(-level) {
		n--
	}
	return n
}
