package cone

import (
	"context"
	"errors"
	"math/big"
	"math/rand/v2"
	"slices"
	"testing"
	"time"

	"wellposed/checks/existence/verify"
)

func TestEdges(t *testing.T) {
	one := []int64{1, 2, 3}
	for _, c := range []struct {
		name    string
		columns []Column
		senses  []Sense
		want    Verdict
	}{
		{"no columns, no rows", nil, nil, Overlapped},
		{"no columns", nil, []Sense{AtLeast, Equal}, Overlapped},
		{"no rows", []Column{{}}, nil, RankDeficient},
		{"zero row", []Column{{Mantissa: []int64{0}}}, []Sense{AtLeast}, RankDeficient},
		{"one row", []Column{{Mantissa: []int64{5}}}, []Sense{AtLeast}, Separated},
		{"one equation", []Column{{Mantissa: []int64{5}}}, []Sense{Equal}, Overlapped},
		{"both signs", []Column{{Mantissa: []int64{5, -2}}}, []Sense{AtLeast, AtLeast}, Overlapped},
		{"both senses", []Column{{Mantissa: []int64{5, 2}}}, []Sense{AtLeast, AtMost}, Overlapped},
		{"same sign", []Column{{Mantissa: one}}, []Sense{AtMost, AtMost, AtMost}, Separated},
		{"sparse, empty", []Column{{Rows: []int32{}}}, []Sense{AtMost}, RankDeficient},
		{"sparse", []Column{{Rows: []int32{1}, Mantissa: []int64{7}}, {Mantissa: []int64{1, 1, -1}}}, []Sense{AtLeast, Equal, AtLeast}, Overlapped},
		{"largest and least", []Column{{Mantissa: []int64{1<<63 - 1, -1 << 63}}, {Mantissa: []int64{1, -1}}}, []Sense{AtLeast, AtLeast}, Separated},
		{"nearly opposite", []Column{{Mantissa: []int64{1<<62 - 1, -1 << 62}}, {Mantissa: []int64{1, -1}}, {Rows: []int32{}, Mantissa: nil}}, []Sense{AtLeast, AtLeast}, RankDeficient},
		{"exponents apart", []Column{{Mantissa: []int64{1, -1, 0, 1}, Exponent: 300}, {Mantissa: []int64{1, 1, -1, -1}, Exponent: -300}}, []Sense{AtLeast, AtLeast, AtLeast, AtMost}, Overlapped},
	} {
		for _, exact := range []bool{false, true} {
			if r := decide(t, system{c.columns, c.senses}, Options{Exact: exact}); r.Verdict != c.want {
				t.Errorf("%s (exact %v): %v, want %v", c.name, exact, r.Verdict, c.want)
			}
		}
	}
	for _, c := range []struct {
		columns []Column
		senses  []Sense
	}{
		{[]Column{{Mantissa: one}}, []Sense{AtLeast}},
		{[]Column{{Mantissa: one}}, []Sense{AtLeast, 2, Equal}},
		{[]Column{{Mantissa: []int64{1}, Rows: []int32{3}}}, []Sense{AtLeast, AtLeast}},
		{[]Column{{Mantissa: []int64{1, 2}, Rows: []int32{1, 1}}}, []Sense{AtLeast, AtLeast}},
		{[]Column{{Rational: []*big.Rat{nil}}}, []Sense{AtLeast}},
		{[]Column{{Rational: []*big.Rat{}, Mantissa: []int64{1}}}, []Sense{AtLeast}},
	} {
		if _, err := NewProblem(c.columns, c.senses); !errors.Is(err, ErrShape) {
			t.Errorf("%v: error %v", c, err)
		}
	}
}

