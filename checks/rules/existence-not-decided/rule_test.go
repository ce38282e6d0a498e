package existencenotdecided

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"a proper prior": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x" 
report p
`,
	"data that are awaited": `given n = 40, y = 0
await y
unknown p : probability
observe y as Binomial(n, p)
prior p as Beta(0, 0) because "x"
report p
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
