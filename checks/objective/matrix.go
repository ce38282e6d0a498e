package objective

import (
	"errors"
	"math/big"

	sy "wellposed/checks/objective/symbolic"
)

func rat(p, q int64) *big.Rat { return big.NewRat(p, q) }

// errSingular says that the information does not see every direction.
var errSingular = errors.New("the information is singular, or too nearly so to tell: the data see only combinations of these unknowns")

// entry reads a matrix whose nil entries are zero.
func entry(m [][]sy.Expr, i, j int) sy.Expr {
	if m[i][j] == nil {
		return sy.Zero
	}
	return m[i][j]
}

// determinant is expanded by minors, along the sparsest row, and factored when
// that stays small.
func determinant(m [][]sy.Expr) sy.Expr {
	return simplified(expand(m))
}

func expand(m [][]sy.Expr) sy.Expr {
	n := len(m)
	switch n {
	case 0:
		return sy.One
	case 1:
		return entry(m, 0, 0)
	case 2:
		return sy.Sub(sy.Mul(entry(m, 0, 0), entry(m, 1, 1)), sy.Mul(entry(m, 0, 1), entry(m, 1, 0)))
	}
	row, most := 0, -1
	for i := range m {
		zeros := 0
		for j := range m {
			if x := sy.Number(entry(m, i, j)); x != nil && x.Sign() == 0 {
				zeros++
			}
		}
		if zeros > most {
			row, most = i, zeros
		}
	}
	total := sy.Zero
	for j := range m {
		x := entry(m, row, j)
		if v := sy.Number(x); v != nil && v.Sign() == 0 {
			continue
		}
		t := sy.Mul(x, expand(minor(m, row, j)))
		if (row+j)%2 == 1 {
			t = sy.Neg(t)
		}
		total = sy.Add(total, t)
	}
	return total
}

func minor(m [][]sy.Expr, row, column int) [][]sy.Expr {
	out := make([][]sy.Expr, 0, len(m)-1)
	for i := range m {
		if i == row {
			continue
		}
		r := make([]sy.Expr, 0, len(m)-1)
		for j := range m[i] {
			if j != column {
				r = append(r, m[i][j])
			}
		}
		out = append(out, r)
	}
	return out
}

// invert is the inverse by cofactors, each factored.
func invert(m [][]sy.Expr) ([][]sy.Expr, error) {
	d := determinant(m)
	if v := sy.Number(d); v != nil && v.Sign() == 0 {
		return nil, errSingular
	}
	out := make([][]sy.Expr, len(m))
	for i := range m {
		out[i] = make([]sy.Expr, len(m))
		for j := range m {
			c := expand(minor(m, j, i))
			if (i+j)%2 == 1 {
				c = sy.Neg(c)
			}
			out[i][j] = simplified(sy.Div(c, d))
		}
	}
	return out, nil
}

// part picks rows and columns.
func part(m [][]sy.Expr, at []int) [][]sy.Expr {
	out := make([][]sy.Expr, len(at))
	for i, a := range at {
		out[i] = make([]sy.Expr, len(at))
		for j, b := range at {
			out[i][j] = entry(m, a, b)
		}
	}
	return out
}
