package toofewreadingsforscale

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"two readings, flat sd": `given y = [1, 2]
unknown mu : location
unknown sigma : scale
observe y as Normal(mu, sd = sigma)
prior mu flat because "x"
prior sigma flat because "x" #! too-few-readings-for-scale "2 readings leave no posterior"
report mu
`,
	"three readings, flat sd": `given y = [1, 2, 4]
unknown mu : location
unknown sigma : scale
observe y as Normal(mu, sd = sigma)
prior mu flat because "x"
prior sigma flat because "x" 
report mu
`,
	"three readings, flat variance": `given y = [1, 2, 4]
unknown mu : location
unknown sigma : scale
observe y as Normal(mu, sd = sigma)
prior mu flat because "x"
prior sigma^2 flat because "x" #! too-few-readings-for-scale "3 readings leave no posterior"
report mu
`,
	"four readings, flat variance": `given y = [1, 2, 4, 7]
unknown mu : location
unknown sigma : scale
observe y as Normal(mu, sd = sigma)
prior mu flat because "x"
prior sigma^2 flat because "x" 
report mu
`,
	"two readings, 1/sigma": `given y = [1, 2]
unknown mu : location
unknown sigma : scale
observe y as Normal(mu, sd = sigma)
prior mu flat because "x"
prior sigma ∝ 1/sigma because "x" 
report mu
`,
	"alike": `given y = [1.5, 1.50, 15e-1]
unknown mu : location
unknown sigma : scale
observe y as Normal(mu, sd = sigma)
prior mu flat because "x"
prior sigma ∝ 1/sigma because "x" #! too-few-readings-for-scale "3 readings lie exactly"
report mu
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
