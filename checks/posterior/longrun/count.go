package longrun

import (
	"errors"
	"fmt"
	"math"

	"wellposed/checks/family"
)

// Count is the sampling plan of one count: Trials > 0 is a binomial count with
// its number of trials fixed beforehand; otherwise a Poisson count with mean
// Exposure times the rate.
type Count struct {
	Trials   int
	Exposure float64
}

// ErrPlan reports a plan that can't be carried out.
var ErrPlan = errors.New("the sampling plan is not usable")

// Validate checks the plan.
func (c Count) Validate() error {
	if c.Trials < 0 || c.Trials == 0 && !(c.Exposure > 0 && !math.IsInf(c.Exposure, 1)) {
		return fmt.Errorf("%w: %d trials, exposure %g", ErrPlan, c.Trials, c.Exposure)
	}
	return nil
}

// AtLeast is the probability of k or more when the probability or rate is x.
func (c Count) AtLeast(k int, x float64) float64 {
	switch {
	case k <= 0:
		return 1
	case c.Trials > 0 && k > c.Trials:
		return 0
	case x <= 0:
		return 0
	case c.Trials > 0:
		if x >= 1 {
			return 1
		}
		lower, _ := family.Beta{A: float64(k), B: float64(c.Trials - k + 1)}.LogTails(x)
		return math.Exp(lower)
	}
	lower, _ := family.Gamma{Shape: float64(k), Rate: c.Exposure}.LogTails(x)
	return math.Exp(lower)
}

// Below is the probability of fewer than k.
func (c Count) Below(k int, x float64) float64 {
	switch {
	case k <= 0:
		return 0
	case c.Trials > 0 && k > c.Trials:
		return 1
	case x <= 0:
		return 1
	case c.Trials > 0:
		if x >= 1 {
			return 0
		}
		_, upper := family.Beta{A: float64(k), B: float64(c.Trials - k + 1)}.LogTails(x)
		return math.Exp(upper)
	}
	_, upper := family.Gamma{Shape: float64(k), Rate: c.Exposure}.LogTails(x)
	return math.Exp(upper)
}

// Mass is the probability of exactly y.
func (c Count) Mass(y int, x float64) float64 {
	k := float64(y)
	if c.Trials > 0 {
		n := float64(c.Trials)
		switch {
		case y < 0 || y > c.Trials:
			return 0
		case x <= 0:
			return indicator(y == 0)
		case x >= 1:
			return indicator(y == c.Trials)
		case y == 0:
			return math.Exp(n * math.Log1p(-x))
		case y == c.Trials:
			return math.Exp(n * math.Log(x))
		}
		return math.Exp(lgamma(n+1) - lgamma(k+1) - lgamma(n-k+1) + k*math.Log(x) + (n-k)*math.Log1p(-x))
	}
	m := x * c.Exposure
	switch {
	case y < 0:
		return 0
	case m <= 0:
		return indicator(y == 0)
	}
	return math.Exp(k*math.Log(m) - m - lgamma(k+1))
}

func indicator(yes bool) float64 {
	if yes {
		return 1
	}
	return 0
}

func lgamma(x float64) float64 { v, _ := math.Lgamma(x); return v }

// Outcomes is how many outcomes, from 0 on, matter for values up to most: all of
// a binomial count, and of a Poisson count so many that what is left has less
// than 1e-12. An error says that there are more than limit.
func (c Count) Outcomes(most float64, limit int) (int, error) {
	if c.Trials > 0 {
		if c.Trials+1 > limit {
			return 0, fmt.Errorf("%w: %d outcomes, more than %d", ErrPlan, c.Trials+1, limit)
		}
		return c.Trials + 1, nil
	}
	m := most * c.Exposure
	k := int(m+12*math.Sqrt(m)) + 20
	if m > float64(limit) || k > limit {
		return 0, fmt.Errorf("%w: about %.0f outcomes, more than %d", ErrPlan, m, limit)
	}
	for c.AtLeast(k, most) > 1e-12 {
		k += 1 + k/20
	}
	return k, nil
}

// inside is the integral over x from low to high of the probability of exactly y.
func (c Count) inside(y int, low, high float64) float64 {
	if high <= low {
		return 0
	}
	// ∫ mass dx is a difference of distribution functions; it is taken in the
	// smaller tail so that digits do not cancel.
	if c.Trials > 0 {
		b := family.Beta{A: float64(y + 1), B: float64(c.Trials - y + 1)}
		return spread(b.LogTails, low, high) / float64(c.Trials+1)
	}
	g := family.Gamma{Shape: float64(y + 1), Rate: c.Exposure}
	return spread(g.LogTails, low, high) / c.Exposure
}

func spread(tails func(float64) (float64, float64), low, high float64) float64 {
	l0, u0 := tails(low)
	l1, u1 := tails(high)
	if l0 > u0 {
		return math.Max(0, math.Exp(u0)-math.Exp(u1))
	}
	return math.Max(0, math.Exp(l1)-math.Exp(l0))
}
