package boundsetstheanswer

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

const studies = `table clinics
| clinic  | estimate | se   |
| north   | 0.28     | 0.20 |
| harbour | 0.51     | 0.25 |
| hill    | -0.05    | 0.30 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
`

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"the support's own ends": `unknown p : probability
observe 0 of 40 with probability p
prior p as Uniform(0, 1) because "x"
report p, upper 95%
`,
	"far from the data": `given y = [4.1, 4.4, 3.9, 4.0]
unknown mu : location
observe y as Normal(mu, sd = 0.3)
prior mu as Uniform(-1000, 1000) because "x"
report mu, central 95%
`,
	"the data lie near a bound that is far from zero": `given y = [904.1, 904.4, 903.9, 904.0]
unknown mu : location
observe y as Normal(mu, sd = 0.3)
prior mu as Uniform(-1000, 1000) because "x"
report mu, central 95%
`,
	"the spread of three studies": studies + `prior tau as Uniform(0, 2) because "x" #! bound-sets-the-answer "The bound 2 of tau sets the answer"
report mu, central 95%
`,
	"a range below the odds": `unknown p : probability
observe 0 of 40 with probability p
prior p as Uniform(0, 1/100) because "x" #! bound-sets-the-answer "The bound 0.01 of p sets the answer"
report p, upper 95%
`,
	"a lower end": `unknown tau : scale
given y = [0, 0.1]
observe y as Normal(0, sd = tau)
prior log(tau) as Uniform(-10, 10) because "x"
report tau, upper 95%
`,
	"by nature": `unknown x : real limited to x >= 0 by nature
given y = [0.1, -0.3]
observe y as Normal(x, sd = 0.3)
prior x flat because "x"
report x, upper 95%
`,
	"no bound": studies + `prior tau flat because "x"
report mu, central 95%
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// Flat on logit p over (−A, A) with 0 of 40: upper 95 % bounds by adaptive quadrature
// of exp(−40 log(1 + e^x)) and root finding in SciPy 1.10.1.
func TestNoneOfForty(t *testing.T) {
	found := ruletest.Model(t, Rule, `unknown p : probability
observe 0 of 40 with probability p
prior logit(p) as Uniform(-100, 100) because "x" #! bound-sets-the-answer "The bounds −100 and 100 of logit(p) set the answer"
report p, upper 95%
`)
	if len(found) != 1 || len(found[0].Evidence) != 3 {
		t.Fatalf("%+v", found)
	}
	for i, want := range []float64{0.00011901876329709792, 3.3911748446298e-24, 0.021122025709181588} {
		if got := found[0].Evidence[i].Value; math.Abs(got-want) > 1e-6*want {
			t.Errorf("%s: %v, want %v", found[0].Evidence[i].About, got, want)
		}
	}
}

// The three invented studies under uniform spreads by quadrature in base R 4.2: the
// mean effect lies within (−0.62, 1.12) for U(0, 2).
func TestThreeStudies(t *testing.T) {
	found := ruletest.Model(t, Rule, studies+`prior tau as Uniform(0, 10) because "x" #! bound-sets-the-answer "10"
report mu, central 95%
`)
	if len(found) != 1 || found[0].Evidence[0].Text != "−1.40" && found[0].Evidence[0].Text != "1.90" {
		t.Errorf("want an end of (−1.40, 1.90): %+v", found)
	}
}
