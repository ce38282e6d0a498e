package stoppingrulechangesdefault

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"the fixed plan's prior under inverse sampling": `given failures = 19
unknown p : probability
observe failures as negative-Binomial(size = 1, probability = p)
prior p as Beta(1/2, 1/2) because "x" #! stopping-rule-changes-default "whose is Beta(0, 1/2)"
report p
`,
	"the inverse plan's prior under a fixed number": `unknown p : probability
observe 1 of 20 with probability p
prior p as Beta(0, 1/2) because "x" #! stopping-rule-changes-default "whose is Beta(1/2, 1/2)"
report p
`,
	"another prior": `given failures = 19
unknown p : probability
observe failures as negative-Binomial(size = 1, probability = p)
prior p as Beta(1, 1) because "x"
report p
`,
	"the plan's own prior, stated": `given failures = 19
unknown p : probability
observe failures as negative-Binomial(size = 1, probability = p)
prior p as Beta(0, 1/2) because "sampling stopped at the first success"
report p
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
