package outcomebreaksanalysis

import (
	"math"
	"testing"

	"wellposed/checks/rules/ruletest"
	"wellposed/parser/diag"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"data at hand": `unknown p : probability
observe 0 of 40 with probability p
prior p as Beta(0, 0)
report p
suppose p in 0.02
`,
	"a rate": `await y #! outcome-breaks-analysis "with y = 0: probability 0.223 when r = 0.001"
unknown r : rate
observe y as Poisson(1500 * r)
prior log(r) flat
report r
suppose r in 0.001, 0.01
`,
	"no planning value": `await y #! outcome-breaks-analysis "with y = 0 or y = 12."
unknown p : probability
observe y as Binomial(12, p)
prior logit(p) flat
report p
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// The assay of four doses and five animals, replanned at its fitted curve: 0.4038
// of the 6^4 outcomes' probability is separated (enumerated independently).
func TestAssay(t *testing.T) {
	found := ruletest.Model(t, Rule, `table assay
| dose  | n | deaths |
| -0.86 | 5 | NA |
| -0.30 | 5 | NA |
| -0.05 | 5 | NA |
| 0.73  | 5 | NA |
await deaths #! outcome-breaks-analysis "probability 0.404 when alpha = 0.85, slope = 7.75"
unknown alpha, slope : effect
observe deaths as Binomial(n, expit(alpha + slope * dose))
prior alpha flat
prior slope flat
report ld50 = -alpha / slope
suppose (alpha, slope) in (0.85, 7.75)
require a posterior for every outcome
`)
	if len(found) == 1 && (found[0].Severity != diag.Stop || math.Abs(found[0].Evidence[0].Value-0.4038) > 6e-5) {
		t.Errorf("%v %v", found[0].Severity, found[0].Evidence)
	}
}
