package cone

import (
	"context"
	"math/big"
)

// Widest turns a separating direction into one along which as few rows as
// possible are 0: the rows that still touch are 0 along every solution, so the
// separation is complete exactly when none is left. It gives r back when there
// is nothing to add, and ErrWork when the limit of Decide is reached. Any sum of solutions is a solution; rows off 0 along one of
// them stay off 0.
//
// With T the touching rows, a wider direction e exists exactly when T and the
// equations, as a system of its own, are separated. That system always has null
// vectors (d is one), which add nothing; it is decided on a maximal set of
// independent columns instead, the others set to 0, where the rank is full.
func Widest(ctx context.Context, pr *Problem, r *Result) (*Result, error) {
	if r.Verdict != Separated {
		return r, nil
	}
	for len(r.Touching) > 0 {
		d := pr.integral(r.Direction)
		e, err := pr.wider(ctx, r.Touching)
		if err != nil || e == nil {
			return r, err
		}
		// K·d + e with K large enough for every row that d holds off 0.
		k := big.NewInt(1)
		x := integers(pr.p)
		along, t, q := new(big.Int), new(big.Int), new(big.Int)
		next := 0
		for _, row := range pr.open {
			if next < len(r.Touching) && r.Touching[next] == int(row) {
				next++
				continue
			}
			if row&255 == 0 && ctx.Err() != nil {
				return nil, ctx.Err()
			}
			pr.row(row, x)
			if dot(q, t, x, e).Sign() >= 0 {
				continue
			}
			dot(along, t, x, d)
			q.Neg(q).Quo(q, along)
			if q.Add(q, big.NewInt(1)).Cmp(k) > 0 {
				k.Set(q)
			}
		}
		for j := range d {
			d[j].Mul(d[j], k).Add(d[j], e[j])
		}
		reduce(d)
		wider, err := pr.separated(ctx, d, r.Way+", widened")
		if err != nil {
			return nil, err
		}
		if len(wider.Touching) >= len(r.Touching) {
			return r, nil // not reached: e takes a row out of T
		}
		r = wider
	}
	return r, nil
}

// integral gives the direction in units of the integer columns, scaled.
func (pr *Problem) integral(d []*big.Rat) []*big.Int {
	lcm, g := big.NewInt(1), new(big.Int)
	q := make([]*big.Rat, len(d))
	for j := range d {
		q[j] = new(big.Rat).Mul(d[j], pr.columns[j].scale)
		g.GCD(nil, nil, lcm, q[j].Denom())
		lcm.Mul(lcm, new(big.Int).Quo(q[j].Denom(), g))
	}
	out := make([]*big.Int, len(d))
	for j := range d {
		out[j] = new(big.Int).Mul(q[j].Num(), g.Quo(lcm, q[j].Denom()))
	}
	return out
}

// wider finds a direction that is ≥ 0 on the touching rows and not 0 on all of
// them, and 0 on the equations; nil when there is none.
func (pr *Problem) wider(ctx context.Context, touching []int) ([]*big.Int, error) {
	rows := make([]int32, 0, len(touching)+len(pr.equal))
	for _, i := range touching {
		rows = append(rows, int32(i))
	}
	rows = append(rows, pr.equal...)
	senses := make([]Sense, len(rows))
	for k, i := range rows {
		senses[k] = pr.senses[i]
	}
	columns := make([]Column, pr.p)
	for j := range columns {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		c := &pr.columns[j]
		if c.large != nil {
			columns[j].Rational = make([]*big.Rat, len(rows))
		} else {
			columns[j].Mantissa = make([]int64, len(rows))
		}
		for k, i := range rows {
			at := c.at(i)
			switch {
			case c.large != nil && at >= 0:
				columns[j].Rational[k] = new(big.Rat).SetInt(c.large[at])
			case c.large != nil:
				columns[j].Rational[k] = new(big.Rat)
			case at >= 0:
				columns[j].Mantissa[k] = c.small[at]
			}
		}
	}
	kept := make([]int, pr.p)
	for j := range kept {
		kept[j] = j
	}
	for len(kept) > 0 {
		subset := make([]Column, len(kept))
		for k, j := range kept {
			subset[k] = columns[j]
		}
		part, err := NewProblem(subset, senses)
		if err != nil {
			return nil, err
		}
		r, err := Decide(ctx, part)
		if err != nil {
			return nil, err
		}
		switch r.Verdict {
		case RankDeficient:
			// A column in the support depends on the others: leave it out.
			last := r.Support[len(r.Support)-1]
			kept = append(kept[:last:last], kept[last+1:]...)
			continue
		case Separated:
			e := make([]*big.Rat, pr.p)
			for j := range e {
				e[j] = new(big.Rat)
			}
			for k, j := range kept {
				e[j] = r.Direction[k] // subset was made of the integer columns
			}
			out := make([]*big.Int, pr.p)
			lcm, g := big.NewInt(1), new(big.Int)
			for _, v := range e {
				g.GCD(nil, nil, lcm, v.Denom())
				lcm.Mul(lcm, new(big.Int).Quo(v.Denom(), g))
			}
			for j, v := range e {
				out[j] = new(big.Int).Mul(v.Num(), g.Quo(lcm, v.Denom()))
			}
			return out, nil
		case NotDecided:
			return nil, ErrWork
		}
		return nil, nil
	}
	return nil, nil
}
