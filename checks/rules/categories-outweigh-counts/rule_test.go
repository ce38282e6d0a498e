package categoriesoutweighcounts

import (
	"math"
	"strings"
	"testing"

	"wellposed/checks/rules/ruletest"
)

func TestPage(t *testing.T) { ruletest.Page(t, Rule) }

// cases are models that carry what this rule is to say about them.
var cases = map[string]string{
	"a total of one": `unknown w : proportions(6)
observe (2, 1, 0, 0, 0, 0) as Multinomial(3, w)
prior w as Dirichlet(1/6) because "x"
report w[1]
`,
	"equal": `unknown w : proportions(3)
observe (2, 1, 0) as Multinomial(3, w)
prior w as Dirichlet(1, 1, 1) because "x"
report w[1]
`,
	"two observations": `unknown w : proportions(3)
observe (2, 1, 0) as Multinomial(3, w)
observe (1, 1, 0) as Multinomial(2, w)
prior w as Dirichlet(1, 1, 2) because "x"
report w[1]
`,
}

func TestCases(t *testing.T) {
	for name, text := range cases {
		t.Run(name, func(t *testing.T) { ruletest.Model(t, Rule, text) })
	}
}

// Three counts in 1 000 categories with weights of 1/2: the empty ones have 499/503
// (Berger, Bernardo and Sun 2015).
func TestManyCategories(t *testing.T) {
	found := ruletest.Model(t, Rule, `unknown w : proportions(1000)
observe (2, 1`+strings.Repeat(", 0", 998)+`) as Multinomial(3, w)
prior w as Dirichlet(1/2) because "x" #! categories-outweigh-counts "500 beside 3 counted, so the posterior expects 99.2 %"
report w[1]
`)
	if len(found) != 1 || math.Abs(found[0].Evidence[0].Value-499./503) > 1e-12 {
		t.Errorf("%+v", found)
	}
}
