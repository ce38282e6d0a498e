package toofewgroupsforflatspread

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"two, flat": `table clinics
| clinic | estimate | se |
| north | 0.28 | 0.20 |
| harbour | 0.51 | 0.25 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
prior tau flat because "x" #! too-few-groups-for-flat-spread "With two groups this prior leaves no posterior: mass escapes to tau → ∞."
report mu
`,
	"three, flat": `table clinics
| clinic | estimate | se |
| north | 0.28 | 0.20 |
| harbour | 0.51 | 0.25 |
| hill | -0.05 | 0.30 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
prior tau flat because "x" 
report mu
`,
	"three, flat variance": `table clinics
| clinic | estimate | se |
| north | 0.28 | 0.20 |
| harbour | 0.51 | 0.25 |
| hill | -0.05 | 0.30 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
prior tau^2 flat because "x" #! too-few-groups-for-flat-spread "With three groups"
report mu
`,
	"four, flat variance": `table clinics
| clinic | estimate | se |
| north | 0.28 | 0.20 |
| harbour | 0.51 | 0.25 |
| hill | -0.05 | 0.30 |
| moor | 0.11 | 0.22 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
prior tau^2 flat because "x" 
report mu
`,
	"two, half-Cauchy": `table clinics
| clinic | estimate | se |
| north | 0.28 | 0.20 |
| harbour | 0.51 | 0.25 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
prior tau as half-Cauchy(25) because "x" 
report mu
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
