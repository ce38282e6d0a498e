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
// The products are exact. Where they do not fit 64 bits, the leading bits of
// the direction are multiplied first: with d_j = h_j·2^s + r_j, |r_j| < 2^s,
// and b ≥ Σ_j max_i |x_ij|, a row whose leading sum Σ x_ij·h_j is beyond ±b has
// the sign of that sum, since the rest is below b·2^s. Only the other rows need
// long integers.
type ray struct {
	exact []*big.Int
	head  []int64
	bound int64 // 0 when head is the direction itself
	wide  bool
}

func (pr *Problem) ray(d []*big.Int) *ray {
	r := &ray{exact: d, head: make([]int64, pr.p), wide: pr.wide}
	if pr.wide {
		return r
	}
	// Σ |x_ij||h_j| ≤ Σ 2^(bits) < 2^62 when every product is below 2^62/p.
	room := 61 - bits.Len(uint(pr.p))
	shift := 0
	for j, v := range d {
		if pr.columns[j].bits > 0 {
			shift = max(shift, v.BitLen()+pr.columns[j].bits-room)
		}
	}
	t := new(big.Int)
	for j, v := range d {
		if pr.columns[j].bits == 0 {
			continue
		}
		if shift == 0 {
			r.head[j] = v.Int64()
			continue
		}
		// Toward 0, so that a short entry gives 0 and not −1.
		r.head[j] = t.Rsh(t.Abs(v), uint(shift)).Int64()
		if v.Sign() < 0 {
			r.head[j] = -r.head[j]
		}
	}
	if shift > 0 {
		sum := uint64(0)
		for j := range pr.columns {
			sum += uint64(1) << min(pr.columns[j].bits, 62)
			sum = min(sum, 1<<62)
		}
		r.bound = int64(sum)
	}
	return r
}

// signs multiplies rows lo ≤ i < hi with the ray. sign[i−lo] is the sign of
// the product with the sense of the row put in; size[i−lo] is the leading sum,
// a measure of how far the row is from 0, comparable within one ray.
func (pr *Problem) signs(r *ray, lo, hi int, size []int64, sign []int8) {
	if r.wide {
		pr.longSigns(r, lo, hi, size, sign)
		return
	}
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

func (pr *Problem) longSigns(r *ray, lo, hi int, size []int64, sign []int8) {
	x := integers(pr.p)
	var sum, t big.Int
	products := make([]big.Int, hi-lo)
	longest := 0
	for i := lo; i < hi; i++ {
		pr.row(int32(i), x)
		products[i-lo].Set(dot(&sum, &t, x, r.exact))
		longest = max(longest, products[i-lo].BitLen())
	}
	shift := uint(max(0, longest-62))
	for i := range products {
		sign[i] = int8(products[i].Sign())
		size[i] = t.Rsh(&products[i], shift).Int64()
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
	if r.wide || pr.p > 512 {
		step = 64
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
