package cone

import (
	"context"
	"fmt"
	"testing"
)

func BenchmarkDecide(b *testing.B) {
	for _, kind := range kinds {
		for _, z := range sizes {
			b.Run(fmt.Sprintf("%s/%v", kind, z), func(b *testing.B) {
				s := logistic(kind, z.n, z.p, 1)
				way := ""
				for b.Loop() {
					// Building the problem is part of the work.
					pr, err := NewProblem(s.columns, s.senses)
					if err != nil {
						b.Fatal(err)
					}
					r, err := Decide(context.Background(), pr)
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
