package defaultwithoutreason

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"none": `unknown p : probability
observe 3 of 40 with probability p
prior p as Beta(1, 1) #! default-without-reason "is stated without a reason"
report p
`,
	"empty text": `unknown p : probability
observe 3 of 40 with probability p
prior p as Beta(1, 1) because "" from " " #! default-without-reason "without a reason"
report p
`,
	"a source is enough": `unknown p : probability
observe 3 of 40 with probability p
prior p as Beta(1, 1) from "plan 4.2"
report p
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
