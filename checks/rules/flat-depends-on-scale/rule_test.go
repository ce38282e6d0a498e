package flatdependsonscale

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"a linear report": `unknown p : probability
observe 1 of 20 with probability p
prior p as Beta(1, 1) because "x"
report 1000 * p, upper 95%
report 1 - p, lower 95%
`,
	"the scale that is flat": `unknown p : probability
observe 1 of 20 with probability p
prior odds(p) flat because "x"
report odds(p), upper 95%
`,
	"no posterior on the other scale": `unknown p : probability
observe 0 of 20 with probability p
prior p flat because "x" #! flat-depends-on-scale "flat there, 0 of 20 would leave no posterior"
report logit(p), upper 95%
`,
	"not flat": `unknown p : probability
observe 0 of 20 with probability p
prior p as Beta(1/2, 1/2) because "x"
report logit(p), upper 95%
`,
	"large and clean": `unknown p : probability
observe 30 of 400 with probability p
prior p as Beta(1, 1) because "x"
report odds(p), upper 95%
report logit(p), central 95%
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// Posterior means for 1 of 20: Beta(2, 20) under flat p, Beta(1, 19) under flat logit p,
// Beta(2, 18) under flat odds.
func TestOneOfTwenty(t *testing.T) {
	found := ruletest.Model(t, Rule, `unknown p : probability
observe 1 of 20 with probability p
prior p as Uniform(0, 1) because "x" #! flat-depends-on-scale "flat on logit(p)" flat-depends-on-scale "flat on odds(p)"
report logit(p), central 95%
report odds(p), upper 95%
`)
	want := [][2]float64{{2. / 22, 1. / 20}, {2. / 22, 2. / 20}}
	if len(found) != len(want) {
		t.Fatalf("%+v", found)
	}
	for i, d := range found {
		var means []float64
		for _, e := range d.Evidence {
			if e.Name == "mean of p" {
				means = append(means, e.Value)
			}
		}
		if len(means) != 2 || math.Abs(means[0]-want[i][0]) > 1e-8 || math.Abs(means[1]-want[i][1]) > 1e-8 {
			t.Errorf("%s: %v, want %v", d.Headline, means, want[i])
		}
	}
}
