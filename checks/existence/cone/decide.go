package cone

import (
	"context"
	"errors"
	"math/big"
	"slices"
)

// Options bounds the work.
type Options struct {
	// Work bounds the exact method of last resort, in word multiplications,
	// roughly; 0 means no bound.
	Work int64
	// Exact skips the fast method.
	Exact bool
}

// Decide answers whether d = 0 is the only solution. It returns ctx.Err() soon
// after ctx ends; no other error occurs on a Problem from this package.
func Decide(ctx context.Context, pr *Problem) (*Result, error) {
	return DecideWith(ctx, pr, Options{Work: 4e10})
}

// DecideWith is Decide with limits.
func DecideWith(ctx context.Context, pr *Problem, o Options) (*Result, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	if pr.p == 0 {
		return &Result{Verdict: Overlapped, Certificate: &Certificate{}, Way: "no columns"}, nil
	}
	if !o.Exact {
		if g := newGraph(ctx, pr); g != nil {
			if r, err := g.solve(ctx); r != nil || (err != nil && err != errNotFree) {
				return r, err
			}
		}
		r, err := fast(ctx, pr)
		if r != nil || err != nil {
			return r, err
		}
	}
	return newPivoting(pr, o.Work).solve(ctx)
}

// ErrWork is returned by Widest when the limit of work is reached.
var ErrWork = errors.New("limit of work reached")

// errNotFree is returned by separated for a direction that fails.
var errNotFree = errors.New("direction violates a row")

// separated verifies direction d on every row, exactly, and describes it.
func (pr *Problem) separated(ctx context.Context, d []*big.Int, way string) (*Result, error) {
	touching, apart, bad := []int{}, 0, false
	err := pr.each(ctx, pr.ray(d), func(lo int, size []int64, sign []int8) bool {
		senses := pr.senses[lo : lo+len(sign)]
		if lo == block && len(touching) > block/2 {
			touching = slices.Grow(touching, pr.n-lo) // most rows touch
		}
		for i, s := range sign {
			switch {
			case senses[i] == Equal:
				bad = bad || s != 0
			case s == 0:
				touching = append(touching, lo+i)
			case s < 0:
				bad = true
			default:
				apart++
			}
		}
		return !bad
	})
	if err != nil {
		return nil, err
	}
	if bad || apart == 0 {
		return nil, errNotFree
	}
	r := pr.direction(Separated, d, way)
	r.Touching, r.Apart = touching, apart
	r.Complete = len(touching) == 0 && len(pr.equal) == 0
	return r, nil
}

// newCertificate orders the rows. basis may be nil when it is not known.
func newCertificate(weights map[int32]*big.Rat, basis []int32) *Certificate {
	c := &Certificate{}
	for row := range weights {
		c.Rows = append(c.Rows, int(row))
	}
	slices.Sort(c.Rows)
	for _, row := range c.Rows {
		c.Weights = append(c.Weights, weights[int32(row)])
	}
	for _, row := range basis {
		k, _ := slices.BinarySearch(c.Rows, int(row))
		c.Basis = append(c.Basis, k)
	}
	slices.Sort(c.Basis)
	return c
}
