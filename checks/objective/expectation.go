package objective

import (
	"errors"
	"math"
	"math/big"

	sy "wellposed/checks/objective/symbolic"
)

// halves are an expression over a finite support seen from either end, as a
// function of the distance from that end, so that it keeps its digits there.
type halves struct {
	low, high float64
	// width of each half.
	width float64
	from  [2]*sy.Compiled
}

// halved compiles an expression for the two halves of a symbol's support; other
// are further symbols, whose values follow the distance.
func halved(e sy.Expr, x *sy.Symbol, other []*sy.Symbol) (*halves, error) {
	if x.Low == nil || x.High == nil {
		return nil, errors.New("the support is not finite")
	}
	h := &halves{}
	h.low, _ = x.Low.Float64()
	h.high, _ = x.High.Float64()
	h.width = (h.high - h.low) / 2
	half := new(big.Rat).Mul(rat(1, 2), new(big.Rat).Sub(x.High, x.Low))
	v := &sy.Symbol{Name: "distance from the end", Low: rat(0, 1), High: half}
	symbols := append([]*sy.Symbol{v}, other...)
	for i, at := range []sy.Expr{sy.Add(sy.Rat(x.Low), sy.Sym(v)), sy.Sub(sy.Rat(x.High), sy.Sym(v))} {
		c, err := sy.Compile(sy.Substitute(e, map[string]sy.Expr{x.Name: at}), symbols)
		if err != nil {
			return nil, err
		}
		h.from[i] = c
	}
	return h, nil
}

// place is the value of the symbol at a distance in a half.
func (h *halves) place(i int, v float64) float64 {
	if i == 0 {
		return h.low + v
	}
	return h.high - v
}

// integrate adds what each calls into an n × n array over both halves.
func (h *halves) integrate(n int, each func(half int, v, weight float64, into [][]float64)) [][]float64 {
	m := make([][]float64, n)
	for i := range m {
		m[i] = make([]float64, n)
	}
	for i := range h.from {
		integrateInto(m, 0, h.width, 0, 1, func(v, weight float64, into [][]float64) float64 {
			if v > 0 {
				each(i, v, weight, into)
			}
			return 0
		})
	}
	return m
}

// expectedLog is log π(interest) + log π(nuisance) with
// log π(interest) = log outer + E[log inner], the expectation under the density
// ∝ own of the nuisance unknown, which must be proper.
// interestAt is the place of the interest in the arguments.
func expectedLog(outer, inner, own sy.Expr, interest, nuisance *Parameter, interestAt int) (func(x []float64) float64, error) {
	if nuisance.Symbol.Low == nil || nuisance.Symbol.High == nil || !integrableAtEnds(own, nuisance) {
		return nil, errors.New("the conditional prior has no integral")
	}
	two := []*sy.Symbol{interest.Symbol, nuisance.Symbol}
	co, err := sy.Compile(outer, two)
	if err != nil {
		return nil, err
	}
	cw, err := sy.Compile(own, two)
	if err != nil {
		return nil, err
	}
	hi, err := halved(inner, nuisance.Symbol, two[:1])
	if err != nil {
		return nil, err
	}
	hw, err := halved(own, nuisance.Symbol, two[:1])
	if err != nil {
		return nil, err
	}
	return func(x []float64) float64 {
		a, b := x[interestAt], x[1-interestAt]
		m := hw.integrate(2, func(i int, v, weight float64, into [][]float64) {
			lw, _ := hw.from[i].LogAbs([]float64{v, a})
			li, _ := hi.from[i].LogAbs([]float64{v, a})
			p := math.Exp(lw) * weight
			if !math.IsNaN(p) && !math.IsInf(p, 0) && !math.IsNaN(li) && !math.IsInf(li, 0) {
				into[0][0] += p
				into[1][1] += p * li
			}
		})
		lo, _ := co.LogAbs([]float64{a, b})
		lw, _ := cw.LogAbs([]float64{a, b})
		return lo + m[1][1]/m[0][0] + lw
	}, nil
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
