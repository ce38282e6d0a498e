package longrun

import (
	"context"
	"fmt"
)

// Arm is one of several independent counts, with its probability or rate under a
// planning value.
type Arm struct {
	Count
	Value float64
}

// Enumerate visits every combination of outcomes of independent binomial counts,
// in order, the last count fastest. It stops at the first error of visit. The
// slice is reused between calls.
func Enumerate(ctx context.Context, counts []Count, limit int, visit func(y []int) error) (int, error) {
	total := 1
	for _, c := range counts {
		if err := c.Validate(); err != nil {
			return 0, err
		}
		if c.Trials == 0 {
			return 0, fmt.Errorf("%w: a Poisson count has no last outcome", ErrPlan)
		}
		if total > limit/(c.Trials+1) {
			return 0, fmt.Errorf("%w: more than %d outcomes", ErrPlan, limit)
		}
		total *= c.Trials + 1
	}
	y := make([]int, len(counts))
	for range total {
		if ctx.Err() != nil {
			return total, ctx.Err()
		}
		if err := visit(y); err != nil {
			return total, err
		}
		for i := len(y) - 1; i >= 0; i-- {
			if y[i]++; y[i] <= counts[i].Trials {
				break
			}
			y[i] = 0
		}
	}
	return total, nil
}

// Masses are the tables of probabilities of each arm's outcomes.
func Masses(arms []Arm) [][]float64 {
	out := make([][]float64, len(arms))
	for i, a := range arms {
		out[i] = make([]float64, a.Trials+1)
		for y := range out[i] {
			out[i][y] = a.Mass(y, a.Value)
		}
	}
	return out
}

// Product is the probability of a combination of outcomes.
func Product(masses [][]float64, y []int) float64 {
	p := 1.0
	for i, k := range y {
		p *= masses[i][k]
	}
	return p
}
