package cone

import (
	"math"
	"math/big"
	"slices"
)

// direction guesses from d, with products u on the subset, which rows are 0
// along a separating direction, makes d exact on them, and checks it: first on
// the subset, then on every row. When rows outside the subset are violated it
// adds some of them and returns nil.
func (s *search) direction(d, u []float64) (*Result, error) {
	least, top := math.Inf(1), 0.0
	for _, v := range u {
		least = min(least, v)
		top = max(top, v)
	}
	if !(top > 0) || math.IsInf(top, 1) {
		return nil, nil
	}
	unit := min(top, 1)
	tied := -1
	for _, ratio := range []float64{0, 1e-8, 1e-4, 1e-2, 0.1, 0.3} {
		edge := ratio * unit
		if least < -edge || (ratio == 0 && least <= 1e-3*unit) {
			continue
		}
		e := s.equal.clone()
		count := 0
		for i, v := range u {
			if math.Abs(v) <= edge {
				count++
				if e.rank() < s.pr.p && s.ctx.Err() == nil {
					e.add(s.x[i*s.pr.p:(i+1)*s.pr.p], s.open[i])
				}
			}
		}
		if count == tied || e.rank() == s.pr.p {
			tied = count
			continue
		}
		tied = count
		near := s.project(e, d)
		if near == nil {
			continue
		}
		exact, err := s.snap(e, near, unit)
		if err != nil {
			return nil, err
		}
		if exact != nil {
			return s.everywhere(exact)
		}
	}
	return nil, nil
}

// project takes from d, in floating point, what is not 0 along the rows of e;
// nil when the rest clearly violates a row of the subset.
func (s *search) project(e *echelon, d []float64) []float64 {
	p := s.pr.p
	near := append([]float64(nil), d...)
	row := make([]int64, p)
	var basis [][]float64
	for _, r := range e.rows {
		if s.ctx.Err() != nil {
			return nil
		}
		s.pr.row64(r, row)
		q := make([]float64, p)
		n := 0.0
		for j, v := range row {
			q[j] = float64(v) * s.unit[j]
			n += q[j] * q[j]
		}
		before := math.Sqrt(n)
		for range 2 {
			for _, o := range basis {
				f := 0.0
				for j, v := range o {
					f += v * q[j]
				}
				for j, v := range o {
					q[j] -= f * v
				}
			}
		}
		n = 0
		for _, v := range q {
			n += v * v
		}
		if n = math.Sqrt(n); n < 1e-11*before {
			continue
		}
		for j := range q {
			q[j] /= n
		}
		basis = append(basis, q)
	}
	for range 2 {
		for _, o := range basis {
			f := 0.0
			for j, v := range o {
				f += v * near[j]
			}
			for j, v := range o {
				near[j] -= f * v
			}
		}
	}
	least, top := 0.0, 0.0
	for i := range s.open {
		x := s.g[i*p : i*p+p]
		v := 0.0
		for j, f := range x {
			v += f * near[j]
		}
		least, top = min(least, v), max(top, v)
	}
	if top <= 0 || least < -1e-5*top {
		return nil
	}
	return near
}

// snap makes near exact: 0 along the rows of e, and on the right side of the
// rows of the subset. It gives nil when that fails.
func (s *search) snap(e *echelon, near []float64, unit float64) ([]*big.Int, error) {
	free := e.free()
	if len(free) == 1 {
		if d := s.small(near); d != nil {
			if ok, _ := s.holds(d); ok {
				return d, nil
			}
		}
	}
	for _, digits := range []int{6, 14, 26} {
		z := s.round64(free, near, unit, digits)
		if z == nil {
			return nil, nil
		}
		exact, err := s.null(e, free, z)
		if exact == nil || err != nil {
			return nil, err
		}
		ok, flip := s.holds(exact)
		if flip {
			for _, v := range exact {
				v.Neg(v)
			}
		}
		if ok {
			return exact, nil
		}
		if len(free) == 1 {
			break
		}
	}
	return nil, nil
}

// small reads near, up to a factor, as fractions with a denominator up to a
// thousand; nil when it is not close to such fractions.
func (s *search) small(near []float64) []*big.Int {
	top := 0.0
	whole := make([]float64, len(near))
	for j, v := range near {
		whole[j] = v * s.unit[j]
		top = max(top, math.Abs(whole[j]))
	}
	if !(top > 0) {
		return nil
	}
	common := int64(1)
	numerators, denominators := make([]int64, len(near)), make([]int64, len(near))
	for j, v := range whole {
		a, b, ok := fraction(v/top, 1000, 1e-9)
		if !ok {
			return nil
		}
		numerators[j], denominators[j] = a, b
		x, y := common, b
		for y != 0 {
			x, y = y, x%y
		}
		if common = common / x * b; common > 1<<30 {
			return nil
		}
	}
	d := integers(len(near))
	for j := range d {
		d[j].SetInt64(numerators[j] * (common / denominators[j]))
	}
	return d
}

