package spikeatzero

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"many events": `unknown lambda : rate
observe 30 in 1500 at rate lambda
prior lambda as Gamma(shape = 0.001, rate = 0.001) because "x"
report lambda, upper 95%
`,
	"a prior with a source": `unknown lambda : rate
observe 0 in 6 at rate lambda
prior lambda as Gamma(shape = 1.53, rate = 10.63) because "x"
report lambda, upper 95%
`,
	"one unit": `unknown p : probability
observe 0 of 1 with probability p
prior p as Beta(1/100, 1/100) because "x" #! spike-at-zero "piles up at p = 0 and 1"
report p, upper 95%
`,
	"awaited": `await y
unknown lambda : rate
observe y as Poisson(6 * lambda)
prior lambda as Gamma(shape = 0.001, rate = 0.001) because "x"
report lambda, upper 95%
`,
	"nothing reported": `unknown lambda : rate
observe 0 in 1500 at rate lambda
prior lambda as Gamma(shape = 0.001, rate = 0.001) because "x"
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// No event in 1500: quantiles of Gamma(0.001, 1500.001) and Gamma(1/2, 1500); SciPy
// 1.10.1 gamma.ppf.
func TestNoEvents(t *testing.T) {
	found := ruletest.Model(t, Rule, `unknown lambda : rate
observe 0 in 1500 at rate lambda
prior lambda as Gamma(shape = 0.001, rate = 0.001) because "x" #! spike-at-zero "is 1.98·10⁻²⁶"
report lambda, upper 95%
`)
	if len(found) != 1 {
		t.Fatalf("%+v", found)
	}
	for about, want := range map[string]float64{
		"as declared": 1.9823903781708883e-26, "lambda flat": 0.0019971548, "lambda ∝ 1/sqrt(lambda)": 0.001280486273564708,
	} {
		met := false
		for _, e := range found[0].Evidence {
			if e.About == about {
				met = math.Abs(e.Value-want) <= 1e-6*want
				break
			}
		}
		if !met {
			t.Errorf("%s: want %v in %+v", about, want, found[0].Evidence)
		}
	}
}

// Eight coaching experiments (Rubin 1981).
func TestCoaching(t *testing.T) {
	ruletest.Model(t, Rule, `table schools
| school | effect | se |
| a      | 28     | 15 |
| b      | 8      | 10 |
| c      | -3     | 16 |
| d      | 7      | 11 |
| e      | -1     | 9  |
| f      | 1      | 11 |
| g      | 18     | 10 |
| h      | 12     | 18 |
unknown mu : location
unknown tau : scale
vary theta across school as Normal(mu, sd = tau)
observe effect as Normal(theta[school], sd = se)
prior mu flat because "x"
prior tau^2 as inverse-Gamma(shape = 0.001, scale = 0.001) because "x" #! spike-at-zero "piles up at tau^2 = 0"
report tau, central 95%
`)
}
