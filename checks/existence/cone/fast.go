package cone

import (
	"context"
	"math"
	"math/big"
	"math/bits"
	"slices"
)

// search is the fast method. It works on few of the rows: a full-rank overlapped
// subset proves overlap of the whole, and a direction that separates the subset
// either separates the whole or shows which rows to add. Floating point only
// proposes; every answer is checked in integers before it is given.
type search struct {
	ctx   context.Context
	pr    *Problem
	equal *echelon  // independent rows of sense Equal
	all   *echelon  // those, and open rows of the subset
	open  []int32   // the subset of open rows
	have  []bool    // by row: in the subset
	x     []int64   // the subset, row-major, signs put in
	g     []float64 // x in floating point, each column divided by a power of two
	unit  []float64 // those divisors, inverted
	tried bool      // one-signed columns have been looked for
}

// fast gives nil when it finds no verified answer.
func fast(ctx context.Context, pr *Problem) (*Result, error) {
	most := 0
	for j := range pr.columns {
		most = max(most, pr.columns[j].bits)
	}
	if pr.wide || most+bits.Len(uint(pr.p)) > 64 || pr.p > 1500 {
		return nil, nil
	}
	s := &search{ctx: ctx, pr: pr, equal: newEchelon(pr.p), have: make([]bool, pr.n)}
	s.unit = make([]float64, pr.p)
	for j := range s.unit {
		s.unit[j] = math.Ldexp(1, -pr.columns[j].bits)
	}
	x := make([]int64, pr.p)
	for _, row := range sample(pr.equal, 4*pr.p+20) {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		pr.row64(row, x)
		if s.equal.add(x, row) && s.equal.rank() == pr.p {
			break
		}
	}
	s.all = s.equal.clone()
	s.start()
	for range 40 {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if s.all.rank() < pr.p {
			r, err := s.fillRank()
			if r != nil || err != nil {
				return r, err
			}
			if s.all.rank() < pr.p {
				return nil, nil
			}
		}
		if s.equal.rank() == pr.p {
			return s.equalOnly(), nil
		}
		if !s.tried {
			s.tried = true
			if d := s.pr.oneSigned(); d != nil {
				r, err := pr.separated(ctx, d, "one-signed column")
				if r != nil || (err != nil && err != errNotFree) {
					return r, err
				}
			}
		}
		before, beforeEqual := len(s.open), s.equal.rank()
		r, err := s.round()
		if r != nil || err != nil {
			return r, err
		}
		if len(s.open) == before && s.equal.rank() == beforeEqual {
			// Neither proof nor counterexample on this subset: widen it.
			if len(s.open) == len(pr.open) || len(s.open) > 200*pr.p {
				return nil, nil
			}
			s.grow(len(s.open))
		}
	}
	return nil, nil
}

// sample picks up to m of the rows, evenly spread with a fixed jitter so that a
// period in the table is not hit.
func sample(rows []int32, m int) []int32 {
	n := len(rows)
	if m >= n {
		return rows
	}
	out := make([]int32, m)
	seed := uint64(0x9E3779B97F4A7C15)
	for i := range out {
		lo, hi := i*n/m, (i+1)*n/m
		seed = seed*6364136223846793005 + 1442695040888963407
		out[i] = rows[lo+int((seed>>33)%uint64(hi-lo))]
	}
	return out
}

func (s *search) start() {
	pr := s.pr
	m := 10*pr.p + 20
	if len(pr.open) < m+m/4 {
		m = len(pr.open)
	}
	s.add(sample(pr.open, m))
	// A row for each column that the sample leaves at 0.
	for j := range pr.columns {
		seen := false
		for i := range s.open {
			if s.x[i*pr.p+j] != 0 {
				seen = true
				break
			}
		}
		if seen {
			continue
		}
		c := &pr.columns[j]
		for k, v := range c.small {
			if v == 0 {
				continue
			}
			row := int32(k)
			if c.rows != nil {
				row = c.rows[k]
			}
			if pr.senses[row] != Equal {
				s.add([]int32{row})
				break
			}
		}
	}
}

// add takes rows into the subset, unless they are in it.
func (s *search) add(rows []int32) {
	p := s.pr.p
	s.x = slices.Grow(s.x, len(rows)*p)
	for _, row := range rows {
		if s.ctx.Err() != nil {
			return // the caller looks at it next
		}
		if s.have[row] {
			continue
		}
		s.have[row] = true
		s.open = append(s.open, row)
		at := len(s.x)
		s.x = s.x[:at+p]
		x := s.x[at:]
		s.pr.row64(row, x)
		if s.ctx.Err() == nil {
			s.all.add(x, row)
		}
	}
}

