package falseclaimrateabovepromise

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"a promise of success is another matter": `given n = 38
await y
unknown p : probability
observe y as Binomial(n, p)
prior p as Beta(1/2, 1/2)
report p, upper 95%
conclude "meets 0.05" when P(p < 0.05) >= 0.95
require chance of "meets 0.05" >= 90% when p = 0.01
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// 0.95^38 = 0.1424.
func TestConsumersRisk(t *testing.T) {
	found := ruletest.Model(t, Rule, `given n = 38
await y
unknown p : probability
observe y as Binomial(n, p)
prior p as Beta(1/2, 1/2)
report p, upper 95%
conclude "meets 0.05" when P(p < 0.05) >= 0.95
require chance of "meets 0.05" <= 5% when p = 0.05 #! false-claim-rate-above-promise "probability 0.142 when p = 0.05"
`)
	if len(found) == 1 && math.Abs(found[0].Evidence[0].Value-math.Pow(0.95, 38)) > 1e-9 {
		t.Error(found[0].Evidence)
	}
}
