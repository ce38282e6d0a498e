package coveragebelowpromise

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"uniform, lowest 0.875": `given n = 40
await y
unknown p : probability
observe y as Binomial(n, p)
prior p as Beta(1, 1)
report p, central 95%
require long-run coverage of p: lowest >= 88%, p from 0.01 to 0.2 #! coverage-below-promise "against 0.88"
require long-run coverage of p: lowest >= 87%, average >= 95%, p from 0.01 to 0.2
`,
	"no promise": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1)
report p, central 95%
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
