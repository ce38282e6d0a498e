package prioralreadyclaims

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"improper": `unknown p : probability
observe 1 of 10 with probability p
prior p as Beta(0, 0)
report p
conclude "meets 0.05" when P(p < 0.05) >= 0.95
`,
	"on a mean": `unknown mu : location
given y = [1.2, 0.7]
observe y as Normal(mu, sd = 1)
prior mu as Normal(10, sd = 1)
report mu
conclude "positive" when P(mu > 0) >= 0.975 #! prior-already-claims "the prior draws “positive”"
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
