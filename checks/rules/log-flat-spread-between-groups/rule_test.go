package logflatspreadbetweengroups

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"one over tau": `table clinics
| clinic | estimate | se |
| north | 0.28 | 0.20 |
| harbour | 0.51 | 0.25 |
| hill | -0.05 | 0.30 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
prior tau ∝ 1/tau because "x" #! log-flat-spread-between-groups "mass escapes to tau = 0"
report mu
`,
	"flat on the log": `table clinics
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
prior log(tau) flat because "x" #! log-flat-spread-between-groups "mass escapes to tau = 0"
report mu
`,
	"flat": `table clinics
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
	"half-normal": `table clinics
| clinic | estimate | se |
| north | 0.28 | 0.20 |
| harbour | 0.51 | 0.25 |
unknown mu : location
unknown tau : scale
vary theta across clinic as Normal(mu, sd = tau)
observe estimate as Normal(theta[clinic], sd = se)
prior mu flat because "x"
prior tau as half-Normal(sd = 1) because "x" 
report mu
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