// Invented data in the shape that textbooks use to explain separation.
func TestTextbook(t *testing.T) {
	rows := func(x ...int64) [][]int64 {
		var out [][]int64
		for _, v := range x {
			out = append(out, []int64{1, v})
		}
		return out
	}
	y := func(s ...int) []Sense {
		var out []Sense
		for _, v := range s {
			out = append(out, Sense(2*v-1))
		}
		return out
	}
	complete := decide(t, fromRows(2, rows(11, 14, 19, 23, 28, 31), y(0, 0, 0, 1, 1, 1)), Options{})
	if complete.Verdict != Separated || !complete.Complete {
		t.Errorf("complete: %+v", complete)
	}
	quasi := decide(t, fromRows(2, rows(11, 14, 19, 19, 28, 31), y(0, 0, 0, 1, 1, 1)), Options{})
	if quasi.Verdict != Separated || quasi.Complete || !slices.Equal(quasi.Touching, []int{2, 3}) || quasi.Apart != 4 {
		t.Errorf("quasi: %+v", quasi)
	}
	if want := []int64{-19, 1}; quasi.Direction[0].Cmp(big.NewRat(want[0], 1)) != 0 || quasi.Direction[1].Cmp(big.NewRat(want[1], 1)) != 0 {
		t.Errorf("quasi: direction %v", quasi.Direction)
	}
	if r := decide(t, fromRows(2, rows(11, 14, 19, 23, 28, 31), y(0, 0, 1, 0, 1, 1)), Options{}); r.Verdict != Overlapped {
		t.Errorf("overlap: %v", r.Verdict)
	}
	// A reference level that is all ones: the direction joins three columns.
	level := fromRows(3, [][]int64{{1, 0, 0}, {1, 0, 0}, {1, 1, 0}, {1, 1, 0}, {1, 0, 1}, {1, 0, 1}}, y(1, 1, 0, 1, 1, 0))
	if r := decide(t, level, Options{}); r.Verdict != Separated || len(r.Support) != 3 || !slices.Equal(r.Touching, []int{2, 3, 4, 5}) {
		t.Errorf("reference level: %+v", r)
	}
}

// vary changes a system in ways that don't change the answer.
func vary(g *rand.Rand, s system) (system, string) {
	n, p := len(s.senses), len(s.columns)
	out := system{senses: slices.Clone(s.senses), columns: make([]Column, p)}
	for j, c := range s.columns {
		c.Mantissa = slices.Clone(c.Mantissa)
		out.columns[j] = c
	}
	switch g.IntN(7) {
	case 0:
		for i, k := range g.Perm(n) {
			out.senses[k] = s.senses[i]
			for j := range p {
				out.columns[j].Mantissa[k] = s.columns[j].Mantissa[i]
			}
		}
		return out, "rows permuted"
	case 1:
		for i := range n {
			f := 1 + g.Int64N(9)
			for j := range p {
				out.columns[j].Mantissa[i] *= f
			}
		}
		return out, "rows scaled"
	case 2:
		for j := range out.columns {
			out.columns[j].Exponent += g.IntN(40) - 20
		}
		return out, "columns scaled"
	case 3:
		for i := range n {
			if g.IntN(2) == 0 {
				out.senses[i] = -out.senses[i]
				for j := range p {
					out.columns[j].Mantissa[i] *= -1
				}
			}
		}
		return out, "senses turned"
	case 4:
		if n > 1 {
			a, b := g.IntN(n), g.IntN(n)
			if s.senses[a] == s.senses[b] {
				out.senses = append(out.senses, s.senses[a])
				for j := range p {
					m := out.columns[j].Mantissa
					out.columns[j].Mantissa = append(m, m[a]+2*m[b])
				}
			}
		}
		return out, "redundant row"
	case 5:
		// An invertible change of columns: add a multiple of one to another.
		if p > 1 {
			a := g.IntN(p)
			b := (a + 1 + g.IntN(p-1)) % p
			if s.columns[a].Exponent == s.columns[b].Exponent {
				for i := range n {
					out.columns[a].Mantissa[i] += 3 * out.columns[b].Mantissa[i]
				}
			}
		}
		return out, "columns combined"
	}
	for j := range out.columns {
		c := &out.columns[j]
		var rows []int32
		var values []int64
		for i, v := range c.Mantissa {
			if v != 0 {
				rows, values = append(rows, int32(i)), append(values, v)
			}
		}
		if rows == nil {
			rows = []int32{}
		}
		*c = Column{Rows: rows, Mantissa: values, Exponent: c.Exponent}
	}
	return out, "sparse"
}

func TestMetamorphic(t *testing.T) {
	g := rand.New(rand.NewPCG(3, 9))
	for range 3000 {
		p, rows, senses := randomRows(g)
		s := fromRows(p, rows, senses)
		want := decide(t, s, Options{}).Verdict
		other, how := vary(g, s)
		if r := decide(t, other, Options{}); r.Verdict != want {
			t.Fatalf("%s: %v becomes %v (%s)\nrows %v\nsenses %v", how, want, r.Verdict, r.Way, rows, senses)
		}
	}
}

