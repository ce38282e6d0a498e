package deriveddefaultbreaks

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"a rule that gives nothing": `unknown a, b : effect
given y = 1
observe y as Bernoulli(expit(a + b))
prior (a, b) jeffreys jointly because "x" #! derived-default-breaks "gives no prior for a and b"
report a
`,
	"a stated prior is not this rule's": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(0, 0) because "x"
report p
`,
	"Jeffreys with no event": `unknown lambda : rate
observe 0 in 6 at rate lambda
prior lambda jeffreys because "x"
report lambda
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
