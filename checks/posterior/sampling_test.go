package posterior

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"wellposed/parser/diag"
)

// regression is a logistic regression with invented data.
func regression(rows, columns int) string {
	random := rand.New(rand.NewPCG(5, 5))
	var b strings.Builder
	b.WriteString("table d\n| y |")
	for j := range columns {
		fmt.Fprintf(&b, " x%d |", j)
	}
	for range rows {
		eta, cells := 0.2, ""
		for range columns {
			x := math.Round(random.NormFloat64()*100) / 100
			eta += x / 2
			cells += fmt.Sprintf(" %g |", x)
		}
		y := 0
		if random.Float64() < 1/(1+math.Exp(-eta)) {
			y = 1
		}
		fmt.Fprintf(&b, "\n| %d |%s", y, cells)
	}
	b.WriteString("\nunknown a : effect\n")
	sum := "a"
	for j := range columns {
		fmt.Fprintf(&b, "unknown b%d : effect\n", j)
		sum += fmt.Sprintf(" + b%d * x%d", j, j)
	}
	fmt.Fprintf(&b, "observe y as Bernoulli(expit(%s))\nprior a flat\n", sum)
	for j := range columns {
		fmt.Fprintf(&b, "prior b%d flat\n", j)
	}
	return b.String()
}

// More than four unknowns are sampled, and that is said with a standard error;
// the answer agrees with a smaller error by quadrature where both can be had.
func TestSamplingIsSaid(t *testing.T) {
	s := summary(t, regression(60, 5)+"report b0, central 95%\n")
	if s.Median.How != diag.Indicated || !strings.Contains(s.Median.Method, "seed 1") || !(s.Median.Error > 0) {
		t.Errorf("median %+v", s.Median)
	}
	m := build(t, regression(60, 1)+"report b0, central 95%\n")
	exact, err := Summarize(context.Background(), m.Declared(), m.Reports[0])
	if err != nil {
		t.Fatal(err)
	}
	p := assemble(context.Background(), m.Declared(), false)
	members, factors := p.group([]int{1})
	p.place(members, factors)
	q, err := p.bySampling(p.free(members), density(factors), m.Reports[0].Value)
	if err != nil {
		t.Fatal(err)
	}
	drawn, err := q.summarise(m.Declared(), m.Reports[0])
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range [][2]Number{{drawn.Median, exact.Median}, {drawn.Intervals[0].Low, exact.Intervals[0].Low}, {drawn.Intervals[0].High, exact.Intervals[0].High}, {drawn.Mean, exact.Mean}, {drawn.SD, exact.SD}} {
		near(t, "sampled", c[0].Value, c[1].Value, c[0].Error)
	}
}

// The grid for many rows agrees with adaptive quadrature within what it claims.
func TestGridForManyRows(t *testing.T) {
	m := build(t, regression(400, 1)+"report b0, central 95%\n")
	exact, err := Summarize(context.Background(), m.Declared(), m.Reports[0])
	if err != nil {
		t.Fatal(err)
	}
	p := assemble(context.Background(), m.Declared(), false)
	members, factors := p.group([]int{1})
	p.place(members, factors)
	q, err := p.byGrid(p.free(members), density(factors), m.Reports[0].Value, []int{1})
	if err != nil || q == nil {
		t.Fatal(q, err)
	}
	s, err := q.summarise(m.Declared(), m.Reports[0])
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range [][2]Number{{s.Median, exact.Median}, {s.Intervals[0].Low, exact.Intervals[0].Low}, {s.Intervals[0].High, exact.Intervals[0].High}} {
		near(t, "grid", c[0].Value, c[1].Value, c[0].Error+c[1].Error)
		if c[0].Error > 0.02*exact.SD.Value {
			t.Errorf("claimed error %g of a sd of %g", c[0].Error, exact.SD.Value)
		}
	}
}

func BenchmarkLargeRegression(b *testing.B) {
	benchmarkSummary(b, regression(10000, 2)+"report b0, central 95%\n")
}

func BenchmarkThreeUnknowns(b *testing.B) {
	benchmarkSummary(b, regression(30, 2)+"report b0, central 95%\n")
}

func BenchmarkFourUnknowns(b *testing.B) {
	benchmarkSummary(b, regression(30, 3)+"report b0, central 95%\n")
}
