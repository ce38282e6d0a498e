package rivalisthesameprior

import (
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// Pairs of priors on one unknown, and whether they are proportional.
func TestPairs(t *testing.T) {
	for _, c := range []struct {
		declared, rival string
		same            bool
	}{
		{"p as Beta(1, 1)", "p as Uniform(0, 1)", true},
		{"p flat", "p as Beta(1, 1)", true},
		{"p flat", "p ∝ 3", true},
		{"p as Beta(1/2, 1/2)", "p jeffreys", true},
		{"p as Beta(1/2, 1/2)", "p ∝ 1/sqrt(p * (1 - p))", true},
		{"p as Beta(1/2, 1/2)", "p as Beta(0.5, 0.50)", true},
		{"logit(p) flat", "p ∝ p^(-1) * (1 - p)^(-1)", true},
		{"logit(p) flat", "p as Beta(1, 1)", false},
		{"p as Beta(1, 1)", "p as Uniform(0, 1/2)", false},
		{"p as Beta(1, 1)", "p as Beta(1, 2)", false},
		{"log(p) flat", "p ∝ 1/p", true},
		{"r as Gamma(shape = 1, rate = 2)", "r as Exponential(mean = 1/2)", true},
		{"r as Gamma(shape = 1, rate = 2)", "r as Exponential(mean = 2)", false},
		{"log(r) flat", "r ∝ 1/r", true},
		{"r^2 flat", "r ∝ r", true},
		{"r ∝ 1/sqrt(r)", "r jeffreys", true},
		{"r ∝ 1/r", "r flat", false},
	} {
		u, data := "unknown p : probability\nobserve 3 of 40 with probability p\n", "p"
		if c.declared[0] == 'r' || c.declared == "log(r) flat" {
			u, data = "unknown r : rate\nobserve 3 in 40 at rate r\n", "r"
		}
		want := ""
		if c.same {
			want = ` #! rival-is-the-same-prior "in other words"`
		}
		t.Run(c.declared+" and "+c.rival, func(t *testing.T) {
			ruletest.Model(t, Rule, u+"prior "+c.declared+" because \"x\"\nrival \"other\" "+c.rival+want+"\nreport "+data+"\n")
		})
	}
}

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"one of two differs": `unknown p, q : probability
observe 3 of 40 with probability p
observe 4 of 40 with probability q
prior p as Beta(1, 1) because "x"
prior q as Beta(1, 1) because "x"
rival "other" p as Uniform(0, 1); q as Beta(1/2, 1/2)
report p
`,
	"both the same": `unknown p, q : probability
observe 3 of 40 with probability p
observe 4 of 40 with probability q
prior p as Beta(1, 1) because "x"
prior q as Beta(1, 1) because "x"
rival "other" p as Uniform(0, 1); q flat #! rival-is-the-same-prior "\"other\""
report p
`,
	"same text": `given y = [1, 2, 4]
unknown mu : location
observe y as Normal(mu, sd = 1)
prior mu as Normal(0, sd = 10) because "x"
rival "other" mu as Normal(0, sd = 10) #! rival-is-the-same-prior "\"other\""
report mu
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}
