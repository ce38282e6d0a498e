package norivaldeclared

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"a rival": `unknown p : probability
observe 3 of 40 with probability p
prior p as Beta(1, 1) because "x"
rival "third" p as Beta(1/3, 1/3)
report p
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
