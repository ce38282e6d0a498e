package cone

import (
	"math/big"
	"slices"
)

// Bound restricts one entry of the direction: a coefficient whose support is a
// half-line (AtLeast or AtMost), or one that a light-tailed prior holds (Equal).
type Bound struct {
	Column int
	Sense  Sense
}

// Extend appends a row per bound, which says d_j ≥ 0, ≤ 0 or = 0. The new rows
// follow the others, in the order of the bounds. The columns are copied.
func Extend(columns []Column, senses []Sense, bounds []Bound) ([]Column, []Sense) {
	n := len(senses)
	senses = slices.Grow(slices.Clone(senses), len(bounds))
	out := make([]Column, len(columns))
	for j, c := range columns {
		out[j] = Column{Exponent: c.Exponent, Rows: slices.Clone(c.Rows),
			Mantissa: slices.Clone(c.Mantissa), Rational: slices.Clone(c.Rational)}
	}
	for k, b := range bounds {
		senses = append(senses, b.Sense)
		for j := range out {
			c := &out[j]
			v := int64(0)
			if j == b.Column {
				v = 1
			}
			if c.Rows != nil {
				if v == 0 {
					continue
				}
				c.Rows = append(c.Rows, int32(n+k))
			}
			if c.Rational != nil {
				c.Rational = append(c.Rational, big.NewRat(v, 1))
			} else {
				c.Mantissa = append(c.Mantissa, v)
			}
		}
	}
	return out, senses
}

// Drop leaves out the columns that are held, those on which a light-tailed prior
// (normal, Laplace, logistic, ...) makes every direction decay. kept[k] is the
// number, among all columns, of column k of the result.
func Drop(columns []Column, held []bool) (out []Column, kept []int) {
	for j, c := range columns {
		if !held[j] {
			out, kept = append(out, c), append(kept, j)
		}
	}
	return out, kept
}

// Restore gives a direction over the columns that Drop kept its entries over all
// columns, 0 on those left out.
func Restore(d []*big.Rat, kept []int, columns int) []*big.Rat {
	out := make([]*big.Rat, columns)
	for j := range out {
		out[j] = new(big.Rat)
	}
	for k, j := range kept {
		out[j] = d[k]
	}
	return out
}
