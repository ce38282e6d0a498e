package cone

import (
	"errors"
	"fmt"
	"math/big"
	"math/bits"
	"sort"
)

// Sense says what a row asks of a direction d.
type Sense int8

// The senses of a row x. The number is the sign by which x is multiplied to
// turn AtMost into AtLeast.
const (
	AtMost  Sense = -1 // x·d ≤ 0
	Equal   Sense = 0  // x·d = 0
	AtLeast Sense = 1  // x·d ≥ 0
)

// Column is one column of the system. Entry i is Mantissa[i] × 10^Exponent,
// or Rational[i] when that is set instead. With Rows set the column is sparse:
// Rows holds strictly increasing row numbers, and the k-th value belongs to
// row Rows[k]; all other entries are 0. The slices are kept, not copied, and
// must not change while the Problem is in use.
type Column struct {
	Mantissa []int64
	Exponent int
	Rational []*big.Rat
	Rows     []int32
}

// Problem is the system {d : x_i·d ≥ 0, ≤ 0 or = 0}. It is immutable and safe
// for use by several goroutines.
type Problem struct {
	n, p    int
	senses  []Sense
	columns []column
	equal   []int32 // rows of sense Equal
	open    []int32 // the others
	wide    bool    // some column has entries beyond int64
}

// column holds integers; the true entry is the integer times scale, scale > 0.
type column struct {
	rows  []int32 // nil when dense
	small []int64
	large []*big.Int // the entries when they are wide; small then has them / 2^cut
	scale *big.Rat
	bits  int // bits of the largest magnitude
	cut   int
}

// leading is how many bits of a wide entry are kept in the small one.
const leading = 31

// setLarge takes entries that do not fit.
func (c *column) setLarge(entries []*big.Int) {
	c.large = entries
	c.cut = max(0, c.bits-leading)
	c.small = make([]int64, len(entries))
	t := new(big.Int)
	for i, v := range entries {
		c.small[i] = t.Rsh(t.Abs(v), uint(c.cut)).Int64()
		if v.Sign() < 0 {
			c.small[i] = -c.small[i]
		}
	}
}

// ErrShape is wrapped by every error of NewProblem.
var ErrShape = errors.New("malformed system of rows and columns")

// NewProblem takes the system by columns; len(senses) is the number of rows.
// Neither p = 0 nor n = 0 is an error.
func NewProblem(columns []Column, senses []Sense) (*Problem, error) {
	pr := &Problem{n: len(senses), p: len(columns), senses: senses}
	equals := 0
	for i, s := range senses {
		switch s {
		case Equal:
			equals++
		case AtLeast, AtMost:
		default:
			return nil, fmt.Errorf("%w: row %d has sense %d", ErrShape, i, s)
		}
	}
	pr.equal = make([]int32, 0, equals)
	pr.open = make([]int32, 0, pr.n-equals)
	for i, s := range senses {
		if s == Equal {
			pr.equal = append(pr.equal, int32(i))
		} else {
			pr.open = append(pr.open, int32(i))
		}
	}
	pr.columns = make([]column, pr.p)
	for j := range columns {
		if err := pr.columns[j].set(&columns[j], pr.n); err != nil {
			return nil, fmt.Errorf("%w: column %d: %s", ErrShape, j, err)
		}
		pr.wide = pr.wide || pr.columns[j].large != nil
	}
	return pr, nil
}

// FromRows takes the system by rows of p exact entries each.
func FromRows(p int, rows [][]*big.Rat, senses []Sense) (*Problem, error) {
	if len(rows) != len(senses) {
		return nil, fmt.Errorf("%w: %d rows, %d senses", ErrShape, len(rows), len(senses))
	}
	columns := make([]Column, p)
	for j := range columns {
		columns[j].Rational = make([]*big.Rat, len(rows))
	}
	for i, row := range rows {
		if len(row) != p {
			return nil, fmt.Errorf("%w: row %d has %d entries, not %d", ErrShape, i, len(row), p)
		}
		for j, v := range row {
			columns[j].Rational[i] = v
		}
	}
	return NewProblem(columns, senses)
}

// FromIntegers takes the system by rows of integers.
func FromIntegers(p int, rows [][]int64, senses []Sense) (*Problem, error) {
	if len(rows) != len(senses) {
		return nil, fmt.Errorf("%w: %d rows, %d senses", ErrShape, len(rows), len(senses))
	}
	columns := make([]Column, p)
	for j := range columns {
		columns[j].Mantissa = make([]int64, len(rows))
	}
	for i, row := range rows {
		if len(row) != p {
			return nil, fmt.Errorf("%w: row %d has %d entries, not %d", ErrShape, i, len(row), p)
		}
		for j, v := range row {
			columns[j].Mantissa[i] = v
		}
	}
	return NewProblem(columns, senses)
}

