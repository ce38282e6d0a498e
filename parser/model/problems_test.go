package model

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"wellposed/grammar"
	"wellposed/parser/diag"
)

// data are the files that the tests read.
var data = Memory{
	"a.csv":      "x,y,g\n1,2,a\n3,4,b\n5,NA,a\n",
	"b.csv":      "x,z\n1,2\n",
	"sites.csv":  "site,year,m,y\nA,1,2,3\nA,2,2,4\nB,1,5,6\n",
	"ragged.csv": "x,y\n1,2\n3\n",
	"semi.csv":   "x;y\n1;2\n",
	"zero.csv":   "x,y\n1,\x00\n",
	"latin.csv":  "x,y\n1,2\n3,\xe9\n",
	"empty.csv":  "",
	"codes.csv":  "y,n\n1,10\n-9,10\n12,10\n-9,10\n2.5,10\n3,10\n",
}

// told are the findings of a model as "rule [text it is about]".
func told(m *Model) []string {
	var list []string
	for _, f := range m.Problems {
		list = append(list, fmt.Sprintf("%s [%s]", f.Rule, m.File.Slice(f.Span)))
	}
	return list
}

// TestProblems gives for each text all findings and what they are about, and
// part of the headline or of a note of the first.
func TestProblems(t *testing.T) {
	const a = "table t from \"a.csv\"\n"
	for _, c := range []struct {
		text, part string
		want       []string
	}{
		{"unknown p : probability\nprior p flat\n", "", nil},
		{"given a = b\n", "", []string{"name-never-declared [b]"}},
		{"unknown sigma : scale\nprior sigam flat\n", "did you mean sigma", []string{"unknown-without-prior [sigma]", "name-never-declared [sigam]"}},
		{"given y = 1, y = 2\n", "second", []string{"name-declared-twice [y]"}},
		{"table u\n| a | a |\n| 1 | 2 |\n", "two columns", []string{"name-declared-twice [a]"}},
		{a + "table u from \"b.csv\"\nunknown m : location\nobserve x as Normal(m, sd = 1)\nprior m flat\n", "2 things", []string{"name-is-ambiguous [x]"}},
		{a + "table u from \"b.csv\"\nunknown m : location\nobserve t.x as Normal(m, sd = u.z)\nprior m flat\n", "two tables", []string{"columns-of-two-tables [observe t.x as Normal(m, sd = u.z)]"}},
		{a + "given x = 4, k = x\n", "", []string{"name-is-ambiguous [x]"}},
		{"given log = 4\n", "function", []string{"name-shadows-function [log]"}},
		{"given Normal = 4\n", "distribution", []string{"name-shadows-function [Normal]"}},
		{"given pi = 3\n", "constant", []string{"name-shadows-function [pi]"}},
		{"given y = 3\nprior y flat\n", "is known", []string{"prior-on-observed [y]"}},
		{"unknown m : location\n", "none is assumed", []string{"unknown-without-prior [m]"}},
		{"unknown m : location\nprior m flat\nprior m as Normal(0, sd = 1)\n", "product", []string{"two-priors-on-one-unknown [prior m as Normal(0, sd = 1)]"}},
		{a + "unknown tau : scale\nvary m across g as Normal(0, sd = tau)\nprior tau flat\nprior m flat\n", "count twice", []string{"two-priors-on-one-unknown [prior m flat]"}},
		{"unknown a, b : real\nprior a / b flat\nprior b flat\n", "", nil},
		{"unknown a, b : real\nprior a / b flat\nprior a + b flat\n", "", nil},
		{"unknown a, b, c : real\nprior a / b flat\nprior b / c flat\nprior a flat\n", "", nil},
		{"unknown a, b : real\nprior a / b flat\nprior b flat\nprior a flat\n", "second", []string{"two-priors-on-one-unknown [prior a / b flat]"}},
		{"unknown a, b : real\nprior (a, b) flat\nprior a / b flat\n", "second", []string{"two-priors-on-one-unknown [prior a / b flat]"}},
		{"table t\n| g | h |\n| a / b | c |\n| a | b / c |\nunknown m per g by h : effect\nprior m flat\n", "both read", []string{"expression-does-not-fit [m]"}},
		{"unknown m : location\nprior m as Normal(0, 10)\n", "sd, variance or precision", []string{"spread-argument-unnamed [10]"}},
		{"unknown m : positive\nprior m as Gamma(2, 0.1)\n", "rate, scale or mean", []string{"spread-argument-unnamed [0.1]"}},
		{"unknown m : positive\nprior m as Exponential(2)\n", "rate or mean", []string{"spread-argument-unnamed [2]"}},
		{"unknown m : positive\nprior m as half-Normal(2)\n", "sd, variance or precision", []string{"spread-argument-unnamed [2]"}},
		{"unknown m : positive\nprior m as log-Normal(0, 2)\n", "rival conventions", []string{"spread-argument-unnamed [2]"}},
		{"unknown m : location\nprior m as Normal(0, sdd = 10)\n", "did you mean sd", []string{"argument-not-known [sdd]"}},
		{"unknown m : location\nprior m as Normal(sd = 10)\n", "Normal(mean, sd = …)", []string{"argument-missing [Normal(sd = 10)]"}},
		{"unknown m : locatoin\nprior m flat\n", "did you mean location", []string{"kind-not-known [locatoin]"}},
		{"unknown m : location\nprior m as Norml(0, sd = 1)\n", "did you mean Normal", []string{"distribution-not-known [Norml]"}},
		{"unknown m : location\nprior lgo(m) flat\n", "did you mean log", []string{"unknown-without-prior [m]", "function-not-known [lgo]"}},
		{"given k = log(1, 2)\n", "one argument", []string{"function-not-known [log(1, 2)]"}},
		{a + "unknown m : location\nobserve t.w as Normal(m, sd = 1)\nprior m flat\n", "x, y, g", []string{"column-not-in-table [t.w]"}},
		{"given y = [1, 2], s = [1, 2, 3]\nunknown m : location\nobserve y as Normal(m, sd = s)\nprior m flat\n", "2 values", []string{"rows-do-not-match [observe y as Normal(m, sd = s)]"}},
		{"table t from \"gone.csv\"\nunknown m : location\nobserve x as Normal(m, sd = w)\nprior m flat\n", "no such file", []string{`table-unreadable ["gone.csv"]`}},
		{"table t from \"ragged.csv\"\n", "line 3", []string{`table-unreadable ["ragged.csv"]`}},
		{"table t from \"zero.csv\"\n", "zero byte", []string{`table-unreadable ["zero.csv"]`}},
		{"table t from \"latin.csv\"\n", "line 3", []string{`table-unreadable ["latin.csv"]`}},
		{"table t from \"empty.csv\"\n", "empty", []string{`table-unreadable ["empty.csv"]`}},
		{"table t from \"semi.csv\"\n", "separator", []string{`table-unreadable ["semi.csv"]`}},
		{"table t\n", "neither rows", []string{"table-unreadable [t]"}},
		{"table t\n| a | b |\n| 1 |\n", "1 cells", []string{"table-unreadable [| 1 |]"}},
		{a + "unknown m : location\nobserve y as Normal(m, sd = 1)\nprior m flat\n", "1 value that this statement uses is missing, in 1 row of its 3 rows", []string{"value-missing [observe y as Normal(m, sd = 1)]"}},
		{a + "unknown m : location\nobserve y as Normal(m, sd = 1), only where x < 5\nprior m flat\n", "", nil},
		{a + "unknown m : location\nobserve x as Normal(m, sd = 1), only where y > 2\nprior m flat\n", "", []string{"value-missing [observe x as Normal(m, sd = 1), only where y > 2]"}},
		{a + "unknown m : location\nobserve sum(y) as Normal(m, sd = 1)\nprior m flat\n", "", []string{"value-missing [observe sum(y) as Normal(m, sd = 1)]"}},
		{"table t from \"codes.csv\"\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p flat\n", "4 values", []string{"observation-outside-support [y]"}},
		{"unknown p : probability\nobserve 41 of 40 with probability p\nprior p flat\n", "only 40 trials", []string{"observation-outside-support [41]"}},
		{"unknown m : rate\nobserve 10 in -6 at rate m\nprior m flat\n", "exposure", []string{"observation-outside-support [10]"}},
		{"unknown m : rate\nobserve 10 in 0 at rate m\nprior m flat\n", "exposure is 0", []string{"observation-outside-support [10]"}},
		{"unknown m : rate\nobserve 0 in 0 at rate m\nprior m flat\n", "", nil},
		{"unknown r : rate\ngiven t = [1, -2]\nobserve t as Exponential(rate = r)\nprior r flat\n", "below 0", []string{"observation-outside-support [t]"}},
		{"unknown a, b : positive\ngiven q = [0.5, 1.5]\nobserve q as Beta(a, b)\nprior (a, b) flat\n", "between 0 and 1", []string{"observation-outside-support [q]"}},
		{"unknown m : rate\ngiven y = [0, 1]\nobserve y as Poisson(m), truncated to (1, inf)\nprior m flat\n", "below 1 are cut off", []string{"observation-outside-support [y]"}},
		{"unknown m : location\nobserve between(3, 2) as Normal(m, sd = 1)\nprior m flat\n", "lower limit", []string{"observation-outside-support [between(3, 2)]"}},
		{"unknown m : location\nobserve summary(n = 2.5, mean = 1, sd = 1) as Normal(m, sd = 1)\nprior m flat\n", "whole number", []string{"observation-outside-support [summary(n = 2.5, mean = 1, sd = 1)]"}},
		{"unknown w : proportions(2)\nobserve (3, 4) as Multinomial(8, w)\nprior w as Dirichlet(1)\n", "add up to 8", []string{"observation-outside-support [(3, 4)]"}},
		{"unknown c : cutpoints(2)\ngiven y = [1, 4]\nobserve y as cumulative-logit(0, c)\nprior c flat\n", "only 3 categories", []string{"observation-outside-support [y]"}},
		{"unknown w : probability\ngiven y = [1, -2]\nobserve y as Mixture(w: Point(0), 1 - w: Poisson(3))\nprior w flat\n", "none of its parts", []string{"observation-outside-support [y]"}},
		{a + "unknown m per g : location\nobserve x as Normal(m[\"c\"], sd = 1)\nprior m flat\n", "It has a, b.", []string{`index-not-a-level [m["c"]]`}},
		{a + "unknown m per g relative to \"z\" : location\nobserve x as Normal(m[g], sd = 1)\nprior m flat\n", "", []string{`index-not-a-level ["z"]`}},
		{a + "table u\n| g | y |\n| a | 1 |\n| q | 2 |\nunknown m per t.g : location\nobserve u.y as Normal(m[u.g], sd = 1)\nprior m flat\n", `"q"`, []string{"index-not-a-level [m[u.g]]"}},
		{a + "table u\n| g | y |\n| a | 1 |\n| q | 2 |\nunknown m per t.g : location\nobserve u.y as Normal(m[u.g], sd = 1), only where u.g != \"q\"\nprior m flat\n", "", nil},
		{"unknown m : location\nprior m as Normal(0, sd = -1)\n", "positive", []string{"parameter-outside-support [-1]"}},
		{"unknown m : location\nprior m as Uniform(2, 1)\n", "not below", []string{"parameter-outside-support [Uniform(2, 1)]"}},
		{"unknown p : probability\nobserve 3 as Binomial(-4, p)\nprior p flat\n", "", []string{"observation-outside-support [3]", "parameter-outside-support [-4]"}},
		{"unknown m : location\nprior m as Normal(0, sd = 1), truncated to (5, 2)\n", "between 5 and 2", []string{"parameter-outside-support [(5, 2)]"}},
		{"unknown p : probability\nprior p as Mixture(0.5: Beta(1, 1), 0.6: Beta(2, 2))\n", "1.1", []string{"parameter-outside-support [Mixture(0.5: Beta(1, 1), 0.6: Beta(2, 2))]"}},
		{"unknown p : probability in (2, 3)\nprior p flat\n", "No value is left", []string{"expression-does-not-fit [unknown p : probability in (2, 3)]"}},
		{a + "given n = x\n", "3 values", []string{"expression-does-not-fit [x]"}},
		{a + "unknown m : location\nobserve x as Normal(m, sd = 1)\nprior m as Normal(0, sd = x)\n", "rows", []string{"expression-does-not-fit [m as Normal(0, sd = x)]"}},
		{a + "unknown m per g : location\nobserve x as Normal(m, sd = 1)\nprior m flat\n", "m[g]", []string{"expression-does-not-fit [m]"}},
		{a + "unknown b for (x, y) : effect\nobserve x as Normal(b, sd = 1)\nprior b flat\n", "linear(b)", []string{"expression-does-not-fit [b]"}},
		{a + "unknown m per g : location\nobserve x as Normal(m[g], sd = 1)\nprior m[\"a\"] flat\nprior m[\"b\"] flat\n", "all 2 components", []string{`expression-does-not-fit [m["a"]]`, `expression-does-not-fit [m["b"]]`}},
		{a + "unknown b : location\nobserve x as Normal(b * g, sd = 1)\nprior b flat\n", "3 cells do not", []string{"expression-does-not-fit [g]"}},
		{a + "unknown b : location\nobserve x as Normal(b, sd = 1), right-censored where g > 1\nprior b flat\n", "row 1", []string{"expression-does-not-fit [g > 1]"}},
		{a + "unknown b : location\nobserve x as Normal(b, sd = 1), right-censored where b > 1\nprior b flat\n", "unknown", []string{"expression-does-not-fit [b > 1]"}},
		{a + "unknown b : location\nobserve x as Normal(b, sd = 1), weighted by 2 - x\nprior b flat\n", "row 2 is below 0", []string{"parameter-outside-support [2 - x]"}},
		{a + "unknown b : location\nobserve b as Normal(x, sd = 1)\nprior b flat\n", "must be data", []string{"expression-does-not-fit [b]"}},
		{a + "unknown b : location\nobserve x as Normal(b, sd = 1), only where x > 1, only where x > 2\nprior b flat\n", "twice", []string{"expression-does-not-fit [only where x > 2]"}},
		{a + "unknown b : location\nobserve x as Normal(b, sd = 1)\nprior b flat\nreport b * x\n", "3 values", []string{"expression-does-not-fit [b * x]"}},
		{"table s from \"sites.csv\"\nunknown mu, c : effect\nvary th across site as Normal(mu + c * m, sd = 1)\nobserve y as Normal(th[site], sd = 1)\nprior (mu, c) flat\n", "", nil},
		{"table s from \"sites.csv\"\nunknown mu, c : effect\nvary th across site as Normal(mu + c * year, sd = 1)\nobserve y as Normal(th[site], sd = 1)\nprior (mu, c) flat\n", "differs", []string{"expression-does-not-fit [Normal(mu + c * year, sd = 1)]"}},
		{a + "vary l across g as half-Cauchy(1)\nvary th across g as Normal(0, sd = l)\nobserve x as Normal(th[g], sd = 1)\n", "", nil},
		{"let u = v\nlet v = u\n", "itself", []string{"expression-does-not-fit [u]"}},
		{"unknown p : probability\nprior p flat\nconclude \"c\" when p > 0.5\n", "P(p < 0.05) >= 0.95", []string{"expression-does-not-fit [p > 0.5]"}},
		{"unknown p : probability\nprior p flat\nreport p, upper 100%\n", "between 0% and 100%", []string{"expression-does-not-fit [100%]"}},
		{"unknown p : probability\nprior p flat\nrequire chance of \"c\" <= 5% when p = 0.05\n", "no conclusion", []string{`name-never-declared ["c"]`}},
		{"unknown p : probability\nprior p flat\naccept no-rival-declared for p because \"x\" until 2027-02-30\n", "calendar", []string{"expression-does-not-fit [2027-02-30]"}},
	} {
		m := build(t, c.text, data)
		if got := told(m); !slices.Equal(got, c.want) {
			t.Errorf("%s\n got %q\nwant %q", c.text, got, c.want)
			continue
		}
		if c.part == "" || len(m.Problems) == 0 {
			continue
		}
		all := ""
		for _, f := range m.Problems {
			all += f.Headline + strings.Join(f.Notes, " ")
		}
		if !strings.Contains(all, c.part) {
			t.Errorf("%s\n%q lacks %q", c.text, all, c.part)
		}
	}
}

