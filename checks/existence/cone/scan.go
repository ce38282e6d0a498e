package cone

import (
	"context"
	"math/big"
	"math/bits"
	"sort"
)

// block is the number of rows that are multiplied at a time: small enough for
// the sums to stay in the nearest cache, and for a look at the context between
// two blocks to come often.
const block = 2048

// ray is an integer direction, in units of the integer columns, ready to be
// multiplied with every row.
//
// The signs are exact. Where products do not fit 64 bits, leading bits are
// multiplied first. With x_ij = a_ij·2^(c_j) + e_ij, |e_ij| < 2^(c_j) (c_j = 0
// and e_ij = 0 unless the column is wide) and d_j·2^(c_j) = h_j·2^s + r_j,
// |r_j| < 2^s, the product of a row is 2^s·Σ a_ij·h_j up to 2^s·b, where
//
//	b = Σ_j max_i |a_ij| + Σ_{j wide} (|h_j| + 1),
//
// so a row whose leading sum is beyond ±b has the sign of that sum. Only the
// other rows need long integers.
type ray struct {
	exact []*big.Int
	head  []int64
	bound int64 // 0 when the leading sum is the product itself
}

func (pr *Problem) ray(d []*big.Int) *ray {
	r := &ray{exact: d, head: make([]int64, pr.p)}
	// Σ |a_ij||h_j| < 2^61 when every product is below 2^61/p.
	room := 61 - bits.Len(uint(pr.p))
	shift := 0
	for j, v := range d {
		if c := &pr.columns[j]; c.bits > 0 && v.Sign() != 0 {
			shift = max(shift, v.BitLen()+c.bits-room)
		}
	}
	t := new(big.Int)
	bound := uint64(0)
	for j, v := range d {
		c := &pr.columns[j]
		if c.bits == 0 || v.Sign() == 0 {
			continue
		}
		t.Abs(v)
		if by := shift - c.cut; by >= 0 {
			t.Rsh(t, uint(by)) // toward 0
		} else {
			t.Lsh(t, uint(-by))
		}
		r.head[j] = t.Int64()
		if shift > 0 {
			bound += uint64(1) << min(c.bits-c.cut, 62)
		}
		if c.large != nil {
			bound += uint64(r.head[j]) + 1
		}
		bound = min(bound, 1<<62) // no leading sum reaches this
		if v.Sign() < 0 {
			r.head[j] = -r.head[j]
		}
	}
	r.bound = int64(bound)
	return r
}

// signs multiplies rows lo ≤ i < hi with the ray. sign[i−lo] is the sign of
// the product with the sense of the row put in; size[i−lo] is the leading sum,
// a measure of how far the row is from 0, comparable within one ray.
func (pr *Problem) signs(r *ray, lo, hi int, size []int64, sign []int8) {
	size = size[:hi-lo]
	clear(size)
	for j := range pr.columns {
		h := r.head[j]
		if h == 0 {
			continue
		}
		c := &pr.columns[j]
		if c.rows == nil {
			x := c.small[lo:hi]
			x = x[:len(size)]
			for i := range size {
				size[i] += h * x[i]
			}
			continue
		}
		k := 0
		if lo > 0 {
			k = sort.Search(len(c.rows), func(k int) bool { return int(c.rows[k]) >= lo })
		}
		for ; k < len(c.rows) && int(c.rows[k]) < hi; k++ {
			size[int(c.rows[k])-lo] += h * c.small[k]
		}
	}
	senses := pr.senses[lo:hi]
	var x []*big.Int
	var sum, t big.Int
	for i, v := range size {
		if senses[i] == AtMost {
			v = -v
			size[i] = v
		}
		switch {
		case v > r.bound:
			sign[i] = 1
		case v < -r.bound:
			sign[i] = -1
		case r.bound == 0:
			sign[i] = 0
		default:
			if x == nil {
				x = integers(pr.p)
			}
			pr.row(int32(lo+i), x)
			sign[i] = int8(dot(&sum, &t, x, r.exact).Sign())
		}
	}
}

func integers(n int) []*big.Int {
	store := make([]big.Int, n)
	out := make([]*big.Int, n)
	for i := range out {
		out[i] = &store[i]
	}
	return out
}

func dot(sum, t *big.Int, x, y []*big.Int) *big.Int {
	sum.SetInt64(0)
	for j := range x {
		if x[j].Sign() != 0 && y[j].Sign() != 0 {
			sum.Add(sum, t.Mul(x[j], y[j]))
		}
	}
	return sum
}

// each runs f over blocks of signs; f returns false to stop.
func (pr *Problem) each(ctx context.Context, r *ray, f func(lo int, size []int64, sign []int8) bool) error {
	step := block
	if pr.wide || pr.p > 512 {
		step = block / 16
	}
	size, sign := make([]int64, step), make([]int8, step)
	for lo := 0; lo < pr.n; lo += step {
		if err := ctx.Err(); err != nil {
			return err
		}
		hi := min(lo+step, pr.n)
		pr.signs(r, lo, hi, size, sign)
		if !f(lo, size[:hi-lo], sign[:hi-lo]) {
			return nil
		}
	}
	return nil
}
