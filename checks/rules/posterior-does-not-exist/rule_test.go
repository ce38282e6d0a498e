package posteriordoesnotexist

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"none of forty": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(0, 0) because "x" #! posterior-does-not-exist "With 0 of 40 this prior leaves no posterior: mass escapes to p = 0."
report p
`,
	"all of forty": `unknown p : probability
observe 40 of 40 with probability p
prior p as Beta(0, 0) because "x" #! posterior-does-not-exist "With 40 of 40 this prior leaves no posterior: mass escapes to p = 1."
report p
`,
	"three of forty": `unknown p : probability
observe 3 of 40 with probability p
prior p as Beta(0, 0) because "x" 
report p
`,
	"flat on the log odds": `unknown p : probability
observe 0 of 40 with probability p
prior logit(p) flat because "x" #! posterior-does-not-exist "mass escapes to p = 0"
report p
`,
	"uniform": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x" 
report p
`,
	"nearly improper": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1/1000, 1/1000) because "x" 
report p
`,
	"a rival without posterior": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(1, 1) because "x"
rival "let the data speak" p as Beta(0, 0) #! posterior-does-not-exist "the rival \"let the data speak\" leaves no posterior"
report p
`,
	"Greek name": `unknown θ : probability
observe 0 of 40 with probability θ
prior θ as Beta(0, 0) because "x" #! posterior-does-not-exist "mass escapes to θ = 0"
report θ
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