// TestImproperKernelsAreLegal: the tool exists to say what these do.
func TestImproperKernelsAreLegal(t *testing.T) {
	for _, law := range []string{
		"Beta(0, 0)", "Beta(1, -1)", "Beta(-1, 2)", "Gamma(shape = 0, rate = 0)", "inverse-Gamma(shape = 0, scale = 0)",
		"inverse-Gamma(shape = -1/2, scale = 0)", "Gamma(shape = 2, rate = 0)",
	} {
		kind := "positive"
		if strings.HasPrefix(law, "Beta") {
			kind = "probability"
		}
		if m := build(t, "unknown p : "+kind+"\nprior p as "+law+"\n", nil); len(m.Problems) > 0 {
			t.Errorf("%s: %v", law, m.Problems[0].Headline)
		}
	}
	if m := build(t, "unknown w : proportions(3)\nprior w as Dirichlet(0, -1, 1/2)\n", nil); len(m.Problems) > 0 {
		t.Error(m.Problems[0].Headline)
	}
}

// TestFiveMistakesGiveFiveFindings: one mistake hides no other and breeds none.
func TestFiveMistakesGiveFiveFindings(t *testing.T) {
	m := build(t, `given y = 3
unknown mu : locaton
observe y as Normal(mu, sd = sgima)
unknown sigma : scale
prior mu as Norml(0, sd = 1)
prior sigma as half-Cauchy(1)
prior y flat
observe y as Normal(mu, sdd = 1)
`, nil)
	want := []string{"kind-not-known [locaton]", "name-never-declared [sgima]", "distribution-not-known [Norml]", "prior-on-observed [y]", "argument-not-known [sdd]"}
	if got := told(m); !slices.Equal(got, want) {
		t.Errorf("got %q", got)
	}
}

