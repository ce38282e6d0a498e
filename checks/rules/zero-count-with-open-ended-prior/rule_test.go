package zerocountwithopenendedprior

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"none of forty": `unknown p : probability
observe 0 of 40 with probability p #! zero-count-with-open-ended-prior "0 of 40 is most likely at p = 0"
prior p as Beta(0, 0) because "x"
report p
`,
	"all of forty": `unknown p : probability
observe 40 of 40 with probability p #! zero-count-with-open-ended-prior "40 of 40 is most likely at p = 1"
prior p as Beta(0, 0) because "x"
report p
`,
	"one of forty": `unknown p : probability
observe 1 of 40 with probability p
prior p as Beta(0, 0) because "x" 
report p
`,
	"no event in 1500": `unknown lambda : rate
observe 0 in 1500 at rate lambda #! zero-count-with-open-ended-prior "0 in 1500 is most likely at lambda = 0"
prior log(lambda) flat because "x"
report lambda
`,
	"one event in 1500": `unknown lambda : rate
observe 1 in 1500 at rate lambda
prior log(lambda) flat because "x"
report lambda
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
