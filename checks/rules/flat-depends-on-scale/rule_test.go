package flatdependsonscale

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"a linear report": `unknown p : probability
observe 1 of 20 with probability p
prior p as Beta(1, 1) because "x"
report 1000 * p, upper 95%
report 1 - p, lower 95%
`,
	"the scale that is flat": `unknown p : probability
observe 1 of 20 with probability p
prior odds(p) flat because "x"
report odds(p), upper 95%
`,
	"no posterior on the other scale": `unknown p : probability
observe 0 of 20 with probability p
prior p flat because "x" #! flat-depends-on-scale "flat there, 0 of 20 would leave no posterior"
report logit(p), upper 95%
`,
	"not flat": `unknown p : probability
observe 0 of 20 with probability p
prior p as Beta(1/2, 1/2) because "x"
report logit(p), upper 95%
`,
	"large and clean": `unknown p : probability
observe 30 of 400 with probability p
prior p as Beta(1, 1) because "x"
report odds(p), upper 95%
report logit(p), central 95%
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