// grow adds about m rows, evenly.
func (s *search) grow(m int) {
	s.add(sample(s.pr.open, min(len(s.pr.open), m)))
}

// fillRank adds rows until the rank is p, or finds a null vector of all rows.
func (s *search) fillRank() (*Result, error) {
	pr := s.pr
	x := make([]int64, pr.p)
	for s.all.rank() < pr.p {
		free := s.all.free()
		z := make([]*big.Int, len(free))
		for i := range z {
			z[i] = new(big.Int)
		}
		z[0].SetInt64(1)
		d, err := s.null(s.all, free, z)
		if d == nil || err != nil {
			return nil, err
		}
		var found []int32
		err = pr.each(s.ctx, pr.ray(d), func(lo int, size []int64, sign []int8) bool {
			for i, v := range sign {
				if v != 0 {
					found = append(found, int32(lo+i))
				}
			}
			return len(found) < pr.p
		})
		if err != nil {
			return nil, err
		}
		if len(found) == 0 {
			return pr.direction(RankDeficient, d, "rank of the columns"), nil
		}
		for _, row := range sample(found, 2*pr.p) {
			if pr.senses[row] == Equal {
				pr.row64(row, x)
				s.equal.add(x, row)
				s.all.add(x, row)
			} else {
				s.add([]int32{row})
			}
		}
	}
	return nil, nil
}

// null gives an integer vector that is 0 along the rows of e and proportional
// to z on its free columns; nil when the system can't be solved this way.
func (s *search) null(e *echelon, free []int, z []*big.Int) ([]*big.Int, error) {
	p, r := s.pr.p, e.rank()
	a := make([]int64, r*r)
	b := make([]*big.Int, r)
	x := make([]int64, p)
	t := new(big.Int)
	for i, row := range e.rows {
		s.pr.row64(row, x)
		for k, j := range e.pivots {
			a[i*r+k] = x[j]
		}
		b[i] = new(big.Int)
		for k, j := range free {
			if x[j] != 0 && z[k].Sign() != 0 {
				b[i].Sub(b[i], t.Mul(t.SetInt64(x[j]), z[k]))
			}
		}
		if b[i].BitLen() > 118 {
			return nil, nil
		}
	}
	num, den, ok, err := solveExact(s.ctx, a, r, b)
	if err != nil || !ok {
		return nil, err
	}
	d := integers(p)
	for k, j := range e.pivots {
		d[j] = num[k]
	}
	for k, j := range free {
		d[j].Mul(den, z[k])
	}
	return d, nil
}

// oneSigned looks for a column that is nowhere negative, or nowhere positive,
// with the signs put in, and 0 in the rows of sense Equal.
func (pr *Problem) oneSigned() []*big.Int {
	for j := range pr.columns {
		c := &pr.columns[j]
		up, down := false, false
		for k, v := range c.small {
			if v == 0 {
				continue
			}
			row := k
			if c.rows != nil {
				row = int(c.rows[k])
			}
			s := pr.senses[row]
			if s == Equal {
				up, down = true, true
				break
			}
			if (v > 0) == (s == AtLeast) {
				up = true
			} else {
				down = true
			}
			if up && down {
				break
			}
		}
		if up == down {
			continue
		}
		d := integers(pr.p)
		d[j].SetInt64(1)
		if down {
			d[j].SetInt64(-1)
		}
		return d
	}
	return nil
}

// equalOnly is the certificate when the equations alone have full rank.
func (s *search) equalOnly() *Result {
	weights := map[int32]*big.Rat{}
	for _, row := range s.equal.rows {
		weights[row] = new(big.Rat)
	}
	return &Result{Verdict: Overlapped, Way: "rank of the equations", Certificate: newCertificate(weights, s.equal.rows)}
}

