package cone

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"
)

// No row that touches the widest direction is off 0 along any extreme ray.
func TestWidest(t *testing.T) {
	g := rand.New(rand.NewPCG(17, 3))
	widened, complete := 0, 0
	for trial := range 4000 {
		p, rows, senses := randomRows(g)
		s := fromRows(p, rows, senses)
		r := decide(t, s, Options{})
		if r.Verdict != Separated {
			continue
		}
		pr, err := NewProblem(s.columns, s.senses)
		if err != nil {
			t.Fatal(err)
		}
		w, err := Widest(context.Background(), pr, r)
		if err != nil {
			t.Fatal(err)
		}
		if err := check(s, w); err != nil {
			t.Fatal(err)
		}
		if w != r {
			widened++
		}
		if w.Complete {
			complete++
		}
		touches := map[int]bool{}
		for _, i := range w.Touching {
			touches[i] = true
		}
		rays(p, rows, senses, func(products []int) bool {
			for i, v := range products {
				if v != 0 && touches[i] {
					t.Fatalf("trial %d: row %d touches, but a ray is off it\nrows %v\nsenses %v", trial, i, rows, senses)
				}
			}
			return true
		})
	}
	t.Log(widened, complete)
	if widened < 300 || complete < 300 {
		t.Errorf("%d widened, %d complete", widened, complete)
	}
}

// rays calls f with the signs of all rows along each extreme ray, until it
// returns false.
func rays(p int, rows [][]int64, senses []Sense, f func([]int) bool) {
	stop := false
	var choose func(from int, set [][]int64)
	choose = func(from int, set [][]int64) {
		if stop {
			return
		}
		if len(set) == p-1 {
			d, rank := nullOf(p, set)
			if rank != p-1 {
				return
			}
			for _, sign := range []int{1, -1} {
				out, ok := make([]int, len(rows)), true
				for i, row := range rows {
					s := new(big.Rat)
					for j, v := range row {
						s.Add(s, new(big.Rat).Mul(big.NewRat(v, 1), d[j]))
					}
					v := s.Sign() * sign
					if (senses[i] == Equal && v != 0) || v*int(senses[i]) < 0 {
						ok = false
						break
					}
					out[i] = v
				}
				if ok && !f(out) {
					stop = true
					return
				}
			}
			return
		}
		for i := from; i < len(rows); i++ {
			choose(i+1, append(set[:len(set):len(set)], rows[i]))
		}
	}
	choose(0, nil)
}