// Fast and exact methods on sets of medium size, some of them with a planted
// direction, null vector or equations.
func TestMedium(t *testing.T) {
	g := rand.New(rand.NewPCG(8, 1))
	ways := map[string]int{}
	for trial := range 500 {
		p := 2 + g.IntN(9)
		n := p + g.IntN(30*p)
		span := int64(1) << g.IntN(14)
		rows, senses := make([][]int64, n), make([]Sense, n)
		plant := make([]int64, p)
		for j := range plant {
			plant[j] = g.Int64N(5) - 2
		}
		kind := g.IntN(5)
		for i := range rows {
			rows[i] = make([]int64, p)
			s := int64(0)
			for j := range rows[i] {
				rows[i][j] = g.Int64N(2*span+1) - span
				s += rows[i][j] * plant[j]
			}
			senses[i] = Sense(2*g.IntN(2) - 1)
			switch kind {
			case 1, 2:
				if s > 0 {
					senses[i] = AtLeast
				} else if s < 0 {
					senses[i] = AtMost
				}
				if kind == 2 && g.IntN(4*n) == 0 {
					senses[i] = -senses[i]
				}
			case 3:
				if g.IntN(n) < p/2 {
					senses[i] = Equal
				}
			case 4:
				if p > 2 {
					rows[i][0] = rows[i][1] - 2*rows[i][2]
				}
			}
		}
		s := fromRows(p, rows, senses)
		a, b := decide(t, s, Options{}), decide(t, s, Options{Exact: true})
		if a.Verdict != b.Verdict {
			t.Fatalf("trial %d: %v (%s), but %v (%s)", trial, a.Verdict, a.Way, b.Verdict, b.Way)
		}
		ways[a.Way]++
	}
	t.Log(ways)
	if ways["pivoting"] > 25 {
		t.Errorf("the fast method gave up on %d of 500 sets", ways["pivoting"])
	}
}

// Entries that no machine number holds.
func TestWide(t *testing.T) {
	g := rand.New(rand.NewPCG(21, 4))
	for range 300 {
		p, rows, senses := randomRows(g)
		s := system{columns: make([]Column, p), senses: senses}
		factor := make([]*big.Rat, len(rows))
		for i := range factor {
			factor[i] = big.NewRat(1+g.Int64N(1<<40), 1+g.Int64N(1<<40))
			factor[i].Mul(factor[i], factor[i])
		}
		for j := range s.columns {
			s.columns[j].Rational = make([]*big.Rat, len(rows))
			for i, r := range rows {
				s.columns[j].Rational[i] = new(big.Rat).Mul(factor[i], big.NewRat(r[j], 1))
			}
		}
		want := byRays(p, rows, senses)
		if r := decide(t, s, Options{}); r.Verdict != want {
			t.Fatalf("%v, want %v", r.Verdict, want)
		}
	}
}

// A hair's breadth that floating point does not see.
func TestBeyondFloat(t *testing.T) {
	const big52 = 1 << 52
	// x, and x changed by one unit in the 16th digit: full rank.
	n := 60
	g := rand.New(rand.NewPCG(2, 2))
	columns := []Column{{Mantissa: make([]int64, n)}, {Mantissa: make([]int64, n)}, {Mantissa: make([]int64, n)}}
	senses := make([]Sense, n)
	for i := range n {
		v := g.Int64N(big52)
		columns[0].Mantissa[i], columns[1].Mantissa[i], columns[2].Mantissa[i] = 1, v, v
		senses[i] = Sense(2*g.IntN(2) - 1)
	}
	same := system{columns, senses}
	if r := decide(t, same, Options{}); r.Verdict != RankDeficient {
		t.Errorf("equal columns: %v", r.Verdict)
	}
	columns[2].Mantissa[17]++
	if r := decide(t, same, Options{}); r.Verdict != Separated || len(r.Touching) != n-1 {
		t.Errorf("one row apart: %v", r)
	}
	for i := range n {
		columns[2].Mantissa[i] += g.Int64N(3) - 1
	}
	r := decide(t, same, Options{})
	if e := decide(t, same, Options{Exact: true}); r.Verdict != e.Verdict {
		t.Errorf("nearly equal columns: %v and %v", r.Verdict, e.Verdict)
	}
}

func TestCancel(t *testing.T) {
	g := rand.New(rand.NewPCG(7, 7))
	n, p := 20000, 120
	columns := make([]Column, p)
	senses := make([]Sense, n)
	for j := range columns {
		columns[j].Mantissa = make([]int64, n)
		for i := range n {
			columns[j].Mantissa[i] = g.Int64N(1 << 40)
		}
	}
	for i := range senses {
		senses[i] = Sense(2*g.IntN(2) - 1)
	}
	pr, err := NewProblem(columns, senses)
	if err != nil {
		t.Fatal(err)
	}
	for _, exact := range []bool{false, true} {
		ctx, cancel := context.WithTimeout(context.Background(), 15*time.Millisecond)
		_, err = DecideWith(ctx, pr, Options{Exact: exact})
		cancel()
		if !errors.Is(err, context.DeadlineExceeded) {
			t.Errorf("exact %v: %v", exact, err)
		}
	}
	r, err := DecideWith(context.Background(), pr, Options{Exact: true, Work: 1})
	if err != nil || r.Verdict != NotDecided {
		t.Errorf("no work allowed: %v, %v", r, err)
	}
}

