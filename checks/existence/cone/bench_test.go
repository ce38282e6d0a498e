package cone_test

import (
	"context"
	"fmt"
	"testing"

	"wellposed/checks/existence/cone"
	"wellposed/checks/existence/cone/invent"
)

type size struct{ n, p int }

func (s size) String() string { return fmt.Sprintf("%dx%d", s.n, s.p) }

var sizes = []size{{1000, 20}, {1000, 50}, {10000, 20}, {10000, 50}, {100000, 20}, {100000, 50}}

// BenchmarkDecide includes the building of the problem from columns.
func BenchmarkDecide(b *testing.B) {
	for _, kind := range invent.Kinds {
		for _, z := range sizes {
			b.Run(fmt.Sprintf("%s/%v", kind, z), func(b *testing.B) {
				columns, senses := invent.Logistic(kind, z.n, z.p, 1)
				way := ""
				for b.Loop() {
					pr, err := cone.NewProblem(columns, senses)
					if err != nil {
						b.Fatal(err)
					}
					r, err := cone.Decide(context.Background(), pr)
					if err != nil {
						b.Fatal(err)
					}
					way = r.Verdict.String() + ", " + r.Way
				}
				b.Logf("%s", way)
			})
		}
	}
}
