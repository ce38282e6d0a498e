package labelsinterchangeable

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

const head = `given y = [1.1, 0.9, 3.2, 2.8, 1.0]
unknown low, high : location
`

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"one of two": head + `observe y as Mixture(1/2: Normal(low, sd = 1), 1/2: Normal(high, sd = 1))
prior low as Normal(0, sd = 5) because "x"
prior high as Normal(0, sd = 5) because "x"
report high #! labels-interchangeable "the posterior of high is also that of low"
report low + high
report low * high
report min(low, high)
`,
	"a difference": head + `observe y as Mixture(1/2: Normal(low, sd = 1), 1/2: Normal(high, sd = 1))
prior low as Normal(0, sd = 5) because "x"
prior high as Normal(0, sd = 5) because "x"
report high - low #! labels-interchangeable "high - low"
`,
	"weights tell them apart": head + `observe y as Mixture(1/3: Normal(low, sd = 1), 2/3: Normal(high, sd = 1))
prior low as Normal(0, sd = 5) because "x"
prior high as Normal(0, sd = 5) because "x"
report high
`,
	"priors tell them apart": head + `observe y as Mixture(1/2: Normal(low, sd = 1), 1/2: Normal(high, sd = 1))
prior low as Normal(0, sd = 5) because "x"
prior high as Normal(1, sd = 5) because "x"
report high
`,
	"spreads tell them apart": head + `observe y as Mixture(1/2: Normal(low, sd = 1), 1/2: Normal(high, sd = 2))
prior low as Normal(0, sd = 5) because "x"
prior high as Normal(0, sd = 5) because "x"
report high
`,
	"a prior on one of them": head + `unknown m : location
observe y as Mixture(1/2: Normal(low, sd = 1), 1/2: Normal(high, sd = 1))
prior low as Normal(0, sd = 5) because "x"
prior high as Normal(0, sd = 5) because "x"
prior m as Normal(low, sd = 1) because "x"
report high
`,
	"other data on one of them": head + `observe y as Mixture(1/2: Normal(low, sd = 1), 1/2: Normal(high, sd = 1))
observe 3 as Normal(high, sd = 1)
prior low as Normal(0, sd = 5) because "x"
prior high as Normal(0, sd = 5) because "x"
report high
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