// A proof that was tampered with is refused.
func TestMutation(t *testing.T) {
	g := rand.New(rand.NewPCG(4, 4))
	refused := map[Verdict]int{}
	for range 600 {
		p, rows, senses := randomRows(g)
		s := fromRows(p, rows, senses)
		r := decide(t, s, Options{})
		switch r.Verdict {
		case RankDeficient:
			d := slices.Clone(r.Direction)
			j := r.Support[g.IntN(len(r.Support))]
			if len(r.Support) == 1 {
				d[j] = new(big.Rat)
			} else {
				d[j] = new(big.Rat).Add(d[j], big.NewRat(1, 7))
				// Still null if column j is 0 altogether.
				if slices.Equal(s.columns[j].Mantissa, make([]int64, len(rows))) {
					continue
				}
			}
			if verify.ConeNull(s.cone(), d) == nil {
				t.Fatalf("accepted %v for %v", d, rows)
			}
		case Separated:
			d := make([]*big.Rat, p)
			for j := range d {
				d[j] = new(big.Rat).Neg(r.Direction[j])
			}
			if verify.ConeDirection(s.cone(), d, r.Touching) == nil {
				t.Fatalf("accepted the opposite direction %v", d)
			}
			if verify.ConeDirection(s.cone(), r.Direction, append(slices.Clone(r.Touching), len(rows))) == nil {
				t.Fatal("accepted a row too many")
			}
			if len(r.Touching) > 0 && verify.ConeDirection(s.cone(), r.Direction, r.Touching[1:]) == nil {
				t.Fatal("accepted a row too few")
			}
		case Overlapped:
			c := r.Certificate
			k := g.IntN(len(c.Rows))
			w := slices.Clone(c.Weights)
			w[k] = new(big.Rat).Add(w[k], big.NewRat(1, 3))
			zero := true
			for _, v := range rows[c.Rows[k]] {
				zero = zero && v == 0
			}
			if !zero && verify.ConeOverlap(s.cone(), c.Rows, w) == nil {
				t.Fatal("accepted a changed weight")
			}
			if verify.ConeOverlap(s.cone(), c.Rows[:0], w[:0]) == nil {
				t.Fatal("accepted nothing")
			}
			flip := s.cone()
			if flip.Senses[c.Rows[k]] != 0 && !zero {
				flip.Senses[c.Rows[k]] *= -1
				if verify.ConeOverlap(flip, c.Rows, c.Weights) == nil {
					t.Fatal("accepted a turned sense")
				}
			}
			for i, v := range c.Weights {
				if v.Sign() > 0 {
					w = slices.Clone(c.Weights)
					w[i] = new(big.Rat).Neg(v)
					if s.senses[c.Rows[i]] != Equal && verify.ConeOverlap(s.cone(), c.Rows, w) == nil {
						t.Fatal("accepted a negative weight")
					}
				}
			}
		}
		refused[r.Verdict]++
	}
	t.Log(refused)
}

func FuzzDecide(f *testing.F) {
	f.Add([]byte{2, 1, 1, 1, 2, 1, 255, 0, 1})
	f.Add([]byte{3, 7, 1, 0, 0, 2, 1, 1, 0, 0, 1, 0, 1, 1, 1, 9, 9, 9})
	f.Add([]byte{1})
	f.Fuzz(func(t *testing.T, data []byte) {
		if len(data) == 0 || len(data) > 400 {
			return
		}
		p := int(data[0] % 7)
		data = data[1:]
		s := system{columns: make([]Column, p)}
		for len(data) > p {
			s.senses = append(s.senses, Sense(data[0]%3)-1)
			for j := range p {
				v := int64(int8(data[1+j]))
				if data[0]&64 != 0 {
					v *= 1 << (data[0] & 56)
				}
				s.columns[j].Mantissa = append(s.columns[j].Mantissa, v)
			}
			data = data[p+1:]
		}
		for j := range p {
			if s.columns[j].Mantissa == nil {
				s.columns[j].Mantissa = []int64{}
			}
		}
		a, b := decide(t, s, Options{}), decide(t, s, Options{Exact: true})
		if a.Verdict != b.Verdict {
			t.Fatalf("%v (%s) and %v (%s)", a.Verdict, a.Way, b.Verdict, b.Way)
		}
	})
}
