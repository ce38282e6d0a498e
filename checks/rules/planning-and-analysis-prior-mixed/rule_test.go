package planningandanalysispriormixed

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"points only": `given n = 40
await y
unknown p : probability
observe y as Binomial(n, p)
prior p as Beta(2, 60)
report p
suppose p in 0.01, 0.02
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
