package cone

import (
	"math/rand/v2"
	"testing"
)

func TestComparisons(t *testing.T) {
	g := rand.New(rand.NewPCG(6, 6))
	count, graphs := map[Verdict]int{}, 0
	for trial := range 4000 {
		p := 1 + g.IntN(7)
		n := g.IntN(5 * p)
		turned := make([]int64, p)
		for j := range turned {
			turned[j] = 2*g.Int64N(2) - 1
		}
		anchored := g.IntN(2) == 0
		rows, senses := make([][]int64, n), make([]Sense, n)
		for i := range rows {
			rows[i] = make([]int64, p)
			a, b, size := g.IntN(p), g.IntN(p), 1+g.Int64N(4)
			rows[i][a] = size * turned[a]
			if a != b {
				rows[i][b] = -size * turned[b]
			} else if !anchored {
				rows[i][a] = 0
			}
			senses[i] = Sense(2*g.IntN(2) - 1)
			if g.IntN(12) == 0 {
				senses[i] = Equal
			}
		}
		if n > 0 && g.IntN(8) == 0 {
			rows[0][g.IntN(p)] += 1 // perhaps of another kind
		}
		s := fromRows(p, rows, senses)
		a, b := decide(t, s, Options{}), decide(t, s, Options{Exact: true})
		if a.Verdict != b.Verdict {
			t.Fatalf("trial %d: %v (%s), but %v (%s)\nrows %v\nsenses %v", trial, a.Verdict, a.Way, b.Verdict, b.Way, rows, senses)
		}
		count[a.Verdict]++
		if a.Way == "graph of comparisons" {
			graphs++
		}
	}
	t.Log(count, graphs)
	if graphs < 3000 || count[Overlapped] < 300 {
		t.Errorf("%d graphs, %v", graphs, count)
	}
}

// rasch has persons then items, the first item held at 0; person i passes item k
// with the probability that the model gives, or always when perfect.
func rasch(persons, items int, perfect int) system {
	g := rand.New(rand.NewPCG(uint64(persons), uint64(items)))
	s := system{columns: make([]Column, persons+items-1)}
	for j := range s.columns {
		s.columns[j].Rows = []int32{}
	}
	for i := range persons {
		ability := g.NormFloat64()
		passed := 0
		for k := range items {
			row := int32(len(s.senses))
			yes := g.NormFloat64() < ability-float64(k)/float64(items)
			// Keep to the mixed scores unless asked otherwise.
			if k == items-1 && passed == 0 {
				yes = true
			}
			if k == items-1 && passed == items-1 {
				yes = false
			}
			if i == perfect {
				yes = true
			}
			if yes {
				passed++
			}
			sense := AtMost
			if yes {
				sense = AtLeast
			}
			s.senses = append(s.senses, sense)
			c := &s.columns[i]
			c.Rows, c.Mantissa = append(c.Rows, row), append(c.Mantissa, 1)
			if k > 0 {
				c := &s.columns[persons+k-1]
				c.Rows, c.Mantissa = append(c.Rows, row), append(c.Mantissa, -1)
			}
		}
	}
	return s
}

func TestRasch(t *testing.T) {
	if r := decide(t, rasch(400, 12, -1), Options{}); r.Verdict != Overlapped {
		t.Errorf("mixed scores: %v", r.Verdict)
	}
	r := decide(t, rasch(400, 12, 33), Options{})
	if r.Verdict != Separated || len(r.Support) != 1 || r.Support[0] != 33 {
		t.Errorf("a perfect score: %v, support %v", r.Verdict, r.Support)
	}
}
