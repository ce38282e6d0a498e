package separatedresponses

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"overlap": `table assay
| dose | n | deaths |
| -0.86 | 5 | 0 |
| -0.3 | 5 | 1 |
| -0.05 | 5 | 3 |
| 0.73 | 5 | 5 |
unknown alpha, slope : effect
observe deaths as Binomial(n, expit(alpha + slope * dose))
prior alpha flat because "x"
prior slope flat because "x" 
report slope
`,
	"proper priors": `table assay
| dose | n | deaths |
| -0.86 | 5 | 0 |
| -0.3 | 5 | 0 |
| -0.05 | 5 | 5 |
| 0.73 | 5 | 5 |
unknown alpha, slope : effect
observe deaths as Binomial(n, expit(alpha + slope * dose))
prior alpha as Normal(0, sd = 10) because "x"
prior slope as Normal(0, sd = 10) because "x" 
report slope
`,
	"probit overlap": `table assay
| dose | n | deaths |
| -0.86 | 5 | 0 |
| -0.3 | 5 | 1 |
| -0.05 | 5 | 3 |
| 0.73 | 5 | 5 |
unknown alpha, slope : effect
observe deaths as Binomial(n, Phi(alpha + slope * dose))
prior alpha flat because "x"
prior slope flat because "x" 
report slope
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
