package prioroutweighsdata

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"borrowed, with a source": `unknown p : probability
observe 12 of 40 with probability p
prior p as Beta(21, 81) because "x" from "plan 4" #! prior-outweighs-data "counts like 102 trials beside the 40 that were seen: 72 %"
report p, central 95%
`,
	"a rate": `unknown lambda : rate
observe 10 in 6 at rate lambda
prior lambda as Gamma(shape = 1.53, rate = 10.63) because "x" #! prior-outweighs-data "10.63 units of exposure beside the 6"
report lambda, central 90%
`,
	"equal weights": `unknown p : probability
observe 1 of 2 with probability p
prior p as Beta(1, 1) because "x"
report p
`,
	"several observations": `unknown p : probability
observe 3 of 20 with probability p
observe 2 of 20 with probability p
prior p as Beta(10, 20) because "x"
report p
`,
	"normal": `given y = [4.1, 4.4]
unknown mu : location
observe y as Normal(mu, sd = 3)
prior mu as Normal(4, sd = 1) because "x" #! prior-outweighs-data "The data leave 82 % of the prior variance of mu"
report mu
`,
	"wide normal": `given y = [4.1, 4.4]
unknown mu : location
observe y as Normal(mu, sd = 3)
prior mu as Normal(4, sd = 100) because "x"
report mu
`,
	"awaited": `await y
unknown p : probability
observe y as Binomial(40, p)
prior p as Beta(21, 81) because "x"
report p
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
