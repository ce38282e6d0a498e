package longrun

import (
	"context"
	"fmt"
	"math"
	"sort"
)

// Limits are the ends of the interval that an outcome leads to, on the scale of
// the unknown. An outcome without a posterior has no interval and covers nothing.
type Limits struct {
	Low, High float64
	None      bool
}

// Side says on which side of a jump a value is taken.
type Side int

// Sides of a jump.
const (
	At Side = iota
	Below
	Above
)

func (s Side) String() string { return [...]string{"at", "just below", "just above"}[s] }

// Point is one value of a curve.
type Point struct{ X, Y float64 }

// Coverage is the long-run coverage of an interval over a range of true values.
type Coverage struct {
	From, To float64
	// Lowest is the greatest lower bound over the range; it is taken at LowestAt,
	// or in the limit from one side.
	Lowest   float64
	LowestAt float64
	Side     Side
	// Average is the mean over the range, every value weighted alike.
	Average float64
	// Error bounds the error of Lowest and Average.
	Error float64
	// Curve holds both sides of every jump and some points between, in order.
	Curve []Point
}

// MaxOutcomes bounds an enumeration of one count.
const MaxOutcomes = 20000

// Cover computes the long-run coverage exactly. limits[y] belongs to the outcome
// y; there must be one for every outcome that matters.
//
// Between two neighbouring jumps the covering outcomes are fixed. Where they are
// consecutive, L to U, the coverage is P(L ≤ Y ≤ U), whose derivative changes its
// sign at most once, from plus to minus; so its least value over the piece lies at
// an end. Where they are not consecutive the piece is cut at 200 points more, and
// the largest possible descent between two of them goes into Error.
func Cover(ctx context.Context, c Count, limits []Limits, from, to float64) (*Coverage, error) {
	if err := c.Validate(); err != nil {
		return nil, err
	}
	if !(from < to) || from < 0 || c.Trials > 0 && to > 1 {
		return nil, fmt.Errorf("%w: no range from %g to %g", ErrPlan, from, to)
	}
	need, err := c.Outcomes(to, MaxOutcomes)
	if err != nil {
		return nil, err
	}
	if len(limits) < need {
		return nil, fmt.Errorf("%w: %d intervals for %d outcomes", ErrPlan, len(limits), need)
	}
	limits = limits[:need]
	r := &Coverage{From: from, To: to, Lowest: math.Inf(1), Error: 4*rounding + 1e-12}
	cuts := jumps(limits, from, to)
	for i := 0; i+1 < len(cuts); i++ {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		r.piece(c, limits, cuts[i], cuts[i+1], min(24, max(4, 300/len(cuts))))
	}
	// At a jump itself the intervals are closed, so what begins and what ends there
	// both cover: the coverage is no lower than on either side.
	total := 0.0
	for y, l := range limits {
		if !l.None {
			total += c.inside(y, math.Max(from, l.Low), math.Min(to, l.High))
		}
	}
	r.Average = math.Min(1, total/(to-from))
	return r, nil
}

// jumps are the ends of the range and the ends of intervals inside it, in order.
func jumps(limits []Limits, from, to float64) []float64 {
	list := []float64{from, to}
	for _, l := range limits {
		if l.None {
			continue
		}
		for _, e := range []float64{l.Low, l.High} {
			if e > from && e < to {
				list = append(list, e)
			}
		}
	}
	sort.Float64s(list)
	out := list[:1]
	for _, e := range list[1:] {
		if e > out[len(out)-1] {
			out = append(out, e)
		}
	}
	return out
}

// piece looks at one piece between neighbouring jumps.
func (r *Coverage) piece(c Count, limits []Limits, low, high float64, steps int) {
	mid := low + (high-low)/2
	var runs [][2]int // covering outcomes as runs, ends included
	for y, l := range limits {
		if l.None || l.Low > mid || l.High < mid {
			continue
		}
		if n := len(runs); n > 0 && runs[n-1][1] == y-1 {
			runs[n-1][1] = y
		} else {
			runs = append(runs, [2]int{y, y})
		}
	}
	value := func(x float64) float64 {
		sum := 0.0
		for _, run := range runs {
			low, high := c.Below(run[0], x), c.AtLeast(run[1]+1, x)
			if c.Trials == 0 && run[1] == len(limits)-1 {
				high = 0 // the outcomes beyond have less than 1e-12
			}
			sum += math.Max(0, 1-low-high)
		}
		return math.Min(1, sum)
	}
	if len(runs) > 1 {
		steps = 200
	}
	before := math.NaN()
	for i := 0; i <= steps; i++ {
		x := low + (high-low)*float64(i)/float64(steps)
		v := value(x)
		r.Curve = append(r.Curve, Point{x, v})
		if v < r.Lowest {
			r.Lowest, r.LowestAt, r.Side = v, x, At
			if i == 0 && low > r.From {
				r.Side = Above
			} else if i == steps && high < r.To {
				r.Side = Below
			}
		}
		if len(runs) > 1 && i > 0 {
			// Each run is monotone or unimodal between neighbours.
			r.Error = math.Max(r.Error, 4*rounding+math.Abs(v-before))
		}
		before = v
	}
}

// Chance is the probability, when the probability or rate is x, of the outcomes
// for which yes holds; yes need only be defined for the outcomes that matter.
func Chance(c Count, yes func(y int) bool, x float64) (value, bound float64, err error) {
	if err := c.Validate(); err != nil {
		return 0, 0, err
	}
	n, err := c.Outcomes(x, MaxOutcomes)
	if err != nil {
		return 0, 0, err
	}
	// Runs of consecutive outcomes are taken as differences in the smaller tails.
	for y := 0; y < n; y++ {
		if !yes(y) {
			continue
		}
		end := y
		for end+1 < n && yes(end+1) {
			end++
		}
		switch {
		case y == end:
			value += c.Mass(y, x)
		case y == 0 && end == n-1:
			value = 1
		case y == 0:
			value += c.Below(end+1, x)
		case end == n-1:
			value += c.AtLeast(y, x)
		default:
			value += math.Max(0, 1-c.Below(y, x)-c.AtLeast(end+1, x))
		}
		y = end
	}
	return math.Min(1, value), rounding + 1e-12, nil
}
