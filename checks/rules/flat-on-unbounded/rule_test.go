package flatonunbounded

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"few readings": `given y = [1, 2, 4]
unknown mu : location
observe y as Normal(mu, sd = 1)
prior mu flat because "x" #! flat-on-unbounded "3 readings bear on mu"
report mu
`,
	"cut off": `unknown lambda : rate
observe 2 in 6 at rate lambda
prior lambda as Uniform(0, 100) because "x"
report lambda
`,
	"twenty trials": `table assay
| dose  | n | deaths |
| -0.86 | 5 | 0      |
| -0.30 | 5 | 1      |
| -0.05 | 5 | 3      |
| 0.73  | 5 | 5      |
unknown alpha, slope : effect
observe deaths as Binomial(n, expit(alpha + slope * dose))
prior alpha flat because "x"
prior slope flat because "x"
report slope
`,
	"a probability is bounded": `unknown p : probability
observe 3 of 40 with probability p
prior p flat because "x" 
report p
`,
	"few trials": `unknown p : probability
observe 1 of 20 with probability p
prior logit(p) flat because "x" #! flat-on-unbounded "with ` + "`odds(p) flat`" + ` instead"
report logit(p), central 95%
`,
	"many trials": `unknown p : probability
observe 30 of 400 with probability p
prior logit(p) flat because "x"
report p, central 95%
`,
	"many events": `unknown lambda : rate
observe 300 in 4000 at rate lambda
prior lambda flat because "x"
report lambda, central 95%
`,
	"no posterior is another matter": `unknown p : probability
observe 0 of 40 with probability p
prior logit(p) flat because "x" 
report p
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
