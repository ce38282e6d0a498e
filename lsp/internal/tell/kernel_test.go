package tell

import (
	"context"
	"testing"

	"wellposed/checks/facts"
	"wellposed/parser/model"
	"wellposed/parser/source"
)

func TestKernel(t *testing.T) {
	for prior, want := range map[string]string{
		"p as Beta(0, 0)":                          "p^(−1) · (1 − p)^(−1)",
		"p as Beta(1, 1)":                          "1",
		"p as Beta(1/2, 3)":                        "p^(−1/2) · (1 − p)^2",
		"p flat":                                   "1",
		"p ∝ p^(-1/2)":                             "p^(-1/2)",
		"r as Gamma(shape = 2, rate = 3)":          "r · exp(−3 · r)",
		"r as inverse-Gamma(shape = 1, scale = 1)": "r^(−2) · exp(−(1/r))",
		"r as Exponential(rate = 1)":               "exp(−r)",
	} {
		m := model.Build(context.Background(), source.NewFile("m.bayes", "unknown p : probability\nunknown r : rate\nprior "+prior+"\n"), model.Options{})
		if len(m.Priors) != 1 {
			t.Fatalf("%s: %v", prior, m.Problems)
		}
		if got := kernel(facts.New(context.Background(), m), m.Priors[0]); got != want {
			t.Errorf("%s: %q, want %q", prior, got, want)
		}
	}
}

func TestKernelOfFlatLogOdds(t *testing.T) {
	m := model.Build(context.Background(), source.NewFile("m.bayes", "unknown p : probability\nprior logit(p) flat\n"), model.Options{})
	if got := kernel(facts.New(context.Background(), m), m.Priors[0]); got != "Beta(0, 0)" {
		t.Errorf("%q", got)
	}
}
