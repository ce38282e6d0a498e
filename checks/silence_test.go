package checks

import (
	"context"
	"fmt"
	"math"
	"math/rand"
	"strings"
	"testing"

	"wellposed/parser/model"
	"wellposed/parser/source"
)

// Large clean data leave nothing to say, whichever default is declared.
func TestLargeCleanDataAreSilent(t *testing.T) {
	models := map[string]string{}
	for _, p := range []string{"p as Beta(1, 1)", "p flat", "p as Uniform(0, 1)", "p as Beta(1/2, 1/2)", "p as Beta(1/3, 1/3)", "p as Beta(0, 0)", "logit(p) flat", "p jeffreys", "p as Beta(0.01, 0.01)", "logit(p) as Uniform(-100, 100)", "logit(p) as Normal(0, sd = 10)"} {
		models[p] = "unknown p : probability\nobserve 30 of 400 with probability p\nprior " + p + ` because "x" from "plan 1"
rivals for p: standard
report p, upper 95%
report rate = 1000 * p, central 95%
report odds(p), central 95%
conclude "below 0.11" when P(p < 0.11) >= 0.95
`
	}
	for _, p := range []string{"r flat", "log(r) flat", "r jeffreys", "r as Gamma(shape = 0.001, rate = 0.001)"} {
		models[p] = "unknown r : rate\nobserve 300 in 4000 at rate r\nprior " + p + ` because "x" from "plan 1"
rivals for r: standard
report r, central 95%
report r, upper 95%
`
	}
	rows := rand.New(rand.NewSource(1))
	var csv strings.Builder
	csv.WriteString("x,d\n")
	for range 10_000 {
		x := math.Round(1000*rows.NormFloat64()) / 1000
		d := 0
		if rows.Float64() < 1/(1+math.Exp(-0.2-0.7*x)) {
			d = 1
		}
		fmt.Fprintf(&csv, "%g,%d\n", x, d)
	}
	models["ten thousand rows"] = `table t from "big.csv"
unknown a, b : effect
observe d as Bernoulli(expit(a + b * x))
prior a flat because "x" from "plan 1"
prior b flat because "x" from "plan 1"
rival "wide" a as Normal(0, sd = 10); b as Normal(0, sd = 10)
report b, central 95%
report -a / b, central 95%
conclude "up" when P(b > 0) >= 0.95
`
	for name, text := range models {
		t.Run(name, func(t *testing.T) {
			m := model.Build(context.Background(), source.NewFile("m.bayes", text), model.Options{Loader: model.Memory{"big.csv": csv.String()}})
			for _, d := range Check(context.Background(), m, Options{}) {
				t.Errorf("%s %s: %s", d.Severity, d.Rule, d.Headline)
			}
		})
	}
}
