package collinearcolumns

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"full rank": `table assay
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
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
