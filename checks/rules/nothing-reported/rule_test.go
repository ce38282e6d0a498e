package nothingreported

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"a conclusion is enough": `unknown p : probability
observe 3 of 40 with probability p
prior p as Beta(1, 1) because "x"
conclude "small" when P(p < 0.1) >= 0.9
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
