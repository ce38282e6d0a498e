package priordataconflict

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"agreement": `unknown p : probability
observe 10 of 40 with probability p
prior p as Beta(21, 81) because "x"
report p
`,
	"a wide prior": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
report p
`,
	"too many": `unknown p : probability
observe 20 of 40 with probability p
prior p as Beta(21, 81) because "x" #! prior-data-conflict "as unlikely as 20 of 40"
report p
`,
	"too few": `unknown p : probability
observe 12 of 40 with probability p
prior p as Beta(60, 40) because "x" #! prior-data-conflict "as unlikely as 12 of 40"
report p
`,
	"awaited": `await y
unknown p : probability
observe y as Binomial(40, p)
prior p as Beta(60, 40) because "x"
report p
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// Sums over the chances of nbinom(1.53, 10.63/16.63), betabinom(40, 60, 40) and
// betabinom(40, 21, 81) in SciPy 1.10.1.
func TestTails(t *testing.T) {
	for _, c := range []struct {
		y, n float64
		log  func(float64) float64
		want float64
	}{
		{10, math.Inf(1), func(k float64) float64 { return gammaPoisson(k, 6, 1.53, 10.63) }, 0.0001201763240028749},
		{12, 40, func(k float64) float64 { return betaBinomial(k, 40, 60, 40) }, 0.0012067781158028386},
		{20, 40, func(k float64) float64 { return betaBinomial(k, 40, 21, 81) }, 0.0004804552197539372},
		{0, 40, func(k float64) float64 { return betaBinomial(k, 40, 1, 1) }, 1},
		{0, 40, func(k float64) float64 { return betaBinomial(k, 40, 0.5, 0.5) }, 1},
	} {
		got, ok := unlikely(c.y, c.n, c.log)
		if !ok || math.Abs(got-c.want) > 1e-9*c.want {
			t.Errorf("%v: %v, want %v", c.y, got, c.want)
		}
	}
}
