package posterior

import (
	"context"
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"testing"
)

// Both tails against references of more digits than a double
// (testdata/generate.py): relative error at most 1e-8 for one unknown, 1e-6 for
// two, and never above what is claimed.
func TestReferences(t *testing.T) {
	f, err := os.Open("testdata/references.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	number := func(s string) float64 {
		v, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	laws := map[string]*Law{}
	worst := map[int]float64{}
	for _, row := range rows[1:] {
		text, point, lower, upper := row[0], number(row[1]), number(row[2]), number(row[3])
		m := build(t, text)
		law := laws[text]
		if law == nil {
			if law, err = LawOf(context.Background(), m.Declared(), m.Reports[0].Value); err != nil {
				t.Fatalf("%s\n%v", text, err)
			}
			laws[text] = law
		}
		unknowns := len(m.Unknowns)
		goal := 1e-8
		if unknowns > 1 {
			goal = 1e-6
		}
		for _, c := range []struct {
			name string
			of   func(float64) (Number, error)
			want float64
		}{{"below", law.Below, lower}, {"above", law.Above, upper}} {
			got, err := c.of(point)
			if err != nil {
				t.Fatal(err)
			}
			e := math.Abs(got.Value - c.want)
			if e > got.Error+1e-15 {
				t.Errorf("%s\nP %s %g = %.15g, want %.15g: off by %.1e, claimed %.1e", text, c.name, point, got.Value, c.want, e, got.Error)
			}
			// Tails below the size that the error bound speaks of are not compared
			// relative to themselves.
			if c.want > 1e-6 {
				worst[unknowns] = math.Max(worst[unknowns], e/c.want)
				if e > goal*c.want {
					t.Errorf("%s\nP %s %g = %.15g, want %.15g: relative error %.1e", text, c.name, point, got.Value, c.want, e/c.want)
				}
			}
		}
		if p := math.Min(lower, upper); p > 1e-4 {
			q, err := law.Quantile(lower)
			if err != nil {
				t.Fatal(err)
			}
			if e := math.Abs(q.Value - point); e > goal*math.Abs(point)+10*goal*1e-2 {
				t.Errorf("%s\nquantile %g = %.15g, want %.15g", text, lower, q.Value, point)
			}
		}
	}
	t.Logf("largest relative errors by number of unknowns: %v", worst)
}
