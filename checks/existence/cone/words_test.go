package cone

import (
	"math/big"
	"math/rand/v2"
	"testing"
)

func TestWords(t *testing.T) {
	names := []string{"(intercept)", "x", "y", "z", "u", "v", "w", "s"}
	for _, c := range []struct {
		d    []string
		null bool
		want string
	}{
		{[]string{"-5", "2"}, false, "x ≥ 2.5"},
		{[]string{"-19", "1"}, false, "x ≥ 19"},
		{[]string{"19", "-1"}, false, "−x ≥ −19"},
		{[]string{"0", "1", "1", "-2"}, false, "x + y − 2·z ≥ 0"},
		{[]string{"1", "3", "1", "0"}, false, "3·x + y ≥ −1"},
		{[]string{"-1", "1", "1"}, true, "x + y = 1"},
		{[]string{"1"}, false, "every row alike"},
		{[]string{"1/3", "123456789/10", "1"}, false, "about x + 8.1e−08·y ≥ −2.7e−08"},
		{[]string{"0", "1", "1", "1", "1", "1", "1", "2"}, false, "a combination of 7 columns (x, y, z, u, v, w, …)"},
	} {
		d := make([]*big.Rat, len(c.d))
		for j, s := range c.d {
			d[j], _ = new(big.Rat).SetString(s)
		}
		if got := Words(names, d, 0, c.null); got != c.want {
			t.Errorf("%v: %q, want %q", c.d, got, c.want)
		}
	}
}

// Holding columns by dropping them and by rows of sense Equal is the same.
func TestBounds(t *testing.T) {
	g := rand.New(rand.NewPCG(13, 1))
	for range 1500 {
		p, rows, senses := randomRows(g)
		s := fromRows(p, rows, senses)
		held := make([]bool, p)
		var bounds, half []Bound
		for j := range held {
			if held[j] = g.IntN(3) == 0; held[j] {
				bounds = append(bounds, Bound{j, Equal})
			} else if g.IntN(2) == 0 {
				half = append(half, Bound{j, AtLeast})
			}
		}
		columns, kept := Drop(s.columns, held)
		a := decide(t, system{columns, senses}, Options{})
		wide, more := Extend(s.columns, senses, bounds)
		b := decide(t, system{wide, more}, Options{})
		if a.Verdict != b.Verdict {
			t.Fatalf("dropped %v, bounded %v", a.Verdict, b.Verdict)
		}
		if a.Direction != nil && len(Restore(a.Direction, kept, p)) != p {
			t.Fatal("restored to another length")
		}
		wide, more = Extend(s.columns, senses, half)
		c := decide(t, system{wide, more}, Options{})
		for _, h := range half {
			row := make([]int64, p)
			row[h.Column] = 1
			rows, senses = append(rows, row), append(senses, h.Sense)
		}
		if want := byRays(p, rows, senses); c.Verdict != want {
			t.Fatalf("half-lines: %v, want %v", c.Verdict, want)
		}
	}
}
