package jeffreyssenseunstated

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"the senses agree": `given y1 = 3, y2 = 5
unknown a, b : rate
observe y1 as Poisson(a)
observe y2 as Poisson(b)
prior a jeffreys because "x"
prior b jeffreys because "x"
report a
`,
	"one law, one prior for two factors that agree": `given y = [1, 2, 4]
unknown m : location
observe y as Normal(m, sd = 2)
prior m jeffreys because "x"
report m
`,
	"a sense is said": `given y = [1, 2, 4]
unknown m : location
unknown s : scale
observe y as Normal(m, sd = s)
prior (m, s) jeffreys jointly because "x"
report m
`,
	"Weibull": `given y = [1, 2, 4]
unknown k : shape
unknown s : scale
observe y as Weibull(shape = k, scale = s)
prior k jeffreys because "x"
prior s jeffreys because "x" #! jeffreys-sense-unstated "1/s jointly, 1/(k * s) separately"
report s
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
