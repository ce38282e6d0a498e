package vaguebutdecides

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"holds under all": `unknown p : probability
observe 30 of 400 with probability p
prior p as Beta(1, 1) because "x"
rivals for p: standard
conclude "below 0.11" when P(p < 0.11) >= 0.95
report p, upper 95%
`,
	"flips": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
rival "jeffreys" p as Beta(1/2, 1/2)
conclude "meets 0.05" when P(p < 0.05) >= 0.95 #! vague-but-decides "drawn under the rival \"jeffreys\""
report p, upper 95%
`,
	"no rival, a standard choice": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
conclude "meets 0.05" when P(p < 0.05) >= 0.95 #! vague-but-decides "not drawn as declared"
report p, upper 95%
`,
	"no rival, a prior with knowledge": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 30) because "x"
conclude "meets 0.05" when P(p < 0.05) >= 0.95
report p, upper 95%
`,
	"the rival has no posterior": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
rival "open" p as Beta(0, 0)
conclude "meets 0.05" when P(p < 0.05) >= 0.95
report p, upper 95%
`,
	"awaited": `await y
unknown p : probability
observe y as Binomial(40, p)
prior p as Beta(1, 1) because "x"
rival "jeffreys" p as Beta(1/2, 1/2)
conclude "meets 0.05" when P(p < 0.05) >= 0.95
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
