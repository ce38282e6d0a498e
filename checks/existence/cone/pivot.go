package cone

import (
	"context"
	"math/big"
	"slices"
)

// pivoting is the exact method of last resort, right on every input and slow
// on large ones: the dual simplex method for the system Σ λ_i x_i = −a, with
// λ_i ≥ 0 on open rows and free on rows of sense Equal, where a is the sum of
// the open rows of the first basis. A solution gives an overlap certificate
// whose rows contain that basis; a basis that has no admissible pivot gives a
// separating direction. Leaving and entering rows are picked by least index
// (Bland's rule) after a while, which ends for certain.
//
// The inverse of the basis is kept as integers over its determinant: column r
// of inverse is a direction that makes every row of the basis 0 except the row
// in slot r, where the product is det > 0.
type pivoting struct {
	pr      *Problem
	slots   []int32 // row in each slot, −1 for a unit vector not yet replaced
	inverse [][]*big.Int
	det     *big.Int
	short   []*big.Int // −a·inverse: the weights λ of the basis, times det
	first   []int32    // the first basis
	work    int64      // digits multiplied, roughly
	limit   int64
}

func newPivoting(pr *Problem, limit int64) *pivoting {
	b := &pivoting{pr: pr, slots: make([]int32, pr.p), det: big.NewInt(1), limit: limit}
	b.inverse = make([][]*big.Int, pr.p)
	for r := range b.inverse {
		b.slots[r] = -1
		b.inverse[r] = integers(pr.p)
		b.inverse[r][r].SetInt64(1)
	}
	return b
}

// replace puts row x into slot r, where product x·inverse[r] is not 0.
func (b *pivoting) replace(ctx context.Context, r int, x []*big.Int, row int32) error {
	p := b.pr.p
	product := integers(p)
	t := new(big.Int)
	for j := range product {
		dot(product[j], t, x, b.inverse[j])
	}
	pivot := product[r]
	old := b.inverse[r]
	for j := range b.inverse {
		if j == r {
			continue
		}
		if err := ctx.Err(); err != nil {
			return err
		}
		if product[j].Sign() == 0 && pivot.Cmp(b.det) == 0 {
			continue
		}
		for i, v := range b.inverse[j] {
			v.Mul(v, pivot)
			if product[j].Sign() != 0 && old[i].Sign() != 0 {
				v.Sub(v, t.Mul(product[j], old[i]))
			}
			v.Quo(v, b.det)
		}
		if b.short != nil {
			v := b.short[j]
			v.Mul(v, pivot)
			v.Sub(v, t.Mul(product[j], b.short[r]))
			v.Quo(v, b.det)
		}
	}
	b.work += int64(p) * int64(p) * int64(1+len(b.det.Bits()))
	b.det.Set(pivot)
	if pivot.Sign() < 0 {
		b.det.Neg(b.det)
		for j := range b.inverse {
			for _, v := range b.inverse[j] {
				v.Neg(v)
			}
			if b.short != nil {
				b.short[j].Neg(b.short[j])
			}
		}
		// The direction of the slot itself kept its sign relative to the row:
		// x·old = pivot < 0, and now x·(−old) = det.
	}
	b.slots[r] = row
	return nil
}

// solve decides the problem, or gives NotDecided at the work limit.
func (b *pivoting) solve(ctx context.Context) (*Result, error) {
	pr := b.pr
	if null, err := b.fill(ctx); err == ErrWork {
		return &Result{Verdict: NotDecided, Way: "pivoting"}, nil
	} else if err != nil {
		return nil, err
	} else if null != nil {
		return pr.direction(RankDeficient, null, "pivoting"), nil
	}
	x := integers(pr.p)
	t := new(big.Int)
	// a, and the weights of the first basis: −1 on each open row.
	b.short = integers(pr.p)
	b.first = slices.Clone(b.slots)
	for r, row := range b.slots {
		if pr.senses[row] != Equal {
			b.short[r].Neg(b.det)
		}
	}
	bland := 40*pr.p + 200
	for round := 0; ; round++ {
		leave := -1
		for r, row := range b.slots {
			if pr.senses[row] == Equal || b.short[r].Sign() >= 0 {
				continue
			}
			switch {
			case leave < 0:
				leave = r
			case round >= bland:
				if row < b.slots[leave] {
					leave = r
				}
			case b.short[r].Cmp(b.short[leave]) < 0:
				leave = r
			}
		}
		if leave < 0 {
			return b.overlap(), nil
		}
		d := b.inverse[leave]
		ray := pr.ray(d)
		enter, deepest := int32(-1), int64(0)
		err := pr.each(ctx, ray, func(lo int, size []int64, sign []int8) bool {
			for i, s := range sign {
				row := lo + i
				if s == 0 || (s > 0 && pr.senses[row] != Equal) {
					continue
				}
				// A row of sense Equal depends on those in the basis, so its
				// product is 0 and it never gets here.
				if round >= bland {
					enter = int32(row)
					return false
				}
				if enter < 0 || size[i] < deepest {
					enter, deepest = int32(row), size[i]
				}
			}
			return true
		})
		if err != nil {
			return nil, err
		}
		b.work += int64(pr.n) * int64(pr.p) * int64(1+len(b.det.Bits())) / 8
		if enter < 0 {
			return pr.separated(ctx, d, "pivoting")
		}
		if b.limit > 0 && b.work > b.limit {
			return &Result{Verdict: NotDecided, Way: "pivoting"}, nil
		}
		pr.row(enter, x)
		if dot(new(big.Int), t, x, d).Sign() >= 0 {
			panic("cone: entering row has the wrong sign")
		}
		if err := b.replace(ctx, leave, x, enter); err != nil {
			return nil, err
		}
	}
}

// fill replaces the unit vectors by independent rows, those of sense Equal
// first. It returns a null vector when the rows have rank below p.
func (b *pivoting) fill(ctx context.Context) ([]*big.Int, error) {
	pr := b.pr
	x := integers(pr.p)
	for _, stage := range []bool{true, false} {
		if stage && len(pr.equal) == 0 {
			continue
		}
		for r := range b.slots {
			if b.slots[r] >= 0 {
				continue
			}
			found := int32(-1)
			err := pr.each(ctx, pr.ray(b.inverse[r]), func(lo int, size []int64, sign []int8) bool {
				for i, s := range sign {
					if s != 0 && (pr.senses[lo+i] == Equal) == stage {
						found = int32(lo + i)
						return false
					}
				}
				return true
			})
			if err != nil {
				return nil, err
			}
			if found < 0 {
				if stage {
					continue
				}
				return b.inverse[r], nil
			}
			pr.row(found, x)
			if err := b.replace(ctx, r, x, found); err != nil {
				return nil, err
			}
			if b.limit > 0 && b.work > b.limit {
				return nil, ErrWork
			}
		}
	}
	return nil, nil
}

// overlap reads the certificate off: weight 1 on the open rows of the first
// basis plus λ on the present one; a row of sense Equal takes λ alone.
func (b *pivoting) overlap() *Result {
	weights := map[int32]*big.Rat{}
	for _, row := range b.first {
		if b.pr.senses[row] != Equal {
			weights[row] = big.NewRat(1, 1)
		}
	}
	for r, row := range b.slots {
		w := new(big.Rat).SetFrac(b.short[r], b.det)
		if old := weights[row]; old != nil {
			w.Add(w, old)
		} else if w.Sign() == 0 && b.pr.senses[row] != Equal {
			continue
		}
		weights[row] = w
	}
	return &Result{Verdict: Overlapped, Way: "pivoting", Certificate: newCertificate(weights, b.first)}
}
