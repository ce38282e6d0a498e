package objective

import (
	"context"
	"fmt"
	"math/rand"
	"strings"
	"testing"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

// rows is a table with n invented rows.
func rows(n int) string {
	r := rand.New(rand.NewSource(1))
	var b strings.Builder
	b.WriteString("table d\n| x | z | y | b |\n")
	for range n {
		fmt.Fprintf(&b, "| %.3f | %.3f | %.2f | %d |\n", r.NormFloat64(), r.NormFloat64(), r.NormFloat64(), r.Intn(2))
	}
	return b.String()
}

func BenchmarkDerive(b *testing.B) {
	for _, c := range []struct{ name, text string }{
		{"binomial", "unknown p : probability\nobserve 0 of 40 with probability p\nprior p jeffreys\n"},
		{"normal reference", "given y = [1, 2, 4]\nunknown m : location\nunknown s : scale\nobserve y as Normal(m, sd = s)\nprior (m, s) reference m before s\n"},
		{"regression, 10,000 rows", rows(10000) + "unknown a, b1, b2 : effect\nunknown s : scale\nobserve y as Normal(a + b1 * x + b2 * z, sd = s)\nprior (a, b1, b2, s) jeffreys jointly\n"},
		{"logistic regression, 10,000 rows", rows(10000) + "unknown a, b1, b2 : effect\nobserve b as Bernoulli(expit(a + b1 * x + b2 * z))\nprior (a, b1, b2) jeffreys jointly\n"},
	} {
		b.Run(c.name, func(b *testing.B) {
			m := model.Build(context.Background(), source.NewFile("bench.bayes", c.text), model.Options{})
			p := m.Priors[0]
			for b.Loop() {
				d, err := Derive(context.Background(), m.Declared(), p.Rule, p.About)
				if err != nil {
					b.Fatal(err)
				}
				_ = d
			}
		})
	}
}

func BenchmarkLogKernel(b *testing.B) {
	m := model.Build(context.Background(), source.NewFile("bench.bayes", "unknown p : probability\nobserve 0 of 40 with probability p\nprior p jeffreys\n"), model.Options{})
	d, err := Derive(context.Background(), m.Declared(), m.Priors[0].Rule, m.Priors[0].About)
	if err != nil {
		b.Fatal(err)
	}
	x := []float64{0.3}
	for b.Loop() {
		d.LogKernel(x)
	}
}