// Rows and Columns give the shape.
func (pr *Problem) Rows() int    { return pr.n }
func (pr *Problem) Columns() int { return pr.p }

func (c *column) set(in *Column, n int) error {
	length := len(in.Mantissa)
	if in.Rational != nil {
		if in.Mantissa != nil {
			return errors.New("mantissas and rationals are both set")
		}
		length = len(in.Rational)
	}
	want := n
	if in.Rows != nil {
		want = len(in.Rows)
		last := int32(-1)
		for _, r := range in.Rows {
			if r <= last || int(r) >= n {
				return errors.New("row numbers do not increase or are out of range")
			}
			last = r
		}
	}
	if length != want {
		return fmt.Errorf("%d entries, not %d", length, want)
	}
	c.rows = in.Rows
	if in.Rational != nil {
		return c.setRational(in.Rational)
	}
	c.small = in.Mantissa
	if c.small == nil {
		c.small = []int64{}
	}
	c.scale = powerOfTen(in.Exponent)
	var or uint64
	for _, v := range c.small {
		negative := v >> 63
		or |= uint64((v ^ negative) - negative)
	}
	c.bits = bits.Len64(or)
	if c.bits > 62 {
		large := make([]*big.Int, len(c.small))
		for i, v := range c.small {
			large[i] = big.NewInt(v)
		}
		c.setLarge(large)
	}
	return nil
}

// setRational multiplies the column by the least common denominator.
func (c *column) setRational(in []*big.Rat) error {
	lcm, g, q, rest := big.NewInt(1), new(big.Int), new(big.Int), new(big.Int)
	for i, v := range in {
		if v == nil {
			return fmt.Errorf("entry %d is missing", i)
		}
		if v.IsInt() {
			continue
		}
		if q.QuoRem(lcm, v.Denom(), rest); rest.Sign() != 0 {
			g.GCD(nil, nil, lcm, v.Denom())
			lcm.Mul(lcm, q.Quo(v.Denom(), g))
		}
	}
	c.scale = new(big.Rat).SetFrac(big.NewInt(1), lcm)
	entries := integers(len(in))
	for i, v := range in {
		if v.IsInt() {
			entries[i].Mul(v.Num(), lcm)
		} else {
			q.QuoRem(lcm, v.Denom(), rest)
			entries[i].Mul(v.Num(), q)
		}
		c.bits = max(c.bits, entries[i].BitLen())
	}
	if c.bits > 62 {
		c.setLarge(entries)
		return nil
	}
	c.small = make([]int64, len(in))
	for i, v := range entries {
		c.small[i] = v.Int64()
	}
	return nil
}

func powerOfTen(e int) *big.Rat {
	r := big.NewRat(1, 1)
	if e == 0 {
		return r
	}
	t := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(e, -e))), nil)
	if e > 0 {
		return r.SetInt(t)
	}
	return r.SetFrac(big.NewInt(1), t)
}

// at is the place of row i in the values of the column, −1 when it is 0 there.
func (c *column) at(i int32) int {
	if c.rows == nil {
		return int(i)
	}
	k := sort.Search(len(c.rows), func(k int) bool { return c.rows[k] >= i })
	if k < len(c.rows) && c.rows[k] == i {
		return k
	}
	return -1
}

// row writes row i with its sign put in, as integers.
func (pr *Problem) row(i int32, out []*big.Int) {
	negative := pr.senses[i] == AtMost
	for j := range pr.columns {
		c := &pr.columns[j]
		k := c.at(i)
		switch {
		case k < 0:
			out[j].SetInt64(0)
		case c.large != nil:
			out[j].Set(c.large[k])
		default:
			out[j].SetInt64(c.small[k])
		}
		if negative {
			out[j].Neg(out[j])
		}
	}
}

// row64 is row for a problem that is not wide.
func (pr *Problem) row64(i int32, out []int64) {
	sign := int64(1)
	if pr.senses[i] == AtMost {
		sign = -1
	}
	for j := range pr.columns {
		c := &pr.columns[j]
		if c.rows == nil {
			out[j] = sign * c.small[i]
		} else if k := c.at(i); k >= 0 {
			out[j] = sign * c.small[k]
		} else {
			out[j] = 0
		}
	}
}
