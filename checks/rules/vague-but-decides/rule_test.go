package vaguebutdecides

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"holds under all": `unknown p : probability
observe 30 of 400 with probability p
prior p as Beta(1, 1) because "x"
rivals for p: standard
conclude "below 0.11" when P(p < 0.11) >= 0.95
report p, upper 95%
`,
	"flips": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
rival "jeffreys" p as Beta(1/2, 1/2)
conclude "meets 0.05" when P(p < 0.05) >= 0.95 #! vague-but-decides "drawn under the rival \"jeffreys\""
report p, upper 95%
`,
	"no rival, a standard choice": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
conclude "meets 0.05" when P(p < 0.05) >= 0.95 #! vague-but-decides "not drawn as declared"
report p, upper 95%
`,
	"no rival, a prior with knowledge": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 30) because "x"
conclude "meets 0.05" when P(p < 0.05) >= 0.95
report p, upper 95%
`,
	"the rival has no posterior": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
rival "open" p as Beta(0, 0)
conclude "meets 0.05" when P(p < 0.05) >= 0.95
report p, upper 95%
`,
	"awaited": `await y
unknown p : probability
observe y as Binomial(40, p)
prior p as Beta(1, 1) because "x"
rival "jeffreys" p as Beta(1/2, 1/2)
conclude "meets 0.05" when P(p < 0.05) >= 0.95
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// Eight coaching experiments (Rubin 1981): P(tau < 1) by quadrature in SciPy 1.10.1 and
// base R 4.2 is 0.6032 under inverse-Gamma(0.001, 0.001) on the variance, 0.1027 under
// flat, 0.3812 under inverse-Gamma(1, 1).
func TestCoaching(t *testing.T) {
	found := ruletest.Model(t, Rule, `table schools
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
prior tau^2 as inverse-Gamma(shape = 0.001, scale = 0.001) because "x"
rival "flat" tau flat
rival "unit" tau^2 as inverse-Gamma(shape = 1, scale = 1)
conclude "small" when P(tau < 1) >= 0.5 #! vague-but-decides "not drawn under the rival \"flat\""
`)
	if len(found) != 1 || len(found[0].Evidence) != 3 {
		t.Fatalf("%+v", found)
	}
	for i, want := range []float64{0.6032, 0.1027, 0.3812} {
		if got := found[0].Evidence[i].Value; math.Abs(got-want) > 5e-5 {
			t.Errorf("%s: %v, want %v", found[0].Evidence[i].About, got, want)
		}
	}
}
