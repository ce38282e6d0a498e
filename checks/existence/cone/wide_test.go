package cone

import (
	"math/big"
	"math/rand/v2"
	"testing"
)

// Columns of 22 digits beside short ones: the leading bits decide most rows, and
// rows that are exactly 0 need all of them.
func TestWideColumns(t *testing.T) {
	g := rand.New(rand.NewPCG(19, 2))
	count := map[Verdict]int{}
	for range 150 {
		p := 2 + g.IntN(4)
		n := 4*p + g.IntN(40)
		s := system{columns: make([]Column, p), senses: make([]Sense, n)}
		plant := make([]int64, p)
		for j := range plant {
			plant[j] = g.Int64N(7) - 3
		}
		long := make([][]*big.Int, n)
		noisy := g.IntN(3) > 0
		for i := range long {
			long[i] = integers(p)
			along := new(big.Int)
			for j := range p {
				v := long[i][j]
				v.SetInt64(g.Int64N(2001) - 1000)
				if j%2 == 1 {
					v.Mul(v, big.NewInt(1e18)).Add(v, big.NewInt(g.Int64N(1e18)))
				}
				along.Add(along, new(big.Int).Mul(v, big.NewInt(plant[j])))
			}
			if g.IntN(3) == 0 && plant[1] == 1 {
				long[i][1].Sub(long[i][1], along) // exactly 0 along the plant
				along.SetInt64(0)
			}
			s.senses[i] = AtLeast
			if along.Sign() < 0 || (along.Sign() == 0 && g.IntN(2) == 0) {
				s.senses[i] = AtMost
			}
			if noisy && g.IntN(n) < 2 {
				s.senses[i] = -s.senses[i]
			}
		}
		for j := range p {
			den := big.NewInt(1)
			if j%2 == 1 {
				den.Exp(big.NewInt(10), big.NewInt(21), nil)
			}
			s.columns[j].Rational = make([]*big.Rat, n)
			for i := range n {
				s.columns[j].Rational[i] = new(big.Rat).SetFrac(long[i][j], den)
			}
		}
		r := decide(t, s, Options{})
		count[r.Verdict]++
		// The same after an exact change of columns that makes all of them wide.
		twin := system{columns: make([]Column, p), senses: s.senses}
		for j := range p {
			twin.columns[j].Rational = make([]*big.Rat, n)
			for i := range n {
				v := new(big.Rat).Set(s.columns[j].Rational[i])
				if j > 0 {
					v.Add(v, new(big.Rat).Mul(s.columns[j-1].Rational[i], big.NewRat(123456789, 1000003)))
				}
				twin.columns[j].Rational[i] = v
			}
		}
		if q := decide(t, twin, Options{}); q.Verdict != r.Verdict {
			t.Fatalf("%v becomes %v", r.Verdict, q.Verdict)
		}
	}
	t.Log(count)
	if count[Separated] < 20 || count[Overlapped] < 20 {
		t.Error(count)
	}
}
