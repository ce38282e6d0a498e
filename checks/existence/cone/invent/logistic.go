// Package invent makes tables for the tests and benchmarks of package cone, the
// same on every machine.
package invent

import (
	"math"
	"math/rand/v2"

	"wellposed/checks/existence/cone"
)

// Kinds lists what Logistic can make.
var Kinds = []string{"over", "quasi", "hid", "complete", "gap", "deficient"}

// Logistic invents the table of a logistic regression: an intercept, three
// columns of whole numbers from 0 to 9, dummies, and the rest normal with three
// decimals. The rows of y = 1 are AtLeast, those of y = 0 AtMost.
//
//	over      y drawn from a logistic model
//	quasi     the same, and a dummy of 3 % ones with y = 1 throughout
//	hid       y = 1 when a + b − 2c > 0, 0 when < 0, drawn when = 0
//	complete  y = 1 when a random combination of the columns is positive
//	gap       the same without the rows close to 0
//	deficient as over, with the last column the sum of two others
func Logistic(kind string, n, p int, seed uint64) ([]cone.Column, []cone.Sense) {
	g := rand.New(rand.NewPCG(seed, uint64(n)<<16+uint64(p)))
	columns, senses := make([]cone.Column, p), make([]cone.Sense, n)
	for j := range columns {
		m := make([]int64, n)
		switch {
		case j == 0:
			for i := range m {
				m[i] = 1
			}
		case j <= 3 && p > 6:
			for i := range m {
				m[i] = g.Int64N(10)
			}
		case j%4 == 0:
			share := 0.1 + 0.3*g.Float64()
			for i := range m {
				if g.Float64() < share {
					m[i] = 1
				}
			}
		default:
			for i := range m {
				m[i] = int64(math.Round(1000 * g.NormFloat64()))
			}
			columns[j].Exponent = -3
		}
		columns[j].Mantissa = m
	}
	beta := make([]float64, p)
	for j := range beta {
		beta[j] = g.NormFloat64() / math.Sqrt(float64(p))
		if j >= 1 && j <= 3 {
			beta[j] /= 5
		}
	}
	last := columns[p-1].Mantissa
	switch kind {
	case "quasi":
		for i := range last {
			last[i] = 0
			if g.Float64() < 0.03 {
				last[i] = 1
			}
		}
		columns[p-1].Exponent = 0
	case "deficient":
		columns[p-1].Exponent = 0
		for i := range last {
			last[i] = columns[1].Mantissa[i] + columns[4].Mantissa[i]
		}
	}
	for i := range senses {
		eta := 0.0
		for j := range beta {
			eta += beta[j] * (float64(columns[j].Mantissa[i]) * math.Pow10(columns[j].Exponent))
		}
		yes := g.Float64() < 1/(1+math.Exp(-eta))
		switch kind {
		case "quasi":
			yes = yes || last[i] == 1
		case "hid":
			h := columns[1].Mantissa[i] + columns[2].Mantissa[i] - 2*columns[3].Mantissa[i]
			if h != 0 {
				yes = h > 0
			}
		case "complete", "gap":
			for kind == "gap" && math.Abs(eta) < 0.2 {
				// Move the row off the border along a normal column.
				eta += beta[5] * 1
				columns[5].Mantissa[i] += 1000
			}
			yes = eta > 0
		}
		senses[i] = cone.AtMost
		if yes {
			senses[i] = cone.AtLeast
		}
	}
	return columns, senses
}
