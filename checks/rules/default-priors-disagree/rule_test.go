package defaultpriorsdisagree

import (
	"strings"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"large and clean": `unknown p : probability
observe 30 of 400 with probability p
prior p as Beta(1, 1) because "x"
rivals for p: standard
rival "third" p as Beta(1/3, 1/3)
report p, central 95%
report logit(p), central 95%
`,
	"the file's threshold": `matters 60%
unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
rivals for p: standard
report p, upper 95%
`,
	"no posterior as declared": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(0, 0) because "x"
rival "uniform" p as Beta(1, 1)
rival "jeffreys" p as Beta(1/2, 1/2)
report p, upper 95%
`,
	"no posterior under the rival": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
rival "open" p as Beta(0, 0)
report p, upper 95%
`,
	"awaited": `await y
unknown p : probability
observe y as Binomial(40, p)
prior p as Beta(1, 1) because "x"
rival "jeffreys" p as Beta(1/2, 1/2)
report p, upper 95%
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// Upper bounds for 0 of 40: quantiles of Beta(1, 41), Beta(1/2, 40.5) and Beta(1/3,
// 40 1/3); SciPy 1.10.1 beta.ppf(0.95, a, b).
func TestNoneOfForty(t *testing.T) {
	found := ruletest.Model(t, Rule, `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
rivals for p: standard
report p, upper 95% #! default-priors-disagree "goes from 0.0705 to 0.0362 under `+"`p as Beta(1/3, 1/3)`"+`"
`)
	for _, want := range []string{"0.0705", "0.0466", "0.0362"} {
		if len(found) != 1 || !strings.Contains(found[0].Sketch, want) {
			t.Errorf("the table lacks %s: %+v", want, found)
		}
	}
}

// Three invented studies: the mean effect's central interval under flat, half-normal,
// half-Cauchy, uniform and inverse-gamma priors on the spread, to two decimals by
// adaptive quadrature in base R 4.2. For half-Cauchy(25) and half-normal(1) SciPy 1.10.1
// has (−1.65497, 2.14941) and (−0.43110, 0.93535).
func TestThreeStudies(t *testing.T) {
	found := ruletest.Model(t, Rule, `table clinics
| clinic  | estimate | se   |
| north   | 0.28     | 0.20 |
| harbour | 0.51     | 0.25 |
| hill    | -0.05    | 0.30 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
prior tau flat because "x"
rival "half-normal" tau as half-Normal(sd = 1/2)
rival "half-Cauchy" tau as half-Cauchy(scale = 1/2)
rival "half-normal 1" tau as half-Normal(sd = 1)
rival "half-Cauchy 25" tau as half-Cauchy(scale = 25)
rival "uniform" tau as Uniform(0, 2)
rival "uniform 10" tau as Uniform(0, 10)
rival "inverse-gamma 0.001" tau^2 as inverse-Gamma(shape = 0.001, scale = 0.001)
rival "inverse-gamma 0.01" tau^2 as inverse-Gamma(shape = 0.01, scale = 0.01)
rival "inverse-gamma 1" tau^2 as inverse-Gamma(shape = 1, scale = 1)
rival "1/tau" tau ∝ 1/tau
report mu, central 95% #! default-priors-disagree "mu"
`)
	for _, want := range []string{"−2.11 to 2.61", "−0.235 to 0.751", "−0.281 to 0.794", "−0.618 to 1.12",
		"−0.431 to 0.935", "−1.65 to 2.15", "−1.40 to 1.90", "−0.234 to 0.750", "−0.398 to 0.904", "−0.980 to 1.48", "no posterior"} {
		if len(found) != 1 || !strings.Contains(found[0].Sketch, want) {
			t.Errorf("the table lacks %s: %+v", want, found)
		}
	}
}
