package cone

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"testing"

	"wellposed/checks/existence/verify"
)

// byRays is the oracle: when the rows have full rank the cone is pointed, so it
// is {0} unless one of its extreme rays exists, and each of those spans the null
// space of p − 1 independent rows. It tries all sets of p − 1 rows.
func byRays(p int, rows [][]int64, senses []Sense) Verdict {
	if p == 0 {
		return Overlapped
	}
	all := make([][]int64, len(rows))
	copy(all, rows)
	if _, rank := nullOf(p, all); rank < p {
		return RankDeficient
	}
	found := false
	rays(p, rows, senses, func([]int) bool {
		found = true
		return false
	})
	if found {
		return Separated
	}
	return Overlapped
}

// nullOf is Gauss–Jordan elimination over the rationals: a null vector (when
// there is one) and the rank.
func nullOf(p int, rows [][]int64) ([]*big.Rat, int) {
	m := make([][]*big.Rat, len(rows))
	for i, r := range rows {
		m[i] = make([]*big.Rat, p)
		for j, v := range r {
			m[i][j] = big.NewRat(v, 1)
		}
	}
	pivots := map[int]int{}
	rank := 0
	for j := 0; j < p && rank < len(m); j++ {
		k := rank
		for k < len(m) && m[k][j].Sign() == 0 {
			k++
		}
		if k == len(m) {
			continue
		}
		m[rank], m[k] = m[k], m[rank]
		inv := new(big.Rat).Inv(m[rank][j])
		for c := range p {
			m[rank][c].Mul(m[rank][c], inv)
		}
		for i := range m {
			if i == rank || m[i][j].Sign() == 0 {
				continue
			}
			f := new(big.Rat).Set(m[i][j])
			for c := range p {
				m[i][c].Sub(m[i][c], new(big.Rat).Mul(f, m[rank][c]))
			}
		}
		pivots[j] = rank
		rank++
	}
	for j := range p {
		if _, ok := pivots[j]; ok {
			continue
		}
		d := make([]*big.Rat, p)
		for c := range p {
			d[c] = new(big.Rat)
			if i, ok := pivots[c]; ok {
				d[c].Neg(m[i][j])
			}
		}
		d[j].SetInt64(1)
		return d, rank
	}
	return nil, rank
}

// system is a problem in both forms, for the engine and for the verifier.
type system struct {
	columns []Column
	senses  []Sense
}

func (s system) cone() *verify.Cone {
	c := &verify.Cone{}
	for _, v := range s.senses {
		c.Senses = append(c.Senses, int8(v))
	}
	for _, v := range s.columns {
		c.Columns = append(c.Columns, verify.ConeColumn{Mantissa: v.Mantissa, Exponent: v.Exponent, Rational: v.Rational, Rows: v.Rows})
	}
	return c
}

func fromRows(p int, rows [][]int64, senses []Sense) system {
	s := system{columns: make([]Column, p), senses: senses}
	for j := range p {
		s.columns[j].Mantissa = make([]int64, len(rows))
		for i, r := range rows {
			s.columns[j].Mantissa[i] = r[j]
		}
	}
	return s
}

// decide runs the engine, has the verdict verified independently, and fails the
// test when the proof is refused.
func decide(t testing.TB, s system, o Options) *Result {
	t.Helper()
	pr, err := NewProblem(s.columns, s.senses)
	if err != nil {
		t.Fatal(err)
	}
	r, err := DecideWith(context.Background(), pr, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := check(s, r); err != nil {
		t.Fatalf("%v (%s): %v", r.Verdict, r.Way, err)
	}
	return r
}

func check(s system, r *Result) error {
	switch r.Verdict {
	case RankDeficient:
		return verify.ConeNull(s.cone(), r.Direction)
	case Separated:
		return verify.ConeDirection(s.cone(), r.Direction, r.Touching)
	case Overlapped:
		c := r.Certificate
		if len(c.Basis) != len(s.columns) {
			return fmt.Errorf("basis of %d rows for %d columns", len(c.Basis), len(s.columns))
		}
		return verify.ConeOverlap(s.cone(), r.Certificate.Rows, r.Certificate.Weights)
	}
	return nil
}

func randomRows(g *rand.Rand) (int, [][]int64, []Sense) {
	p := 1 + g.IntN(4)
	n := g.IntN(3*p + 4)
	span := 1 + g.Int64N(3)
	zero := g.IntN(3)
	equal := g.IntN(6)
	rows := make([][]int64, n)
	senses := make([]Sense, n)
	for i := range rows {
		rows[i] = make([]int64, p)
		for j := range rows[i] {
			if g.IntN(3) >= zero {
				rows[i][j] = g.Int64N(2*span+1) - span
			}
		}
		switch {
		case g.IntN(8) < equal-3:
			senses[i] = Equal
		case g.IntN(2) == 0:
			senses[i] = AtMost
		default:
			senses[i] = AtLeast
		}
		if i > 0 && g.IntN(10) == 0 {
			rows[i] = rows[g.IntN(i)]
		}
	}
	// Many sets near the border: rows turned to one side of a random direction.
	if g.IntN(2) == 0 {
		d := make([]int64, p)
		for j := range d {
			d[j] = g.Int64N(5) - 2
		}
		spare := g.IntN(3)
		for i, r := range rows {
			s := int64(0)
			for j := range r {
				s += r[j] * d[j]
			}
			if s == 0 || spare > g.IntN(6) {
				continue
			}
			if s > 0 {
				senses[i] = AtLeast
			} else {
				senses[i] = AtMost
			}
		}
	}
	return p, rows, senses
}

func TestAgainstEnumeration(t *testing.T) {
	g := rand.New(rand.NewPCG(11, 2))
	count := map[Verdict]int{}
	for trial := range 4000 {
		p, rows, senses := randomRows(g)
		want := byRays(p, rows, senses)
		for _, o := range []Options{{Exact: true}, {}} {
			r := decide(t, fromRows(p, rows, senses), o)
			if r.Verdict != want {
				t.Fatalf("trial %d, %+v: %v (%s), enumeration says %v\nrows %v\nsenses %v", trial, o, r.Verdict, r.Way, want, rows, senses)
			}
		}
		count[want]++
	}
	t.Log(count)
	for _, v := range []Verdict{RankDeficient, Separated, Overlapped} {
		if count[v] < 600 {
			t.Errorf("only %d sets are %v", count[v], v)
		}
	}
}
