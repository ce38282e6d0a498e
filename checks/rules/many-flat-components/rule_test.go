package manyflatcomponents

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

const head = `unknown x, y : location
observe 0 as Normal(x, sd = 0.005)
observe 0.001 as Normal(y, sd = 0.005)
`

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"linear": head + `prior x flat because "x"
prior y flat because "x"
report x + 2 * y - 1, central 95%
`,
	"proper": head + `prior x as Normal(0, sd = 1) because "x"
prior y as Normal(0, sd = 1) because "x"
report x^2 + y^2, central 95%
`,
	"no interval": head + `prior x flat because "x"
prior y flat because "x"
report x, upper 95%
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// JCGM 101:2008, 9.4 with both inputs at 0: x² + y² is u² times chi-square with two
// degrees of freedom, whose median is 2 u² log 2.
func TestSumOfTwoSquares(t *testing.T) {
	found := ruletest.Model(t, Rule, `unknown x, y : location
observe 0 as Normal(x, sd = 0.005)
observe 0 as Normal(y, sd = 0.005)
prior x flat because "x"
prior y flat because "x"
report x^2 + y^2, central 95% #! many-flat-components "Flat on each of 2 components"
`)
	want := 2 * 0.005 * 0.005 * math.Ln2
	if len(found) != 1 || math.Abs(found[0].Evidence[0].Value-want) > 1e-5*want {
		t.Errorf("want %v: %+v", want, found)
	}
}
