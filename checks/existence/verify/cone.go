package verify

import (
	"errors"
	"fmt"
	"math/big"
	"math/bits"
)

// ConeColumn is one column of a homogeneous system. Entry i is
// Mantissa[i] × 10^Exponent, or Rational[i] when that is set. With Rows set the
// column is sparse: the k-th value belongs to row Rows[k], all others are 0.
type ConeColumn struct {
	Mantissa []int64
	Exponent int
	Rational []*big.Rat
	Rows     []int32
}

// Cone is the system {d : x_i·d ≥ 0, = 0 or ≤ 0}, for Senses[i] = 1, 0 or −1.
type Cone struct {
	Columns []ConeColumn
	Senses  []int8
}

// entry gives row i of column j as an exact rational; nil for 0.
func (c *ConeColumn) entry(i, k int) (*big.Rat, error) {
	if c.Rational != nil {
		if k >= len(c.Rational) || c.Rational[k] == nil {
			return nil, fmt.Errorf("row %d has no entry", i)
		}
		return c.Rational[k], nil
	}
	if k >= len(c.Mantissa) {
		return nil, fmt.Errorf("row %d has no entry", i)
	}
	v := new(big.Rat).SetInt64(c.Mantissa[k])
	if c.Exponent != 0 && v.Sign() != 0 {
		v.Mul(v, tenTo(c.Exponent))
	}
	return v, nil
}

func tenTo(e int) *big.Rat {
	n := e
	if n < 0 {
		n = -n
	}
	t := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(n)), nil)
	if e < 0 {
		return new(big.Rat).SetFrac(big.NewInt(1), t)
	}
	return new(big.Rat).SetInt(t)
}

// products multiplies every row with d, and returns the results times a common
// positive integer.
func (c *Cone) products(d []*big.Rat) ([]big.Int, error) {
	if len(d) != len(c.Columns) {
		return nil, fmt.Errorf("direction has %d entries for %d columns", len(d), len(c.Columns))
	}
	// factor[j] = d[j] × 10^exponent, over one denominator.
	factor := make([]*big.Rat, len(d))
	common := big.NewInt(1)
	absorb := func(q *big.Int) {
		g := new(big.Int).GCD(nil, nil, common, q)
		common.Mul(common, new(big.Int).Quo(q, g))
	}
	for j := range d {
		if d[j] == nil {
			return nil, fmt.Errorf("direction has no entry %d", j)
		}
		factor[j] = d[j]
		if d[j].Sign() == 0 {
			continue
		}
		col := &c.Columns[j]
		if col.Rational != nil {
			own := big.NewInt(1)
			for _, v := range col.Rational {
				if v != nil {
					g := new(big.Int).GCD(nil, nil, own, v.Denom())
					own.Mul(own, new(big.Int).Quo(v.Denom(), g))
				}
			}
			absorb(own.Mul(own, d[j].Denom()))
			continue
		}
		factor[j] = new(big.Rat).Mul(d[j], tenTo(col.Exponent))
		absorb(factor[j].Denom())
	}
	sums := make([]big.Int, len(c.Senses))
	whole, scale := new(big.Rat), new(big.Rat).SetInt(common)
	v, t := new(big.Int), new(big.Int)
	for j := range c.Columns {
		if d[j].Sign() == 0 {
			continue
		}
		col := &c.Columns[j]
		whole.Mul(factor[j], scale)
		count := len(col.Mantissa)
		if col.Rational != nil {
			count = len(col.Rational)
		}
		want := len(c.Senses)
		if col.Rows != nil {
			want = len(col.Rows)
		}
		if count != want {
			return nil, fmt.Errorf("column %d has %d entries, not %d", j, count, want)
		}
		for k := range count {
			i := k
			if col.Rows != nil {
				i = int(col.Rows[k])
				if i < 0 || i >= len(sums) || (k > 0 && col.Rows[k] <= col.Rows[k-1]) {
					return nil, fmt.Errorf("column %d has rows out of order or range", j)
				}
			}
			if col.Rational != nil {
				if col.Rational[k] == nil {
					return nil, fmt.Errorf("column %d has no entry for row %d", j, i)
				}
				// The denominator divides what absorb put into common.
				product := new(big.Rat).Mul(col.Rational[k], whole)
				if !product.IsInt() {
					return nil, fmt.Errorf("column %d, row %d: common denominator misses", j, i)
				}
				sums[i].Add(&sums[i], product.Num())
				continue
			}
			if col.Mantissa[k] != 0 {
				sums[i].Add(&sums[i], t.Mul(v.SetInt64(col.Mantissa[k]), whole.Num()))
			}
		}
	}
	return sums, nil
}

func isZero(d []*big.Rat) bool {
	for _, v := range d {
		if v != nil && v.Sign() != 0 {
			return false
		}
	}
	return true
}

// ConeNull accepts d as a proof that the rows have rank below the number of
// columns: d is not 0 and every row is 0 along it.
func ConeNull(c *Cone, d []*big.Rat) error {
	if isZero(d) {
		return errors.New("direction is 0")
	}
	sums, err := c.products(d)
	if err != nil {
		return err
	}
	for i := range sums {
		if sums[i].Sign() != 0 {
			return fmt.Errorf("row %d is not 0 along the direction", i)
		}
	}
	return nil
}