// TestCells: findings about data point at the cell, in the file's own numbering.
func TestCells(t *testing.T) {
	m := build(t, "table t from \"codes.csv\"\nunknown p : probability\nobserve y as Binomial(n, p)\nprior p flat\n", data)
	f := m.Problems[0]
	var at []string
	for _, r := range f.Related {
		at = append(at, fmt.Sprintf("%s:%d:%d", r.Path, r.Row, r.Column))
	}
	if want := []string{"codes.csv:3:1", "codes.csv:4:1", "codes.csv:5:1"}; !slices.Equal(at, want) {
		t.Errorf("%v", at)
	}
	if len(f.Notes) != 1 || !strings.Contains(f.Notes[0], "-9, seen 2 times") {
		t.Errorf("%q", f.Notes)
	}
	m = build(t, "given y = [1, 2.5, 3]\nunknown m : rate\nobserve y as Poisson(m)\nprior m flat\n", nil)
	if f := m.Problems[0]; m.File.Slice(f.Related[0].Span) != "2.5" {
		t.Errorf("%v", f.Related)
	}
	m = build(t, "table t\n| y |\n| 1 |\n| -3 |\nunknown m : rate\nobserve y as Poisson(m)\nprior m flat\n", nil)
	if f := m.Problems[0]; m.File.Slice(f.Related[0].Span) != "-3" {
		t.Errorf("%v", f.Related)
	}
}