// fraction is the first convergent of the continued fraction of v within the
// tolerance, if its denominator is at most limit.
func fraction(v float64, limit int64, tolerance float64) (num, den int64, ok bool) {
	p0, p1, q0, q1 := int64(0), int64(1), int64(1), int64(0)
	for x := v; ; {
		a := math.Floor(x)
		if !(math.Abs(a) <= 1e6) {
			return 0, 0, false
		}
		p0, p1 = p1, int64(a)*p1+p0
		q0, q1 = q1, int64(a)*q1+q0
		if q1 > limit {
			return 0, 0, false
		}
		if math.Abs(v-float64(p1)/float64(q1)) <= tolerance {
			return p1, q1, true
		}
		x = 1 / (x - a)
	}
}

// round64 rounds the free entries of d so that no product is off by more than
// about unit·2^−digits per column, in units of the integer columns.
func (s *search) round64(free []int, d []float64, unit float64, digits int) []*big.Int {
	z := make([]*big.Int, len(free))
	most := 0
	for _, j := range free {
		most = max(most, s.pr.columns[j].bits)
	}
	zero := true
	for i, j := range free {
		v := math.Round(math.Ldexp(d[j]/unit, digits))
		if math.Abs(v) > 1e15 || math.IsNaN(v) {
			return nil
		}
		z[i] = big.NewInt(int64(v))
		z[i].Lsh(z[i], uint(most-s.pr.columns[j].bits))
		zero = zero && v == 0
	}
	if len(free) == 1 {
		z[0].SetInt64(1)
		return z
	}
	if zero {
		return nil
	}
	return z
}

// holds says whether d, or −d (then flip is true), satisfies the rows of the
// subset and is off 0 on one of them.
func (s *search) holds(d []*big.Int) (ok, flip bool) {
	r := s.pr.ray(d)
	up, down := false, false
	p := s.pr.p
	x, sum, t := integers(p), new(big.Int), new(big.Int)
	for i := range s.open {
		row := s.x[i*p : i*p+p]
		v := int64(0)
		for j, h := range r.head {
			v += h * row[j]
		}
		switch {
		case v > r.bound:
			up = true
		case v < -r.bound:
			down = true
		case r.bound > 0:
			for j, c := range row {
				x[j].SetInt64(c)
			}
			sign := dot(sum, t, x, d).Sign()
			up, down = up || sign > 0, down || sign < 0
		}
		if up && down {
			return false, false
		}
	}
	return up != down, down
}

// everywhere checks d on all rows, and adds rows that it violates.
func (s *search) everywhere(d []*big.Int) (*Result, error) {
	pr := s.pr
	reduce(d)
	r, err := pr.separated(s.ctx, d, "Newton direction")
	if err != errNotFree {
		return r, err
	}
	type violation struct {
		row  int32
		size int64
	}
	var bad []violation
	var equal []int32
	err = pr.each(s.ctx, pr.ray(d), func(lo int, size []int64, sign []int8) bool {
		for i, v := range sign {
			if v == 0 {
				continue
			}
			if pr.senses[lo+i] == Equal {
				if len(equal) < 4*pr.p {
					equal = append(equal, int32(lo+i))
				}
			} else if v < 0 {
				bad = append(bad, violation{int32(lo + i), size[i]})
			}
		}
		return true
	})
	if err != nil {
		return nil, err
	}
	x := make([]int64, pr.p)
	for _, row := range equal {
		pr.row64(row, x)
		if s.equal.add(x, row) {
			s.all.add(x, row)
		}
	}
	// Half of the rows to add are the worst, half are spread over the rest.
	want := max(len(s.open)/2, 2*pr.p)
	spreadOver := make([]int32, len(bad))
	for i, b := range bad {
		spreadOver[i] = b.row
	}
	slices.SortFunc(bad, func(a, b violation) int {
		if a.size != b.size {
			if a.size < b.size {
				return -1
			}
			return 1
		}
		return int(a.row - b.row)
	})
	worst := make([]int32, 0, want/2)
	for _, b := range bad[:min(len(bad), want/2)] {
		worst = append(worst, b.row)
	}
	s.add(worst)
	s.add(sample(spreadOver, want/2))
	return nil, nil
}

// reduce divides by the greatest common divisor.
func reduce(d []*big.Int) {
	g := new(big.Int)
	for _, v := range d {
		g.GCD(nil, nil, g, new(big.Int).Abs(v))
		if g.IsInt64() && g.Int64() == 1 {
			return
		}
	}
	if g.Sign() > 0 {
		for _, v := range d {
			v.Quo(v, g)
		}
	}
}