// ConeDirection accepts d as a proof that the system has a solution other than
// 0, and checks that touching lists exactly the rows of sense 1 or −1 that are 0
// along d.
func ConeDirection(c *Cone, d []*big.Rat, touching []int) error {
	if isZero(d) {
		return errors.New("direction is 0")
	}
	sums, err := c.products(d)
	if err != nil {
		return err
	}
	next := 0
	for i := range sums {
		s := sums[i].Sign()
		if c.Senses[i] == 0 {
			if s != 0 {
				return fmt.Errorf("row %d is an equation and not 0 along the direction", i)
			}
			continue
		}
		if s*int(c.Senses[i]) < 0 {
			return fmt.Errorf("row %d is violated", i)
		}
		if s == 0 {
			if next >= len(touching) || touching[next] != i {
				return fmt.Errorf("row %d touches and is not listed", i)
			}
			next++
		}
	}
	if next != len(touching) {
		return fmt.Errorf("%d rows listed as touching do not", len(touching)-next)
	}
	return nil
}

// ConeOverlap accepts a weight for each of some rows as a proof that 0 is the
// only solution: weights are positive on inequalities, the weighted rows (times
// −1 for sense −1) sum to 0, and the rows have full column rank.
func ConeOverlap(c *Cone, rows []int, weights []*big.Rat) error {
	if len(rows) != len(weights) {
		return fmt.Errorf("%d rows, %d weights", len(rows), len(weights))
	}
	p := len(c.Columns)
	matrix := make([][]*big.Rat, len(rows))
	for k, i := range rows {
		if i < 0 || i >= len(c.Senses) || (k > 0 && i <= rows[k-1]) {
			return fmt.Errorf("rows out of order or range at %d", k)
		}
		if weights[k] == nil {
			return fmt.Errorf("row %d has no weight", i)
		}
		if c.Senses[i] != 0 && weights[k].Sign() <= 0 {
			return fmt.Errorf("row %d has a weight that is not positive", i)
		}
		matrix[k] = make([]*big.Rat, p)
	}
	for j := range c.Columns {
		col := &c.Columns[j]
		at := map[int]int{}
		for k, i := range col.Rows {
			at[int(i)] = k
		}
		sum, t := new(big.Rat), new(big.Rat)
		for k, i := range rows {
			place, ok := i, true
			if col.Rows != nil {
				place, ok = at[i]
			}
			v := new(big.Rat)
			if ok {
				entry, err := col.entry(i, place)
				if err != nil {
					return fmt.Errorf("column %d: %w", j, err)
				}
				v.Set(entry)
			}
			if c.Senses[i] < 0 {
				v.Neg(v)
			}
			matrix[k][j] = v
			sum.Add(sum, t.Mul(v, weights[k]))
		}
		if sum.Sign() != 0 {
			return fmt.Errorf("weighted column %d does not sum to 0", j)
		}
	}
	if r := rank(matrix, p); r < p {
		return fmt.Errorf("rows have rank %d, not %d", r, p)
	}
	return nil
}

// rank is the rank of the matrix, p at most. A minor that is not 0 modulo a prime
// is not 0, so full rank is proved by residues; only when they show less does it
// eliminate over the integers.
func rank(matrix [][]*big.Rat, p int) int {
	whole := make([][]*big.Int, len(matrix))
	g := new(big.Int)
	for i, row := range matrix {
		den := big.NewInt(1)
		for _, v := range row {
			g.GCD(nil, nil, den, v.Denom())
			den.Mul(den, new(big.Int).Quo(v.Denom(), g))
		}
		whole[i] = make([]*big.Int, p)
		for j, v := range row {
			whole[i][j] = new(big.Int).Mul(v.Num(), g.Quo(den, v.Denom()))
		}
	}
	if residueRank(whole, p) == p {
		return p
	}
	return integerRank(whole, p)
}

// residueRank eliminates modulo the prime 2^63 − 25.
func residueRank(matrix [][]*big.Int, p int) int {
	const q = 1<<63 - 25
	times := func(a, b uint64) uint64 {
		hi, lo := bits.Mul64(a, b)
		return bits.Rem64(hi, lo, q)
	}
	modulus, t := new(big.Int).SetUint64(q), new(big.Int)
	var done [][]uint64
	var pivots []int
	x := make([]uint64, p)
	for _, row := range matrix {
		if len(done) == p {
			break
		}
		for j, v := range row {
			x[j] = t.Mod(v, modulus).Uint64()
		}
		for k, y := range done {
			head := x[pivots[k]]
			if head == 0 {
				continue
			}
			for j, v := range y {
				if v != 0 {
					x[j] = (x[j] + q - times(head, v)) % q
				}
			}
		}
		for j, v := range x {
			if v == 0 {
				continue
			}
			inverse := new(big.Int).ModInverse(t.SetUint64(v), modulus).Uint64()
			y := make([]uint64, p)
			for i := range y {
				y[i] = times(x[i], inverse)
			}
			done, pivots = append(done, y), append(pivots, j)
			break
		}
	}
	return len(done)
}

// integerRank eliminates without fractions (Bareiss 1968), row by row.
func integerRank(matrix [][]*big.Int, p int) int {
	var done [][]*big.Int
	var pivots []int
	t := new(big.Int)
	for _, x := range matrix {
		if len(done) == p {
			break
		}
		last := big.NewInt(1)
		for k, y := range done {
			head := new(big.Int).Set(x[pivots[k]])
			for j := range x {
				x[j].Mul(x[j], y[pivots[k]])
				x[j].Sub(x[j], t.Mul(head, y[j]))
				x[j].Quo(x[j], last)
			}
			last = y[pivots[k]]
		}
		for j := range x {
			if x[j].Sign() != 0 {
				done, pivots = append(done, x), append(pivots, j)
				break
			}
		}
	}
	return len(done)
}
