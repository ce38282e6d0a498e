package inducedpriorpilesatlimits

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"large and clean": `unknown b : effect
observe 30 of 400 with probability expit(b)
prior b as Normal(0, sd = 10) because "x"
report expit(b), central 95%
`,
	"no pile": `unknown b : effect
observe 1 of 8 with probability expit(b)
prior b as Normal(0, sd = 1.5) because "x"
report expit(b), central 95%
`,
	"uniform": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
report p, upper 95%
`,
	"improper": `unknown p : probability
observe 1 of 40 with probability p
prior logit(p) flat because "x"
report p, upper 95%
`,
	"awaited": `await y
unknown b : effect
observe y as Binomial(40, expit(b))
prior b as Normal(0, sd = 10) because "x"
report expit(b), central 95%
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// P(0.01 < expit(b) < 0.99) is 0.354 for b with sd 10, 0.037 for sd 100: Φ(logit(0.99)/sd)
// in closed form.
func TestVagueLogits(t *testing.T) {
	for _, c := range []struct {
		sd     string
		inside float64
	}{{"10", 0.354}, {"100", 0.0367}} {
		found := ruletest.Model(t, Rule, `unknown b : effect
observe 0 of 8 with probability expit(b)
prior b as Normal(0, sd = `+c.sd+`) because "x"
report expit(b), central 95% #! induced-prior-piles-at-limits "of the limits of expit(b)"
`)
		if len(found) != 1 || math.Abs(1-found[0].Evidence[0].Value-c.inside) > 5e-4 {
			t.Errorf("sd %s: %+v", c.sd, found)
		}
	}
}