// round runs Newton's method on the subset.
func (s *search) round() (*Result, error) {
	p, m := s.pr.p, len(s.open)
	if m == 0 {
		return nil, nil
	}
	unit := s.unit
	s.g = make([]float64, m*p)
	for i := range m {
		for j, v := range s.x[i*p : i*p+p] {
			s.g[i*p+j] = float64(v) * unit[j]
		}
	}
	g, k, z := s.g, p, []float64(nil)
	if r := s.equal.rank(); r > 0 {
		e := make([]float64, r*p)
		x := make([]int64, p)
		for i, row := range s.equal.rows {
			s.pr.row64(row, x)
			for j, v := range x {
				e[i*p+j] = float64(v) * unit[j]
			}
		}
		z, k = complement(s.ctx, e, r, p)
		if z == nil {
			return nil, nil
		}
		g = multiply(g, z, m, p, k)
	}
	if err := s.ctx.Err(); err != nil {
		return nil, err
	}
	var result *Result
	var failure error
	overlap := func(weights []float64) bool {
		result, failure = s.overlap(g, weights, m, k)
		return result != nil || failure != nil
	}
	direction := func(step int, d, u []float64) bool {
		if z != nil {
			d = multiply(z, d, p, k, 1)
		}
		before := len(s.open) + s.equal.rank()
		result, failure = s.direction(d, u)
		return result != nil || failure != nil || len(s.open)+s.equal.rank() > before
	}
	if err := newton(s.ctx, g, m, k, overlap, direction); err != nil {
		return nil, err
	}
	return result, failure
}

func multiply(a, b []float64, m, n, k int) []float64 {
	out := make([]float64, m*k)
	for i := range m {
		row := out[i*k : i*k+k]
		for j := range n {
			f := a[i*n+j]
			if f == 0 {
				continue
			}
			for c, v := range b[j*k : j*k+k] {
				row[c] += f * v
			}
		}
	}
	return out
}

// overlap rounds the weights of all rows but a basis, solves for those exactly,
// and accepts when they are positive.
func (s *search) overlap(g, weights []float64, m, k int) (*Result, error) {
	p := s.pr.p
	basis := spread(s.ctx, g, weights, m, k)
	if len(basis) < k {
		return nil, nil
	}
	inBasis := make([]bool, m)
	a := make([]int64, 0, p*p)
	rows := make([]int32, 0, p)
	for _, row := range s.equal.rows {
		at := len(a)
		a = append(a, make([]int64, p)...)
		s.pr.row64(row, a[at:])
		rows = append(rows, row)
	}
	for _, i := range basis {
		inBasis[i] = true
		a = append(a, s.x[i*p:i*p+p]...)
		rows = append(rows, s.open[i])
	}
	top := 0.0
	for _, v := range weights {
		top = max(top, v)
	}
	if !(top > 0) || math.IsInf(top, 1) {
		return nil, nil
	}
	for _, digits := range []int{16, 32} {
		scale := math.Ldexp(1, digits) / top
		b := integers(p)
		whole := make([]int64, m)
		t := new(big.Int)
		// |weight| ≤ 2^digits, so this many rows fit 64 bits.
		most := 0
		for j := range s.pr.columns {
			most = max(most, s.pr.columns[j].bits)
		}
		room := 62 - digits - most
		sum, held := make([]int64, p), 0
		flush := func() {
			for j, v := range sum {
				b[j].Sub(b[j], t.SetInt64(v))
			}
			clear(sum)
			held = 0
		}
		for i := range m {
			if inBasis[i] {
				continue
			}
			v := int64(math.Round(weights[i] * scale))
			whole[i] = v
			if v == 0 {
				continue
			}
			if room < 0 {
				for j, x := range s.x[i*p : i*p+p] {
					t.SetInt64(x)
					b[j].Sub(b[j], t.Mul(t, big.NewInt(v)))
				}
				continue
			}
			for j, x := range s.x[i*p : i*p+p] {
				sum[j] += v * x
			}
			if held++; held>>room > 0 {
				flush()
			}
		}
		flush()
		// Σ_basis λ_r x_r = b is a system in the transposed basis.
		at := make([]int64, p*p)
		for i := range p {
			for j := range p {
				at[j*p+i] = a[i*p+j]
			}
		}
		num, den, ok, err := solveExact(s.ctx, at, p, b)
		if err != nil {
			return nil, err
		}
		if !ok {
			return nil, nil
		}
		positive := true
		for i := s.equal.rank(); i < p; i++ {
			positive = positive && num[i].Sign() > 0
		}
		if !positive {
			continue
		}
		out := make(map[int32]*big.Rat, m+p)
		for i, v := range whole {
			if v > 0 {
				out[s.open[i]] = new(big.Rat).SetInt64(v)
			}
		}
		for i, row := range rows {
			if err := s.ctx.Err(); err != nil {
				return nil, err
			}
			out[row] = new(big.Rat).SetFrac(num[i], den)
		}
		return &Result{Verdict: Overlapped, Way: "Newton weights", Certificate: newCertificate(out, rows)}, nil
	}
	return nil, nil
}
