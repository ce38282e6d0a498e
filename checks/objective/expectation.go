package objective

import (
	"errors"
	"math"

	sy "wellposed/checks/objective/symbolic"
)

// expectedLog is log π(interest) + log π(nuisance) with
// log π(interest) = log outer + E[log inner], the expectation under the density
// ∝ own of the nuisance unknown, which must be proper.
// interestAt is the place of the interest in the arguments.
func expectedLog(outer, inner, own sy.Expr, interest, nuisance *Parameter, interestAt int) (func(x []float64) float64, error) {
	two := []*sy.Symbol{interest.Symbol, nuisance.Symbol}
	co, err := sy.Compile(outer, two)
	if err != nil {
		return nil, err
	}
	ci, err := sy.Compile(inner, two)
	if err != nil {
		return nil, err
	}
	cw, err := sy.Compile(own, two)
	if err != nil {
		return nil, err
	}
	if nuisance.Symbol.Low == nil || nuisance.Symbol.High == nil || !integrableAtEnds(own, nuisance) {
		return nil, errors.New("the conditional prior has no integral")
	}
	low, _ := nuisance.Symbol.Low.Float64()
	high, _ := nuisance.Symbol.High.Float64()
	return func(x []float64) float64 {
		a, b := x[interestAt], x[1-interestAt]
		mass := expectation1(low, high, func(t float64) (float64, float64) {
			lw, _ := cw.LogAbs([]float64{a, t})
			li, _ := ci.LogAbs([]float64{a, t})
			return lw, li
		})
		lo, _ := co.LogAbs([]float64{a, b})
		lw, _ := cw.LogAbs([]float64{a, b})
		return lo + mass + lw
	}, nil
}

// expectation1 is the mean of a value under a log weight over a finite interval.
func expectation1(low, high float64, at func(t float64) (logWeight, value float64)) float64 {
	m := [][]float64{{0, 0}, {0, 0}}
	add := func(t, weight float64, into [][]float64) float64 {
		if !(t > low && t < high) {
			return 0
		}
		lw, v := at(t)
		p := math.Exp(lw) * weight
		if math.IsNaN(p) || math.IsInf(p, 0) || math.IsNaN(v) || math.IsInf(v, 0) {
			return 0
		}
		into[0][0] += p
		into[1][1] += p * v
		return p
	}
	integrateInto(m, low, high, 0, 1, add)
	return m[1][1] / m[0][0]
}

// integrableAtEnds checks a product of powers of distances to the ends of a
// finite support: every such power must exceed −1, every other factor be away
// from zero there.
func integrableAtEnds(own sy.Expr, p *Parameter) bool {
	x := sy.Sym(p.Symbol)
	low, high := sy.Sub(x, sy.Rat(p.Symbol.Low)), sy.Sub(sy.Rat(p.Symbol.High), x)
	e, argument, ok := powers(own, low, high)
	return ok && isZero(argument) && e[0].Cmp(rat(-1, 1)) > 0 && e[1].Cmp(rat(-1, 1)) > 0
}