// TestFixesMakeTheFindingGoAway applies each offered fix.
func TestFixesMakeTheFindingGoAway(t *testing.T) {
	for _, text := range []string{
		"unknown m : location\nprior m as Normal(0, 10)\n",
		"unknown m : positive\nprior m as Gamma(2, 0.1)\n",
		"unknown m : positive\nprior m as Exponential(2)\n",
		"unknown m : positive\nprior m as Weibull(2, 3)\n",
		"unknown m : real\nprior m as Laplace(2, 3)\n",
		"unknown m : real\nprior m as Student-t(4, 0, 1)\n",
		"table t from \"a.csv\"\nunknown m per g : location\nobserve x as Normal(m, sd = 1)\nprior m flat\n",
	} {
		m := build(t, text, data)
		if len(m.Problems) != 1 || len(m.Problems[0].Fixes) == 0 {
			t.Errorf("%s: %v", text, told(m))
			continue
		}
		rule := m.Problems[0].Rule
		for _, fix := range m.Problems[0].Fixes {
			changed := text
			for i := len(fix.Edits) - 1; i >= 0; i-- {
				e := fix.Edits[i]
				changed = changed[:e.Span.Start] + e.Text + changed[e.Span.End:]
			}
			if after := build(t, changed, data); len(after.Problems) > 0 {
				t.Errorf("%s: %s leaves %v", rule, changed, told(after))
			}
			if fix.Grade != diag.ChangesPosterior && len(m.Problems[0].Fixes) > 1 {
				t.Errorf("%s: a choice among several is not the same analysis", changed)
			}
		}
	}
}

// TestProblemsAreDocumented: every rule that a test meets has its line.
func TestProblemsAreDocumented(t *testing.T) {
	seen := map[string]bool{}
	for _, d := range ProblemDocs {
		if seen[d.Name] || d.Doc == "" || strings.ToLower(d.Name) != d.Name || strings.ContainsAny(d.Name, " _") {
			t.Errorf("%q", d.Name)
		}
		seen[d.Name] = true
	}
	if len(seen) < 20 {
		t.Errorf("%d problems", len(seen))
	}
}

// TestLetsDoNotDouble: a chain of definitions is refused, not unfolded.
func TestLetsDoNotDouble(t *testing.T) {
	var b strings.Builder
	b.WriteString("unknown a : real\nprior a flat\nlet l0 = a + a\n")
	for i := range 60 {
		fmt.Fprintf(&b, "let l%d = l%d + l%d\n", i+1, i, i)
	}
	b.WriteString("report l60\n")
	m := build(t, b.String(), nil)
	if len(m.Problems) != 1 || m.Problems[0].Rule != TooLarge {
		t.Errorf("%q", told(m))
	}
}

// TestEveryLawBuilds states each law of the language in each of its forms.
func TestEveryLawBuilds(t *testing.T) {
	for _, d := range grammar.Distributions {
		if d.Name == "Mixture" {
			continue
		}
		for i, form := range d.Forms {
			var args []string
			for _, p := range form {
				if p.Optional {
					continue
				}
				value := "a"
				if p.Named {
					value = p.Label + " = a"
				}
				args = append(args, value)
			}
			text := "given a = 1/2\nunknown v : real\nprior v as " + d.Name + "(" + strings.Join(args, ", ") + ")\n"
			m := build(t, text, nil)
			if len(m.Priors) != 1 {
				t.Errorf("%s: %q", text, told(m))
				continue
			}
			if p := m.Priors[0]; p.Dist != nil && p.Dist.Form != i {
				t.Errorf("%s: form %d", text, p.Dist.Form)
			}
		}
	}
}
